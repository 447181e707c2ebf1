"""Drawings measured back from what the backends write: PDF, DXF, PNG and the printer."""

import math
import re
import subprocess
import sys
import zlib

import pytest
from PySide6.QtCore import QTimer
from PySide6.QtGui import QColor, QFontMetricsF, QImage
from PySide6.QtWidgets import QApplication
from shiboken6 import delete

from app.sheets.page_layout import page_layout
from app.sheets.painter import _font
from app.sheets.pdf import pdf_bytes, write_pdf
from app.sheets.png import drawing_image, page_image, write_png
from app.sheets.printing import new_printer, paint_on_printer, preview_pages
from geometry.drawing import (
    Arc,
    Bounds,
    Circle,
    Drawing,
    DrawingError,
    Line,
    Polygon,
    Polyline,
    Style,
    Text,
    group,
)
from geometry.dxf import dxf_bytes, write_dxf
from geometry.lettering import text_width
from geometry.output_file import OutputError
from geometry.pages import A4, LETTER, Page, Pages, PageSize

pytestmark = pytest.mark.usefixtures("qapp")

MM_PER_POINT = 25.4 / 72


def content_streams(pdf):
    """The decompressed drawing streams of a PDF, in file order."""
    streams = []
    for match in re.finditer(rb"stream\r?\n(.*?)\r?\nendstream", pdf, re.S):
        try:
            text = zlib.decompressobj().decompress(match[1])
        except zlib.error:
            continue
        if re.search(rb"^\S+ \S+ \S+ \S+ \S+ \S+ cm", text, re.M):
            streams.append(text.decode("latin-1"))
    return streams


def strokes(stream):
    """Every straight stroke of a content stream as (start, end) in mm on the page.

    Follows the operators q, Q, cm, m and l of ISO 32000-1 (from memory).
    """
    found, stack, matrix, here, numbers = [], [], (1, 0, 0, 1, 0, 0), None, []

    def place(x, y):
        a, b, c, d, e, f = matrix
        return (a * x + c * y + e) * MM_PER_POINT, (b * x + d * y + f) * MM_PER_POINT

    for token in re.sub(r"<[^<>]*>|\(.*?\)", " ", stream).split():
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
            x_axis, y_axis, origin = matrix[0:2], matrix[2:4], matrix[4:6]
            matrix = tuple(
                x * x_axis[k] + y * y_axis[k] + w * origin[k]
                for x, y, w in ((a, b, 0), (c, d, 0), (e, f, 1))
                for k in (0, 1)
            )
        elif token == "m":
            here = place(*numbers[-2:])
        elif token == "l":
            to = place(*numbers[-2:])
            found.append((here, to))
            here = to
        numbers = []
    return found


def media_boxes(pdf):
    return [
        tuple(float(v) * MM_PER_POINT for v in box.split()[2:])
        for box in re.findall(rb"/MediaBox\s*\[([^\]]*)\]", pdf)
    ]


@pytest.mark.parametrize("size", [A4, LETTER, LETTER.landscape, PageSize("Strip", 300, 900)])
def test_pdf_page_and_lines_are_true_size(size):
    lines = group(Line((0, 0), (100, 0)), Line((0, 0), (0, 100)), Line((0, 0), (60, 80)))
    pdf = pdf_bytes(Pages((Page(size).with_placed(lines, (40, 50)),)))
    # A point is 0.35 mm and Qt rounds a sheet to whole points.
    (box,) = media_boxes(pdf)
    assert box == pytest.approx((size.width, size.height), abs=0.2)
    (stream,) = content_streams(pdf)
    level, plumb, slanted = strokes(stream)
    assert level[0] == pytest.approx((40, 50), abs=0.2)
    for start, end in (level, plumb, slanted):
        assert math.dist(start, end) == pytest.approx(100, abs=0.05)
    assert level[1][1] == pytest.approx(level[0][1], abs=0.001)
    assert plumb[1][1] - plumb[0][1] == pytest.approx(100, abs=0.05)
    assert slanted[1][0] - slanted[0][0] == pytest.approx(60, abs=0.05)


def test_pdf_pages_keep_their_own_sizes_in_order():
    line = group(Line((0, 0), (100, 0)))
    pages = Pages((Page(A4).with_placed(line), Page(LETTER.landscape).with_placed(line)))
    pdf = pdf_bytes(pages)
    expected = [(210, 297), (279.4, 215.9)]
    for box, size in zip(media_boxes(pdf), expected, strict=True):
        assert box == pytest.approx(size, abs=0.2)
    assert len(content_streams(pdf)) == 2


def test_pdf_names_its_title_and_program_and_holds_text_as_text(tmp_path):
    page = Page().with_placed(group(Text((20, 200), "Raise the rack 5/16 in")))
    path = tmp_path / "sheet.pdf"
    write_pdf(Pages((page,), title="Build sheet"), path)
    pdf = path.read_bytes()
    assert pdf.startswith(b"%PDF-")
    assert "Build sheet".encode("utf-16-be") in pdf
    assert "Bobline".encode("utf-16-be") in pdf
    (stream,) = content_streams(pdf)
    # Tj or TJ shows glyphs of a font; outlines would be filled paths without them.
    assert re.search(r"\bT[jJ]\b", stream)
    assert b"/FontFile2" in pdf


def test_pdf_that_cannot_be_written_says_why(tmp_path):
    pages = Pages((Page(),))
    with pytest.raises(OutputError, match="the folder does not exist"):
        write_pdf(pages, tmp_path / "none" / "sheet.pdf")


def test_pdf_renders_as_an_outside_reader_sees_it(tmp_path):
    """A check with poppler's pdftoppm, where it is installed."""
    path = tmp_path / "sheet.pdf"
    bar = Polygon(((0, 0), (100, 0), (100, 10), (0, 10)), style=Style(None, fill="#0000ff"))
    write_pdf(Pages((Page(A4).with_placed(group(bar), (50, 100)),)), path)
    try:
        subprocess.run(["pdftoppm", "-r", "254", "-png", path, tmp_path / "p"], check=True)
    except FileNotFoundError:
        pytest.skip("pdftoppm is not installed")
    (picture,) = tmp_path.glob("p*.png")
    image = QImage(str(picture))
    row = image.height() - 1050
    blue = [
        x
        for x in range(image.width())
        if image.pixelColor(x, row).blueF() > 0.9 > 2 * image.pixelColor(x, row).redF()
    ]
    assert len(blue) == pytest.approx(1000, abs=2)
    assert blue[0] == pytest.approx(500, abs=2)


PARTS = group(
    Line((0, 0), (254, 0), Style(layer="floor")),
    Polyline(((0, 0), (25.4, 50.8)), style=Style("#d55e00", dash=(4, 2), layer="strings")),
    Polygon(
        ((0, 100), (100, 100), (100, 150)),
        (((80, 110), (90, 110), (90, 115)),),
        Style(fill="#cccccc", layer="no-go"),
    ),
    Circle((127, 63.5), 12.7, Style(layer="arms")),
    Arc((50.8, 50.8), 25.4, math.pi / 2, math.pi, Style(layer="arms/upper")),
    Text((25.4, 25.4), "100%%d ^J 9½°", height=2.54, h="center", v="middle", angle=0.5),
)


def read_dxf(path):
    import ezdxf

    document = ezdxf.readfile(path)
    audit = document.audit()
    assert not audit.errors and not audit.fixes
    return document


@pytest.mark.parametrize(("units", "code", "unit"), [("in", 1, 25.4), ("mm", 4, 1.0)])
def test_dxf_reads_back_clean_at_true_size(tmp_path, units, code, unit):
    path = tmp_path / "parts.dxf"
    write_dxf(PARTS, path, units)
    document = read_dxf(path)
    assert document.dxfversion == "AC1024"
    assert document.header["$INSUNITS"] == code
    assert document.header["$MEASUREMENT"] == (0 if units == "in" else 1)
    space = document.modelspace()
    (line,) = space.query("LINE")
    assert line.dxf.end.x == pytest.approx(254 / unit) and line.dxf.layer == "floor"
    (circle,) = space.query("CIRCLE")
    assert tuple(circle.dxf.center)[:2] == pytest.approx((127 / unit, 63.5 / unit))
    assert circle.dxf.radius == pytest.approx(12.7 / unit) and circle.dxf.layer == "arms"
    (arc,) = space.query("ARC")
    assert (arc.dxf.start_angle, arc.dxf.end_angle) == pytest.approx((90, 180))
    assert arc.dxf.layer == "arms-upper"
    assert arc.start_point.y == pytest.approx(76.2 / unit)
    (text,) = space.query("TEXT")
    assert text.plain_text() == "100%%d ^J 9½°"
    assert text.dxf.height == pytest.approx(2.54 / unit)
    assert text.dxf.rotation == pytest.approx(math.degrees(0.5))
    assert tuple(text.get_placement()[1])[:2] == pytest.approx((25.4 / unit, 25.4 / unit))


def test_dxf_holes_fills_colors_and_dashes_survive(tmp_path):
    path = tmp_path / "parts.dxf"
    write_dxf(PARTS, path, "in")
    document = read_dxf(path)
    space = document.modelspace()
    outlines = [p for p in space.query("LWPOLYLINE") if p.dxf.layer == "no-go"]
    assert len(outlines) == 2 and all(p.closed for p in outlines)
    (hatch,) = space.query("HATCH")
    assert hatch.dxf.solid_fill == 1 and len(hatch.paths) == 2
    (string,) = (p for p in space.query("LWPOLYLINE") if p.dxf.layer == "strings")
    assert string.rgb == (0xD5, 0x5E, 0x00)
    pattern = document.linetypes.get(string.dxf.linetype).pattern_tags.tags
    lengths = [tag.value for tag in pattern if tag.code == 49]
    assert lengths == pytest.approx([4 / 25.4, -2 / 25.4])


def test_dxf_of_nothing_is_refused():
    with pytest.raises(DrawingError, match="nothing to draw"):
        dxf_bytes(Drawing())


def test_drawings_import_neither_qt_nor_ezdxf():
    code = (
        "import sys, geometry.svg, geometry.dxf, geometry.pages, geometry.dimensions;"
        "print([m for m in sys.modules if m.split('.')[0] in ('PySide6', 'ezdxf')])"
    )
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert out.stdout.strip() == "[]"


def color_at(image, area, dots, x, y):
    """The color of the picture at a place of the drawing, mm."""
    return image.pixelColor(int((x - area.left) * dots), int((area.top - y) * dots))


SHAPES = Drawing(
    (
        Polygon(
            ((0, 0), (40, 0), (40, 40), (0, 40)),
            (((10, 10), (20, 10), (20, 20), (10, 20)),),
            Style(None, fill="#0000ff"),
        ),
        Circle((60, 10), 8, Style(None, fill="#00ff00")),
        Arc((60, 10), 10, 0, math.pi / 2, Style("#ff0000", 1.0)),
        Line((50, 35), (90, 35), Style("#ff0000", 1.0, dash=(4, 4))),
    ),
    Bounds(0, 0, 100, 40),
)


def test_png_shows_each_shape_where_it_is():
    image = drawing_image(SHAPES, dpi=254, margin=0)
    assert (image.width(), image.height()) == (1000, 400)
    assert image.dotsPerMeterX() == 10000

    def at(x, y):
        return color_at(image, SHAPES.frame, 10, x, y).name()

    assert at(5, 5) == "#0000ff" and at(30, 30) == "#0000ff"
    assert at(15, 15) == "#ffffff"
    assert at(60, 10) == "#00ff00"
    diagonal = 10 * math.sqrt(0.5)
    assert at(60 + diagonal, 10 + diagonal) == "#ff0000"
    assert at(60 - diagonal, 10 + diagonal) == "#ffffff"
    assert at(60 + diagonal, 10 - diagonal) == "#ffffff"
    assert at(52, 35) == "#ff0000" and at(56, 35) == "#ffffff" and at(60, 35) == "#ff0000"
    assert at(95, 20) == "#ffffff"


@pytest.mark.parametrize("angle", [0.0, math.pi / 2, math.pi])
@pytest.mark.parametrize("h", ["left", "center", "right"])
def test_png_text_stays_inside_the_box_its_item_claims(h, angle):
    text = Text((40, 40), "Half g 2", height=4, h=h, v="middle", angle=angle)
    area = Bounds(0, 0, 80, 80)
    image = drawing_image(Drawing((text,), area), dpi=127, margin=0)
    inked = [
        (x / 5, 80 - y / 5)
        for x in range(image.width())
        for y in range(image.height())
        if image.pixelColor(x, y).lightness() < 128
    ]
    ink, box = Bounds.around(inked), text.bounds
    # Letters like f and l stand a little above the capitals.
    assert box.padded(0.5).joined(ink) == box.padded(0.5)
    assert max(ink.width, ink.height) > 0.9 * text.width
    capitals = min(ink.width, ink.height)
    assert capitals == pytest.approx(4 * 1.3, abs=0.6)


def test_page_picture_clips_what_is_placed_in_a_window():
    bar = group(Polygon(((0, 0), (100, 0), (100, 20), (0, 20)), style=Style(None, fill="#ff0000")))
    page = Page(A4).with_placed(bar, (50, 100), clip=Bounds(60, 0, 80, 200))
    image = page_image(page, dpi=127)

    def at(x, y):
        return color_at(image, page.sheet, 5, x, y).name()

    assert at(70, 110) == "#ff0000"
    assert at(55, 110) == "#ffffff" and at(100, 110) == "#ffffff"


def test_png_file_reads_back_and_refuses_what_is_too_large(tmp_path):
    path = tmp_path / "shapes.png"
    write_png(SHAPES, path, dpi=50, background=None)
    back = QImage(str(path))
    assert not back.isNull()
    assert back.pixelColor(0, 0).alpha() == 0
    write_png(Page(A4), path, dpi=25.4)
    assert (QImage(str(path)).width(), QImage(str(path)).height()) == (210, 297)
    with pytest.raises(DrawingError, match="too large"):
        drawing_image(SHAPES, dpi=100_000)


def test_text_room_on_paper_matches_the_font_when_it_is_there():
    font, capital = _font("sans", False)
    if QFontMetricsF(font).horizontalAdvance("M") / 200 != pytest.approx(0.863, abs=0.01):
        pytest.skip("DejaVu Sans is not installed")
    sample = "Inner tie-rod pivot 9 1/16 in"
    measured = QFontMetricsF(font).horizontalAdvance(sample) / capital
    assert text_width(sample, 1.0) == pytest.approx(measured, rel=0.02)


def test_printer_prints_the_chosen_pages_at_true_size(tmp_path):
    pages = Pages(
        tuple(
            Page(LETTER).with_placed(group(Line((0, 0), (length, 0))), (20, 100))
            for length in (50, 100, 150)
        ),
        "Pattern",
    )
    printer = new_printer(pages)
    path = tmp_path / "print.pdf"
    printer.setOutputFormat(printer.OutputFormat.PdfFormat)
    printer.setOutputFileName(str(path))
    printer.setFromTo(2, 3)
    paint_on_printer(printer, pages)
    pdf = path.read_bytes()
    lengths = [math.dist(*strokes(stream)[0]) for stream in content_streams(pdf)]
    assert lengths == pytest.approx([100, 150], abs=0.05)
    assert media_boxes(pdf)[0] == pytest.approx((215.9, 279.4), abs=0.2)


def test_printer_turns_wide_pages_to_its_upright_paper(tmp_path):
    wide = Page(LETTER.landscape).with_placed(group(Line((0, 0), (200, 0))), (20, 30))
    pages = Pages((Page(LETTER).with_placed(group(Line((0, 0), (50, 0))), (20, 30)), wide))
    printer = new_printer(pages)
    path = tmp_path / "print.pdf"
    printer.setOutputFormat(printer.OutputFormat.PdfFormat)
    printer.setOutputFileName(str(path))
    paint_on_printer(printer, pages)
    _, turned = content_streams(path.read_bytes())
    start, end = strokes(turned)[0]
    assert start == pytest.approx((215.9 - 30, 20), abs=0.2)
    assert end == pytest.approx((215.9 - 30, 220), abs=0.2)


def test_printer_refuses_a_mix_of_papers():
    pages = Pages((Page(LETTER), Page(A4)))
    with pytest.raises(OutputError, match="same size of paper"):
        paint_on_printer(new_printer(pages), pages)


@pytest.mark.qt_log_ignore("QPainter::begin")
def test_printer_that_cannot_open_says_so(tmp_path):
    printer = new_printer(Pages((Page(),)))
    printer.setOutputFormat(printer.OutputFormat.PdfFormat)
    printer.setOutputFileName(str(tmp_path / "none" / "print.pdf"))
    with pytest.raises(OutputError, match="could not be opened"):
        paint_on_printer(printer, Pages((Page(),)))


def test_preview_shows_every_page():
    from PySide6.QtPrintSupport import QPrintPreviewWidget

    pages = Pages((Page(LETTER), Page(LETTER), Page(LETTER.landscape)))
    printer = new_printer(pages)
    widget = QPrintPreviewWidget(printer)
    widget.paintRequested.connect(lambda device: paint_on_printer(device, pages))
    widget.updatePreview()
    assert widget.pageCount() == 3
    delete(widget)


def test_preview_dialog_opens_paints_and_closes():
    pages = [Page(LETTER).with_placed(SHAPES, (20, 20))]
    seen = []

    def close_it():
        dialog = QApplication.activeModalWidget()
        seen.append(dialog.windowTitle())
        dialog.reject()

    QTimer.singleShot(200, close_it)
    preview_pages(pages, "Pattern")
    assert seen == ["Print preview: Pattern"]


def test_page_layout_of_a_wide_sheet_lies_on_its_side():
    layout = page_layout(A4.landscape)
    assert layout.orientation() == layout.Orientation.Landscape
    assert layout.pageSize().id() == layout.pageSize().PageSizeId.A4


def test_background_color_is_kept():
    image = drawing_image(SHAPES, dpi=50, background="#d9d5cc")
    assert image.pixelColor(0, 0) == QColor("#d9d5cc")
