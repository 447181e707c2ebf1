"""The job card: what the car is called, whose it is, the shop, and notes."""

from __future__ import annotations

from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QLineEdit,
    QPlainTextEdit,
    QWidget,
)

from app.document import Document

_LONGEST = 200


class JobCardDialog(QDialog):
    """Edits the job's paperwork as one undo step; it is printed on the sheets."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Job card")
        self._document = document
        job = document.job
        form = QFormLayout(self)
        form.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.ExpandingFieldsGrow)
        self.title = self._line(form, "&Title", job.planned.title)
        self.customer = self._line(form, "&Customer", job.customer)
        self.shop = self._line(form, "&Shop", job.shop)
        self.notes = QPlainTextEdit(job.notes)
        self.notes.setTabChangesFocus(True)
        form.addRow("&Notes", self.notes)
        buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel
        )
        buttons.accepted.connect(self._take)
        buttons.rejected.connect(self.reject)
        form.addRow(buttons)
        self.resize(60 * self.fontMetrics().averageCharWidth(), self.sizeHint().height())

    def _line(self, form: QFormLayout, label: str, text: str) -> QLineEdit:
        line = QLineEdit(text)
        line.setMaxLength(_LONGEST)
        form.addRow(label, line)
        return line

    def _take(self) -> None:
        self._document.set_job_card(
            self.title.text().strip() or "Untitled",
            self.shop.text().strip(),
            self.customer.text().strip(),
            self.notes.toPlainText().strip(),
        )
        self.accept()
