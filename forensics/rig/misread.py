"""Units the run gives away: hookload by the string, WOB by the hookload, penetration by the hole."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics import units
from forensics.logs.table import TimeLog
from forensics.units import show
from forensics.well.model import Well

Floats = NDArray[np.float64]

#: The hole's progress is taken over this time [s], where it is this much [m], no faster than drilling [m/s].
PROGRESS_TIME, LEAST_MADE, MOST_RATE = 300.0, 0.3, 0.1
#: Units a rate may be in by mistake, how near it must then be to the hole's own, and how wide it may scatter.
RATES, NEAR, SCATTER = ("m/h", "ft/h", "m/s", "s/m", "min/m", "min/ft", "m/min"), 0.2, 2.0
#: A rate within this factor of the hole's own says nothing: rates are averaged in many ways.
USUAL = 2.0
#: Units a force may be in by mistake, likeliest first.
FORCES = ("kN", "klbf", "tonnef", "kdaN", "kgf", "lbf")
#: Hookload over string weight, deep in the run, outside which a unit is looked for, and where it then lies.
LOADED, LIKELY = (0.4, 4.0), (0.8, 2.6)
#: Hookload and WOB move against each other over this many rows, by this much [N], this closely.
APART, MOVED, TOGETHER, WOB_NEAR = 5, 8e3, 0.9, 0.1
#: A string lighter than this tells nothing of a sensor that carries the block too [N].
LIGHT = 1e5
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
    read, own = _rates(log)
    if len(read) < FEWEST or 1.0 / USUAL < float(np.median(read / own)) < USUAL:
        return ""
    unit = units.factor(_read_in(log, "rop") or "m/s", "speed")
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


def misread_hookload(log: TimeLog, well: Well) -> str:
    """Hold the hookload deep in the run against what the string weighs.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.
    well : Well
        What hangs from the hook.

    Returns
    -------
    str
        A sentence that names the likely unit; empty where the two agree, or no unit explains the difference.
    """
    depth, hook = log.values["bit_depth"], log.values["hookload"]
    known = np.isfinite(depth) & np.isfinite(hook) & log.used
    if known.sum() < FEWEST:
        return ""
    deep = known & (depth >= np.percentile(depth[known], 75.0))
    weight = float(well.rotating_weight([np.median(depth[deep])])[0])
    middle = float(np.median(hook[deep & (hook >= np.median(hook[deep]))]))
    if weight < LIGHT or middle <= 0.0 or LOADED[0] < middle / weight < LOADED[1]:
        return ""
    unit = _read_in(log, "hookload") or "N"
    scale = units.factor(unit, "force").scale
    would = {name: middle / scale * units.factor(name, "force").scale for name in FORCES}
    fits = [f"{name} ({show(v, 'force')})" for name, v in would.items() if LIKELY[0] < v / weight < LIKELY[1]]
    if not fits:
        return ""
    return (
        f"The hookload, {show(middle, 'force')} with the bit deepest, can't be that of a string of "
        f"{show(weight, 'force')}: it was read in {unit} and is likely in {' or '.join(fits)}. Say which "
        "under [logs.channels] hookload."
    )


def misread_wob(log: TimeLog) -> str:
    """Hold changes of the rig's weight on bit against those of the hookload it is made from.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.

    Returns
    -------
    str
        A sentence that names the likely unit; empty where the two agree, or no unit explains the difference.
    """
    wob, hook = log.get("wob"), log.values["hookload"]
    if wob is None or len(log) <= APART:
        return ""
    lost, put = hook[:-APART] - hook[APART:], wob[APART:] - wob[:-APART]
    with np.errstate(invalid="ignore"):
        told = (np.abs(lost) > MOVED) & np.isfinite(put) & (wob[APART:] * wob[:-APART] != 0.0)
    if told.sum() < FEWEST or np.corrcoef(lost[told], put[told])[0, 1] < TOGETHER:
        return ""
    slope = float(np.median(put[told] / lost[told]))
    units_read = [_read_in(log, name) for name in ("wob", "hookload")]
    if units_read[0] is None or abs(slope - 1.0) < 2.0 * WOB_NEAR:
        return ""
    scale = units.factor(units_read[0], "force").scale
    ratios = {name: slope * units.factor(name, "force").scale / scale for name in FORCES}
    fits = [name for name, ratio in ratios.items() if abs(ratio - 1.0) < WOB_NEAR]
    if not fits:
        return ""
    return (
        f"The rig's weight on bit changes by {slope:.2g} for 1 of the hookload it is made from: it was read "
        f"in {units_read[0]} and is likely in {' or '.join(fits)}, or the hookload not in {units_read[1]}. "
        "Say which under [logs.channels]."
    )


def _read_in(log: TimeLog, channel: str) -> str | None:
    return next((c.unit for f in log.files for c in f.columns if c.channel == channel and c.unit), None)
