"""A text log written again line by line, in its own dialect, with stamps and numbers shifted.

What makes a file hard to read (its header, delimiter, units, null codes, odd cells) stays as it is; what
tells whose it is goes.
"""

from __future__ import annotations

import datetime as dt
import re
from collections.abc import Sequence
from dataclasses import dataclass

_DAY = 86400.0
_NUMBER = re.compile(r"[+-]?(?:\d+(?:[.,]\d*)?|[.,]\d+)")
_MONTHS = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")
#: Dates inside a text: year first, a month's name, or two numbers before or after the year.
_DATES = re.compile(
    r"(?P<y1>\d{4})(?P<s1>[-/.])(?P<m1>\d{1,2})(?P=s1)(?P<d1>\d{1,2})(?!\d)"
    r"|(?P<d2>\d{1,2})(?P<s2>[-/. ]?)(?P<m2>jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec)[a-z]*"
    r"(?P<t2>[-/. ]?)(?P<y2>\d{4}|\d{2})(?!\d)"
    r"|(?P<a3>\d{1,2})(?P<s3>[-/.])(?P<b3>\d{1,2})(?P=s3)(?P<y3>\d{4}|\d{2})(?!\d)"
    r"|(?<!\d)(?P<y4>(?:19|20)\d{2})(?P<m4>[01]\d)(?P<d4>[0-3]\d)(?!\d)",
    re.IGNORECASE,
)
#: Counts since 1970 by size: seconds, milliseconds, microseconds, nanoseconds.
_EPOCHS = ((1e8, 1e10, 1.0), (1e11, 1e13, 1e3), (1e14, 1e16, 1e6), (1e17, 1e19, 1e9))
#: Numbers at or below this stand for "no value" and are no depth.
_NULLS = -900.0


@dataclass(frozen=True)
class Change:
    """What is done to a column: `role` "time", "number" (shifted by `amount`), "keep" or "blank"."""

    role: str
    amount: float = 0.0


def shift_stamp(text: str, days: int, month_first: bool = False) -> str:
    """Shift the date in a stamp by whole days; a time of day alone, or a text without a date, stays.

    Parameters
    ----------
    text : str
        A date, a date and time, or a count since 1970 or 1900.
    days : int
        Added.
    month_first : bool
        Whether 03/04/2021 is the fourth of March.

    Returns
    -------
    str
        In the form of `text`.

    Examples
    --------
    >>> shift_stamp("2021-03-31 12:00:05", 1), shift_stamp("1617192005", 1), shift_stamp("12:00:05", 1)
    ('2021-04-01 12:00:05', '1617278405', '12:00:05')
    """
    bare = text.strip().strip('"')
    if _NUMBER.fullmatch(bare):
        value = abs(float(bare.replace(",", ".")))
        for low, high, scale in _EPOCHS:
            if low <= value < high:
                return shift_number(text, days * _DAY * scale)
    return _DATES.sub(lambda found: _moved(found, days, month_first), text)


def _moved(found: re.Match[str], days: int, month_first: bool) -> str:
    parts = {name: value for name, value in found.groupdict().items() if value is not None}
    kind = next(name[1] for name in parts)
    if kind == "3":
        first, second = int(parts["a3"]), int(parts["b3"])
        month, day = (first, second) if month_first else (second, first)
    elif kind == "2":
        month, day = _MONTHS.index(parts["m2"][:3].title()) + 1, int(parts["d2"])
    else:
        month, day = int(parts[f"m{kind}"]), int(parts[f"d{kind}"])
    year = int(parts[f"y{kind}"])
    try:
        moved = dt.date(_full(year), month, day) + dt.timedelta(days=days)
    except (ValueError, OverflowError):
        return found.group()
    return _written(parts, kind, moved, month_first)


def _full(year: int) -> int:
    """Year of four digits; of two, 69 to 99 are of the last century (POSIX)."""
    return year if year > 99 else year + (1900 if year > 68 else 2000)


def _written(parts: dict[str, str], kind: str, moved: dt.date, month_first: bool) -> str:
    """Write a date in the form of the one it replaces."""
    year = f"{moved.year % 100:02d}" if len(parts[f"y{kind}"]) == 2 else f"{moved.year:04d}"
    if kind == "2":
        name = _MONTHS[moved.month - 1]
        name = name.upper() if parts["m2"].isupper() else name
        text = f"{moved.day:02d}{parts['s2']}{name}{parts['t2']}{year}"
    elif kind == "3":
        pair = (moved.month, moved.day) if month_first else (moved.day, moved.month)
        text = parts["s3"].join((f"{pair[0]:02d}", f"{pair[1]:02d}", year))
    else:
        between = parts.get("s1", "")
        text = between.join((year, f"{moved.month:02d}", f"{moved.day:02d}"))
    return text


def shift_number(text: str, amount: float) -> str:
    """Add to a number written as text, its decimals and decimal mark kept; what is no number stays.

    Examples
    --------
    >>> shift_number("1250,50", 10.0), shift_number("-999.25", 10.0), shift_number("n/a", 10.0)
    ('1260,50', '-999.25', 'n/a')
    """
    found = _NUMBER.search(text)
    if found is None or found.group() != text.strip().strip('"'):
        return text
    old = found.group()
    comma = "," in old
    value = float(old.replace(",", "."))
    if value <= _NULLS:
        return text
    places = len(old.replace(",", ".").partition(".")[2])
    new = f"{value + amount:.{places}f}"
    return text.replace(old, new.replace(".", ",") if comma else new)


def rewrite_line(line: str, delimiter: str, changes: Sequence[Change], how: tuple[int, bool]) -> str:
    """Write a line of data again with its columns changed.

    Parameters
    ----------
    line : str
        Without its end.
    delimiter : str
        One character; a blank stands for any run of blanks.
    changes : sequence of Change
        One a column; cells beyond them are blanked.
    how : tuple of int and bool
        Days added to stamps; whether the month comes before the day.
    """
    pieces = _pieces(line, delimiter)
    for column, place in enumerate(range(0, len(pieces), 2)):
        change = changes[column] if column < len(changes) else Change("blank")
        cell = pieces[place]
        if change.role == "time":
            pieces[place] = shift_stamp(cell, *how)
        elif change.role == "number":
            pieces[place] = shift_number(cell, change.amount)
        elif change.role == "blank":
            # a column between blanks must stay a column
            pieces[place] = "0" if delimiter == " " and cell else ""
    return "".join(pieces)


def _pieces(line: str, delimiter: str) -> list[str]:
    """Cells and what stands between them, in turn; a cell first."""
    if delimiter == " ":
        lead = line[: len(line) - len(line.lstrip())]
        parts = re.split(r"(\s+)(?=(?:[^\"]*\"[^\"]*\")*[^\"]*$)", line.strip())
        parts[0] = lead + parts[0]
        return parts
    mark = re.escape(delimiter)
    return re.split(rf"({mark})(?=(?:[^\"]*\"[^\"]*\")*[^\"]*$)", line)
