"""A sweep worked on in blocks is the sweep worked on at once."""

from __future__ import annotations

from dataclasses import fields

import numpy as np
import pytest

from geometry import corner as room
from geometry.corner import Corner, Poses
from tests.random_cars import KINDS, random_side


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("cars", [1, 3])
def test_blocks_of_poses_give_what_one_solve_gives(
    kind: str, cars: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    rng = np.random.default_rng(7 + KINDS.index(kind))
    # A like kind of arm has the same points, so that the sides can be moved as a batch.
    corner = Corner.of(*(random_side(rng, kind) for _ in range(cars)))
    # Far enough that some poses come near their stops and some can't be had at all.
    travel = np.linspace(-400.0, 400.0, 203)
    rack = rng.uniform(-30.0, 30.0, travel.size)
    shift = np.stack([0.0 * rack, rack, 0.0 * rack])
    whole = corner.poses(travel, shift)
    assert 0 < whole.assembles.sum() < whole.assembles.size
    monkeypatch.setattr(room, "BLOCK", 50 * cars)
    parts = corner.poses(travel, shift)
    np.testing.assert_array_equal(parts.assembles, whole.assembles)
    for field in fields(Poses):
        expected, got = getattr(whole, field.name), getattr(parts, field.name)
        if expected is None:
            assert got is None
        else:
            assert got.shape == expected.shape
            np.testing.assert_allclose(got, expected, rtol=0.0, atol=1e-9, err_msg=field.name)
