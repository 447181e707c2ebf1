"""Pages of paper with drawings placed on them, in mm from the sheet's bottom left corner.

Titles and footers printed on a page are drawings like any other and left to the caller.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field, replace

from geometry.drawing import Bounds, Drawing, DrawingError, Place


@dataclass(frozen=True)
class PageSize:
    """A sheet of paper, mm."""

    name: str
    width: float
    height: float

    def __post_init__(self) -> None:
        if not (0 < self.width < 1e5 and 0 < self.height < 1e5):
            raise DrawingError("A page needs a width and a height above zero.")

    @property
    def landscape(self) -> PageSize:
        """The same sheet lying on its long side."""
        long, short = max(self.width, self.height), min(self.width, self.height)
        return replace(self, width=long, height=short)

    @property
    def portrait(self) -> PageSize:
        """The same sheet standing on its short side."""
        long, short = max(self.width, self.height), min(self.width, self.height)
        return replace(self, width=short, height=long)


LETTER = PageSize("Letter", 215.9, 279.4)
LEGAL = PageSize("Legal", 215.9, 355.6)
TABLOID = PageSize("Tabloid", 279.4, 431.8)
A4 = PageSize("A4", 210.0, 297.0)
A3 = PageSize("A3", 297.0, 420.0)
PAGE_SIZES: tuple[PageSize, ...] = (LETTER, LEGAL, TABLOID, A4, A3)


@dataclass(frozen=True)
class Margins:
    """Clear paper at each edge, mm. Half an inch is what nearly every printer can leave."""

    left: float = 12.7
    bottom: float = 12.7
    right: float = 12.7
    top: float = 12.7


@dataclass(frozen=True)
class Placed:
    """A drawing on a page.

    The drawing's origin stands at ``at``, mm on the page. Nothing outside ``clip`` (mm on
    the page) is inked; None means the whole page.
    """

    drawing: Drawing
    at: Place = (0.0, 0.0)
    clip: Bounds | None = None

    @property
    def on_page(self) -> Drawing:
        """The drawing in the page's own coordinates, not clipped."""
        return self.drawing.translated(*self.at)


@dataclass(frozen=True)
class Page:
    """One sheet and what stands on it, the last placed on top."""

    size: PageSize = LETTER
    margins: Margins = field(default_factory=Margins)
    placed: tuple[Placed, ...] = ()
    title: str = ""

    def __post_init__(self) -> None:
        object.__setattr__(self, "placed", tuple(self.placed))
        box = self.printable
        if box.width <= 0 or box.height <= 0:
            raise DrawingError("The margins leave no room on the page.")

    @property
    def sheet(self) -> Bounds:
        """The whole sheet, mm."""
        return Bounds(0.0, 0.0, self.size.width, self.size.height)

    @property
    def printable(self) -> Bounds:
        """The sheet inside its margins, mm."""
        edge = self.margins
        return Bounds(
            edge.left, edge.bottom, self.size.width - edge.right, self.size.height - edge.top
        )

    def with_placed(
        self, drawing: Drawing, at: Place = (0.0, 0.0), clip: Bounds | None = None
    ) -> Page:
        """The page with one more drawing on top."""
        return replace(self, placed=(*self.placed, Placed(drawing, at, clip)))

    @property
    def drawing(self) -> Drawing:
        """All that stands on the page as one drawing framed by the sheet, not clipped."""
        items = tuple(item for placed in self.placed for item in placed.on_page)
        return Drawing(items, self.sheet)


@dataclass(frozen=True)
class Pages:
    """A whole document for the printer: its pages in order and the title it goes by."""

    pages: tuple[Page, ...]
    title: str = "Untitled"

    def __post_init__(self) -> None:
        object.__setattr__(self, "pages", tuple(self.pages))
        if not self.pages:
            raise DrawingError("There are no pages to print.")

    def __iter__(self) -> Iterator[Page]:
        return iter(self.pages)

    def __len__(self) -> int:
        return len(self.pages)

    def __getitem__(self, index: int) -> Page:
        return self.pages[index]
