"""The worst files there are, by name: far too deep, too long, too big, or no files at all.

    python -m tests.fuzz.hard_files FOLDER     # opens each; a line per file says what came of it
"""

from __future__ import annotations

import os
import re
import resource
import sys
import time
from pathlib import Path

from geometry.layout_file import LayoutFileError
from geometry.measure_sheet import MeasureSheetError
from geometry.open_file import open_job
from geometry.text_file import TextFileError
from tests.fuzz.damage import LAYOUT_TEXTS, SHEET_TEXTS
from tests.fuzz.readers import check_refusal

DEEP = 100_000
LAYOUT, SHEET = LAYOUT_TEXTS[0], SHEET_TEXTS[0]
HEAD = '{"format": "bobline layout", "version": 1, "as planned": '


def texts() -> dict[str, bytes]:
    """Hard files that are held in memory, by name."""
    plain = {
        "brackets a hundred thousand deep": "{" + '"a":' + "[" * DEEP,
        "groups a hundred thousand deep": '{"a":' * DEEP,
        "deep inside a layout, and closed": HEAD + "[" * DEEP + "]" * DEEP + "}",
        "a number of a million digits": HEAD + "9" * 1_000_000 + "}",
        "a fraction of a million digits": HEAD + "0." + "3" * 1_000_000 + "}",
        "an exponent of a million digits": HEAD + "1e" + "9" * 1_000_000 + "}",
        "four million zeros in a list": HEAD + "[" + "0," * 3_900_000 + "0]}",
        "a million small groups": HEAD + "[" + '{"a":1},' * 900_000 + "0]}",
        "two million fractions": HEAD + "[" + "1.5," * 1_900_000 + "0]}",
        "one key a million times": HEAD + "{" + '"a":1,' * 1_200_000 + '"b":1}}',
        "a million keys": HEAD + "{" + ",".join(f'"{k}":0' for k in range(600_000)) + "}}",
        "a text of seven megabytes": HEAD + '"' + "x" * 7_000_000 + '"}',
        "halves of letters": LAYOUT.replace("Healthy", "\\ud800\\udfff\\ud800"),
        "every number as large as can be": re.sub(r"(?<=[ \[])[\d.]+(?=[,}\]\n])", "1e308", LAYOUT),
        "a sheet of a million rows": "item,value,over,up,fore\n" + "title,a\n" * 240_000,
        "a sheet of one row": "item,value,over,up,fore\n" + "," * 1_900_000,
        "a sheet of one cell": "item,value,over,up,fore\n" + "9" * 1_900_000,
        "a header of two megabytes": "item" + ",over" * 390_000,
        "quote marks only": "item,value,over,up,fore\n" + '"' * 1_900_000,
        "line ends only": "\r" * 1_900_000,
        "a sheet longer than a sheet may be": SHEET + "#\n" * 1_100_000,
        "nothing": "",
        "spaces only": " " * 1_000_000,
        "a zero byte": LAYOUT + "\x00",
        "neither of the two": "<html>" * 1000,
    }
    out = {name: text.encode("utf-8") for name, text in plain.items()}
    for code in ("utf-16", "utf-16-le", "utf-16-be", "utf-32", "cp037"):
        out[f"a layout in {code}"] = LAYOUT.encode(code)
        out[f"a sheet in {code}"] = SHEET.encode(code)
    out["a sheet in latin-1"] = SHEET.replace("Healthy", "Größe").encode("latin-1")
    out["half a letter at the end"] = SHEET.encode() + "é".encode()[:1]
    out["any bytes"] = bytes(range(256)) * 2000
    return out


def make(folder: Path) -> list[Path]:
    """Every hard file in a folder, those that are none included."""
    made = []
    for name, data in texts().items():
        (folder / name).write_bytes(data)
        made.append(folder / name)
    big = folder / "five hundred megabytes"
    with big.open("wb") as file:
        file.truncate(500_000_000)
    large = folder / "fifty gigabytes of a layout"
    with large.open("wb") as file:
        file.write(HEAD.encode())
        file.truncate(50_000_000_000)
    os.mkfifo(folder / "a pipe that nobody writes to")
    (folder / "a folder").mkdir()
    for name, target in (
        ("a link to zeros without end", "/dev/zero"),
        ("a link to random bytes without end", "/dev/urandom"),
        ("a link to the screen", "/dev/tty"),
        ("a link to a pipe", "a pipe that nobody writes to"),
        ("a link to itself", "a link to itself"),
        ("a link to nothing", "no such file"),
        ("a link to the program's own memory", "/proc/self/mem"),
    ):
        (folder / name).symlink_to(target)
        made.append(folder / name)
    return [*made, big, large, folder / "a pipe that nobody writes to", folder / "a folder"]


def main(folder: Path) -> int:
    """Open every hard file; tell what came of it, with seconds and the most memory so far."""
    bad = 0
    for path in make(folder):
        begun = time.monotonic()
        try:
            open_job(path)
            said = "READ"
            bad += 1
        except (TextFileError, LayoutFileError, MeasureSheetError) as refusal:
            check_refusal(refusal)
            said = refusal.faults[0]
        except OSError as problem:
            said = f"system: {problem.strerror}"
        took = time.monotonic() - begun
        memory = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss // 1024
        print(f"{path.name}: {said[:100]} [{took:.1f} s, {memory} MB]", flush=True)
    return 1 if bad else 0


if __name__ == "__main__":
    sys.exit(main(Path(sys.argv[1])))
