"""A short run of the strange cars (``python -m tests.fuzz.cars`` makes a million)."""

from __future__ import annotations

import numpy as np
import pytest

from geometry.corner import Corner
from tests.fuzz.cars import cars_run, check_poses, corners_run
from tests.fuzz.holding import BAD_WORDS, FaultError, finite
from tests.fuzz.strange_cars import KINDS, RECIPES, SOUND, batch
from tests.sample_cars import CARS


def test_strange_corners_have_true_poses_or_none() -> None:
    done, faults = corners_run(seed=7, count=5000)
    assert done == 5000
    assert faults == []


def test_whole_strange_cars_show_only_true_numbers() -> None:
    done, faults = cars_run(seed=7, count=25)
    assert done == 25
    assert faults == []


def test_every_kind_of_corner_and_every_recipe_turns_up() -> None:
    kinds, recipes = set(), set()
    for number in range(60):
        cars = batch(np.random.default_rng([3, number]), 64)
        kinds.add(frozenset(cars.points))
        recipes |= {word for said in cars.recipes for word in said.split(" + ")}
        assert set(cars.points) <= set(SOUND)
    assert len(kinds) == len(KINDS)
    assert recipes >= {recipe.__name__.strip("_") for recipe in RECIPES}


def test_the_check_notices_a_part_that_changed_its_length() -> None:
    corner = Corner.of(CARS["healthy-roadster"].left)
    poses = corner.poses(np.array([-20.0, 0.0, 30.0]))
    check_poses(corner, poses)
    poses.tie_outer[1, 2] += 0.01
    with pytest.raises(FaultError, match="changed its length"):
        check_poses(corner, poses)


@pytest.mark.parametrize("text", ["nan", "Inf mm", "-0", "-0.00°", "None", "∞"])
def test_the_check_notices_what_is_no_number(text: str) -> None:
    assert BAD_WORDS.search(f"Toe is {text} here.")


@pytest.mark.parametrize("text", ["-0.01°", "none", "1-0 in", "-0.5", "information", "10.0"])
def test_the_check_lets_plain_words_pass(text: str) -> None:
    assert not BAD_WORDS.search(f"Toe is {text} here.")


def test_the_check_notices_a_figure_that_is_not_finite() -> None:
    with pytest.raises(FaultError, match="toe"):
        finite({"poses": [{"toe": float("nan")}]})
