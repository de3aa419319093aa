"""The path a survey makes likely: stations moved within their accuracy, and how far they may be off.

A survey is a measurement, and minimum curvature takes it at its word: two stations that are each a twentieth
of a degree off make a dogleg where there is none. Near vertical, where little else presses the string
against the wall, such doglegs decide at which load it buckles.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.well.trajectory import Trajectory, build_trajectory, tangent_of

Floats = NDArray[np.float64]

#: Random error of a station's direction, one sigma, in each of two directions across the hole [rad]: common
#: practice, no source (tool makers state about twice that, systematic part and all).
STATION_SIGMA = np.radians(0.07)

#: Bends do not change alike everywhere: a kick-off is no part of the scatter of a tangent section. Degrees of
#: freedom of Student's law for the changes of curvature; the fewer, the more freely some may stand apart.
FREEDOM = 2.0

#: Changes of curvature are never taken to be smaller than this, one sigma from one stand of 30 m to
#: the next [1/m]: bits walk, and formations change (common practice, no source).
LEAST_CHANGE = np.radians(0.15) / 30.0

#: Stations that the stated accuracy counts for, against what the survey itself shows.
STATED_WORTH = 30.0

#: Stations from which a survey can show anything of its own accuracy.
FEWEST = 4

ROUNDS = 40
BLOCK = 256  # columns of the covariance made at a time


@dataclass(frozen=True)
class LikelyPath:
    """What a survey of stated accuracy says of the path.

    Parameters
    ----------
    mean : Trajectory
        The likely path.
    sigma : float
        Random error of a station's direction, one sigma, by stated accuracy and survey together [rad].
    factor : ndarray, shape (3, m)
        Banded Cholesky factor of the stations' precision (upper form), for draws.
    """

    mean: Trajectory
    sigma: float
    factor: Floats

    def draw(self, normal: Floats) -> Floats:
        """Draw how far the stations' true directions lie from the likely ones.

        Parameters
        ----------
        normal : ndarray, shape (m, k)
            Standard normal numbers.

        Returns
        -------
        ndarray, shape (m, k)
            Deviations across the hole, in one direction [rad].
        """
        from scipy.linalg import solve_banded

        return solve_banded((0, 2), self.factor, normal)


def likely_path(trajectory: Trajectory, stated: float) -> LikelyPath:
    """Find the path that a survey makes likely.

    Parameters
    ----------
    trajectory : Trajectory
        Through the stations as surveyed.
    stated : float
        Random error of a station's direction, one sigma in each direction across the hole [rad]; zero takes
        the survey for the path itself.

    Returns
    -------
    LikelyPath

    Notes
    -----
    Stations are directions with an error of sigma; the changes of curvature from one stretch to the next
    follow Student's law about zero, whose width the survey itself tells (expectation-maximisation). Where
    a survey is smooth the stations stay; where it zigzags within its accuracy the zigzag goes.

    References
    ----------
    Lange, Little and Taylor (1989), J. Am. Stat. Assoc. 84 (Student's law by expectation-maximisation).
    """
    tangent = tangent_of(trajectory.inclination, trajectory.azimuth)
    count = len(tangent)
    if count < FEWEST or stated <= 0.0:
        alone = _factor(np.zeros((0, 3)), np.zeros(0), count, max(stated, 1e-9))
        return LikelyPath(trajectory, stated, alone)
    rows = _differences(trajectory.md)
    told = _across(rows, tangent)
    least = LEAST_CHANGE**2 / 30.0
    square = _square(told)  # a start that lets kick-offs stand: smeared over their neighbours they stay so
    width = max(float(np.median(square)) / 2.0, least)
    variance = width * (FREEDOM + square / width) / (FREEDOM + 2.0)
    sigma = stated
    for _ in range(ROUNDS):
        factor = _factor(rows, variance, count, sigma)
        spread, own = _spread(factor, rows)
        moved = _solve(factor, -_back(rows, told / variance[:, None]))
        square = _square(told + _change(rows, moved)) + 2.0 * spread
        weight = (FREEDOM + 2.0) / (FREEDOM + square / width)
        before, width = (width, sigma), max(float(np.mean(weight * square)) / 2.0, least)
        variance = width / weight
        seen = float(np.sum(_square(moved)) / 2.0 + np.sum(own))
        sigma = np.sqrt((STATED_WORTH * stated**2 + seen) / (STATED_WORTH + count))
        if max(abs(width / before[0] - 1.0), abs(sigma / before[1] - 1.0)) < 0.01:
            break
    mean = tangent + moved
    mean /= np.linalg.norm(mean, axis=1)[:, None]
    inclination = np.arctan2(np.hypot(mean[:, 0], mean[:, 1]), mean[:, 2])
    azimuth = np.mod(np.arctan2(mean[:, 1], mean[:, 0]), 2.0 * np.pi)
    return LikelyPath(build_trajectory(trajectory.md, inclination, azimuth), sigma, factor)


def _differences(md: Floats) -> Floats:
    """Weights on three stations that give the change of curvature at the middle one, shape (m - 2, 3).

    Over the root of the mean stretch, so that a random walk of curvature gives all the same size.
    """
    length = np.diff(md)
    root = np.sqrt(0.5 * (length[1:] + length[:-1]))
    first, last = 1.0 / (length[:-1] * root), 1.0 / (length[1:] * root)
    return np.column_stack([first, -first - last, last])


def _change(rows: Floats, values: Floats) -> Floats:
    """Change of curvature at each inner station, shape (m - 2, 3)."""
    return sum(rows[:, k : k + 1] * values[k : len(values) - 2 + k] for k in range(3))


def _back(rows: Floats, changes: Floats) -> Floats:
    """Transpose of `_change`, shape (m, 3)."""
    result = np.zeros((len(rows) + 2, 3))
    for k in range(3):
        result[k : len(rows) + k] += rows[:, k : k + 1] * changes
    return result


def _across(rows: Floats, tangent: Floats) -> Floats:
    """Change of curvature across the hole: along it a bend of even curvature changes too, by no error."""
    change, middle = _change(rows, tangent), tangent[1:-1]
    return change - np.einsum("ij,ij->i", change, middle)[:, None] * middle


def _square(changes: Floats) -> Floats:
    return np.einsum("ij,ij->i", changes, changes)


def _factor(rows: Floats, variance: Floats, count: int, sigma: float) -> Floats:
    """Banded Cholesky factor of the precision, upper form, shape (3, m)."""
    from scipy.linalg import cholesky_banded

    band = np.zeros((3, count))
    band[2] = 1.0 / sigma**2
    for i in range(3):
        for j in range(i, 3):
            if len(rows):
                np.add.at(band[2 - (j - i)], np.arange(len(rows)) + j, rows[:, i] * rows[:, j] / variance)
    return cholesky_banded(band)


def _solve(factor: Floats, right: Floats) -> Floats:
    from scipy.linalg import cho_solve_banded

    return cho_solve_banded((factor, False), right)


def _spread(factor: Floats, rows: Floats) -> tuple[Floats, Floats]:
    """Posterior variance of the change of curvature, shape (m - 2,), and of each direction, shape (m,)."""
    count = factor.shape[1]
    change, own = np.zeros(count - 2), np.empty(count)
    for start in range(0, count, BLOCK):
        stop = min(start + BLOCK, count)
        right = np.zeros((count, stop - start))
        at = np.arange(stop - start)
        right[start + at, at] = 1.0
        solved = _solve(factor, right)
        own[start:stop] = solved[start + at, at]
        for i in range(3):  # station `start + at` is number i of the three of a change
            row = start + at - i
            inside = (row >= 0) & (row < count - 2)
            row, column = row[inside], at[inside]
            for j in range(3):
                change[row] += rows[row, i] * rows[row, j] * solved[row + j, column]
    return change, own
