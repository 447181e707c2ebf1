"""Toe for any number of inner tie-rod pivots against one toe-held motion, at array speed.

With toe held, the knuckle's motion does not depend on the inner pivot, and what the tie rod
then asks of the knuckle is one trigonometric equation a pose: a cos(t) + b sin(t) = c, with
a, b and c linear in the pivot's place (its squared terms cancel, as the rod is cut to length
at ride height). In tan(t/2) it is a quadratic, so that a pose costs one root and two
divisions, and only the least and greatest toe of each pivot ever become an angle.
"""

from __future__ import annotations

import numpy as np

from geometry.inner_pivot import HeldMotion
from geometry.linkage import Array, dot

BLOCK = 256
"""Pivots judged at a time: their poses then stay in a core's own cache."""


class ToeLaw:
    """Toe over one toe-held motion as a function of where the inner tie-rod pivot stands.

    ``motion`` is a single corner's, (3, n); ``ride_outer`` (3,) the outer tie-rod end at
    ride height; ``shift`` (3,) how far the steering has taken the inner pivot from its
    straight-ahead place, to which the rod is cut. Toe here is the change from the held toe.
    """

    def __init__(
        self, motion: HeldMotion, ride_outer: Array, shift: Array | None = None
    ) -> None:
        moved = np.zeros(3) if shift is None else np.asarray(shift, dtype=float).reshape(3)
        home = (np.asarray(ride_outer, dtype=float).reshape(3) + moved)[:, None]
        self.travel = np.atleast_1d(motion.travel)
        shape = (3, self.travel.size)
        arm, across, axle, along, spin_arm, spin_across = (
            np.broadcast_to(part, shape)
            for part in (motion.arm, motion.across, motion.axle, motion.spin_along,
                         motion.spin_arm, motion.spin_across)
        )
        # d = c - a, b, and s = c + a, each as (constant, factors of the rod's vector).
        gone, base = axle + arm - home, axle - home
        short = np.vstack([-0.5 * dot(gone, gone), -gone])
        lever = np.vstack([dot(across, base), across])
        pull = np.vstack([dot(arm, base), arm])
        missing = np.where(np.broadcast_to(motion.assembles, shape[1:]), 0.0, np.nan)
        self._short = np.ascontiguousarray((short + missing).T)
        self._lever = np.ascontiguousarray(lever.T)
        self._sum = np.ascontiguousarray((short + 2.0 * pull).T)
        # The spin axis, seen along and across the held heading, as a quadratic in tan(t/2).
        held = along + spin_arm
        level = held[0] * held[0] + held[1] * held[1]
        with np.errstate(all="ignore"):

            def turned(part: Array) -> tuple[Array, Array]:
                fore = (part[0] * held[1] - part[1] * held[0]) / level
                over = (part[0] * held[0] + part[1] * held[1]) / level
                return fore[:, None], over[:, None]

            first, second = turned(2.0 * spin_across), turned(along - spin_arm)
        self._fore, self._over = (first[0], second[0]), (first[1], second[1])

    def ranges(self, rods: Array) -> Array:
        """Peak-to-peak toe (k,), rad, for rods (3, k): inner pivot to ride-height outer end.

        NaN where a rod can't reach, or the toe would pass a right angle, in any pose.
        """
        count = rods.shape[1]
        if not count:
            return np.empty(0)
        blocks = -(-count // BLOCK)
        block = -(-count // blocks)
        padded = np.ones((4, blocks * block))
        padded[1:, :count] = rods
        padded[1:, count:] = rods[:, -1:]
        most, least = np.empty(blocks * block), np.empty(blocks * block)
        room = [np.empty((self.travel.size, block)) for _ in range(3)]
        with np.errstate(all="ignore"):
            for start in range(0, blocks * block, block):
                part = slice(start, start + block)
                slope, over = self._slopes(padded[:, part], *room)
                np.max(slope, axis=0, out=most[part])
                np.min(slope, axis=0, out=least[part])
                behind = np.min(over, axis=0) <= 0.0
                most[part][behind] = np.nan
            return np.asarray((np.arctan(most) - np.arctan(least))[:count])

    def toes(self, rods: Array) -> Array:
        """Toe change from the held toe (k, n), rad, for rods (3, k); NaN out of reach."""
        count = rods.shape[1]
        room = [np.empty((self.travel.size, count)) for _ in range(3)]
        with np.errstate(all="ignore"):
            slope, over = self._slopes(np.vstack([np.ones((1, count)), rods]), *room)
            return np.asarray(np.arctan(np.where(over > 0.0, slope, np.nan)).T)

    def _slopes(self, rods: Array, t: Array, work: Array, over: Array) -> tuple[Array, Array]:
        """The tangent of the toe change (n, k) for rods (4, k), a one ahead of each, and the
        spin axis' part along the held heading, positive up to a right angle."""
        np.matmul(self._sum, rods, out=work)
        np.matmul(self._short, rods, out=t)
        np.matmul(self._lever, rods, out=over)
        # tan(t/2) = d / (b + sign(b) sqrt(b2 - d s)): the root near the held place.
        work *= t
        work -= over * over
        np.negative(work, out=work)
        np.sqrt(work, out=work)
        np.copysign(work, over, out=work)
        over += work
        t /= over
        np.multiply(t, self._over[1], out=over)
        over += self._over[0]
        over *= t
        over += 1.0
        np.multiply(t, self._fore[1], out=work)
        work += self._fore[0]
        work *= t
        work /= over
        return work, over


def rods_to(ride_outer: Array, fore: float, overs: Array, ups: Array) -> Array:
    """Rods (3, k) from inner pivots at one station, overs and ups (k,), to the outer end (3,)."""
    home = np.asarray(ride_outer, dtype=float).reshape(3)
    return np.stack([np.full(overs.shape, home[0] - fore), home[1] - overs, home[2] - ups])
