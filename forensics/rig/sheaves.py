"""From the dead line's reading to the hook: sheave friction by the block's direction."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.case import RigSettings
from forensics.mechanics.hoisting import dead_line_to_hookload
from forensics.rig import noise
from forensics.rig.noise import Floats
from forensics.rig.signals import Signals

# A reversal turns the factor over within this time: the sheaves don't turn back all at once [s].
_TURN_OVER = 10.0


def hook_factor(direction: NDArray[np.int8], signals: Signals, rig: RigSettings) -> Floats | float:
    """Hookload over logged reading, row by row.

    Parameters
    ----------
    direction : ndarray of int8, shape (n,)
        Block: +1 down, -1 up, 0 still.
    signals : Signals
        For the sampling.
    rig : RigSettings
        Lines strung and efficiency per sheave; both are needed, else the factor is one.

    Returns
    -------
    ndarray, shape (n,), or float
        Dimensionless.

    Notes
    -----
    The reading is the dead line's pull times the lines strung. While the block is still the sheaves hold
    the friction of its last motion, so the last direction's factor stays; a reversal blends from one
    factor to the other, since a step in the factor would look like a front running down the string.
    """
    if rig.lines is None or rig.sheave_efficiency is None:
        return 1.0
    up, still, down = (direction_factor(way, rig) for way in (-1, 0, 1))
    last = noise.hold(direction)
    factor = np.where(last > 0, down, np.where(last < 0, up, still))
    return noise.running_mean(factor, signals.count(_TURN_OVER))


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
