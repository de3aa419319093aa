"""Rows in which slips were being set or pulled: neither the block alone nor the string's weight."""

from __future__ import annotations

from forensics.rig import noise
from forensics.rig.noise import Bools, Floats
from forensics.rig.signals import Signals

# The string hangs from the hook when it carries this share of the string's weight or more.
_HANGS = 0.6
# Setting slips, and their settling, takes no longer than this [s].
_LONGEST = 180.0


def widen(slips: Bools, signals: Signals, level: float, string_weight: Floats, wander: float) -> Bools:
    """Add to each stretch in slips the rows in which the load passes from hook to slips, or back.

    Parameters
    ----------
    slips : ndarray of bool, shape (n,)
        Rows at the plateau.
    signals : Signals
        Filled channels.
    level : float
        Hookload in slips [N].
    string_weight : ndarray, shape (n,)
        Modelled hanging weight of the string [N].
    wander : float
        How far the bit may move meanwhile [m].

    Returns
    -------
    ndarray of bool, shape (n,)
        The stretches with their edges.

    Notes
    -----
    A hookload that falls by half the string's weight while the block stands is no slack-off: the string's
    own stretch would have to go somewhere. So rows count between the plateau and the nearest row at which
    the string plainly hung from the hook, if the bit was in the same place there. Where the load had been
    slacked off before, no such row is near, and nothing is added.
    """
    out = slips.copy()
    hangs = signals.hookload - level > _HANGS * string_weight
    runs = noise.runs_of(slips)
    for start, stop in zip(runs.start, runs.stop, strict=True):
        for edge, step in ((start, -1), (stop - 1, 1)):
            row = _hung(edge, step, signals, hangs, wander)
            if row is not None:
                out[min(edge, row + 1) : max(edge + 1, row)] = True
    return out


def _hung(edge: int, step: int, signals: Signals, hangs: Bools, wander: float) -> int | None:
    """Find the nearest row beyond an edge at which the string hung from the hook, the bit in its place."""
    row = edge + step
    while 0 <= row < len(hangs):
        away = abs(float(signals.time[row] - signals.time[edge]))
        if abs(float(signals.path[row] - signals.path[edge])) > wander:
            return None
        if away > max(_LONGEST, noise.LEAST_SAMPLES * signals.interval):
            return None
        if hangs[row]:
            return row
        row += step
    return None
