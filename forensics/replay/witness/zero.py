"""The zero of a bit channel: what it shows with the bit clear of bottom, carried along time."""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.replay.windows import edges_of

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

# Longest stretch off bottom read as one zero: over more, the zero may have walked [s].
LONGEST = 600.0
# Fewer zeros than this don't show how a zero walks: all of their scatter then counts everywhere.
FEWEST = 4


@dataclass(frozen=True)
class Zero:
    """Zero line and its standard error, shape (n,) [unit of the channel], from `windows` readings."""

    line: Floats
    sigma: Floats
    windows: int


def zero_line(time: Floats, signal: Floats, clear: Bools, least: float) -> Zero | None:
    """Read the zero off bottom, stand by stand, and carry it along time.

    Parameters
    ----------
    time : ndarray, shape (n,)
        [s]
    signal : ndarray, shape (n,)
        The channel.
    clear : ndarray of bool, shape (n,)
        Rows that show the zero.
    least : float
        Shortest stretch that counts [s].

    Returns
    -------
    Zero or None
        None where no stretch is long enough.

    Notes
    -----
    The zero is taken to walk: between two readings the error grows as that of a walk tied at both ends,
    beyond the outer ones as that of a free walk, up to the scatter of all readings. How fast it walks is
    learned by leaving each reading out and telling it from its neighbours.
    """
    at, values, noise = _readings(time, signal, clear, least)
    if len(at) == 0:
        return None
    line = np.interp(time, at, values)
    scatter = float(np.std(values))
    if len(at) < FEWEST:
        return Zero(line, np.full(len(time), np.hypot(scatter, noise)), len(at))
    walk = _walk(at, values, noise)
    grown = walk * _slack(at, time)
    return Zero(line, np.sqrt(np.minimum(grown, scatter**2) + noise**2), len(at))


def _readings(time: Floats, signal: Floats, clear: Bools, least: float) -> tuple[Floats, Floats, float]:
    """Take times and medians of stretches off bottom, less their first third, and one reading's noise."""
    rows = clear & np.isfinite(signal)
    at, values, noises = [], [], []
    for start, stop in edges_of(rows).tolist():
        if time[stop - 1] - time[start] < least:
            continue
        parts = int((time[stop - 1] - time[start]) // LONGEST) + 1
        settled = start + (stop - start) // 3
        edges = np.linspace(settled, stop, parts + 1).astype(int)
        for first, last in itertools.pairwise(edges):
            # a hundred rows tell a middle as well as all of them
            part = signal[first : last : max(1, (last - first) // 100)]
            values.append(float(np.median(part)))
            at.append(0.5 * float(time[first] + time[last - 1]))
            noises.append(1.253 * float(np.std(part)) / np.sqrt(len(part)))
    return np.array(at), np.array(values), float(np.median(noises)) if noises else 0.0


def _slack(at: Floats, time: Floats) -> Floats:
    """Time that counts for a walk tied at the readings: a b / (a + b) inside, the distance outside [s]."""
    after = np.searchsorted(at, time)
    before, after = np.maximum(after - 1, 0), np.minimum(after, len(at) - 1)
    a, b = np.abs(time - at[before]), np.abs(at[after] - time)
    return np.where(before == after, a, a * b / np.maximum(a + b, 1e-9))


def _walk(at: Floats, values: Floats, noise: float) -> float:
    """Tell the variance by which the zero walks in a second, by leaving each reading out."""
    a, b = at[1:-1] - at[:-2], at[2:] - at[1:-1]
    told = (values[:-2] * b + values[2:] * a) / (a + b)
    missed = np.maximum((values[1:-1] - told) ** 2 - 1.5 * noise**2, 0.0)
    return float(np.sum(missed) / np.sum(a * b / (a + b)))
