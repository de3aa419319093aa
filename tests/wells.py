"""Small invented wells for tests of the mechanics."""

from __future__ import annotations

import numpy as np

from forensics.well.fluid import Fluid
from forensics.well.hole import Hole
from forensics.well.model import Well
from forensics.well.string import Component, String
from forensics.well.trajectory import Trajectory, build_trajectory

DRILL_PIPE = Component("dp 5 in", "drillpipe", 9000.0, 0.127, 0.1086, 310.0, 0.168)


def one_pipe_well(
    inclination: float, length: float, pipe: Component = DRILL_PIPE, diameter: float = 0.2159
) -> Well:
    """One pipe in a straight hole at constant inclination [rad] from surface down.

    No survey starts like that, so the trajectory is put together here.
    """
    md = np.array([0.0, 0.5 * length, 1.1 * length])
    across, tvd = np.sin(inclination) * md, np.cos(inclination) * md
    north, east = across * np.cos(0.7), across * np.sin(0.7)
    return Well(
        trajectory=Trajectory(md, np.full(3, inclination), np.full(3, 0.7), north, east, tvd),
        hole=Hole(
            np.zeros(1), np.array([2 * length]), np.array([diameter]), ("open",), ("",), np.full(1, np.nan)
        ),
        string=String((pipe,)),
        fluid=Fluid(np.array([1200.0]), np.array([0.0])),
    )


def build_well(azimuth: float = 0.4, turn: float = 0.0) -> Well:
    """Vertical, build to 90 degrees, lateral; heavy pipe at the bottom of the string."""
    md = np.concatenate([[0.0, 900.0], np.arange(930.0, 1831.0, 30.0), [3600.0]])
    inclination = np.concatenate([[0.0, 0.0], np.radians(np.arange(1, 32) * 90 / 31), [np.pi / 2]])
    bearing = azimuth + turn * np.arange(len(md)) / len(md)
    return Well(
        trajectory=build_trajectory(md, inclination, bearing),
        hole=Hole(
            np.array([0.0, 1500.0]),
            np.array([1500.0, 3600.0]),
            np.array([0.2205, 0.2159]),
            ("cased", "open"),
            ("", ""),
            np.full(2, np.nan),
        ),
        string=String(
            (
                Component("bit", "bit", 0.3, 0.2159, 0.06, 1800.0),
                Component("motor", "motor", 9.2, 0.1715, 0.06, 1450.0, 0.2127),
                Component("collar", "collar", 27.0, 0.165, 0.071, 1300.0),
                Component("hwdp", "hwdp", 85.0, 0.127, 0.0762, 720.0, 0.168),
                DRILL_PIPE,
            )
        ),
        fluid=Fluid(np.array([1200.0]), np.array([0.0])),
    )
