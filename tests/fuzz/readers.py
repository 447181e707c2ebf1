"""Bad input never hurts: damaged layouts, measure sheets and drawings, by the hundred thousand.

    python -m tests.fuzz.readers                       # 100,000 inputs for each reader
    python -m tests.fuzz.readers --count 2000 --reader sheet
    python -m tests.fuzz.readers --guided --seconds 120  # coverage-guided; needs atheris

Each reader runs in a process of its own with a gigabyte of memory and a time limit. An
input must give a whole job, which reads back from its own file the same, or a refusal of the
documented kind in plain sentences; anything else is a fault.
"""

from __future__ import annotations

import argparse
import logging
import os
import re
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

from hypothesis import HealthCheck, Phase, given, seed, settings
from hypothesis import strategies as st

from geometry.layout import SIDES, Job, NoGo, needed_points
from geometry.layout_file import LayoutFileError, job_from_text, job_to_text
from geometry.measure_sheet import MeasureSheetError, measure_sheet_from_text
from geometry.open_file import open_job
from geometry.outlines import OutlineError, read_outlines
from geometry.text_file import TextFileError
from tests.fuzz.damage import (
    ENCODINGS,
    JUNK,
    LAYOUT_TEXTS,
    PLACES,
    SHEET_TEXTS,
    WAYS,
    Step,
    damaged,
    encoded,
)
from tests.fuzz.drawings import damaged_drawing
from tests.sample_cars import SAMPLES

SLOW_SECONDS = 5.0
"""More time than one input of at most a megabyte may take."""

MEMORY = 2**30
FAULT_LETTERS = 3000


def check_refusal(error: Any) -> None:
    """A refusal is a handful of plain sentences."""
    faults = error.faults
    assert isinstance(faults, tuple) and faults, repr(error)
    assert len(faults) <= 300
    for fault in faults:
        assert fault.strip() == fault and fault.endswith((".", "?")), repr(fault)
        assert len(fault) <= FAULT_LETTERS, len(fault)
        assert fault.isprintable(), repr(fault)
        fault.encode("utf-8")


def check_sentence(words: str) -> None:
    """A refusal of one sentence or two on one line."""
    assert re.fullmatch(r"[A-Z].{5,200}\.", words), repr(words)


def check_job(job: Job) -> None:
    """A job that was read is whole, and its own file gives the very same job."""
    assert isinstance(job, Job)
    for layout in filter(None, (job.planned, job.found)):
        for side in SIDES:
            assert needed_points(layout.side(side).points) == []
    assert job_from_text(job_to_text(job)) == job


def check(read: Callable[[Any], Job], source: Any, refusals: tuple[type[ValueError], ...]) -> bool:
    """True if ``source`` was read; False if refused. AssertionError if neither, or too slow."""
    # The reader's own time: a busy machine must not look like a slow reader.
    begun = time.process_time()
    try:
        job = read(source)
    except refusals as refusal:
        check_refusal(refusal)
        return False
    finally:
        took = time.process_time() - begun
        assert took < SLOW_SECONDS, f"{took:.1f} s"
    check_job(job)
    return True


def check_layout(text: str) -> bool:
    return check(job_from_text, text, (LayoutFileError,))


def check_sheet(text: str) -> bool:
    return check(measure_sheet_from_text, text, (MeasureSheetError,))


def check_file(data: bytes) -> bool:
    path = Path(tempfile.gettempdir()) / f"bobline-fuzz-{os.getpid()}"
    try:
        path.write_bytes(data)
        return check(open_job, path, (TextFileError, LayoutFileError, MeasureSheetError))
    finally:
        path.unlink(missing_ok=True)


def check_outlines(text: str) -> bool:
    """True if a drawing's outlines were read, all of them shapes a layout file takes."""
    path = Path(tempfile.gettempdir()) / f"bobline-fuzz-{os.getpid()}.dxf"
    # The drawing reader tells a log of each thing it mends.
    logging.disable(logging.CRITICAL)
    begun = time.process_time()
    try:
        path.write_text(text, encoding="utf-8", errors="surrogatepass")
        shapes = tuple(NoGo(name, corners) for name, corners in read_outlines(path))
    except OutlineError as refusal:
        check_sentence(str(refusal))
        return False
    finally:
        path.unlink(missing_ok=True)
        logging.disable(logging.NOTSET)
        took = time.process_time() - begun
        assert took < SLOW_SECONDS, f"{took:.1f} s"
    check_job(Job(replace(SAMPLES["healthy-roadster"].planned, no_go=shapes)))
    return True


# --- by hypothesis ---------------------------------------------------------------------

steps = st.lists(
    st.tuples(
        st.integers(0, len(WAYS) - 1), st.integers(0, PLACES), st.integers(0, len(JUNK) - 1)
    ),
    min_size=1,
    max_size=4,
)
layout_texts = st.builds(damaged, st.sampled_from(LAYOUT_TEXTS), steps)
drawing_texts = st.builds(damaged_drawing, st.integers(0, PLACES), steps)
sheet_texts = st.builds(damaged, st.sampled_from(SHEET_TEXTS), steps)
files = st.builds(
    encoded, st.one_of(layout_texts, sheet_texts), st.integers(0, len(ENCODINGS) - 1)
) | st.binary(max_size=300)

READERS: dict[str, tuple[Callable[[Any], bool], st.SearchStrategy[Any]]] = {
    "layout": (check_layout, layout_texts),
    "sheet": (check_sheet, sheet_texts),
    "file": (check_file, files),
    "outlines": (check_outlines, drawing_texts),
}


def run_reader(name: str, count: int, chosen: int) -> tuple[int, int]:
    """``count`` damaged inputs into one reader; how many were read and how many refused."""
    checked, inputs = READERS[name]
    tally = [0, 0]

    @seed(chosen)
    @settings(
        max_examples=count,
        deadline=None,
        database=None,
        derandomize=False,
        phases=(Phase.generate, Phase.shrink),
        suppress_health_check=list(HealthCheck),
    )
    @given(inputs)
    def hold(source: Any) -> None:
        tally[not checked(source)] += 1

    hold()
    return tally[0], tally[1]


# --- by coverage -------------------------------------------------------------------------


def steered(reader: str, data: bytes) -> Any:
    """A reader's input from a fuzzer's bytes: a seed text and damages, or the bytes plain."""
    kind, rest = (data[0] if data else 0), data[1:]
    if kind % 4 == 3:
        return rest if reader == "file" else rest.decode("utf-8", "surrogateescape")
    if reader == "outlines":
        return damaged_drawing(kind, _steps_of(rest))
    texts = SHEET_TEXTS if reader == "sheet" or (reader == "file" and kind % 2) else LAYOUT_TEXTS
    text = texts[kind // 4 % len(texts)]
    text = damaged(text, _steps_of(rest))
    return encoded(text, rest[-1] if rest else 0) if reader == "file" else text


def _steps_of(data: bytes) -> list[Step]:
    """Damages from a fuzzer's bytes."""
    damages: list[Step] = []
    for at in range(0, min(len(data) - 4, 30), 5):
        piece = data[at : at + 5]
        damages.append((piece[0], int.from_bytes(piece[1:4], "big"), piece[4]))
    return damages


def run_guided(name: str, seconds: int, chosen: int) -> None:
    """Coverage-guided inputs into one reader; ends the process, with 0 only if all held."""
    import atheris

    for module in ("geometry.layout_file", "geometry.records", "geometry.measure_sheet",
                   "geometry.sheet_rows", "geometry.lengths", "geometry.text_file",
                   "geometry.open_file", "geometry.outlines"):  # fmt: skip
        for value in vars(sys.modules[module]).values():
            if callable(value) and getattr(value, "__module__", "") == module:
                _instrument(atheris, value)
    checked = READERS[name][0]

    def one(data: bytes) -> None:
        checked(steered(name, data))

    with tempfile.TemporaryDirectory() as folder:
        arguments = [sys.argv[0], f"-max_total_time={seconds}", f"-seed={chosen}",
                     "-max_len=400", "-timeout=10", f"-artifact_prefix={folder}/"]  # fmt: skip
        atheris.Setup(arguments, one)
        atheris.Fuzz()


def _instrument(atheris: Any, value: Any) -> None:
    """Count the branches of a function, or of every method of a class."""
    members = vars(value).values() if isinstance(value, type) else (value,)
    for member in members:
        if hasattr(member, "__code__"):
            atheris.instrument_func(member)


# --- in a process of its own ------------------------------------------------------------


def _limits(memory: int | None, seconds: float) -> Callable[[], None]:
    def limit() -> None:
        import resource

        if memory is not None:
            resource.setrlimit(resource.RLIMIT_AS, (memory, memory))
        resource.setrlimit(resource.RLIMIT_CPU, (int(seconds) + 1, int(seconds) + 2))
        resource.setrlimit(resource.RLIMIT_CORE, (0, 0))

    return limit


def limited(
    arguments: list[str], seconds: float, memory: int | None = MEMORY
) -> subprocess.CompletedProcess[str]:
    """This Python with ``arguments``, within a memory (bytes) and a time; told if it ran out."""
    # Threads of a numeric library would each ask for memory of their own.
    environment = {**os.environ, "OPENBLAS_NUM_THREADS": "1", "PYTHONHASHSEED": "0"}
    return subprocess.run(
        [sys.executable, *arguments],
        cwd=Path(__file__).parents[2],
        env=environment,
        text=True,
        capture_output=True,
        timeout=seconds,
        check=False,
        preexec_fn=_limits(memory, seconds) if os.name == "posix" else None,
    )


def main(arguments: list[str] | None = None) -> int:
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawTextHelpFormatter
    )
    parser.add_argument("--count", type=int, default=100_000, help="inputs for each reader")
    parser.add_argument("--reader", choices=[*READERS], action="append")
    parser.add_argument("--seed", type=int, default=20240)
    parser.add_argument("--guided", action="store_true", help="coverage-guided, by atheris")
    parser.add_argument("--seconds", type=int, default=60, help="for each reader, guided")
    parser.add_argument("--here", action="store_true", help=argparse.SUPPRESS)
    given_ = parser.parse_args(arguments)
    bad = 0
    for name in given_.reader or READERS:
        if given_.here and given_.guided:
            run_guided(name, given_.seconds, given_.seed)
        elif given_.here:
            read, refused = run_reader(name, given_.count, given_.seed)
            print(f"{name}: {read:,} read, {refused:,} refused, no faults", flush=True)
        else:
            bad += _in_own_process(name, given_)
    return 1 if bad else 0


def _in_own_process(name: str, given_: argparse.Namespace) -> int:
    own = ["-m", "tests.fuzz.readers", "--here", "--reader", name, "--count", str(given_.count),
           "--seed", str(given_.seed), "--seconds", str(given_.seconds)]  # fmt: skip
    if given_.guided:
        # The fuzzer maps more than it uses, so it watches its own memory instead.
        done = limited([*own, "--guided"], given_.seconds + 120, None)
        print(f"{name}: {(done.stderr.strip().splitlines() or ['?'])[-1]}", flush=True)
    else:
        done = limited(own, 60 + 0.1 * given_.count)
        print(done.stdout, end="", flush=True)
    if done.returncode:
        print(f"{name}: FAULT\n{done.stdout[-3000:]}\n{done.stderr[-3000:]}", flush=True)
    return done.returncode != 0


if __name__ == "__main__":
    sys.exit(main())
