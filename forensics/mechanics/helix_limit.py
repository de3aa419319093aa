"""How far a helix can be unloaded: where it leaves the wall, ceases to be, or ceases to be stable.

At a given square slope k^2 a helix bears side weight up to some gamma (see `helix_shape`). With contact
demanded all round it ends where the wall force at the high side falls to zero; without, where the branch
of solutions folds back. Over all k^2 the largest gamma with contact is 0.1331196, at k^2 = 0.46102: since
``gamma = (F_DP / F)^2 / 4``, a helix at rest can't be held below 1.370405 F_DP. Helices exist for k^2
between 1/7 (where the fold comes at gamma = 0) and 1 (beyond which even a weightless one needs pulling to
the wall).

A drilling rule of thumb has a helix stay until the load falls below the sinusoidal one. By this computation
a helix that does not turn is gone before: it leaves the high side at 1.37 F_DP. The case's default release
keeps to the rule of thumb, as the more cautious; `helical_release = "envelope"` takes this limit.

References
----------
Mitchell, R. F. (1997), "Effects of well deviation on helical buckling", SPE Drill. & Compl. 12 (unloading
limit sqrt(2) F_DP, by another approximation). The numbers above are this program's own.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats
from forensics.mechanics.helix_shape import HelixShape, NoHelixError, by_collocation, weightless

LEAST_MEAN, GREATEST_MEAN = 1 / 7, 1.0
"""Square slopes between which helices exist [-]."""

LONG_WAVE = 0.02
"""Wave number, over that of a wave of two turns, at which stability is judged."""

_STEP, _LEAST_STEP, _JUMP = 0.01, 1e-7, 0.1
_POINTS = 96  # along one turn, for the second variation


@dataclass(frozen=True)
class UnloadingLimit:
    """The least load at which a helix at rest touches the wall all round.

    Parameters
    ----------
    mean : float
        k^2 of that helix [-].
    gamma : float
        Its side weight, the largest there is [-].
    ratio : float
        The load over F_DP [-].
    """

    mean: float
    gamma: float
    ratio: float


def largest_gamma(mean: float, contact: bool = True) -> float:
    """Give the largest side weight that a helix of given square slope bears.

    Parameters
    ----------
    mean : float
        k^2, above 1/7 and below 1 [-].
    contact : bool
        Whether the wall may only push: with False, only a solution must exist.

    Returns
    -------
    float
        gamma [-], to some seven digits.

    Raises
    ------
    ValueError
        If `mean` is not between 1/7 and 1.

    Notes
    -----
    The branch is followed from the weightless helix, each step starting from the two before.

    Examples
    --------
    >>> round(largest_gamma(0.46102), 5)
    0.13312
    """
    if not LEAST_MEAN < mean < GREATEST_MEAN:
        raise ValueError(f"square slope came as {mean}; helices exist between 1/7 and 1")
    here, slope = weightless(mean), np.zeros_like(weightless(mean).series)
    # near 1/7 the branch is short, and a long step would land on another
    step = min(_STEP * mean, 0.2 * (mean - LEAST_MEAN) ** 1.5)
    while step > _LEAST_STEP:
        guess = HelixShape(mean, here.gamma, here.series + step * slope)
        try:
            there = by_collocation(mean, here.gamma + step, guess if here.gamma else None)
        except NoHelixError:
            step /= 2
            continue
        # a jump to another branch, or past the wall's limit
        jumped = np.abs(there.series - guess.series).max() > _JUMP * mean
        if jumped or (contact and there.least_wall_force() < 0):
            step /= 2
            continue
        here, slope = there, (there.series - here.series) / step
    return here.gamma


@lru_cache(maxsize=1)
def unloading_limit() -> UnloadingLimit:
    """Find the unloading limit of a helix at rest.

    Returns
    -------
    UnloadingLimit
        k^2 = 0.46102, gamma = 0.1331196, F = 1.370405 F_DP.

    Examples
    --------
    >>> round(unloading_limit().ratio, 6)
    1.370405
    """
    from scipy.optimize import brentq, minimize_scalar

    def gamma_at(mean: float) -> float:
        return float(brentq(lambda g: by_collocation(mean, g).least_wall_force(), 0.1, 0.16, xtol=1e-13))

    best = minimize_scalar(lambda mean: -gamma_at(mean), bounds=(0.42, 0.5), method="bounded")
    return UnloadingLimit(float(best.x), float(-best.fun), 0.5 / math.sqrt(-best.fun))


def rigidity(shape: HelixShape, wave: float = LONG_WAVE) -> float:
    """Give what a helix sets against a disturbance; negative where it is unstable.

    Parameters
    ----------
    shape : HelixShape
        A helix that touches the wall all round.
    wave : float
        Wave number of the disturbance over that of a wave of two turns, up to 1; default a wave of many.

    Returns
    -------
    float
        Least second variation of the energy over the square of the disturbance's wave number [-]; 6 k^2 - 1
        for the weightless helix, which is unstable below k^2 = 1/6.

    Notes
    -----
    ``eta'''' - ((6 theta'^2 - 1) eta')' + gamma cos(theta) eta`` on an endless helix by Fourier series and
    Bloch waves. The disturbance that spans many turns is the first to grow; the tests try shorter ones.
    """
    theta, turn = _even_places(shape)
    order = np.fft.fftfreq(_POINTS, 1 / _POINTS)
    kept = np.flatnonzero(np.abs(order) < _POINTS / 3)
    pair = np.subtract.outer(np.arange(_POINTS), np.arange(_POINTS)) % _POINTS
    stretch = (np.fft.fft(6 * shape.square_slope(theta) - 1) / _POINTS)[pair]
    weight = (np.fft.fft(shape.gamma * np.cos(theta)) / _POINTS)[pair]
    bloch = wave * math.pi / turn
    number = order * 2 * math.pi / turn + bloch
    form = np.diag(number**4) + number[:, None] * stretch * number + weight
    return float(np.linalg.eigvalsh(form[np.ix_(kept, kept)])[0]) / bloch**2


def _even_places(shape: HelixShape) -> tuple[Floats, float]:
    """Give the angle at even places along one turn, up to half a turn mirrored, and the turn's length."""
    turn = shape.turn
    place = np.arange(_POINTS) * turn / _POINTS
    place = np.minimum(place, turn - place)
    known = np.linspace(0, math.pi, 201)
    angle = np.interp(place, shape.along(known), known)
    for _ in range(4):  # Newton's method: d(along)/d(angle) is one over the slope
        angle += (place - shape.along(angle)) * np.sqrt(shape.square_slope(angle))
    return angle, turn


def least_stable_mean(gamma: float) -> float:
    """Give the square slope below which a helix under side weight is unstable.

    Parameters
    ----------
    gamma : float
        Side weight, from 0 to 0.12: the branch ends before it loses its stability beyond [-].

    Returns
    -------
    float
        k^2 [-]; 1/6 without weight, more with it.

    Raises
    ------
    ValueError
        If gamma is outside that range.
    """
    from scipy.optimize import brentq

    if not 0 <= gamma <= 0.12:
        raise ValueError(f"gamma came as {gamma}; expected 0 to 0.12")
    if gamma == 0:
        return 1 / 6

    def stands(mean: float) -> float:
        try:
            return rigidity(by_collocation(mean, gamma))
        except NoHelixError:
            return -1.0

    return float(brentq(stands, LEAST_MEAN + 1e-3, 0.46, xtol=1e-7))


def whirl_compression(
    mass: ArrayLike, stiffness: ArrayLike, whirl: ArrayLike, total: ArrayLike, mean: float
) -> Floats:
    """Give what whirling adds to the compression that shapes a helix.

    Parameters
    ----------
    mass : array_like
        Of pipe, mud in it and mud carried along, per length [kg/m].
    stiffness : array_like
        EI [N.m2].
    whirl : array_like
        Rate at which the helix goes round the hole [rad/s]; zero for a helix that lies still while the pipe
        turns about its own axis.
    total : array_like
        Compression plus what is sought [N], above zero.
    mean : float
        k^2 of the helix [-].

    Returns
    -------
    ndarray
        ``m c^2`` [N], c being the speed at which the helix runs along the pipe.

    Notes
    -----
    A helix that goes round like a screw is a wave theta(s - c t). Its inertia along the wall, m c^2 theta'',
    and the centripetal force on the wall, m r c^2 theta'^2, are those that a compression greater by m c^2
    would cause: the whirling helix is the resting one at F + m c^2. With mean slope k sqrt(F / EI) the rate
    is c times that, hence ``m c^2 = m whirl^2 EI / (k^2 total)``. The mean slope is taken as k, which is
    exact without side weight and 1.4 % high at the unloading limit.
    """
    turning = np.asarray(mass, dtype=float) * np.asarray(whirl, dtype=float) ** 2
    return turning * np.asarray(stiffness) / (mean * np.asarray(total, dtype=float))


def unloading_load(
    local: ArrayLike, stiffness: ArrayLike = 1.0, mass: ArrayLike = 0.0, whirl: ArrayLike = 0.0
) -> Floats:
    """Give the compression below which a helix lets go of the wall, at rest or whirling.

    Parameters
    ----------
    local : array_like
        F_DP at the place [N].
    stiffness, mass, whirl : array_like
        As in `whirl_compression`; without them the helix is at rest.

    Returns
    -------
    ndarray
        [N]; not below zero. A whirling helix is held by its own inertia at less compression.

    Examples
    --------
    >>> float(unloading_load(100e3).round(-1))
    137040.0
    """
    limit = unloading_limit()
    total = limit.ratio * np.asarray(local, dtype=float)
    held = np.where(total > 0, total, 1.0)
    added = np.where(total > 0, whirl_compression(mass, stiffness, whirl, held, limit.mean), 0.0)
    return np.maximum(total - added, 0.0)
