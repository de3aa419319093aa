"""Read a survey table into a trajectory, or refuse it with the row at fault."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from forensics.case import TieIn
from forensics.tables import Column, Table, read_table
from forensics.well.trajectory import (
    DEPTH_NOISE,
    Trajectory,
    angle_between,
    build_trajectory,
    find_fault,
    tangent_of,
)
from forensics.well.witsml_objects import is_xml
from forensics.well.witsml_trajectory import read_trajectory

Floats = NDArray[np.float64]
# No tool reads an angle this small: what is below was never an angle [rad].
UNDECODED = 1e-9
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
        ("inc", "incl", "inclin", "devi", "dev", "deviation", "inc angle", "hole inclination"),
        True,
    ),
    Column("azimuth", "angle", ("azi", "azim", "az", "hole azimuth", "azimuth true", "azimuth grid"), True),
)


def load_trajectory(file: Path, tie_in: TieIn | None = None) -> tuple[Trajectory, tuple[str, ...]]:
    """Read a survey table into a trajectory.

    Parameters
    ----------
    file : Path
        Columns md, inclination, azimuth; or a WITSML trajectory.
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
    table, found = read_trajectory(file) if is_xml(file) else (read_table(file, SURVEY_COLUMNS), ())
    stations = [table.number(name) for name in ("md", "inclination", "azimuth")]
    extra = 0
    if tie_in is not None:
        first = (tie_in.md, tie_in.inclination, tie_in.azimuth)
        gap = stations[0][0] - tie_in.md
        if gap < -DEPTH_NOISE:
            raise table.error(f"first station is {-gap:.2f} m above the tie-in of the case file", 0, "md")
        if gap > DEPTH_NOISE:
            stations = [np.insert(values, 0, value) for values, value in zip(stations, first, strict=True)]
            extra = 1
        else:
            _agree(stations, tie_in, table)
    fault = find_fault(*stations)
    if fault is not None:
        row, message = fault
        raise table.error(message, max(row - extra, 0))
    _refuse_undecoded(table)
    return build_trajectory(*stations), (*found, *_remarks(file.name, stations))


def _refuse_undecoded(table: Table) -> None:
    """Refuse angles that are all next to nothing and none of them 0: numbers nobody decoded."""
    angles = np.concatenate([table.number("inclination"), table.number("azimuth")])
    if len(table) > 2 and (angles != 0.0).all() and np.abs(angles).max() < UNDECODED:
        raise table.error(
            f"is {np.degrees(angles[0]):.3g} deg, and no angle is larger: these numbers were not decoded "
            "right; export the survey anew",
            0,
            "inclination",
        )


def _agree(stations: Sequence[Floats], tie_in: TieIn, table: Table) -> None:
    """Refuse a tie-in at the first station's depth that points elsewhere."""
    own = tangent_of(stations[1][:1], stations[2][:1])
    given = tangent_of(np.array([tie_in.inclination]), np.array([tie_in.azimuth]))
    apart = np.degrees(angle_between(own, given))[0]
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
