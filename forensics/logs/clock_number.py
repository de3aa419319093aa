"""Time written as numbers: epochs, serial days, elapsed time, packed dates and clocks."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics import units
from forensics.channels import normalise

Floats = NDArray[np.float64]
DAY = 86400.0
# Day 0 of a spreadsheet's serial days (its 1900 leap-year slip included) counted from 1970-01-01.
SERIAL_EPOCH = 25569.0


@dataclass(frozen=True)
class NumberClock:
    """Seconds from numbers: since 1970 where `absolute` (UTC or local), else since some start.

    `overflowed` where a counter of 32 bits ran over, so that only its steps count.
    """

    seconds: Floats
    absolute: bool
    utc: bool
    why: str
    overflowed: bool = False


def _known(values: Floats) -> Floats:
    return values[np.isfinite(values)]


def _typical_step(values: Floats) -> float:
    steps = np.abs(np.diff(_known(values)))
    steps = steps[steps > 0]
    return float(np.median(steps)) if len(steps) else 0.0


def days(values: Floats) -> Floats:
    """Day numbers since 1970 from packed dates (YYMMDD, YYYYMMDD) or serial days.

    Parameters
    ----------
    values : ndarray, shape (n,)
        As the file has them.

    Returns
    -------
    ndarray, shape (n,)
        Whole days, NaN where a value is no date.

    Examples
    --------
    >>> days(np.array([90512.0, 20240229.0])).tolist()
    [14376.0, 19782.0]
    """
    uniques, codes = np.unique(values, return_inverse=True)
    packed = np.array([_packed_day(value) for value in uniques])
    serial = (uniques > 20000.0) & (uniques < 80000.0)
    if np.isfinite(packed).mean() < 0.9 and serial.all():
        packed = np.floor(uniques) - SERIAL_EPOCH
    return packed[codes]


def _packed_day(value: float) -> float:
    if not 0 < value < 1e8 or value != int(value):
        return np.nan
    number = int(value)
    year, month, day = number // 10000, number // 100 % 100, number % 100
    if year < 100:
        year += 1900 if year >= 70 else 2000
    try:
        return float(dt.date(year, month, day).toordinal() - dt.date(1970, 1, 1).toordinal())
    except ValueError:
        return np.nan


def _is_packed_clock(values: Floats) -> bool:
    known = _known(values)
    whole = np.floor(known)
    fits = (known >= 0) & (known < 240000) & (whole % 100 < 60) & (whole // 100 % 100 < 60)
    return len(known) > 0 and bool(fits.all())


def _unpack(values: Floats) -> Floats:
    whole = np.floor(values)
    return whole // 10000 * 3600.0 + whole // 100 % 100 * 60.0 + whole % 100 + (values - whole)


def seconds_of_day(values: Floats, unit: str | None) -> Floats | None:
    """Seconds of the day from a fraction of a day, packed HHMMSS (leading zeros lost), or seconds.

    Examples
    --------
    >>> seconds_of_day(np.array([90512.0]), None).tolist()
    [32712.0]
    """
    known = _known(values)
    if len(known) == 0 or known.min() < 0 or known.max() >= 240000:
        return None
    if known.max() < 1.0 and (known != 0).any():
        return values * DAY
    given = unit is not None and "time" in units.quantities_of(unit)
    if given and unit is not None:
        seconds = units.to_si(values, unit, "time")
        return seconds if np.nanmax(seconds) <= DAY else None
    if _is_packed_clock(values):
        return _unpack(values)
    return values if known.max() <= DAY else None


def _unwrap_32_bit(values: Floats) -> Floats:
    """Undo an overflow of a 32-bit counter, known by negative values and jumps of 2^32."""
    known = np.isfinite(values)
    steps = np.diff(values[known])
    if len(steps) == 0 or not (np.abs(steps) > 2.0**31).any():
        return values
    mended = (steps + 2.0**31) % 2.0**32 - 2.0**31
    out = values.copy()
    out[known] = values[known][0] + np.concatenate(([0.0], np.cumsum(mended)))
    return out


def read(values: Floats, unit: str | None, name: str) -> NumberClock | None:
    """Read a lone column of numbers as time.

    Parameters
    ----------
    values : ndarray, shape (n,)
        As the file has them.
    unit : str or None
        The unit the file or the case gives.
    name : str
        The column's name.

    Returns
    -------
    NumberClock or None
        None where the numbers can't be time.

    Notes
    -----
    Epochs are told by size: seconds between 1973 and 2065 (1e8 to 3e9), milliseconds 1000 times that,
    and so on; serial days between 1954 and 2119 that step by less than a day.
    """
    known = _known(values)
    if len(known) == 0:
        return None
    middle = float(np.median(known))
    key = normalise(unit or "")
    for low, scale, word in ((1e8, 1.0, "s"), (1e11, 1e-3, "ms"), (1e14, 1e-6, "us"), (1e17, 1e-9, "ns")):
        if low < known.min() and known.max() < 30 * low:
            return NumberClock(values * scale, True, True, f"epoch in {word}")
    serial = known.min() > 20000.0 and known.max() < 80000.0 and 0 < _typical_step(values) < 0.5
    if serial and key in {"", "d", "day", "days", "excel", "serial", "unitless", "none"}:
        return NumberClock((values - SERIAL_EPOCH) * DAY, True, False, "serial days")
    packed = "hhmmss" in key or normalise(name) == "hhmmss"
    if packed and _is_packed_clock(values):
        return None if middle < 0 else _wrapped(values)
    return _elapsed(values, unit)


def _wrapped(values: Floats) -> NumberClock:
    seconds = _unpack(values)
    steps = np.diff(seconds, prepend=seconds[:1])
    seconds = seconds + DAY * np.cumsum(np.where(steps < -0.5 * DAY, 1.0, 0.0))
    return NumberClock(seconds, False, False, "clock HHMMSS; midnights counted")


def _elapsed(values: Floats, unit: str | None) -> NumberClock | None:
    if unit is not None and not units.is_blank(unit) and "time" not in units.quantities_of(unit):
        if "length" not in units.quantities_of(unit):
            return None
        # Seen: an elapsed-time index labelled with the depth unit it replaced.
        unit = None
    mended = _unwrap_32_bit(values)
    scale = 1.0 if unit is None or units.is_blank(unit) else units.factor(unit, "time").scale
    # Also seen: milliseconds under the unit of seconds; no log steps by a quarter of an hour.
    if scale == 1.0 and _typical_step(mended) >= 1000.0:
        scale = 1e-3
    over = mended is not values
    why = f"elapsed time ({unit or 's'}{'; a counter of 32 bits ran over, steps mended' if over else ''})"
    return NumberClock(mended * scale, False, False, why, over)
