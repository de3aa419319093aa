"""Where the log contradicts the case's survey, string or mud, or one of its files another: found and said.

Nothing is changed here. A contradiction is worded with its numbers and its likely cause; the case file
settles it.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from forensics.channels import BY_NAME
from forensics.logs.table import TimeLog
from forensics.rig.misread import misread_hookload, misread_rate, misread_toolface, misread_wob
from forensics.rig.steady import Steady
from forensics.rig.view import RigView
from forensics.units import show
from forensics.well.model import Well

Floats = NDArray[np.float64]

#: Survey tools sit behind the bit by this much at most [m] (common practice, no source).
BEHIND = 40.0
#: A measured inclination this far off the survey's is another hole's, or another unit's [rad].
ANGLE_OFF = np.radians(1.5)
#: A vertical depth this far off is more than stretch and rounding make [m], or this part of it.
TVD_OFF = (5.0, 0.003)
#: A mud this part off the case's moves a string's weight by more than a calibration should hide.
MUD_OFF = 0.04
#: A rotating weight this part off the string's is more than a tally's tolerance.
WEIGHT_OFF = 0.06
#: Fewest readings any of this is said of.
FEWEST = 100
FEWEST_WEIGHTS = 3
#: The mean of a pick-up and a slack-off weight is off the rotating weight by this part at most (as found on
#: simulated wells with friction up to 0.5), and the two belong together within this depth [m].
MIDDLE_OFF, BESIDE = 0.2, 50.0
#: Steel, and the muds that are met [kg/m3]; inclination from which a survey can be at fault [rad].
STEEL, MUDS, LEANS = 7850.0, (950.0, 2400.0), np.radians(10.0)
#: Ratios that only a mistaken unit makes, and how near a ratio must be.
UNIT_RATIOS = {
    "torque": {"ft.lbf and N.m": 1.3558, "kN.m and daN.m": 100.0, "ten kN.m and kN.m": 10.0},
    "hookload": {"lbf and N": 4.4482, "kgf and lbf": 2.2046, "kgf and N": 9.80665},
    "standpipe_pressure": {"bar and psi": 14.504, "kPa and psi": 6.8948, "kPa and bar": 100.0},
    "mud_density": {"lb/gal and g/cm3": 8.3454},
}
RATIO_NEAR = 0.05
#: Files of one section hold alike where the bit is no further apart than this [m].
ALIKE = 200.0


def contradictions(log: TimeLog, well: Well, rig: RigView | None = None) -> tuple[str, ...]:
    """Hold the log against survey, string and mud, and its files against one another.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.
    well : Well
        Survey, hole, string and mud of the case.
    rig : RigView, optional
        Where it is given, the rotating weights are held against the string's.

    Returns
    -------
    tuple of str
        A sentence each, with its numbers and its likely cause.
    """
    found = [_inclination(log, well), _vertical_depth(log, well), _mud(log, well)]
    found += [misread_rate(log), misread_toolface(log), misread_wob(log)]
    found.append(misread_hookload(log, well))
    if rig is not None and not found[-1]:
        found.append(_string(rig, well))
    return (*(words for words in found if words), *_files(log))


def _inclination(log: TimeLog, well: Well) -> str:
    """Hold inclinations measured while drilling against the survey, wherever the tool sits behind the bit."""
    measured, bit = log.get("inclination"), log.values["bit_depth"]
    if measured is None:
        return ""
    good = np.isfinite(measured) & np.isfinite(bit) & (bit <= well.trajectory.md[-1] + BEHIND)
    if good.sum() < FEWEST or np.ptp(bit[good]) < BEHIND:
        return ""
    depth, angle = bit[good], measured[good]
    tries = [
        float(np.median(np.abs(angle - well.trajectory.at(np.maximum(depth - back, 0.0)).inclination)))
        for back in np.arange(0.0, BEHIND + 1.0, 5.0)
    ]
    off = min(tries)
    if off <= ANGLE_OFF:
        return ""
    own = well.trajectory.at(depth).inclination
    hint = "another hole's survey, or one of its plans"
    if abs(float(np.median(angle)) * 180.0 / np.pi / max(float(np.median(own)), 1e-3) - 1.0) < RATIO_NEAR:
        hint = "radians under a header of degrees in the log"
    both = [show(float(np.median(values)), "angle") for values in (angle, own)]
    return (
        f"The survey does not fit the inclination logged: {show(off, 'angle')} apart at the median "
        f"({both[0]} logged, {both[1]} surveyed). Likely {hint}."
    )


def _vertical_depth(log: TimeLog, well: Well) -> str:
    """Hold the bit's vertical depth as logged against the survey's."""
    logged, bit = log.get("bit_tvd"), log.values["bit_depth"]
    if logged is None:
        return ""
    good = np.isfinite(logged) & np.isfinite(bit) & (bit > 0.0)
    if good.sum() < FEWEST:
        return ""
    own = well.trajectory.position(bit[good])[:, 2]
    apart = logged[good] - own
    off = float(np.median(apart))
    if abs(off) <= max(TVD_OFF[0], TVD_OFF[1] * float(np.median(own))):
        return ""
    steady = float(np.percentile(apart, 90) - np.percentile(apart, 10)) < TVD_OFF[0]
    hint = "another datum (rotary table, ground, sea level)" if steady else "another hole's survey or a plan"
    return (
        f"The log's true vertical depth of the bit is {show(off, 'length')} off the survey's at the median. "
        f"Likely {hint}."
    )


def _mud(log: TimeLog, well: Well) -> str:
    """Hold the mud density as logged against the case's."""
    logged = log.get("mud_density")
    if logged is None or np.isfinite(logged).sum() < FEWEST:
        return ""
    own, read = well.fluid.typical, float(np.nanmedian(logged))
    if own > 0.0 and abs(read / own - 1.0) <= MUD_OFF:
        return ""
    return (
        f"The mud density logged, {show(read, 'density')} at the median, is not the case's, "
        f"{show(own, 'density')}; the case's was used. One of them is another day's, another unit's or the "
        "wrong one."
    )


def _string(rig: RigView, well: Well) -> str:
    """Hold steady weights against what the string listed weighs in this mud."""
    block = rig.block_weight
    if rig.steady is None or not block.determined or block.source == "steady weights":
        return ""
    for name, allowed, bit, weight in _free_weights(rig.steady):
        ratios = (weight - block.value) / well.rotating_weight(bit)
        ratio = float(np.median(ratios))
        if not np.isfinite(ratio):
            continue
        if abs(ratio - 1.0) <= allowed:
            return ""
        return (
            f"The string does not fit the {name}: {len(bit)} of them show {100.0 * ratio:.0f} % of what the "
            f"string listed weighs in this mud. Likely {_misfit(ratio, well)}."
        )
    return ""


def _free_weights(steady: Steady) -> Iterator[tuple[str, float, Floats, Floats]]:
    """Give weights that friction has little part in, the best first: name, tolerance, bit depths, weights."""
    turned = steady.of("rotating")
    deep = turned.bit > 0.5 * np.max(turned.bit, initial=0.0)
    if deep.sum() >= FEWEST_WEIGHTS:
        yield "rotating weights", WEIGHT_OFF, turned.bit[deep], turned.value[deep]
    up, down = steady.of("pick_up"), steady.of("slack_off")
    if len(up.bit) == 0 or len(down.bit) == 0:
        return
    apart = np.abs(up.bit[:, None] - down.bit[None, :])
    beside = apart.argmin(axis=1)
    good = (apart.min(axis=1) <= BESIDE) & (up.bit > 0.5 * up.bit.max())
    if good.sum() >= FEWEST_WEIGHTS:
        middle = 0.5 * (up.value + down.value[beside])
        yield "means of pick-up and slack-off weights", MIDDLE_OFF, up.bit[good], middle[good]


def _misfit(ratio: float, well: Well) -> str:
    """Name what would make a string weigh this part of what is listed."""
    causes = ["components missing from or wrong in the string table", "a wrong block weight"]
    if well.trajectory.inclination.max() > LEANS:
        causes.append(f"a hole that leans {'more' if ratio < 1.0 else 'less'} than the survey does")
    fitting = STEEL * (1.0 - ratio * (1.0 - well.fluid.typical / STEEL))
    if MUDS[0] <= fitting <= MUDS[1]:
        muds = [show(density, "density") for density in (fitting, well.fluid.typical)]
        causes.insert(0, f"a mud of {muds[0]} instead of {muds[1]}")
    return f"{', '.join(causes[:-1])} or {causes[-1]}"


def _files(log: TimeLog) -> tuple[str, ...]:
    """Hold channels of files that follow one another at like depth against one another."""
    said = []
    for first, second in zip(log.files, log.files[1:], strict=False):
        rows = [(log.time >= f.start) & (log.time <= f.end) for f in (first, second)]
        depths = [log.values["bit_depth"][r] for r in rows]
        if any(np.isfinite(d).sum() < FEWEST for d in depths):
            continue
        if abs(np.nanmedian(depths[0]) - np.nanmedian(depths[1])) > ALIKE:
            continue
        for channel, ratios in UNIT_RATIOS.items():
            words = _ratio(log, rows, channel, ratios)
            if words:
                said.append(f"{first.name} and {second.name}: {words}")
    return tuple(said)


def _ratio(log: TimeLog, rows: list[NDArray[np.bool_]], channel: str, ratios: dict[str, float]) -> str:
    """Say that a channel jumps by what a mistaken unit makes, from one file to the next."""
    values = log.get(channel)
    if values is None:
        return ""
    middles = []
    for r in rows:
        part = values[r]
        busy = np.isfinite(part) & (np.abs(part) > 0.02 * np.nanmax(np.abs(values)))
        if channel == "torque" and (rpm := log.get("rpm")) is not None:
            busy &= rpm[r] > 20.0
        if busy.sum() < FEWEST:
            return ""
        middles.append(float(np.median(part[busy])))
    if not all(middle > 0.0 for middle in middles):
        return ""
    ratio = max(middles) / min(middles)
    for pair, wanted in ratios.items():
        if abs(ratio / wanted - 1.0) < RATIO_NEAR and ratio > 1.0 + 2.0 * RATIO_NEAR:
            low, high = (show(m, BY_NAME[channel].quantity) for m in sorted(middles))
            name = channel.replace("_", " ")
            return (
                f"{name} is {high} at the median in one and {low} in the other at like depth; the ratio "
                f"{ratio:.2f} is that of {pair}. If it is, give the unit under [logs.channels]."
            )
    return ""
