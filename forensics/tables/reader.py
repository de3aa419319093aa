"""Read a CSV table: marks and encoding from the file, numbers in SI, bad cells refused with their place."""

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
from forensics.errors import TableError, no_file
from forensics.tables.columns import (
    BRACKETS,
    NUMBER,
    Column,
    Found,
    Rows,
    cell_at,
    is_unit_row,
    match_columns,
    require_unit,
    with_unit,
)

Floats = NDArray[np.float64]

# No table of one run comes near this, and as cells it takes many times its size [bytes].
LARGEST = 2**24
MOST_CELLS = 1000
NULLS = frozenset({"", "-", "--", "n/a", "na", "nan", "null", "(null)", "none", "-999.25", "-9999"})
_DELIMITERS = (";", "\t", "|", ",")


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
    found, ignored = match_columns(rows, columns)
    first = 1
    if len(rows.cells) > 1 and is_unit_row(rows.cells[1], found):
        found = [with_unit(f, rows) for f in found]
        first = 2
    if len(rows.cells) <= first:
        raise TableError("has a header but no rows of data", file=path)
    for f in found:
        require_unit(f, path, rows.lines[0])
    body = Rows(path, rows.cells[first:], rows.lines[first:], rows.delimiter)
    _check_width(body, len(rows.cells[0]))
    comma = _decimal_comma(body, found)
    return Table(
        file=path,
        lines=tuple(body.lines),
        numbers={f.column.name: _numbers(body, f, comma) for f in found if f.column.quantity != "text"},
        texts={f.column.name: _texts(body, f) for f in found if f.column.quantity == "text"},
        headers={f.column.name: f.header for f in found},
        ignored=ignored,
    )


def _check_width(rows: Rows, width: int) -> None:
    for cells, line in zip(rows.cells, rows.lines, strict=True):
        if any(cells[width:]):
            raise TableError(
                f"has {len(cells)} cells under {width} headers; "
                "where the comma is the decimal mark, put ';' or tab between cells",
                file=rows.file,
                line=line,
            )


def header_of(text: str, path: Path) -> Rows | None:
    """Cells of the first row of a table's text; None where it has none."""
    kept = _filled_lines(text)[:1]
    if not kept:
        return None
    delimiter = _delimiter(kept[0][1])
    cells = _cells(path, *kept[0], delimiter)
    return Rows(path, [cells], [kept[0][0]], delimiter)


def _cells(path: Path, number: int, line: str, delimiter: str) -> list[str]:
    """Cut a line into its cells; refuse one that no table has."""
    if line.count(delimiter) > MOST_CELLS:
        raise TableError(f"has over {MOST_CELLS} cells; this is no table of a well", file=path, line=number)
    try:
        return [cell.strip() for cell in next(csv.reader(io.StringIO(line), delimiter=delimiter))]
    except csv.Error as error:
        raise TableError(f"can't be cut into cells: {error}", file=path, line=number) from None


def _filled_lines(text: str) -> list[tuple[int, str]]:
    """Lines that hold something, with their numbers; comments left out."""
    text = text.replace("\x00", "").replace("\r\n", "\n").replace("\r", "\n")
    return [(n, line) for n, line in enumerate(text.split("\n"), 1) if line.strip()[:1] not in ("", "#")]


def _split(path: Path) -> Rows:
    fault = no_file(path, LARGEST)
    if fault is not None:
        raise TableError(f"{fault}; the case file names it as a table", file=path)
    try:
        text = decode(path.read_bytes())
    except OSError as error:
        reason = f"can't be read ({error.strerror})"
        raise TableError(f"{reason}; the case file names it as a table", file=path) from None
    kept = _filled_lines(text)
    if not kept:
        raise TableError("is empty; a header row and rows of data are needed", file=path)
    delimiter = _delimiter(kept[0][1])
    cells, lines = [], []
    for number, line in kept:
        row = _cells(path, number, line, delimiter)
        if any(row):
            cells.append(row)
            lines.append(number)
    if not cells:
        raise TableError("holds no cells; a header row and rows of data are needed", file=path)
    return Rows(path, cells, lines, delimiter)


def _delimiter(header: str) -> str:
    """Find the mark that cuts the header, brackets and quotes left out, into most cells."""
    header = BRACKETS.sub("", re.sub(r'"[^"]*"', "", header))
    return max(_DELIMITERS, key=lambda mark: (header.count(mark), -_DELIMITERS.index(mark)))


def _decimal_comma(rows: Rows, found: list[Found]) -> bool:
    """Tell whether commas in numeric cells are decimal marks rather than marks of thousands."""
    seen = [cell_at(row, f.index) for row in rows.cells for f in found if f.column.quantity != "text"]
    with_comma = [text for text in seen if "," in text]
    if any(re.fullmatch(r"[+-]?\d+,(?!\d{3}$)\d*", text) or re.search(r"\..*,", text) for text in with_comma):
        return True
    # "1,500" alone says nothing: between commas it was quoted for its thousands, else it is a decimal comma.
    return bool(with_comma) and rows.delimiter != "," and not any("." in text for text in seen)


def _numbers(rows: Rows, f: Found, comma: bool) -> Floats:
    values = np.full(len(rows.cells), np.nan)
    for row, cells in enumerate(rows.cells):
        text = cell_at(cells, f.index)
        if text.casefold() in NULLS:
            if f.column.required:
                raise _bad_cell(rows, row, f, f"is empty ({text!r}); a number is needed here")
            continue
        number = _plain_number(text, comma)
        # "1e400" reads as a number and is none: it overflows to infinity.
        if not NUMBER.fullmatch(number) or not np.isfinite(float(number)):
            raise _bad_cell(rows, row, f, f"holds {text!r}; a number is needed here")
        values[row] = float(number)
    unit = f.unit or f.column.default_unit
    return values if unit is None else units.to_si(values, unit, f.column.quantity)


def _plain_number(text: str, comma: bool) -> str:
    """Rewrite a number with a decimal point and without marks of thousands."""
    text = text.replace(" ", "").replace("\u00a0", "").replace("\u2212", "-")
    return text.replace(".", "").replace(",", ".") if comma and "," in text else text.replace(",", "")


def _texts(rows: Rows, f: Found) -> tuple[str, ...]:
    values = tuple(cell_at(cells, f.index) for cells in rows.cells)
    for row, text in enumerate(values):
        if f.column.required and not text:
            raise _bad_cell(rows, row, f, "is empty; a word is needed here")
    return values


def _bad_cell(rows: Rows, row: int, f: Found, message: str) -> TableError:
    return TableError(message, file=rows.file, line=rows.lines[row], column=f.header)
