"""The helix in a deviated hole: its shape under side weight, solved in two independent ways.

Pipe on a cylinder, at angle ``theta`` from the low side, length scaled by ``sqrt(EI / F)``, and
``gamma = EI w sin I / (r F^2)`` (the Dawson-Paslay load is gamma = 1/4):

    theta'''' - 6 theta'^2 theta'' + theta'' + gamma sin(theta) = 0,

pressed on the wall by ``gamma cos(theta) + theta'^2 - theta'^4 + 3 theta''^2 + 4 theta' theta'''`` (over
``r F^2 / EI``). A helix is a solution whose square slope ``p(theta) = theta'^2`` repeats with every turn;
it is named by the mean of p over the angle, k^2 (Lubinski's weightless helix has k^2 = 1/2). One way solves
``p p''/2 - p'^2/8 - 3 p^2/2 + p/2 - gamma cos(theta) = const`` by Fourier collocation; the other
integrates theta along the pipe and closes a boundary-value problem over half a turn. What loads the helix
can bear follows in `helix_limit`.

References
----------
Mitchell, R. F. (1988), "New concepts for helical buckling", SPE Drill. Eng. 3 (the equation with weight).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats

HARMONICS = 48
"""Cosines of the series: the last ones are below 1e-12 wherever a helix exists with contact all round."""

_SETTLED = 1e-13
_LADDER, _RUNGS = 0.015, 6


class NoHelixError(ValueError):
    """No helix of this mean square slope was found at this side weight."""


@dataclass(frozen=True)
class HelixShape:
    """A helix under side weight, by the cosine series of its square slope.

    Parameters
    ----------
    mean : float
        k^2, the mean of p over the angle [-].
    gamma : float
        Side weight, ``EI w sin I / (r F^2)`` [-].
    series : ndarray, shape (m,)
        ``p(theta) = sum of series[j] cos(j theta)`` [-].
    """

    mean: float
    gamma: float
    series: Floats

    def square_slope(self, angle: ArrayLike, derivative: int = 0) -> Floats:
        """Give p or its first or second derivative at angles from the low side [rad], any shape."""
        angle = np.asarray(angle, dtype=float)
        j = np.arange(self.series.size)
        # each differentiation is a quarter of a wave ahead and a factor j
        waves = np.cos(angle[..., None] * j + derivative * math.pi / 2)
        return waves @ (self.series * j.astype(float) ** derivative)

    def wall_force(self, angle: ArrayLike) -> Floats:
        """Give the wall force over ``r F^2 / EI`` at angles from the low side [rad], any shape [-]."""
        p, slope, bend = (self.square_slope(angle, order) for order in (0, 1, 2))
        return self.gamma * np.cos(angle) + p - p**2 + 0.75 * slope**2 + 2 * p * bend

    def least_wall_force(self) -> float:
        """Give the least wall force round the hole; negative where the pipe would have to be pulled [-]."""
        return float(self.wall_force(np.linspace(0, math.pi, 361)).min())

    def along(self, angle: ArrayLike) -> Floats:
        """Give the length from the low side to an angle up to half a turn, over ``sqrt(EI / F)`` [-]."""
        angle = np.asarray(angle, dtype=float)
        rule, weight = np.polynomial.legendre.leggauss(80)
        inside = angle[..., None] / 2 * (1 + rule)
        return angle / 2 * (weight / np.sqrt(self.square_slope(inside))).sum(-1)

    @property
    def turn(self) -> float:
        """Length of one turn over ``sqrt(EI / F)`` [-]."""
        return 2 * float(self.along(math.pi))


def weightless(mean: float) -> HelixShape:
    """Give the helix without side weight: even, of square slope `mean` all round."""
    series = np.zeros(HARMONICS)
    series[0] = mean
    return HelixShape(mean, 0.0, series)


def first_order(mean: float, gamma: float) -> HelixShape:
    """Give the helix to first order in the side weight, ``p = k^2 + 2 gamma cos(theta) / (1 - 7 k^2)``.

    Parameters
    ----------
    mean : float
        k^2, not 1/7, where the answer is singular [-].
    gamma : float
        Side weight [-].

    Returns
    -------
    HelixShape
        Not a solution but the start of one.
    """
    series = weightless(mean).series
    series[1] = 2 * gamma / (1 - 7 * mean)
    return HelixShape(mean, gamma, series)


def by_collocation(mean: float, gamma: float, start: HelixShape | None = None) -> HelixShape:
    """Solve for the helix of given mean square slope by Fourier collocation and Newton's method.

    Parameters
    ----------
    mean : float
        k^2, between 0 and 1 [-].
    gamma : float
        Side weight [-], not negative.
    start : HelixShape, optional
        A neighbour to start from; default the answer to first order.

    Returns
    -------
    HelixShape
        To some twelve digits.

    Raises
    ------
    NoHelixError
        If Newton's method finds no solution, or one that does not go round.

    Examples
    --------
    >>> round(float(by_collocation(0.46, 0.1).square_slope(0.0)), 6)
    0.364025
    """
    angle = math.pi * np.arange(HARMONICS) / (HARMONICS - 1)
    j = np.arange(HARMONICS)
    wave = np.cos(np.outer(angle, j))
    slope_wave, bend_wave = -j * np.sin(np.outer(angle, j)), -(j**2) * wave
    series = (first_order(mean, gamma) if start is None else start).series.copy()
    series[0], constant, step = mean, mean / 2 - 1.5 * mean**2, math.inf
    for _ in range(30):
        p, slope, bend = wave @ series, slope_wave @ series, bend_wave @ series
        miss = p * bend / 2 - slope**2 / 8 - 1.5 * p**2 + p / 2 - gamma * np.cos(angle) - constant
        change = (bend / 2 - 3 * p + 0.5)[:, None] * wave
        change += (p / 2)[:, None] * bend_wave - (slope / 4)[:, None] * slope_wave
        change[:, 0] = -1.0  # the mean is given: the constant takes its place
        move = np.linalg.solve(change, -miss)
        constant, move[0] = constant + move[0], 0.0
        series += move
        step = float(np.abs(move).max())
        if not step < 10 or step < _SETTLED:
            break
    shape = HelixShape(mean, gamma, series)
    if not step < 1e-10 or shape.square_slope(angle).min() <= 0 or np.abs(series[-4:]).max() > 1e-9:
        raise NoHelixError(f"no helix of mean square slope {mean} was found at gamma {gamma}")
    return shape


@dataclass(frozen=True)
class HelixPath:
    """Half a turn of a helix along the pipe.

    Parameters
    ----------
    half_turn : float
        Length from the low side to the high side over ``sqrt(EI / F)`` [-].
    along : ndarray, shape (m,)
        Places from 0 to `half_turn` [-].
    angle, slope, bend, twist : ndarray, shape (m,)
        theta and its first three derivatives there [-].
    """

    half_turn: float
    along: Floats
    angle: Floats
    slope: Floats
    bend: Floats
    twist: Floats


def by_boundary_values(mean: float, gamma: float, points: int = 65) -> HelixPath:
    """Solve for the helix along the pipe: the same answer as `by_collocation`, by other means.

    Parameters
    ----------
    mean : float
        k^2, between 1/7 and 1 [-].
    gamma : float
        Side weight [-], not negative.
    points : int
        Places to give the answer at.

    Returns
    -------
    HelixPath
        To some ten digits.

    Raises
    ------
    NoHelixError
        If the ends can't be met.

    Notes
    -----
    theta = 0 and theta'' = 0 at the low side, theta = pi and theta'' = 0 at the high side, and the mean of
    theta'^3 over the length, times length over pi, is k^2. Unknown are the slope and the third derivative at
    the low side and the length, found in steps of side weight from the even helix; each trial is integrated
    by an eighth-order Runge-Kutta method.
    """
    from scipy.integrate import solve_ivp
    from scipy.optimize import root

    def rate(_: float, y: Floats, side: float) -> Floats:
        return np.array([y[1], y[2], y[3], (6 * y[1] ** 2 - 1) * y[2] - side * math.sin(y[0]), y[1] ** 3])

    def path(guess: Floats, side: float, places: Floats | None = None) -> Floats:
        start = [0.0, guess[0], 0.0, guess[1], 0.0]
        span = (0.0, float(guess[2]))
        return solve_ivp(rate, span, start, "DOP853", places, args=(side,), rtol=1e-12, atol=1e-13).y

    def miss(guess: Floats, side: float) -> Floats:
        end = path(guess, side)[:, -1]
        return np.array([end[0] - math.pi, end[2], end[4] / math.pi - mean])

    rungs = np.linspace(0.0, gamma, 1 + max(_RUNGS, math.ceil(gamma / _LADDER)))[1:]
    guess, change = np.array([math.sqrt(mean), 0.0, math.pi / math.sqrt(mean)]), np.zeros(3)
    # the first step as the answer to first order takes it: p at the low side by 2a, p'' there by minus that
    change[:2] = np.array([1.0, -mean]) * rungs[0] / (1 - 7 * mean) / math.sqrt(mean)
    for side in rungs:
        found = root(miss, guess + change, args=(float(side),), tol=1e-12)
        if not np.abs(found.fun).max() < 1e-9:
            raise NoHelixError(f"no helix of mean square slope {mean} was found at gamma {gamma}")
        change, guess = found.x - guess, found.x
    places = np.linspace(0.0, float(guess[2]), points)
    theta, slope, bend, twist, _ = path(guess, gamma, places)
    if slope.min() <= 0:
        raise NoHelixError(f"what was found at mean {mean} and gamma {gamma} turns back: no helix")
    return HelixPath(float(guess[2]), places, theta, slope, bend, twist)
