"""Outlines from DXF drawings: what counts as a shape, and what a damaged drawing gives."""

from __future__ import annotations

import math
import os
from dataclasses import replace
from pathlib import Path

import ezdxf
import pytest
import shapely

from geometry import outlines
from geometry.layout import LONGEST_NAME, Job, NoGo
from geometry.layout_file import job_from_text, job_to_text
from geometry.outlines import OutlineError, read_outlines
from tests.sample_cars import SAMPLES


@pytest.fixture
def drawing():
    return ezdxf.new("R2010", units=4)


def saved(drawing, folder: Path) -> Path:
    path = folder / "a.dxf"
    drawing.saveas(path)
    return path


def test_round_shapes_are_true_to_a_tenth_of_a_millimeter(drawing, tmp_path):
    model = drawing.modelspace()
    model.add_circle((300, 200), 60, dxfattribs={"layer": "drum"})
    model.add_ellipse((0, 0), (80, 0), 0.5, dxfattribs={"layer": "pan"})
    found = dict(read_outlines(saved(drawing, tmp_path)))
    for name, area, round_it in (("drum", math.pi * 60**2, 60), ("pan", math.pi * 80 * 40, 62)):
        shape = shapely.Polygon(found[name])
        # Corners stand on the curve, and no chord strays by more than a tenth of a millimeter.
        assert 0.0 <= area - shape.area <= 2 * math.pi * round_it * 0.1


def test_loose_lines_and_arcs_that_close_are_one_shape(drawing, tmp_path):
    model = drawing.modelspace()
    layer = {"layer": "mount"}
    model.add_line((0, 0), (100, 0), dxfattribs=layer)
    model.add_line((100, 40), (0, 40), dxfattribs=layer)
    model.add_line((0, 40), (0, 0), dxfattribs=layer)
    model.add_arc((100, 20), 20, -90, 90, dxfattribs=layer)
    model.add_line((500, 0), (600, 0), dxfattribs={"layer": "open"})
    ((name, corners),) = read_outlines(saved(drawing, tmp_path))
    assert name == "mount"
    assert shapely.Polygon(corners).area == pytest.approx(4000 + math.pi * 200, abs=8)


@pytest.mark.parametrize(("code", "mm"), [(1, 25.4), (2, 304.8), (4, 1.0), (5, 10.0), (6, 1000.0)])
def test_every_unit_comes_in_at_true_size(drawing, tmp_path, code, mm):
    drawing.units = code
    drawing.modelspace().add_lwpolyline([(0, 0), (2, 0), (2, 1)], close=True)
    ((_, corners),) = read_outlines(saved(drawing, tmp_path))
    assert shapely.Polygon(corners).area == pytest.approx(mm * mm, rel=1e-9)


def test_a_name_and_corners_that_come_in_can_be_saved(drawing, tmp_path):
    drawing.modelspace().add_lwpolyline(
        [(0, 0), (2, 0), (2, 1)], close=True, dxfattribs={"layer": "x" * 240}
    )
    path = saved(drawing, tmp_path)
    # Half a letter, as a drawing in another encoding may hold it.
    path.write_bytes(path.read_bytes().replace(b"x" * 240, b"\xff\xfe" + b"x" * 238))
    ((name, corners),) = read_outlines(path)
    assert 0 < len(name) <= LONGEST_NAME
    sample = SAMPLES["healthy-roadster"]
    job = Job(replace(sample.planned, no_go=(NoGo(name, corners),)))
    assert job_from_text(job_to_text(job)) == job


def test_shapes_of_no_cars_size_are_left_out(drawing, tmp_path):
    model = drawing.modelspace()
    model.add_circle((0, 0), 1e9)
    model.add_lwpolyline([(0, 0), (1e7, 0), (1e7, 1)], close=True)
    model.add_lwpolyline([(0, 0), (1, 0)], close=True)
    with pytest.raises(OutlineError, match="no closed outline"):
        read_outlines(saved(drawing, tmp_path))
    model.add_circle((0, 0), 9)
    assert len(read_outlines(saved(drawing, tmp_path))) == 1


def test_too_many_corners_or_shapes_are_refused_in_words(drawing, tmp_path):
    model = drawing.modelspace()
    model.add_lwpolyline(
        [(math.cos(k), math.sin(k)) for k in range(outlines.POINT_LIMIT + 1)], close=True
    )
    with pytest.raises(OutlineError, match="too many corners"):
        read_outlines(saved(drawing, tmp_path))
    model.delete_all_entities()
    for k in range(outlines.OUTLINE_LIMIT + 1):
        model.add_lwpolyline([(0, k), (2, k), (2, k + 1)], close=True)
    with pytest.raises(OutlineError, match="more than 200 outlines"):
        read_outlines(saved(drawing, tmp_path))


@pytest.mark.parametrize(
    "text",
    [
        "",
        "nothing",
        "0\nSECTION\n",
        "0\nSECTION\n2\nENTITIES\n0\nCIRCLE\n10\nnan\n40\ninf\n0\nENDSEC\n0\nEOF\n",
        "999999\n1e400\n" * 50,
    ],
)
def test_what_is_no_drawing_is_refused_in_words(tmp_path, text):
    path = tmp_path / "a.dxf"
    path.write_text(text)
    with pytest.raises(OutlineError, match=r"\.$"):
        read_outlines(path)


def test_a_cut_off_number_is_refused_in_words(drawing, tmp_path):
    # Found by the damaged files: an end inside a tag, and a number beyond all integers.
    drawing.modelspace().add_circle((0, 0), 9)
    whole = saved(drawing, tmp_path).read_text()
    for bad in (whole[: whole.index("ENTITIES")], whole.replace("\n 70\n", "\n 70\n1e400\n", 1)):
        (tmp_path / "b.dxf").write_text(bad)
        with pytest.raises(OutlineError, match="can't be read"):
            read_outlines(tmp_path / "b.dxf")


def test_too_large_no_file_and_missing_are_told_apart(tmp_path):
    large = tmp_path / "large.dxf"
    with large.open("wb") as file:
        file.truncate(500_000_000)
    with pytest.raises(OutlineError, match="larger than 5 MB"):
        read_outlines(large)
    with pytest.raises(OutlineError, match="not an ordinary file"):
        read_outlines(tmp_path)
    with pytest.raises(FileNotFoundError):
        read_outlines(tmp_path / "gone.dxf")


@pytest.mark.skipif(os.name != "posix", reason="pipes and devices are POSIX's")
def test_devices_and_pipes_are_not_waited_for(tmp_path):
    os.mkfifo(tmp_path / "pipe.dxf")
    (tmp_path / "zero.dxf").symlink_to("/dev/zero")
    for name in ("pipe.dxf", "zero.dxf"):
        with pytest.raises(OutlineError, match="not an ordinary file"):
            read_outlines(tmp_path / name)


def test_a_stopped_reading_gives_nothing(drawing, tmp_path):
    drawing.modelspace().add_circle((0, 0), 9)
    assert read_outlines(saved(drawing, tmp_path), lambda: True) == []
