"""A number with its interval and where it came from."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Estimate:
    """A value with its 90 % interval, in SI units.

    Parameters
    ----------
    value, low, high : float
        Best value and 90 % interval [SI unit of the quantity].
    source : str
        Where it came from, as a phrase for the report ("in-slips plateau", "case file").
    determined : bool
        False where the data can't tell it and the assumed value was kept.
    samples : int
        Number of readings behind it.
    """

    value: float
    low: float
    high: float
    source: str
    determined: bool = True
    samples: int = 0
