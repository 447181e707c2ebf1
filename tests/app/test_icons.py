"""The icons: each one renders, reads on light and dark, and takes the theme's color."""

import configparser
from xml.etree import ElementTree as ET

import pytest
from PySide6.QtCore import QRectF
from PySide6.QtGui import QColor, QImage, QPainter
from PySide6.QtSvg import QSvgRenderer

from app.resources import data_path

pytestmark = pytest.mark.usefixtures("qapp")

FOLDER = data_path("icons")
LINE_ICONS = sorted(path.stem for path in FOLDER.glob("*.svg") if path.stem != "bobline")


def rendered(data, size):
    renderer = QSvgRenderer(data)
    assert renderer.isValid()
    image = QImage(size, size, QImage.Format.Format_ARGB32_Premultiplied)
    image.fill(0)
    painter = QPainter(image)
    renderer.render(painter, QRectF(0, 0, size, size))
    painter.end()
    return image


def inked(image):
    """The pixels that are mostly covered, as (x, y)."""
    return {
        (x, y)
        for x in range(image.width())
        for y in range(image.height())
        if image.pixelColor(x, y).alphaF() > 0.5
    }


def luminance(color):
    """Relative luminance as WCAG 2.1 defines it (from memory)."""
    parts = (color.redF(), color.greenF(), color.blueF())
    r, g, b = (v / 12.92 if v <= 0.04045 else ((v + 0.055) / 1.055) ** 2.4 for v in parts)
    return 0.2126 * r + 0.7152 * g + 0.0722 * b


def contrast(one, other):
    low, high = sorted((luminance(QColor(one)), luminance(QColor(other))))
    return (high + 0.05) / (low + 0.05)


@pytest.mark.parametrize("name", LINE_ICONS)
def test_line_icon_is_drawn_whole_at_every_size(name):
    data = (FOLDER / f"{name}.svg").read_bytes()
    for size in (16, 24, 48):
        assert len(inked(rendered(data, size))) > size
    # With room around it nothing was cut off at the edge: the wide picture shows no more.
    wide = data.replace(b'viewBox="0 0 24 24"', b'viewBox="-4 -4 32 32"')
    outside = [
        (x, y) for x, y in inked(rendered(wide, 128)) if not (16 <= x < 112 and 16 <= y < 112)
    ]
    assert outside == []


@pytest.mark.parametrize("name", LINE_ICONS)
def test_line_icon_takes_the_color_it_is_given(name):
    data = (FOLDER / f"{name}.svg").read_bytes()
    root = ET.fromstring(data)
    assert root.get("stroke") == "currentColor"
    red = rendered(data.replace(root.get("color").encode(), b"#ff0000"), 48)
    colors = {
        red.pixelColor(x, y).name() for x, y in inked(red) if red.pixelColor(x, y).alpha() == 255
    }
    assert colors == {"#ff0000"}


@pytest.mark.parametrize("background", ["#f4f1ea", "#26282b"])
def test_line_icons_own_color_reads_on_light_and_dark(background):
    colors = {ET.parse(FOLDER / f"{n}.svg").getroot().get("color") for n in LINE_ICONS}
    assert len(colors) == 1
    # WCAG 2.1 asks 3:1 of graphics (success criterion 1.4.11, from memory).
    assert contrast(colors.pop(), background) >= 3


def test_no_two_icons_look_alike_at_16_pixels():
    pictures = {n: inked(rendered((FOLDER / f"{n}.svg").read_bytes(), 16)) for n in LINE_ICONS}
    for name, pixels in pictures.items():
        for other, others in pictures.items():
            # The bar that makes a minus a plus: the least by which two icons may differ.
            assert name == other or len(pixels ^ others) >= 4, (name, other)


def test_program_icon_shows_bob_and_chalk_at_16_pixels():
    image = rendered((FOLDER / "bobline.svg").read_bytes(), 16)
    bob, tile, chalk = (image.pixelColor(*at) for at in ((8, 7), (3, 7), (3, 12)))
    assert bob.hue() in range(25, 60) and bob.saturation() > 120
    assert tile.saturation() < 40
    assert chalk.hue() in range(200, 240) and chalk.saturation() > 90


def test_desktop_entry_names_the_program_its_icon_and_its_files():
    entry = configparser.RawConfigParser(strict=True)
    entry.optionxform = str
    entry.read(FOLDER / "bobline.desktop", encoding="utf-8")
    keys = entry["Desktop Entry"]
    assert keys["Type"] == "Application" and keys["Name"] == "Bobline"
    assert keys["Exec"].split() == ["bobline", "%f"]
    assert (FOLDER / f"{keys['Icon']}.svg").exists()
    mime = ET.parse(FOLDER / "bobline-mime.xml").getroot()
    space = "{http://www.freedesktop.org/standards/shared-mime-info}"
    (kind,) = mime.findall(f"{space}mime-type")
    assert keys["MimeType"] == f"{kind.get('type')};"
    assert [g.get("pattern") for g in kind.findall(f"{space}glob")] == ["*.bobline"]
