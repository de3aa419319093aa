"""The mud: density outside and inside the string, constant or read from a table."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.case import FluidSettings
from forensics.errors import TableError
from forensics.logs.table_stamps import table_stamps
from forensics.tables import Column, read_table

Floats = NDArray[np.float64]

_HEAVIEST, _LIGHTEST_MUD = 3500.0, 600.0
MUD_COLUMNS = (
    Column("time", "text", ("datetime", "timestamp", "date time", "stamp", "clock")),
    Column("date", "text", ("day",)),
    Column("depth", "length", ("md", "bit depth", "hole depth", "measured depth")),
    Column("density", "density", ("mud density", "mud weight", "mw", "weight"), required=True),
)


@dataclass(frozen=True)
class Fluid:
    """Mud density.

    Parameters
    ----------
    density : ndarray, shape (m,)
        Outside the string [kg/m3]; one number where it is constant.
    index : ndarray, shape (m,)
        What it is read against: seconds since 1970 UTC, or bit depth [m]; increasing.
    by : str
        "constant", "time" or "depth".
    inside : float, optional
        Density inside where it differs [kg/m3].
    """

    density: Floats
    index: Floats
    by: str = "constant"
    inside: float | None = None

    @property
    def typical(self) -> float:
        """Median outside density [kg/m3], for where one number must do."""
        return float(np.median(self.density))

    def outside_at(self, time: ArrayLike, depth: ArrayLike) -> Floats:
        """Find the density outside at moments and bit depths.

        Parameters
        ----------
        time : array_like, shape (k,)
            [s since 1970 UTC]
        depth : array_like, shape (k,)
            Bit depth [m].

        Returns
        -------
        ndarray, shape (k,)
            Linear between readings, level beyond them; the typical density where the index is NaN [kg/m3].
        """
        times, depths = np.broadcast_arrays(np.atleast_1d(np.asarray(time, float)), np.asarray(depth, float))
        if self.by == "constant":
            return np.full(times.shape, self.density[0])
        at = times if self.by == "time" else depths
        found = np.interp(at, self.index, self.density)
        return np.where(np.isfinite(at), found, self.typical)


def constant_fluid(density: float, inside: float | None = None) -> Fluid:
    """Make a mud of one density [kg/m3]."""
    return Fluid(np.array([density]), np.array([0.0]), "constant", inside)


def load_fluid(settings: FluidSettings, timezone: str = "UTC") -> tuple[Fluid, tuple[str, ...]]:
    """Make the mud from the case's settings.

    Parameters
    ----------
    settings : FluidSettings
        A density, or a file with `density` and either `depth` or `time` (one stamp, or date and clock).
    timezone : str
        Zone of stamps that carry none.

    Returns
    -------
    Fluid
    tuple of str
        What a reader of the result should know.

    Raises
    ------
    TableError
        If the table can't be read, has both or neither of time and depth, goes back, or a
        density is no mud's.
    """
    if settings.file is None:
        fluid = constant_fluid(settings.density or 0.0, settings.density_inside)
        return fluid, _remarks("[fluid]", fluid)
    table = read_table(settings.file, MUD_COLUMNS)
    timed = "time" in table.headers or "date" in table.headers
    by = [name for name, there in (("time", timed), ("depth", "depth" in table.headers)) if there]
    if len(by) != 1:
        found = "both 'time' and 'depth'" if by else "neither 'time' nor 'depth'"
        raise TableError(f"has {found}; one of them is needed beside 'density'", file=table.file)
    index = table_stamps(table, timezone) if by[0] == "time" else table.number("depth")
    density = table.number("density")
    for row in range(len(table)):
        if not np.isfinite(index[row]):
            raise table.error(f"is empty; a {by[0]} is needed in each row", row, by[0])
        if row and index[row] <= index[row - 1]:
            raise table.error("goes back or repeats; sort the rows and keep one reading each", row, by[0])
        if not 0.0 <= density[row] <= _HEAVIEST:
            raise table.error(f"is {density[row]:.4g} kg/m3; no mud has that: check the unit", row, "density")
    fluid = Fluid(density, index, by[0], settings.density_inside)
    return fluid, _remarks(table.file.name, fluid)


def _remarks(name: str, fluid: Fluid) -> tuple[str, ...]:
    if fluid.typical < _LIGHTEST_MUD:
        return (
            f"{name}: mud density is {fluid.typical:.4g} kg/m3, lighter than any liquid mud; check its unit",
        )
    return ()
