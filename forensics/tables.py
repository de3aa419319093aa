"""CSV tables (survey, hole, string, mud, records): columns by name, units at the edge, cells checked.

A column's unit stands in its header, in brackets of any kind or after the name (`md [m]`, `MD (ft)`,
`md_m`), or in a second row of units. A bad cell is refused with its file, line and column.
"""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from forensics import units
from forensics.errors import TableError, UnitError, nearest

Floats = NDArray[np.float64]

NULLS = frozenset({"", "-", "--", "n/a", "na", "nan", "null", "(null)", "none", "-999.25", "-9999"})
_DELIMITERS = (";", "\t", "|", ",")
_BRACKETS = re.compile(r"[\[({<]([^\])}>]*)[\])}>]")
_NUMBER = re.compile(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?")
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
class Table:
    """A table as read.

    Parameters
    ----------
    file : Path
        Where it came from.
    lines : tuple of int
        Line of the file each row stands on, from 1.
    numbers : mapping of str to ndarray, shape (rows,)
        SI values of the numeric columns found, NaN where a cell is empty.
    texts : mapping of str to tuple of str
        The text columns found.
    headers : mapping of str to str
        Column name to the header as written.
    ignored : tuple of str
        Headers that no column claimed.
    """

    file: Path
    lines: tuple[int, ...]
    numbers: dict[str, Floats]
    texts: dict[str, tuple[str, ...]]
    headers: dict[str, str]
    ignored: tuple[str, ...] = ()

    def __len__(self) -> int:
        """Return the number of rows."""
        return len(self.lines)

    def number(self, name: str) -> Floats:
        """Return a numeric column [SI], shape (rows,); all NaN where the table has none."""
        return self.numbers.get(name, np.full(len(self), np.nan))

    def text(self, name: str) -> tuple[str, ...]:
        """Return a text column; all empty where the table has none."""
        return self.texts.get(name, ("",) * len(self))

    def error(self, message: str, row: int, column: str | None = None) -> TableError:
        """Make a refusal that names file, line and column of a row (counted from 0)."""
        header = self.headers.get(column, column) if column is not None else None
        return TableError(message, file=self.file, line=self.lines[row], column=header)


@dataclass(frozen=True)
class _Found:
    """A column matched to a position in the file."""

    column: Column
    index: int
    header: str
    unit: str | None


@dataclass(frozen=True)
class _Rows:
    """Cells of a file with their line numbers."""

    file: Path
    cells: list[list[str]]
    lines: list[int]
    delimiter: str


def plain(text: str) -> str:
    """Strip case, blanks and punctuation from a header."""
    return re.sub(r"[^a-z0-9]", "", text.casefold())


def decode(data: bytes) -> str:
    """Decode a file: UTF-16 by its mark, UTF-8 with or without mark, else Windows-1252.

    Examples
    --------
    >>> decode("md".encode("utf-8-sig"))
    'md'
    """
    if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
        return data.decode("utf-16", errors="replace")
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError:
        return data.decode("cp1252", errors="replace")


def read_table(path: Path, columns: Sequence[Column]) -> Table:
    """Read a CSV table.

    Parameters
    ----------
    path : Path
        The file. Delimiter (comma, semicolon, tab, bar), decimal mark and encoding are found from it;
        lines starting with # and empty lines are passed over.
    columns : sequence of Column
        What may stand in it; other columns are listed in `Table.ignored`.

    Returns
    -------
    Table
        Numbers in SI.

    Raises
    ------
    TableError
        If the file is missing or empty, a required column or its unit is absent, two columns mean the
        same thing, or a cell is not what its column needs.
    """
    rows = _split(path)
    found, ignored = _match(rows, columns)
    first = 1
    if len(rows.cells) > 1 and _is_unit_row(rows.cells[1], found):
        found = [_with_unit(f, rows.cells[1]) for f in found]
        first = 2
    if len(rows.cells) <= first:
        raise TableError("has a header but no rows of data", file=path)
    for f in found:
        _require_unit(f, path, rows.lines[0])
    body = _Rows(path, rows.cells[first:], rows.lines[first:], rows.delimiter)
    comma = _decimal_comma(body, found)
    width = len(rows.cells[0])
    for cells, line in zip(body.cells, body.lines, strict=True):
        if any(cell for cell in cells[width:]):
            raise TableError(
                f"has {len(cells)} cells under {width} headers; "
                "where the comma is the decimal mark, put ';' or tab between cells",
                file=path,
                line=line,
            )
    return Table(
        file=path,
        lines=tuple(body.lines),
        numbers={f.column.name: _numbers(body, f, comma) for f in found if f.column.quantity != "text"},
        texts={f.column.name: _texts(body, f) for f in found if f.column.quantity == "text"},
        headers={f.column.name: f.header for f in found},
        ignored=ignored,
    )


def _split(path: Path) -> _Rows:
    try:
        text = decode(path.read_bytes())
    except OSError as error:
        reason = "is missing" if isinstance(error, FileNotFoundError) else f"can't be read ({error.strerror})"
        raise TableError(f"{reason}; the case file names it as a table", file=path) from None
    text = text.replace("\x00", "").replace("\r\n", "\n").replace("\r", "\n")
    kept = [(n, line) for n, line in enumerate(text.split("\n"), 1) if line.strip()[:1] not in ("", "#")]
    if not kept:
        raise TableError("is empty; a header row and rows of data are needed", file=path)
    delimiter = _delimiter([line for _, line in kept[:50]])
    cells, lines = [], []
    for number, line in kept:
        row = [cell.strip() for cell in next(csv.reader(io.StringIO(line), delimiter=delimiter))]
        if any(row):
            cells.append(row)
            lines.append(number)
    if not cells:
        raise TableError("holds no cells; a header row and rows of data are needed", file=path)
    return _Rows(path, cells, lines, delimiter)


def _delimiter(lines: list[str]) -> str:
    """Find the mark that cuts the header, brackets and quotes left out, into most cells."""
    header = _BRACKETS.sub("", re.sub(r'"[^"]*"', "", lines[0]))
    return max(_DELIMITERS, key=lambda mark: (header.count(mark), -_DELIMITERS.index(mark)))


def _match(rows: _Rows, columns: Sequence[Column]) -> tuple[list[_Found], tuple[str, ...]]:
    claims: dict[str, list[_Found]] = {}
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


def _only(hits: list[_Found], rows: _Rows) -> _Found:
    """Return the one claim on a column; of several, the one whose header is the very name."""
    if len(hits) == 1:
        return hits[0]
    exact = [hit for hit in hits if plain(_BRACKETS.sub("", hit.header)) == plain(hit.column.name)]
    if len(exact) == 1:
        return exact[0]
    names = " and ".join(repr(hit.header) for hit in hits)
    raise TableError(
        f"columns {names} both read as {hits[0].column.name!r}; keep one, or give one that very name",
        file=rows.file,
        line=rows.lines[0],
    )


def _identify(header: str, index: int, columns: Sequence[Column]) -> _Found | None:
    bracket = _BRACKETS.search(header)
    outside = _BRACKETS.sub(" ", header).strip()
    unit = _clean_unit(bracket.group(1)) if bracket else None
    for column in columns:
        if column.known_as(plain(outside)) and plain(outside):
            return _Found(column, index, header, unit or None)
    words = [word for word in re.split(r"[\s_,:]+", outside) if word]
    for cut in range(len(words) - 1, 0, -1):
        name, rest = plain("".join(words[:cut])), words[cut:]
        tail = _clean_unit(" ".join(rest))
        for column in columns:
            if column.known_as(name) and (not tail or _is_unit(tail, column.quantity)):
                return _Found(column, index, header, unit or tail or None)
    return None


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


def _is_unit_row(cells: list[str], found: list[_Found]) -> bool:
    """Tell whether no numeric cell holds a number and at least one holds a unit of its column."""
    marks = [(_cell(cells, f.index), f.column.quantity) for f in found if f.column.quantity != "text"]
    if any(_NUMBER.match(text.replace(",", ".")) for text, _ in marks):
        return False
    return any(_is_unit(_clean_unit(text.strip("[](){}<>")), quantity) for text, quantity in marks if text)


def _with_unit(f: _Found, cells: list[str]) -> _Found:
    text = _clean_unit(_cell(cells, f.index).strip("[](){}<>"))
    return f if f.unit or not text else _Found(f.column, f.index, f.header, text)


def _require_unit(f: _Found, path: Path, line: int) -> None:
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


def _cell(cells: list[str], index: int) -> str:
    return cells[index] if index < len(cells) else ""


def _decimal_comma(rows: _Rows, found: list[_Found]) -> bool:
    """Tell whether commas in numeric cells are decimal marks rather than marks of thousands."""
    seen = [_cell(row, f.index) for row in rows.cells for f in found if f.column.quantity != "text"]
    with_comma = [text for text in seen if "," in text]
    if any(re.fullmatch(r"[+-]?\d+,(?!\d{3}$)\d*", text) or re.search(r"\..*,", text) for text in with_comma):
        return True
    # "1,500" alone says nothing: between commas it was quoted for its thousands, else it is a decimal comma.
    return bool(with_comma) and rows.delimiter != "," and not any("." in text for text in seen)


def _numbers(rows: _Rows, f: _Found, comma: bool) -> Floats:
    values = np.full(len(rows.cells), np.nan)
    for row, cells in enumerate(rows.cells):
        text = _cell(cells, f.index)
        if text.casefold() in NULLS:
            if f.column.required:
                raise _bad_cell(rows, row, f, f"is empty ({text!r}); a number is needed here")
            continue
        number = _plain_number(text, comma)
        if not _NUMBER.fullmatch(number):
            raise _bad_cell(rows, row, f, f"holds {text!r}; a number is needed here")
        values[row] = float(number)
    unit = f.unit or f.column.default_unit
    return values if unit is None else units.to_si(values, unit, f.column.quantity)


def _plain_number(text: str, comma: bool) -> str:
    """Rewrite a number with a decimal point and without marks of thousands."""
    text = text.replace(" ", "").replace("\u00a0", "").replace("\u2212", "-")
    return text.replace(".", "").replace(",", ".") if comma and "," in text else text.replace(",", "")


def _texts(rows: _Rows, f: _Found) -> tuple[str, ...]:
    values = tuple(_cell(cells, f.index) for cells in rows.cells)
    for row, text in enumerate(values):
        if f.column.required and not text:
            raise _bad_cell(rows, row, f, "is empty; a word is needed here")
    return values


def _bad_cell(rows: _Rows, row: int, f: _Found, message: str) -> TableError:
    return TableError(message, file=rows.file, line=rows.lines[row], column=f.header)
