"""Undo and redo over immutable jobs: what was, what is, and what each step is called.

Jobs are immutable, so a step is nothing more than the job before and the job after.
"""

from __future__ import annotations

from dataclasses import dataclass

from geometry.layout import Job


@dataclass(frozen=True)
class Step:
    """One undoable act: its name as a person reads it, and the job before and after."""

    text: str
    before: Job
    after: Job


class History:
    """A line of steps with a place in it and a mark at the saved one.

    ``job`` is what stands now: the last step's, or a preview of a drag under way.
    """

    def __init__(self, job: Job) -> None:
        self._opening = job
        self._steps: list[Step] = []
        self._place = 0
        self._clean: int | None = 0
        self._preview: Job | None = None

    @property
    def settled(self) -> Job:
        """The job after the last completed step."""
        return self._steps[self._place - 1].after if self._place else self._opening

    @property
    def job(self) -> Job:
        return self.settled if self._preview is None else self._preview

    @property
    def previewing(self) -> bool:
        return self._preview is not None

    @property
    def is_clean(self) -> bool:
        """True if the job stands as last saved or opened."""
        return self._place == self._clean

    @property
    def undo_text(self) -> str | None:
        return self._steps[self._place - 1].text if self._place else None

    @property
    def redo_text(self) -> str | None:
        return self._steps[self._place].text if self._place < len(self._steps) else None

    def preview(self, job: Job) -> None:
        """Show a job without making it a step (a drag under way)."""
        self._preview = job

    def drop(self) -> None:
        """Forget the preview."""
        self._preview = None

    def push(self, text: str, job: Job) -> bool:
        """Make a job the next step; False if it changes nothing."""
        self._preview = None
        if job == self.settled:
            return False
        step = Step(text, self.settled, job)
        del self._steps[self._place :]
        if self._clean is not None and self._clean > self._place:
            # The saved state was ahead and can't be reached any more.
            self._clean = None
        self._steps.append(step)
        self._place += 1
        return True

    def undo(self) -> bool:
        self._preview = None
        if not self._place:
            return False
        self._place -= 1
        return True

    def redo(self) -> bool:
        self._preview = None
        if self._place == len(self._steps):
            return False
        self._place += 1
        return True

    def mark_clean(self) -> None:
        self._clean = self._place

    def mark_changed(self) -> None:
        """The job has no saved form (it was recovered, or its file is gone)."""
        self._clean = None
