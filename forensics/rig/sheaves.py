"""From the dead line's reading to the hook: sheave friction by the block's last travel."""

from __future__ import annotations

import numpy as np
from numba import njit

from forensics.case import RigSettings
from forensics.mechanics.hoisting import dead_line_to_hookload
from forensics.rig.noise import Floats

#: Travel of the block over which a reversal turns the factor over: the wire slackens sheave by sheave [m].
#: Ours, no source; a reversal over two readings is turned over at once.
TURN_OVER = 0.4


def hook_factor(height: Floats, rig: RigSettings) -> Floats | float:
    """Hookload over logged reading, row by row.

    Parameters
    ----------
    height : ndarray, shape (n,)
        Of the block [m]; NaN where it is not known.
    rig : RigSettings
        Lines strung and efficiency per sheave; both are needed, else the factor is one.

    Returns
    -------
    ndarray, shape (n,), or float
        Dimensionless.

    Notes
    -----
    The reading is the dead line's pull times the lines strung. While the block is still the sheaves hold
    the friction of its last motion, so the last direction's factor stays. A reversal turns one factor into
    the other over a short travel of the block, not over time and never before the block moves: a play of
    width `TURN_OVER`. A step in the factor would look like a front running down the string.
    """
    if rig.lines is None or rig.sheave_efficiency is None:
        return 1.0
    up, still, down = (direction_factor(way, rig) for way in (-1, 0, 1))
    way = play(np.asarray(height, dtype=float), TURN_OVER)
    return still + np.where(way > 0.0, way * (down - still), -way * (up - still))


@njit(cache=True)
def play(height: Floats, width: float) -> Floats:
    """Follow the block's travel with a play: from +1 after going down to -1 after going up.

    Parameters
    ----------
    height : ndarray, shape (n,)
        [m]; NaN where it is not known, which moves nothing.
    width : float
        Travel from one end of the play to the other [m].
    """
    way = np.zeros(len(height))
    now, last = 0.0, np.nan
    for i in range(len(height)):
        here = height[i]
        if np.isfinite(here):
            if np.isfinite(last):
                now = min(1.0, max(-1.0, now + 2.0 * (last - here) / width))
            last = here
        way[i] = now
    return way


def direction_factor(direction: int, rig: RigSettings) -> float:
    """Hookload over logged reading for a block that goes one way.

    Parameters
    ----------
    direction : int
        +1 down, -1 up, 0 where its last motion is not known.
    rig : RigSettings
        Lines strung and efficiency per sheave; both are needed, else the factor is one.

    Returns
    -------
    float
        Dimensionless.
    """
    if rig.lines is None or rig.sheave_efficiency is None:
        return 1.0
    up = dead_line_to_hookload(rig.sheave_efficiency, rig.lines, "up") / rig.lines
    down = dead_line_to_hookload(rig.sheave_efficiency, rig.lines, "down") / rig.lines
    return {-1: up, 0: 0.5 * (up + down), 1: down}[direction]
