"""Times and numbers as text files carry them."""

from __future__ import annotations

import datetime as dt
import math


def stamp(seconds: float, tz: dt.tzinfo) -> str:
    """Write a time as ISO 8601 with its offset, milliseconds only where there are any.

    Parameters
    ----------
    seconds : float
        Time since 1970-01-01 UTC [s].
    tz : datetime.tzinfo
        Zone to show it in.

    Returns
    -------
    str
        The stamp.

    Examples
    --------
    >>> stamp(0.25, dt.UTC)
    '1970-01-01T00:00:00.250+00:00'
    """
    millis = round(seconds * 1e3)
    moment = dt.datetime.fromtimestamp(millis // 1000, tz).replace(microsecond=millis % 1000 * 1000)
    return moment.isoformat(timespec="milliseconds" if millis % 1000 else "seconds")


def number(value: float | None, decimals: int) -> float | None:
    """Round a number for a file; None where there is none, since text formats have no NaN.

    Parameters
    ----------
    value : float or None
        The number.
    decimals : int
        Decimals to keep.

    Returns
    -------
    float or None
        The number rounded, never a negative zero.

    Examples
    --------
    >>> number(float("nan"), 2), number(-0.001, 2)
    (None, 0.0)
    """
    if value is None or not math.isfinite(value):
        return None
    return round(float(value), decimals) + 0.0
