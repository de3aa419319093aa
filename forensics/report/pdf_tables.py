"""Tables of the printed report: columns fitted to the page, rows split over pages under repeated heads."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from reportlab.platypus import Flowable

from forensics.report.elements import Linked, Numbers, Table
from forensics.report.pdf_text import (
    BODY,
    BOLD,
    CODE,
    FAINT,
    INK,
    LINK,
    PROSE,
    SOFT,
    broken,
    face,
    readable,
    shortened,
    width_of,
)

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

#: Rows shown of one table. What holds more than that is a data file, and the files beside the report have it.
ROW_CAP = 500
_GAP, _PAD, _LEADING = 9.0, 2.4, 1.3
# A table no taller than this is not split [pt].
_WHOLE = 190.0
# A row taller than this goes on as another, so that no row outgrows a page [lines].
_TALLEST, _TALLEST_HEAD = 20, 8
_WIDEST_WORD = 130.0
_SIZES = (8.0, 7.2)
_CAPTION, _NOTE = 8.2, 7.2
_KEPT = "Shaded rows: the data could not tell, the assumed value was kept."


@dataclass(frozen=True)
class Word:
    """A line of a cell as set: its text, the words at its end that are a link, and where the link leads."""

    text: str
    link: str = ""
    anchor: str = ""


@dataclass(frozen=True)
class Row:
    """A row as set: the lines of each cell; `kept` shades it, `more` says that the next row belongs to it."""

    cells: tuple[tuple[Word, ...], ...]
    kept: bool = False
    more: bool = False

    @property
    def lines(self) -> int:
        """Lines of the tallest cell."""
        return max((len(cell) for cell in self.cells), default=1) or 1


@dataclass(frozen=True)
class Look:
    """How a table is set: letter size [pt], typeface and alignment by column, widths [pt]."""

    size: float
    fonts: tuple[str, ...]
    right: tuple[bool, ...]
    widths: tuple[float, ...]

    def height(self, row: Row) -> float:
        """Height of a row [pt]."""
        return row.lines * _LEADING * self.size + 2 * _PAD


Cell = tuple[str | Linked, ...]


@dataclass(frozen=True)
class _Content:
    """What a table says: caption, heads, alignment by column, cells, note; which rows are shaded."""

    caption: str
    heads: Sequence[str]
    aligns: Sequence[str]
    rows: Sequence[tuple[Cell, ...]]
    note: str
    kept: Sequence[bool]


def set_table(table: Table, width: float, anchors: frozenset[str]) -> Grid:
    """Set a table over a page's width [pt]; a link to an anchor that is not there stays as words."""
    cells = [[c if isinstance(c, tuple) else (c,) for c in row] for row in table.rows[:ROW_CAP]]
    rows = [tuple(tuple(_leading(line, anchors) for line in cell) for cell in row) for row in cells]
    notes = [table.note] if table.note else []
    if len(table.rows) > ROW_CAP:
        notes.insert(0, f"The first {ROW_CAP} of {len(table.rows)} rows; report.html has them all.")
    heads = [column.title for column in table.columns]
    aligns = [column.align for column in table.columns]
    content = _Content(table.caption, heads, aligns, rows, " ".join(notes), [False] * len(rows))
    return _grid(content, width, _SIZES[table.dense])


def set_numbers(numbers: Numbers, width: float) -> Grid:
    """Set a table of named numbers; the interval's column is there where one has an interval."""
    value = "text" if numbers.worded else "number"
    heads, aligns = ["quantity", "value", "90 % interval", "from"], ["text", value, "number", "text"]
    rows = [((n.name,), (n.value,), (n.interval,), (n.origin,)) for n in numbers.rows]
    if not any(n.interval for n in numbers.rows):
        heads, aligns = heads[:2] + heads[3:], aligns[:2] + aligns[3:]
        rows = [(*row[:2], row[3]) for row in rows]
    kept = [not n.determined for n in numbers.rows]
    content = _Content(numbers.caption, heads, aligns, rows, _KEPT if any(kept) else "", kept)
    return _grid(content, width, _SIZES[0])


def _leading(line: str | Linked, anchors: frozenset[str]) -> str | Linked:
    return line if isinstance(line, str) or line.anchor in anchors else _plain(line)


def _grid(content: _Content, width: float, size: float) -> Grid:
    heads = [readable(head) for head in content.heads]
    shown = [tuple(tuple(_readable(line) for line in cell) for cell in row) for row in content.rows]
    look = _look(heads, content.aligns, shown, width, size)
    head = Row(
        tuple(
            tuple(Word(line) for line in _first_lines(broken(text, BOLD, size, wide)))
            for text, wide in zip(heads, look.widths, strict=True)
        )
    )
    rows: list[Row] = []
    for row, kept in zip(shown, content.kept, strict=True):
        across = zip(row, look.fonts, look.widths, strict=True)
        rows += _portions(Row(tuple(_set_cell(cell, font, size, wide) for cell, font, wide in across), kept))
    caption = tuple(broken(shortened(readable(content.caption), 900), BOLD, _CAPTION, width))
    note = broken(shortened(readable(content.note), 1600), BODY, _NOTE, PROSE) if content.note else []
    return Grid(caption, tuple(note), look, head, tuple(rows))


def _first_lines(lines: list[str]) -> list[str]:
    return lines if len(lines) <= _TALLEST_HEAD else [*lines[: _TALLEST_HEAD - 1], "…"]


def _readable(line: str | Linked) -> str | Linked:
    if isinstance(line, str):
        return readable(line)
    return Linked(readable(line.text), readable(line.words), line.anchor)


def _look(
    heads: Sequence[str], aligns: Sequence[str], rows: Sequence[tuple[Cell, ...]], width: float, size: float
) -> Look:
    """Share the width out: what a column needs first, the rest by how much it has to say."""
    fonts = tuple(
        face(CODE, *(_plain(line) for row in rows for line in row[k])) if align == "code" else BODY
        for k, align in enumerate(aligns)
    )
    right = tuple(align == "number" for align in aligns)
    least, best = [], []
    for k, head in enumerate(heads):
        texts = [_plain(line) for row in rows for line in row[k]]
        whole = max((width_of(t, fonts[k], size) for t in set(texts)), default=0.0)
        words = max((width_of(w, fonts[k], size) for t in set(texts) for w in t.split(" ")), default=0.0)
        heading = max(width_of(w, BOLD, size) for w in head.split(" "))
        # A number is not broken; a head may be.
        need = whole if right[k] else min(words, _WIDEST_WORD)
        least.append(max(heading, min(need, _WIDEST_WORD)) + 0.5)
        best.append(max(whole, heading, min(width_of(head, BOLD, size), 60.0)) + 0.5)
    room = width - _GAP * len(heads)
    if sum(best) <= room:
        widths = best
    elif sum(least) >= room:
        widths = [w * room / sum(least) for w in least]
    else:
        share = (room - sum(least)) / sum(b - a for a, b in zip(least, best, strict=True))
        widths = [a + share * (b - a) for a, b in zip(least, best, strict=True)]
    return Look(size, fonts, right, tuple(widths))


def _plain(line: str | Linked) -> str:
    return line if isinstance(line, str) else f"{line.text} {line.words}"


def _set_cell(cell: Cell, font: str, size: float, width: float) -> tuple[Word, ...]:
    words: list[Word] = []
    for line in cell:
        texts = broken(_plain(line), font, size, width)
        if isinstance(line, str):
            words += [Word(text) for text in texts]
            continue
        # The words of a link stand last, on the last line or the last two; each piece leads there.
        left = len(line.words)
        linked: list[Word] = []
        for text in reversed(texts):
            piece = text[len(text) - left :] if left and left <= len(text) else text if left else ""
            left = max(left - len(text) - 1, 0)
            linked.append(Word(text[: len(text) - len(piece)], piece, line.anchor if piece else ""))
        words += reversed(linked)
    return tuple(words)


def _portions(row: Row) -> list[Row]:
    """Cut a very tall row into rows that hang together."""
    starts = range(0, row.lines, _TALLEST)
    return [
        replace(row, cells=tuple(cell[s : s + _TALLEST] for cell in row.cells), more=s != starts[-1])
        for s in starts
    ]


class Grid(Flowable):
    """A table on the page; splits between rows, and each part has the caption and the head again."""

    def __init__(
        self, caption: tuple[str, ...], note: tuple[str, ...], look: Look, head: Row, rows: tuple[Row, ...]
    ) -> None:
        super().__init__()
        self.caption, self.note, self.look, self.head, self.rows = caption, note, look, head, rows
        self.spaceBefore, self.spaceAfter = 7.0, 9.0

    @property
    def top(self) -> float:
        """Height of caption and head [pt]."""
        return len(self.caption) * 1.35 * _CAPTION + 2.0 + self.look.height(self.head)

    @property
    def least(self) -> float:
        """Height under which the table does not begin on a page: a small one stays whole [pt]."""
        _, whole = self.wrap(0.0, 0.0)
        return whole if whole <= _WHOLE else self.top + sum(self.look.height(row) for row in self.rows[:3])

    def wrap(self, width: float, _: float) -> tuple[float, float]:
        """Say how much room it takes [pt]."""
        rows = sum(self.look.height(row) for row in self.rows)
        return width, self.top + rows + len(self.note) * 1.35 * _NOTE + (2.0 if self.note else 0.0)

    def split(self, _: float, room: float) -> list[Flowable]:
        """Cut where the room [pt] ends; nothing where not even the head and a row fit."""
        used, count = self.top, 0
        for row in self.rows:
            used += self.look.height(row)
            if used > room:
                break
            count += 1
        # The last two rows stay together, and take the note with them.
        count = min(count, max(len(self.rows) - 2, 1))
        if count in (0, len(self.rows)):
            return []
        first = Grid(self.caption, (), self.look, self.head, self.rows[:count])
        rest = Grid(self.caption, self.note, self.look, self.head, self.rows[count:])
        return [first, rest]

    def draw(self) -> None:
        """Draw caption, head, rows and note from the top down."""
        canvas: Canvas = self.canv
        look = self.look
        _, y = self.wrap(0.0, 0.0)
        wide = sum(look.widths) + _GAP * len(look.widths)
        canvas.setFillColor(INK)
        canvas.setFont(BOLD, _CAPTION)
        for line in self.caption:
            canvas.drawString(0.0, y - _CAPTION, line)
            y -= 1.35 * _CAPTION
        y -= 2.0
        self._row(self.head, y, (BOLD,) * len(look.fonts))
        y -= look.height(self.head)
        _rule(canvas, y, wide, INK, 0.9)
        for row in self.rows:
            height = look.height(row)
            if row.kept:
                canvas.setFillColor(FAINT)
                canvas.rect(0.0, y - height, wide, height, stroke=0, fill=1)
            self._row(row, y, look.fonts)
            y -= height
            if not row.more:
                _rule(canvas, y, wide, FAINT, 0.5)
        canvas.setFillColor(SOFT)
        canvas.setFont(BODY, _NOTE)
        for line in self.note:
            y -= 1.35 * _NOTE
            canvas.drawString(0.0, y, line)

    def _row(self, row: Row, top: float, fonts: Sequence[str]) -> None:
        canvas: Canvas = self.canv
        size, x = self.look.size, 0.5 * _GAP
        for cell, font, right, width in zip(row.cells, fonts, self.look.right, self.look.widths, strict=True):
            y = top - _PAD - size
            for word in cell:
                used = width_of(word.text, font, size)
                tail = width_of(word.link, font, size)
                start = x + width - used - tail if right else x
                canvas.setFont(font, size)
                canvas.setFillColor(INK)
                canvas.drawString(start, y, word.text)
                if word.link:
                    canvas.setFillColor(LINK)
                    canvas.drawString(start + used, y, word.link)
                    box = (start + used, y - 2.0, start + used + tail, y + size)
                    canvas.linkRect("", word.anchor, box, relative=1, thickness=0)
                y -= _LEADING * size
            x += width + _GAP


def _rule(canvas: Canvas, y: float, width: float, colour: object, thick: float) -> None:
    canvas.setStrokeColor(colour)
    canvas.setLineWidth(thick)
    canvas.line(0.0, y, width, y)
