"""Friction by the bit's own witness: what the weight readings say, moved by what the bit feels.

Where the string slides the whole way, the bit load by hookload is the surface weight less the drag, and
the drag goes with friction. Two tellings of the bit load, each with its standard error, are then two
tellings of the drag; the friction that suits both best is their mean by inverse variance. Solids make it
grow between weight readings, and torque left in the string takes part of it away.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.replay.windows import edges_of

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

BIN_SECONDS = 300.0
OWN_ERROR = 3e3  # N, one sigma of the bit load by hookload where friction is right
LEAST_DOUBT = 0.04  # of the drag: friction is no better known than this from one weight reading to the next
LEAST_DRAG = 10e3  # N; below this the drag is too small to say anything about friction
SIGMAS = 2.0  # standard errors from which a disagreement is put down to friction
RATIO_RANGE = (0.5, 2.0)


@dataclass(frozen=True)
class Telling:
    """Two tellings of the bit load while sliding; arrays of shape (n,) [N].

    `own`, `own_sigma` by hookload at the readings' friction; `heard`, `heard_sigma` by the witness; `drag`
    the surface weight less `own`; `usable` marks rows on which the hookload shows the bit and there is drag.
    """

    time: Floats
    own: Floats
    own_sigma: Floats
    heard: Floats
    heard_sigma: Floats
    drag: Floats
    usable: Bools


def own_sigma(drag: Floats, doubt: float) -> Floats:
    """One standard error of the bit load by hookload [N], friction uncertain by `doubt` of itself."""
    return np.hypot(OWN_ERROR, max(doubt, LEAST_DOUBT) * np.maximum(drag, 0.0))


def friction_ratio(telling: Telling, slides: Bools) -> tuple[Floats, Floats]:
    """Tell how much more the string rubs than the last weight readings say, and what else the bit feels.

    Parameters
    ----------
    telling : Telling
        The two bit loads.
    slides : ndarray of bool, shape (n,)
        Rows while sliding on bottom.

    Returns
    -------
    ratio : ndarray, shape (n,)
        Of the drag; 1 outside slides, where either telling is silent, and where they differ by no more than
        two standard errors: that is no proof of another friction.
    beyond : ndarray, shape (n,)
        What then still goes off the bit load by hookload, so that both count by inverse variance [N].
    """
    time = telling.time
    ratio, beyond = np.ones(len(time)), np.zeros(len(time))
    step = max(3, round(BIN_SECONDS / float(np.median(np.diff(time))))) if len(time) > 1 else 3
    for start, stop in edges_of(slides).tolist():
        at, found = [], []
        for low in range(start, stop, step):
            rows = np.arange(low, min(low + step, stop))[telling.usable[low : min(low + step, stop)]]
            if len(rows) >= 3:
                at.append(float(np.median(rows)))
                found.append(_one_bin(telling, rows))
        if at:
            rows = np.arange(start, stop)
            ratio[rows], beyond[rows] = (np.interp(rows, at, values) for values in zip(*found, strict=True))
    return ratio, beyond


def _one_bin(telling: Telling, rows: NDArray[np.int64]) -> tuple[float, float]:
    """Ratio of drag at which the two tellings meet, or how far the load gives way where that is no proof."""
    apart = float(np.median(telling.own[rows] - telling.heard[rows]))
    mine, theirs = (float(np.median(s[rows])) ** 2 for s in (telling.own_sigma, telling.heard_sigma))
    if apart**2 < SIGMAS**2 * (mine + theirs):
        return 1.0, apart * mine / (mine + theirs)
    # further apart than both errors allow: it is the friction that has changed
    mine = max(mine, apart**2 - theirs)
    share = mine / (mine + theirs)
    return float(np.clip(1.0 + share * apart / np.median(telling.drag[rows]), *RATIO_RANGE)), 0.0
