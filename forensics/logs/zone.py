"""Time zones of stamps that carry none."""

from __future__ import annotations

import datetime as dt
import re
from zoneinfo import ZoneInfo

import numpy as np
from numpy.typing import NDArray

from forensics.errors import CaseError

Floats = NDArray[np.float64]


def zone_of(name: str) -> ZoneInfo | float:
    """Read a time zone: an IANA name, or an offset from UTC in seconds.

    Raises
    ------
    CaseError
        If it is neither.

    Examples
    --------
    >>> zone_of("+05:30")
    19800.0
    """
    bare = name.strip()
    found = re.fullmatch(r"(?:UTC|GMT)?\s*([+-])(\d{1,2})(?::?(\d{2}))?", bare, re.IGNORECASE)
    if found:
        seconds = int(found.group(2)) * 3600.0 + int(found.group(3) or 0) * 60.0
        return -seconds if found.group(1) == "-" else seconds
    if bare.upper() in {"", "UTC", "Z", "GMT"}:
        return 0.0
    try:
        return ZoneInfo(bare)
    except (KeyError, ValueError, OSError) as error:
        raise CaseError(
            f"unknown time zone {name!r}; use an IANA name ('Europe/Oslo') or an offset ('+01:00')",
            column="logs.timezone",
        ) from error


def tzinfo_of(name: str) -> dt.tzinfo:
    """Give the zone of a name (see `zone_of`) as an object that clocks understand.

    Raises
    ------
    CaseError
        If it is neither an IANA name nor an offset.

    Examples
    --------
    >>> tzinfo_of("-03:30").utcoffset(None) == dt.timedelta(hours=-3.5)
    True
    """
    found = zone_of(name)
    if isinstance(found, ZoneInfo):
        return found
    return dt.timezone(dt.timedelta(seconds=found)) if found else dt.UTC


def to_utc(local: Floats, zone: ZoneInfo | float) -> Floats:
    """Shift local seconds to UTC: in the hour told twice, by their order."""
    if isinstance(zone, float):
        return local - zone
    import pandas as pd

    known = np.isfinite(local)
    index = pd.DatetimeIndex((local[known] * 1e6).round().astype("int64").view("datetime64[us]"))
    try:
        aware = index.tz_localize(zone, ambiguous="infer", nonexistent="shift_forward")
    except ValueError:
        summer = np.ones(len(index), dtype=bool)
        aware = index.tz_localize(zone, ambiguous=summer, nonexistent="shift_forward")
    out = local.copy()
    out[known] = aware.as_unit("us").asi8 / 1e6
    return out
