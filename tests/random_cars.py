"""Random sound cars for properties and witnesses: every kind of corner, plausible sizes."""

from __future__ import annotations

import math

import numpy as np

from geometry.layout import (
    LOWER_BALL,
    LOWER_INNER,
    LOWER_INNER_FRONT,
    LOWER_INNER_REAR,
    STRUT_LOWER,
    STRUT_TOP,
    TIE_INNER,
    TIE_OUTER,
    UPPER_BALL,
    UPPER_INNER,
    UPPER_INNER_FRONT,
    UPPER_INNER_REAR,
    WHEEL_CENTER,
    Point,
    Side,
    Tire,
)

KINDS = ("A-arm", "skewed", "strut")


def random_side(rng: np.random.Generator, kind: str = "A-arm") -> Side:
    """A side whose parts meet over a usual travel; every point has its own fore."""

    def near(over: float, up: float, fore: float, spread: float = 25.0) -> Point:
        place = np.array([over, up, fore]) + rng.uniform(-1, 1, 3) * spread
        return Point(*map(float, place))

    rear = rng.random() < 0.6
    arm_fore = -125.0 if rear else 125.0
    points = {
        LOWER_BALL: near(620, 185, 5, 15),
        TIE_OUTER: near(610, 260, arm_fore, 20),
        TIE_INNER: near(290, 245, arm_fore, 25),
        WHEEL_CENTER: near(710, 315, 0, 15),
    }
    if kind == "skewed":
        points[LOWER_INNER_FRONT] = near(240, 185, 150, 30)
        points[LOWER_INNER_REAR] = near(260, 180, -150, 30)
    else:
        points[LOWER_INNER] = near(240, 185, 0, 25)
    if kind == "strut":
        points[STRUT_TOP] = near(560, 820, -30, 20)
        points[STRUT_LOWER] = near(630, 400, -8, 12)
    else:
        points[UPPER_BALL] = near(585, 440, -12, 12)
        if kind == "skewed":
            points[UPPER_INNER_FRONT] = near(350, 410, 110, 25)
            points[UPPER_INNER_REAR] = near(365, 400, -120, 25)
        else:
            points[UPPER_INNER] = near(350, 405, -10, 25)
    return Side(
        points,
        Tire(float(rng.uniform(280, 340))),
        math.radians(float(rng.uniform(-2, 1))),
        math.radians(float(rng.uniform(-0.3, 0.3))),
    )
