"""What columns a table may have, and how a header tells which one it is and in which unit."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path

from forensics import units
from forensics.errors import TableError, UnitError, nearest

BRACKETS = re.compile(r"[\[({<]([^\])}>]*)[\])}>]")
NUMBER = re.compile(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?")
# Datum and north words that stand beside a unit and change nothing here.
_BESIDE = re.compile(r"^(m|ft)?rkb$|^(rkb|rt|brt|kb|bkb|grid|true|gn|tn|mag|dec|md|tvd)$")


@dataclass(frozen=True)
class Column:
    """A column a table may have.

    Parameters
    ----------
    name : str
        Name in the program.
    quantity : str
        One of `units.QUANTITIES`, or "text".
    aliases : tuple of str
        Other headers met; compared without case, blanks and punctuation.
    required : bool
        Whether the column, and a value in each row, must be there.
    default_unit : str, optional
        Unit of a bare number; where None, a column without a unit is refused ("dimensionless" needs none).
    """

    name: str
    quantity: str = "text"
    aliases: tuple[str, ...] = ()
    required: bool = False
    default_unit: str | None = None

    def known_as(self, key: str) -> bool:
        """Tell whether a plain key (see `plain`) is this column's name or an alias."""
        return key in {plain(self.name), *(plain(alias) for alias in self.aliases)}


@dataclass(frozen=True)
class Found:
    """A column matched to a position in the file."""

    column: Column
    index: int
    header: str
    unit: str | None


@dataclass(frozen=True)
class Rows:
    """Cells of a file with their line numbers."""

    file: Path
    cells: list[list[str]]
    lines: list[int]
    delimiter: str


def plain(text: str) -> str:
    """Strip case, blanks and punctuation from a header."""
    return re.sub(r"[^a-z0-9]", "", text.casefold())


def match_columns(rows: Rows, columns: Sequence[Column]) -> tuple[list[Found], tuple[str, ...]]:
    """Match headers to columns; return what was found and the headers that no column claimed."""
    claims: dict[str, list[Found]] = {}
    ignored = []
    for index, header in enumerate(rows.cells[0]):
        hit = _identify(header, index, columns)
        if hit is not None:
            claims.setdefault(hit.column.name, []).append(hit)
        elif header:
            ignored.append(header)
    found = [_only(hits, rows) for hits in claims.values()]
    for column in columns:
        if column.required and column.name not in claims:
            like = f"; {nearest(column.name, ignored)}" if ignored else ""
            raise TableError(
                f"has no column {column.name!r}; found {', '.join(h for h in rows.cells[0] if h)}{like}",
                file=rows.file,
                line=rows.lines[0],
            )
    return found, tuple(ignored)


def _only(hits: list[Found], rows: Rows) -> Found:
    """Return the one claim on a column; of several, the one whose header is the very name."""
    if len(hits) == 1:
        return hits[0]
    exact = [hit for hit in hits if plain(BRACKETS.sub("", hit.header)) == plain(hit.column.name)]
    if len(exact) == 1:
        return exact[0]
    names = " and ".join(repr(hit.header) for hit in hits)
    raise TableError(
        f"columns {names} both read as {hits[0].column.name!r}; keep one, or give one that very name",
        file=rows.file,
        line=rows.lines[0],
    )


def _identify(header: str, index: int, columns: Sequence[Column]) -> Found | None:
    outside = BRACKETS.sub(" ", header).strip()
    for column in columns:
        if plain(outside) and column.known_as(plain(outside)):
            return Found(column, index, header, _bracketed(header, column.quantity))
    words = [word for word in re.split(r"[\s_,:]+", outside) if word]
    for cut in range(len(words) - 1, 0, -1):
        name, tail = plain("".join(words[:cut])), _clean_unit(" ".join(words[cut:]))
        for column in columns:
            if column.known_as(name) and (not tail or _is_unit(tail, column.quantity)):
                return Found(column, index, header, _bracketed(header, column.quantity) or tail or None)
    return None


def _bracketed(header: str, quantity: str) -> str | None:
    """Return the unit in brackets; of several brackets, the one that holds a unit of the quantity."""
    texts = [_clean_unit(text) for text in BRACKETS.findall(header)]
    units_first = sorted((text for text in texts if text), key=lambda text: not _is_unit(text, quantity))
    return units_first[0] if units_first else None


def _clean_unit(text: str) -> str:
    """Strip datum and north words from a unit ("m RKB", "deg grid")."""
    words = text.strip().split()
    kept = [word for word in words if not _BESIDE.match(word.casefold())]
    if not kept and words and re.match(r"^(m|ft)rkb$", words[0].casefold()):
        return words[0][:-3]
    return " ".join(kept)


def _is_unit(text: str, quantity: str) -> bool:
    if quantity == "text":
        return False
    try:
        units.factor(text, quantity)
    except UnitError:
        return False
    return True


def is_unit_row(cells: list[str], found: list[Found]) -> bool:
    """Tell whether no numeric cell holds a number and at least one holds a unit of its column."""
    marks = [(cell_at(cells, f.index), f.column.quantity) for f in found if f.column.quantity != "text"]
    if any(NUMBER.match(text.replace(",", ".")) for text, _ in marks):
        return False
    return any(_is_unit(_clean_unit(text.strip("[](){}<>")), quantity) for text, quantity in marks if text)


def with_unit(f: Found, rows: Rows) -> Found:
    """Add the unit of the row of units, which must not contradict the header's."""
    text = _clean_unit(cell_at(rows.cells[1], f.index).strip("[](){}<>"))
    if not text:
        return f
    if (
        f.unit
        and f.unit != text
        and _is_unit(f.unit, f.column.quantity)
        and _is_unit(text, f.column.quantity)
    ):
        pair = [units.factor(unit, f.column.quantity).scale for unit in (f.unit, text)]
        if pair[0] != pair[1]:
            message = f"has the unit {f.unit!r} in its header and {text!r} in the row of units; keep one"
            raise TableError(message, file=rows.file, line=rows.lines[1], column=f.header)
    return f if f.unit else replace(f, unit=text)


def require_unit(f: Found, path: Path, line: int) -> None:
    """Refuse a column without a unit, or with one of another quantity."""
    quantity = f.column.quantity
    if quantity == "text" or (quantity == "dimensionless" and f.unit is None):
        return
    unit = f.unit or f.column.default_unit
    if unit is None or units.is_blank(unit):
        example = units.spellings(quantity)[0]
        raise TableError(
            f"carries no unit; write it in the header, as {f.column.name + ' [' + example + ']'!r}, "
            "or in a second row of units",
            file=path,
            line=line,
            column=f.header,
        )
    try:
        units.factor(unit, quantity)
    except UnitError as error:
        raise TableError(error.message, file=path, line=line, column=f.header) from None


def cell_at(cells: list[str], index: int) -> str:
    """Return a cell, empty where the row is short."""
    return cells[index] if index < len(cells) else ""
