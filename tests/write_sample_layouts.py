"""Write the sample cars to ``sample_layouts/``: ``python -m tests.write_sample_layouts``."""

from __future__ import annotations

from pathlib import Path

from geometry.layout_file import write_job
from tests.sample_cars import SAMPLES

FOLDER = Path(__file__).parent.parent / "sample_layouts"


def write(folder: Path = FOLDER) -> list[Path]:
    """Write every sample car; returns the files."""
    paths = []
    for name, job in SAMPLES.items():
        path = folder / f"{name}.bobline"
        write_job(path, job)
        paths.append(path)
    return paths


if __name__ == "__main__":
    for written in write():
        print(written.name)
