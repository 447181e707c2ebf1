"""What every sheet says once, calmly, where it is read. Local rules come first.

Rests on published inspection rules that reject heated, bent or welded steering parts unless
an engineer approves them, and on common shop practice; own words.
"""

from __future__ import annotations

SUPPORT = (
    "Support the car on stands on hard, level ground with the wheels chocked; a jack is never "
    "a support."
)
PARTS = (
    "Heating, bending or welding a steering arm, knuckle or control arm is for qualified people "
    "and may be barred where you are: replace the part, or have it done by them."
)
NUTS = "Torque castle nuts, tighten on to the next slot, and fit a new cotter pin."
INSPECT = (
    "Have the finished work inspected and aligned before it goes on the road. Local codes rule."
)
STRENGTH = "These figures say where parts go. They do not say what a part can carry."
COMPUTED = "Computed from measured pivots; not a road test."

FOR_CUSTOMER = (
    ("The figures here are computed from pivots measured on your car. They are not a road "
     "test, and they do not judge the strength or wear of any part."),
    "Steering and suspension work is for people qualified to do it. " + INSPECT,
)
FOR_SHOP = (f"{SUPPORT} {NUTS}", f"{PARTS} {STRENGTH}", INSPECT)
FOR_FLOOR = (
    (f"{SUPPORT} A layout on a floor or board shows where pivots go; measure again on the car "
     "before cutting or welding."),
    f"{PARTS} {INSPECT}",
)
