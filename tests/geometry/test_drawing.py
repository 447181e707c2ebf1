"""The neutral drawing: its items, moves, boxes, dimensions and pages, and SVG read back."""

import math
from xml.etree import ElementTree as ET

import pytest

from geometry.dimensions import angle_dimension, check_bar, dimension, leader
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
    rectangle,
)
from geometry.lettering import shortened, text_width, wrapped
from geometry.output_file import OutputError, replace_file
from geometry.pages import A4, LETTER, Margins, Page, Pages, PageSize
from geometry.svg import NAMESPACE, svg_text, write_svg


def close(a, b):
    return all(math.isclose(x, y, abs_tol=1e-9) for x, y in zip(a, b, strict=True))


EVERY_ITEM = group(
    Line((0, 0), (100, 0), Style(layer="floor")),
    Polyline(((0, 0), (10, 5), (20, 0)), style=Style(layer="strings", dash=(4, 2))),
    Polygon(
        ((0, 10), (30, 10), (30, 30)),
        (((20, 12), (25, 12), (25, 15)),),
        Style(fill="#cccccc", layer="no-go"),
    ),
    Circle((50, 20), 8, Style(layer="arms")),
    Arc((75, 20), 10, 0, math.pi / 2, Style(layer="arms")),
    Text((5, 50), "9 1/16 & <up>", height=3, angle=0.3, bold=True),
)


def test_drawing_lists_its_layers_in_order_and_picks_one():
    assert EVERY_ITEM.layers == ("floor", "strings", "no-go", "arms", "text")
    arms = EVERY_ITEM.on_layer("arms")
    assert [type(item) for item in arms] == [Circle, Arc]


def test_arc_bounds_hold_the_quarter_points_it_passes_and_no_others():
    assert close(Arc((0, 0), 10, 0, math.pi / 2).bounds, (0, 0, 10, 10))
    half = Arc((1, 2), 10, math.pi / 4, -3 * math.pi / 4).bounds
    edge = 10 * math.sqrt(0.5)
    assert close(half, (1 - 10, 2 - edge, 1 + edge, 2 + 10))
    assert close(Arc((0, 0), 10, 0.3, 0.3).bounds, (-10, -10, 10, 10))


def test_drawing_without_items_has_no_bounds_and_says_so_when_shown():
    assert Drawing().bounds is None
    with pytest.raises(DrawingError, match="nothing to draw"):
        Drawing().shown()
    assert Drawing(frame=Bounds(0, 0, 5, 5)).shown(1) == Bounds(-1, -1, 6, 6)


def test_bounds_of_a_drawing_hold_every_item():
    box = EVERY_ITEM.bounds
    for item in EVERY_ITEM:
        assert box.joined(item.bounds) == box
    assert box.left <= 0 and box.right == 100


def test_translate_scale_and_rotate_move_places_but_keep_paper_sizes():
    line = Line((10, 0), (20, 0), Style(width=0.5, dash=(3, 1)))
    scaled = group(line, Text((10, 0), "a", 2.5)).scaled(2, about=(10, 0))
    assert close(scaled.items[0].end, (30, 0))
    assert scaled.items[0].style == line.style
    assert scaled.items[1].height == 2.5
    turned = group(line, Text((10, 0), "a")).rotated(math.pi / 2, about=(10, 0))
    assert close(turned.items[0].end, (10, 10))
    assert math.isclose(turned.items[1].angle, math.pi / 2)
    assert close(group(line).translated(1, 2).items[0].start, (11, 2))


@pytest.mark.parametrize("item", EVERY_ITEM.items[:5])
def test_mirrored_twice_is_the_same_shape(item):
    twice = group(item).mirrored(33).mirrored(33).items[0]
    assert close(twice.bounds, item.bounds)
    once = group(item).mirrored(0).items[0].bounds
    assert close(once, (-item.bounds.right, item.bounds.bottom, -item.bounds.left, item.bounds.top))


def test_mirrored_arc_still_runs_counterclockwise_over_the_mirrored_ends():
    arc = Arc((10, 0), 5, 0.2, 1.0)
    mirrored = group(arc).mirrored().items[0]
    assert math.isclose(mirrored.sweep, arc.sweep)
    x, y = arc.at(0.2)
    assert close(mirrored.at(mirrored.start + mirrored.sweep), (-x, y))


def test_mirrored_text_reads_forward_and_covers_the_mirrored_room():
    text = Text((10, 5), "Rack", height=3, h="left", angle=0.4)
    mirrored = group(text).mirrored().items[0]
    assert mirrored.text == "Rack" and mirrored.h == "right"
    box = text.bounds
    assert close(mirrored.bounds, (-box.right, box.bottom, -box.left, box.top))


@pytest.mark.parametrize(
    ("v", "low", "high"),
    [("baseline", -0.9, 3), ("top", -3.9, 0), ("middle", -2.4, 1.5), ("bottom", 0, 3.9)],
)
def test_text_anchor_says_which_part_stands_at_the_place(v, low, high):
    box = Text((0, 0), "Hg", 3, "center", v).bounds
    assert close((box.bottom, box.top), (low, high))
    assert math.isclose(box.left, -box.right)


def test_text_drops_control_characters_that_no_file_can_hold():
    assert Text((0, 0), "a\x00b\nc\td\ud800").text == "a b c d\N{REPLACEMENT CHARACTER}"


@pytest.mark.parametrize(
    "make",
    [
        lambda: Line((0, math.nan), (1, 1)),
        lambda: Circle((0, 0), 0),
        lambda: Circle((0, 0), math.inf),
        lambda: Polyline(()),
        lambda: Style(stroke="red"),
        lambda: Style(dash=(1,)),
        lambda: Style(width=0),
        lambda: Text((0, 0), "a", height=0),
        lambda: EVERY_ITEM.scaled(0),
        lambda: Pages(()),
        lambda: Page(PageSize("Card", 20, 20)),
        lambda: dimension((1, 1), (1, 9), "0", along="across"),
    ],
)
def test_what_cannot_be_drawn_is_refused_in_a_sentence(make):
    with pytest.raises(DrawingError, match=r"[A-Z].*\."):
        make()


def test_wrapped_text_keeps_every_word_and_fits():
    words = "Support the car on stands, not a jack, and have the finished work inspected"
    lines = wrapped(words, 40, 2.5)
    assert " ".join(lines) == words and len(lines) > 2
    assert all(text_width(line, 2.5) <= 40 for line in lines)
    assert "".join(wrapped("W" * 60, 40, 2.5)) == "W" * 60
    assert wrapped("one\n\ntwo", 40, 2.5) == ["one", "", "two"]
    assert wrapped("", 40, 2.5) == [""]


def test_shortened_text_fits_and_ends_in_an_ellipsis():
    assert shortened("Rack", 40, 2.5) == "Rack"
    short = shortened("Rack " * 30, 40, 2.5)
    assert short.endswith("…") and text_width(short, 2.5) <= 40


def test_bold_and_taller_text_is_wider():
    assert text_width("Rack", 2.5, bold=True) > text_width("Rack", 2.5)
    assert math.isclose(text_width("Rack", 5), 2 * text_width("Rack", 2.5))


def arrow_tips(drawing):
    return [i.points[0] for i in drawing if isinstance(i, Polyline) and i.style.fill]


def label(drawing):
    (text,) = (i for i in drawing if isinstance(i, Text))
    return text


def test_dimension_stands_off_the_points_with_arrows_at_its_ends():
    drawn = dimension((0, 0), (100, 0), "100 mm", offset=10)
    assert sorted(arrow_tips(drawn)) == [(0, 10), (100, 10)]
    assert label(drawn).at == (50, 11) and label(drawn).angle == 0
    drawn = dimension((0, 0), (30, 40), "30", offset=50, along="across")
    assert sorted(arrow_tips(drawn)) == [(0, 50), (30, 50)]


@pytest.mark.parametrize("degrees", range(-180, 181, 15))
def test_dimension_label_never_stands_on_its_head(degrees):
    end = (80 * math.cos(math.radians(degrees)), 80 * math.sin(math.radians(degrees)))
    drawn = dimension((0, 0), end, "3 1/8")
    assert -math.pi / 2 < label(drawn).angle <= math.pi / 2 + 1e-9
    # Its arrows stand square off the points they measure.
    for tip, point in zip(sorted(arrow_tips(drawn)), sorted([(0.0, 0.0), end]), strict=True):
        assert math.isclose(math.dist(tip, point), 8)


def test_narrow_dimension_puts_arrows_and_label_outside():
    drawn = dimension((0, 0), (3, 0), "1/8 in")
    assert label(drawn).bounds.left > 3
    heads = [i for i in drawn if isinstance(i, Polyline)]
    assert all(head.bounds.left < 0 or head.bounds.right > 3 for head in heads)


@pytest.mark.parametrize("start", [0.0, 1.0, 1.4, 2.5, 4.0, 5.5])
@pytest.mark.parametrize("sweep", [0.05, 0.7, 3.0])
def test_angle_label_keeps_off_its_arc(start, sweep):
    drawn = angle_dimension((5, 5), 20, start, start + sweep, "12.5 deg")
    box = label(drawn).bounds
    nearest = (min(max(5, box.left), box.right), min(max(5, box.bottom), box.top))
    assert math.dist(nearest, (5, 5)) > 20


def test_leader_label_stands_away_from_its_tip():
    assert label(leader((0, 0), (10, 10), "Eye")).bounds.left > 10
    assert label(leader((0, 0), (-10, 10), "Eye")).bounds.right < -10
    assert len(leader((0, 0), (0, 0), "Eye")) == 2


def test_check_bar_is_as_long_as_it_says():
    bar = check_bar((10, 20), 100, "100 mm").items[0]
    assert math.dist(bar.start, bar.end) == 100


def test_page_knows_its_printable_area_and_what_stands_on_it():
    page = Page(A4.landscape, Margins(10, 11, 12, 13)).with_placed(EVERY_ITEM, (40, 50))
    assert page.sheet == Bounds(0, 0, 297, 210)
    assert page.printable == Bounds(10, 11, 285, 197)
    assert close(page.drawing.items[0].start, (40, 50))
    assert page.drawing.shown() == page.sheet
    assert LETTER.landscape.portrait == LETTER


def svg_root(drawing, **more):
    return ET.fromstring(svg_text(drawing, **more))


def find(root, tag):
    return root.findall(f".//{{{NAMESPACE}}}{tag}")


def test_svg_is_true_size_in_millimeters():
    root = svg_root(group(Line((-20, 10), (80, 35))), margin=5)
    assert root.get("width") == "110mm" and root.get("height") == "35mm"
    assert root.get("viewBox") == "0 0 110 35"
    (line,) = find(root, "line")
    # Up in the drawing is up in the picture: the higher end has the smaller y.
    assert [float(line.get(k)) for k in ("x1", "y1", "x2", "y2")] == [5, 30, 105, 5]


def test_svg_keeps_layers_shapes_and_text_as_such():
    root = svg_root(EVERY_ITEM, title="Lower arm & rack", margin=0)
    assert find(root, "title")[0].text == "Lower arm & rack"
    layers = [g.get("data-layer") for g in find(root, "g")]
    assert layers == ["floor", "strings", "no-go", "arms", "text"]
    (text,) = find(root, "text")
    assert text.text == "9 1/16 & <up>"
    assert text.get("font-weight") == "bold" and "DejaVu Sans" in text.get("font-family")
    assert text.get("transform").startswith("rotate(-17.188734 ")
    (circle,) = find(root, "circle")
    assert circle.get("r") == "8"
    assert find(root, "polyline")[0].get("stroke-dasharray") == "4 2"
    assert find(root, "path")[0].get("d").count("M") == 2


def test_svg_arc_passes_its_true_middle():
    root = svg_root(group(Arc((0, 0), 10, 0, math.pi), rectangle(Bounds(-10, 0, 10, 10))), margin=0)
    (path,) = find(root, "path")
    assert path.get("d") == "M 20 10 A 10 10 0 0 0 10 0 A 10 10 0 0 0 0 10"


def test_file_is_replaced_whole_and_leaves_nothing_beside_it(tmp_path):
    path = tmp_path / "arm.svg"
    path.write_text("old")
    path.chmod(0o640)
    write_svg(EVERY_ITEM, path, "Arm")
    assert ET.parse(path).getroot().tag == f"{{{NAMESPACE}}}svg"
    assert path.stat().st_mode & 0o777 == 0o640
    assert [p.name for p in tmp_path.iterdir()] == ["arm.svg"]


def test_file_that_cannot_be_written_says_why(tmp_path):
    with pytest.raises(OutputError, match=r"Could not write a.svg: the folder does not exist\."):
        replace_file(tmp_path / "nowhere" / "a.svg", b"x")
    with pytest.raises(OutputError, match="a folder has that name"):
        replace_file(tmp_path, b"x")
    with pytest.raises(OutputError, match="can't be used"):
        replace_file(str(tmp_path / "a\0b"), b"x")
    assert list(tmp_path.iterdir()) == []
