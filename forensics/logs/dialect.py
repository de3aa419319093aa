"""How a delimited text file is written: encoding, delimiter, decimal mark, rows above the data."""

from __future__ import annotations

import codecs
import csv
import re
from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from forensics import channels
from forensics.errors import LogError
from forensics.logs.clock_text import looks_like_clock, looks_like_date, take_apart
from forensics.logs.nulls import WORDS
from forensics.units import is_blank, quantities_of

# Headers end within this many lines.
HEADER_LINES = 120
DELIMITERS = (",", ";", "\t", "|", " ")
_NUMBER = re.compile(r"[+-]?(?:\d+[.,]?\d*|[.,]\d+)(?:[eE][+-]?\d+)?")
_STAMP = re.compile(r".*\d[/:.\- T]+(?:\d|[A-Za-z]{3}).*\d.*|\d{2}-[A-Za-z]{3,9}-\d{2,4}.*")
# Words a units row uses for time columns and for "no unit".
_UNIT_WORDS = re.compile(
    r"(?:hh|dd|yy|mm)[\w:/. \-]*|unitless|none|date|time|datetime|iso.?8601|utc|[-.]+|api|gapi|ppm|degc|degf|"
    r"ohmm|spm|lb/100ft2|krev|1/min|g|v|euc|cp|a|amps|string|text|unit|units",
    re.IGNORECASE,
)


@dataclass(frozen=True)
class Dialect:
    """What it takes to read a delimited file.

    Parameters
    ----------
    encoding : str
        Python name of the encoding, a byte-order mark taken care of.
    delimiter : str
        One character; a blank stands for any run of blanks.
    decimal : str
        "." or ",".
    names, units : tuple
        Column names and the unit the file gives each, or None.
    skip : int
        Lines above the first row of data.
    padded : bool
        True where blanks follow delimiters.
    notes : tuple of str
        Remarks for the report.
    start : str or None
        Stamp that a line above the header calls the start.
    """

    encoding: str
    delimiter: str
    decimal: str
    names: tuple[str, ...]
    units: tuple[str | None, ...]
    skip: int
    padded: bool = False
    notes: tuple[str, ...] = ()
    start: str | None = None


def find_encoding(head: bytes) -> str:
    """Name the encoding of a file from its first bytes.

    Examples
    --------
    >>> find_encoding("caf\u00e9 noir".encode("cp1252"))
    'cp1252'
    """
    for mark, name in (
        (codecs.BOM_UTF8, "utf-8-sig"), (codecs.BOM_UTF16_LE, "utf-16"), (codecs.BOM_UTF16_BE, "utf-16"),
    ):  # fmt: skip
        if head.startswith(mark):
            return name
    even, odd = head[0:2000:2].count(0), head[1:2000:2].count(0)
    if odd > len(head[1:2000:2]) // 2:
        return "utf-16-le"
    if even > len(head[0:2000:2]) // 2:
        return "utf-16-be"
    try:
        # An incomplete last character is the cut's fault, not the file's.
        codecs.getincrementaldecoder("utf-8")().decode(head)
    except UnicodeDecodeError:
        return "cp1252"
    return "utf-8"


def split_line(line: str, delimiter: str) -> list[str]:
    """Split a line into stripped fields; quotes protect a delimiter.

    Examples
    --------
    >>> split_line('a; "b;c" ;d', ";")
    ['a', 'b;c', 'd']
    """
    if delimiter == " ":
        return line.split()
    try:
        fields = next(csv.reader([line], delimiter=delimiter, skipinitialspace=True), [])
    except csv.Error:
        # A stray quote or line break: no more than the delimiter can be trusted.
        fields = line.split(delimiter)
    return [field.strip() for field in fields]


def _is_value(field: str) -> bool:
    return bool(_NUMBER.fullmatch(field) or _STAMP.fullmatch(field))


def _looks_like_data(fields: Sequence[str]) -> bool:
    filled = [field for field in fields if field.casefold() not in WORDS]
    return len(filled) > 0 and sum(map(_is_value, filled)) >= 0.5 * len(filled)


def _find_delimiter(lines: Sequence[str]) -> tuple[str, int]:
    """Choose the delimiter that splits the lines most evenly into the most readable fields."""
    best, best_score = ("", 1), 0.0
    for delimiter in DELIMITERS:
        rows = [split_line(line, delimiter) for line in lines]
        width, agreeing = Counter(map(len, rows)).most_common(1)[0]
        if width < 2:
            continue
        same = [row for row in rows if len(row) == width and _looks_like_data(row)]
        readable = sum(_is_value(f) or f.casefold() in WORDS for row in same for f in row) / max(len(same), 1)
        # A blank also splits "2024-01-01 00:00:00", and a comma decimal commas: prefer others.
        score = (
            readable
            * agreeing
            / len(rows)
            * (0.4 if delimiter == " " else 1.0)
            * (0.9 if delimiter == "," else 1.0)
        )
        if score > best_score:
            best, best_score = (delimiter, width), score
    return best


def _decimal(rows: Sequence[Sequence[str]], delimiter: str) -> str:
    fields = [field for row in rows for field in row]
    commas = sum(bool(re.fullmatch(r"[+-]?\d+,\d+", field)) for field in fields)
    # "276,492": thousands are set apart by a comma where every group has three digits.
    grouped = sum(bool(re.fullmatch(r"[+-]?\d{1,3}(,\d{3})+", field)) for field in fields)
    if delimiter == "," and commas == grouped:
        return "."
    points = sum(bool(re.fullmatch(r"[+-]?\d*\.\d+", field)) for field in fields)
    return "," if commas > points else "."


def _unit_score(fields: Sequence[str]) -> float:
    filled = [field.strip("[](){}") for field in fields if field]
    good = sum(bool(quantities_of(f)) or is_blank(f) or bool(_UNIT_WORDS.fullmatch(f)) for f in filled)
    return good / len(filled) if filled else 0.0


def _name_score(fields: Sequence[str]) -> int:
    return sum(channels.match(field)[0] is not None for field in fields if field)


def _header(rows: Sequence[Sequence[str]], width: int) -> tuple[tuple[str, ...], tuple[str | None, ...]]:
    """Take names and units from the rows above the data."""
    full = [row for row in rows if len([field for field in row if field]) >= max(2, width // 2)]
    if not full:
        return tuple(str(number) for number in range(1, width + 1)), (None,) * width
    pad = [tuple(row[:width]) + ("",) * (width - len(row)) for row in full]
    units: tuple[str, ...] = ("",) * width
    if len(pad) > 1:
        best = max(range(len(pad)), key=lambda i: (_unit_score(pad[i]) - 0.1 * _name_score(pad[i]), i))
        if _unit_score(pad[best]) >= 0.6:
            units = pad.pop(best)
    names = tuple(" ".join(name.split()) for name in max(reversed(pad), key=_name_score))
    return names, tuple(unit.strip("[](){} ") or None for unit in units)


def _part_stamp(
    names: tuple[str, ...], units: tuple[str | None, ...], row: Sequence[str]
) -> tuple[tuple[str, ...], tuple[str | None, ...]]:
    """Give date and clock a column each where one name stands over both and blanks part the columns."""
    for i in range(len(row) - 1):
        if looks_like_date(row[i]) and looks_like_clock(row[i + 1]):
            return (*names[:i], "DATE", "TIME", *names[i + 1 : -1]), (
                *units[: i + 1],
                None,
                *units[i + 1 : -1],
            )
    return names, units


def _whole_lines(lines: list[str]) -> list[str]:
    """Join lines of a header whose quoted names hold line breaks."""
    whole: list[str] = []
    for line in lines:
        # Four breaks at most, so that a stray quote does not swallow the file.
        if whole and whole[-1].count('"') % 2 and whole[-1].count("\n") < 4 and len(whole) < HEADER_LINES:
            whole[-1] += "\n" + line
        else:
            whole.append(line)
    return whole


def find_dialect(head: bytes, path: Path) -> Dialect:
    """Find how a delimited file is written.

    Parameters
    ----------
    head : bytes
        The first part of the file, at least a few dozen rows where it has them.
    path : Path
        For messages.

    Returns
    -------
    Dialect
        Everything needed to read it.

    Raises
    ------
    LogError
        If the file is empty or has no rows of numbers.
    """
    encoding = find_encoding(head)
    # A recorder that lays out its file beforehand leaves zeros after the last line.
    text = head.decode(encoding, errors="replace").lstrip("\ufeff").rstrip("\x00")
    # The last line may be cut by the end of the head.
    if len(head) >= 2**18 and len(text.splitlines()) < 2:
        raise LogError(
            f"the first {len(head) // 1024} KiB hold no line break; expected a header and rows of data: this "
            "is no table of text",
            file=path,
        )
    lines = _whole_lines(text.splitlines()[:-1] if len(head) >= 2**18 else text.splitlines())
    filled = [line for line in lines if line.strip()]
    if not filled:
        raise LogError("the file is empty; expected a header and rows of data", file=path)
    if "\x00" in text[:2000]:
        raise LogError("the file is not text; export the log as CSV or LAS", file=path)
    # Lines spread over the head: its first ones are header, and any one stretch may be odd.
    delimiter, width = _find_delimiter(filled[len(filled) // 3 :: max(1, len(filled) // 45)])
    if not delimiter:
        raise LogError(
            f"found no rows of data; it begins {filled[0][:80]!r}; expected a header and rows, split by "
            "comma, semicolon, tab or blanks",
            file=path,
        )
    return _finish(lines[:HEADER_LINES], (encoding, delimiter, width), path)


def _finish(lines: Sequence[str], found: tuple[str, str, int], path: Path) -> Dialect:
    encoding, delimiter, width = found
    rows = [split_line(line, delimiter) for line in lines]
    counted = [str(number) for number in range(width)]
    numbered = (counted, [str(int(number) + 1) for number in counted])
    fit = [i for i, row in enumerate(rows) if len(row) >= max(2, width // 2) and row not in numbered]
    starts = [i for i in fit if _looks_like_data(rows[i])][:60]
    if not starts:
        message = f"found a header but no rows of data; it begins {lines[0][:80]!r}"
        raise LogError(message, file=path, line=len(lines))
    above = [row for row in rows[: starts[0]] if row and not row[0].startswith("#")]
    commented = [
        [row[0].lstrip("# "), *row[1:]] for row in rows[: starts[0]] if row and row[0].startswith("#")
    ]
    usable = above if any(len(row) >= max(2, width // 2) for row in above) else commented
    names, units = _header(usable, width)
    notes = () if usable else ("no header: columns go by their number, from 1",)
    if delimiter == " " and usable and not any(len(row) >= width for row in usable):
        names, units = _part_stamp(names, units, rows[starts[0]])
    decimal = _decimal([rows[i] for i in starts], delimiter)
    padded = delimiter != " " and any(f"{delimiter} " in lines[i] for i in starts)
    return Dialect(
        encoding, delimiter, decimal, names, units, starts[0], padded, notes, _find_start(lines[: starts[0]])
    )


def _find_start(lines: Sequence[str]) -> str | None:
    """Find a stamp that a line above the data calls the start."""
    for line in lines:
        found = re.search(r"(?:start|begin)[^\d\n]*(\d[^;,\t|\n]*)", line, re.IGNORECASE)
        if found and looks_like_date(found.group(1)) and take_apart(found.group(1)).clock is not None:
            return found.group(1).strip(" \"'")
    return None
