"""Pitman arm, relay rod and idler arm against a general constraint solve.

The outside check is SciPy's root finder on nothing but the lengths that can't change
(arms, rod, inner ends to rod ends), followed from ride height in small steps.
"""

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import root

from geometry.layout import TIE_INNER, Layout, RelayRod, Side, Tire
from geometry.steering import inner_shifts
from tests.outside.witness import witness

pytestmark = pytest.mark.outside

TOLERANCE_MM = 1e-7
RACKS = np.linspace(-55.0, 55.0, 12)
STEPS = 20


def random_linkage(rng: np.random.Generator) -> tuple[RelayRod, dict[str, Side]]:
    """A linkage with every point off symmetry, arms ahead or behind, either box side."""

    def near(over: float, up: float, fore: float, by: float = 25.0) -> tuple[float, float, float]:
        return (
            over + rng.uniform(-by, by),
            up + rng.uniform(-by, by),
            fore + rng.uniform(-by, by),
        )

    ahead = 1.0 if rng.random() < 0.5 else -1.0
    relay = RelayRod(
        pitman_pivot=near(330, 300, -200),
        pitman_end=near(330, 280, -200 + ahead * 150),
        idler_pivot=near(330, 300, -200),
        idler_end=near(330, 280, -200 + ahead * 150),
        box_side="left" if rng.random() < 0.5 else "right",
    )
    sides = {
        name: Side({TIE_INNER: near(220, 285, -200 + ahead * 170)}, Tire(310.0))
        for name in ("left", "right")
    }
    return relay, sides


def in_car(point: tuple[float, float, float], side: str) -> NDArray[np.float64]:
    """X forward, Y left, Z up."""
    over, up, fore = point
    return np.array([fore, over if side == "left" else -over, up])


def followed(relay: RelayRod, sides: dict[str, Side], rack: float) -> NDArray[np.float64]:
    """Both inner ends (2, 3), left first, in the car's axes, by constraints alone."""
    box = relay.box_side
    other = "right" if box == "left" else "left"
    pitman_pivot, pitman = in_car(relay.pitman_pivot, box), in_car(relay.pitman_end, box)
    idler_pivot, idler = in_car(relay.idler_pivot, other), in_car(relay.idler_end, other)
    inner = [in_car(sides[name][TIE_INNER], name) for name in ("left", "right")]

    def gap(a: NDArray[np.float64], b: NDArray[np.float64]) -> float:
        return float(np.sum((a - b) ** 2))

    def faults(x: NDArray[np.float64], moved: float) -> NDArray[np.float64]:
        p = np.array([x[0], x[1], pitman[2]])
        i = np.array([x[2], x[3], idler[2]])
        left = np.array([x[4], x[5], inner[0][2]])
        right = np.array([x[6], x[7], inner[1][2]])
        return (
            np.array(
                [
                    1e2 * (p[1] - pitman[1] - moved),
                    gap(p, pitman_pivot) - gap(pitman, pitman_pivot),
                    gap(i, idler_pivot) - gap(idler, idler_pivot),
                    gap(p, i) - gap(pitman, idler),
                    gap(left, p) - gap(inner[0], pitman),
                    gap(left, i) - gap(inner[0], idler),
                    gap(right, p) - gap(inner[1], pitman),
                    gap(right, i) - gap(inner[1], idler),
                ]
            )
            / 1e2
        )

    x = np.array([*pitman[:2], *idler[:2], *inner[0][:2], *inner[1][:2]])
    for moved in np.linspace(0.0, rack, STEPS + 1)[1:]:
        x = root(faults, x, args=(moved,), tol=1e-14).x
    assert np.abs(faults(x, rack)).max() < 1e-9
    return np.array([[x[4], x[5], inner[0][2]], [x[6], x[7], inner[1][2]]])


@pytest.mark.parametrize("seed", range(8))
def test_relay_rod_follows_its_fixed_lengths(seed: int) -> None:
    relay, sides = random_linkage(np.random.default_rng(seed))
    layout = Layout(sides["left"], sides["right"], steering=relay)
    shifts = inner_shifts(layout, RACKS)
    checked, worst = 0, 0.0
    for k, rack in enumerate(RACKS):
        if not np.all(np.isfinite(shifts["left"][:, k])):
            continue
        expected = followed(relay, sides, float(rack))
        for row, (name, sign) in enumerate((("left", 1.0), ("right", -1.0))):
            fore, over, up = shifts[name][:, k]
            start = in_car(sides[name][TIE_INNER], name)
            got = start + np.array([fore, sign * over, up])
            worst = max(worst, float(np.abs(got - expected[row]).max()))
        checked += 1
    assert checked >= 10
    source = "SciPy's root finder on fixed lengths alone"
    words = f"relay rod {seed}: inner ends off, mm, over {checked} places"
    witness(source, words, 0.0, worst, TOLERANCE_MM)


def test_equal_arms_square_to_the_rod_carry_it_like_a_parallelogram() -> None:
    """Exact: both inner ends move alike, on the arms' own radius (150 mm arms, 60 mm over)."""
    relay = RelayRod((300, 290, -200), (300, 290, -50), (300, 290, -200), (300, 290, -50))
    layout = Layout(Side({TIE_INNER: (220, 290, -30)}, Tire(310)), steering=relay)
    shifts = inner_shifts(layout, 60.0)
    drop = np.sqrt(150.0**2 - 60.0**2) - 150.0
    assert shifts["left"][:, 0] == pytest.approx([drop, 60.0, 0.0], abs=1e-10)
    assert shifts["right"][:, 0] == pytest.approx([drop, -60.0, 0.0], abs=1e-10)
