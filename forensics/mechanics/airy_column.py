"""The heavy column without side load, exactly: its slope is a sum of Airy and Scorer functions.

With n = 0 the equation of `columns` integrates once: ``z'' + (phi - x) z = S`` for the slope z = y', S being
the shear at the bit. In ``t = x - phi`` its solutions are Ai(t), Bi(t) and, for the shear, Scorer's Gi(t).
Three end conditions on their three weights leave one determinant, whose first zero is the load.

References
----------
NIST Digital Library of Mathematical Functions, section 9.12 (Scorer functions; their integral 9.12.21).
Wang, C. Y. (1986), "A critical review of the heavy elastica" (the infinite string; from memory).
"""

from __future__ import annotations

import math

import numpy as np

from forensics.mechanics.columns import STRING, Ends, Floats

_STEP = 0.05  # between trial loads; the first two loads of no column here lie closer
_FAR = 25.0  # from here on Ai adds nothing, and Bi's integral is taken by parts

# Gi(x) = -1/pi times the integral over q > 0 of exp(-q^3/3) Re(turn exp(turn x q)); taken over log q
_TURN = complex(-0.5, math.sqrt(0.75))
_LOG_STEP = 0.004
_Q = np.exp(np.arange(-34.0, 1.6, _LOG_STEP))
_WEIGHT = -_LOG_STEP / math.pi * np.exp(-(_Q**3) / 3)


def scorer(x: float) -> tuple[float, float]:
    """Give Scorer's Gi and its derivative.

    Parameters
    ----------
    x : float
        Argument, down to about -20 [-].

    Returns
    -------
    tuple of float
        Gi(x) and Gi'(x) [-].

    Examples
    --------
    Gi(0) is Bi(0) / 3:

    >>> round(scorer(0.0)[0], 9)
    0.204975542
    """
    wave = _TURN * np.exp(_TURN * (x * _Q))
    return float(_WEIGHT @ (wave.real * _Q)), float(_WEIGHT @ ((_TURN * wave).real * _Q**2))


def scorer_integral(low: float, high: float) -> float:
    """Give the integral of Scorer's Gi between two arguments down to about -20 [-]."""
    return float(_WEIGHT @ (np.exp(_TURN * (high * _Q)) - np.exp(_TURN * (low * _Q))).real)


def exact_column_load(length: float, ends: Ends = STRING, mode: int = 1) -> float:
    """Give the load phi at which a heavy column without side load buckles, in closed form.

    Parameters
    ----------
    length : float
        Over Lubinski's length [-], 2 or more.
    ends : Ends
        How it is held.
    mode : int
        1 for the lowest load.

    Returns
    -------
    float
        phi, to some ten digits [-].

    Raises
    ------
    ValueError
        If the length is under 2: the functions' arguments would leave their range.

    Notes
    -----
    A vertical string has no load of its own but by its length: 1.94, Lubinski's, at 7.93 only, 1.71 at 20,
    and on towards 1.0188 as one over the logarithm of the length.

    Examples
    --------
    >>> round(exact_column_load(8.0), 9)
    1.937039738
    """
    from scipy.optimize import brentq

    if not 2 <= length < math.inf:
        raise ValueError(f"length came as {length}; expected 2 or more")

    def ends_meet(phi: float) -> float:
        return float(np.linalg.det(_conditions(phi, length, ends)))

    low, value, found = 1e-3, ends_meet(1e-3), 0
    step = max(_STEP, 0.2 / length**2)
    while True:
        high = low + step
        there = ends_meet(high)
        if value * there <= 0:
            found += 1
            if found == mode:
                return float(brentq(ends_meet, low, high, xtol=1e-13))
        low, value = high, there


def _conditions(phi: float, length: float, ends: Ends) -> Floats:
    """Write the end conditions on the weights of Ai, Bi (over its value at the head) and Gi."""
    from scipy.special import airy, airye

    head = length - phi
    ai, ai_slope, bi, bi_slope = airy(-phi)
    end = airye(max(head, 0.0)) if head > 0 else airy(head)
    unit = end[2] if head > 0 else max(abs(bi), 1.0)
    # airye takes exp(2/3 head^1.5) out of Bi and puts it into Ai
    fall = math.exp(-2 / 3 * max(head, 0.0) ** 1.5)
    at_foot, at_head = scorer(-phi), scorer(head)
    slope_foot = [ai, bi * fall / unit, at_foot[0]]
    bend_foot = [ai_slope, bi_slope * fall / unit, at_foot[1]]
    slope_head = [end[0] * fall, end[2] / unit, at_head[0]]
    bend_head = [end[1] * fall, end[3] / unit, at_head[1]]
    first = bend_foot if ends.bit == "pinned" else slope_foot
    last = slope_head if ends.top == "clamped" else bend_head
    if ends.bit == "guided" or ends.top == "free":
        third = [0.0, 0.0, 1.0]  # nothing takes a shear
    else:
        third = [*_areas(phi, head, fall / unit), scorer_integral(-phi, head)]
    return np.array([first, last, third])


def _areas(phi: float, head: float, scale: float) -> tuple[float, float]:
    """Integrate Ai and scaled Bi from foot to head; far off, what is beyond is added by parts."""
    from scipy.special import airy, airye

    near = min(head, _FAR)
    place, weight = np.polynomial.legendre.leggauss(120)
    half = (near + phi) / 2
    ai, _, bi, _ = airy(half * (1 + place) - phi)
    area = half * float(weight @ ai)
    if head <= _FAR:
        return area, half * float(weight @ bi) * scale
    # the integral of Bi t^-k by Bi'' = t Bi: what is left of the lower end is nothing
    _, _, value, slope = airye(head)
    total, factor, power = 0.0, 1.0, 0
    for _ in range(4):
        total += factor * (slope * head ** -(power + 1) + (power + 1) * value * head ** -(power + 2))
        factor *= (power + 1) * (power + 2)
        power += 3
    return area, total / value
