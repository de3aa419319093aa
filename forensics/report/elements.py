"""What a report is made of, before any markup: sections of plain content elements."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from matplotlib.figure import Figure


@dataclass(frozen=True)
class Text:
    """A paragraph."""

    text: str
    form = "text"


@dataclass(frozen=True)
class Bullets:
    """A list of sentences under an optional lead line."""

    items: tuple[str, ...]
    lead: str = ""
    form = "bullets"


@dataclass(frozen=True)
class Notice:
    """A boxed remark; `tone` is "caution" (to be heeded) or "limit" (what is not known)."""

    title: str
    items: tuple[str, ...]
    tone: str = "caution"
    form = "notice"


@dataclass(frozen=True)
class Finding:
    """The finding in words, with how sure it is."""

    sentence: str
    confidence: str
    details: tuple[str, ...] = ()
    form = "finding"


@dataclass(frozen=True)
class Number:
    """A named number as text: value with unit, its 90 % interval, where it came from."""

    name: str
    value: str
    interval: str
    origin: str
    determined: bool = True


@dataclass(frozen=True)
class Numbers:
    """A table of named numbers; `worded` where the values are phrases rather than figures."""

    caption: str
    rows: tuple[Number, ...]
    worded: bool = False
    form = "numbers"


@dataclass(frozen=True)
class Column:
    """Heading of a table column; `align` is "text", "number" or "code"."""

    title: str
    align: str = "text"


@dataclass(frozen=True)
class Linked:
    """A line of a table cell, with a link to the anchor of what shows it."""

    text: str
    words: str
    anchor: str


Line = str | Linked


@dataclass(frozen=True)
class Table:
    """A table; a cell is a line, or a tuple of lines."""

    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Line | tuple[Line, ...], ...], ...]
    note: str = ""
    empty: str = "None."
    dense: bool = False
    form = "table"


@dataclass(frozen=True)
class Picture:
    """A figure to be drawn when the report is rendered; `anchor` is what links to it name.

    Raises
    ------
    ValueError
        If caption or alternative text is empty: no figure goes out without them.
    """

    draw: Callable[[], Figure]
    caption: str
    alt: str
    anchor: str = ""
    form = "picture"

    def __post_init__(self) -> None:
        """Insist on caption and alternative text."""
        if not self.caption.strip() or not self.alt.strip():
            raise ValueError("a figure needs a caption and an alternative text")


Element = Text | Bullets | Notice | Finding | Numbers | Table | Picture


@dataclass(frozen=True)
class Part:
    """A titled run of elements inside a section."""

    id: str
    title: str
    elements: tuple[Element, ...]


@dataclass(frozen=True)
class Section:
    """A section of the report: elements first, then titled parts."""

    id: str
    title: str
    elements: tuple[Element, ...] = ()
    parts: tuple[Part, ...] = ()


@dataclass(frozen=True)
class Report:
    """A whole report, ready to be rendered; `beside` links pages in its folder: file and words."""

    title: str
    subtitle: str
    facts: tuple[tuple[str, str], ...]
    sections: tuple[Section, ...]
    footer: str
    beside: tuple[tuple[str, str], ...] = ()
