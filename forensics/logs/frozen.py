"""Sensors that stopped: exactly constant for long while what they depend on moved.

A still value is legal (zero rotation, a pump at its set point, the hookload in slips), so constancy
alone is never enough: the channel must be a lively one in this log, and the rig must have done
something in that time that it could not have missed.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
SHORTEST = 12
# A channel that repeats its last value less often than this is lively.
LIVELY = 0.3


def runs_of(values: Floats, shortest: int = SHORTEST) -> list[tuple[int, int]]:
    """First and one-past-last index of stretches of one finite value, at least `shortest` long.

    Examples
    --------
    >>> runs_of(np.array([1.0, 2.0, 2.0, 2.0]), shortest=3)
    [(1, 4)]
    """
    if len(values) == 0:
        return []
    change = np.flatnonzero(np.diff(values) != 0) + 1
    edges = np.concatenate(([0], change, [len(values)]))
    long = np.flatnonzero(np.diff(edges) >= shortest)
    return [(int(edges[i]), int(edges[i + 1])) for i in long if np.isfinite(values[edges[i]])]


def is_lively(values: Floats, shortest: int = SHORTEST) -> bool:
    """Tell whether a channel changes from sample to sample outside its long constant stretches."""
    inside = np.zeros(len(values), dtype=bool)
    for start, end in runs_of(values, shortest):
        inside[start:end] = True
    rest = values[~inside & np.isfinite(values)]
    return len(rest) > 20 and float((np.diff(rest) == 0).mean()) < LIVELY


def _reach(values: Floats | None, start: int, end: int) -> float:
    if values is None:
        return 0.0
    part = values[start:end]
    part = part[np.isfinite(part)]
    return float(part.max() - part.min()) if len(part) else 0.0


def _travel(values: Floats | None, start: int, end: int) -> float:
    if values is None:
        return 0.0
    part = values[start:end]
    return float(np.abs(np.diff(part[np.isfinite(part)])).sum())


def _while_carried(block: Floats | None, hook: Floats | None) -> Floats | None:
    """Block position while the hook plainly carries more than in slips, where the bit may stand for hours."""
    if block is None or hook is None or not np.isfinite(hook).any():
        return None
    low, middle = np.nanpercentile(hook, [1, 50])
    return np.where(hook > low + 0.4 * (middle - low), block, np.nan)


def find_frozen(channel: str, values: Mapping[str, Floats], interval: float) -> Bools:
    """Find where a channel stopped.

    Parameters
    ----------
    channel : str
        One of hookload, bit_depth, block_position, torque, standpipe_pressure, wob; others never count.
    values : mapping of str to ndarray, shape (n,)
        All channels [SI].
    interval : float
        Usual sampling interval [s].

    Returns
    -------
    ndarray of bool, shape (n,)
        True where the channel is taken for frozen.

    Notes
    -----
    Hookload: the bit moved by 0.3 m (3 m where the channel is coarse) in a minute or more of one value;
    in slips the bit stands. Bit depth: the block, with the string on it, ran more
    than three times its height. Block: the bit
    moved by 3 m. Torque, pressure and WOB: five minutes of one value other than zero in a lively channel
    while the hookload kept changing.
    """
    data = values[channel]
    found = np.zeros(len(data), dtype=bool)
    minute = max(SHORTEST, int(np.ceil(60.0 / interval)) if interval > 0 else SHORTEST)
    lively = is_lively(data)
    bit, block, hook = values.get("bit_depth"), values.get("block_position"), values.get("hookload")
    carried = _while_carried(block, hook)
    shortest = minute if channel in {"hookload", "bit_depth", "block_position"} else max(30, 5 * minute)
    for start, end in runs_of(data, shortest):
        if channel == "hookload":
            stopped = _reach(bit, start, end) >= (0.3 if lively else 3.0)
        elif channel == "bit_depth":
            stopped = _travel(carried, start, end) > 3.5 * max(_reach(block, 0, len(data)), 20.0)
        elif channel == "block_position":
            stopped = _reach(bit, start, end) >= 3.0
        else:
            moved = hook is not None and len(np.unique(hook[start:end])) > 0.5 * (end - start)
            stopped = lively and data[start] != 0.0 and moved
        if stopped:
            found[start:end] = True
    return found


FREEZABLE = ("hookload", "bit_depth", "block_position", "torque", "standpipe_pressure", "wob")
