"""What tool joints do: they hold the pipe off the wall and draw bending to themselves.

The critical loads take the pipe as even, with the clearance of the joint or of the body. Why that is allowed
for ordinary drill pipe can be seen here: half a wave (some 12 m) is longer than a joint (some 9.6 m), so that
each half wave has a joint to touch the wall with, and the body between joints sags by a few millimetres where
it would have to sag by twenty to touch. Joints slide along the wall and hold nothing: pipe pinned at each
would bear more.

References
----------
Paslay, P. R. and Cernocky, E. P. (1991), "Bending stress magnification in constant curvature doglegs with
impact on drillstring and casing", SPE 22547 (from memory).
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats


def bending_factor(tension: ArrayLike, stiffness: ArrayLike, half_joint: float) -> Floats:
    """Give the pipe's greatest curvature over that of the hole it lies in by its joints.

    Parameters
    ----------
    tension : array_like
        Effective tension, compression negative [N].
    stiffness : array_like
        EI [N.m2].
    half_joint : float
        Half the distance between joints [m].

    Returns
    -------
    ndarray
        In tension ``u / tanh(u)``, at the joints; in compression ``u / sin(u)``, half-way between, up to
        ``u = pi / 2``; ``u = half_joint sqrt(|T| / EI)`` [-]. NaN beyond, where the body touches the wall
        first.

    Notes
    -----
    The pipe's slope is the hole's at each joint and its body is free between. The side that weight presses on
    is left out.

    Examples
    --------
    >>> bending_factor([4e5, 0.0, -1e5], 1.23e6, 4.8).round(3).tolist()
    [2.76, 1.0, 1.397]
    """
    tension, stiffness = np.broadcast_arrays(np.asarray(tension, float), np.asarray(stiffness, float))
    u = half_joint * np.sqrt(np.abs(tension) / stiffness)
    some = np.where(u > 0, u, 1.0)
    pulled = np.where(u > 0, some / np.tanh(some), 1.0)
    pushed = np.where(some <= math.pi / 2, some / np.sin(np.minimum(some, math.pi / 2)), np.nan)
    return np.where(tension >= 0, pulled, np.where(u > 0, pushed, 1.0))


def sag(force: ArrayLike, stiffness: ArrayLike, side: ArrayLike, span: float) -> Floats:
    """Give how far the body sags between two joints that lie on the wall.

    Parameters
    ----------
    force : array_like
        Effective compression [N]; tension is taken as none.
    stiffness : array_like
        EI [N.m2].
    side : array_like
        Weight across the hole per length [N/m].
    span : float
        Between joints [m].

    Returns
    -------
    ndarray
        [m]; infinite from ``4 pi^2 EI / span^2`` on, where the span itself buckles.

    Notes
    -----
    A beam clamped at both ends, ``side span^4 / (384 EI)``, enlarged by compression: with ``v = span / 2
    sqrt(F / EI)`` times ``12 (2 - 2 cos v - v sin v) / (v^3 sin v)`` (Timoshenko and Gere, from memory).
    """
    force, stiffness = np.broadcast_arrays(np.asarray(force, float), np.asarray(stiffness, float))
    v = span / 2 * np.sqrt(np.maximum(force, 0.0) / stiffness)
    safe = np.clip(v, 0.05, math.pi - 1e-9)
    enlarged = 12 * (2 - 2 * np.cos(safe) - safe * np.sin(safe)) / (safe**3 * np.sin(safe))
    enlarged = np.where(v < 0.05, 1 + v**2 / 10, np.where(v < math.pi, enlarged, np.inf))
    return np.asarray(side, dtype=float) * span**4 / (384 * stiffness) * enlarged
