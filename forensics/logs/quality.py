"""What is wrong with the samples: set aside by reason and counted, never erased in silence."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from forensics.channels import BY_NAME
from forensics.logs.frozen import FREEZABLE, find_frozen
from forensics.logs.likely import likely_fix
from forensics.logs.repeats import REPEATING, find_repeats
from forensics.logs.saturated import CLIPPED, find_ceiling
from forensics.logs.slow import fill_between
from forensics.logs.spikes import COARSE, find_jumps, find_spikes, rule_for
from forensics.logs.table import Reason, Step
from forensics.logs.zeros import find_zeros
from forensics.units import show

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
POSITIONS = ("bit_depth", "hole_depth", "block_position")
# Channels whose last reading stands until the next where they come more slowly than the rows.
HELD = ("rpm", "torque", "wob", "standpipe_pressure", "flow_in")
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
# While the driver runs above its level, a channel below this was labelled with the wrong unit [SI].
LEAST_WHILE = {
    "torque": ("rpm", 20.0, 100.0),
    "rpm": ("torque", 3.0e3, 4.0),
    "standpipe_pressure": ("flow_in", 5.0e-3, 2.0e4),
    "flow_in": ("standpipe_pressure", 5.0e6, 1.0e-4),
}
# Flow that no pump reaches with the pressure low, through a string as long as a run needs [m3/s], and what is
# usual then: most flow [m3/s], least pressure [Pa] (common practice, no source).
FULL_FLOW = 0.02
UNUSUAL = {"flow_in": (0.0, 0.11), "standpipe_pressure": (2.5e6, np.inf)}
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
    read_in : mapping of str to str
        Units the channels were read in.
    """

    time: Floats
    values: dict[str, Floats]
    interval: float
    read_in: Mapping[str, str] = field(default_factory=dict)
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


def clean(
    time: Floats, values: dict[str, Floats], interval: float, read_in: Mapping[str, str] | None = None
) -> Cleaning:
    """Find faults of the samples, in an order in which none hides behind another.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Stamps, strictly increasing [s].
    values : dict of str to ndarray, shape (n,)
        Channels [SI], null codes already NaN.
    interval : float
        Usual sampling interval [s].
    read_in : mapping of str to str, optional
        Units the channels were read in, for the fix proposed where one must be wrong.

    Returns
    -------
    Cleaning
        The channels with their faults set aside, and the account.
    """
    work = Cleaning(time, dict(values), interval, read_in or {})
    for channel, reason in (("hookload", Reason.NULL_HOOKLOAD), ("bit_depth", Reason.NULL_DEPTH)):
        missing = ~np.isfinite(values[channel])
        work.cause[channel] = np.where(missing, np.int8(reason), np.int8(0)).astype(np.int8)
    _silent_channels(work)
    _out_of_range(work)
    _too_small(work)
    _unusual(work)
    for channel in POSITIONS:
        if channel in work.values:
            jumps = find_jumps(work.values[channel], time)
            work.set_aside(channel, jumps, Reason.SPIKE_DEPTH, "spike", "jumps away and back")
    _lost_zeros(work)
    for channel in SPIKY if interval < COARSE else SPIKY_COARSE:
        if channel in work.values:
            spikes = find_spikes(work.values[channel], rule_for(channel, interval))
            reason = _CAUSES.get(channel, Reason.SPIKE_HOOKLOAD)
            work.set_aside(channel, spikes, reason, "spike", "leaves the running median and returns")
    for channel in FREEZABLE:
        if channel in work.values:
            frozen = find_frozen(channel, work.values, interval)
            work.set_aside(channel, frozen, Reason.FROZEN, "frozen sensor", "one value while the rig moved")
    _ceilings(work)
    _repeats(work)
    _fill_slow(work)
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


def _lost_zeros(work: Cleaning) -> None:
    """Blank zeros that stand for "no value" in the hookload, and the torque that fell to zero with it."""
    values = work.values
    lost = find_zeros(work.time, values["hookload"], values["bit_depth"], values.get("block_position"))
    work.set_aside("hookload", lost, Reason.NULL_HOOKLOAD, "zero for no value", "the hook is never empty")
    if "torque" in values:
        work.set_aside("torque", lost & (values["torque"] == 0.0), Reason.NULL_HOOKLOAD, "zero for no value")


def _too_small(work: Cleaning) -> None:
    """Leave out channels far too small for their unit while what drives them ran."""
    for channel, (driver, running, least) in LEAST_WHILE.items():
        data, drive = work.values.get(channel), work.values.get(driver)
        if data is None or drive is None:
            continue
        said = np.abs(data[(drive > running) & np.isfinite(data)])
        if len(said) >= 60 and said.any() and np.percentile(said, 95) < least:
            top = show(float(np.percentile(said, 95)), BY_NAME[channel].quantity)
            fix = likely_fix(channel, said, work.read_in.get(channel))
            busy = BY_NAME[driver].meaning
            work.drop(channel, "absurd unit", f"no more than {top} while there was {busy}; {fix}")


def _unusual(work: Cleaning) -> None:
    """Say of flow and pressure that are possible but not usual in which unit they would be; they stay."""
    flow = work.values.get("flow_in")
    if flow is None:
        return
    with np.errstate(invalid="ignore"):
        pumping = flow > FULL_FLOW
    busy = {"flow_in": flow[pumping], "standpipe_pressure": np.zeros(0)}
    if "standpipe_pressure" in work.values:
        busy["standpipe_pressure"] = work.values["standpipe_pressure"][pumping]
    for channel, (low, high) in UNUSUAL.items():
        said = busy[channel][np.isfinite(busy[channel])]
        if len(said) < 60 or low <= np.percentile(said, 95) <= high:
            continue
        fix = likely_fix(channel, said, work.read_in.get(channel))
        if "likely" in fix:
            top = show(float(np.percentile(said, 95)), BY_NAME[channel].quantity)
            work.warnings.append(f"{channel.replace('_', ' ')} of {top} at full flow is not usual; {fix}")


def _out_of_range(work: Cleaning) -> None:
    for channel, data in list(work.values.items()):
        low, high = BY_NAME[channel].plausible
        with np.errstate(invalid="ignore"):
            outside = (data < low) | (data > high)
        if channel not in {"hookload", "bit_depth"} and _is_most(outside, data):
            quantity, odd = BY_NAME[channel].quantity, data[outside]
            middle = show(float(np.median(odd)), quantity)
            fix = likely_fix(channel, odd, work.read_in.get(channel))
            work.drop(channel, "no usable value", f"no value is believable, {middle} at the median; {fix}")
            continue
        limits = " or above ".join(show(limit, BY_NAME[channel].quantity) for limit in (low, high))
        work.set_aside(channel, outside, Reason.OUT_OF_RANGE, "out of range", f"below {limits}")


def _is_most(outside: Bools, data: Floats) -> bool:
    """Tell whether most of what a channel shows besides rest is beyond belief."""
    count = int(outside.sum())
    return count > 0 and count > 0.5 * int((np.isfinite(data) & (data != 0.0)).sum())


def _ceilings(work: Cleaning) -> None:
    """Say where a channel was cut off at its largest value; the readings stay, as the least they can be."""
    for channel in CLIPPED:
        if channel not in work.values or (found := find_ceiling(work.values[channel])) is None:
            continue
        top = show(found.value, BY_NAME[channel].quantity)
        detail = f"held at {top}, its largest value, for up to {found.longest} rows on end"
        work.steps.append(Step("at its ceiling", found.rows, channel, detail))
        work.warnings.append(
            f"{channel.replace('_', ' ')} was {detail}, {found.rows} rows in all: the end of the sensor's "
            "scale, or a limit of the drive; there it was this much or more"
        )


def _repeats(work: Cleaning) -> None:
    """Say how much of the log repeats the row before."""
    found = find_repeats(work.values, work.values["bit_depth"])
    if found.share < REPEATING:
        return
    share = f"{100.0 * found.share:.0f} % of {found.rows} rows logged while the bit moved"
    work.steps.append(Step("repeats the row before", found.same, detail=share))
    work.warnings.append(
        f"{share} repeat the row before in every mechanical channel: a step-filled record, in truth one "
        f"reading every {found.stride * work.interval:.0f} s"
    )


def _fill_slow(work: Cleaning) -> None:
    """Carry channels that come at a lower rate than the rows from reading to reading, and say so."""
    for channel in (*POSITIONS, *HELD):
        if channel not in work.values:
            continue
        filled, where = fill_between(work.time, work.values[channel], work.interval, hold=channel in HELD)
        if channel in work.cause:
            # What was set aside for a fault stays so.
            where &= work.cause[channel] <= Reason.NULL_DEPTH
            work.cause[channel][where] = 0
        if not where.any():
            continue
        work.values[channel] = np.where(where, filled, work.values[channel])
        how = "repeated" if channel in HELD else "interpolated"
        work.steps.append(Step(f"{how} between readings", int(where.sum()), channel, "slower than the rows"))
        words = channel.replace("_", " ")
        work.warnings.append(f"{words} comes less often than the rows and was {how} between its readings")


def _gaps(work: Cleaning) -> None:
    steps = np.diff(work.time)
    wide = steps[steps > max(5.0 * work.interval, 5.0)] if len(steps) else steps
    if len(wide):
        total = f"{wide.sum():.0f} s in all, the longest {wide.max():.0f} s"
        work.steps.append(Step("gap", len(wide), detail=total))
