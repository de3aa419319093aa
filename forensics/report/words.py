"""Numbers, times and names as a reader sees them."""

from __future__ import annotations

import math
from dataclasses import dataclass
from datetime import datetime, tzinfo
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.estimate import Estimate
from forensics.logs.zone import tzinfo_of
from forensics.units import display_unit

UNKNOWN = "not known"
MINUS = "\N{MINUS SIGN}"
THIN = "\N{NARROW NO-BREAK SPACE}"

# Typeset forms of the registry's labels.
_LABELS = {
    "kN.m": "kN·m",
    "kft.lbf": "kft·lbf",
    "g/cm3": "g/cm³",
    "m3": "m³",
    "cm2": "cm²",
    "deg": "°",
    "deg/30m": "°/30 m",
    "deg/100ft": "°/100 ft",
}
# Contact force per length: the registry shows weights per length as masses, which a wall force is not.
_CONTACT = {"metric": ("kN/m", 1e3), "field": ("lbf/ft", 14.593902937)}


def plain(name: str) -> str:
    """Put a closed-list word as a reader sees it: `drill_slide` becomes "drill slide"."""
    return str(name).replace("_", " ")


def fixed(value: float, places: int) -> str:
    """Write a number with `places` decimals, a true minus, and thin spaces between thousands.

    Examples
    --------
    >>> fixed(float("nan"), 1)
    'not known'
    >>> fixed(12.345, 1)
    '12.3'
    """
    if not math.isfinite(value):
        return UNKNOWN
    text = f"{value:,.{places}f}"
    if float(text.replace(",", "")) == 0.0:
        text = text.lstrip("-")
    text = text.replace("-", MINUS)
    return text.replace(",", THIN if abs(value) >= 1e4 else "")


def places_for(value: float, digits: int = 3) -> int:
    """Decimals that show `digits` significant figures of a value, at most four decimals."""
    if not math.isfinite(value) or value == 0.0:
        return 0
    return int(min(max(digits - 1 - math.floor(math.log10(abs(value))), 0), 4))


def joined(number: str, unit: str) -> str:
    """Put a number and its unit; degrees stand close."""
    return f"{number}{unit}" if unit.startswith("°") or not unit else f"{number} {unit}"


def duration(seconds: float) -> str:
    """Put a length of time in words.

    Examples
    --------
    >>> duration(250.0), duration(7500.0), duration(12.4)
    ('4 min 10 s', '2 h 05 min', '12 s')
    """
    if not math.isfinite(seconds):
        return UNKNOWN
    whole = round(seconds)
    if whole < 60:
        return f"{seconds:.1f} s" if seconds < 10 and seconds != whole else f"{whole} s"
    minutes, rest = divmod(whole, 60)
    if minutes < 60:
        return f"{minutes} min {rest:02d} s" if rest else f"{minutes} min"
    hours, minutes = divmod(round(seconds / 60), 60)
    if hours < 48:
        return f"{hours} h {minutes:02d} min"
    days, hours = divmod(round(seconds / 3600), 24)
    return f"{days} d {hours} h"


def count(number: int, one: str, many: str | None = None) -> str:
    """Put a count with its noun: "1 row", "1,204 rows" (thin spaces between thousands)."""
    return f"{fixed(number, 0)} {one if number == 1 else many or one + 's'}"


@dataclass(frozen=True)
class Show:
    """How this report shows things: unit system and time zone.

    Parameters
    ----------
    system : str
        "metric" or "field".
    timezone : str
        IANA name or offset of the zone times are shown in.
    """

    system: str
    timezone: str = "UTC"

    @cached_property
    def zone(self) -> tzinfo:
        """The zone as an object."""
        return tzinfo_of(self.timezone)

    def unit(self, quantity: str) -> str:
        """Label of the unit a quantity is shown in; empty for a plain number."""
        return self._pair(quantity)[0]

    def scaled(self, values: ArrayLike, quantity: str) -> NDArray[np.float64]:
        """Values in the unit they are shown in, same shape."""
        return np.asarray(values, dtype=np.float64) / self._pair(quantity)[1]

    def _pair(self, quantity: str) -> tuple[str, float]:
        if quantity == "contact":
            return _CONTACT[self.system]
        label, scale = display_unit(quantity, self.system)
        return _LABELS.get(label, label), scale

    def value(self, value: float, quantity: str, places: int | None = None) -> str:
        """Write a value with its unit; `places` decimals, or as many as three figures need."""
        shown = float(self.scaled(value, quantity))
        if not math.isfinite(shown):
            return UNKNOWN
        text = fixed(shown, places_for(shown) if places is None else places)
        return joined(text, self.unit(quantity))

    def range(self, low: float, high: float, quantity: str, places: int | None = None) -> str:
        """Write an interval "low to high unit"; "none" where both ends are missing."""
        ends = [float(self.scaled(end, quantity)) for end in (low, high)]
        if not all(math.isfinite(end) for end in ends):
            return UNKNOWN
        if places is None:
            places = _interval_places(ends[0], ends[1])
        low_text, high_text = (fixed(end, places) for end in ends)
        return joined(f"{low_text} to {high_text}", self.unit(quantity))

    def depths(self, top: float, bottom: float) -> str:
        """Write a depth span, to whole units of length."""
        if not (math.isfinite(top) and math.isfinite(bottom)):
            return UNKNOWN
        return self.range(top, bottom, "length", 0)

    def estimate(self, estimate: Estimate, quantity: str) -> tuple[str, str]:
        """Value and 90 % interval of an estimate, both as text, to the figures the interval supports."""
        ends = self.scaled([estimate.value, estimate.low, estimate.high], quantity)
        if not math.isfinite(ends[0]):
            return UNKNOWN, ""
        has_interval = bool(np.isfinite(ends[1:]).all()) and ends[2] > ends[1]
        if not has_interval:
            return self.value(estimate.value, quantity), "no interval"
        places = _interval_places(ends[1], ends[2])
        return (
            self.value(estimate.value, quantity, places),
            self.range(estimate.low, estimate.high, quantity, places),
        )

    def with_interval(self, estimate: Estimate, quantity: str) -> str:
        """Write an estimate on one line: "120 kN (105 to 131)"."""
        value, interval = self.estimate(estimate, quantity)
        unit = self.unit(quantity)
        bare = interval.removesuffix(unit).strip() if unit else interval
        return f"{value} ({bare})" if interval not in {"", "no interval"} else value

    def moment(self, seconds: float) -> datetime:
        """Place a moment in the report's zone."""
        return datetime.fromtimestamp(seconds, tz=self.zone)

    def time(self, seconds: float) -> str:
        """Write a moment as date and time of day in the report's zone."""
        if not math.isfinite(seconds):
            return UNKNOWN
        moment = self.moment(round(seconds))
        return moment.strftime("%Y-%m-%d %H:%M:%S")

    def stamp(self, seconds: float) -> str:
        """Write a moment with its offset from UTC."""
        if not math.isfinite(seconds):
            return UNKNOWN
        offset = self.moment(seconds).strftime("%z")
        return f"{self.time(seconds)} {offset[:3]}:{offset[3:5]}"


def _interval_places(low: float, high: float) -> int:
    """Decimals so that half the interval keeps one figure, or two where the first is a 1 or a 2."""
    half = abs(high - low) / 2.0
    if not math.isfinite(half) or half == 0.0:
        return places_for(high)
    power = math.floor(math.log10(half))
    figures = 2 if half / 10.0**power < 3.0 else 1
    return int(min(max(figures - 1 - power, 0), 4))
