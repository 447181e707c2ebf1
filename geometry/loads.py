"""Weight, roll and load transfer in a steady turn (front view, small angles).

Method: Barton and Fieldhouse, Automotive Chassis Engineering, ch. 4 (roll axis, roll
gradient with the mass leaning over, transfer through roll centers and through springs).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from geometry.layout import Loads

GRAVITY = 9.80665
"""m/s2, standard."""


@dataclass(frozen=True)
class Axle:
    """One axle of a car in a steady turn; heights and track mm, stiffness N mm/rad, forces N."""

    roll_center_height: float
    track: float
    roll_stiffness: float
    sprung_mass: float
    unsprung_mass: float = 0.0
    unsprung_height: float = 0.0


@dataclass(frozen=True)
class Transfer:
    """Load moved from inner to outer wheel of one axle, N, by the way it takes."""

    geometric: float
    elastic: float
    unsprung: float

    @property
    def total(self) -> float:
        return self.geometric + self.elastic + self.unsprung


@dataclass(frozen=True)
class Turn:
    """A car in a steady turn.

    roll_arm mm; roll_angle rad, toward the outside; roll_gradient rad per g;
    ``lean`` N: the part of both axles' elastic transfer owed to the mass moving outward
    as it leans (track-weighted), zero if that was left out.
    """

    lateral_g: float
    roll_arm: float
    roll_angle: float
    front: Transfer
    rear: Transfer

    @property
    def roll_gradient(self) -> float:
        return self.roll_angle / self.lateral_g if self.lateral_g else 0.0


def roll_arm(
    cg_height: float, front_height: float, rear_height: float, front_share: float
) -> float:
    """Height of the mass center above the roll axis at its station, mm.

    The station lies ``1 - front_share`` of the wheelbase behind the front axle.
    """
    return cg_height - (front_height + (rear_height - front_height) * (1.0 - front_share))


def turn(
    front: Axle,
    rear: Axle,
    cg_height: float,
    lateral_g: float,
    *,
    gravity: float = GRAVITY,
    leaning: bool = True,
) -> Turn | None:
    """The steady turn, or None where the springs can't hold the leaning mass up.

    The sprung mass and both tracks must be above zero.

    ``leaning`` counts the weight's own moment as the mass leans outward, as the source
    does; without it the two axles' transfers add up to weight x g x height / track exactly
    on a car with one track.
    """
    mass = front.sprung_mass + rear.sprung_mass
    arm = roll_arm(
        cg_height, front.roll_center_height, rear.roll_center_height, front.sprung_mass / mass
    )
    stiffness = front.roll_stiffness + rear.roll_stiffness
    # N mm per rad: kg x m/s2 x mm.
    held = stiffness - (mass * gravity * arm if leaning else 0.0)
    if held <= 0.0:
        return None
    accel = lateral_g * gravity
    angle = mass * accel * arm / held

    def transfer(axle: Axle) -> Transfer:
        return Transfer(
            geometric=axle.sprung_mass * accel * axle.roll_center_height / axle.track,
            elastic=axle.roll_stiffness * angle / axle.track,
            unsprung=axle.unsprung_mass * accel * axle.unsprung_height / axle.track,
        )

    return Turn(lateral_g, arm, angle, transfer(front), transfer(rear))


def roll_stiffness(wheel_rate: float, bar_rate: float, track: float) -> float:
    """Roll stiffness of an axle, N mm/rad, from rates at the wheel (N/mm) and track (mm)."""
    return 0.5 * (wheel_rate + bar_rate) * track * track


def wheel_rate_for(frequency: float, corner_mass: float) -> float:
    """Wheel rate, N/mm, that gives a ride frequency (Hz) to a sprung corner mass (kg)."""
    return corner_mass * (2.0 * math.pi * frequency) ** 2 / 1000.0


def ride_frequency(wheel_rate: float, corner_mass: float) -> float:
    """Ride frequency, Hz, of a sprung corner mass (kg) on a wheel rate (N/mm)."""
    return math.sqrt(wheel_rate * 1000.0 / corner_mass) / (2.0 * math.pi)


def wheel_rate(spring_rate: float, motion_ratio: float) -> float:
    """Wheel rate, N/mm, from a spring rate (N/mm) and spring travel / wheel travel.

    By virtual work; a leaned spring's lean is inside the motion ratio, so it counts squared
    (Barton and Fieldhouse, eqs 3.29-3.33). The term from a changing motion ratio is left out.
    """
    return spring_rate * motion_ratio * motion_ratio


def car_in_turn(
    loads: Loads,
    cg_height: float,
    front_roll_center: float,
    front_track: float,
    lateral_g: float,
    *,
    front_wheel_rate: float | None = None,
) -> Turn | str:
    """The car's steady turn, or a plain sentence that says what is still to be given."""
    rate = front_wheel_rate if front_wheel_rate is not None else loads.front_wheel_rate
    needed = {
        "the sprung weight": loads.sprung_mass,
        "the front share of it": loads.front_share,
        "a front wheel rate or ride frequency": rate,
        "a rear wheel rate or ride frequency": loads.rear_wheel_rate,
        "the rear roll center height": loads.rear_roll_center_height,
    }
    missing = [words for words, value in needed.items() if value is None]
    if missing:
        return "To see the car in a turn, type " + ", ".join(missing) + "."
    assert loads.sprung_mass is not None and loads.front_share is not None
    assert rate is not None and loads.rear_wheel_rate is not None
    assert loads.rear_roll_center_height is not None
    rear_track = loads.rear_track or front_track
    if not (loads.sprung_mass > 0.0 and front_track > 0.0 and rear_track > 0.0):
        return "To see the car in a turn, the sprung weight and both tracks must be above zero."
    front = Axle(
        front_roll_center,
        front_track,
        roll_stiffness(rate, loads.front_bar_rate, front_track),
        loads.sprung_mass * loads.front_share,
        loads.unsprung_front,
        loads.unsprung_front_height or 0.0,
    )
    rear = Axle(
        loads.rear_roll_center_height,
        rear_track,
        roll_stiffness(loads.rear_wheel_rate, loads.rear_bar_rate, rear_track),
        loads.sprung_mass * (1.0 - loads.front_share),
        loads.unsprung_rear,
        loads.unsprung_rear_height or 0.0,
    )
    answer = turn(front, rear, cg_height, lateral_g)
    if answer is None:
        return "The springs are too soft to hold this mass up in a turn."
    return answer


def jacking(
    force_outer: float, force_inner: float, slope_outer: float, slope_inner: float
) -> float:
    """Net lift of the body by an axle's contact lines, N.

    Each tire's side force (N, toward the inside of the turn) runs up its contact line;
    slopes are rise over run toward the centerline, so a roll center above the floor lifts.
    """
    return force_outer * slope_outer - force_inner * slope_inner
