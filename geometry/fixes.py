"""The fix list: moves a shop really makes that cure bump steer, and what each one costs.

Every kind of move is tried in all its steps, then all kinds in pairs; candidates are judged
in batches by the same toe range that every other view shows. What is listed is a changed
layout, so that making the moves and solving again gives just what was claimed.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from itertools import combinations, product

import numpy as np

from geometry.corner import Corner
from geometry.finding_checks.wording import Wording
from geometry.fix_costs import Costs, costs_of
from geometry.inner_pivot import HeldMotion, held_travel, toe_of, toe_range
from geometry.layout import Layout, Side, SideName, UnitName, other_side
from geometry.linkage import Array
from geometry.shop_moves import (
    INNER_KINDS,
    Allowances,
    Kind,
    ShopMove,
    allowed_kinds,
    amounts,
)
from geometry.solution import SWEEP_STEPS
from geometry.toe_law import ToeLaw
from geometry.tolerances import toe_angle, toe_length, tolerance
from geometry.zone_shapes import Progress, Stop

__all__ = ["Allowances", "Costs", "Fix", "FixList", "ShopMove", "fix_list", "fixes"]

PAIRS_LISTED = 8
"""Every kind of move is listed once alone where it helps, and with these many best pairs."""
_BATCH = 192
"""Cars moved at a time: a stop is heard within a tenth of a second or two."""

WORTH_IT = 0.9
"""A fix that leaves more than this share of the present toe change is none."""
PAIR_WORTH_IT = 0.75
"""A pair that leaves more than this share of what its better half leaves alone is none."""

BIN = 0.25
"""Fixes count as equally good where what they leave falls in the same quarter of the tolerance,
and are then ranked by how much has to be changed."""
NO_BETTER = 1.0 / 16.0
"""Sizes of one kind whose leavings differ by less than this share of the tolerance: the smaller
change is taken (a toe gauge tells no more)."""

_CLASHING = (frozenset({"outer_spacer", "knuckle_height"}),)
"""Two ways to do the same thing."""


@dataclass(frozen=True)
class Fix:
    """One fix: its moves, the changed car, and what they leave and cost.

    ``toe_range`` rad is what the treated side keeps over the travel, ``other_range`` the far
    side's (the same while linked; None where it could not be judged). ``travel`` (n,) mm and
    ``toe`` (n,) rad are the treated side's toe curve. ``cures`` is True where the treated side
    is then within the tolerance and the far side no worse than that for it. ``changed`` mm is
    the sum of its moves.
    """

    moves: tuple[ShopMove, ...]
    text: str
    layout: Layout
    side: SideName
    toe_range: float
    other_range: float | None
    cures: bool
    travel: Array
    toe: Array
    costs: Costs

    @property
    def changed(self) -> float:
        return sum(abs(move.amount) for move in self.moves)

    @property
    def remains(self) -> float:
        """The toe change left at the tire, mm per wheel."""
        return float(np.ptp(toe_length(self.layout.side(self.side), self.toe)))

    @property
    def notes(self) -> tuple[str, ...]:
        """What has to be said with the moves."""
        return tuple(dict.fromkeys(move.note for move in self.moves if move.note))

    def remains_words(self, units: UnitName) -> str:
        return f"Leaves {Wording(units).fine(self.remains)} of toe change."


@dataclass(frozen=True)
class FixList:
    """Fixes, best first, for one side. ``present`` and ``tolerance`` rad of toe range.

    ``trouble`` says in a sentence why there are none; ``done`` is False while pairs are still
    being tried.
    """

    fixes: tuple[Fix, ...]
    present: float | None
    tolerance: float
    trouble: str = ""
    done: bool = True


@dataclass(frozen=True)
class _Candidate:
    """Some moves with what they leave, rad: on the side, on the far side, and to be ranked by."""

    moves: tuple[ShopMove, ...]
    own: float
    other: float | None
    judged: float

    @property
    def changed(self) -> float:
        return sum(abs(move.amount) for move in self.moves)

    @property
    def kinds(self) -> tuple[Kind, ...]:
        return tuple(move.kind for move in self.moves)


def fix_list(
    layout: Layout,
    side: SideName = "left",
    allowances: Allowances | None = None,
    span: float = 75.0,
    *,
    progress: Progress | None = None,
    stop: Stop | None = None,
) -> FixList | None:
    """The whole fix list; None if stopped. See ``fixes``."""
    lists = list(fixes(layout, side, allowances, span, progress=progress, stop=stop))
    return lists[-1] if lists and lists[-1].done else None


def fixes(
    layout: Layout,
    side: SideName = "left",
    allowances: Allowances | None = None,
    span: float = 75.0,
    *,
    progress: Progress | None = None,
    stop: Stop | None = None,
) -> Iterator[FixList]:
    """The fix list of one side as it grows: single moves at once, then with the best pairs.

    Judged over ``span`` mm of travel each way, steering centered, against the layout's "toe
    range" tolerance. Ends early when ``stop`` says so. Nothing raises for a complete layout.
    """
    bench = _Bench(layout, side, allowances or Allowances(), span, progress, stop)
    if bench.trouble:
        yield bench.listed((), bench.trouble)
        return
    best: dict[tuple[Kind, ...], _Candidate] = {}
    kinds = bench.kinds
    pairs = [pair for pair in combinations(kinds, 2) if frozenset(pair) not in _CLASHING]
    for count, tried in enumerate([(kind,) for kind in kinds], 1):
        found = bench.best_of(tried)
        if bench.stopped:
            return
        if found is not None:
            best[tried] = found
        bench.tell(0.2 * count / len(kinds))
    yield bench.listed(best.values(), done=not pairs)
    for count, pair in enumerate(pairs, 1):
        found = bench.best_of(pair)
        if bench.stopped:
            return
        alone = [best[kind,].judged for kind in pair if (kind,) in best]
        if found is not None and found.judged <= PAIR_WORTH_IT * min(alone, default=math.inf):
            best[pair] = found
        bench.tell(0.2 + 0.75 * count / len(pairs))
    if pairs:
        yield bench.listed(best.values())
    bench.tell(1.0)


class _Bench:
    """One car on the bench: tries moves and judges what they leave."""

    def __init__(
        self,
        layout: Layout,
        side: SideName,
        allowances: Allowances,
        span: float,
        progress: Progress | None,
        stop: Stop | None,
    ) -> None:
        self.layout, self.side, self.allowances, self.span = layout, side, allowances, span
        self.tell = progress or (lambda share: None)
        self._stop, self.stopped = stop, False
        self.own = layout.side(side)
        self.travel = np.linspace(-span, span, SWEEP_STEPS)
        # A limit below nothing can't be met, and asks no less than one of nothing.
        self.tolerance = max(0.0, toe_angle(self.own, tolerance(layout, "toe range")))
        self.kinds = allowed_kinds(layout, side, allowances)
        self.present = self._present_range(self.own)
        self._far: dict[float, float | None] = {}
        self.trouble = self._why_none()

    def _why_none(self) -> str:
        words = Wording(self.layout.units)
        if self.present is None:
            return (
                f"The parts don't meet over the whole {words.span(self.span)}, so no fix can be"
                " judged. Choose a shorter travel or look at the measures."
            )
        if not self.own.tire.radius > 0.0:
            return "The tire has no radius, so a toe change can't be judged at the tire."
        if self.present <= self.tolerance:
            left = words.fine(float(toe_length(self.own, self.present)))
            return f"Toe changes only {left} over this travel: nothing to fix."
        if not self.kinds:
            return "Nothing may be moved on this car: every kind of move is locked or set to none."
        return ""

    def _halted(self) -> bool:
        self.stopped = self.stopped or (self._stop is not None and self._stop())
        return self.stopped

    def _toe_through(self, side: Side) -> Array:
        """Toe (n,), rad, through the travel, steering centered; NaN out of reach."""
        poses = Corner.of(side).poses(self.travel)
        return np.where(poses.assembles, poses.toe, np.nan)

    def _present_range(self, side: Side) -> float | None:
        value = float(np.ptp(self._toe_through(side)))
        return value if math.isfinite(value) else None

    def _range_of(self, side: Side) -> float | None:
        """The toe range by the quick motion that candidates are judged by, rad."""
        value = float(toe_range(_toe_curve(side, self.travel)))
        return value if math.isfinite(value) else None

    # --- what the far side keeps --------------------------------------------------------------

    def far_range(self, raised: float) -> float | None:
        """The far side's toe range, rad, with the rack raised; None where it can't be judged."""
        if raised not in self._far:
            car = ShopMove("rack_height", raised).applied(self.layout, self.side)
            far = None if car is None else car.side(other_side(self.side))
            self._far[raised] = None if far is None else self._range_of(far)
        return self._far[raised]

    def _judged(self, moves: tuple[ShopMove, ...], own: float) -> _Candidate:
        """A rack that moves for one side must not spoil the other."""
        if self.layout.linked:
            return _Candidate(moves, own, own, own)
        raised = sum(move.amount for move in moves if move.kind == "rack_height")
        was, now = self.far_range(0.0), self.far_range(raised)
        worse = raised and was is not None and (now is None or now > was)
        judged = own if not worse else max(own, math.inf if now is None else now)
        return _Candidate(moves, own, now, judged)

    # --- candidates -----------------------------------------------------------------------------

    def best_of(self, kinds: tuple[Kind, ...]) -> _Candidate | None:
        """The best sizes of one kind, or of two together; None if they cure nothing."""
        candidates = [
            self._judged(moves, own)
            for moves, own in self._tried(kinds)
            if own <= WORTH_IT * (self.present or 0.0)
        ]
        if not candidates:
            return None
        least = min(candidate.judged for candidate in candidates)
        close = [c for c in candidates if c.judged <= least + NO_BETTER * self.tolerance]
        found = min(close, key=lambda c: (c.changed, c.judged))
        return found if found.judged <= WORTH_IT * (self.present or 0.0) else None

    def _tried(self, kinds: tuple[Kind, ...]) -> Iterator[tuple[tuple[ShopMove, ...], float]]:
        """Every choice of sizes with the toe range, rad, that it leaves where it can be had.

        Moves of the inner end don't change the toe-held motion, so that all their sizes are
        judged against each motion in one go.
        """
        few = len(kinds) > 1
        sizes = {
            kind: amounts(kind, self.allowances, self.layout.units,
                          few=few and kind not in INNER_KINDS)
            for kind in kinds
        }
        carried = [kind for kind in kinds if kind not in INNER_KINDS]
        inner = [kind for kind in kinds if kind in INNER_KINDS]
        shifts = [
            tuple(ShopMove(kind, float(a)) for kind, a in zip(inner, row, strict=True))
            for row in product(*(sizes[kind] for kind in inner))
        ]
        if not shifts:
            return
        steps = np.array(
            [[sum(m.amount for m in moves if m.kind == kind) for kind in INNER_KINDS[::-1]]
             for moves in shifts]
        ).T
        for moves, motion, outer, pivot in self._motions(carried, sizes):
            rods = (outer - pivot)[:, None] - np.vstack([np.zeros(len(shifts)), steps])
            ranges = ToeLaw(motion, outer).ranges(rods)
            for shift, value in zip(shifts, ranges, strict=True):
                if math.isfinite(value) and (moves or shift):
                    yield self._ordered(kinds, (*moves, *shift)), float(value)

    @staticmethod
    def _ordered(kinds: tuple[Kind, ...], moves: tuple[ShopMove, ...]) -> tuple[ShopMove, ...]:
        return tuple(sorted(moves, key=lambda move: kinds.index(move.kind)))

    def _motions(
        self, carried: list[Kind], sizes: dict[Kind, Array]
    ) -> Iterator[tuple[tuple[ShopMove, ...], HeldMotion, Array, Array]]:
        """Each choice of sizes of the ``carried`` kinds (those that change the toe-held motion),
        with its motion, outer tie-rod end and inner pivot (3,); solved in batches."""
        rows = product(*(sizes[kind] for kind in carried))
        made: list[tuple[tuple[ShopMove, ...], Side]] = []
        for row in rows:
            moves = tuple(ShopMove(kind, float(a)) for kind, a in zip(carried, row, strict=True))
            car = _made(self.layout, self.side, moves)
            if car is not None:
                made.append((moves, car.side(self.side)))
        for start in range(0, len(made), _BATCH):
            if self._halted():
                return
            part = made[start : start + _BATCH]
            corner = Corner.of(*(side for _, side in part), part[0][1])
            motion = held_travel(corner, self.travel)
            for k, (moves, _) in enumerate(part):
                alone = HeldMotion(
                    **{
                        name: np.broadcast_to(
                            value, (*value.shape[: value.ndim - 2], *corner.cars, self.travel.size)
                        )[..., k, :]
                        for name, value in motion.__dict__.items()
                    }
                )
                yield moves, alone, corner.tie_outer[:, k, 0], corner.tie_inner[:, k, 0]

    # --- the list -------------------------------------------------------------------------------

    def listed(
        self, candidates: Iterable[_Candidate], trouble: str = "", *, done: bool = True
    ) -> FixList:
        """The best candidates worked out in full."""
        def rank(candidate: _Candidate) -> tuple[int, int, float, float]:
            bin_ = math.ceil(candidate.judged / (BIN * self.tolerance)) if self.tolerance else 0
            return bin_, len(candidate.moves), candidate.changed, candidate.judged

        ranked = sorted(candidates, key=rank)
        pairs = [candidate for candidate in ranked if len(candidate.moves) > 1][:PAIRS_LISTED]
        ranked = [one for one in ranked if len(one.moves) == 1 or one in pairs]
        made = [
            (candidate, car)
            for candidate in ranked
            if (car := _made(self.layout, self.side, candidate.moves)) is not None
        ]
        costs = costs_of(self.layout, [car for _, car in made], self.side)
        out = [self._fix(one, car, cost) for (one, car), cost in zip(made, costs, strict=True)]
        # The quick motion judges a pose that the parts may not quite reach: then it is no fix.
        out = [fix for fix in out if fix.toe_range < (self.present or 0.0)]
        # What runs a pivot into a no-go shape stays on the list, but last.
        out.sort(key=lambda fix: bool(fix.costs.runs_into))
        if not out and not trouble and done:
            trouble = (
                "No move within what is allowed makes the toe change much smaller: allow more, or"
                " look at the arms."
            )
        return FixList(tuple(out), self.present, self.tolerance, trouble, done)

    def _fix(self, candidate: _Candidate, car: Layout, costs: Costs) -> Fix:
        """A candidate with its figures from the full solve, as every other view has them."""
        toe = self._toe_through(car.side(self.side))
        own = float(np.ptp(toe))
        far = other_side(self.side)
        was, other = (self._present_range(one.side(far)) for one in (self.layout, car))
        spoiled = was is not None and (other is None or other > max(was, self.tolerance))
        parts = [move.text(self.layout, self.side) for move in candidate.moves]
        text = ", and ".join([parts[0], *(part[0].lower() + part[1:] for part in parts[1:])])
        return Fix(
            moves=candidate.moves,
            text=f"{text}.",
            layout=car,
            side=self.side,
            toe_range=own,
            other_range=other,
            cures=own <= self.tolerance and not spoiled,
            travel=self.travel,
            toe=toe,
            costs=costs,
        )


def _toe_curve(side: Side, travel: Array) -> Array:
    """Toe (n,), rad, through ``travel`` (n,) mm with the steering centered; NaN where none is."""
    corner = Corner.of(side)
    with np.errstate(all="ignore"):
        return np.asarray(toe_of(held_travel(corner, travel), corner, corner.tie_inner[1:])[0])


def _made(layout: Layout, side: SideName, moves: Iterable[ShopMove]) -> Layout | None:
    """The car with all moves made, one after another; None where one can't be."""
    car: Layout | None = layout
    for move in moves:
        car = None if car is None else move.applied(car, side)
    return car
