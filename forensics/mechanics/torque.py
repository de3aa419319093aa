"""What torque does to a helix: it winds it up, and lets it form a little earlier.

A helix of turn rate k (radians per length) twists the pipe's axis by r^2 k^3 / 2 per length, and torque
does work on that. Per length and over r^2, its energy is ``EI k^4 / 2 - F k^2 / 2 - M k^3 / 2``, beside the
weight's w / r for lying all round instead of on the low side. The pipe takes the hand that the torque
favours. A sinusoid turns as much one way as the other, so that its onset does not change to first order.

References
----------
He, X., Halsey, G. W. and Kyllingstad, A. (1995), "Interactions between torque and helical buckling in
drilling", SPE 30521 (from memory: the effect, and that it is of the order of some per cent).

Miska, S. and Cunha, J. C. (1995), "An analysis of helical buckling of tubulars subjected to axial and
torsional loading in inclined wellbores", SPE 29460 (from memory: ``F = 8 pi^2 EI / p^2 - 3 pi M / p``).
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats


def turn_rate(force: ArrayLike, stiffness: ArrayLike, torque: ArrayLike) -> Floats:
    """Give the turn rate of a weightless helix under torque.

    Parameters
    ----------
    force : array_like
        Effective compression [N].
    stiffness : array_like
        EI [N.m2].
    torque : array_like
        Along the pipe, whichever way [N.m].

    Returns
    -------
    ndarray
        k with ``F = 2 EI k^2 - 3/2 M k`` [rad/m]; zero in tension. The pitch is 2 pi / k.
    """
    load = np.maximum(np.asarray(force, dtype=float), 0.0)
    stiffness = np.asarray(stiffness, dtype=float)
    part = 1.5 * np.abs(np.asarray(torque, dtype=float))
    rate = (part + np.sqrt(part**2 + 8 * stiffness * load)) / (4 * stiffness)
    return np.where(load > 0, rate, 0.0)


def contact_force(force: ArrayLike, stiffness: ArrayLike, clearance: ArrayLike, torque: ArrayLike) -> Floats:
    """Give the wall force per length of a weightless helix under torque, ``r (F k^2 + M k^3 - EI k^4)``.

    Parameters
    ----------
    force, stiffness, torque : array_like
        As in `turn_rate`.
    clearance : array_like
        Radial clearance [m].

    Returns
    -------
    ndarray
        [N/m]; ``r F^2 / (4 EI)`` without torque.
    """
    rate = turn_rate(force, stiffness, torque)
    load = np.maximum(np.asarray(force, dtype=float), 0.0)
    push = load + np.abs(np.asarray(torque, dtype=float)) * rate - np.asarray(stiffness) * rate**2
    return np.asarray(clearance) * rate**2 * push


def onset_drop(
    stiffness: ArrayLike, contact: ArrayLike, clearance: ArrayLike, torque: ArrayLike, applied: bool = True
) -> Floats:
    """Give what torque takes off the helical onset.

    Parameters
    ----------
    stiffness : array_like
        EI [N.m2].
    contact : array_like
        Contact force per length before buckling [N/m].
    clearance : array_like
        Radial clearance [m].
    torque : array_like
        Along the pipe at the place, whichever way [N.m].
    applied : bool
        False leaves torque out: the drop is zero.

    Returns
    -------
    ndarray
        [N], not negative; to first order ``M (2 w_c / (EI r))^(1/4)``.

    Notes
    -----
    Chen's onset is the least load at which a helix costs no more than lying straight: ``F = EI k^2 - M k +
    2 w_c / (r k^2)``, least over k. The drop of that is taken off every published onset, which is ours.

    Examples
    --------
    127 mm pipe in a horizontal 215.9 mm hole with 20 kN.m: a few per cent of 239 kN.

    >>> float(onset_drop(1.23e6, 258.3, 0.0445, 20e3).round(-2))
    6300.0
    """
    stiffness, contact, clearance, moment = np.broadcast_arrays(
        *(np.asarray(part, dtype=float) for part in (stiffness, contact, clearance, torque))
    )
    some = contact > 0
    side = np.where(some, contact, 1.0) / clearance
    moment = np.abs(moment) * float(applied)
    start = (2 * side / stiffness) ** 0.25
    rate = start.copy()
    for _ in range(8):  # Newton's method: the load is convex in the rate
        slope = 2 * stiffness * rate - moment - 4 * side / rate**3
        rate = np.maximum(rate - slope / (2 * stiffness + 12 * side / rate**4), 0.5 * rate)
    straight = 2 * math.sqrt(2) * np.sqrt(stiffness * side)
    load = stiffness * rate**2 - moment * rate + 2 * side / rate**2
    return np.where(some, np.maximum(straight - load, 0.0), 0.0)
