"""Logs by depth as a second witness of the time log: torque, weight on bit and mud where hole was made."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import permutations

import numpy as np
from numpy.typing import NDArray

from forensics import units
from forensics.channels import BY_NAME
from forensics.logs.depth_log import WITNESSED, DepthLog
from forensics.logs.repeats import REPEATING
from forensics.logs.table import FileRecord, Step
from forensics.units import show

Floats = NDArray[np.float64]
# Depth is cut into bins of this [m]; a bin drilled faster than this was tripped through [m/s].
BIN, FASTEST = 1.0, 0.08
# Bins that both logs must share; readings below this part of a large one say nothing of a ratio.
FEWEST, LOUD = 30, 0.05
# Part by which the two may differ at the median.
ALIKE = {"torque": 0.1, "wob": 0.15, "mud_density": 0.02}
# A ratio this near that of two units is theirs.
NEAR = 0.05
# Units a column of each kind may be in by mistake.
MISTAKEN = {
    "torque": ("N.m", "daN.m", "kN.m", "kdaN.m", "ft.lbf", "kft.lbf"),
    "wob": ("kN", "kdaN", "klbf", "tonnef", "kgf", "lbf"),
    "mud_density": ("kg/m3", "g/cm3", "ppg"),
}


@dataclass(frozen=True)
class Drilled:
    """The time log by depth, where it made hole: one value a bin of depth for each channel."""

    bins: NDArray[np.int64]
    values: dict[str, Floats]


def hold_against_depth(
    time: Floats, values: dict[str, Floats], logs: Sequence[DepthLog], files: Sequence[FileRecord]
) -> tuple[list[Step], list[str]]:
    """Hold the time log against logs by depth of the same hole.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Stamps [s].
    values : mapping of str to ndarray, shape (n,)
        Channels of the time log [SI].
    logs : sequence of DepthLog
        What the case names.
    files : sequence of FileRecord
        Files of the time log, for the units it was read in.

    Returns
    -------
    steps : list of Step
        What was compared, over how many metres, and how it came out.
    warnings : list of str
        Contradictions, each with its likely fix.
    """
    if not logs:
        return [], []
    drilled = _drilled(time, values)
    read_in = {c.channel: c.unit for record in files for c in record.columns if c.channel in WITNESSED}
    steps: list[Step] = []
    said: list[str] = []
    for log in logs:
        for channel in WITNESSED:
            if channel not in log.values or channel not in drilled.values:
                continue
            mine, its = _at_same_depth(drilled, channel, log)
            step, words = _judge(channel, mine, its, log, read_in.get(channel))
            steps.append(step)
            said += [words] if words else []
        if log.repeats.share >= REPEATING:
            steps.append(Step("repeats the row before", log.repeats.same, detail=log.path.name))
            said.append(
                f"{log.path.name}: {100.0 * log.repeats.share:.0f} % of {log.repeats.rows} rows repeat "
                "torque and WOB of the row before: step-filled, one reading every "
                f"{log.repeats.stride:.0f} rows"
            )
        if not set(log.values) & set(drilled.values):
            said.append(f"{log.path.name} has no channel to hold the time log against: torque, WOB or mud")
    return steps, said


def _drilled(time: Floats, values: dict[str, Floats]) -> Drilled:
    """Take the median of each channel over every metre while it was drilled."""
    bit = values["bit_depth"]
    hole = np.fmax.accumulate(np.where(np.isfinite(bit), bit, -np.inf))
    deepest = values.get("hole_depth")
    if deepest is not None:
        hole = np.fmax(hole, np.where(np.isfinite(deepest), deepest, -np.inf))
    with np.errstate(invalid="ignore"):
        making = np.isfinite(bit) & (bit >= hole - 0.2) & (bit > 0.0)
    rows = np.flatnonzero(making)
    number = np.floor(bit[rows] / BIN).astype(np.int64)
    spent = np.minimum(np.diff(time, append=time[-1:]), 60.0)[rows]
    bins, place = np.unique(number, return_inverse=True)
    slow = np.bincount(place, spent, len(bins)) >= BIN / FASTEST
    cut = {}
    turning = values.get("rpm")
    for channel in WITNESSED:
        if channel not in values:
            continue
        data = values[channel][rows]
        if channel == "torque" and turning is not None:
            data = np.where(turning[rows] > 20.0, data, np.nan)
        cut[channel] = np.where(slow, _medians(place, data, len(bins)), np.nan)
    return Drilled(bins, cut)


def _medians(place: NDArray[np.intp], data: Floats, count: int) -> Floats:
    """Median of the values of each bin, shape (count,); NaN where a bin has none."""
    known = np.isfinite(data)
    place, data = place[known], data[known]
    order = np.lexsort((data, place))
    place, data = place[order], data[order]
    out = np.full(count, np.nan)
    here, first, size = np.unique(place, return_index=True, return_counts=True)
    out[here] = 0.5 * (data[first + (size - 1) // 2] + data[first + size // 2])
    return out


def _at_same_depth(drilled: Drilled, channel: str, log: DepthLog) -> tuple[Floats, Floats]:
    """Values of both logs in the bins they share."""
    number = np.floor(log.depth / BIN).astype(np.int64)
    bins, place = np.unique(number, return_inverse=True)
    its = _medians(place, log.values[channel], len(bins))
    _, one, other = np.intersect1d(drilled.bins, bins, assume_unique=True, return_indices=True)
    mine, its = drilled.values[channel][one], its[other]
    both = np.isfinite(mine) & np.isfinite(its)
    return mine[both], its[both]


def _judge(
    channel: str, mine: Floats, its: Floats, log: DepthLog, read_in: str | None
) -> tuple[Step, str | None]:
    """Say whether the two agree, and if not, what mistake would make them."""
    name, words = log.path.name, channel.replace("_", " ")
    loud = np.zeros(0, dtype=bool)
    if len(mine):
        # By the 90th percentile: a null smeared by averaging may be the largest of all.
        loud = (mine > LOUD * np.percentile(np.abs(mine), 90)) & (its > LOUD * np.percentile(np.abs(its), 90))
    if loud.sum() < FEWEST:
        detail = f"{name}: {int(loud.sum())} m in common, too few to tell"
        return Step("held against a log by depth", int(loud.sum()), channel, detail), None
    ratio = float(np.median(its[loud] / mine[loud]))
    step = Step(
        "held against a log by depth", int(loud.sum()), channel,
        f"{name}: {ratio:.3g} times the time log at the median, over {int(loud.sum())} m of the same depths",
    )  # fmt: skip
    if abs(ratio - 1.0) <= ALIKE[channel]:
        return step, None
    quantity = BY_NAME[channel].quantity
    shown = [show(float(np.median(v[loud])), quantity) for v in (its, mine)]
    fix = _likely(channel, ratio, (log.units[channel], read_in), name)
    fix = fix or _tared(channel, mine[loud], its[loud])
    fix = fix or "one of them is another sensor's, another run's, or not as drilled"
    return step, (
        f"{name} shows {words} {ratio:.3g} times the time log's at the same depths ({shown[0]} against "
        f"{shown[1]} at the median over {int(loud.sum())} m): {fix}"
    )


def _likely(channel: str, ratio: float, read_in: tuple[str, str | None], name: str) -> str | None:
    """Name the unit that, taken for the one read, makes this ratio."""
    quantity = BY_NAME[channel].quantity
    fixes = []
    for unit, wanted, whose in ((read_in[0], 1.0 / ratio, name), (read_in[1], ratio, "the time log")):
        if unit is None or units.is_blank(unit):
            continue
        scale = units.factor(unit, quantity).scale * wanted
        fits = [u for u in MISTAKEN[channel] if abs(units.factor(u, quantity).scale / scale - 1.0) < NEAR]
        fixes += [f"{whose} is in {u}, not {unit}" for u in fits[:1]]
    if not fixes:
        return _converted(channel, ratio)
    return f"likely {' or '.join(fixes)}; if the time log is wrong, give its unit under [logs.channels]"


def _converted(channel: str, ratio: float) -> str | None:
    """Tell a ratio of two units neither log claims to be in."""
    scales = {unit: units.factor(unit, BY_NAME[channel].quantity).scale for unit in MISTAKEN[channel]}
    for one, other in permutations(scales, 2):
        if abs(scales[one] / scales[other] / ratio - 1.0) < NEAR:
            return f"the ratio is that of {one} and {other}; one of them may have been converted wrongly"
    return None


def _tared(channel: str, mine: Floats, its: Floats) -> str | None:
    """Tell a weight zeroed elsewhere by its steady difference."""
    apart = its - mine
    low, middle, high = np.percentile(apart, [25, 50, 75])
    if channel != "wob" or high - low > 0.5 * abs(middle):
        return None
    return f"they stand {show(abs(float(middle)), 'force')} apart throughout: likely zeroed at another weight"
