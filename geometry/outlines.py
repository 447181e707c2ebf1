"""No-go outlines from a DXF drawing: every closed shape in it, in mm."""

from __future__ import annotations

from pathlib import Path
from typing import Any

SIZE_LIMIT = 50_000_000
POINT_LIMIT = 2000
_INSUNITS_MM = {0: 1.0, 1: 25.4, 2: 304.8, 4: 1.0, 5: 10.0, 6: 1000.0, 8: 25.4e-6, 9: 25.4e-3,
                10: 914.4, 13: 1e-3, 14: 100.0}


class OutlineError(ValueError):
    """A drawing without usable outlines; the message is a plain sentence."""


def read_outlines(path: Path | str) -> list[tuple[str, tuple[tuple[float, float], ...]]]:
    """Closed outlines of a DXF file as (layer, corners in mm).

    Polylines, circles, ellipses and closed splines count, and so do chains of lines and arcs
    on one layer that close. Raises OutlineError in plain words, or OSError.
    """
    from ezdxf import path as dxf_path
    from ezdxf.filemanagement import readfile
    from ezdxf.lldxf.const import DXFError

    path = Path(path)
    if not path.is_file():
        raise OutlineError("This is not an ordinary file.")
    if path.stat().st_size > SIZE_LIMIT:
        raise OutlineError("The drawing is too large; save just the outlines you need.")
    try:
        document = readfile(str(path))
    except OSError as error:
        if error.errno is not None:
            raise
        raise OutlineError("This is not a DXF drawing.") from None
    except (DXFError, UnicodeDecodeError, ValueError, IndexError, KeyError):
        raise OutlineError("This can't be read as a DXF drawing.") from None
    scale = _INSUNITS_MM.get(document.units, 1.0)
    found: list[tuple[str, tuple[tuple[float, float], ...]]] = []
    loose: dict[str, list[Any]] = {}
    for entity in document.modelspace():
        try:
            made = dxf_path.make_path(entity)
        except TypeError:
            continue
        if len(made) == 0:
            continue
        if made.is_closed:
            _keep(found, entity.dxf.layer, made, scale)
        else:
            loose.setdefault(entity.dxf.layer, []).append(entity)
    for layer, entities in loose.items():
        from ezdxf import edgeminer, edgesmith

        edges = list(edgesmith.edges_from_entities_2d(entities))
        for loop in edgeminer.find_all_simple_chains(edgeminer.Deposit(edges, gap_tol=1e-3)):
            if edgeminer.is_loop(loop, gap_tol=1e-3):
                _keep(found, layer, edgesmith.path2d_from_chain(loop), scale)
    if not found:
        raise OutlineError("The drawing holds no closed outline.")
    return found


def _keep(
    found: list[tuple[str, tuple[tuple[float, float], ...]]],
    layer: str,
    made: Any,
    scale: float,
) -> None:
    """Flatten a path to corners within 0.1 mm and keep it if it is a shape."""
    corners = [
        (float(v.x) * scale, float(v.y) * scale)
        for v in made.flattening(0.1 / scale)
    ]
    if len(corners) > 1 and corners[0] == corners[-1]:
        corners.pop()
    if len(corners) > POINT_LIMIT:
        raise OutlineError("An outline has too many corners; simplify it first.")
    if len(corners) >= 3 and all(abs(v) < 1e6 for corner in corners for v in corner):
        found.append((layer, tuple(corners)))
