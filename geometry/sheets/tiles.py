"""A true-size drawing over many sheets of paper: tiles that join, or one sheet large enough.

Every tile shows its own cell of a grid and a border round it that its neighbors show too.
Sheets are cut at the cell's line, or laid over one another until the crosses fall together.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import pairwise

from geometry.bounds import Bounds, DrawingError, Place
from geometry.dimensions import check_bar
from geometry.drawing import (
    Arc,
    Circle,
    Drawing,
    Item,
    Line,
    Polygon,
    Polyline,
    Style,
    Text,
    group,
    rectangle,
)
from geometry.layout import UnitName
from geometry.lettering import LINE_SPACING, shortened
from geometry.pages import Margins, Page, Pages, PageSize
from geometry.shapes import clipped
from geometry.sheets.flow import Flow, broken
from geometry.sheets.look import BODY, HAIR, INK, SMALL, SOFT, ink
from geometry.sheets.options import Heading

OVERLAP = 12.0
"""How much neighbors share, mm: half of it on each side of the line between them."""
_STRIP = 9.0
"""Room below a tile for its name and its bar, mm."""
MOST_TILES = 200
LARGEST_SHEET = 5000.0
"""mm; a PDF page may be 200 in (5080 mm) long (ISO 32000-1, from memory)."""

_CUT = Style("#6F7479", 0.13, (3.0, 2.0), layer="joints")
_BAR = Style(INK, 0.13, layer="check bar")
"""A hairline, so that it measures the same from ink to ink as from middle to middle."""
_CROSS = Style(INK, 0.2, layer="joints")


def bar_for(units: UnitName) -> tuple[float, str]:
    """The length, mm, of the bar that proves a print, and what it must measure in words."""
    return (152.4, "6 in") if units == "in" else (150.0, "150 mm")


@dataclass(frozen=True)
class Tile:
    """One cell of the grid, in the drawing's mm, and its name ("B3": row from the top, column)."""

    name: str
    row: int
    column: int
    cell: Bounds


@dataclass(frozen=True)
class Grid:
    """How a drawing is cut up: the sheet each tile goes on, and the tiles that show anything."""

    size: PageSize
    rows: int
    columns: int
    tiles: tuple[Tile, ...]

    @property
    def area(self) -> Bounds:
        """Where a tile is inked on its sheet, mm."""
        return tile_area(self.size)

    def at(self, row: int, column: int) -> Tile | None:
        return next((t for t in self.tiles if (t.row, t.column) == (row, column)), None)

    def shift(self, tile: Tile) -> Place:
        """Where the drawing's origin stands on a tile's sheet."""
        half = 0.5 * OVERLAP
        return (
            self.area.left + half - tile.cell.left, self.area.bottom + half - tile.cell.bottom,
        )


def tile_area(size: PageSize) -> Bounds:
    """The part of a sheet that a tile covers, mm: the printable box above its strip of words."""
    box = Page(size).printable
    return Bounds(box.left, box.bottom + _STRIP, box.right, box.top)


def grid_for(drawing: Drawing, paper: PageSize) -> Grid:
    """The grid with the fewest sheets, upright or lying. DrawingError if there are too many."""
    grids = [_grid(drawing, size) for size in (paper.portrait, paper.landscape)]
    best = min(grids, key=lambda grid: len(grid.tiles))
    if len(best.tiles) > MOST_TILES:
        raise DrawingError(
            f"This would take {len(best.tiles)} sheets of {paper.name}. Choose larger paper, one "
            "big sheet, or a smaller part."
        )
    return best


def _grid(drawing: Drawing, size: PageSize) -> Grid:
    area, frame = tile_area(size), drawing.shown()
    wide, high = area.width - OVERLAP, area.height - OVERLAP
    columns = max(1, math.ceil(frame.width / wide - 1e-9))
    rows = max(1, math.ceil(frame.height / high - 1e-9))
    if columns * rows > 20 * MOST_TILES:
        raise DrawingError("This drawing is too large to be cut into sheets of paper.")
    left = frame.center[0] - 0.5 * columns * wide
    top = frame.center[1] + 0.5 * rows * high
    tiles = []
    for row in range(rows):
        for column in range(columns):
            x, y = left + column * wide, top - row * high
            cell = Bounds(x, y - high, x + wide, y)
            if any(crosses(item, cell) for item in drawing):
                tiles.append(Tile(f"{row_name(row)}{column + 1}", row, column, cell))
    if not tiles:
        raise DrawingError("There is nothing to draw.")
    return Grid(size, rows, columns, tuple(tiles))


def row_name(row: int) -> str:
    """A, B, … Z, AA, AB …"""
    name = ""
    row += 1
    while row:
        row, rest = divmod(row - 1, 26)
        name = chr(ord("A") + rest) + name
    return name


def crosses(item: Item, box: Bounds) -> bool:
    """True if an item inks anything in a box; a fill alone does not count."""
    around = item.bounds
    if not (around.left <= box.right and box.left <= around.right
            and around.bottom <= box.top and box.bottom <= around.top):
        return False
    if isinstance(item, Text):
        return True
    if item.style.stroke is None:
        return False
    if isinstance(item, Circle | Arc):
        return True
    if isinstance(item, Line):
        return clipped(item.start, item.end, box) is not None
    return any(clipped(a, b, box) is not None for a, b in _sides(item))


def _sides(item: Polyline | Polygon) -> Iterator[tuple[Place, Place]]:
    rings = item.rings if isinstance(item, Polygon) else (item.points,)
    for ring in rings:
        yield from pairwise(ring)
        if isinstance(item, Polygon) or item.closed:
            yield ring[-1], ring[0]


# --- pages ------------------------------------------------------------------------------


def tiled(
    drawing: Drawing, heading: Heading, paper: PageSize, units: UnitName,
    cautions: Sequence[str] = (),
) -> Pages:
    """A guide sheet with the bar and a map, then every tile at true size."""
    grid = grid_for(drawing, paper)
    flow = Flow(heading, paper.portrait, "Print at 100 %; measure the bar first.")
    _guide(flow, drawing, grid, units, cautions)
    guide = flow.finish(len(grid.tiles))
    total = len(guide) + len(grid.tiles)
    pages = list(guide)
    for number, tile in enumerate(grid.tiles, len(guide) + 1):
        pages.append(_tile_page(drawing, grid, tile, heading, units, f"Page {number} of {total}"))
    return Pages(tuple(pages), heading.title)


def _guide(
    flow: Flow, drawing: Drawing, grid: Grid, units: UnitName, cautions: Sequence[str]
) -> None:
    """What to do with the tiles, the bar to measure, and the map."""
    length, words = bar_for(units)
    flow.title("Measure this first", 20.0)
    bar = check_bar((0.0, 0.0), length, f"This bar must measure exactly {words}.", BODY, _BAR)
    box = Bounds(-2.0, -3.0, length + 2.0, 7.0)
    flow.picture(Drawing(bar.items, box), "left")
    flow.paragraph(
        "If it does not, the print was scaled: print again at 100 %, “actual size”, without "
        "fitting to the page. Do not cut or drill by a print whose bar is off."
    )
    flow.title("Put it together", 30.0)
    side = "lying" if grid.size.width > grid.size.height else "upright"
    count = len(grid.tiles)
    flow.bullets((
        (f"{count} sheet{'s' if count > 1 else ''} of {grid.size.name}, {side}; rows are lettered "
         "from the top, columns numbered from the left. Empty sheets are left out."),
        ("Lay neighbors over one another until their crosses fall together, or cut both at the "
         "dashed line and butt them."),
        ("Check across the joints with a long rule: paper swells and shrinks with damp, a "
         "millimeter or so in a meter."),
    ))
    if cautions:
        flow.box_of("Before work starts", cautions)
    flow.title("Map", 40.0)
    flow.picture(_map(drawing, grid, flow.width, flow.room - 4.0))


def _map(drawing: Drawing, grid: Grid, width: float, height: float) -> Drawing:
    """The whole drawing small, with its tiles."""
    boxes = [tile.cell for tile in grid.tiles]
    around = Bounds.around(corner for box in boxes for corner in box.corners)
    factor = min((width - 2.0) / around.width, (height - 2.0) / around.height)
    small = [i for i in drawing if not isinstance(i, Text) and i.style.layer != "labels"]
    art = Drawing(tuple(small)).restyled(
        lambda style: replace(
            style, width=0.12, dash=(), fill=None, stroke=style.stroke or "#FFFFFF"
        )
    )
    items: list[Item] = list(art.scaled(factor).items)
    for tile in grid.tiles:
        cell = Bounds(*(v * factor for v in tile.cell))
        items.append(rectangle(cell, Style(INK, 0.25, layer="joints")))
        letter = min(3.0, 0.35 * cell.height, 0.25 * cell.width)
        name = Text(cell.center, tile.name, letter, "center", "middle", bold=True, style=ink())
        plate = name.bounds.padded(0.2 * letter)
        items.append(Polygon(plate.corners, style=Style(None, fill="#FFFFFF", layer="labels")))
        items.append(name)
    frame = Bounds(*(v * factor for v in around)).padded(1.0)
    return Drawing(tuple(items), frame)


def _tile_page(
    drawing: Drawing, grid: Grid, tile: Tile, heading: Heading, units: UnitName, number: str
) -> Page:
    area, shift = grid.area, grid.shift(tile)
    page = Page(grid.size, title=f"{heading.title}, {tile.name}")
    page = page.with_placed(drawing, shift, area)
    cell = Bounds(
        tile.cell.left + shift[0], tile.cell.bottom + shift[1],
        tile.cell.right + shift[0], tile.cell.top + shift[1],
    )
    page = page.with_placed(Drawing(tuple(_joints(grid, tile, cell, area))))
    return page.with_placed(_strip(grid.size, tile.name, heading, units, number))


def _joints(grid: Grid, tile: Tile, cell: Bounds, area: Bounds) -> Iterator[Item]:
    """Cut lines, crosses at the cell's corners, and the neighbors' names beyond the lines."""
    joins = (
        ((tile.row, tile.column - 1), (cell.left, area.bottom), (cell.left, area.top)),
        ((tile.row, tile.column + 1), (cell.right, area.bottom), (cell.right, area.top)),
        ((tile.row - 1, tile.column), (area.left, cell.top), (area.right, cell.top)),
        ((tile.row + 1, tile.column), (area.left, cell.bottom), (area.right, cell.bottom)),
    )
    half = 0.25 * OVERLAP
    spots = (
        (cell.left - half, cell.center[1], math.pi / 2),
        (cell.right + half, cell.center[1], math.pi / 2),
        (cell.center[0], cell.top + half, 0.0),
        (cell.center[0], cell.bottom - half, 0.0),
    )
    for (key, start, end), (x, y, angle) in zip(joins, spots, strict=True):
        other = grid.at(*key)
        yield Line(start, end, _CUT)
        if other is not None:
            words = Text((x, y), f"joins {other.name}", SMALL, "center", "middle", angle=angle,
                         style=ink(SOFT, "joints"))
            plate = words.bounds.padded(0.4)
            yield Polygon(plate.corners, style=Style(None, fill="#FFFFFF", layer="joints"))
            yield words
    reach = 0.45 * OVERLAP
    for x, y in cell.corners:
        yield Line((x - reach, y), (x + reach, y), _CROSS)
        yield Line((x, y - reach), (x, y + reach), _CROSS)
        yield Circle((x, y), 2.0, _CROSS)


def _strip(
    size: PageSize, name: str, heading: Heading, units: UnitName, number: str
) -> Drawing:
    """The words below a tile: its name, a short bar, the page's number."""
    box = Page(size).printable
    length, words = (50.8, "2 in") if units == "in" else (50.0, "50 mm")
    base = box.bottom + 1.5
    start = (box.center[0] - 0.5 * length, base + 0.5)
    bar = check_bar(start, length, f"exactly {words}", SMALL, _BAR)
    room = start[0] - box.left - 14.0
    return group(
        Text((box.left, base), name, 4.0, bold=True, style=ink()),
        Text((box.left + 13.0, base), shortened(heading.title, room, SMALL), SMALL,
             style=ink(SOFT)),
        bar,
        Text((box.right, base), number, SMALL, "right", style=ink(SOFT)),
    )


def one_sheet(
    drawing: Drawing, heading: Heading, units: UnitName, cautions: Sequence[str] = ()
) -> Pages:
    """The drawing on one sheet that is large enough, for a plotter or a print shop."""
    frame = drawing.shown(10.0)
    length, words = bar_for(units)
    edge = 15.0
    width = max(frame.width, length + 120.0) + 2 * edge
    said = [line for text in cautions for line in broken(text, width - 2 * edge, BODY)]
    strip = 22.0 + len(said) * LINE_SPACING * BODY
    height = frame.height + strip + 2 * edge
    if max(width, height) > LARGEST_SHEET:
        raise DrawingError("This drawing is larger than a PDF page can be.")
    size = PageSize("Full size", width, height)
    page = Page(size, Margins(edge, edge, edge, edge), title=heading.title)
    box = page.printable
    at = (box.center[0] - frame.center[0], box.bottom + strip - frame.bottom)
    page = page.with_placed(drawing, at)
    bar = check_bar((box.left, box.bottom + 3.0), length,
                    f"This bar must measure exactly {words}.", BODY,
                    _BAR)
    room = box.width - length - 6.0
    number = Text((box.right, box.bottom + 3.0), "Page 1 of 1", BODY, "right", style=ink(SOFT))
    title = Text((box.right, box.bottom + 9.0), shortened(heading.title, room, BODY), BODY,
                 "right", style=ink(SOFT))
    top = box.bottom + strip - 4.0
    lines = [
        Text((box.left, top - (k + 1) * LINE_SPACING * BODY), text, BODY, style=ink())
        for k, text in enumerate(said)
    ]
    rule = Line((box.left, top), (box.right, top), HAIR)
    page = page.with_placed(group(bar, number, title, rule, *lines))
    return Pages((page,), heading.title)
