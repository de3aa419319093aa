"""What is wrong with the samples: set aside by reason and counted, never erased in silence."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from forensics.channels import BY_NAME
from forensics.logs.frozen import FREEZABLE, find_frozen
from forensics.logs.spikes import COARSE, find_jumps, find_spikes, rule_for
from forensics.logs.table import Reason, Step

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
POSITIONS = ("bit_depth", "hole_depth", "block_position")
SPIKY = (
    "hookload",
    "hookload_max",
    "wob",
    "torque",
    "standpipe_pressure",
    "differential_pressure",
    "flow_in",
)
# A pump or a pressure may well be off for one coarse sample.
SPIKY_COARSE = ("hookload", "hookload_max", "wob", "torque")
# Channels for which nothing but zeros means that nobody measured them.
ZERO_IS_MISSING = frozenset(
    [
        *(
            "hole_depth",
            "block_position",
            "hookload_max",
            "flow_out",
            "mud_density",
            "pit_volume",
            "rop",
            "slips",
        ),
        *("differential_pressure", "toolface", "downhole_wob", "downhole_torque"),
    ]
)
# Zeros here are missing only if the other channel shows that there was something to measure.
ZERO_CONTRADICTED = {
    "torque": ("rpm", 5.0),
    "rpm": ("torque", 1.0e3),
    "flow_in": ("standpipe_pressure", 2.0e6),
    "standpipe_pressure": ("flow_in", 5.0e-3),
}
CONSTANT_IS_FAULT = ("block_position", "torque", "standpipe_pressure", "wob", "hookload_max")
_CAUSES = {"hookload": Reason.SPIKE_HOOKLOAD, "bit_depth": Reason.SPIKE_DEPTH}


@dataclass
class Cleaning:
    """Channels under cleaning with the account of what was done.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Stamps [s].
    values : dict of str to ndarray, shape (n,)
        Channels [SI]; set aside means NaN.
    cause : dict of str to ndarray of int8, shape (n,)
        `Reason` for each sample set aside in hookload and bit depth.
    """

    time: Floats
    values: dict[str, Floats]
    interval: float
    steps: list[Step] = field(default_factory=list)
    warnings: list[str] = field(default_factory=list)
    cause: dict[str, NDArray[np.int8]] = field(default_factory=dict)

    def set_aside(self, channel: str, where: Bools, reason: Reason, name: str, detail: str = "") -> None:
        """Blank samples of a channel and count them."""
        where = where & np.isfinite(self.values[channel])
        count = int(where.sum())
        if count == 0:
            return
        self.values[channel] = np.where(where, np.nan, self.values[channel])
        if channel in self.cause:
            self.cause[channel][where] = reason
        self.steps.append(Step(name, count, channel, detail))

    def drop(self, channel: str, name: str, why: str) -> None:
        """Leave a whole channel out."""
        count = int(np.isfinite(self.values.pop(channel)).sum())
        self.steps.append(Step(name, count, channel, why))
        self.warnings.append(f"{channel.replace('_', ' ')} left out: {why}")


def clean(time: Floats, values: dict[str, Floats], interval: float) -> Cleaning:
    """Find faults of the samples, in an order in which none hides behind another.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Stamps, strictly increasing [s].
    values : dict of str to ndarray, shape (n,)
        Channels [SI], null codes already NaN.
    interval : float
        Usual sampling interval [s].

    Returns
    -------
    Cleaning
        The channels with their faults set aside, and the account.
    """
    work = Cleaning(time, dict(values), interval)
    for channel, reason in (("hookload", Reason.NULL_HOOKLOAD), ("bit_depth", Reason.NULL_DEPTH)):
        missing = ~np.isfinite(values[channel])
        work.cause[channel] = np.where(missing, np.int8(reason), np.int8(0)).astype(np.int8)
    _silent_channels(work)
    _out_of_range(work)
    for channel in POSITIONS:
        if channel in work.values:
            jumps = find_jumps(work.values[channel], time)
            work.set_aside(channel, jumps, Reason.SPIKE_DEPTH, "spike", "jumps away and back")
    for channel in SPIKY if interval < COARSE else SPIKY_COARSE:
        if channel in work.values:
            spikes = find_spikes(work.values[channel], rule_for(channel, interval))
            reason = _CAUSES.get(channel, Reason.SPIKE_HOOKLOAD)
            work.set_aside(channel, spikes, reason, "spike", "leaves the running median and returns")
    for channel in FREEZABLE:
        if channel in work.values:
            frozen = find_frozen(channel, work.values, interval)
            work.set_aside(channel, frozen, Reason.FROZEN, "frozen sensor", "one value while the rig moved")
    _fill_slow_depth(work)
    _gaps(work)
    return work


def _silent_channels(work: Cleaning) -> None:
    """Leave out channels that say nothing: all zero where that is no reading, or one value throughout."""
    for channel in list(work.values):
        data = work.values[channel]
        known = data[np.isfinite(data)]
        if channel in {"hookload", "bit_depth"} or len(known) == 0:
            continue
        if not known.any():
            other, level = ZERO_CONTRADICTED.get(channel, ("", 0.0))
            against = work.values.get(other)
            said = np.zeros(0) if against is None else np.abs(against[np.isfinite(against)])
            contradicted = said.size > 0 and bool(np.percentile(said, 95) > level)
            if channel in ZERO_IS_MISSING or contradicted:
                work.drop(channel, "all zero", "zero in every row, as where nothing is connected")
        elif channel in CONSTANT_IS_FAULT and len(known) >= 60 and known.min() == known.max():
            work.drop(channel, "constant throughout", "one value in every row")


def _out_of_range(work: Cleaning) -> None:
    for channel, data in list(work.values.items()):
        low, high = BY_NAME[channel].plausible
        with np.errstate(invalid="ignore"):
            outside = (data < low) | (data > high)
        work.set_aside(
            channel, outside, Reason.OUT_OF_RANGE, "out of range", f"below {low:g} or above {high:g}"
        )
        if channel not in {"hookload", "bit_depth"} and not np.isfinite(work.values[channel]).any():
            work.drop(channel, "no usable value", "no value is believable")


def _fill_slow_depth(work: Cleaning) -> None:
    """Interpolate a bit depth that comes at a lower rate than the rows, and say so."""
    depth = work.values["bit_depth"]
    known = np.flatnonzero(np.isfinite(depth) & (work.cause["bit_depth"] == 0))
    if len(known) < 3 or len(known) > 0.7 * len(depth):
        return
    gaps = np.diff(work.time[known])
    if np.percentile(gaps, 90) > max(30.0, 5.0 * work.interval):
        return
    filled = np.interp(work.time, work.time[known], depth[known], left=np.nan, right=np.nan)
    nearest = np.searchsorted(work.time[known], work.time).clip(1, len(known) - 1)
    near = gaps[nearest - 1] <= max(30.0, 5.0 * work.interval)
    fill = ~np.isfinite(depth) & np.isfinite(filled) & near & (work.cause["bit_depth"] == Reason.NULL_DEPTH)
    work.values["bit_depth"] = np.where(fill, filled, depth)
    work.cause["bit_depth"][fill] = 0
    work.steps.append(Step("interpolated", int(fill.sum()), "bit_depth", "recorded less often than the rows"))
    work.warnings.append("bit depth comes less often than the rows and was interpolated between its values")


def _gaps(work: Cleaning) -> None:
    steps = np.diff(work.time)
    wide = steps[steps > max(5.0 * work.interval, 5.0)] if len(steps) else steps
    if len(wide):
        total = f"{wide.sum():.0f} s in all, the longest {wide.max():.0f} s"
        work.steps.append(Step("gap", len(wide), detail=total))
