"""Channels whose unit the run gives away: the rate of penetration by the hole, a toolface by its turn."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics import units
from forensics.logs.table import TimeLog
from forensics.units import show

Floats = NDArray[np.float64]

#: The hole's progress is taken over this time [s], where it is this much [m], no faster than drilling [m/s].
PROGRESS_TIME, LEAST_MADE, MOST_RATE = 300.0, 0.3, 0.1
#: Units a rate may be in by mistake, how near it must then be to the hole's own, and how wide it may scatter.
RATES, NEAR, SCATTER = ("m/h", "ft/h", "m/s", "s/m", "min/m", "min/ft", "m/min"), 0.2, 2.0
#: A rate within this factor of the hole's own says nothing: rates are averaged in many ways.
USUAL = 2.0
#: Fewest readings any of this is said of.
FEWEST = 100


def misread_rate(log: TimeLog) -> str:
    """Hold the rate of penetration as logged against that at which the hole gets deeper.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.

    Returns
    -------
    str
        A sentence that names the likely unit; empty where the two agree, or no unit explains the difference.
    """
    column = next((c for f in log.files for c in f.columns if c.channel == "rop"), None)
    read, own = _rates(log)
    if len(read) < FEWEST or 1.0 / USUAL < float(np.median(read / own)) < USUAL:
        return ""
    unit = units.factor((column and column.unit) or "m/s", "speed")
    as_read = unit.scale / read if unit.inverse else read / unit.scale
    for spelling in RATES:
        low, middle, high = np.percentile(units.to_si(as_read, spelling, "speed") / own, [25.0, 50.0, 75.0])
        if abs(middle - 1.0) < NEAR and high < SCATTER * low:
            shown = [show(float(np.median(rate)), "speed") for rate in (read, own)]
            return (
                f"The rate of penetration logged, {shown[0]} at the median, is not that at which the hole "
                f"gets deeper, {shown[1]}: it is likely in {spelling}. If it is, say so under "
                "[logs.channels] rop."
            )
    return ""


def _rates(log: TimeLog) -> tuple[Floats, Floats]:
    """Rate of penetration as logged and as the hole made it [m/s], where hole was made."""
    rate, hole = log.get("rop"), log.get("hole_depth")
    hole = log.values["bit_depth"] if hole is None else hole
    step = max(2, round(PROGRESS_TIME / log.interval))
    if rate is None or len(log) <= step:
        return np.zeros(0), np.zeros(0)
    whole = log.time[step:] - log.time[:-step] < 1.2 * PROGRESS_TIME
    made = hole[step:] - hole[:-step]
    read = rate[step // 2 : step // 2 + len(made)]
    with np.errstate(invalid="ignore"):
        deepest = hole[step:] >= np.fmax.accumulate(hole)[step:]
        good = whole & deepest & (made > LEAST_MADE) & (made < MOST_RATE * PROGRESS_TIME) & (read > 0.0)
    return read[good], made[good] / PROGRESS_TIME


def misread_toolface(log: TimeLog) -> str:
    """Tell a toolface that goes all the way round within 2 pi degrees.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.

    Returns
    -------
    str
        A sentence; empty where there is nothing to say.

    Notes
    -----
    A toolface in degrees that stays within 6 degrees of one direction for a whole run is not met.
    """
    face = log.get("toolface")
    if face is None:
        return ""
    face = face[np.isfinite(face)]
    most = np.radians(2.0 * np.pi)
    if len(face) < FEWEST or np.percentile(np.abs(face), 99.0) > 1.01 * most or np.std(face) < 0.1 * most:
        return ""
    largest = show(float(np.percentile(np.abs(face), 99.0)), "angle")
    return (
        f"The toolface stays below {largest} and takes all values up to that: likely radians under a header "
        "of degrees. If they are, give the unit rad under [logs.channels] toolface."
    )
