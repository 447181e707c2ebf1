"""The floor on paper: to scale, inside its frame, tags apart, whatever the car."""

from __future__ import annotations

import re
from itertools import combinations

import pytest

from geometry.drawing import Circle, Polygon, Text
from geometry.floor_drawing import floor_drawing, floor_pages
from geometry.pages import A4, LETTER
from geometry.solution import solve
from geometry.svg import svg_text
from tests.sample_cars import CARS, DEGENERATE, ROADSTER, SAMPLES, UNEQUAL_SIDES


def texts(drawing):
    return [item.text for item in drawing if isinstance(item, Text)]


@pytest.mark.parametrize("car", [*CARS, *DEGENERATE])
@pytest.mark.parametrize("travel", [0.0, {"left": 50.0, "right": -30.0}, 700.0])
def test_every_car_makes_a_drawing_with_its_words_apart(car, travel):
    drawing = floor_drawing(solve(CARS.get(car) or DEGENERATE[car], travel, 10.0))
    frame = drawing.shown()
    assert frame.width <= 254.0 + 1e-6 and frame.height <= 175.0 + 1e-6
    words = [item for item in drawing if isinstance(item, Text)]
    for word in words:
        box = word.bounds
        assert frame.left <= box.left and box.right <= frame.right, word.text
        assert frame.bottom <= box.bottom and box.top <= frame.top, word.text
        assert "nan" not in word.text.split() and "inf" not in word.text.split()
    tags = [i.bounds for i in drawing if isinstance(i, Polygon) and i.style.layer == "tags"]
    for a, b in combinations(tags, 2):
        assert a.right <= b.left or b.right <= a.left or a.top <= b.bottom or b.top <= a.bottom
    assert svg_text(drawing).startswith("<?xml")


def test_the_scale_in_the_caption_is_the_drawings():
    drawing = floor_drawing(solve(UNEQUAL_SIDES))
    scale = int(re.search(r"scale 1 : (\d+)", " ".join(texts(drawing)))[1])
    nails = {
        (round(i.center[0], 6), round(i.center[1], 6))
        for i in drawing if isinstance(i, Circle) and i.style.layer == "nails"
    }
    left, right = UNEQUAL_SIDES.left, UNEQUAL_SIDES.side("right")
    name = "lower inner pivot"
    for dx, dy in (((left[name].over + right[name].over), (left[name].up - right[name].up)),):
        assert any(
            (round(x - dx / scale, 6), round(y - dy / scale, 6)) in nails for x, y in nails
        )


def test_the_car_as_found_lies_beneath_where_it_differs():
    job = SAMPLES["cut-springs"]
    drawing = floor_drawing(solve(job.planned), solve(job.found))
    assert "as found" in drawing.layers
    assert drawing.layers.index("as found") < drawing.layers.index("arms")
    assert "as found" not in floor_drawing(solve(ROADSTER), solve(ROADSTER)).layers


def test_the_caption_tells_the_pose():
    words = " ".join(texts(floor_drawing(solve(ROADSTER, {"left": 25.4, "right": 0.0}, -12.7))))
    assert "Left bump 1 in, right ride height, steering 1/2 in to the right" in words
    assert "Healthy roadster" in words


@pytest.mark.parametrize("size", [LETTER, A4])
def test_a_page_holds_the_whole_drawing_inside_its_margins(size):
    (page,) = floor_pages(solve(ROADSTER), None, size)
    assert page.size == size.landscape
    (placed,) = page.placed
    frame = placed.drawing.shown().padded(0.0)
    x, y = placed.at
    room = page.printable
    assert room.left - 1e-6 <= frame.left + x and frame.right + x <= room.right + 1e-6
    assert room.bottom - 1e-6 <= frame.bottom + y and frame.top + y <= room.top + 1e-6
