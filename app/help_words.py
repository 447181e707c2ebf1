"""What the Help menu says."""

from __future__ import annotations

CAUTIONS = (
    "Steering and suspension can kill. Support the car on stands on hard, level ground with "
    "the wheels chocked; a jack is never a support.\n\n"
    "Heating, bending or welding a steering arm, knuckle or control arm is for qualified "
    "people and may be barred where you are: replace the part, or have it done by them.\n\n"
    "Torque castle nuts, tighten on to the next slot, and fit a new cotter pin. Have the "
    "finished work inspected and aligned before it goes on the road. Local codes rule.\n\n"
    "Bobline computes from what you measured. It does not know what a part can carry."
)

KEYS = (
    ("Drag a nail", "move it; Alt frees it from the tape's fractions, Esc puts it back"),
    ("Tab, Shift+Tab", "walk the nails on the floor, or the cells of the measure sheet"),
    ("Arrow keys", "nudge the chosen nail 1/16 in (1 mm)"),
    ("Shift + arrow keys", "nudge it 1/2 in (10 mm)"),
    ("Ctrl + arrow keys", "nudge it 1/64 in (0.1 mm)"),
    ("Enter or F2 on a nail", "type its place in the measure sheet"),
    ("Mouse wheel, + and −", "zoom"),
    ("Middle button, or Space", "drag the floor itself"),
    ("T", "measure from place to place with the tape"),
    ("Ctrl+E, Ctrl+Shift+E", "draw a no-go shape corner by corner, or a box"),
    ("Drag a no-go shape or its corner", "move it; arrow keys nudge it, Delete takes it away"),
    ("Page Up, Page Down on a shape", "walk its corners; Enter names it and types its places"),
    ("Ctrl+1, Ctrl+2", "the floor from the front, or from above"),
    ("Ctrl+0, Ctrl+9", "the whole front end, or from above the car back to its rear axle"),
    ("Ctrl+3, Ctrl+4", "the car as found, or as planned"),
    ("Home", "back to ride height, the body level, the rack centered"),
    ("F6, Shift+F6", "go to the next or the last panel"),
    ("Enter or Tab in a cell", "take what was typed and go down, or on"),
    ("Esc in a cell", "take back what was refused"),
    ("Ctrl+C, Ctrl+V in the sheet", "copy and paste cells, also to and from a spreadsheet"),
)
"""What the hand does, and what that does."""
