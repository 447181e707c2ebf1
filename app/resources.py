"""The one place that knows where the package's data lives, and the program's version."""

from __future__ import annotations

from importlib.resources import files
from pathlib import Path

from app import __version__

__all__ = ["__version__", "data_path", "sample_paths"]


def data_path(name: str) -> Path:
    """A data folder or file, such as ``sample_layouts`` or ``icons``.

    An installed program carries its data inside the ``app`` package; from the source tree,
    also when installed as editable, they lie beside it. FileNotFoundError if in neither.
    """
    package = Path(str(files("app")))
    for place in (package / name, package.parent / name):
        if place.exists():
            return place
    raise FileNotFoundError(f"Bobline's own '{name}' is missing; install the program again.")


def sample_paths() -> list[Path]:
    """The sample layouts and measure sheets, in the order of their names."""
    folder = data_path("sample_layouts")
    return sorted(p for p in folder.iterdir() if p.suffix in (".bobline", ".csv"))
