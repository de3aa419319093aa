"""Elements to what stands on the sheets of the printed report, in reading order."""

from __future__ import annotations

from collections.abc import Iterator

from reportlab.lib.colors import HexColor
from reportlab.platypus import CondPageBreak, Flowable, PageBreak, Paragraph, Spacer
from reportlab.platypus import Table as Boxed

from forensics.report.drawing import Drawn
from forensics.report.elements import Bullets, Finding, Notice, Numbers, Report, Section, Table, Text
from forensics.report.pdf_figures import FigureBox
from forensics.report.pdf_marks import Contents, Heading, Layout, Mark
from forensics.report.pdf_tables import set_numbers, set_table
from forensics.report.pdf_text import (
    BODY,
    BOLD,
    LINE,
    OCHRE,
    PROSE,
    SERIF,
    SOFT,
    TEAL,
    marked,
    paragraphs,
    style,
)

# Each begins a page of its own, as in the print of the page.
_FRESH = frozenset({"run", "overview", "catalogue"})
_TONES = {
    "caution": (HexColor("#f6efdd"), OCHRE),
    "limit": (HexColor("#eceff1"), SOFT),
    "danger": (HexColor("#fbeaea"), HexColor("#b00020")),
}


def story(report: Report, layout: Layout) -> Iterator[Flowable]:
    """Lay the whole report out in reading order."""
    yield Paragraph(marked(report.subtitle), style(9.0, textColor=SOFT))
    title = style(17.0, SERIF, leading=21.0, spaceAfter=4.0)
    yield from paragraphs(report.title, title)
    facts = "&nbsp; &nbsp; ".join(
        f'<font color="#55616c">{marked(name)}</font>&nbsp;{marked(text)}' for name, text in report.facts
    )
    if facts:
        yield Paragraph(facts, style(8.0, leading=12.0))
    yield Contents(report)
    for number, section in enumerate(report.sections, 1):
        yield from _section(section, number, layout)
    yield Spacer(0, 10)
    yield Paragraph(marked(report.footer), style(7.5, textColor=SOFT))


def _section(section: Section, number: int, layout: Layout) -> Iterator[Flowable]:
    if section.id in _FRESH:
        yield PageBreak()
    head = [
        Mark(section.id, f"{number} {section.title}", 0, layout),
        Heading(section.title, layout, str(number)),
    ]
    yield from _headed(head, section.elements, layout, first=not section.elements and bool(section.parts))
    for part in section.parts:
        head = [Mark(part.id, part.title, 1, layout), Heading(part.title, layout)]
        yield from _headed(head, part.elements, layout)


def _headed(
    head: list[Flowable], elements: tuple[object, ...], layout: Layout, first: bool = False
) -> Iterator[Flowable]:
    """Set a heading and what stands under it, on a page that has room for the beginning of both."""
    body = [flowable for element in elements for flowable in _element(element, layout)]
    need = 80.0 if first else 30.0
    if body:
        need = getattr(body[0], "least", 60.0)
    yield CondPageBreak(min(need + 40.0, layout.height))
    yield from head
    for flowable in body:
        least = getattr(flowable, "least", 0.0)
        if least and flowable is not body[0]:
            yield CondPageBreak(min(least + 10.0, layout.height))
        yield flowable


def _element(element: object, layout: Layout) -> Iterator[Flowable]:
    """Set one element."""
    prose = style(8.6, spaceAfter=5.0, rightIndent=max(layout.width - PROSE, 0.0))
    match element:
        case Text(text):
            yield from paragraphs(text, prose)
        case Bullets(items, lead):
            if lead:
                yield from paragraphs(lead, prose)
            yield from _listed(items, layout.width - PROSE)
        case Notice(title, items, tone):
            ground, bar = _TONES.get(tone, _TONES["caution"])
            rows = [*paragraphs(title, style(8.8, BOLD)), *_listed(items, layout.width - PROSE - 40.0)]
            yield _boxed(rows, ground, bar)
        case Finding(sentence, confidence, details):
            rows = [*paragraphs(sentence, style(12.0, SERIF, rightIndent=60.0))]
            rows += paragraphs(confidence, style(9.0, rightIndent=60.0), "How sure: ")
            yield _boxed([*rows, *_listed(details, 60.0)], None, TEAL)
        case Numbers():
            yield set_numbers(element, layout.width)
        case Table() if element.rows:
            yield set_table(element, layout.width, layout.anchors)
        case Table():
            yield Paragraph(f"<b>{marked(element.caption)}:</b> {marked(element.empty)}", prose)
        case Drawn():
            yield FigureBox(element, layout.width, layout.height, layout.figures)


def _listed(items: tuple[str, ...], right: float) -> Iterator[Paragraph]:
    look = style(8.4, leftIndent=11.0, bulletIndent=2.0, spaceAfter=2.0, rightIndent=max(right, 0.0))
    for item in items:
        yield from paragraphs(item, look, "<bullet>•</bullet>")


def _boxed(rows: list[Paragraph], ground: object, bar: object) -> Flowable:
    """Put paragraphs into a box with a bar at its side; it splits between them."""
    frame = ("BACKGROUND", (0, 0), (-1, -1), ground) if ground else ("BOX", (0, 0), (-1, -1), 0.5, LINE)
    looks: list[tuple[object, ...]] = [
        frame,
        ("LINEBEFORE", (0, 0), (0, -1), 6.0, bar, 0),
        ("FONTNAME", (0, 0), (-1, -1), BODY),
        ("LEFTPADDING", (0, 0), (-1, -1), 14.0),
        ("TOPPADDING", (0, 0), (-1, -1), 2.0),
        ("BOTTOMPADDING", (0, 0), (-1, -1), 2.0),
        ("TOPPADDING", (0, 0), (-1, 0), 7.0),
        ("BOTTOMPADDING", (0, -1), (-1, -1), 7.0),
    ]
    return Boxed([[row] for row in rows], colWidths=["100%"], style=looks, spaceBefore=6.0, spaceAfter=8.0)
