"""From flags on rows to spans of time: bridge short gaps first, then drop short spans and count them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]


@dataclass(frozen=True)
class Span:
    """Rows `first` to `last`, both in the span."""

    first: int
    last: int

    @property
    def rows(self) -> slice:
        """The rows, as a slice."""
        return slice(self.first, self.last + 1)


@dataclass(frozen=True)
class SpanRule:
    """Gap that is bridged and least length kept [s]; `interval` is the time one sample stands for [s].

    With `flagged` only time on flagged rows counts for the least length, not what was bridged.
    """

    bridge_gap: float
    least: float
    interval: float
    flagged: bool = False


def find_spans(flags: Bools, time: Floats, rule: SpanRule) -> tuple[list[Span], int]:
    """Spans of flagged rows.

    Parameters
    ----------
    flags : ndarray of bool, shape (n,)
    time : ndarray, shape (n,)
        [s], increasing.
    rule : SpanRule

    Returns
    -------
    spans : list of Span
        In time order.
    dropped : int
        Spans left out for being short.
    """
    flags = np.asarray(flags, dtype=bool)
    rows = np.flatnonzero(flags)
    if len(rows) == 0:
        return [], 0
    breaks = np.flatnonzero(time[rows[1:]] - time[rows[:-1]] - rule.interval >= rule.bridge_gap)
    breaks = breaks[rows[breaks + 1] - rows[breaks] > 0]
    firsts = np.concatenate([[rows[0]], rows[breaks + 1]])
    lasts = np.concatenate([rows[breaks], [rows[-1]]])
    counted = _counted(flags, time, rule.interval) if rule.flagged else np.zeros(0)
    spans, dropped = [], 0
    for first, last in zip(firsts.tolist(), lasts.tolist(), strict=True):
        length = time[last] - time[first] + rule.interval
        if rule.flagged:
            length = counted[last + 1] - counted[first]
        if length < rule.least * (1.0 - 1e-9):
            dropped += 1
        else:
            spans.append(Span(first, last))
    return spans, dropped


def _counted(flags: Bools, time: Floats, interval: float) -> Floats:
    """Time on flagged rows before each row, and in all, shape (n + 1,) [s]."""
    stands_for = np.minimum(np.diff(time, append=time[-1] + interval), 1.5 * interval)
    return np.concatenate([[0.0], np.cumsum(np.where(flags, stands_for, 0.0))])


def running_extreme(values: Floats, resets: Bools, largest: bool) -> Floats:
    """Carry the largest (or smallest) value on, anew from the last of each run of resets; NaN is passed over.

    Parameters
    ----------
    values : ndarray, shape (n,)
    resets : ndarray of bool, shape (n,)
    largest : bool

    Returns
    -------
    ndarray, shape (n,)
    """
    sign = 1.0 if largest else -1.0
    filled = np.where(np.isnan(values), -np.inf, sign * values)
    out = np.empty(len(filled))
    resets = np.asarray(resets, dtype=bool)
    last = resets & ~np.append(resets[1:], False)  # of several resets in a row only the last one counts
    starts = np.unique(np.append(0, np.flatnonzero(last)))
    ends = np.append(starts[1:], len(filled))
    for a, b in zip(starts.tolist(), ends.tolist(), strict=True):
        np.maximum.accumulate(filled[a:b], out=out[a:b])
    return np.where(np.isinf(out), np.nan, sign * out)


def window_extreme(
    values: Floats, time: Floats, window: float, interval: float
) -> tuple[Floats, NDArray[np.int64]]:
    """Largest value over the last `window` seconds, and its row.

    Parameters
    ----------
    values : ndarray, shape (n,)
        NaN is passed over.
    time : ndarray, shape (n,)
        [s]
    window, interval : float
        Length of the window and of a sample [s].

    Returns
    -------
    largest : ndarray, shape (n,)
        NaN where the window holds no value.
    row : ndarray of int, shape (n,)
    """
    n = len(values)
    level = np.where(np.isnan(values), -np.inf, values)
    row = np.arange(n)
    first = _window_start(time, window, interval)
    length = row - first + 1
    largest, best = level.copy(), row.copy()
    span = 1
    # Two stretches of a power of two cover any window; each level is made of two of the one before.
    while span < int(length.max(initial=1)):
        here = np.flatnonzero((length > span) & (length <= 2 * span))
        back = first[here] + span - 1
        earlier = level[back] > level[here]
        largest[here] = np.where(earlier, level[back], level[here])
        best[here] = np.where(earlier, row[back], row[here])
        earlier = level[:-span] > level[span:]
        row = np.append(row[:span], np.where(earlier, row[:-span], row[span:]))
        level = np.append(level[:span], np.maximum(level[:-span], level[span:]))
        span *= 2
    return np.where(np.isinf(largest), np.nan, largest), best


def _window_start(time: Floats, window: float, interval: float) -> NDArray[np.int64]:
    """First row of the window that ends at each row: no more seconds, and no more samples, than it holds."""
    rows = np.arange(len(time))
    first = np.maximum(rows - max(int(np.ceil(window / interval)), 1), 0)
    late = np.flatnonzero(time - time[first] > window + 1e-6)
    first[late] = np.maximum(np.searchsorted(time, time[late] - window - 1e-6), first[late])
    return first
