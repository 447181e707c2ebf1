"""Speed as ratios to something known in the same run.

    python -m tests.speed.table           # prints the table, some minutes
    python -m tests.speed.table --write   # and puts it into DEVELOPERS.md

Times are the processor's, so that a busy machine changes them little; starts and live
updates are also by the clock, as a person waits by it. Best of several, where not said else.
"""

from __future__ import annotations

import argparse
import datetime
import os
import platform
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path
from time import perf_counter, process_time

import numpy as np
from scipy.optimize import root

from geometry.corner import Corner
from geometry.inner_pivot import held_travel
from geometry.solution import solve
from geometry.zones import rack_zone
from tests.outside.test_constraint_solver import constraints
from tests.sample_cars import ROADSTER

BEGIN, END = "<!-- speed: begin -->", "<!-- speed: end -->"
ROOT = Path(__file__).parents[2]
PAGE = ROOT / "DEVELOPERS.md"
Row = tuple[str, str, str, str]

_BARE_WINDOW = """
import numpy, shapely, pyqtgraph
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication, QMainWindow
application = QApplication([])
window = QMainWindow()
window.resize(1280, 800)
window.show()
QTimer.singleShot(0, application.quit)
application.exec()
"""
_OUR_WINDOW = """
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication
application = QApplication([])
from app import theme
from app.document import Document
from app.main import first_job
from app.window import MainWindow
theme.dress(application, 100)
window = MainWindow(Document(first_job()))
window.resize(1280, 800)
window.show()
QTimer.singleShot(0, application.quit)
application.exec()
"""
_MEMORY = """
import os, sys
from pathlib import Path
# What this program itself had at its most; a child's own account would count its parent's.
lines = Path("/proc/self/status").read_text().splitlines()
peak = next(line.split()[1] for line in lines if line.startswith("VmHWM"))
print(f"peak {peak}", file=sys.stderr, flush=True)
os._exit(0)
"""
_FIGURES = "from app.command_line import main; main(['figures', {path!r}])"


def best(work: Callable[[], object], times: int) -> float:
    """The least processor time, s, of several runs."""
    spent = []
    for _ in range(times):
        begin = process_time()
        work()
        spent.append(process_time() - begin)
    return min(spent)


# --- sweeps ---------------------------------------------------------------------------------


def sweep(least: float, count: int) -> tuple[np.ndarray, np.ndarray]:
    """Travels (n,) up to 75 mm, and the rack going 20 mm each way meanwhile: shifts (3, n), mm."""
    rack = 20.0 * np.sin(np.linspace(0.0, 2.0 * np.pi, count))
    return np.linspace(least, 75.0, count), np.stack([0.0 * rack, rack, 0.0 * rack])


def general_solver(count: int) -> Callable[[], None]:
    """Work that finds so many poses one by one, each from the one before, by SciPy's solver."""
    travels, shifts = sweep(0.0, count)
    # What does not depend on the unknowns is made ready outside the measured time.
    ready = [
        constraints(ROADSTER.left, float(travel), shift)[0]
        for travel, shift in zip(travels, shifts.T, strict=True)
    ]

    def walk() -> None:
        guess = np.zeros(6)
        for gaps in ready:
            guess = root(gaps, guess, tol=1e-12).x
            if not np.abs(gaps(guess)).max() < 1e-7:
                raise ValueError("the general solver lost its way, so there is nothing to compare")

    return walk


def sweep_rows(small: bool) -> Iterator[Row]:
    corner = Corner.of(ROADSTER.left)
    few = 30 if small else 300
    theirs = few / best(general_solver(few), 1 if small else 3)
    costs = {}
    for count in (1_000, 10_000) if small else (1_000, 10_000, 100_000, 1_000_000):
        asked = sweep(-75.0, count)
        costs[count] = best(lambda a=asked: corner.poses(*a), 3 if count > 99_999 else 15) / count
    ours = 1.0 / costs[10_000]
    yield (
        "Poses a second, one core: SciPy's general solver",
        f"{theirs:,.0f} /s", f"{ours:,.0f} /s here", f"{ours / theirs:,.0f} times",
    )
    spread = max(costs.values()) / min(costs.values())
    yield (
        f"Cost of a pose, {min(costs):,} to {max(costs):,} poses in a call: least",
        f"{1e9 * min(costs.values()):.0f} ns", f"{1e9 * max(costs.values()):.0f} ns at most",
        f"{spread:.2f}",
    )


# --- rack zone ------------------------------------------------------------------------------


def zone_rows(small: bool) -> Iterator[Row]:
    steps = (24, 24) if small else (96, 96)
    y, x = np.random.default_rng(1).normal(size=(2, steps[0] * steps[1] * 41))
    state = solve(ROADSTER).left
    motion = held_travel(state.corner, np.linspace(-75.0, 75.0, 41))
    center = state.pivots.place("best fit")

    def zone() -> object:
        return rack_zone(
            state.corner, motion, 0.002, center=center, half_size=(20.0, 5.0), steps=steps
        )

    known, ours = best(lambda: np.arctan2(y, x), 30), best(zone, 30)
    yield (
        f"Full rack zone, {steps[0]} x {steps[1]} places x 41 poses: arctan2 of as many numbers",
        f"{1e3 * known:.1f} ms", f"{1e3 * ours:.1f} ms", f"{ours / known:.2f}",
    )


# --- live update ----------------------------------------------------------------------------


def live_rows(small: bool) -> Iterator[Row]:
    """A nail dragged in the whole window; medians, and the 95th percentile."""
    # Qt is loaded only here, so that the other rows are measured without it.
    from tests.speed import live_update

    count = 20 if small else 300
    with live_update.dressed_application():
        for name in live_update.CARS[:1] if small else live_update.CARS:
            window = live_update.window_with(name)
            bare, bare_worked = live_update.bare_repaints(window, count)
            whole, worked = live_update.whole_updates(window, count)
            window.close()
            for by, known, ours in (
                ("on the processor", bare_worked, worked), ("by the clock", bare, whole)
            ):
                plain, middle = float(np.median(known)), float(np.median(ours))
                yield (
                    f"Live update of a dragged nail, {name}, 1280x800, {by}: bare repaint",
                    f"{plain:.1f} ms",
                    f"{middle:.1f} ms (95 in 100 below {np.percentile(ours, 95):.1f})",
                    f"{middle / plain:.2f}",
                )


# --- starting -------------------------------------------------------------------------------


def started(code: str, times: int) -> tuple[float, float]:
    """Least time by the clock, s, and memory at its most, MB, of a Python that runs ``code``."""
    least, memory = float("inf"), 0.0
    environment = {**os.environ, "QT_QPA_PLATFORM": "offscreen", "PYTHONPATH": str(ROOT)}
    for _ in range(times):
        begin = perf_counter()
        child = subprocess.run(
            [sys.executable, "-c", code + _MEMORY], cwd=ROOT, env=environment, check=True,
            stdout=subprocess.DEVNULL, stderr=subprocess.PIPE, text=True,
        )
        least = min(least, perf_counter() - begin)
        peak = next(line for line in child.stderr.splitlines() if line.startswith("peak "))
        memory = max(memory, float(peak.split()[1]) / 1024.0)
    return least, memory


def start_rows(small: bool) -> Iterator[Row]:
    times = 1 if small else 7
    sheet = str(ROOT / "sample_layouts" / "roadster-measure-sheet.csv")
    for what, known, ours in (
        ("`bobline figures` of a measure sheet: `import numpy`", "import numpy",
         _FIGURES.format(path=sheet)),
        ("The window shown: a bare window with the same libraries", _BARE_WINDOW, _OUR_WINDOW),
    ):
        (theirs, their_memory), (own, own_memory) = started(known, times), started(ours, times)
        yield f"Start. {what}", f"{theirs:.2f} s", f"{own:.2f} s", f"{own / theirs:.2f}"
        yield (
            f"Memory at its most. {what}", f"{their_memory:.0f} MB", f"{own_memory:.0f} MB",
            f"{own_memory / their_memory:.2f}",
        )


# --- the table ------------------------------------------------------------------------------


def rows(small: bool = False) -> Iterator[Row]:
    """The table's rows: what beside what, the known, ours, and the ratio."""
    for part in (sweep_rows, zone_rows, start_rows, live_rows):
        yield from part(small)


def table(lines: list[Row]) -> str:
    head = "| What, beside what is known | Known | Bobline | Ratio |\n|---|---|---|---|"
    return "\n".join([head, *("| " + " | ".join(line) + " |" for line in lines)])


def main(arguments: list[str] | None = None) -> int:
    options = argparse.ArgumentParser(description="Speed as ratios to something known.")
    options.add_argument("--write", action="store_true", help="put the table into DEVELOPERS.md")
    options.add_argument("--small", action="store_true", help="few and small, to see it run")
    asked = options.parse_args(arguments)
    text = table(list(rows(asked.small)))
    today = datetime.date.today().isoformat()
    place = f"{os.cpu_count()} cores, {platform.system()}, Python {platform.python_version()}"
    text = f"Measured on {today}; {place}, NumPy {np.__version__}.\n\n{text}"
    print(text)
    if asked.write:
        page = PAGE.read_text(encoding="utf-8")
        before, rest = page.split(BEGIN)
        after = rest.split(END)[1]
        PAGE.write_text(f"{before}{BEGIN}\n{text}\n{END}{after}", encoding="utf-8")
    return 0


if __name__ == "__main__":
    sys.exit(main())
