"""Dates and clocks as rigs write them, one text at a time."""

from __future__ import annotations

import datetime as dt
import re
from collections.abc import Iterable
from dataclasses import dataclass
from itertools import pairwise

_EPOCH = dt.date(1970, 1, 1).toordinal()
# English names, and those of a few other languages where they differ in the first three letters.
_MONTHS = {
    **{name: number for number, name in enumerate(
        ("jan", "feb", "mar", "apr", "may", "jun", "jul", "aug", "sep", "oct", "nov", "dec"), start=1)},
    "mai": 5, "okt": 10, "dez": 12, "des": 12, "ago": 8, "ene": 1, "abr": 4, "dic": 12, "mrz": 3, "out": 10,
    "fev": 2, "set": 9,
}  # fmt: skip
_OFFSET = r"(Z|UTC|GMT|[+-]\d{2}(?::?\d{2})?)"
_CLOCK = re.compile(
    rf"(?<!\d)(\d{{1,2}}):(\d{{2}})(?::(\d{{2}})(?:[.,:](\d+))?)?\s*([ap]\.?m\.?(?![a-z]))?\s*{_OFFSET}?(?!\d)",
    re.IGNORECASE,
)
_COMPACT = re.compile(
    rf"(\d{{8}})[T ]?(\d{{2}})(\d{{2}})(\d{{2}})(?:[.,](\d+))?\s*{_OFFSET}?$", re.IGNORECASE
)
_PUNCTUATED = re.compile(r"(?<![\d./-])(\d{2})([.-])(\d{2})\2(\d{2})(?![\d./-])")
_WORDS = re.compile(r"\d+|[^\W\d_]+")


@dataclass(frozen=True)
class Stamp:
    """One stamp taken apart: date text, seconds of the day and offset from UTC [s], where given."""

    date: str
    clock: float | None
    offset: float | None


def _offset_seconds(text: str | None) -> float | None:
    if not text:
        return None
    if text[0] not in "+-":
        return 0.0
    digits = text[1:].replace(":", "")
    seconds = int(digits[:2]) * 3600.0 + int(digits[2:] or 0) * 60.0
    return -seconds if text[0] == "-" else seconds


def _clock_seconds(parts: tuple[str | None, ...], half: str | None = None) -> float | None:
    hour, minute, second, fraction = (*parts, None, None)[:4]
    h, m, s = int(hour or 0), int(minute or 0), int(second or 0)
    if half:
        h = h % 12 + (12 if half[0].casefold() == "p" else 0)
    if h > 24 or m > 59 or s > 60:
        return None
    return h * 3600.0 + m * 60.0 + s + (float(f"0.{fraction}") if fraction else 0.0)


def take_apart(text: str) -> Stamp:
    """Part a stamp into date, clock and offset; what is not there is "" or None.

    Examples
    --------
    >>> take_apart("29/01/2020-03:00:30")
    Stamp(date='29/01/2020', clock=10830.0, offset=None)
    """
    text = text.strip().strip("\"'")
    compact = _COMPACT.fullmatch(text)
    if compact:
        day, *clock, offset = compact.groups()
        return Stamp(day, _clock_seconds(tuple(clock)), _offset_seconds(offset))
    found = _CLOCK.search(text)
    if found:
        *clock, half, offset = found.groups()
        day = f"{text[: found.start()]} {text[found.end() :]}".strip(" T-,_/.")
        return Stamp(day, _clock_seconds(tuple(clock), half), _offset_seconds(offset))
    named = any(word.casefold()[:3] in _MONTHS for word in _WORDS.findall(text) if not word.isdecimal())
    odd = _PUNCTUATED.search(text) if named else None
    if odd:
        day = f"{text[: odd.start()]} {text[odd.end() :]}".strip()
        return Stamp(day, _clock_seconds((odd.group(1), odd.group(3), odd.group(4))), None)
    return Stamp(text, None, None)


def date_fields(text: str) -> tuple[int, int, int] | tuple[str, int, int, int] | None:
    """Read a date's year, month and day; where their order is open, ("open", first, second, year).

    Examples
    --------
    >>> date_fields("07-Jan-12"), date_fields("03/04/2020")
    ((2012, 1, 7), ('open', 3, 4, 2020))
    """
    words = _WORDS.findall(text)
    numbers = [int(word) for word in words if word.isdecimal()]
    months = [
        _MONTHS[w.casefold()[:3]]
        for w in words
        if not w.isdecimal() and len(w) > 2 and w.casefold()[:3] in _MONTHS
    ]
    if months and len(numbers) == 2:
        year_first = numbers[0] > 31 or len(next(w for w in words if w.isdecimal())) == 4
        year, day = numbers if year_first else reversed(numbers)
        return _year(year), months[-1], day
    digits = [word for word in words if word.isdecimal()]
    if len(digits) == 1:
        return _packed(digits[0])
    if len(numbers) != 3 or months:
        return None
    if len(digits[0]) == 4 or numbers[0] > 31:
        return _year(numbers[0]), numbers[1], numbers[2]
    if "." in text:
        # Points between day, month and year are written only where the day comes first.
        return _year(numbers[2]), numbers[1], numbers[0]
    return ("open", numbers[0], numbers[1], _year(numbers[2]))


def _packed(word: str) -> tuple[int, int, int] | None:
    """Part YYYYMMDD, or YYMMDD that may have lost its leading zero."""
    if len(word) == 8:
        return int(word[:4]), int(word[4:6]), int(word[6:])
    if len(word) not in {5, 6}:
        return None
    word = word.zfill(6)
    return _year(int(word[:2])), int(word[2:4]), int(word[4:])


def _year(number: int) -> int:
    if number >= 100:
        return number
    return 1900 + number if number >= 70 else 2000 + number


def day_number(text: str, order: str | None) -> int | None:
    """Days since 1970-01-01 of a date text, None where it is no date.

    Parameters
    ----------
    text : str
        The date alone.
    order : str or None
        "dmy" or "mdy", for forms whose order is open.
    """
    fields = date_fields(text)
    if fields is None:
        return None
    if len(fields) == 4:
        _, first, second, year = fields
        month, day = (second, first) if order == "dmy" else (first, second)
        fields = (year, month, day)
    try:
        return dt.date(*fields).toordinal() - _EPOCH
    except (ValueError, OverflowError):
        return None


def looks_like_date(text: str) -> bool:
    """Tell whether a text holds a date, with or without a clock."""
    stamp = take_apart(text)
    if (
        not stamp.date
        or (stamp.date.isdecimal() and len(stamp.date) != 8)
        or not re.search(r"\d", stamp.date)
    ):
        return False
    if re.fullmatch(r"[+-]?\d*[.,]\d*", stamp.date):
        return False
    return day_number(stamp.date, "dmy") is not None or day_number(stamp.date, "mdy") is not None


def looks_like_clock(text: str) -> bool:
    """Tell whether a text is a time of day and no more."""
    stamp = take_apart(text)
    return stamp.clock is not None and not stamp.date


def find_order(dates: Iterable[str]) -> str | None:
    """Decide between day first and month first from the dates of one log.

    Parameters
    ----------
    dates : iterable of str
        Distinct dates in order of appearance.

    Returns
    -------
    str or None
        "dmy", "mdy", "either" where every order reads the same, None where the data can't tell.
        "clash" where some dates need one order and some the other.

    Notes
    -----
    A first number above 12 is a day; so is a second. Failing that, a log runs from one day into
    the next: an order under which every step is a day or two speaks against one with longer steps.
    """
    texts = list(dates)
    pairs = [fields[1:3] for fields in map(date_fields, texts) if fields is not None and len(fields) == 4]
    if not pairs:
        return "either"
    day_first, month_first = any(a > 12 for a, _ in pairs), any(b > 12 for _, b in pairs)
    if day_first or month_first:
        return "clash" if day_first and month_first else ("dmy" if day_first else "mdy")
    if all(a == b for a, b in pairs):
        return "either"
    if len(pairs) < 2:
        return None
    steps = {order: _steps([day_number(text, order) for text in texts]) for order in ("dmy", "mdy")}
    near = {order: all(0 <= step <= 2 for step in found) for order, found in steps.items()}
    if near["dmy"] != near["mdy"]:
        return "dmy" if near["dmy"] else "mdy"
    return None


def _steps(days: list[int | None]) -> list[int]:
    known = [day for day in days if day is not None]
    return [after - before for before, after in pairwise(known)]
