"""Reference weights off bottom, carried along depth, and weight on bit reckoned from them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from forensics.estimate import Estimate
from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.noise import Bools, Floats
from forensics.rig.signals import Signals
from forensics.rig.steady import Steady
from forensics.rig.view import Tare

# Pairs of readings that tell how pipe above the rotary shows: block apart by so much [m], near in depth
# [m] and time [s].
_PAIR_BLOCK = 5.0
_PAIR_DEPTH = 60.0
_PAIR_TIME = 3600.0
_LEAST_PAIRS = 5
# Fewer readings with pumps on than this, and those without serve as well.
_LEAST_PUMPED = 3
# Weights of pipe and mud are known to about this share (one standard deviation).
_MODEL_SHARE = 0.007
# Differential pressure: averaged over this [s]; load shows above this [Pa] and so many wanders of its zero.
_ZERO_TIME = 9.0
_LEAST_PRESSURE = 5e4
_WANDERS = 1.5


@dataclass(frozen=True)
class Reference:
    """A reference weight at each row.

    `weight` [N], shape (n,), NaN where no reading tells it; `readings` behind it; `scatter` of a reading
    about its neighbours [N].
    """

    weight: Floats
    readings: Steady
    offset: Floats
    scatter: float

    @property
    def known(self) -> bool:
        """Whether any reading stands behind it."""
        return len(self.readings) > 0


def hanging_share(steady: Steady, base: Floats, hanging: float) -> float:
    """Share of the weight of the pipe between rotary and hook that shows in the hookload.

    Parameters
    ----------
    steady : Steady
        Steady readings; the rotating ones are used.
    base : ndarray, shape (n,)
        Modelled hanging weight below the rotary, by row of the log [N].
    hanging : float
        Weight per length of pipe above the rotary, mud in it [N/m].

    Returns
    -------
    float
        0 to 1; 1, as physics has it, where too few pairs of readings at different block heights tell.
    """
    turned = steady.of("rotating")
    if len(turned) < 2:
        return 1.0
    residual = turned.value - base[turned.start]
    lift = np.diff(turned.block)
    pair = (
        (np.abs(lift) > _PAIR_BLOCK)
        & (np.abs(np.diff(turned.bit)) < _PAIR_DEPTH)
        & (np.diff(turned.start) * 1.0 < _PAIR_TIME)
        & (turned.pumping[1:] == turned.pumping[:-1])
    )
    if pair.sum() < _LEAST_PAIRS:
        return 1.0
    slope = np.median(np.diff(residual)[pair] / lift[pair])
    return float(np.clip(slope / hanging, 0.0, 1.0))


def build_reference(kind: str, steady: Steady, base: Floats, signals: Signals) -> Reference:
    """Carry the readings of one kind along time and depth.

    Parameters
    ----------
    kind : str
        "rotating", "slack_off" or "pick_up".
    steady : Steady
        All steady readings.
    base : ndarray, shape (n,)
        Modelled weight that follows depth and block height [N].
    signals : Signals
        For time.

    Returns
    -------
    Reference
        Between readings the measured offset from the model is interpolated; outside it is held.

    Notes
    -----
    Drilling is done with pumps on, so readings with pumps on are preferred where there are a few.
    """
    chosen = steady.of(kind)
    if chosen.pumping.sum() >= _LEAST_PUMPED:
        chosen = chosen.take(chosen.pumping)
    if not len(chosen):
        return Reference(np.full(len(base), np.nan), chosen, np.zeros(0), 0.0)
    middle = (chosen.start + chosen.stop) // 2
    raw = chosen.value - base[middle]
    offset = noise.running_median(raw, 3) if len(raw) >= 3 else np.full(len(raw), np.median(raw))
    scatter = 1.4826 * float(np.median(np.abs(raw - offset))) if len(raw) >= 3 else 0.0
    carried = np.interp(signals.time, signals.time[middle], offset)
    return Reference(base + carried, chosen, offset, scatter)


def modelled_reference(empty: Reference, base: Floats, block_weight: Estimate) -> Reference:
    """Stand in for a rotating reference without readings: block weight and modelled string weight.

    Parameters
    ----------
    empty : Reference
        The reference without readings.
    base : ndarray, shape (n,)
        Modelled weight that follows depth and block height [N].
    block_weight : Estimate
        [N]

    Returns
    -------
    Reference
        Its scatter is what the weights of pipe and mud leave open.
    """
    weight = base + block_weight.value
    return Reference(weight, empty.readings, empty.offset, _MODEL_SHARE * float(np.median(base)))


def weight_on_bit(reference: Reference, hookload: Floats, rows: Bools) -> Floats:
    """Take hookload from reference on the rows given, NaN elsewhere [N]."""
    return np.where(rows, reference.weight - hookload, np.nan)


def rezero_pressure(log: TimeLog, signals: Signals, free: Bools) -> tuple[Floats, float]:
    """Re-zero the differential pressure on moments off bottom with steady pumps.

    Parameters
    ----------
    log : TimeLog
        Channel `differential_pressure`.
    signals : Signals
        Noise and sampling.
    free : ndarray of bool, shape (n,)
        Rows surely off bottom, pumps steady.

    Returns
    -------
    pressure : ndarray, shape (n,)
        Averaged and re-zeroed [Pa]; NaN where there is no channel or no moment to zero it on.
    level : float
        Pressure that counts as load: six times the noise left, or the wander of the zero between moments.
    """
    channel = log.get("differential_pressure")
    runs = noise.runs_of(free)
    count = signals.count(_ZERO_TIME)
    long = runs.stop - runs.start >= count
    if channel is None or not long.any():
        return np.full(len(log), np.nan), np.inf
    smooth = noise.running_mean(noise.fill(channel), count)
    runs = noise.Runs(runs.start[long], runs.stop[long])
    zeros = np.array([np.median(smooth[a:b]) for a, b in zip(runs.start, runs.stop, strict=True)])
    zero = np.interp(log.time, log.time[(runs.start + runs.stop) // 2], zeros)
    wander = 1.4826 * float(np.median(np.abs(np.diff(zeros)))) if len(zeros) > 1 else 0.0
    level = noise.NOISE_FACTOR * noise.short_noise(channel[free]) / count**0.5
    return smooth - zero, max(level, _WANDERS * wander, _LEAST_PRESSURE)


def list_tares(
    references: tuple[Reference, ...], kinds: tuple[str, ...], view_rows: TareRows
) -> tuple[Tare, ...]:
    """One tare for each stand and kind with readings in it."""
    out = []
    for reference, kind in zip(references, kinds, strict=True):
        readings = reference.readings
        for stand in np.unique(readings.stand):
            inside = readings.stand == stand
            start, stop = view_rows.span(int(stand))
            out.append(
                Tare(
                    start=start,
                    end=stop,
                    bit_depth=float(np.median(readings.bit[inside])),
                    kind=kind,
                    weight=float(np.median(readings.value[inside])),
                    offset=float(np.median(reference.offset[inside])),
                    samples=int((readings.stop - readings.start)[inside].sum()),
                )
            )
    return tuple(sorted(out, key=lambda tare: (tare.start, tare.kind)))


@dataclass(frozen=True)
class TareRows:
    """Where each stand begins and ends [s]; stands are parted by slips."""

    first: Floats
    last: Floats

    def span(self, stand: int) -> tuple[float, float]:
        """Start and end of a stand [s since 1970 UTC]."""
        return float(self.first[stand]), float(self.last[stand])


def stand_spans(slips: Bools, time: Floats) -> TareRows:
    """Stands as the times from one setting of slips to the next."""
    begins = np.flatnonzero(np.diff(slips.astype(np.int8), prepend=0) == 1)
    edges = np.concatenate(([0], begins))
    ends = np.append(begins, len(time) - 1)
    return TareRows(time[edges], time[ends])
