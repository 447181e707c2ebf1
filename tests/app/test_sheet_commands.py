"""The Sheets menu: every sheet of every sample can be made, and one is written as a PDF."""

from __future__ import annotations

import pytest
from PySide6.QtWidgets import QFileDialog

from app.document import Document
from app.sheet_commands import SHEETS
from app.window import MainWindow
from tests.sample_cars import SAMPLES


@pytest.fixture
def window(qtbot, tmp_path, monkeypatch):
    monkeypatch.setenv("BOBLINE_DATA", str(tmp_path / "data"))
    window = MainWindow(Document(SAMPLES["cut-springs"]))
    qtbot.addWidget(window)
    return window


@pytest.mark.parametrize("name", SAMPLES)
@pytest.mark.parametrize("sheet", [row[0] for row in SHEETS])
def test_every_sample_has_every_sheet(window, name, sheet):
    window.document.open_job(SAMPLES[name], None)
    pages = window.commands.sheets.pages(sheet)
    assert pages.pages


def test_a_sheet_is_saved_as_pdf(window, tmp_path, monkeypatch):
    target = tmp_path / "for the customer.pdf"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *a, **k: (str(target), ""))
    window.commands.actions["pdf customer"].trigger()
    assert target.read_bytes().startswith(b"%PDF-")
    assert target.stat().st_size > 5_000


@pytest.mark.parametrize(
    ("action", "name", "start"),
    [("pattern dxf", "front.dxf", "  0\nSECTION"), ("pattern svg", "front.svg", "<"),
     ("set-out csv", "list.csv", "")],
)
def test_pattern_and_list_are_saved(window, tmp_path, monkeypatch, action, name, start):
    target = tmp_path / name
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *a, **k: (str(target), ""))
    window.commands.actions[action].trigger()
    text = target.read_text(encoding="utf-8")
    assert text.startswith(start) and len(text) > 300
