"""Opening, saving and exporting: every file dialog and every message about a file."""

from __future__ import annotations

import errno
import re
from pathlib import Path

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QFileDialog,
    QLabel,
    QMessageBox,
    QPlainTextEdit,
    QVBoxLayout,
    QWidget,
)

from app import settings
from app.document import Document
from app.home_file import FileMark
from geometry.drawing import DrawingError
from geometry.layout import Job
from geometry.layout_file import LayoutFileError, write_job
from geometry.open_file import open_job
from geometry.output_file import OutputError, plain_reason

SUFFIX = ".bobline"
LAYOUTS = f"Layouts (*{SUFFIX})"
ALL = f"Layouts and measure sheets (*{SUFFIX} *.json *.csv *.txt);;All files (*)"


def show_faults(parent: QWidget, heading: str, faults: list[str]) -> None:
    """All that is wrong with a file, in a list that can be read and copied."""
    box = QDialog(parent)
    box.setWindowTitle("Bobline")
    column = QVBoxLayout(box)
    title = QLabel(heading)
    title.setWordWrap(True)
    column.addWidget(title)
    text = QPlainTextEdit("\n".join(faults))
    text.setReadOnly(True)
    text.setAccessibleName("What is wrong with the file")
    column.addWidget(text)
    buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
    buttons.rejected.connect(box.reject)
    column.addWidget(buttons)
    box.resize(620, 300)
    box.exec()


def read(path: Path, parent: QWidget) -> Job | None:
    """A job from a layout or a measure sheet; None after telling the person what is wrong."""
    try:
        return open_job(path)
    except OSError as error:
        faults = [sentence(error, reading=True)]
    except ValueError as error:
        faults = list(getattr(error, "faults", None) or [str(error)])
    show_faults(parent, f"“{path.name}” can't be opened. Nothing was changed.", faults)
    return None


def sentence(error: Exception, *, reading: bool = False) -> str:
    """Why the system refused a file, as a sentence."""
    reason = plain_reason(error, reading=reading)
    return f"{reason[:1].upper()}{reason[1:]}."


def ask_open(parent: QWidget) -> Path | None:
    """Which file to open."""
    name, _ = QFileDialog.getOpenFileName(parent, "Open", _folder(), ALL)
    return Path(name) if name else None


def _folder() -> str:
    recent = settings.recent_files()
    known = [path.parent for path in recent if path.parent.is_dir()]
    return str(known[0] if known else Path.home())


def proposed_name(document: Document) -> str:
    """A file name from the car's title, safe on every system."""
    title = re.sub(r'[<>:"/\\|?*\x00-\x1f]+', " ", document.layout.title).strip(" .")
    return (title or "Untitled") + SUFFIX


def save(document: Document, parent: QWidget) -> bool:
    """Save to the document's own file, or ask for one; True if it is safely on disk."""
    path = document.path
    if path is None or path.suffix.lower() != SUFFIX:
        return save_as(document, parent)
    if document.file.changed_outside():
        return _save_over_change(document, path, parent)
    return _write(document, path, parent)


def _save_over_change(document: Document, path: Path, parent: QWidget) -> bool:
    """Another program wrote the file since it was opened: ask before that is lost."""
    buttons = QMessageBox.StandardButton
    box = _question(
        parent,
        f"“{path.name}” was changed by another program since you opened it.",
        "Saving here puts your car in place of what stands in it now.",
    )
    box.setStandardButtons(buttons.Save | buttons.Cancel)
    box.button(buttons.Save).setText("Save &over it")
    other = box.addButton("Save &As…", QMessageBox.ButtonRole.ActionRole)
    box.setDefaultButton(other)
    answer = box.exec()
    if box.clickedButton() is other:
        return save_as(document, parent)
    return answer == buttons.Save and _write(document, path, parent)


def _question(parent: QWidget, text: str, more: str) -> QMessageBox:
    box = QMessageBox(parent)
    box.setIcon(QMessageBox.Icon.Question)
    box.setWindowTitle("Bobline")
    box.setText(text)
    box.setInformativeText(more)
    box.setWindowModality(Qt.WindowModality.WindowModal)
    return box


def ask_open_elsewhere(path: Path, parent: QWidget) -> str:
    """What to do with a file that another window has open: "copy", "open" or "" for nothing."""
    buttons = QMessageBox.StandardButton
    box = _question(
        parent,
        f"“{path.name}” is open in another Bobline window.",
        "Saved from both, the later one takes the place of the other. Open a copy to save "
        "under another name, or open it anyway.",
    )
    box.setStandardButtons(buttons.Open | buttons.Cancel)
    box.button(buttons.Open).setText("Open &anyway")
    copy = box.addButton("Open a &copy", QMessageBox.ButtonRole.ActionRole)
    box.setDefaultButton(copy)
    answer = box.exec()
    if box.clickedButton() is copy:
        return "copy"
    return "open" if answer == buttons.Open else ""


def save_as(document: Document, parent: QWidget) -> bool:
    """Ask for a file and save there."""
    start = document.path.with_suffix(SUFFIX) if document.path else None
    proposed = str(start) if start else str(Path(_folder()) / proposed_name(document))
    name, _ = QFileDialog.getSaveFileName(parent, "Save as", proposed, LAYOUTS)
    if not name:
        return False
    path = Path(name)
    if path.suffix.lower() != SUFFIX:
        path = path.with_name(path.name + SUFFIX)
        if path.exists() and not _overwrite(path, parent):
            return False
    if document.file.is_open_elsewhere(path) and not _over_open(path, parent):
        return False
    return _write(document, path, parent)


def _overwrite(path: Path, parent: QWidget) -> bool:
    """The dialog asked about the name as typed; ask again for the name with its suffix."""
    answer = QMessageBox.question(
        parent, "Bobline", f"“{path.name}” is already there. Put the new one in its place?"
    )
    return answer == QMessageBox.StandardButton.Yes


def _over_open(path: Path, parent: QWidget) -> bool:
    answer = QMessageBox.question(
        parent,
        "Bobline",
        f"“{path.name}” is open in another Bobline window. Put this car in its place anyway?",
        QMessageBox.StandardButton.Yes | QMessageBox.StandardButton.No,
        QMessageBox.StandardButton.No,
    )
    return answer == QMessageBox.StandardButton.Yes


def _write(document: Document, path: Path, parent: QWidget) -> bool:
    document.cancel_preview()
    try:
        if path == document.path and document.file.drive_has_gone():
            raise OSError(errno.ENODEV, "the drive has gone", str(path))
        write_job(path, document.job)
    except OSError as error:
        QMessageBox.warning(
            parent,
            "Bobline",
            f"“{path.name}” was not saved: {plain_reason(error)}.\n\n"
            "What stood in the file before is untouched and your work is still open here. "
            "Mend that, or pick another folder with Save As.",
        )
        return False
    except LayoutFileError as error:
        heading = f"“{path.name}” was not saved; what stood in it before is untouched."
        show_faults(parent, heading, list(error.faults))
        return False
    document.mark_saved(path, FileMark.of(path))
    settings.add_recent(path)
    return True


def may_close(document: Document, parent: QWidget) -> bool:
    """Ask about unsaved work; True if the document may be let go."""
    document.cancel_preview()
    if not document.is_changed:
        return True
    buttons = QMessageBox.StandardButton
    box = _question(
        parent,
        f"Save the changes to “{document.layout.title}”?",
        "Without saving, what you changed since the last save is lost.",
    )
    box.setStandardButtons(buttons.Save | buttons.Discard | buttons.Cancel)
    box.setDefaultButton(buttons.Save)
    answer = box.exec()
    if answer == buttons.Save:
        return save(document, parent)
    return answer == buttons.Discard


def ask_export(parent: QWidget, title: str, name: str, kind: str) -> Path | None:
    """Where an exported file goes; the suffix of ``kind`` is added if it was left off."""
    suffix = "." + re.findall(r"\*\.(\w+)", kind)[0]
    proposed = str(Path(_folder()) / (Path(name).stem + suffix))
    chosen, _ = QFileDialog.getSaveFileName(parent, title, proposed, kind)
    if not chosen:
        return None
    path = Path(chosen)
    if path.suffix.lower() == suffix:
        return path
    path = path.with_name(path.name + suffix)
    # The dialog asked about the name as typed only.
    return path if not path.exists() or _overwrite(path, parent) else None


def tell_not_written(parent: QWidget, path: Path, error: Exception) -> None:
    """A plain message if an export could not be made or written."""
    if isinstance(error, OutputError | DrawingError):
        words = str(error)
    elif isinstance(error, OSError):
        words = sentence(error)
    else:
        words = str(error)
    QMessageBox.warning(parent, "Bobline", f"“{path.name}” was not written. {words}")
