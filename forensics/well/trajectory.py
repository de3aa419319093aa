"""The path of the hole: minimum curvature, with the direction defined everywhere.

Between two stations the tangent turns on a great circle at a constant rate, so the path is a circular arc.
Above the first station the hole is vertical; below the last one its direction holds.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.case import TieIn
from forensics.errors import TableError
from forensics.tables import Column, Table, read_table

Floats = NDArray[np.float64]

LARGEST_TURN = np.radians(60.0)
# A first station written as -1.5e-6 m is the rotary, not a station above it.
_DEPTH_NOISE = 0.01

SURVEY_COLUMNS = (
    Column(
        "md",
        "length",
        ("measured depth", "measureddepth", "meas depth", "depth", "dept", "depthmd", "md depth", "ahd"),
        required=True,
    ),
    Column(
        "inclination",
        "angle",
        ("inc", "incl", "inclin", "devi", "dev", "inc angle", "hole inclination"),
        True,
    ),
    Column("azimuth", "angle", ("azi", "azim", "az", "hole azimuth", "azimuth true", "azimuth grid"), True),
)


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
        tangent, curvature = self._turned(depth)
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
        result = places[index] + along[:, None] * np.array([0.0, 0.0, 1.0])
        inside = (depth > self.md[0]) & (index < last)
        if inside.any():
            result[inside] = places[index[inside]] + _chord(self._arcs, index[inside], along[inside])
        below = depth > self.md[last]
        ahead = _tangent(self.inclination[last:], self.azimuth[last:])
        result[below] = places[last] + along[below, None] * ahead
        return result

    def _turned(self, depth: Floats) -> tuple[Floats, Floats]:
        last = len(self.md) - 1
        tangent = np.zeros((len(depth), 3))
        curvature = np.zeros((len(depth), 3))
        above = depth < self.md[0]
        tangent[above, 2] = 1.0
        below = depth >= self.md[last]
        tangent[below] = _tangent(self.inclination[last:], self.azimuth[last:])
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
        return (
            0,
            f"arrays have shapes {md.shape}, {inclination.shape}, {azimuth.shape}; one length is needed",
        )
    finite = np.isfinite(md) & np.isfinite(inclination) & np.isfinite(azimuth)
    wrong = ~finite | (inclination < -1e-9) | (inclination > np.pi) | (np.abs(azimuth) > 4.0 * np.pi)
    faults = []
    if wrong.any():
        row = int(wrong.argmax())
        shown = f"{np.degrees(inclination[row]):.4g} deg, azimuth {np.degrees(azimuth[row]):.4g} deg"
        faults.append((row, f"inclination {shown} is no direction; 0 to 180 and 0 to 360 deg are needed"))
    if md[0] < -_DEPTH_NOISE:
        faults.append((0, f"starts at {md[0]:.2f} m; depths count down from the rotary"))
    back = np.diff(md) <= 0.0
    if back.any():
        row = int(back.argmax()) + 1
        how = "repeats the depth of" if md[row] == md[row - 1] else "goes back up from"
        faults.append(
            (row, f"{md[row]:.2f} m {how} the row before ({md[row - 1]:.2f} m); remove or sort the rows")
        )
    faults += _impossible_turns(md, inclination, azimuth)
    return min(faults, default=None)


def _impossible_turns(md: Floats, inclination: Floats, azimuth: Floats) -> list[tuple[int, str]]:
    tangents = np.vstack([[0.0, 0.0, 1.0], _tangent(inclination, azimuth)])
    turns = _angle(tangents[:-1], tangents[1:])
    wild = turns > LARGEST_TURN
    if not wild.any():
        return []
    row = int(wild.argmax())
    origin = f"the row before ({md[row - 1]:.2f} m)" if row else "the vertical above the first station"
    advice = "check for a fill value or a wrong unit" if row else "give a tie_in, or the stations above"
    return [
        (row, f"at {md[row]:.2f} m the hole turns {np.degrees(turns[row]):.0f} deg from {origin}; {advice}")
    ]


def _tangent(inclination: Floats, azimuth: Floats) -> Floats:
    across = np.sin(inclination)
    return np.column_stack([across * np.cos(azimuth), across * np.sin(azimuth), np.cos(inclination)])


def _angle(first: Floats, second: Floats) -> Floats:
    """Angle between unit vectors, exact for small ones too [rad]."""
    return np.arctan2(np.linalg.norm(np.cross(first, second), axis=-1), (first * second).sum(axis=-1))


def _arcs(md: Floats, inclination: Floats, azimuth: Floats) -> _Arcs:
    tangents = _tangent(inclination, azimuth)
    start, end = tangents[:-1], tangents[1:]
    across = end - (start * end).sum(axis=1)[:, None] * start
    size = np.linalg.norm(across, axis=1)[:, None]
    normal = np.divide(across, size, out=np.zeros_like(across), where=size > 0.0)
    return _Arcs(start, normal, _angle(start, end), np.diff(md))


def _chord(arcs: _Arcs, index: NDArray[np.intp], along: Floats) -> Floats:
    """Displacement from the start of an arc after `along` of its length, shape (k, 3) [m]."""
    angle = arcs.turn[index] * along / arcs.length[index]
    # sin(x)/x and (1 - cos x)/x in forms that hold down to x = 0.
    ahead = along * np.sinc(angle / np.pi)
    aside = along * np.sin(angle / 2.0) * np.sinc(angle / (2.0 * np.pi))
    return ahead[:, None] * arcs.tangent[index] + aside[:, None] * arcs.normal[index]


def load_trajectory(file: Path, tie_in: TieIn | None = None) -> tuple[Trajectory, tuple[str, ...]]:
    """Read a survey table into a trajectory.

    Parameters
    ----------
    file : Path
        Columns md, inclination, azimuth.
    tie_in : TieIn, optional
        A station above the first row.

    Returns
    -------
    Trajectory
    tuple of str
        What a reader of the result should know.

    Raises
    ------
    TableError
        If the table can't be read, or as `build_trajectory`, with the rows named.
    """
    table = read_table(file, SURVEY_COLUMNS)
    stations = [table.number(name) for name in ("md", "inclination", "azimuth")]
    extra = 0
    if tie_in is not None:
        first = (tie_in.md, tie_in.inclination, tie_in.azimuth)
        gap = stations[0][0] - tie_in.md
        if gap < -_DEPTH_NOISE:
            raise table.error(f"first station is {-gap:.2f} m above the tie-in of the case file", 0, "md")
        if gap > _DEPTH_NOISE:
            stations = [np.insert(values, 0, value) for values, value in zip(stations, first, strict=True)]
            extra = 1
        else:
            _agree(stations, tie_in, table)
    fault = find_fault(*stations)
    if fault is not None:
        row, message = fault
        raise table.error(message, max(row - extra, 0))
    return build_trajectory(*stations), _remarks(file.name, stations)


def _agree(stations: Sequence[Floats], tie_in: TieIn, table: Table) -> None:
    """Refuse a tie-in at the first station's depth that points elsewhere."""
    own = _tangent(stations[1][:1], stations[2][:1])
    given = _tangent(np.array([tie_in.inclination]), np.array([tie_in.azimuth]))
    apart = np.degrees(_angle(own, given))[0]
    if apart > 0.5:
        raise table.error(
            f"first station is {apart:.1f} deg off the tie-in of the case file; leave one out", 0
        )


def _remarks(name: str, stations: Sequence[Floats]) -> tuple[str, ...]:
    md, inclination, azimuth = stations
    remarks = []
    if inclination[0] > np.radians(5.0) and md[0] > 0.0:
        remarks.append(
            f"{name}: the hole is taken as vertical down to the first station at {md[0]:.1f} m, "
            f"where it leans {np.degrees(inclination[0]):.1f} deg"
        )
    # In degrees no deviated hole keeps both angles below these; in radians every hole does.
    narrow = (
        np.degrees(inclination).max() <= np.pi / 2 + 0.01 and np.degrees(azimuth).max() <= 2 * np.pi + 0.01
    )
    if narrow and len(md) > 3 and np.degrees(azimuth).max() > 0.5 and np.degrees(inclination).max() > 0.5:
        remarks.append(
            f"{name}: no angle exceeds 6.3 deg; the numbers may be radians under a header of degrees"
        )
    return tuple(remarks)
