"""Tire sizes as shops write them, and what another wheel does to the car."""

from __future__ import annotations

import pytest

from geometry.layout import WHEEL_CENTER, RelayRod, Tire
from geometry.solution import solve
from geometry.tires import (
    LOADED_SHARE,
    TireSizeError,
    backspace_of,
    offset_for,
    parse_tire_size,
    wheel_changed,
    with_tire,
)
from tests.sample_cars import RELAY_CAR, ROADSTER


@pytest.mark.parametrize(
    ("text", "width", "diameter", "rim"),
    [
        ("205/55R16", 205.0, 631.9, 406.4),
        ("P205/55R16 91V", 205.0, 631.9, 406.4),
        (" lt235 / 75 r 15 ", 235.0, 733.5, 381.0),
        ("225/50ZR16", 225.0, 631.4, 406.4),
        ("205/60HR15", 205.0, 627.0, 381.0),
        ("225/75-16.5", 225.0, 756.6, 419.1),
        ("225/75R16,5", 225.0, 756.6, 419.1),
        ("165R13", 165.0, 600.8, 330.2),
        ("165 SR 13", 165.0, 600.8, 330.2),
        ("31x10.5R15", 266.7, 787.4, 381.0),
        ("31X10.50-15", 266.7, 787.4, 381.0),
        ("28 × 9 15", 228.6, 711.2, 381.0),
        ("6.00-16", 152.4, 711.2, 406.4),
        ("6.50 - 13", 165.1, 660.4, 330.2),
    ],
)
def test_sizes_as_shops_write_them(text: str, width: float, diameter: float, rim: float) -> None:
    size = parse_tire_size(text)
    assert size.width == pytest.approx(width)
    assert size.diameter == pytest.approx(diameter, abs=0.1)
    assert size.rim_diameter == pytest.approx(rim)
    assert size.loaded_radius == pytest.approx(0.5 * diameter * LOADED_SHARE, abs=0.1)


@pytest.mark.parametrize("text", ["", "big", "205", "205/55", "R16", "٢٠٥/٥٥", "nan", "-5x3R15"])
def test_what_is_no_size_is_refused_with_an_example(text: str) -> None:
    with pytest.raises(TireSizeError, match="should look like 205/55R16"):
        parse_tire_size(text)


@pytest.mark.parametrize("text", ["999/99R99", "10/50R15", "10x9R15", "99x40R15", "0.50-16"])
def test_a_size_that_no_car_wears_is_refused(text: str) -> None:
    with pytest.raises(TireSizeError, match="no tire that a car could wear"):
        parse_tire_size(text)


def test_another_tire_keeps_the_wheel() -> None:
    wheel = Tire(300.0, rim_width=180.0, offset=20.0)
    fitted = with_tire(wheel, parse_tire_size("205/55R16"), " 205/55R16 ")
    assert fitted.size == "205/55R16"
    assert (fitted.rim_width, fitted.offset) == (180.0, 20.0)
    assert fitted.radius == pytest.approx(306.5, abs=0.1)


def test_backspace_and_offset_are_the_same_thing() -> None:
    # A 7 in rim is 8 in over its flanges; in the middle, 4 in behind the face.
    assert backspace_of(Tire(300.0, rim_width=177.8, offset=0.0)) == pytest.approx(101.6)
    for backspace in (60.0, 101.6, 150.0):
        offset = offset_for(backspace, 177.8)
        again = backspace_of(Tire(300.0, rim_width=177.8, offset=offset))
        assert again == pytest.approx(backspace)


def test_less_offset_widens_the_track_by_as_much_on_each_side() -> None:
    tire = ROADSTER.left.tire
    moved = Tire(**{**tire.__dict__, "offset": tire.offset - 15.0})
    before, after = solve(ROADSTER), solve(wheel_changed(ROADSTER, "left", moved))
    for side in ("left", "right"):
        gain = after.sides[side].ride.half_track[0] - before.sides[side].ride.half_track[0]
        assert gain == pytest.approx(15.0, abs=1e-6)
        scrub = after.sides[side].ride.scrub_radius[0] - before.sides[side].ride.scrub_radius[0]
        assert scrub == pytest.approx(15.0, abs=0.01)


def test_a_taller_tire_lifts_the_car_by_the_radius() -> None:
    tire = RELAY_CAR.left.tire
    taller = Tire(**{**tire.__dict__, "radius": tire.radius + 12.0})
    after = wheel_changed(RELAY_CAR, "left", taller)
    for name, place in RELAY_CAR.left.points.items():
        assert after.left[name].up == pytest.approx(place.up + 12.0)
    assert isinstance(after.steering, RelayRod) and isinstance(RELAY_CAR.steering, RelayRod)
    assert after.steering.pitman_end.up == pytest.approx(RELAY_CAR.steering.pitman_end.up + 12.0)
    assert after.cg_height == pytest.approx((RELAY_CAR.cg_height or 0.0) + 12.0)
    # On one side alone only that side stands higher, and the middle half as much.
    one = wheel_changed(ROADSTER.unlinked(), "right", taller)
    assert one.left == ROADSTER.left
    assert one.side("right")[WHEEL_CENTER].up == ROADSTER.left[WHEEL_CENTER].up + 12.0
    assert one.cg_height == pytest.approx((ROADSTER.cg_height or 0.0) + 6.0)
