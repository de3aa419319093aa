"""Short excursions that return: spikes of a signal and jumps no block can make.

A spike is one or two samples that leave the running median by far more than the noise around them
and come back to where they left. What stays away (slips set or pulled, the bit tagged, an overpull
held) is no spike, however fast it came: a running median of five follows it.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
BLOCK = 64
MAD = 1.4826
# From this sampling interval on a single sample can be an event of its own [s].
COARSE = 5.0
# Nothing on a rig moves the bit or the block faster [m/s].
TOP_SPEED = 5.0
# Excursions too small to matter, whatever the noise [SI].
FLOORS = {"hookload": 15e3, "hookload_max": 15e3, "wob": 15e3, "torque": 1.0e3, "standpipe_pressure": 5e5}


@dataclass(frozen=True)
class SpikeRule:
    """When an excursion is a spike.

    Parameters
    ----------
    longest : int
        Samples an excursion may last.
    noise : float
        Times the local noise it must exceed.
    share : float
        Share of the channel's own range (1st to 99th percentile) it must exceed.
    floor : float
        Size below which nothing is a spike [SI].
    beyond : float
        Share of the range outside which alone an excursion counts; 0 where it counts anywhere.
    """

    longest: int = 2
    noise: float = 8.0
    share: float = 0.04
    floor: float = 0.0
    beyond: float = 0.0


def rule_for(channel: str, interval: float) -> SpikeRule:
    """Give the rule for a channel at a sampling interval.

    Notes
    -----
    At 5 s and more a single sample can be a real event of its own (a joint picked up, a tag), so only
    what lies plainly outside everything else in the channel counts there.
    """
    floor = FLOORS.get(channel, 0.0)
    if interval >= COARSE:
        return SpikeRule(longest=1, noise=15.0, share=0.1, floor=floor, beyond=0.1)
    return SpikeRule(share=0.04 if channel == "hookload" else 0.1, floor=floor)


def find_spikes(values: Floats, rule: SpikeRule) -> Bools:
    """Find spikes.

    Parameters
    ----------
    values : ndarray, shape (n,)
        A channel, NaN where missing; missing samples are passed over.
    rule : SpikeRule
        When an excursion counts.

    Returns
    -------
    ndarray of bool, shape (n,)
        True at the samples of a spike.

    Notes
    -----
    Local noise is the larger of three neighbouring blocks' median absolute departure from the running
    median, blocks of 64 samples, so that a busy spell beside a calm one is not taken for spikes.
    """
    found = np.zeros(len(values), dtype=bool)
    place = np.flatnonzero(np.isfinite(values))
    if len(place) < 7:
        return found
    x = values[place]
    away = x - median_of_five(x)
    # The range is that of some twenty thousand samples: enough, and it costs a tenth.
    low, high = np.percentile(x[:: max(1, len(x) // 20000)], [1, 99])
    noise, span = rule.noise * _local_noise(away), float(high - low)
    out = np.abs(away) > np.maximum(noise, max(rule.floor, rule.share * span))
    if rule.beyond > 0.0:
        margin = max(rule.floor, rule.beyond * span)
        out &= (x < low - margin) | (x > high + margin)
    if not out.any():
        return found
    starts = np.flatnonzero(out & ~np.concatenate(([False], out[:-1])))
    ends = np.flatnonzero(out & ~np.concatenate((out[1:], [False])))
    for start, end in zip(starts, ends, strict=True):
        before, after = max(start - 1, 0), min(end + 1, len(x) - 1)
        same_side = (np.sign(away[start : end + 1]) == np.sign(away[start])).all()
        returns = abs(x[after] - x[before]) <= 0.3 * np.abs(away[start : end + 1]).min()
        if end - start < rule.longest and same_side and (returns or start == 0 or end == len(x) - 1):
            found[place[start : end + 1]] = True
    return found


def median_of_five(x: Floats) -> Floats:
    """Give the running median of five, the ends repeated, by a network of minima and maxima.

    Examples
    --------
    >>> median_of_five(np.array([1.0, 1.0, 9.0, 1.0, 2.0])).tolist()
    [1.0, 1.0, 1.0, 2.0, 2.0]
    """
    padded = np.concatenate((x[:1], x[:1], x, x[-1:], x[-1:]))
    a, b, c, d, e = (padded[k : k + len(x)] for k in range(5))
    low = np.maximum(np.minimum(a, b), np.minimum(d, e))
    high = np.minimum(np.maximum(a, b), np.maximum(d, e))
    return np.maximum(np.minimum(c, low), np.minimum(np.maximum(c, low), high))


def _local_noise(away: Floats) -> Floats:
    blocks = -(-len(away) // BLOCK)
    padded = np.concatenate((away, np.repeat(away[-1:], blocks * BLOCK - len(away))))
    # A quarter of a block's samples tell its median well enough, the larger of three blocks being taken.
    noise = MAD * np.median(np.abs(padded.reshape(blocks, BLOCK)[:, ::4]), axis=1)
    wide = np.concatenate((noise[:1], noise, noise[-1:]))
    return np.repeat(np.maximum.reduce((wide[:-2], wide[1:-1], wide[2:])), BLOCK)[: len(away)]


def find_jumps(values: Floats, time: Floats, floor: float = 2.0, longest: float = 120.0) -> Bools:
    """Find stretches where a depth or a height jumps away and back faster than anything moves.

    Parameters
    ----------
    values, time : ndarray, shape (n,)
        Position [m], NaN where missing, and stamps [s].
    floor : float
        Jump below which nothing is said [m].
    longest : float
        Longest stretch that counts, or ten samples where that is longer [s].

    Returns
    -------
    ndarray of bool, shape (n,)
        True at the samples that jumped away.
    """
    found = np.zeros(len(values), dtype=bool)
    place = np.flatnonzero(np.isfinite(values))
    if len(place) < 4:
        return found
    x, t = values[place], time[place]
    usual = float(np.median(np.diff(t)))
    longest = max(longest, 10.0 * usual)
    step = np.diff(x)
    big = np.flatnonzero(np.abs(step) > floor + TOP_SPEED * np.diff(t))
    i = 0
    while i < len(big):
        out = int(big[i])
        back = next((int(b) for b in big[i + 1 :] if _closes(x, t, out, int(b), floor, longest)), None)
        if back is not None:
            found[place[out + 1 : back + 1]] = True
            i = int(np.searchsorted(big, back, side="right"))
            continue
        # A jump with no way back is a fault of the record's edge, or a change of reference to keep.
        if i == 0 and out < 10 and len(x) > 40:
            found[place[: out + 1]] = True
        elif len(x) - out <= 10 and len(x) > 40:
            found[place[out + 1 :]] = True
        i += 1
    return found


def _closes(x: Floats, t: Floats, out: int, back: int, floor: float, longest: float) -> bool:
    span = t[back + 1] - t[out]
    jump = abs(x[out + 1] - x[out])
    return bool(span <= longest and abs(x[back + 1] - x[out]) <= max(floor, 0.2 * jump))
