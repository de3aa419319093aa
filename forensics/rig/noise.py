"""Noise, resolution and the small window tools every rule on rig signals is built from."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray
from scipy import ndimage

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
Ints = NDArray[np.int64]

# A threshold lies at least this many times the noise above zero.
NOISE_FACTOR = 6.0
# A window holds at least this many samples.
LEAST_SAMPLES = 3
# Standard deviation of x[i-1] - 2 x[i] + x[i+1] for white noise of unit standard deviation.
_SECOND_DIFFERENCE = 6.0**0.5
# A value held over more samples than this is a step, not a slow sensor.
_LONGEST_HELD = 5
# A rounded channel shows changes of this many steps somewhere.
_LEAST_LEVELS = 5
# This share of the second differences is taken for quiet; in white noise so much lies within so many sigma.
_QUIET_SHARE = 0.2
_QUIET_SIZE = 0.2533
# Standard deviation of a rounding error, in rounding steps.
_ROUNDING = 12.0**-0.5


class Runs(NamedTuple):
    """Stretches of consecutive True rows: rows `start` to `stop` - 1; both of shape (k,)."""

    start: Ints
    stop: Ints

    def __len__(self) -> int:
        """Count the stretches."""
        return len(self.start)


def resolution(values: Floats) -> float:
    """Find the rounding step of a channel, zero where every change differs.

    Parameters
    ----------
    values : ndarray, shape (n,)
        Samples in time order; NaN allowed.

    Returns
    -------
    float
        The step, in the channel's unit.
    """
    change = np.abs(np.diff(values))
    change = change[np.isfinite(change) & (change > _nothing(values))][:20000]
    if change.size < 8:
        return 0.0
    step = float(np.quantile(change, 0.02))
    # On and off is no rounding.
    if float(change.max()) < _LEAST_LEVELS * step:
        return 0.0
    off = np.abs(change / step - np.round(change / step))
    return step if float(np.quantile(off, 0.9)) < 0.1 else 0.0


def _nothing(values: Floats) -> float:
    """Give the size below which a difference is none: rounding left by a change of unit."""
    return 1e-9 * float(np.max(np.abs(values), initial=0.0, where=np.isfinite(values)))


def short_noise(values: Floats, at_rest: bool = False) -> float:
    """Short-term noise of a channel, one standard deviation, from its second differences.

    Second differences are blind to slow change, and their lower fifth to whatever the rig does, even where
    a slow log shows little but that. A sensor slower than the log repeats its readings, which are then
    counted once; a channel that holds each for long merely steps, and shows no noise but its rounding.

    Parameters
    ----------
    values : ndarray, shape (n,)
        Samples in time order; NaN allowed.
    at_rest : bool
        Rows that don't change count as quiet: of a block or a bit at rest between moves.

    Returns
    -------
    float
        Standard deviation, in the channel's unit; zero for fewer than three usable samples.
    """
    floor = resolution(values) * _ROUNDING
    good = values[np.isfinite(values)]
    tiny = _nothing(values)
    fresh = np.flatnonzero(np.abs(np.diff(good)) > tiny)
    if fresh.size < 8:
        return floor
    held = float(np.median(np.diff(fresh)))
    if held > _LONGEST_HELD:
        return floor
    told = good if held <= 1.0 else good[np.append(fresh, fresh[-1] + 1)]
    second = np.abs(told[2:] - 2.0 * told[1:-1] + told[:-2])
    moved = second[second > tiny]
    # Rows that repeat both neighbours count as silence only where most rows move, or may be at rest.
    kept = second if at_rest or moved.size > 0.5 * second.size else moved
    if not kept.size:
        return floor
    return max(float(np.quantile(kept, _QUIET_SHARE)) / _QUIET_SIZE / _SECOND_DIFFERENCE, floor)


def middle(values: Floats) -> float:
    """Median of a few values, NaN where one is missing or there are none.

    NumPy's own takes four times as long on a window's worth of samples.

    Examples
    --------
    >>> middle(np.array([3.0, 1.0, 2.0, 8.0]))
    2.5
    """
    ranked = np.sort(values)
    half = len(ranked) // 2
    # What is missing is sorted last.
    if not len(ranked) or np.isnan(ranked[-1]):
        return float("nan")
    return float(ranked[half] if len(ranked) % 2 else (ranked[half - 1] + ranked[half]) / 2.0)


def samples_in(seconds: float, interval: float) -> int:
    """Odd number of samples that spans a window, three at least."""
    count = max(LEAST_SAMPLES, round(seconds / max(interval, 1e-9)))
    return count + 1 - count % 2


def window_seconds(seconds: float, interval: float) -> float:
    """Give the window, widened to hold three samples."""
    return max(seconds, (LEAST_SAMPLES - 1) * interval)


def fill(values: Floats) -> Floats:
    """Values with every gap bridged by a straight line, ends held.

    Parameters
    ----------
    values : ndarray, shape (n,)
        Samples; NaN where missing.

    Returns
    -------
    ndarray, shape (n,)
        No NaN left, unless all were.
    """
    good = np.isfinite(values)
    if good.all() or not good.any():
        return values
    rows = np.arange(len(values))
    return np.interp(rows, rows[good], values[good])


def running_mean(values: Floats, count: int) -> Floats:
    """Centred mean over `count` samples of a filled channel, ends shortened by reflection."""
    return ndimage.uniform_filter1d(values, min(count, max(len(values), 1)), mode="nearest")


def running_median(values: Floats, count: int) -> Floats:
    """Centred median over `count` samples of a filled channel."""
    return ndimage.median_filter(values, size=count, mode="nearest")


def rate(values: Floats, time: Floats, seconds: float) -> Floats:
    """Mean rate of change over a centred window in time.

    Parameters
    ----------
    values : ndarray, shape (n,)
        Filled channel.
    time : ndarray, shape (n,)
        [s]
    seconds : float
        Width of the window [s].

    Returns
    -------
    ndarray, shape (n,)
        Change per second; zero for a log of one row.
    """
    if len(time) < 2:
        return np.zeros(len(time))
    late = np.minimum(time + seconds / 2, time[-1])
    early = np.maximum(time - seconds / 2, time[0])
    change = np.interp(late, time, values) - np.interp(early, time, values)
    return change / (late - early)


def runs_of(mask: Bools) -> Runs:
    """Stretches of consecutive True rows."""
    edges = np.diff(np.concatenate(([0], mask.astype(np.int8), [0])))
    return Runs(np.flatnonzero(edges == 1), np.flatnonzero(edges == -1))


def rows_of(runs: Runs, count: int) -> Bools:
    """Mask of `count` rows, True inside the stretches (the inverse of `runs_of`)."""
    edges = np.zeros(count + 1, dtype=np.int64)
    np.add.at(edges, runs.start, 1)
    np.add.at(edges, runs.stop, -1)
    return np.cumsum(edges[:-1]) > 0


def span_in(values: Floats, runs: Runs) -> Floats:
    """Largest less smallest value within each stretch, shape (k,): NaN aside, zero where all are NaN."""
    if not len(runs):
        return np.zeros(0)
    edges = np.column_stack((runs.start, runs.stop)).ravel()
    closed = np.append(values, values[-1])
    high = np.fmax.reduceat(closed, edges)[::2]
    low = np.fmin.reduceat(closed, edges)[::2]
    return np.nan_to_num(high - low)


def travel_since(mask: Bools, values: Floats) -> Floats:
    """Change of a channel since the stretch of True rows began, zero outside stretches, shape (n,)."""
    begins = mask & ~np.concatenate(([False], mask[:-1]))
    rows = np.maximum.accumulate(np.where(begins, np.arange(len(mask)), 0))
    return np.where(mask, np.abs(values - values[rows]), 0.0)


def hold(values: NDArray[np.int8], initial: int = 0) -> NDArray[np.int8]:
    """Last non-zero value at each row; `initial` before the first."""
    rows = np.where(values != 0, np.arange(len(values)), -1)
    last = np.maximum.accumulate(rows)
    return np.where(last >= 0, values[np.maximum(last, 0)], initial).astype(np.int8)


def despeckle(mask: Bools, count: int) -> Bools:
    """Mask with stretches shorter than half of `count` samples turned over (a running majority)."""
    return ndimage.uniform_filter1d(mask.astype(np.float64), count, mode="nearest") > 0.5
