"""What differs between the car as found and as planned: the moves, and what they do."""

from __future__ import annotations

from html import escape

from PySide6.QtWidgets import QWidget

from app.document import Document
from app.panels.tell_dialog import TellDialog, table
from geometry.compare import compare, differences, overall


def differences_html(document: Document) -> str:
    """The comparison in words; the document must hold a car as found."""
    job, found = document.job, document.found_solution
    assert job.found is not None and found is not None
    moved = differences(job.found, job.planned)
    if not moved:
        return "<p>As found and as planned are the same car.</p>"
    rows = compare(found, document.solution)
    listed = "".join(f"<li>{escape(line)}</li>" for line in moved)
    figures = table(
        [(row.heading, row.was, row.now, row.verdict) for row in rows],
        ("", "as found", "as planned", ""),
    )
    return (
        f"<p><b>{escape(overall(rows))}</b></p>{figures}"
        f"<p><b>What was moved or changed</b></p><ul>{listed}</ul>"
    )


class DifferencesDialog(TellDialog):
    """The comparison in a window."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__("What differs", differences_html(document), parent)
