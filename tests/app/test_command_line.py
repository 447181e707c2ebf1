"""The bobline command: output, exit statuses and plain sentences."""

from __future__ import annotations

import json
import subprocess
import sys
import types
from pathlib import Path

import pytest

from app import __version__, command_line, screen_check
from app.command_line import main
from app.resources import data_path
from geometry.figures import figures
from tests.sample_cars import ROADSTER, STRUT_CAR

SAMPLE = data_path("sample_layouts") / "healthy-roadster.bobline"
SHEET = data_path("sample_layouts") / "roadster-measure-sheet.csv"
STRUT = data_path("sample_layouts") / "strut-hatch.bobline"
ROOT = Path(__file__).parent.parent.parent


def printed(capsys: pytest.CaptureFixture[str], *words: str) -> dict:
    """The JSON object that ``bobline figures`` prints, and nothing else."""
    assert main(["figures", *words]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    return json.loads(out)


def refused(capsys: pytest.CaptureFixture[str], status: int, *words: str) -> list[str]:
    """The sentences on standard error of a call that fails with ``status``."""
    assert main(list(words)) == status
    out, err = capsys.readouterr()
    assert out == ""
    assert "Traceback" not in err
    lines = err.splitlines()
    assert lines
    assert all(line.startswith("bobline: ") and line.rstrip().endswith(".") for line in lines)
    return lines


def test_defaults_are_one_pose_a_side_in_the_files_unit(capsys):
    got = printed(capsys, str(SAMPLE))
    assert [(p["side"], p["travel"], p["rack"]) for p in got["poses"]] == [
        ("left", 0.0, 0.0), ("right", 0.0, 0.0),
    ]  # fmt: skip
    assert got["units"]["length"] == "in"
    assert got["version"] == __version__
    assert got["tie_rod"][0]["travel_range"] == pytest.approx([-75 / 25.4, 75 / 25.4])
    assert printed(capsys, str(STRUT))["units"]["length"] == "mm"


def test_what_is_printed_is_the_figures_object_in_full_precision(capsys):
    got = printed(capsys, str(SAMPLE), "--travel", "-3", "0", "1.5", "--rack", "-.5", "1",
                  "--span", "2")
    want = figures(ROADSTER, [-3, 0, 1.5], [-0.5, 1], 2.0, None, __version__)
    assert got == json.loads(json.dumps(want))


def test_negative_numbers_are_values_wherever_the_file_stands(capsys):
    words = ["--travel", "-75", "0", "75", "--units", "mm", "--rack", "-1e1", "--span", "50"]
    before = printed(capsys, *words, str(STRUT))
    after = printed(capsys, str(STRUT), *words)
    amid = printed(capsys, *words[:4], str(STRUT), *words[4:])
    assert before == after == amid
    assert [p["travel"] for p in before["poses"]] == [-75.0, 0.0, 75.0] * 2
    assert {p["rack"] for p in before["poses"]} == {-10.0}
    assert before["tie_rod"][0]["travel_range"] == [-50.0, 50.0]


def test_the_equals_form_works_too(capsys):
    got = printed(capsys, str(STRUT), "--travel=-5", "--units=mm", "--travel", "6")
    assert [p["travel"] for p in got["poses"]] == [-5.0, 6.0] * 2


def test_units_are_those_of_the_numbers_given(capsys):
    inch = printed(capsys, str(STRUT), "--units", "in", "--travel", "2")["poses"][0]
    metric = printed(capsys, str(STRUT), "--units", "mm", "--travel", "50.8")["poses"][0]
    assert inch["toe"] == pytest.approx(metric["toe"], abs=1e-12)
    assert inch["half_track"] * 25.4 == pytest.approx(metric["half_track"])


def test_a_measure_sheet_gives_the_same_figures_as_the_layout(capsys):
    sheet = printed(capsys, str(SHEET), "--travel", "-2", "2")
    layout = printed(capsys, str(SAMPLE), "--travel", "-2", "2")
    for one, other in zip(sheet["poses"], layout["poses"], strict=True):
        for key in ("toe", "camber", "half_track", "scrub_radius"):
            assert one[key] == pytest.approx(other[key], abs=1e-9)


def test_what_was_assumed_is_listed(capsys, tmp_path: Path):
    sheet = tmp_path / "short.csv"
    rows = SHEET.read_text(encoding="utf-8").splitlines()
    short = [r.replace("10 1/8,-5 1/8", "10 1/8,").replace("9 5/16,-5 1/8", "9 5/16,")
             for r in rows]
    assert short != rows
    sheet.write_text("\n".join(short), encoding="utf-8")
    assumptions = printed(capsys, str(sheet))["assumptions"]
    assert any("5 in" in line and "tie rod" in line.lower() for line in assumptions)


@pytest.mark.parametrize("value", ["nan", "inf", "-inf", "abc", "1,5", ""])
@pytest.mark.parametrize("option", ["--travel", "--rack", "--span"])
def test_what_is_no_number_is_refused_plainly(capsys, option: str, value: str):
    (line,) = refused(capsys, 1, "figures", str(SAMPLE), option, value)
    assert option in line
    assert "plain numbers" in line


@pytest.mark.parametrize(
    "words",
    [
        ["figures"],
        ["figures", str(SAMPLE), "--travel"],
        ["figures", str(SAMPLE), "--span", "0"],
        ["figures", str(SAMPLE), "--span", "1", "2"],
        ["figures", str(SAMPLE), "--span", "-3"],
        ["figures", str(SAMPLE), "--units", "cm"],
        ["figures", str(SAMPLE), "--color"],
        ["figures", str(SAMPLE), str(SHEET)],
        [str(SAMPLE), str(SHEET)],
        ["--no-such-option"],
    ],
)
def test_a_command_that_cannot_be_followed_leaves_with_1_and_one_sentence(capsys, words):
    assert len(refused(capsys, 1, *words)) == 1


def test_a_missing_file_is_a_bad_file(capsys, tmp_path: Path):
    (line,) = refused(capsys, 2, "figures", str(tmp_path / "gone.csv"))
    assert "gone.csv" in line
    assert len(refused(capsys, 2, "figures", str(tmp_path))) == 1


def test_every_bad_row_gets_its_own_sentence(capsys, tmp_path: Path):
    sheet = tmp_path / "bad.csv"
    text = SHEET.read_text(encoding="utf-8")
    sheet.write_text(text.replace("6 9/16", "6 9/0").replace("12 1/2,,,", "round,,,"), "utf-8")
    lines = refused(capsys, 2, "figures", str(sheet))
    assert len(lines) == 2
    assert all("line" in line.lower() for line in lines)


@pytest.mark.parametrize(
    "content", [b"", b"{", b"\x00\xff\xfe\x01binary", b"hello", b"{}", b"[1, 2]", b"item,value\n"]
)
def test_a_file_that_is_no_car_is_said_in_words(capsys, tmp_path: Path, content: bytes):
    path = tmp_path / "odd"
    path.write_bytes(content)
    refused(capsys, 2, "figures", str(path))


def test_an_unforeseen_fault_is_one_sentence_and_1(capsys, monkeypatch):
    def broken(*args: object) -> None:
        raise ZeroDivisionError("the floor gave way")

    monkeypatch.setattr("geometry.figures.figures", broken)
    (line,) = refused(capsys, 1, "figures", str(SAMPLE))
    assert "the floor gave way" in line


@pytest.mark.parametrize("words", [["--help"], ["figures", "--help"], ["--version"]])
def test_help_and_version_leave_with_0(capsys, words):
    with pytest.raises(SystemExit) as left:
        main(words)
    assert left.value.code == 0
    assert "bobline" in capsys.readouterr().out


def test_as_a_program_the_status_and_streams_are_the_same(tmp_path: Path):
    def run(*words: str) -> subprocess.CompletedProcess[str]:
        return subprocess.run(
            [sys.executable, "-W", "error", "-m", "app", *words],
            cwd=ROOT, capture_output=True, text=True, check=False,
        )

    good = run("figures", str(SAMPLE), "--travel", "-75", "0", "75", "--units", "mm")
    assert (good.returncode, good.stderr) == (0, "")
    assert len(json.loads(good.stdout)["poses"]) == 6
    bad = run("figures", str(tmp_path / "gone"))
    assert (bad.returncode, bad.stdout) == (2, "")
    assert run("figures").returncode == 1
    assert run("--version").stdout == f"bobline {__version__}\n"


@pytest.mark.skipif(sys.platform == "win32", reason="pipes break differently there")
def test_a_reader_that_leaves_early_is_no_trouble():
    travels = [str(t / 10) for t in range(-300, 300)]
    with subprocess.Popen(
        [sys.executable, "-m", "app", "figures", str(SAMPLE), "--units", "mm",
         "--travel", *travels],
        cwd=ROOT, stdout=subprocess.PIPE, stderr=subprocess.PIPE,
    ) as process:
        assert process.stdout is not None
        assert process.stderr is not None
        process.stdout.read(10)
        process.stdout.close()
        assert process.stderr.read() == b""
        assert process.wait(30) == 1


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="no full device here")
def test_a_full_disk_is_said_in_a_sentence():
    with Path("/dev/full").open("w") as full:
        run = subprocess.run(
            [sys.executable, "-m", "app", "figures", str(SAMPLE)],
            cwd=ROOT, stdout=full, stderr=subprocess.PIPE, text=True, check=False,
        )
    assert run.returncode == 1
    assert run.stderr.startswith("bobline: The figures could not be written")
    assert len(run.stderr.splitlines()) == 1


# --- the window's door ---------------------------------------------------------------------


@pytest.mark.parametrize(("words", "path"), [([], None), (["a car.bobline"], "a car.bobline")])
def test_without_figures_the_window_opens_with_the_file(monkeypatch, words, path):
    opened = []
    monkeypatch.setattr(screen_check, "why_no_window", lambda: None)
    window = types.ModuleType("app.main")
    window.run = lambda path: opened.append(path) or 7
    monkeypatch.setitem(sys.modules, "app.main", window)
    assert main(words) == 7
    assert opened == [path]


def test_why_no_window_is_told_calmly(monkeypatch, capsys):
    monkeypatch.setattr(screen_check, "why_no_window", lambda: "There is no screen here.")
    assert main([]) == 1
    assert capsys.readouterr().err == "bobline: There is no screen here.\n"


def test_missing_qt_libraries_are_named_with_their_packages(monkeypatch):
    class Missing:
        def find_spec(self, name: str, path: object = None, target: object = None) -> None:
            if name.startswith("PySide6.Qt"):
                raise ImportError("libEGL.so.1: cannot open shared object file")

    monkeypatch.setattr(sys, "meta_path", [Missing(), *sys.meta_path])
    for name in [n for n in sys.modules if n.startswith("PySide6.Qt")]:
        monkeypatch.delitem(sys.modules, name)
    message = screen_check._no_qt()
    assert message is not None
    assert "libEGL.so.1" in message
    assert "libegl1" in message
    assert "libdbus-1-3" in message


def test_missing_x11_libraries_are_named(monkeypatch):
    monkeypatch.setattr(sys, "platform", "linux")
    monkeypatch.setenv("DISPLAY", ":7")
    monkeypatch.delenv("WAYLAND_DISPLAY", raising=False)
    monkeypatch.delenv("QT_QPA_PLATFORM", raising=False)
    monkeypatch.setattr(screen_check, "_loads", lambda library: "xcb-cursor" not in library)
    message = screen_check.why_no_window()
    assert message is not None
    assert message.endswith("sudo apt install libxcb-cursor0")
    # A Wayland screen that works needs none of them.
    monkeypatch.setenv("WAYLAND_DISPLAY", "wayland-0")
    monkeypatch.setattr(screen_check, "_wayland_answers", lambda: True)
    assert screen_check.why_no_window() is None
    monkeypatch.delenv("DISPLAY")
    monkeypatch.setattr(screen_check, "_loads", lambda library: "wayland-client" not in library)
    message = screen_check.why_no_window()
    assert message is not None and message.endswith("sudo apt install libwayland-client0")


def test_without_a_screen_the_program_says_so(monkeypatch):
    monkeypatch.setattr(sys, "platform", "linux")
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    message = screen_check.why_no_window()
    assert message is not None
    assert "no screen" in message
    assert "bobline figures" in message


def test_numbers_are_joined_only_after_their_options():
    joined = command_line.joined_numbers
    assert joined(["--travel", "-1", "2", "f"]) == ["--travel=-1 2", "f"]
    assert joined(["--travel", "f", "1"]) == ["--travel", "f", "1"]
    assert joined(["--", "--travel", "1"]) == ["--", "--travel", "1"]


def test_the_strut_sample_is_metric():
    assert STRUT_CAR.units == "mm"
