"""In slips or not, what the hook carries then, and so the weight of the block."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from forensics.case import RigSettings
from forensics.estimate import Estimate
from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.noise import Bools, Floats, Runs
from forensics.rig.setting import widen
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
# Where fewer moments than this show the plateau, readings may lie off it by this share.
_PLENTY = 60
_PLATEAU_SHARE = 0.05
# ... but never more than this share of the string's own weight, which it must stay away from.
_STRING_SHARE = 0.3
# Two plateaus are told apart when this far from each other at least [N], each with this share of readings.
_LEAST_SPLIT = 1e3
_LEAST_SHARE = 0.05
_FIT_ROUNDS = 60
# So many readings show the peaks as well as more would.
_ENOUGH = 2000
_Z90 = 1.645


@dataclass(frozen=True)
class Plateau:
    """Hookload in slips: `level` [N], how far readings lie `below` and `above` it [N], readings behind it."""

    level: float
    below: float
    above: float
    samples: int


@dataclass(frozen=True)
class Slips:
    """Which rows are in slips, the plateau they were learned from (None: none), and how they were found.

    `settled` leaves out the rows in which slips were being set or pulled.
    """

    rows: Bools
    plateau: Plateau | None
    source: str
    settled: Bools


def find_slips(log: TimeLog, signals: Signals, string_weight: Floats, stand_weight: float) -> Slips:
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
    stand_weight : float
        Weight in air of a stand of the top pipe, which may hang from the block in slips [N].

    Returns
    -------
    Slips
        Rows, plateau and source.
    """
    flagged = _believed_flags(log, signals)
    if flagged is not None:
        held = signals.hookload[_inner(flagged)]
        return Slips(flagged, _plateau_of(held, signals, stand_weight), "slips channel", flagged)
    plateau = learn_plateau(signals, string_weight, stand_weight)
    if plateau is None:
        nowhere = np.zeros(len(signals.time), dtype=bool)
        return Slips(nowhere, None, "no in-slips reading", nowhere)
    settled = _near_plateau(signals, plateau, string_weight)
    wander = _SLIP_WANDER + noise.NOISE_FACTOR * signals.bit_noise
    rows = widen(settled, signals, plateau.level, string_weight, wander)
    return Slips(rows, plateau, "in-slips plateau", settled)


def learn_plateau(signals: Signals, string_weight: Floats, stand_weight: float) -> Plateau | None:
    """Learn the hookload in slips from moments at which the block moved and the bit did not.

    Parameters
    ----------
    signals : Signals
        Filled channels; without a block channel the low one of two hookload levels at rest is taken.
    string_weight : ndarray, shape (n,)
        Modelled hanging weight of the string [N].
    stand_weight : float
        Weight in air of a stand of the top pipe [N].

    Returns
    -------
    Plateau or None
        None where the log shows no such moment.
    """
    still = _bit_still(signals)
    if signals.block is None:
        return _low_level(signals, still, string_weight, stand_weight)
    evidence = _block_alone(signals) & signals.weighed
    if evidence.sum() < noise.LEAST_SAMPLES:
        return _low_level(signals, still, string_weight, stand_weight)
    held = signals.hookload[evidence]
    # The string can be stuck while the block stretches it: such readings stand high, slips stand low.
    weight = float(np.median(string_weight[evidence]))
    low = held[held < np.quantile(held, 0.1) + 0.5 * weight]
    # A gap over which the block went up for the next stand looks like a block that moves alone.
    usual = float(np.quantile(signals.hookload[signals.weighed], 0.9))
    if usual - float(np.median(low)) < _STRING_SHARE * weight:
        return _low_level(signals, still, string_weight, stand_weight)
    return _plateau_of(low, signals, stand_weight)


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
    inner = _inner(slips.settled) & ~signals.missing
    if slips.plateau is None or not inner.any():
        return None
    levels = _run_levels(hookload, inner)
    held = hookload[inner]
    lower = _split(held, signals.hookload_noise)
    if lower is None:
        value = float(np.median(held))
        scatter = _robust_sigma(np.concatenate((held - value, levels - np.median(levels))))
    else:
        value, scatter = lower
    half = max(_Z90 * scatter / max(len(levels), 1) ** 0.5, 2 * signals.smooth_noise(60.0), 5e2)
    words = "in-slips plateau" if lower is None else "lower of two in-slips plateaus"
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


def _block_alone(signals: Signals) -> Bools:
    """Mark rows at which the block moves and the bit does not."""
    moved = _excursion(signals.block, signals) > _EVIDENCE_TRAVEL + noise.NOISE_FACTOR * signals.block_noise
    return moved & _bit_still(signals)


def _bit_still(signals: Signals) -> Bools:
    limit = 0.1 * _EVIDENCE_TRAVEL + noise.NOISE_FACTOR * signals.bit_noise
    return _excursion(signals.path, signals) < limit


def _plateau_of(held: Floats, signals: Signals, stand_weight: float) -> Plateau | None:
    """Plateau and its reach: what was seen in slips, and a stand on the block; more where little was seen."""
    if held.size < noise.LEAST_SAMPLES:
        return None
    level = float(np.median(held))
    low, high = np.quantile(held, (0.02, 0.98))
    reach = _PLATEAU_SHARE * abs(level) if held.size < _PLENTY else 0.0
    margin = noise.NOISE_FACTOR * signals.hookload_noise / noise.LEAST_SAMPLES**0.5
    return Plateau(
        level=level,
        below=max(level - float(low), reach, stand_weight) + margin,
        above=max(float(high) - level, reach, stand_weight) + margin,
        samples=int(held.size),
    )


def _robust_sigma(deviation: Floats) -> float:
    return 1.4826 * float(np.median(np.abs(deviation)))


def _low_level(signals: Signals, still: Bools, string_weight: Floats, stand_weight: float) -> Plateau | None:
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
    return _plateau_of(low, signals, stand_weight)


def _near_plateau(signals: Signals, plateau: Plateau, string_weight: Floats) -> Bools:
    """Find rows near the plateau, in stretches through which the bit stayed where it was."""
    room = np.maximum(_STRING_SHARE * string_weight, 3 * signals.hookload_noise)
    smooth = noise.running_median(signals.hookload, noise.LEAST_SAMPLES)
    near = smooth - plateau.level < np.minimum(plateau.above, room)
    near &= plateau.level - smooth < plateau.below
    if signals.block is not None:
        # Where no hookload was read, a block that moves without the bit is as good; where one was, the block
        # may carry more than usual, but not the string.
        alone = _block_alone(signals)
        light = signals.hookload - plateau.level < _STRING_SHARE * string_weight
        near = np.where(signals.weighed, near | (alone & light), alone)
    near &= ~signals.missing
    runs = _bridge(noise.runs_of(near), signals)
    wander = _SLIP_WANDER + noise.NOISE_FACTOR * signals.bit_noise
    gone = np.zeros(len(runs)) if signals.block is None else noise.span_in(signals.block, runs)
    # A bit depth bridged from the slips into the next move seems to move in slips already.
    seen = np.where(signals.read, signals.path, np.nan)
    stays = noise.span_in(seen, runs) < np.maximum(wander, _WANDER_SHARE * gone)
    lasts = _lasting(runs, signals) >= _LEAST_STILL
    travels = gone > 1.0 + noise.NOISE_FACTOR * signals.block_noise
    kept = stays & (travels | lasts)
    return noise.rows_of(Runs(runs.start[kept], runs.stop[kept]), len(near))


def _lasting(runs: Runs, signals: Signals) -> Floats:
    """Time each stretch may have lasted: a gap before or after it says nothing against it [s]."""
    after = np.append(signals.time, signals.time[-1] + signals.interval)[runs.stop]
    before = np.insert(signals.time, 0, signals.time[0] - signals.interval)[runs.start]
    return np.maximum(after - signals.time[runs.start], signals.time[runs.stop - 1] - before)


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


def _split(held: Floats, level: float) -> tuple[float, float] | None:
    """Find the lower of two plateaus and its scatter, None where there is one.

    Two normal peaks of one width, no narrower than the noise, are fitted by expectation and maximisation;
    they count as two when that fits the readings clearly better than one peak does.
    """
    order = np.sort(held)
    trimmed = order[len(order) // 50 : len(order) - len(order) // 50]
    trimmed = trimmed[:: max(1, trimmed.size // _ENOUGH)]
    if trimmed.size < 20:
        return None
    width = float(np.std(trimmed))
    least = max(level, 1.0)
    low, high = (float(q) for q in np.quantile(trimmed, (0.15, 0.85)))
    share, spread = 0.5, max(0.5 * width, least)
    for _ in range(_FIT_ROUNDS):
        near_low = share * np.exp(-0.5 * ((trimmed - low) / spread) ** 2)
        near_high = (1.0 - share) * np.exp(-0.5 * ((trimmed - high) / spread) ** 2)
        belongs = near_low / np.maximum(near_low + near_high, 1e-300)
        share = float(np.clip(np.mean(belongs), 0.01, 0.99))
        low = float(np.average(trimmed, weights=belongs + 1e-12))
        high = float(np.average(trimmed, weights=1.0 - belongs + 1e-12))
        apart = belongs * (trimmed - low) ** 2 + (1.0 - belongs) * (trimmed - high) ** 2
        spread = max(float(np.mean(apart)) ** 0.5, least)
    gain = float(np.sum(np.log(np.maximum(near_low + near_high, 1e-300) / spread)))
    single = max(width, least)
    gain -= float(np.sum(-0.5 * ((trimmed - trimmed.mean()) / single) ** 2 - np.log(single)))
    clear = high - low > max(_LEAST_SPLIT, 1.5 * spread) and gain > 0.02 * trimmed.size + 5.0
    return (low, spread) if clear and min(share, 1.0 - share) > _LEAST_SHARE else None
