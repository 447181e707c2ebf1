"""No-go outlines from a DXF drawing: every closed shape in it, in mm."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

from geometry.layout import LONGEST_NAME
from geometry.text_file import printable

SIZE_LIMIT = 5_000_000
"""Bytes; a drawing takes about a second a megabyte to read."""
POINT_LIMIT = 2000
OUTLINE_LIMIT = 200
_FARTHEST = 1e6
"""Corners at a kilometer or beyond, mm, are none of a car's."""
_FINENESS = 0.1
_INSUNITS_MM = {0: 1.0, 1: 25.4, 2: 304.8, 4: 1.0, 5: 10.0, 6: 1000.0, 8: 25.4e-6, 9: 25.4e-3,
                10: 914.4, 13: 1e-3, 14: 100.0}

Outline = tuple[str, tuple[tuple[float, float], ...]]


class OutlineError(ValueError):
    """A drawing without usable outlines; the message is a plain sentence."""


def read_outlines(
    path: Path | str, stopped: Callable[[], bool] = lambda: False
) -> list[Outline]:
    """Closed outlines of a DXF file as (layer, corners in mm).

    Polylines, circles, ellipses and closed splines count, and so do chains of lines and arcs
    on one layer that close. Ends early, with nothing, once ``stopped``. Raises OutlineError in
    plain words, or OSError.
    """
    path = Path(path)
    if not path.is_file():
        # Also a missing one is told by its own reason.
        path.stat()
        raise OutlineError("This is not an ordinary file.")
    if path.stat().st_size > SIZE_LIMIT:
        raise OutlineError(
            f"The drawing is larger than {SIZE_LIMIT // 1_000_000} MB; save just the outlines"
            " you need."
        )
    try:
        found = list(_outlines(_opened(path), stopped))
    except OutlineError:
        raise
    except OSError as error:
        if error.errno is not None:
            raise
        raise OutlineError("This is not a DXF drawing.") from None
    except Exception:  # noqa: BLE001 - what a damaged drawing does to its reader has no one kind
        raise OutlineError("This can't be read as a DXF drawing.") from None
    if not found and not stopped():
        raise OutlineError("The drawing holds no closed outline.")
    return found


def _opened(path: Path) -> Any:
    from ezdxf.filemanagement import readfile

    return readfile(str(path))


def _outlines(document: Any, stopped: Callable[[], bool]) -> Iterator[Outline]:
    """Every closed shape of the model, whole entities first, then chains of loose ones."""
    from ezdxf import edgeminer, edgesmith
    from ezdxf import path as dxf_path

    scale = _INSUNITS_MM.get(document.units, 1.0)
    loose: dict[str, list[Any]] = {}
    kept = 0
    for layer, made in _closed(document, dxf_path.make_path, loose, stopped):
        outline = _outline(layer, made, scale)
        if outline is not None:
            kept = _counted(kept)
            yield outline
    for layer, entities in loose.items():
        if stopped():
            return
        edges = list(edgesmith.edges_from_entities_2d(entities))
        if not edges:
            continue
        for loop in edgeminer.find_all_simple_chains(edgeminer.Deposit(edges, gap_tol=1e-3)):
            if edgeminer.is_loop(loop, gap_tol=1e-3):
                outline = _outline(layer, edgesmith.path2d_from_chain(loop), scale)
                if outline is not None:
                    kept = _counted(kept)
                    yield outline


def _closed(
    document: Any,
    make_path: Callable[[Any], Any],
    loose: dict[str, list[Any]],
    stopped: Callable[[], bool],
) -> Iterator[tuple[str, Any]]:
    """Closed entities as (layer, path); open ones go to ``loose`` by their layer."""
    for entity in document.modelspace():
        if stopped():
            return
        try:
            made = make_path(entity)
        except TypeError:
            continue
        if len(made) == 0:
            continue
        if made.is_closed:
            yield entity.dxf.layer, made
        else:
            loose.setdefault(entity.dxf.layer, []).append(entity)


def _counted(kept: int) -> int:
    if kept >= OUTLINE_LIMIT:
        raise OutlineError(
            f"The drawing holds more than {OUTLINE_LIMIT} outlines; save just those you need."
        )
    return kept + 1


def _outline(layer: str, made: Any, scale: float) -> Outline | None:
    """A path as corners within 0.1 mm; None if it is no shape, or none of a car's size."""
    reach = _FARTHEST / scale
    # Looked at before it is cut into corners: a huge circle would give millions of them.
    if not all(abs(v.x) < reach and abs(v.y) < reach for v in made.control_vertices()):
        return None
    corners: list[tuple[float, float]] = []
    for v in made.flattening(_FINENESS / scale):
        corners.append((float(v.x) * scale, float(v.y) * scale))
        if len(corners) > POINT_LIMIT + 1:
            raise OutlineError("An outline has too many corners; simplify it first.")
    if len(corners) > 1 and corners[0] == corners[-1]:
        corners.pop()
    if len(corners) > POINT_LIMIT:
        raise OutlineError("An outline has too many corners; simplify it first.")
    inside = all(abs(v) < _FARTHEST for corner in corners for v in corner)
    if len(corners) < 3 or not inside:
        return None
    # A layer's name may hold what no layout file takes.
    return printable(layer, LONGEST_NAME), tuple(corners)
