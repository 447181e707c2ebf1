"""Measure sheets: what a person types becomes the car, and every bad row is told at once."""

from __future__ import annotations

from dataclasses import replace
from math import radians
from pathlib import Path

import pytest

from geometry.layout import Layout, Point, Rack, RelayRod, Side, Tire
from geometry.lengths import parse_angle
from geometry.measure_sheet import (
    KINDS,
    SIZE_LIMIT,
    MeasureSheetError,
    blank_measure_sheet,
    measure_sheet_from_text,
    measure_sheet_to_text,
    read_measure_sheet,
    starting_sheet,
    write_measure_sheet,
)
from tests.sample_cars import CARS

SHEET = """\
# the coupe on the flat floor
item,value,over,up,fore
title,Coupe,,,
units,in,,,
lower inner pivot,,9 1/4,6 9/16,0
lower ball joint,,24 7/16,6 3/4,1/4

upper inner pivot,,13-1/2,15.375,0
# remark, with, commas
upper ball joint,,584.2 mm,17",-1/2
tie rod inner,,10 11/16,9 5/16,-5 1/8
tie rod outer,,23,10 1/8,−5 1/8
wheel center,,2' 4",12 1/2,0
tire radius,12 1/2,,,
static camber,-0.5,,,
static toe,0.1,,,
wheelbase,112,,,
center of gravity height,20 1/2,,,
"""
COUPE = Layout(
    Side(
        {
            "lower inner pivot": Point(234.95, 166.6875, 0.0),
            "lower ball joint": Point(620.7125, 171.45, 6.35),
            "upper inner pivot": Point(342.9, 390.525, 0.0),
            "upper ball joint": Point(584.2, 431.8, -12.7),
            "tie rod inner": Point(271.4625, 236.5375, -130.175),
            "tie rod outer": Point(584.2, 257.175, -130.175),
            "wheel center": Point(711.2, 317.5, 0.0),
        },
        Tire(317.5),
        parse_angle("-0.5"),
        parse_angle("0.1"),
    ),
    title="Coupe",
    wheelbase=2844.8,
    cg_height=520.7,
)


def read(text: str) -> Layout:
    return measure_sheet_from_text(text).planned


def faults(text: str) -> tuple[str, ...]:
    with pytest.raises(MeasureSheetError) as caught:
        measure_sheet_from_text(text)
    return caught.value.faults


def changed(*pairs: tuple[str, str]) -> str:
    text = SHEET
    for old, new in pairs:
        assert text.count(old) == 1, old
        text = text.replace(old, new)
    return text


def without(*items: str) -> str:
    rows = [row for row in SHEET.splitlines() if row.split(",")[0] not in items]
    return "\n".join(rows)


def test_a_sheet_becomes_the_car_it_says() -> None:
    assert read(SHEET) == COUPE


@pytest.mark.parametrize("separator", [";", "\t"])
def test_other_separators_are_taken(separator: str) -> None:
    rows = [r for r in SHEET.splitlines() if not r.startswith("#")]
    assert read("\n".join(rows).replace(",", separator)) == COUPE


def test_a_decimal_comma_is_taken_between_semicolons() -> None:
    text = "\r\n".join(
        [
            "item;value;over;up;fore",
            "units;mm;;;",
            "lower inner pivot;;234,95;166,688;0",
            "lower ball joint;;620,7;171,45;6,35",
            "upper inner pivot;;342,9;390,525;0",
            "upper ball joint;;584,2;431,8;-12,7",
            "tie rod inner;;271,5;236,5;-130",
            "tie rod outer;;584,2;257,175;-130",
            "wheel center;;711,2;317,5;0",
            "static toe;0,1;;;",
        ]
    )
    car = read(text)
    assert car.left["lower inner pivot"] == (234.95, 166.688, 0.0)
    assert car.left["upper inner pivot"].up == 390.525
    assert car.left.static_toe == parse_angle("0.1")


def test_between_commas_a_quoted_number_that_may_mean_thousands_is_refused() -> None:
    text = changed(("wheelbase,112", 'wheelbase,"2,845 mm"'))
    assert faults(text) == (
        (
            "Line 17: wheelbase, value: Can't tell whether “2,845 mm” means 2.845 or 2845. "
            "Type either."
        ),
    )


@pytest.mark.parametrize("ending", ["\r\n", "\r"])
def test_any_line_ending_is_taken(ending: str) -> None:
    assert read(SHEET.replace("\n", ending)) == COUPE


def test_a_spreadsheets_quotes_and_padding_are_taken() -> None:
    text = changed(
        ("# the coupe on the flat floor", '"# the coupe, on the floor",,,,'),
        ("item,value,over,up,fore", '"Item", "Value","OVER", up ,fore,,'),
        ('584.2 mm,17"', '584.2 mm, "17"""'),
        ("wheel center,,2' 4\"", '"wheel center",,"2\' 4"""'),
        ("wheelbase,112,,,", "wheelbase,112,,,,,"),
    )
    assert read(text) == COUPE
    assert read("sep=,\n" + SHEET) == COUPE


def test_names_may_be_written_with_capitals_and_hyphens() -> None:
    assert read(changed(("tie rod outer", "Tie-Rod  Outer"))) == COUPE


def test_columns_may_stand_in_any_order_and_rows_too() -> None:
    rows = [r.split(",") for r in without("# remark").splitlines() if r and not r.startswith("#")]
    text = "\n".join(",".join([r[4], r[3], r[0], r[2], r[1]]) for r in [rows[0], *rows[:0:-1]])
    assert read(text) == COUPE


def test_the_units_row_may_come_last() -> None:
    text = without("units") + "\nunits,mm,,,\n"
    assert read(text).wheelbase == 112.0
    assert read(text).units == "mm"


def test_two_bushings_may_stand_for_an_arms_pivot() -> None:
    text = changed(
        (
            "lower inner pivot,,9 1/4,6 9/16,0",
            "lower inner pivot front,,9,6,5\nlower inner pivot rear,,9 1/2,7,-5",
        )
    )
    assert read(text).left.arm_pivots("lower") == ((228.6, 152.4, 127.0), (241.3, 177.8, -127.0))


def test_a_strut_may_stand_for_the_upper_arm() -> None:
    text = without("upper inner pivot", "upper ball joint")
    text += "\nstrut top mount,,22,33,-1\nstrut lower mount,,24 1/4,15,-1/4"
    assert read(text).left.is_strut


def test_spring_mounts_and_the_tires_section_may_be_given() -> None:
    text = SHEET + (
        "spring top mount,,15 1/2,17 3/4,0\nspring lower mount,,18 1/4,7 1/8,0\n"
        "tire width,8,,,\nrim diameter,15,,,\nrim width,6 1/2,,,\n"
    )
    side = read(text).left
    assert side["spring top mount"] == (393.7, 450.85, 0.0)
    assert (side.tire.width, side.tire.rim_diameter, side.tire.rim_width) == (203.2, 381.0, 165.1)


def test_a_row_left_blank_was_not_measured() -> None:
    assert read(SHEET + "spring top mount,,,,\ntire width,,,,\n") == COUPE


# --- sides -------------------------------------------------------------------------


def test_one_row_for_one_side_makes_the_sides_uneven() -> None:
    rows = SHEET.splitlines()
    text = "\n".join(f"{r},side" if r.startswith("item") else r for r in rows)
    car = read(text + "\ntie rod inner,,10 1/2,9,-5,right\nstatic toe,0.2,,,,Left")
    assert car.right is not None and not car.linked
    assert car.left == replace(COUPE.left, static_toe=parse_angle("0.2"))
    assert car.right == COUPE.left.moved("tie rod inner", Point(266.7, 228.6, -127.0))


def test_a_side_measured_alone_lacks_the_other() -> None:
    rows = SHEET.splitlines()
    text = "\n".join(f"{r},side" if r.startswith("item") else r for r in rows)
    text = text.replace("wheel center,,2' 4\",12 1/2,0", "wheel center,,2' 4\",12 1/2,0,left")
    assert faults(text) == ("The point “wheel center” is missing on the right.",)


# --- what was left out ---------------------------------------------------------------


def test_the_outer_tie_rods_fore_is_assumed_and_said() -> None:
    car = read(changed(("tie rod outer,,23,10 1/8,−5 1/8", "tie rod outer,,23,10 1/8,")))
    assert car.left["tie rod outer"] == (584.2, 257.175, -127.0)
    (words,) = car.assumed
    assert "outer tie rod" in words and "5 in (127 mm) behind" in words


def test_other_fores_are_taken_as_zero_and_said_in_one_sentence() -> None:
    car = read(
        changed(
            ("9 1/4,6 9/16,0", "9 1/4,6 9/16"),
            ("9 5/16,-5 1/8", "9 5/16,"),
            ("12 1/2,0", "12 1/2,"),
        )
    )
    assert car.left["tie rod inner"].fore == 0.0
    assert car.assumed == (
        (
            "Fore was not measured for lower inner pivot, tie rod inner: taken as 0, "
            "on the axle line."
        ),
    )


def test_single_values_left_out_are_assumed_and_said() -> None:
    car = read(without("tire radius", "static camber", "static toe", "units"))
    assert car.left.tire.radius == car.left["wheel center"].up
    assert (car.left.static_camber, car.left.static_toe) == (0.0, 0.0)
    assert car.assumed == (
        "Units were not given: numbers without a mark were read as inches.",
        "Tire radius was not measured: taken as the height of the wheel center.",
        "Static camber was not measured: taken as 0.",
        "Static toe was not measured: taken as 0.",
    )
    assert read(without("wheelbase")).wheelbase is None
    assert read(without("title")).title == "Untitled"


def test_what_was_assumed_of_one_side_names_it() -> None:
    text = without("static toe").replace("up,fore", "up,fore,side")
    text += "\nstatic toe,0.1,,,,left\ntie rod inner,,10,9,,right"
    assert read(text).assumed == (
        "Static toe was not measured on the right: taken as 0.",
        "Fore was not measured for tie rod inner on the right: taken as 0, on the axle line.",
    )


# --- a relay rod -------------------------------------------------------------------

RELAY = "pitman arm pivot,,12,10 1/4,1/2\npitman arm end,,12,9 5/16,-5\n"


def test_pitman_rows_make_a_relay_rod() -> None:
    idler = "idler arm pivot,,12 1/8,10 1/4,1/2\nidler arm end,,12,9 1/4,-5\n"
    car = read(SHEET + "steering box side,Right,,,\n" + RELAY + idler)
    assert car.steering == RelayRod(
        Point(304.8, 260.35, 12.7),
        Point(304.8, 236.5375, -127.0),
        Point(307.975, 260.35, 12.7),
        Point(304.8, 234.95, -127.0),
        "right",
    )
    assert car.assumed == ()
    assert read(SHEET).steering == Rack()


def test_an_idler_that_was_not_measured_mirrors_the_pitman_arm() -> None:
    car = read(SHEET + RELAY.replace("9 5/16,-5", "9 5/16,"))
    relay = car.steering
    assert isinstance(relay, RelayRod)
    assert (relay.idler_pivot, relay.idler_end) == (relay.pitman_pivot, relay.pitman_end)
    assert relay.box_side == "left"
    assert [words.split(" was")[0] for words in car.assumed] == [
        "The idler arm's pivot", "The idler arm's end", "The steering box's side", "Fore"
    ]


def test_half_a_relay_rod_is_refused() -> None:
    assert faults(SHEET + "idler arm pivot,,12,10,0\n") == (
        "The point “pitman arm pivot” is missing.",
        "The point “pitman arm end” is missing.",
    )
    assert len(faults(SHEET + "steering box side,left,,,\n")) == 2


# --- faults ------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("row", "fault"),
    [
        ("lower bal joint,,1,2,3", 'read item "lower bal joint", expected “lower ball joint”'),
        ("left door,,1,2,3", 'read item "left door", expected one of the names in FILES.md.'),
        ("left door,,,,", 'read item "left door", expected one of the names'),
        (",,1,2,3", "read no item, expected its name."),
        ("title,again,,,", "“title” stands in the sheet twice, first in line 3."),
        ("units,in,,,", "“units” stands in the sheet twice, first in line 4."),
        ("wheelbase,112,,,", "“wheelbase” stands in the sheet twice, first in line 17."),
        ("tie rod inner,,1,2,3", "“tie rod inner” stands in the sheet twice, first in line 11."),
        ("spring top mount,,abc,2,3", "spring top mount, over: Can't read “abc” as a length."),
        ("spring top mount,,9 1/0,2,3", "a fraction can't be over zero."),
        ("spring top mount,,1,nan,3", "spring top mount, up: Can't read “nan” as a length."),
        ("spring top mount,,1,2,1e9", "spring top mount, fore: Can't read “1e9” as a length."),
        ("spring top mount,,1,2,40000", "spring top mount, fore: 40000 is longer than any car."),
        ("spring top mount,,1,,3", "spring top mount, up: read nothing, expected a length."),
        ("spring top mount,,,,3", "spring top mount, over: read nothing, expected a length."),
        ("spring top mount,4,1,2,3", "“spring top mount” is a point: fill over, up and fore"),
        ("tire width,,8,,", "“tire width” is a single value: fill only its value."),
        ("tire width,-8,,,", "read tire width -8, expected a length above zero."),
        ("tire width,0,,,", "read tire width 0, expected a length above zero."),
        ("tire width,wide,,,", "tire width, value: Can't read “wide” as a length."),
        ("spring top mount,,1,2,3,left", 'read "left" in a column that the header does not name'),
        ('spring top mount,,"1,2,3', "expected quote marks around whole cells only."),
        ("steering box side,middle,,,", 'read side "middle", expected left or right.'),
    ],
)
def test_a_bad_row_is_told_with_its_line(row: str, fault: str) -> None:
    line = SHEET.count("\n") + 1
    assert f"Line {line}: " in faults(SHEET + row)[0]
    assert fault in faults(SHEET + row)[0]


@pytest.mark.parametrize(
    ("old", "new", "fault"),
    [
        ("units,in", "units,furlong", 'Line 4: read units "furlong", expected in or mm.'),
        (
            "static camber,-0.5",
            "static camber,46",
            "Line 15: read static camber 46, expected degrees from -45 to 45.",
        ),
        (
            "static toe,0.1",
            "static toe,1/8 in",
            (
                "Line 16: static toe, value: Can't read “1/8 in” as an angle. "
                "It should look like -0.5 or 0°30'."
            ),
        ),
        (
            "title,Coupe",
            "title," + "x" * 201,
            "Line 3: read a title of 201 letters, expected 200 at most.",
        ),
        (
            "item,value,over,up,fore",
            "item,value,over,height,fore",
            (
                'Line 2: read "item,value,over,height,fore", expected the header '
                "item,value,over,up,fore (and side, where the sides differ)."
            ),
        ),
        (
            "item,value,over,up,fore",
            "item,value,over,up,up",
            (
                'Line 2: read "item,value,over,up,up", expected the header '
                "item,value,over,up,fore (and side, where the sides differ)."
            ),
        ),
    ],
)
def test_a_bad_value_is_told_with_its_line(old: str, new: str, fault: str) -> None:
    assert faults(changed((old, new))) == (fault,)


def test_a_bad_side_is_told() -> None:
    text = SHEET.replace("up,fore", "up,fore,side")
    assert faults(text + "tire width,8,,,,driver") == (
        'Line 19: read side "driver", expected left, right or blank.',
    )
    (fault,) = faults(without("wheelbase").replace("up,fore", "up,fore,side")
                      + "\nwheelbase,112,,,,left")
    assert fault.endswith("“wheelbase” belongs to the whole car; leave its side blank.")


def test_all_bad_rows_and_missing_points_are_told_at_once() -> None:
    text = changed(
        ("9 1/4,6 9/16", "9 1/0,6 9/16"),
        ("tie rod inner,", "tie rod iner,"),
        ("static toe,0.1", "static toe,in"),
    )
    assert [words.split(":")[0] for words in faults(text)] == [
        "Line 5", "Line 11", "Line 16", "The point “tie rod inner” is missing."
    ]


def test_missing_points_are_told_by_name() -> None:
    assert faults("item,value,over,up,fore\n") == tuple(
        f"The point “{name}” is missing."
        for name in (
            "lower inner pivot", "lower ball joint", "upper inner pivot", "upper ball joint",
            "tie rod inner", "tie rod outer", "wheel center",
        )
    )
    text = changed(("lower inner pivot,", "lower inner pivot front,"))
    assert faults(text) == ("The point “lower inner pivot rear” is missing.",)


def test_two_kinds_of_one_thing_are_told() -> None:
    assert faults(SHEET + "lower inner pivot front,,9,6,5\n") == (
        "Both “lower inner pivot” and its front or rear bushing are given.",
    )
    text = SHEET + "strut top mount,,22,33,-1\nstrut lower mount,,24,15,0\n"
    assert faults(text) == ("Both a strut and an upper arm are given.",)


def test_a_wheel_center_in_the_floor_gives_no_tire_radius() -> None:
    text = without("tire radius").replace("12 1/2,0", "0,0")
    assert faults(text) == (
        "The wheel center is not above the floor, and no tire radius was given.",
    )


@pytest.mark.parametrize("text", ["", "\n\n", "# only a remark\n", ",,,,\n"])
def test_an_empty_sheet_is_told(text: str) -> None:
    (fault,) = faults(text)
    assert fault.startswith("The sheet is empty.")


def test_a_flood_of_faults_is_cut_short() -> None:
    found = faults("item,value,over,up,fore\n" + "door,1,,,\n" * 1000)
    assert len(found) == 201
    assert found[-1].startswith("And ")
    assert "at most 2000 rows" in "".join(
        faults("item,value,over,up,fore\n" + "tire width,,,,\n" * 2001)
    )


def test_faults_hold_no_control_letters() -> None:
    for row in ("\x1b[2Jdoor,1,,,", "units,\x1b[2J,,,", "tire width,\x1b[2J,,,"):
        assert all(fault.isprintable() for fault in faults(without("units") + "\n" + row))


def test_files_that_can_not_be_read_are_sheet_faults(tmp_path: Path) -> None:
    with pytest.raises(MeasureSheetError, match="folder"):
        read_measure_sheet(tmp_path)
    (tmp_path / "a.csv").write_bytes(b"#" * (SIZE_LIMIT + 1))
    with pytest.raises(MeasureSheetError, match="larger than 2 MB"):
        read_measure_sheet(tmp_path / "a.csv")
    (tmp_path / "a.csv").write_bytes("title,Käfer".encode("cp1252"))
    with pytest.raises(MeasureSheetError, match="not UTF-8"):
        read_measure_sheet(tmp_path / "a.csv")


def test_a_sheet_with_a_byte_order_mark_is_read(tmp_path: Path) -> None:
    (tmp_path / "a.csv").write_text(SHEET, encoding="utf-8-sig")
    assert read_measure_sheet(tmp_path / "a.csv").planned == COUPE


# --- writing -----------------------------------------------------------------------


def in_the_sheet(car: Layout) -> Layout:
    """The car with only what a sheet has a place for."""

    def side(whole: Side) -> Side:
        tire = replace(whole.tire, offset=0.0, size="")
        return Side(whole.points, tire, whole.static_camber, whole.static_toe)

    return Layout(
        left=side(car.left),
        right=None if car.right is None else side(car.right),
        steering=car.steering,
        title=car.title,
        units=car.units,
        wheelbase=car.wheelbase,
        cg_height=car.cg_height,
        assumed=car.assumed,
    )


@pytest.mark.parametrize("units", ["in", "mm"])
@pytest.mark.parametrize("name", CARS)
def test_a_car_comes_back_from_its_sheet_float_for_float(name: str, units: str) -> None:
    car = replace(CARS[name], units="in" if units == "in" else "mm")
    assert read(measure_sheet_to_text(car)) == in_the_sheet(car)


def test_what_was_assumed_is_left_blank_again() -> None:
    text = without("tire radius", "static camber", "static toe").replace("up,fore", "up,fore,side")
    text = text.replace("tie rod outer,,23,10 1/8,−5 1/8", "tie rod outer,,23,10 1/8,")
    text += "\n" + RELAY.replace("9 5/16,-5", "9 5/16,")
    linked = read(text)
    uneven = read(text + "static toe,0.3,,,,left\ntie rod inner,,10,9,,right")
    assert len(linked.assumed) == 8
    assert len(uneven.assumed) == 8
    for car in (linked, uneven):
        assert read(measure_sheet_to_text(car)) == car


def test_a_title_of_several_lines_stays_one_row() -> None:
    car = replace(COUPE, title='Bob\'s, "hot"\ncoupe #1')
    assert read(measure_sheet_to_text(car)).title == 'Bob\'s, "hot" coupe #1'


def test_a_sheet_is_exported_to_a_file(tmp_path: Path) -> None:
    write_measure_sheet(tmp_path / "a.csv", COUPE)
    assert read_measure_sheet(tmp_path / "a.csv").planned == COUPE


@pytest.mark.parametrize("kind", KINDS)
def test_a_sheet_to_start_from_is_a_whole_car(kind: str) -> None:
    car = read(starting_sheet(kind))
    assert car.assumed == ()
    assert car.left.is_strut == (kind == "strut")
    assert isinstance(car.steering, RelayRod) == (kind == "relay rod")
    assert car.left.static_camber == pytest.approx(radians(-0.5))


@pytest.mark.parametrize("kind", KINDS)
def test_a_blank_sheet_lacks_every_needed_point_and_nothing_else(kind: str) -> None:
    text = blank_measure_sheet(kind)
    assert all("is missing" in fault for fault in faults(text))
    filled = [row for row in starting_sheet(kind).splitlines() if not row.startswith("#")]
    blank = [row for row in text.splitlines() if not row.startswith("#")]
    assert [r.split(",")[0] for r in blank] == [r.split(",")[0] for r in filled]


def test_an_unknown_kind_of_sheet_is_refused() -> None:
    with pytest.raises(ValueError, match="A-arm, strut, relay rod"):
        blank_measure_sheet("solid axle")
