"""How long one live update takes while a nail is dragged: ``python -m tests.speed.live_update``.

A live update is all that one move of the pointer brings: solve both sides with the whole
travel, centers, the three pivot places, findings, floor, readouts, measure sheet and curves,
and their repaint in a window of 1280x800. Beside it stands the bare repaint of the same views
with nothing changed, in the same run, so that machines can be told apart from code. The time
on the processor is given too: on a busy machine only that and the ratio say something.
"""

from __future__ import annotations

import argparse
import os
import sys
import tempfile
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from time import perf_counter, process_time

import numpy as np

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from PySide6.QtCore import QSettings
from PySide6.QtWidgets import QAbstractScrollArea, QApplication

from app import theme
from app.document import Document
from app.window import MainWindow
from geometry.layout import TIE_INNER, Point
from tests.sample_cars import SAMPLES

SIZE = (1280, 800)
CARS = ("healthy-roadster", "rack-set-low", "unequal-sides")
_WARM = 30


def places(start: Point) -> Iterator[Point]:
    """An endless drag of a nail round its place, a new place every time."""
    step = 0
    while True:
        turn = 0.13 * step
        yield start._replace(
            over=start.over + 9.0 * float(np.sin(turn)) + 0.001 * step,
            up=start.up + 7.0 * float(np.sin(1.7 * turn)),
        )
        step += 1


def window_with(name: str) -> MainWindow:
    """A shown window of 1280x800 with a sample car and all its panels."""
    window = MainWindow(Document(SAMPLES[name]))
    window.guide("")
    window.resize(*SIZE)
    window.show()
    QApplication.processEvents()
    return window


def whole_updates(window: MainWindow, count: int) -> tuple[list[float], list[float]]:
    """Milliseconds of each of ``count`` live updates, by the clock and on the processor."""
    document = window.document
    document.select("left", TIE_INNER)
    out, worked = [], []
    for number, place in enumerate(places(document.layout.left[TIE_INNER])):
        if number == count + _WARM:
            break
        begin, before = perf_counter(), process_time()
        document.preview_point("left", TIE_INNER, place)
        document.settle()
        QApplication.processEvents()
        out.append(1000.0 * (perf_counter() - begin))
        worked.append(1000.0 * (process_time() - before))
    document.cancel_preview()
    document.settle()
    QApplication.processEvents()
    return out[_WARM:], worked[_WARM:]


def bare_repaints(window: MainWindow, count: int) -> tuple[list[float], list[float]]:
    """Milliseconds to paint the floor, the plots and the tables with nothing changed, by the
    clock and on the processor."""
    shown = [v.viewport() for v in window.findChildren(QAbstractScrollArea) if v.isVisible()]
    out, worked = [], []
    for _ in range(count + _WARM):
        begin, before = perf_counter(), process_time()
        for port in shown:
            port.update()
        QApplication.processEvents()
        out.append(1000.0 * (perf_counter() - begin))
        worked.append(1000.0 * (process_time() - before))
    return out[_WARM:], worked[_WARM:]


def by_part(window: MainWindow, count: int) -> dict[str, float]:
    """Median milliseconds of each part of an update, asked for one by one."""
    document = window.document
    parts: dict[str, Callable[[], object]] = {
        "solve": lambda: document.solution,
        "pivots": lambda: document.solution.left.pivots,
        "findings": lambda: document.findings,
        "floor": window.floor.refresh,
        "stance": window.stance_bar.refresh,
        "found list": window.findings_panel.refresh,
        "readouts": window.readouts_panel.refresh,
        "sheet": window.measure_panel.refresh,
        "curves": window.curves.refresh,
        "zones": window.zones.refresh,
        "paint": QApplication.processEvents,
    }
    spent: dict[str, list[float]] = {part: [] for part in parts}
    document.solved.disconnect()
    for number, place in enumerate(places(document.layout.left[TIE_INNER])):
        if number == count + _WARM:
            break
        document.preview_point("left", TIE_INNER, place)
        for part, work in parts.items():
            begin = perf_counter()
            work()
            spent[part].append(1000.0 * (perf_counter() - begin))
    document.cancel_preview()
    return {part: float(np.median(times[_WARM:])) for part, times in spent.items()}


def rows(count: int) -> Iterator[str]:
    """The table's lines."""
    yield (
        f"{'car':<18}{'update, ms':>12}{'p95':>8}{'worked':>8}{'bare repaint':>14}{'p95':>8}"
        f"{'ratio':>8}"
    )
    for name in CARS:
        window = window_with(name)
        (bare, bare_worked), (whole, worked) = (
            bare_repaints(window, count),
            whole_updates(window, count),
        )
        middle, plain = float(np.median(whole)), float(np.median(bare))
        yield (
            f"{name:<18}{middle:>12.2f}{np.percentile(whole, 95):>8.2f}"
            f"{np.median(worked):>8.2f}{plain:>14.2f}"
            f"{np.percentile(bare, 95):>8.2f}{np.median(worked) / np.median(bare_worked):>8.2f}"
        )
        parts = by_part(window, count)
        yield "  " + ", ".join(f"{part} {spent:.2f}" for part, spent in parts.items())
        window.close()


@contextmanager
def dressed_application() -> Iterator[None]:
    """The application as a person starts it, with settings of its own."""
    switch = sys.getswitchinterval()
    sys.setswitchinterval(0.0005)
    with tempfile.TemporaryDirectory() as own:
        # Never the person's own settings and kept work.
        QSettings.setPath(QSettings.Format.IniFormat, QSettings.Scope.UserScope, own)
        os.environ["BOBLINE_DATA"] = str(Path(own) / "data")
        application = QApplication.instance() or QApplication([])
        assert isinstance(application, QApplication)
        theme.dress(application, 100)
        yield
    sys.setswitchinterval(switch)


def main() -> None:
    options = argparse.ArgumentParser(description="Times the live update of a dragged nail.")
    options.add_argument("--count", type=int, default=300, help="updates of each car")
    count = options.parse_args().count
    with dressed_application():
        for row in rows(count):
            print(row, flush=True)


if __name__ == "__main__":
    main()
