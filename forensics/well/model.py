"""The well as one object: trajectory, hole, string and mud, checked against one another."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from pathlib import Path

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.case import Case
from forensics.errors import TableError
from forensics.well.fluid import Fluid, load_fluid
from forensics.well.hole import Hole, load_hole
from forensics.well.likely import STATION_SIGMA, LikelyPath, likely_path
from forensics.well.string import Component, String, buoyed_weight
from forensics.well.survey import load_trajectory
from forensics.well.tally import load_string
from forensics.well.trajectory import Trajectory

Floats = NDArray[np.float64]

# A gauge tool in a gauge hole, and a drift rounded to a sixteenth of an inch [m].
_FIT = 0.002
# A log may run past the end of a cased last row by a rathole or a tally error [m].
_BEYOND_CASED = 30.0


@dataclass(frozen=True)
class Well:
    """What the string hangs in, and the string.

    Parameters
    ----------
    trajectory : Trajectory
    hole : Hole
    string : String
    fluid : Fluid
    warnings : tuple of str
        What was computed or assumed on the way, in sentences.
    survey_accuracy : float
        Random error of a station's direction, one sigma [rad]; none where the survey is the path itself.
    hole_file, string_file : Path, optional
        Where hole and string came from, for refusals.
    """

    trajectory: Trajectory
    hole: Hole
    string: String
    fluid: Fluid
    warnings: tuple[str, ...] = ()
    hole_file: Path | None = None
    string_file: Path | None = None
    survey_accuracy: float = 0.0

    @cached_property
    def likely(self) -> LikelyPath:
        """The path that the survey makes likely: what presses the string against the wall."""
        return likely_path(self.trajectory, self.survey_accuracy)

    def rotating_weight(self, bit_depth: ArrayLike, density: float | None = None) -> Floats:
        """Weigh the string as it hangs free of friction.

        Parameters
        ----------
        bit_depth : array_like, shape (k,)
            [m]
        density : float, optional
            Mud outside; by default the one at that bit depth, or the typical one [kg/m3].

        Returns
        -------
        ndarray, shape (k,)
            Effective tension at the rotary table, bit off bottom, no friction [N].

        Notes
        -----
        The axial part of a component's weight is w cos I ds = w dTVD, so only the vertical depths of its
        ends count, whatever the path between them.
        """
        bit = np.atleast_1d(np.asarray(bit_depth, dtype=np.float64))
        outside = self.fluid.outside_at(np.nan, bit) if density is None else np.full(bit.shape, density)
        weights = np.array([buoyed_weight(c, outside, self.fluid.inside) for c in self.string.components])
        ends = np.concatenate([[0.0], self.string.ends])
        ends[-1] = np.inf if self.string.can_extend else ends[-1]
        depths = np.clip(bit[None, :] - ends[:, None], 0.0, None)
        tvd = self.trajectory.position(depths.ravel())[:, 2].reshape(depths.shape)
        total: Floats = (weights * (tvd[:-1] - tvd[1:])).sum(axis=0)
        return total

    def check_reach(self, max_bit_depth: float) -> None:
        """Refuse a bit depth that string or hole can't have reached.

        Parameters
        ----------
        max_bit_depth : float
            Deepest bit depth of the log [m].

        Raises
        ------
        TableError
            If the string is shorter than that and its last row is not pipe, a component is wider than the
            hole it would stand in, or the last row of the hole is cased and ends well above.
        """
        if self.string.needs_extension(max_bit_depth) and not self.string.can_extend:
            last = self.string.components[-1]
            raise TableError(
                f"string is {self.string.length:.1f} m long and ends in {last.name} ({last.kind}), but the "
                f"log has the bit at {max_bit_depth:.1f} m; add the pipe above it as the last row",
                file=self.string_file,
                line=last.line,
            )
        bottom = float(self.hole.bottom[-1])
        if self.hole.kind[-1] == "cased" and max_bit_depth > bottom + _BEYOND_CASED:
            raise TableError(
                f"hole ends at {bottom:.1f} m in a cased section, but the log has the bit at "
                f"{max_bit_depth:.1f} m; add the open hole below as the last row",
                file=self.hole_file,
            )
        self.check_fit(max_bit_depth - np.concatenate([[0.0], self.string.ends[:-1]]))

    def check_fit(self, depths: Floats) -> None:
        """Refuse a component wider than the hole it has gone through.

        Parameters
        ----------
        depths : ndarray, shape (n,)
            Deepest depth of each component's lower end [m].

        Raises
        ------
        TableError
            If a component is wider than a section above its depth; an underreamer may be.
        """
        for component, depth in zip(self.string.components, depths, strict=True):
            passed = self.hole.top < max(depth, 1e-9)
            width, row = _widest(component), int(np.argmin(np.where(passed, self.hole.diameter, np.inf)))
            # An underreamer opens below the section it went through.
            if component.kind != "reamer" and width > self.hole.diameter[row] + _FIT:
                raise TableError(
                    f"{component.name} ({component.kind}) is {width * 1000:.1f} mm wide and can't pass the "
                    f"hole of {self.hole.diameter[row] * 1000:.1f} mm below {self.hole.top[row]:.0f} m; "
                    "check od and diameter",
                    file=self.string_file,
                    line=component.line,
                )


def _widest(component: Component) -> float:
    return max(component.od, component.tool_joint_od or 0.0)


def load_well(case: Case) -> Well:
    """Read survey, hole, string and mud of a case.

    Parameters
    ----------
    case : Case

    Returns
    -------
    Well

    Raises
    ------
    TableError
        If a table can't be used, or a component is too wide for the first section of the hole.
    """
    trajectory, path_remarks = load_trajectory(case.survey, case.tie_in)
    hole, hole_remarks = load_hole(case.hole)
    string, string_remarks = load_string(case.string)
    fluid, mud_remarks = load_fluid(case.fluid, case.logs.timezone)
    well = Well(
        trajectory=trajectory,
        hole=hole,
        string=string,
        fluid=fluid,
        warnings=(*path_remarks, *hole_remarks, *string_remarks, *mud_remarks),
        hole_file=case.hole,
        string_file=case.string,
        survey_accuracy=STATION_SIGMA if case.survey_accuracy is None else case.survey_accuracy,
    )
    # How deep the bit went only the log knows (`check_reach`); through the top of the hole everything went.
    well.check_fit(np.zeros(len(string.components)))
    return well
