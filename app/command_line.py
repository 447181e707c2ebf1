"""The ``bobline`` command: figures as JSON without a display, or the window.

Qt is imported only for a window. Exit status: 0 done, 2 a bad file, 1 anything else; every
fault is one plain sentence on standard error.
"""

from __future__ import annotations

import argparse
import json
import math
import os
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, NoReturn

from app import __version__

if TYPE_CHECKING:
    from geometry.layout import Job, UnitName

BAD_FILE = 2
FAULT = 1

_NUMBER_OPTIONS = ("--travel", "--rack", "--span")

DESCRIPTION = """\
Lay out a car's front end on a clean floor: see bump steer, camber and roll center as you
move the pivots, and find what would cure them."""

WINDOW_HELP = """\
commands:
  bobline [FILE]                open the window, with a layout (.bobline) or a measure sheet (.csv)
  bobline figures FILE [...]    print every figure as JSON, without a window
                                (bobline figures --help for its options)"""

FIGURES_HELP = """\
examples:
  bobline figures car.bobline --travel -75 0 75 --units mm
  bobline figures sheet.csv --travel -3 0 3 --rack 0 1 --units in

Travel is bump positive and the same at both wheels; the rack moves to the car's left when
positive. Numbers are printed in full; what does not exist is null."""


class UsageError(Exception):
    """The command line itself can't be followed; the message is a plain sentence."""


class _Parser(argparse.ArgumentParser):
    def error(self, message: str) -> NoReturn:
        raise UsageError(f"{message[:1].upper()}{message[1:]}. See {self.prog} --help.")


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command; returns the exit status."""
    words = list(sys.argv[1:] if arguments is None else arguments)
    try:
        if words[:1] == ["figures"]:
            return _print_figures(words[1:])
        return _open_window(words)
    except UsageError as error:
        return _fail([str(error)], FAULT)
    except KeyboardInterrupt:
        return FAULT
    except BrokenPipeError:
        # Whoever read the output has gone; keep Python from saying so at exit.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return FAULT


def _fail(faults: Sequence[str], status: int) -> int:
    for fault in faults:
        print(f"bobline: {fault}", file=sys.stderr)
    return status


# --- the window --------------------------------------------------------------------------


def _open_window(words: list[str]) -> int:
    parser = _Parser(
        prog="bobline",
        description=DESCRIPTION,
        epilog=WINDOW_HELP,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument("file", nargs="?", metavar="FILE", help="a layout or a measure sheet")
    parser.add_argument("--version", action="version", version=f"bobline {__version__}")
    chosen = parser.parse_args(words)

    from app.screen_check import why_no_window

    reason = why_no_window()
    if reason is not None:
        return _fail([reason], FAULT)
    from app.main import run

    return run(chosen.file)


# --- figures -----------------------------------------------------------------------------


def _figures_parser() -> _Parser:
    parser = _Parser(
        prog="bobline figures",
        description="Print every figure of a car as one JSON object on standard output.",
        epilog=FIGURES_HELP,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    parser.add_argument("file", metavar="FILE", help="a layout or a measure sheet")
    parser.add_argument(
        "--travel", metavar="T [T ...]", action="extend", type=_numbers,
        help="wheel travels, bump positive (default 0)",
    )
    parser.add_argument(
        "--rack", metavar="R [R ...]", action="extend", type=_numbers,
        help="rack places, to the car's left positive (default 0)",
    )
    parser.add_argument(
        "--units", choices=("in", "mm"), help="unit of T, R, S and of the output "
        "(default: the file's)",
    )
    parser.add_argument(
        "--span", metavar="S", type=_numbers,
        help="half the travel for toe ranges and the best fit (default 75 mm)",
    )
    return parser


def _numbers(text: str) -> list[float]:
    """Numbers of one option, joined by spaces; argparse's own error for what is none."""
    try:
        values = [float(word) for word in text.split()]
    except ValueError:
        values = []
    if not values or not all(map(math.isfinite, values)):
        raise argparse.ArgumentTypeError(f"needs plain numbers, not '{text}'")
    return values


def _is_number(word: str) -> bool:
    try:
        float(word)
    except ValueError:
        return False
    return True


def joined_numbers(words: Sequence[str]) -> list[str]:
    """The words with each number option and the numbers after it made one word.

    So that a negative number is never taken for an option, nor a file after the numbers
    for one of them.
    """
    out: list[str] = []
    rest = list(words)
    while rest:
        word = rest.pop(0)
        if word == "--":
            return [*out, word, *rest]
        if word in _NUMBER_OPTIONS:
            numbers = []
            while rest and _is_number(rest[0]):
                numbers.append(rest.pop(0))
            if numbers:
                word = f"{word}={' '.join(numbers)}"
        out.append(word)
    return out


def _span(given: list[float] | None) -> float | None:
    if given is None:
        return None
    if len(given) != 1 or given[0] <= 0.0:
        raise UsageError("The span must be one number above zero. See bobline figures --help.")
    return given[0]


def _print_figures(words: list[str]) -> int:
    chosen = _figures_parser().parse_args(joined_numbers(words))
    span = _span(chosen.span)
    units: UnitName | None = chosen.units
    job_or_faults = _read(Path(chosen.file))
    if isinstance(job_or_faults, list):
        return _fail(job_or_faults, BAD_FILE)

    from geometry.figures import figures

    try:
        figured = figures(
            job_or_faults.planned,
            chosen.travel or [0.0],
            chosen.rack or [0.0],
            span,
            units,
            __version__,
        )
        text = json.dumps(figured, indent=1, allow_nan=False)
    except Exception as error:  # noqa: BLE001  one plain sentence, whatever it was
        return _fail([f"The figures could not be worked out: {error}."], FAULT)
    try:
        print(text)
        sys.stdout.flush()
    except BrokenPipeError:
        raise
    except OSError as error:
        return _fail([f"The figures could not be written: {error.strerror or error}."], FAULT)
    return 0


def _read(path: Path) -> Job | list[str]:
    """The job in a file, or all that is wrong with it, a sentence each."""
    from geometry.open_file import open_job

    try:
        return open_job(path)
    except OSError as error:
        return [f"{path}: {error.strerror or error}."]
    except ValueError as error:
        faults: list[str] = list(getattr(error, "faults", None) or [str(error)])
        return [f"{path.name}: {fault}" for fault in faults]
