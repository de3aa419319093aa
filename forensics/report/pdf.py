"""Content to a PDF for filing: the same elements, numbers and words as the page, on sheets of paper."""

from __future__ import annotations

import io
from collections.abc import Iterable, Iterator
from typing import TYPE_CHECKING

from reportlab.lib.pagesizes import A4, LETTER, landscape
from reportlab.platypus import BaseDocTemplate, Frame, PageTemplate

from forensics.errors import InputError
from forensics.report.drawing import Drawn, draw_figures
from forensics.report.elements import Report, Section
from forensics.report.pdf_figures import fill_boxes
from forensics.report.pdf_flow import story
from forensics.report.pdf_marks import PAGES, Layout, number_pages
from forensics.report.pdf_text import BODY, LINE, SOFT, cut, load_fonts, readable

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

#: Sheets lie on their side: the figures are wide, and keep nearly the size they were drawn at.
SHEETS = {"a4": landscape(A4), "letter": landscape(LETTER)}
_MARGIN, _FOOT = 36.0, 44.0


def to_pdf(report: Report, paper: str = "a4") -> bytes:
    """Render a report as PDF.

    Parameters
    ----------
    report : Report
        Its figures are drawn here unless `draw_figures` did so before.
    paper : str
        "a4" or "letter".

    Returns
    -------
    bytes
        The file; the same report gives the same bytes.

    Raises
    ------
    InputError
        If the paper is neither.

    Notes
    -----
    Two steps: reportlab lays out text and tables and leaves a box for each figure, then pypdf fills the
    boxes. Page numbers of the contents are forms that are drawn last, so that one pass is enough.
    """
    if paper not in SHEETS:
        raise InputError(f"paper is {paper!r}; expected 'a4' or 'letter'")
    load_fonts()
    report = draw_figures(report, vector=True)
    width, height = SHEETS[paper]
    figures = {e.number: e for section in report.sections for e in _elements(section) if isinstance(e, Drawn)}
    layout = Layout(width - 2 * _MARGIN, height - _MARGIN - _FOOT, _anchors(report, figures.values()))
    buffer = io.BytesIO()
    document = _Document(buffer, report, layout, SHEETS[paper])
    document.build(list(story(report, layout)))
    return fill_boxes(buffer.getvalue(), figures, layout.figures)


def _elements(section: Section) -> Iterator[object]:
    yield from section.elements
    for part in section.parts:
        yield from part.elements


def _anchors(report: Report, figures: Iterable[Drawn]) -> frozenset[str]:
    parts = (part.id for section in report.sections for part in section.parts)
    return frozenset((*(s.id for s in report.sections), *parts, *(figure.anchor for figure in figures)))


class _Document(BaseDocTemplate):
    """The sheets: one frame each, a footer, and the page numbers that are known only at the end."""

    def __init__(
        self, buffer: io.BytesIO, report: Report, layout: Layout, sheet: tuple[float, float]
    ) -> None:
        title = f"{readable(report.title)} - {report.subtitle.lower()}"
        super().__init__(
            buffer,
            pagesize=sheet,
            title=title,
            author="Tallyback",
            lang="en",
            invariant=1,
            initialFontName=BODY,
        )
        self.layout, self.foot = layout, readable(report.title)
        frame = Frame(_MARGIN, _FOOT, layout.width, layout.height, 0, 0, 0, 0)
        self.addPageTemplates(PageTemplate("sheet", frame, onPage=self._footer))

    def _footer(self, canvas: Canvas, _: object) -> None:
        right = _MARGIN + self.layout.width
        canvas.saveState()
        canvas.setStrokeColor(LINE)
        canvas.line(_MARGIN, _FOOT - 8.0, right, _FOOT - 8.0)
        canvas.setFillColor(SOFT)
        canvas.setFont(BODY, 7.5)
        canvas.drawString(_MARGIN, _FOOT - 19.0, cut(self.foot, BODY, 7.5, self.layout.width - 120.0))
        canvas.drawRightString(right - 20.0, _FOOT - 19.0, f"Page {canvas.getPageNumber()} of")
        canvas.translate(right - 18.0, _FOOT - 19.0)
        canvas.doForm(PAGES)
        canvas.restoreState()

    def _endBuild(self) -> None:  # noqa: N802 - the library's name
        """Draw the numbers that were left open."""
        number_pages(self.canv, {**self.layout.sections, PAGES: self.page})
        self.canv.setViewerPreference("DisplayDocTitle", "true")
        self.canv.showOutline()
        super()._endBuild()
