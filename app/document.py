"""The open job: its history, its file, how it stands on the floor, and its solution.

Every act of a person comes in here as a new immutable job or as a change of stance on the
floor (travel, rack, roll, selection). Acts only mark the document; one timer solves once a
frame and tells the views, which all draw from ``solution``.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from itertools import chain
from pathlib import Path

from PySide6.QtCore import QObject, QTimer, Signal

from app.history import History
from app.home_file import FileMark, HomeFile
from geometry.findings import SEVERITIES, Finding, findings
from geometry.layout import Job, Layout, Point, SideName, UnitName
from geometry.road import MOST_ROLL, on_road, roll_travel
from geometry.solution import Solution, solve

DEFAULT_SPAN = {"in": 76.2, "mm": 75.0}
"""Half the travel the curves and ranges go over, mm: the three inches of a gauge."""


class Document(QObject):
    """What the window edits. Views connect to its signals and never to each other."""

    solved = Signal()
    """A new solution stands (at most once a frame)."""
    edited = Signal()
    """The job, its undo state, its file or its saved mark changed."""
    selected = Signal()
    """Another nail is chosen."""
    opened = Signal()
    """Another job took this one's place."""

    def __init__(self, job: Job, path: Path | None = None, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._history = History(job)
        self.file = HomeFile()
        self.file.settle(path, None)
        self._travel: dict[SideName, float] = {"left": 0.0, "right": 0.0}
        self._rack = 0.0
        self._roll = 0.0
        self._span = DEFAULT_SPAN[job.planned.units]
        self._selection: tuple[SideName, str] | None = None
        self._showing_found = False
        self._solution: Solution | None = None
        self._found: Solution | None = None
        self._found_posed: tuple[object, ...] = ()
        self._findings: tuple[Finding, ...] | None = None
        self._slow: dict[str, tuple[Finding, ...]] = {}
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(0)
        self._timer.timeout.connect(self._solve)

    # --- what stands ---------------------------------------------------------------

    @property
    def job(self) -> Job:
        return self._history.job

    @property
    def layout(self) -> Layout:
        """The car as planned, which is what a person edits."""
        return self.job.planned

    @property
    def path(self) -> Path | None:
        """The file the job lives in, or None while it has none."""
        return self.file.path

    @property
    def units(self) -> UnitName:
        return self.layout.units

    @property
    def solution(self) -> Solution:
        """The solution of what stands now; solves at once if an act is waiting."""
        if self._solution is None:
            self._solution = self._solved(self.layout)
        return self._solution

    @property
    def showing_found(self) -> bool:
        """True while the floor shows the car as found, to be looked at and not edited."""
        return self._showing_found and self.job.found is not None

    def show_found(self, found: bool) -> None:
        """Show the car as found, or the one as planned again."""
        if found != self._showing_found:
            self._showing_found = found
            self._mark()
            self.edited.emit()

    @property
    def shown_solution(self) -> Solution:
        """The solution the floor draws strongly: as planned, or as found while that is shown."""
        found = self.found_solution
        return found if self.showing_found and found is not None else self.solution

    @property
    def outline_solution(self) -> Solution | None:
        """The solution the floor draws as a pale outline: the other car, if there is one."""
        return self.solution if self.showing_found else self.found_solution

    @property
    def found_solution(self) -> Solution | None:
        """The car as found in the same pose, or None if the job holds none."""
        found = self.job.found
        if found is None:
            return None
        # A drag moves only the plan; the car as found is solved again when it is posed anew.
        posed = (found, tuple(self._travel.values()), self._rack, self._roll, self._span)
        if self._found is None or self._found_posed != posed:
            self._found, self._found_posed = self._solved(found), posed
        return self._found

    @property
    def findings(self) -> tuple[Finding, ...]:
        """What is wrong with the car as planned, worst first.

        Findings that take longer than a frame come from workers and stand beside the others
        until newer ones arrive.
        """
        if self._findings is None:
            found = [*findings(self.solution), *chain.from_iterable(self._slow.values())]
            found.sort(key=lambda finding: SEVERITIES.index(finding.severity))
            self._findings = tuple(found)
        return self._findings

    def set_slow_findings(self, source: str, found: Iterable[Finding]) -> None:
        """Take a worker's findings in place of that worker's older ones."""
        new = tuple(found)
        if new != self._slow.get(source, ()):
            self._slow[source] = new
            self._findings = None
            if not self._timer.isActive():
                self._timer.start()

    def _solved(self, layout: Layout) -> Solution:
        travel = dict(self._travel)
        if self._roll:
            heave = 0.5 * (travel["left"] + travel["right"])
            travel = roll_travel(layout, self._roll, heave, self._rack)
        return on_road(solve(layout, travel, self._rack, self._span))

    # --- stance on the floor (no undo steps) ------------------------------------------

    @property
    def travel(self) -> dict[SideName, float]:
        """Where each wheel stands, mm, bump positive; roll is in it."""
        return dict(self.solution.travel) if self._roll else dict(self._travel)

    @property
    def level_travel(self) -> dict[SideName, float]:
        """The travel that was asked for, mm, before the body is rolled over it."""
        return dict(self._travel)

    def set_travel(self, left: float | None = None, right: float | None = None) -> None:
        """Move the wheels, mm, bump positive; None leaves a side as it is."""
        changed = dict(self._travel)
        if left is not None:
            changed["left"] = left
        if right is not None:
            changed["right"] = right
        if changed["left"] != changed["right"]:
            # One wheel over a bump tilts the floor by itself.
            self._roll = 0.0
        if changed != self._travel:
            self._travel = changed
            self._mark()

    @property
    def rack(self) -> float:
        return self._rack

    def set_rack(self, rack: float) -> None:
        """Move the rack (or pitman end), mm to the car's left."""
        if rack != self._rack:
            self._rack = rack
            self._mark()

    @property
    def roll(self) -> float:
        """How far the body leans, rad; its left side up is positive (ISO 8855)."""
        return self._roll

    def set_roll(self, roll: float) -> None:
        """Lean the body over both tires, rad; the wheels' travel goes on as its mean."""
        roll = min(max(roll, -MOST_ROLL), MOST_ROLL)
        if roll != self._roll:
            self._roll = roll
            if roll:
                heave = 0.5 * (self._travel["left"] + self._travel["right"])
                self._travel = {"left": heave, "right": heave}
            self._mark()

    @property
    def span(self) -> float:
        return self._span

    def set_span(self, span: float) -> None:
        """Set half the travel that curves and ranges go over, mm."""
        if span != self._span:
            self._span = span
            self._mark()

    @property
    def selection(self) -> tuple[SideName, str] | None:
        return self._selection

    def select(self, side: SideName | None, name: str = "") -> None:
        chosen = None if side is None else (side, name)
        if chosen != self._selection:
            self._selection = chosen
            self.selected.emit()

    # --- edits (undo steps) -------------------------------------------------------------

    def apply(self, text: str, job: Job) -> None:
        """Make a changed job the next undo step, named ``text``; nothing if it is the same."""
        if self._history.push(text, job):
            self._showing_found = False
            self._changed()
        else:
            self._mark()

    def apply_layout(self, text: str, layout: Layout) -> None:
        """The same for a change of the car as planned."""
        self.apply(text, self._history.settled.with_planned(layout))

    def preview_layout(self, layout: Layout) -> None:
        """Show a car while a drag is under way, without an undo step."""
        self._history.preview(self._history.settled.with_planned(layout))
        self._mark()

    def cancel_preview(self) -> None:
        """Put back what stood before the drag."""
        if self._history.previewing:
            self._history.drop()
            self._mark()

    @property
    def previewing(self) -> bool:
        """True while a drag shows a car that is no undo step yet."""
        return self._history.previewing

    def settled_layout(self) -> Layout:
        """The car as planned before any drag under way."""
        return self._history.settled.planned

    def move_point(self, side: SideName, name: str, to: Point) -> None:
        """Move one nail as one undo step."""
        layout = self.settled_layout()
        if name in layout.locked:
            self.cancel_preview()
            return
        self.apply_layout(f"move {name}", layout.with_point(side, name, to))

    def preview_point(self, side: SideName, name: str, to: Point) -> None:
        """Move one nail while it is dragged."""
        layout = self.settled_layout()
        if name not in layout.locked:
            self.preview_layout(layout.with_point(side, name, to))

    def set_locked(self, name: str, locked: bool) -> None:
        """Lock a nail, on both sides, or free it."""
        layout = self.settled_layout()
        names = layout.locked | {name} if locked else layout.locked - {name}
        text = f"lock {name}" if locked else f"unlock {name}"
        self.apply_layout(text, replace(layout, locked=frozenset(names)))

    def set_linked(self, linked: bool, keep: SideName = "left") -> None:
        """Let the right side mirror the left (as ``keep`` has it), or go its own way."""
        layout = self.settled_layout()
        if linked:
            self.apply_layout("link sides", layout.linked_to(keep))
        else:
            self.apply_layout("unlink sides", layout.unlinked())

    def keep_as_found(self) -> None:
        """Take the car as it is now as the one that was found."""
        job = self._history.settled
        self.apply("keep as found", replace(job, found=job.planned))

    def plan_from_found(self) -> None:
        """Start the plan again from the car as found."""
        job = self._history.settled
        if job.found is not None:
            self.apply("plan from as found", replace(job, planned=job.found))

    def put_back_as_found(self, side: SideName, name: str) -> None:
        """Put one nail of the plan back to where it was found."""
        found = self.job.found
        if found is not None and self.found_place(side, name) is not None:
            layout = self.settled_layout()
            changed = layout.with_point(side, name, found.point(side, name))
            self.apply_layout(f"put {name} back as found", changed)

    def found_place(self, side: SideName, name: str) -> Point | None:
        """Where a nail was found; None if the car as found is not kept or has none such."""
        if self.job.found is None:
            return None
        try:
            return self.job.found.point(side, name)
        except KeyError:
            return None

    def set_job_card(self, title: str, shop: str, customer: str, notes: str) -> None:
        """Fill in the paperwork as one undo step; the title goes to both cars."""
        job = self._history.settled
        found = None if job.found is None else replace(job.found, title=title)
        planned = replace(job.planned, title=title)
        card = replace(
            job, planned=planned, found=found, shop=shop, customer=customer, notes=notes
        )
        self.apply("fill in job card", card)

    def set_units(self, units: UnitName) -> None:
        """Show inches or millimeters (an undo step, as the file keeps it)."""
        job = self._history.settled
        found = None if job.found is None else replace(job.found, units=units)
        planned = replace(job.planned, units=units)
        words = "inches" if units == "in" else "millimeters"
        self.apply(f"show {words}", replace(job, planned=planned, found=found))

    @property
    def undo_text(self) -> str | None:
        return self._history.undo_text

    @property
    def redo_text(self) -> str | None:
        return self._history.redo_text

    def undo(self) -> None:
        if self._history.undo():
            self._changed()

    def redo(self) -> None:
        if self._history.redo():
            self._changed()

    # --- file ------------------------------------------------------------------------

    @property
    def is_changed(self) -> bool:
        """True if closing now would lose something."""
        return not self._history.is_clean

    def mark_saved(self, path: Path, mark: FileMark | None = None) -> None:
        """The job as it stands is now in ``path``, which then looked like ``mark``."""
        self.file.settle(path, mark)
        self._history.mark_clean()
        self.edited.emit()

    def mark_changed(self) -> None:
        self._history.mark_changed()
        self.edited.emit()

    def open_job(self, job: Job, path: Path | None, mark: FileMark | None = None) -> None:
        """Put another job in this one's place, with a fresh history, at ride height."""
        self._history = History(job)
        self.file.settle(path, mark)
        self._travel = {"left": 0.0, "right": 0.0}
        self._rack = 0.0
        self._roll = 0.0
        self._selection = None
        self._showing_found = False
        self._span = DEFAULT_SPAN[job.planned.units]
        self._slow = {}
        self._forget()
        self.opened.emit()
        self.edited.emit()
        self.selected.emit()
        self._mark()

    # --- the frame --------------------------------------------------------------------

    def _changed(self) -> None:
        chosen = self._selection
        if chosen is not None and chosen not in set(self.layout.nails()):
            self._selection = None
            self.selected.emit()
        self._mark()
        self.edited.emit()

    def _forget(self) -> None:
        self._solution = None
        self._findings = None

    def _mark(self) -> None:
        self._forget()
        if not self._timer.isActive():
            self._timer.start()

    def _solve(self) -> None:
        self.solved.emit()

    def settle(self) -> None:
        """Solve and tell the views now, if an act is waiting (for tests and pictures)."""
        if self._timer.isActive():
            self._timer.stop()
            self._solve()
