"""Content as plain text, for a terminal: the same elements as the page, figures left out."""

from __future__ import annotations

import textwrap
from collections.abc import Iterable

from forensics.errors import legible
from forensics.report.elements import (
    Bullets,
    Element,
    Finding,
    Notice,
    Numbers,
    Picture,
    Report,
    Table,
    Text,
)

WIDTH = 110
#: A cell longer than this is broken over lines, so that one long reason does not push a table off the screen.
CELL = 56


def to_text(report: Report) -> str:
    """Write a report as plain text.

    Parameters
    ----------
    report : Report

    Returns
    -------
    str
        Lines of about `WIDTH` letters, headings underlined, tables in columns; no figure.
    """
    lines = [*_headed(report.title, "="), report.subtitle]
    lines += [f"{name}: {text}" for name, text in report.facts]
    for section in report.sections:
        if all(isinstance(element, Picture) for element in section.elements) and not section.parts:
            continue
        lines += ["", *_headed(section.title, "=")]
        lines += _elements(section.elements)
        for part in section.parts:
            lines += ["", *_headed(part.title, "-"), *_elements(part.elements)]
    return "\n".join(legible(line).rstrip() for line in lines) + "\n"


def _headed(title: str, mark: str) -> list[str]:
    return [title, mark * min(len(title), WIDTH)]


def _elements(elements: Iterable[Element]) -> list[str]:
    lines: list[str] = []
    for element in elements:
        if not isinstance(element, Picture):
            lines += [*_element(element), ""]
    return lines[:-1]


def _element(element: Element) -> list[str]:
    match element:
        case Text(text):
            lines = textwrap.wrap(text, WIDTH)
        case Bullets(items, lead):
            lines = [*textwrap.wrap(lead, WIDTH), *_listed(items)]
        case Notice(title, items):
            lines = [title, *_listed(items)]
        case Finding(sentence, confidence, details):
            lines = [*textwrap.wrap(sentence, WIDTH), confidence, *_listed(details)]
        case Numbers(caption, numbers):
            rows = [("quantity", "value", "90 % interval", "from")]
            rows += [(n.name, n.value, n.interval, n.origin) for n in numbers]
            if not any(n.interval for n in numbers):
                rows = [(name, value, origin) for name, value, _, origin in rows]
            lines = [caption, *_columns(rows)]
        case Table():
            lines = _table(element)
        case _:
            lines = []
    return lines


def _listed(items: Iterable[str]) -> list[str]:
    return [
        line
        for item in items
        for line in textwrap.wrap(item, WIDTH, initial_indent="- ", subsequent_indent="  ")
    ]


def _table(table: Table) -> list[str]:
    if not table.rows:
        return [f"{table.caption}: {table.empty}"]
    rows = [tuple(c.title for c in table.columns)]
    rows += [tuple(c if isinstance(c, str) else "; ".join(c) for c in row) for row in table.rows]
    return [table.caption, *_columns(rows), *textwrap.wrap(table.note, WIDTH)]


def _columns(rows: list[tuple[str, ...]]) -> list[str]:
    """Rows in columns, long cells broken over lines, a rule under the head."""
    broken = [[textwrap.wrap(cell, CELL) or [""] for cell in row] for row in rows]
    widths = [max(len(line) for row in broken for line in row[k]) for k in range(len(rows[0]))]
    lines = []
    for number, row in enumerate(broken):
        for k in range(max(len(cell) for cell in row)):
            cells = (cell[k] if k < len(cell) else "" for cell in row)
            lines.append("  " + "  ".join(c.ljust(w) for c, w in zip(cells, widths, strict=True)))
        if number == 0:
            lines.append("  " + "  ".join("-" * w for w in widths))
    return lines
