"""Stamps of a log: whichever columns hold them, to seconds since 1970 UTC."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING
from zoneinfo import ZoneInfo

import numpy as np
from numpy.typing import NDArray

from forensics.errors import LogError
from forensics.logs import clock_number
from forensics.logs.clock_column import DATE_NAMES, pick_time, time_key, unit_of
from forensics.logs.clock_text import (
    date_fields,
    day_number,
    find_order,
    take_apart,
)
from forensics.logs.nulls import mostly_numbers, to_numbers
from forensics.logs.raw import RawLog
from forensics.logs.zone import to_utc, zone_of

if TYPE_CHECKING:
    import pandas as pd

Floats = NDArray[np.float64]
DAY = 86400.0
# Rows within which a clock that leaps back over midnight falls again.
LATE = 5

class OpenOrderError(LogError):
    """The order of day and month can't be told from this file alone."""


@dataclass(frozen=True)
class Clock:
    """Stamps of one file.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Seconds since 1970-01-01 UTC, NaN where a stamp could not be read [s].
    columns : tuple of str
        Columns they came from.
    why : str
        How they were read.
    dated : bool
        False where the file gives no date; stamps then count from 1970-01-01.
    order : str or None
        Order of day and month the data showed.
    warnings : tuple of str
        What the reader of the report should know.
    """

    time: Floats
    columns: tuple[str, ...]
    why: str
    dated: bool = True
    order: str | None = None
    warnings: tuple[str, ...] = ()


def read_clock(raw: RawLog, timezone: str, chosen: tuple[str, str | None] | None, order: str | None) -> Clock:
    """Read the stamps of one file.

    Parameters
    ----------
    raw : RawLog
        The file.
    timezone : str
        Zone of stamps that carry none.
    chosen : tuple of (str, str or None), optional
        Column and unit the case file names for the time.
    order : str or None
        "dmy" or "mdy" where other files of the case have shown it.

    Returns
    -------
    Clock
        Stamps in UTC.

    Raises
    ------
    LogError
        If no column holds time, or day and month can't be told apart (`OpenOrderError`).
    """
    zone = zone_of(timezone)
    place, unit = pick_time(raw, chosen)
    dates = [i for i, name in enumerate(raw.names) if time_key(name) in DATE_NAMES and i in raw.table]
    date_place = next((i for i in dates if i != place), None)
    column = raw.table[place]
    if date_place is not None and raw.table[date_place].isna().all():
        date_place = None
    if column.dtype.kind == "M":
        return _from_typed(column, raw.names[place], zone)
    values = mostly_numbers(column)
    if values is not None and np.isfinite(values).any():
        return _from_numbers(raw, (place, date_place), unit, zone)
    sample = column.dropna()
    if len(sample) == 0:
        raise LogError("the time column is empty", file=raw.path, column=raw.names[place])
    stamps = _stamps(column, raw, order)
    if np.isfinite(stamps.days).mean() < 0.5 or _is_placeholder(stamps.days):
        # The date is a filler, or is kept elsewhere.
        return _clock_and_date(raw, (place, date_place), stamps, zone, order)
    local = stamps.days * DAY + np.nan_to_num(stamps.seconds)
    time = np.where(np.isfinite(stamps.offset), local - np.nan_to_num(stamps.offset), to_utc(local, zone))
    return Clock(time, (raw.names[place],), "date and time in one column", order=stamps.order)


def _from_typed(column: pd.Series, name: str, zone: ZoneInfo | float) -> Clock:
    """Read stamps that the file itself holds as stamps."""
    aware = column.dt.tz is not None
    plain = column.dt.tz_convert("UTC").dt.tz_localize(None) if aware else column
    local = plain.astype("datetime64[us]").to_numpy().astype("int64") / 1e6
    local[column.isna().to_numpy()] = np.nan
    return Clock(
        local if aware else to_utc(local, zone), (name,), f"stamps with{'' if aware else 'out'} a zone"
    )


def _is_placeholder(days: Floats) -> bool:
    known = days[np.isfinite(days)]
    return len(known) > 0 and bool((np.abs(known) <= 1).all())


@dataclass(frozen=True)
class _Stamps:
    """Day number, seconds of the day and offset of every row, NaN where absent."""

    days: Floats
    seconds: Floats
    offset: Floats
    order: str | None


def _stamps(column: pd.Series, raw: RawLog, order: str | None) -> _Stamps:
    fast = _iso(column)
    if fast is not None:
        return fast
    import pandas as pd

    codes, uniques = pd.factorize(column)
    parts = [take_apart(str(text)) for text in uniques]
    dates = list(dict.fromkeys(part.date for part in parts if part.date))
    order = _decide(dates, raw, order)
    days = {date: day_number(date, order) for date in dates}
    table = np.array(
        [[_nan(days.get(part.date)), _nan(part.clock), _nan(part.offset)] for part in parts] + [[np.nan] * 3]
    )
    return _Stamps(table[codes, 0], table[codes, 1], table[codes, 2], order)


def _nan(value: float | None) -> float:
    return np.nan if value is None else float(value)


def _iso(column: pd.Series) -> _Stamps | None:
    """Read ISO 8601 stamps at compiled speed; None where they aren't all of that form."""
    import pyarrow as pa

    first = str(column.dropna().iloc[0])
    if not re.match(r"\d{4}-\d{2}-\d{2}[T ]\d{2}:\d{2}", first):
        return None
    try:
        # pyarrow parses these an order of magnitude faster than pandas.
        texts = pa.array(column, type=pa.string(), from_pandas=True)
        zoned = re.search(r"(?:Z|[+-]\d\d:?\d\d)$", first) is not None
        stamps = texts.cast(pa.timestamp("us", "UTC" if zoned else None)).cast(pa.int64())
    except (pa.ArrowInvalid, pa.ArrowNotImplementedError, pa.ArrowTypeError):
        return None
    seconds = stamps.to_numpy(zero_copy_only=False).astype(np.float64) / 1e6
    days = np.floor(seconds / DAY)
    return _Stamps(days, seconds - days * DAY, np.full(len(days), 0.0 if zoned else np.nan), None)


def _decide(dates: Sequence[str], raw: RawLog, known: str | None) -> str | None:
    """Settle the order of day and month, from the file, then from the other files, else refuse."""
    order = find_order(dates)
    if order == "clash":
        bad = next(d for d in dates if (f := date_fields(d)) is not None and len(f) == 4)
        raise LogError(
            f"some dates put the day first and some the month, from {bad!r} on; export them as YYYY-MM-DD",
            file=raw.path,
        )
    if order in {"dmy", "mdy", "either"}:
        return order
    if known is not None:
        return known
    hint = raw.date_hint.casefold().replace(".", "/").replace("-", "/")
    if ("dd/mm" in hint) != ("mm/dd" in hint):
        return "dmy" if "dd/mm" in hint else "mdy"
    raise OpenOrderError(
        f"the date {dates[0]!r} can be read day first or month first, and nothing in the data decides; "
        "export dates as YYYY-MM-DD",
        file=raw.path,
        line=raw.first_line,
    )


def _clock_and_date(
    raw: RawLog, places: tuple[int, int | None], stamps: _Stamps, zone: ZoneInfo | float, order: str | None
) -> Clock:
    """Put a date column beside a clock, or count midnights where there is none."""
    place, date_place = places
    if not np.isfinite(stamps.seconds).any():
        raise LogError(
            f"can't read time from {raw.table[place].dropna().iloc[0]!r}; expected ISO 8601, date and time, "
            "epoch seconds or a clock",
            file=raw.path, line=raw.first_line, column=raw.names[place],
        )  # fmt: skip
    if date_place is not None:
        days, order = _days_of(raw, date_place, order)
        local = _carry_dates(days, stamps.seconds) * DAY + stamps.seconds
        names = (raw.names[date_place], raw.names[place])
        return Clock(_shift(local, stamps.offset, zone), names, "date and clock in two columns", order=order)
    local = wrap_midnight(stamps.seconds)
    return Clock(
        _shift(local, stamps.offset, zone),
        (raw.names[place],),
        "clock only; midnights counted",
        dated=False,
        warnings=("the log gives a clock without a date: stamps count from 1970-01-01",),
    )


def _carry_dates(days: Floats, seconds: Floats) -> Floats:
    """Carry a date told only now and then to the rows below it, over the midnights between."""
    clocked = np.isfinite(seconds)
    told = np.isfinite(days)
    if not (clocked & ~told).sum() > 0.5 * clocked.sum() or not told.any():
        return days
    turns = np.full(len(days), np.nan)
    turns[clocked] = np.floor(wrap_midnight(seconds[clocked]) / DAY)
    last = np.maximum.accumulate(np.where(told & clocked, np.arange(len(days)), -1))
    # Rows above the first date lie on its day, or before its midnights.
    last = np.where(last < 0, int(np.argmax(told & clocked)), last)
    return np.where(told, days, days[last] + turns - turns[last])


def _days_of(raw: RawLog, place: int, order: str | None) -> tuple[Floats, str | None]:
    """Read a column of dates, packed or in words, as day numbers."""
    values = mostly_numbers(raw.table[place])
    if values is not None and np.isfinite(values).any():
        return clock_number.days(values), order
    stamps = _stamps(raw.table[place], raw, order)
    return stamps.days, stamps.order


def _shift(local: Floats, offset: Floats, zone: ZoneInfo | float) -> Floats:
    return np.where(np.isfinite(offset), local - np.nan_to_num(offset), to_utc(local, zone))


def wrap_midnight(seconds: Floats) -> Floats:
    """Add a day each time a clock falls back by more than half a day.

    Examples
    --------
    >>> wrap_midnight(np.array([86399.0, 1.0])).tolist()
    [86399.0, 86401.0]
    """
    out = seconds.copy()
    known = np.flatnonzero(np.isfinite(seconds))
    if len(known) > 1:
        step = np.diff(seconds[known])
        falls = (step < -0.5 * DAY).astype(float)
        for late in np.flatnonzero(step > 0.5 * DAY):
            # A row that comes late, across midnight, belongs to the day before: the clock falls again soon.
            before, after = falls[max(late - LATE, 0) : late], falls[late + 1 : late + 1 + LATE]
            if before.any() and after.any():
                falls[late] -= 1.0
        out[known[1:]] += DAY * np.cumsum(falls)
    return out


def _from_numbers(
    raw: RawLog, places: tuple[int, int | None], unit: str | None, zone: ZoneInfo | float
) -> Clock:
    place, date_place = places
    values = to_numbers(raw.table[place])[0]
    name = raw.names[place]
    if date_place is not None and time_key(name) not in DATE_NAMES:
        return _number_and_date(raw, (place, date_place), values, zone)
    found = clock_number.read(values, unit, name)
    if found is None:
        raise LogError(
            f"can't read time from numbers such as {values[np.isfinite(values)][:1]!r}; give its unit under "
            "[logs.channels]: time = { column = \"...\", unit = \"s\" }",
            file=raw.path, column=name,
        )  # fmt: skip
    if found.absolute:
        time = found.seconds if found.utc else to_utc(found.seconds, zone)
        return Clock(time, (name,), found.why)
    if raw.start is not None:
        start = take_apart(raw.start)
        order = _decide([start.date], raw, None)
        base = (day_number(start.date, order) or 0) * DAY + (start.clock or 0.0)
        from_first = raw.start_is_first_row or found.overflowed
        first = found.seconds[np.isfinite(found.seconds)][:1].sum() if from_first else 0.0
        local = base + found.seconds - first
        offset = np.full(len(local), _nan(start.offset))
        return Clock(_shift(local, offset, zone), (name,), f"{found.why} from {raw.start}", order=order)
    warning = f"{raw.path.name} gives elapsed time without a start: stamps count from 1970-01-01"
    return Clock(found.seconds, (name,), found.why, dated=False, warnings=(warning,))


def _number_and_date(raw: RawLog, places: tuple[int, int], values: Floats, zone: ZoneInfo | float) -> Clock:
    place, date_place = places
    names = (raw.names[date_place], raw.names[place])
    seconds = clock_number.seconds_of_day(values, unit_of(raw, place))
    days, order = _days_of(raw, date_place, None)
    if seconds is None or not np.isfinite(days).any():
        alone = replace(raw, table=raw.table.drop(columns=date_place))
        return _from_numbers(alone, (place, None), unit_of(raw, place), zone)
    return Clock(
        to_utc(days * DAY + seconds, zone), names, "date and time as numbers in two columns", order=order
    )
