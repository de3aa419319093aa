"""Numbers and times in the sentences of the finding."""

from __future__ import annotations

import datetime as dt

import numpy as np

from forensics import units
from forensics.estimate import Estimate
from forensics.logs.zone import tzinfo_of


def period(start: float, end: float, timezone: str) -> str:
    """Write a period as the reader's clock has it: day, from, to.

    Parameters
    ----------
    start, end : float
        [s since 1970 UTC]
    timezone : str

    Returns
    -------
    str
    """
    tz = tzinfo_of(timezone)
    first, last = dt.datetime.fromtimestamp(start, tz), dt.datetime.fromtimestamp(end, tz)
    if first.date() == last.date():
        return f"on {first:%Y-%m-%d} from {first:%H:%M:%S} to {last:%H:%M:%S}"
    return f"from {first:%Y-%m-%d %H:%M:%S} to {last:%Y-%m-%d %H:%M:%S}"


def size(estimate: Estimate, quantity: str, system: str) -> str:
    """Write an estimate with its interval, unit once.

    Parameters
    ----------
    estimate : Estimate
        [SI]
    quantity, system : str
        As `forensics.units.show` takes them.

    Returns
    -------
    str
        "258 kN (255 to 263)"; without brackets where there is no interval.
    """
    label, scale = units.display_unit(quantity, system)
    places = 0 if abs(estimate.value / scale) >= 100.0 else 1
    value, low, high = (f"{v / scale:.{places}f}" for v in (estimate.value, estimate.low, estimate.high))
    if not (np.isfinite(estimate.low) and np.isfinite(estimate.high)) or low == high:
        return f"{value} {label}"
    return f"{value} {label} ({low} to {high})"


def depth(value: float, system: str) -> str:
    """Write a depth to the metre or foot."""
    label, scale = units.display_unit("length", system)
    return f"{value / scale:.0f} {label}"


def depths(top: float, bottom: float, system: str) -> str:
    """Write a depth interval, unit once."""
    label, scale = units.display_unit("length", system)
    return f"{top / scale:.0f} to {bottom / scale:.0f} {label}"


def times(number: int, word: str) -> str:
    """Write a count with its word, plural where due."""
    return f"{number} {word}" if number == 1 else f"{number} {word}s"
