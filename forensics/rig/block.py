"""In slips or not, what the hook carries then, and so the weight of the block."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from forensics.case import RigSettings
from forensics.estimate import Estimate
from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.noise import Bools, Floats, Runs
from forensics.rig.signals import Signals

# Window over which the block must be seen to move while the bit stays [s], and how far [m].
_EVIDENCE_WINDOW = 20.0
_EVIDENCE_TRAVEL = 0.5
# The bit may wander this far in slips, as the slips take hold [m].
_SLIP_WANDER = 0.4
# ... or by this share of what the block travels meanwhile.
_WANDER_SHARE = 0.05
# A stretch in slips in which the block never moved must last this long [s].
_LEAST_STILL = 20.0
# Interruptions of a connection shorter than this are bridged: stabbing, make-up torque [s].
_BRIDGE = 20.0
# In slips the hookload lies within this of its plateau: a share of it, or a stand of heavy pipe [N].
_PLATEAU_SHARE = 0.05
_STAND_WEIGHT = 22e3
# ... but never more than this share of the string's own weight, which it must stay away from.
_STRING_SHARE = 0.3
# Two plateaus are told apart when this far from each other at least [N].
_LEAST_SPLIT = 3e3
_Z90 = 1.645


@dataclass(frozen=True)
class Plateau:
    """Hookload in slips: `level` [N], half-width that holds nearly all of it [N], readings behind it."""

    level: float
    width: float
    samples: int


@dataclass(frozen=True)
class Slips:
    """Which rows are in slips, the plateau they were learned from (None: none), and how they were found."""

    rows: Bools
    plateau: Plateau | None
    source: str


def find_slips(log: TimeLog, signals: Signals, string_weight: Floats) -> Slips:
    """Decide for each row whether the string hung in slips.

    A `slips` channel is believed where it agrees with physics. Otherwise the plateau is learned from
    moments at which the block moved and the bit did not, and a stretch near it counts as slips when
    the bit stays and the block either travels or rests for a while.

    Parameters
    ----------
    log : TimeLog
        For the `slips` channel.
    signals : Signals
        Filled channels.
    string_weight : ndarray, shape (n,)
        Modelled hanging weight of the string, without friction [N].

    Returns
    -------
    Slips
        Rows, plateau and source.
    """
    flagged = _believed_flags(log, signals)
    if flagged is not None:
        return Slips(flagged, _plateau_of(signals.hookload[_inner(flagged)], signals), "slips channel")
    plateau = learn_plateau(signals, string_weight)
    if plateau is None:
        return Slips(np.zeros(len(signals.time), dtype=bool), None, "no in-slips reading")
    return Slips(_near_plateau(signals, plateau, string_weight), plateau, "in-slips plateau")


def learn_plateau(signals: Signals, string_weight: Floats) -> Plateau | None:
    """Learn the hookload in slips from moments at which the block moved and the bit did not.

    Parameters
    ----------
    signals : Signals
        Filled channels; without a block channel the low one of two hookload levels at rest is taken.
    string_weight : ndarray, shape (n,)
        Modelled hanging weight of the string [N].

    Returns
    -------
    Plateau or None
        None where the log shows no such moment.
    """
    still = _bit_still(signals)
    if signals.block is None:
        return _low_level(signals, still, string_weight)
    moved = _excursion(signals.block, signals) > _EVIDENCE_TRAVEL + noise.NOISE_FACTOR * signals.block_noise
    evidence = moved & still & ~signals.missing
    if evidence.sum() < noise.LEAST_SAMPLES:
        return _low_level(signals, still, string_weight)
    held = signals.hookload[evidence]
    # The string can be stuck while the block stretches it: such readings stand high, slips stand low.
    weight = float(np.median(string_weight[evidence]))
    low = held[held < np.quantile(held, 0.1) + 0.5 * weight]
    return _plateau_of(low, signals)


def block_weight(slips: Slips, signals: Signals, hookload: Floats, rig: RigSettings) -> Estimate | None:
    """Weight of everything on the sensor that is not the string.

    Parameters
    ----------
    slips : Slips
        Rows in slips.
    signals : Signals
        For the noise and the sampling.
    hookload : ndarray, shape (n,)
        Hookload corrected for the sheaves [N].
    rig : RigSettings
        What the case gives.

    Returns
    -------
    Estimate or None
        Block weight [N]; None where neither case nor log tells it.

    Notes
    -----
    The sensor may show the block alone and, at other moments, the block with a stand. Where two
    levels stand apart the lower one is the block.
    """
    if not rig.hookload_includes_block:
        return Estimate(0.0, 0.0, 0.0, "sensor tared, by the case file")
    if rig.block_weight is not None:
        w = rig.block_weight
        return Estimate(w, w, w, "case file")
    inner = _inner(slips.rows) & ~signals.missing
    if slips.plateau is None or not inner.any():
        return None
    levels = _run_levels(hookload, inner)
    held = hookload[inner]
    cut = _split(held, signals.hookload_noise)
    chosen = held if cut is None else held[held < cut]
    value = float(np.median(chosen))
    scatter = float(np.median(np.abs(chosen - value))) * 1.4826
    drift = float(np.median(np.abs(levels - np.median(levels)))) * 1.4826 if cut is None else scatter
    half = max(_Z90 * max(scatter, drift) / max(len(levels), 1) ** 0.5, 2 * signals.smooth_noise(60.0), 5e2)
    words = "in-slips plateau" if cut is None else "lower of two in-slips plateaus"
    return Estimate(value, value - half, value + half, words, samples=int(inner.sum()))


def fill_block(signals: Signals, slips: Bools) -> Floats:
    """Give the block height, from the bit's depth out of slips where there is none [m]; else NaN."""
    if signals.block is not None:
        return signals.block
    height = -signals.bit
    runs = noise.runs_of(~slips)
    out = np.full(len(height), np.nan)
    for start, stop in zip(runs.start, runs.stop, strict=True):
        # Lowest point of each stand as zero: the true height at the rotary isn't known.
        out[start:stop] = height[start:stop] - height[start:stop].min()
    return out


def _excursion(values: Floats, signals: Signals) -> Floats:
    window = noise.window_seconds(_EVIDENCE_WINDOW, signals.interval)
    return np.abs(noise.rate(values, signals.time, window)) * window


def _bit_still(signals: Signals) -> Bools:
    limit = 0.1 * _EVIDENCE_TRAVEL + noise.NOISE_FACTOR * signals.bit_noise
    return _excursion(signals.path, signals) < limit


def _plateau_of(held: Floats, signals: Signals) -> Plateau | None:
    if held.size < noise.LEAST_SAMPLES:
        return None
    level = float(np.median(held))
    scatter = float(np.median(np.abs(held - level))) * 1.4826
    width = max(
        _PLATEAU_SHARE * abs(level),
        _STAND_WEIGHT,
        noise.NOISE_FACTOR * max(signals.hookload_noise, scatter / 2),
    )
    return Plateau(level, width, int(held.size))


def _low_level(signals: Signals, still: Bools, string_weight: Floats) -> Plateau | None:
    """Find the lower of two levels at rest, if what lies between is about the string's weight."""
    rest = signals.hookload[still & ~signals.missing]
    if rest.size < 4 * noise.LEAST_SAMPLES:
        return None
    order = np.sort(rest)
    weight = float(np.median(string_weight))
    jump = np.diff(order)
    k = int(np.argmax(jump))
    low, high = order[: k + 1], order[k + 1 :]
    if min(low.size, high.size) < noise.LEAST_SAMPLES or low[-1] - low[0] > 0.5 * weight:
        low = order[order < order[0] + 0.25 * weight]
        high = order[order > order[0] + 0.4 * weight]
        between = rest.size - low.size - high.size
        if min(low.size, high.size) < noise.LEAST_SAMPLES or between > 0.1 * low.size:
            return None
    apart = float(np.median(high) - np.median(low))
    if not 0.4 * weight < apart < 2.0 * weight:
        return None
    return _plateau_of(low, signals)


def _near_plateau(signals: Signals, plateau: Plateau, string_weight: Floats) -> Bools:
    """Find rows near the plateau, in stretches through which the bit stayed where it was."""
    room = np.maximum(_STRING_SHARE * string_weight, 3 * signals.hookload_noise)
    width = np.minimum(plateau.width, room)
    # Below the plateau nothing can pull but the hand that pushes: allow it twice the width.
    near = (signals.hookload < plateau.level + width) & (signals.hookload > plateau.level - 2 * width)
    near &= ~signals.missing
    runs = _bridge(noise.runs_of(near), signals)
    wander = _SLIP_WANDER + noise.NOISE_FACTOR * signals.bit_noise
    gone = np.zeros(len(runs)) if signals.block is None else noise.span_in(signals.block, runs)
    stays = noise.span_in(signals.path, runs) < np.maximum(wander, _WANDER_SHARE * gone)
    lasts = signals.time[runs.stop - 1] - signals.time[runs.start] >= _LEAST_STILL - signals.interval
    travels = gone > 1.0 + noise.NOISE_FACTOR * signals.block_noise
    kept = stays & (travels | lasts)
    return noise.rows_of(Runs(runs.start[kept], runs.stop[kept]), len(near))


def _bridge(runs: Runs, signals: Signals) -> Runs:
    """Join stretches that a moment interrupts through which the bit didn't move."""
    if len(runs) < 2:
        return runs
    pause = Runs(runs.stop[:-1], runs.start[1:])
    wide = Runs(np.maximum(pause.start - 1, 0), np.minimum(pause.stop + 1, len(signals.bit)))
    limit = _SLIP_WANDER + noise.NOISE_FACTOR * signals.bit_noise
    short = signals.time[pause.stop] - signals.time[pause.start - 1] <= max(_BRIDGE, 3 * signals.interval)
    joined = short & (noise.span_in(signals.path, wide) < limit)
    return Runs(runs.start[np.append(True, ~joined)], runs.stop[np.append(~joined, True)])


def _believed_flags(log: TimeLog, signals: Signals) -> Bools | None:
    """Take the `slips` channel, if the hook is lighter and the bit stays where it says so."""
    flag = log.get("slips")
    if flag is None:
        return None
    inside = noise.fill(flag) > 0.5
    if inside.sum() < noise.LEAST_SAMPLES or inside.all():
        return None
    runs = noise.runs_of(inside)
    wander = _SLIP_WANDER + noise.NOISE_FACTOR * signals.bit_noise
    stays = np.median(noise.span_in(signals.path, runs)) < wander
    lighter = np.median(signals.hookload[inside]) < np.quantile(signals.hookload[~inside], 0.1)
    return inside if stays and lighter else None


def _inner(rows: Bools) -> Bools:
    """Keep rows with two neighbours on each side inside: setting and pulling slips is left out."""
    inner = rows.copy()
    for shift in (1, 2):
        inner[shift:] &= rows[:-shift]
        inner[:-shift] &= rows[shift:]
    return inner if inner.any() else rows


def _run_levels(hookload: Floats, rows: Bools) -> Floats:
    runs = noise.runs_of(rows)
    return np.array([np.median(hookload[a:b]) for a, b in zip(runs.start, runs.stop, strict=True)])


def _split(held: Floats, level: float) -> float | None:
    """Find the hookload between two plateaus, None where there is one."""
    order = np.sort(held)
    trimmed = order[len(order) // 50 : len(order) - len(order) // 50]
    if trimmed.size < 20:
        return None
    total = np.cumsum(trimmed)
    count = np.arange(1, trimmed.size)
    left = total[:-1] / count
    right = (total[-1] - total[:-1]) / (trimmed.size - count)
    between = count * (trimmed.size - count) * (right - left) ** 2
    k = int(np.argmax(between))
    apart = right[k] - left[k]
    spread = max(float(np.std(trimmed[: k + 1])), float(np.std(trimmed[k + 1 :])))
    share = min(k + 1, trimmed.size - k - 1) / trimmed.size
    if apart < max(_LEAST_SPLIT, noise.NOISE_FACTOR * level) or apart < 4 * spread or share < 0.05:
        return None
    return float(0.5 * (left[k] + right[k]))
