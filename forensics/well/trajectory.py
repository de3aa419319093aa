"""The path of the hole: minimum curvature, with the direction defined everywhere.

Between two stations the tangent turns on a great circle at a constant rate, so the path is a circular arc.
Above the first station the hole is vertical; below the last one its direction holds.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.errors import TableError

Floats = NDArray[np.float64]

LARGEST_TURN = np.radians(60.0)
# A first station written as -1.5e-6 m is the rotary, not a station above it.
DEPTH_NOISE = 0.01


@dataclass(frozen=True)
class Directions:
    """The hole's direction at k depths.

    Parameters
    ----------
    tangent : ndarray, shape (k, 3)
        Unit vector pointing down the hole (north, east, down).
    curvature : ndarray, shape (k, 3)
        Its derivative along measured depth [1/m].
    inclination, azimuth : ndarray, shape (k,)
        From vertical, and from north, 0 to 2 pi [rad].
    tvd : ndarray, shape (k,)
        True vertical depth [m].
    """

    tangent: Floats
    curvature: Floats
    inclination: Floats
    azimuth: Floats
    tvd: Floats


@dataclass(frozen=True)
class _Arcs:
    """Arcs between stations, arrays of shape (m-1, ...): start tangent, normal, turn [rad], length [m]."""

    tangent: Floats
    normal: Floats
    turn: Floats
    length: Floats


@dataclass(frozen=True)
class Trajectory:
    """Survey stations and the path through them.

    Parameters
    ----------
    md, inclination, azimuth : ndarray, shape (m,)
        Stations, md strictly increasing [m, rad, rad].
    north, east, tvd : ndarray, shape (m,)
        Their places from the wellhead [m].

    References
    ----------
    .. [1] Sawaryn, S. J. and Thorogood, J. L., "A compendium of directional calculations based on the
       minimum curvature method", SPE Drilling & Completion 20 (2005) 24-36.
    """

    md: Floats
    inclination: Floats
    azimuth: Floats
    north: Floats
    east: Floats
    tvd: Floats

    @cached_property
    def _arcs(self) -> _Arcs:
        return _arcs(self.md, self.inclination, self.azimuth)

    @property
    def dogleg(self) -> Floats:
        """Turn of the direction between stations, shape (m-1,) [rad]."""
        return self._arcs.turn

    @property
    def dogleg_severity(self) -> Floats:
        """Turn of the direction per length between stations, shape (m-1,) [rad/m]."""
        return self._arcs.turn / self._arcs.length

    def at(self, md: ArrayLike) -> Directions:
        """Find direction, curvature and vertical depth at any measured depth.

        Parameters
        ----------
        md : array_like, shape (k,)
            Measured depths, in any order [m].

        Returns
        -------
        Directions
            At a station the direction is the station's, the curvature that of the arc below it.
        """
        depth = np.atleast_1d(np.asarray(md, dtype=np.float64))
        tangent, curvature = self.bends(depth)
        inclination = np.arctan2(np.hypot(tangent[:, 0], tangent[:, 1]), tangent[:, 2])
        return Directions(
            tangent, curvature, inclination, self._azimuth(depth, tangent), self.position(depth)[:, 2]
        )

    def position(self, md: ArrayLike) -> Floats:
        """Find the place of any measured depth: north, east, down, shape (k, 3) [m]."""
        depth = np.atleast_1d(np.asarray(md, dtype=np.float64))
        places = np.column_stack([self.north, self.east, self.tvd])
        last = len(self.md) - 1
        index = np.clip(np.searchsorted(self.md, depth, side="right") - 1, 0, last)
        along = depth - self.md[index]
        result: Floats = places[index] + along[:, None] * np.array([0.0, 0.0, 1.0])
        inside = (depth > self.md[0]) & (index < last)
        if inside.any():
            result[inside] = places[index[inside]] + _chord(self._arcs, index[inside], along[inside])
        below = depth > self.md[last]
        ahead = tangent_of(self.inclination[last:], self.azimuth[last:])
        result[below] = places[last] + along[below, None] * ahead
        return result

    def bends(self, depth: Floats) -> tuple[Floats, Floats]:
        """Find tangent and curvature only, as `at` gives them, shape (k, 3) each [-, 1/m]."""
        last = len(self.md) - 1
        tangent = np.zeros((len(depth), 3))
        curvature = np.zeros((len(depth), 3))
        above = depth < self.md[0]
        tangent[above, 2] = 1.0
        below = depth >= self.md[last]
        tangent[below] = tangent_of(self.inclination[last:], self.azimuth[last:])
        inside = ~(above | below)
        if inside.any():
            arcs = self._arcs
            index = np.searchsorted(self.md, depth[inside], side="right") - 1
            rate = (arcs.turn / arcs.length)[index][:, None]
            angle = rate * (depth[inside] - self.md[index])[:, None]
            start, normal = arcs.tangent[index], arcs.normal[index]
            tangent[inside] = start * np.cos(angle) + normal * np.sin(angle)
            curvature[inside] = rate * (normal * np.cos(angle) - start * np.sin(angle))
        return tangent, curvature

    def _azimuth(self, depth: Floats, tangent: Floats) -> Floats:
        azimuth = np.mod(np.arctan2(tangent[:, 1], tangent[:, 0]), 2.0 * np.pi)
        # A vertical tangent has no azimuth of its own: the nearest station lends its.
        upright = np.hypot(tangent[:, 0], tangent[:, 1]) < 1e-9
        if upright.any():
            nearest = np.abs(self.md[:, None] - depth[upright][None, :]).argmin(axis=0)
            azimuth[upright] = np.mod(self.azimuth[nearest], 2.0 * np.pi)
        return azimuth


def build_trajectory(md: ArrayLike, inclination: ArrayLike, azimuth: ArrayLike) -> Trajectory:
    """Place survey stations by minimum curvature.

    Parameters
    ----------
    md, inclination, azimuth : array_like, shape (m,)
        Stations from the top down [m, rad, rad].

    Returns
    -------
    Trajectory
        The hole vertical above its first station.

    Raises
    ------
    TableError
        If there is no station, a number is not finite, depth goes back or repeats, or the direction turns
        by more than 60 degrees between stations (or between the vertical and the first).

    Examples
    --------
    >>> path = build_trajectory([0.0, 100.0], [0.0, 0.0], [0.0, 0.0])
    >>> path.at([50.0]).tvd.tolist()
    [50.0]
    """
    depth, inc, azi = (np.array(values, dtype=np.float64, ndmin=1) for values in (md, inclination, azimuth))
    fault = find_fault(depth, inc, azi)
    if fault is not None:
        row, message = fault
        raise TableError(f"station {row + 1}: {message}")
    depth[0] = max(depth[0], 0.0)
    arcs = _arcs(depth, inc, azi)
    steps = _chord(arcs, np.arange(len(depth) - 1), arcs.length)
    places = np.cumsum(np.vstack([[0.0, 0.0, depth[0]], steps]), axis=0)
    return Trajectory(depth, inc, azi, *places.T)


def find_fault(md: Floats, inclination: Floats, azimuth: Floats) -> tuple[int, str] | None:
    """Find the first station that no hole could have: its row from 0, and what is wrong with it."""
    if md.ndim != 1 or not (md.shape == inclination.shape == azimuth.shape) or md.size == 0:
        shapes = f"{md.shape}, {inclination.shape}, {azimuth.shape}"
        return 0, f"arrays have shapes {shapes}; one length of one station or more is needed"
    finite = np.isfinite(md) & np.isfinite(inclination) & np.isfinite(azimuth)
    wrong = ~finite | (inclination < -1e-9) | (inclination > np.pi) | (np.abs(azimuth) > 4.0 * np.pi)
    faults = []
    if wrong.any():
        row = int(wrong.argmax())
        shown = f"{np.degrees(inclination[row]):.4g} deg, azimuth {np.degrees(azimuth[row]):.4g} deg"
        faults.append((row, f"inclination {shown} is no direction; 0 to 180 and 0 to 360 deg are needed"))
    if md[0] < -DEPTH_NOISE:
        faults.append((0, f"starts at {md[0]:.2f} m; depths count down from the rotary"))
    back = np.diff(np.maximum(md, 0.0)) <= 0.0
    if back.any():
        row = int(back.argmax()) + 1
        how = "repeats the depth of" if md[row] == md[row - 1] else "goes back up from"
        faults.append(
            (row, f"{md[row]:.2f} m {how} the row before ({md[row - 1]:.2f} m); remove or sort the rows")
        )
    faults += _impossible_turns(md, inclination, azimuth)
    return min(faults, key=lambda fault: fault[0], default=None)


def _impossible_turns(md: Floats, inclination: Floats, azimuth: Floats) -> list[tuple[int, str]]:
    tangents = np.vstack([[0.0, 0.0, 1.0], tangent_of(inclination, azimuth)])
    turns = angle_between(tangents[:-1], tangents[1:])
    wild = turns > LARGEST_TURN
    if not wild.any():
        return []
    row = int(wild.argmax())
    origin = f"the row before ({md[row - 1]:.2f} m)" if row else "the vertical above the first station"
    advice = "check for a fill value or a wrong unit" if row else "give a tie_in, or the stations above"
    return [
        (row, f"at {md[row]:.2f} m the hole turns {np.degrees(turns[row]):.0f} deg from {origin}; {advice}")
    ]


def tangent_of(inclination: Floats, azimuth: Floats) -> Floats:
    """Give unit vectors (north, east, down), shape (k, 3)."""
    across = np.sin(inclination)
    return np.column_stack([across * np.cos(azimuth), across * np.sin(azimuth), np.cos(inclination)])


def angle_between(first: Floats, second: Floats) -> Floats:
    """Measure the angle between unit vectors of shape (k, 3), exact for small ones too [rad]."""
    turn: Floats = np.arctan2(np.linalg.norm(np.cross(first, second), axis=-1), (first * second).sum(axis=-1))
    return turn


def _arcs(md: Floats, inclination: Floats, azimuth: Floats) -> _Arcs:
    tangents = tangent_of(inclination, azimuth)
    start, end = tangents[:-1], tangents[1:]
    across = end - (start * end).sum(axis=1)[:, None] * start
    size = np.linalg.norm(across, axis=1)[:, None]
    normal = np.divide(across, size, out=np.zeros_like(across), where=size > 0.0)
    return _Arcs(start, normal, angle_between(start, end), np.diff(md))


def _chord(arcs: _Arcs, index: NDArray[np.intp], along: Floats) -> Floats:
    """Displacement from the start of an arc after `along` of its length, shape (k, 3) [m]."""
    angle = arcs.turn[index] * along / arcs.length[index]
    # sin(x)/x and (1 - cos x)/x in forms that hold down to x = 0.
    ahead = along * np.sinc(angle / np.pi)
    aside = along * np.sin(angle / 2.0) * np.sinc(angle / (2.0 * np.pi))
    return ahead[:, None] * arcs.tangent[index] + aside[:, None] * arcs.normal[index]
