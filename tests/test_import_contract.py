"""What may import what: the geometry and the model half of the program know no windows."""

from __future__ import annotations

import ast
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
WINDOW_PACKAGES = ("PySide6", "PyQt5", "PyQt6", "pyqtgraph", "shiboken6")
NO_WINDOW = sorted(
    [
        *(ROOT / "geometry").rglob("*.py"),
        *(ROOT / "app" / name for name in ("__init__.py", "__main__.py", "resources.py")),
        ROOT / "app" / "history.py",
    ]
)


def imported(path: Path) -> set[str]:
    """Every module a file imports, wherever in it."""
    names: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom) and node.module:
            names.add(node.module)
    return names


def test_the_scan_sees_a_window_import():
    assert any(name.startswith("PySide6") for name in imported(ROOT / "app" / "main.py"))


@pytest.mark.parametrize("path", NO_WINDOW, ids=lambda p: str(p.relative_to(ROOT)))
def test_no_window_package_is_imported(path: Path):
    found = [n for n in imported(path) if n.split(".")[0] in WINDOW_PACKAGES]
    assert not found


@pytest.mark.parametrize(
    "path", sorted((ROOT / "geometry").rglob("*.py")), ids=lambda p: p.stem
)
def test_geometry_does_not_know_the_program_around_it(path: Path):
    assert not [name for name in imported(path) if name.split(".")[0] in ("app", "tests")]


def loaded_after(code: str) -> set[str]:
    """The top-level packages loaded in a fresh Python after running ``code``."""
    run = subprocess.run(
        [sys.executable, "-c", f"{code}\nimport sys; print(*sys.modules)"],
        cwd=ROOT, capture_output=True, text=True, check=True,
    )
    return {name.split(".")[0] for name in run.stdout.splitlines()[-1].split()}


def test_geometry_loads_without_qt_and_leaves_slow_imports_for_later():
    code = (
        "import pkgutil, importlib, geometry\n"
        "for m in pkgutil.walk_packages(geometry.__path__, 'geometry.'):\n"
        "    importlib.import_module(m.name)"
    )
    loaded = loaded_after(code)
    assert not loaded & set(WINDOW_PACKAGES)
    assert "ezdxf" not in loaded


@pytest.mark.parametrize(
    "words", [["--help"], ["--version"], ["figures", "--help"], ["figures", "no-such-file"]]
)
def test_help_version_and_figures_never_load_qt(words: list[str]):
    code = (
        "from app.command_line import main\n"
        f"try: main({words!r})\nexcept SystemExit: pass"
    )
    assert not loaded_after(code) & set(WINDOW_PACKAGES)


def test_figures_of_a_sample_never_load_qt():
    code = (
        "from app.command_line import main\n"
        "assert main(['figures', 'sample_layouts/healthy-roadster.bobline']) == 0"
    )
    assert not loaded_after(code) & set(WINDOW_PACKAGES)
