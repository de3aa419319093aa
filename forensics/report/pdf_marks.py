"""What leads through the printed report: headings, bookmarks, contents with page numbers."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from reportlab.platypus import Flowable

from forensics.report.elements import Report
from forensics.report.pdf_text import (
    BODY,
    BOLD,
    INK,
    LINE,
    LINK,
    OCHRE,
    SERIF,
    SOFT,
    WINE,
    broken,
    cut,
    face,
    readable,
    shortened,
)

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

# The names are written into the file as they are: no blanks.
PAGES = "number-of-pages"


@dataclass
class Layout:
    """Room on a sheet [pt], what links can lead to, and the page of each section and figure."""

    width: float
    height: float
    anchors: frozenset[str]
    sections: dict[str, int] = field(default_factory=dict)
    figures: dict[int, int] = field(default_factory=dict)


def number_pages(canvas: Canvas, pages: Mapping[str, int]) -> None:
    """Draw the numbers that were left open, by the name of what they belong to."""
    for name, page in pages.items():
        canvas.beginForm(name, 0, -4, 40, 12)
        canvas.setFillColor(SOFT)
        canvas.setFont(BODY, 7.5)
        canvas.drawString(0, 0, str(page))
        canvas.endForm()


class Mark(Flowable):
    """A place that contents, bookmarks and links lead to; takes no room."""

    def __init__(self, anchor: str, title: str, level: int, layout: Layout) -> None:
        super().__init__()
        self.anchor, self.title, self.level, self.layout = anchor, readable(title), level, layout

    def wrap(self, _width: float, _height: float) -> tuple[float, float]:
        """Take no room."""
        return 0.0, 0.0

    def draw(self) -> None:
        """Note the page."""
        self.canv.bookmarkHorizontal(self.anchor, 0, 14.0)
        self.canv.addOutlineEntry(self.title, self.anchor, self.level, closed=self.level > 0)
        if self.level == 0:
            self.layout.sections[self.anchor] = self.canv.getPageNumber()


class Contents(Flowable):
    """Sections with their pages, in three columns."""

    COLUMNS, STEP = 3, 13.0

    def __init__(self, report: Report) -> None:
        super().__init__()
        self.titles = [(s.id, f"{k}  {s.title}") for k, s in enumerate(report.sections, 1)]
        self.deep = -(-len(self.titles) // self.COLUMNS)
        self.spaceBefore, self.spaceAfter = 6.0, 8.0

    def wrap(self, width: float, _: float) -> tuple[float, float]:
        """Take the whole width."""
        self.wide = width
        return width, self.deep * self.STEP + 8.0

    def draw(self) -> None:
        """Draw each line with its link; its page number comes later."""
        canvas = self.canv
        column = self.wide / self.COLUMNS
        top = self.deep * self.STEP + 4.0
        canvas.setStrokeColor(LINE)
        for y in (0.0, top + 4.0):
            canvas.line(0.0, y, self.wide, y)
        for k, (anchor, title) in enumerate(self.titles):
            x, y = column * (k // self.deep), top - self.STEP * (k % self.deep) - 9.0
            canvas.setFont(BODY, 8.0)
            canvas.setFillColor(LINK)
            canvas.drawString(x, y, cut(readable(title), BODY, 8.0, column - 40.0))
            canvas.linkRect("", anchor, (x, y - 3.0, x + column - 16.0, y + 9.0), relative=1, thickness=0)
            canvas.saveState()
            canvas.translate(x + column - 34.0, y)
            canvas.doForm(anchor)
            canvas.restoreState()


class Heading(Flowable):
    """A heading: a section's has its number and a rule above, a part's a bar at its side."""

    def __init__(self, title: str, layout: Layout, number: str = "") -> None:
        super().__init__()
        self.number, self.size = number, 13.0 if number else 10.5
        title = shortened(readable(title), 400)
        self.font = face(SERIF, title)
        self.lines = broken(title, self.font, self.size, layout.width - 30.0)
        self.spaceBefore, self.spaceAfter = (14.0 if number else 10.0), 5.0

    def wrap(self, width: float, _: float) -> tuple[float, float]:
        """Take the whole width."""
        self.wide = width
        return width, 1.3 * self.size * len(self.lines) + (6.0 if self.number else 0.0)

    def draw(self) -> None:
        """Draw number or bar, then the title."""
        canvas, step = self.canv, 1.3 * self.size
        top = step * len(self.lines)
        canvas.setStrokeColor(INK if self.number else WINE)
        if self.number:
            canvas.setLineWidth(1.2)
            canvas.line(0.0, top + 5.0, self.wide, top + 5.0)
            canvas.setFillColor(OCHRE)
            canvas.setFont(BOLD, 9.0)
            canvas.drawString(0.0, top - self.size, self.number)
        else:
            canvas.setLineWidth(4.0)
            canvas.line(2.0, 1.0, 2.0, top)
        canvas.setFillColor(INK)
        canvas.setFont(self.font, self.size)
        for k, line in enumerate(self.lines):
            canvas.drawString(22.0 if self.number else 10.0, top - self.size - k * step, line)
