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
# A log whose hookload stands still more often than this has no noise to know a stopped sensor by.
RESTLESS = 0.05


def runs_of(values: Floats, shortest: int = SHORTEST) -> list[tuple[int, int]]:
    """First and one-past-last index of stretches of one finite value, at least `shortest` long.

    Examples
    --------
    >>> runs_of(np.array([1.0, 2.0, 2.0, 2.0]), shortest=3)
    [(1, 4)]
    """
    if len(values) == 0:
        return []
    change = np.flatnonzero(values[1:] != values[:-1]) + 1
    edges = np.concatenate(([0], change, [len(values)]))
    long = np.flatnonzero(np.diff(edges) >= shortest)
    # Most values last no longer than a sample: what is left after this is short enough for a list.
    long = long[np.isfinite(values[edges[long]])]
    return list(zip(edges[long].tolist(), edges[long + 1].tolist(), strict=True))


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
    return np.where(hook > slips_level(hook), block, np.nan)


def find_frozen(channel: str, values: Mapping[str, Floats], interval: float) -> Bools:
    """Find where a channel stopped.

    Parameters
    ----------
    channel : str
        One of `FREEZABLE`; others never count.
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
    Hookload: the bit moved by 0.3 m (3 m where the channel is coarse) during one value; or, in a channel
    whose noise never lets a value stand, twelve equal ones above the level of slips. Bit depth: the block,
    with the string on it, ran more than three times its height. Block: the bit moved by 3 m. Torque,
    pressure and WOB: five minutes of one value as of work under way (above a fifth of the 95th percentile)
    while the hookload kept changing and, for torque, the string turned.
    """
    data = values[channel]
    found = np.zeros(len(data), dtype=bool)
    if not runs_of(data):
        return found
    minute = max(SHORTEST, int(np.ceil(60.0 / interval)) if interval > 0 else SHORTEST)
    bit, block, hook = values.get("bit_depth"), values.get("block_position"), values.get("hookload")
    lively = is_lively(data)
    restless = channel == "hookload" and lively and _share_still(data) < RESTLESS
    carried = _while_carried(block, hook)
    slow = max(30, 5 * minute)
    known = np.abs(data[np.isfinite(data)])
    at_work = 0.2 * float(np.percentile(known, 95)) if len(known) else 0.0
    height = max(_reach(block, 0, len(data)), 20.0)
    shortest = (
        SHORTEST if restless else {"hookload": minute, **dict.fromkeys(MOVERS, minute)}.get(channel, slow)
    )
    for start, end in runs_of(data, shortest):
        if channel == "hookload":
            moved = _reach(bit, start, end) >= (0.3 if lively else 3.0)
            stopped = moved or (restless and data[start] > slips_level(data))
        elif channel == "bit_depth":
            stopped = _travel(carried, start, end) > 3.5 * height
        elif channel == "block_position":
            stopped = _reach(bit, start, end) >= 3.0
        else:
            stopped = lively and abs(data[start]) > at_work and _goes_on(channel, values, start, end)
        if stopped:
            found[start:end] = True
    return found


def _goes_on(channel: str, values: Mapping[str, Floats], start: int, end: int) -> bool:
    """Tell whether the hookload kept changing and, for torque, the string kept turning."""
    hook, rpm = values.get("hookload"), values.get("rpm")
    if hook is None or len(np.unique(hook[start:end])) <= 0.5 * (end - start):
        return False
    turning = channel != "torque" or rpm is None or float((rpm[start:end] > 5.0).mean()) > 0.5
    return bool(turning)


def slips_level(hook: Floats) -> float:
    """Give a hookload [N] plainly above what the hook shows in slips."""
    # Some twenty thousand samples tell it as well as all.
    low, middle = np.nanpercentile(hook[:: max(1, len(hook) // 20000)], [1, 50])
    return float(low + 0.4 * (middle - low))


def _share_still(hook: Floats) -> float:
    """Share of the samples above the level of slips that stand in long constant stretches."""
    above = hook > slips_level(hook)
    still = sum(end - start for start, end in runs_of(hook) if above[start])
    return still / max(1, int(above.sum()))


MOVERS = ("bit_depth", "block_position")
FREEZABLE = ("hookload", "bit_depth", "block_position", "torque", "standpipe_pressure", "wob")
