"""Sheets measured back from what is written: PDF lines, prints at 300 dpi, and the dialog."""

from __future__ import annotations

import datetime
import math
import re
import shutil
import subprocess
import zlib

import numpy as np
import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QImage
from PySide6.QtWidgets import QFileDialog

from app.document import Document
from app.sheets.dialog import SheetsDialog
from app.sheets.pdf import pdf_bytes, write_pdf
from geometry.layout import LOWER_BALL, UPPER_BALL, UPPER_INNER
from geometry.pages import A4, LETTER, Pages
from geometry.sheets.catalog import SHEETS
from geometry.sheets.options import SheetOptions
from geometry.sheets.pattern_sheet import pattern_sheet
from geometry.sheets.patterns import pattern
from geometry.sheets.tiles import OVERLAP, bar_for, grid_for
from geometry.solution import solve
from tests.sample_cars import ROADSTER, SAMPLES

pytestmark = pytest.mark.usefixtures("qapp")

OPTIONS = SheetOptions(date=datetime.date(2026, 12, 1))
MM_PER_POINT = 25.4 / 72
BAR = {"in": "healthy-roadster", "mm": "strut-hatch"}


def page_strokes(page):
    """Every straight stroke of a page, (start, end) in mm, from the PDF it is written to.

    Follows the operators q, Q, cm, m and l of ISO 32000-1 (from memory).
    """
    pdf = pdf_bytes(Pages((page,)))
    for match in re.finditer(rb"stream\r?\n(.*?)\r?\nendstream", pdf, re.S):
        try:
            text = zlib.decompressobj().decompress(match[1]).decode("latin-1")
        except zlib.error:
            continue
        if re.search(r"^\S+ \S+ \S+ \S+ \S+ \S+ cm", text, re.M):
            return list(_strokes(text))
    raise AssertionError("The PDF holds no drawing.")


def _strokes(text):
    stack, matrix, here, numbers = [], np.eye(3), None, []

    def place(x, y):
        at = np.array([x, y, 1.0]) @ matrix
        return float(at[0]) * MM_PER_POINT, float(at[1]) * MM_PER_POINT

    for token in re.sub(r"<[^<>]*>|\(.*?\)", " ", text).split():
        try:
            numbers.append(float(token))
            continue
        except ValueError:
            pass
        if token == "q":
            stack.append(matrix)
        elif token == "Q":
            matrix = stack.pop()
        elif token == "cm":
            a, b, c, d, e, f = numbers[-6:]
            matrix = np.array([[a, b, 0], [c, d, 0], [e, f, 1]]) @ matrix
        elif token == "m":
            here = place(*numbers[-2:])
        elif token == "l":
            to = place(*numbers[-2:])
            yield here, to
            here = to
        numbers = []


def near(place, other, within=0.2):
    return math.dist(place, other) <= within


@pytest.mark.parametrize("tile", [True, False])
@pytest.mark.parametrize("unit", BAR)
def test_the_bar_in_the_pdf_is_exact(unit, tile):
    pages = pattern_sheet(SAMPLES[BAR[unit]], OPTIONS, "lower arm", tile=tile)
    length, _ = bar_for(unit)
    found = [math.dist(*stroke) for stroke in page_strokes(pages[0])]
    assert min(abs(size - length) for size in found) < 0.05


def test_hole_centers_in_the_pdf_are_as_far_apart_as_in_the_car():
    """One big sheet: the crosses of the nails, measured from the written lines."""
    pages = pattern_sheet(SAMPLES["healthy-roadster"], OPTIONS, "front view", tile=False)
    strokes = page_strokes(pages[0])
    # A cross's level line is 12 mm long and its upright one passes its middle.
    level = [s for s in strokes if abs(math.dist(*s) - 12.0) < 0.02
             and abs(s[0][1] - s[1][1]) < 0.01]
    centers = [((a[0] + b[0]) / 2, a[1]) for a, b in level]
    own = ROADSTER.left
    base = next(
        c for c in centers
        if all(any(near((c[0] + own[n].over - own[LOWER_BALL].over,
                         c[1] + own[n].up - own[LOWER_BALL].up), other) for other in centers)
               for n in (UPPER_INNER, UPPER_BALL))
    )
    across = base[0] - 2 * own[LOWER_BALL].over
    assert any(near((across, base[1]), other) for other in centers)


@pytest.mark.parametrize("paper", [LETTER, A4])
def test_a_line_across_a_joint_is_on_both_sheets_of_the_pdf(paper):
    options = SheetOptions(date=OPTIONS.date, paper=paper)
    pages = pattern_sheet(SAMPLES["healthy-roadster"], options, "front view")
    grid = grid_for(pattern(solve(ROADSTER, span=76.2), "front view"), paper)
    checked = 0
    for index, tile in enumerate(grid.tiles[:-1]):
        other = grid.tiles[index + 1]
        if (other.row, other.column) != (tile.row, tile.column + 1) or checked > 4:
            continue
        first, second = page_strokes(pages[1 + index]), page_strokes(pages[2 + index])
        edge_here = grid.area.right - 0.5 * OVERLAP
        edge_there = grid.area.left + 0.5 * OVERLAP
        here, there = crossings(first, edge_here), crossings(second, edge_there)
        for height in here:
            assert min((abs(height - h) for h in there), default=9.9) < 0.2
        checked += len(here)
    assert checked > 4


def crossings(strokes, x):
    """Heights at which slanted strokes longer than a pen's dash cross an upright line."""
    heights = []
    for (x1, y1), (x2, y2) in strokes:
        if min(x1, x2) < x - 1.0 and max(x1, x2) > x + 1.0 and abs(y1 - y2) > 1e-3:
            heights.append(y1 + (x - x1) / (x2 - x1) * (y2 - y1))
    return heights


@pytest.mark.skipif(shutil.which("pdftoppm") is None, reason="pdftoppm is not installed")
@pytest.mark.parametrize("unit", BAR)
def test_the_bar_measures_right_on_a_print_at_300_dpi(unit, tmp_path):
    pages = pattern_sheet(SAMPLES[BAR[unit]], OPTIONS, "brackets")
    path = tmp_path / "pattern.pdf"
    write_pdf(pages, path)
    subprocess.run(
        ["pdftoppm", "-r", "300", "-f", "1", "-l", "1", "-png", path, tmp_path / "print"],
        check=True,
    )
    (picture,) = tmp_path.glob("print*.png")
    image = QImage(str(picture)).convertToFormat(QImage.Format.Format_Grayscale8)
    rows = np.frombuffer(image.constBits(), np.uint8).reshape(
        image.height(), image.bytesPerLine())[:, : image.width()]
    length, _ = bar_for(unit)
    wanted = length / 25.4 * 300
    runs = [longest_dark_run(row) for row in rows[: image.height() // 2]]
    # From ink to ink, so the hairline's own width counts too; a dot is 0.085 mm.
    best = min((run for run in runs), key=lambda run: abs(run - wanted))
    assert abs(best - wanted) * 25.4 / 300 < 0.2


def longest_dark_run(row):
    """The length in dots of the longest unbroken dark stretch of a row."""
    edges = np.flatnonzero(np.diff(np.concatenate([[0], row < 128, [0]]).astype(int)))
    return int(max(np.diff(edges)[::2], default=0))


def test_every_sheet_becomes_a_pdf_with_all_its_pages():
    for sheet in SHEETS.values():
        pages = sheet.make(SAMPLES["cut-springs"], OPTIONS)
        pdf = pdf_bytes(pages)
        assert len(re.findall(rb"/Type\s*/Page\b", pdf)) == len(pages)


# --- the dialog ---------------------------------------------------------------------------


@pytest.fixture
def make_dialog(qtbot, tmp_path, monkeypatch):
    monkeypatch.setattr("app.settings.put", lambda *_: None)
    monkeypatch.setattr("app.settings.get_text", lambda _key, default="": default)

    def make(name="cut-springs", kind="customer"):
        dialog = SheetsDialog(Document(SAMPLES[name]), None, kind)
        qtbot.addWidget(dialog)
        dialog.show()
        return dialog

    return make


@pytest.mark.parametrize("kind", SHEETS)
def test_the_dialog_shows_each_sheet(make_dialog, kind):
    dialog = make_dialog(kind=kind)
    assert dialog.current_pages() is not None
    assert dialog.place.text() == f"Page 1 of {len(dialog.current_pages())}"
    picture = dialog.preview.grab().toImage()
    colors = {picture.pixelColor(x, y).name() for x in range(0, picture.width(), 7)
              for y in range(0, picture.height(), 7)}
    assert "#ffffff" in colors and len(colors) > 3


def test_only_the_fields_a_sheet_asks_for_are_shown(make_dialog):
    dialog = make_dialog(kind="customer")
    assert dialog.found.isVisible() and not dialog.drop.isVisible()
    assert not dialog.buttons["dxf"].isVisible() and not dialog.buttons["csv"].isVisible()
    dialog.sheet.setCurrentIndex(list(SHEETS).index("pattern"))
    assert dialog.pattern.isVisible() and dialog.buttons["dxf"].isVisible()
    assert not dialog.side.isVisible()
    dialog.sheet.setCurrentIndex(list(SHEETS).index("set-out"))
    assert dialog.buttons["csv"].isVisible()


def test_the_side_is_asked_where_the_sides_differ(make_dialog):
    dialog = make_dialog("unequal-sides", "pattern")
    assert not dialog.side.isVisible()
    dialog.pattern.setCurrentIndex(dialog.pattern.findData("brackets"))
    assert dialog.side.isVisible()
    left = dialog.drawing()
    dialog.side.setCurrentIndex(1)
    assert dialog.drawing() != left


def test_pages_turn_by_key_and_button(make_dialog, qtbot):
    dialog = make_dialog()
    qtbot.keyClick(dialog.preview, Qt.Key.Key_PageDown)
    assert dialog.place.text() == "Page 2 of 2" and not dialog.on.isEnabled()
    qtbot.mouseClick(dialog.back, Qt.MouseButton.LeftButton)
    assert dialog.place.text() == "Page 1 of 2"


def test_what_is_typed_goes_on_the_sheet_and_not_into_the_job(make_dialog):
    dialog = make_dialog()
    dialog.customer.setText("Somebody")
    dialog.shop.setText("")
    said = [getattr(item, "text", "") for item in dialog.current_pages()[0].drawing]
    assert "For Somebody" in said and "Harrow Lane" not in said
    assert dialog._document.job == SAMPLES["cut-springs"]


def test_a_refused_drop_says_so_and_nothing_prints(make_dialog):
    dialog = make_dialog(kind="lowering")
    dialog.drop.field.setText("nonsense")
    assert dialog.current_pages() is None
    assert not dialog.buttons["pdf"].isEnabled()
    dialog.drop.field.setText("1 1/2")
    said = [getattr(item, "text", "") for item in dialog.current_pages()[0].drawing]
    assert any("1 1/2 in down" in text for text in said)


@pytest.mark.parametrize(
    ("kind", "button", "suffix", "start"),
    [("build", "pdf", "pdf", b"%PDF-"), ("set-out", "csv", "csv", b"kind,letter"),
     ("pattern", "dxf", "dxf", b"  0"), ("pattern", "svg", "svg", b"<?xml")],
)
def test_files_are_saved(make_dialog, qtbot, tmp_path, monkeypatch, kind, button, suffix, start):
    target = tmp_path / f"sheet.{suffix}"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *a, **k: (str(target), ""))
    dialog = make_dialog(kind=kind)
    qtbot.mouseClick(dialog.buttons[button], Qt.MouseButton.LeftButton)
    assert target.read_bytes().lstrip(b"\xef\xbb\xbf").startswith(start)
