"""What one moment's loads do to every piece of the string: bending, stress, use of strength, fatigue.

The link between loads along the string and the functions of `buckled`, `tool_joint`, `stress` and `fatigue`.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.mechanics.buckled import PipeInHole, after_buckling
from forensics.mechanics.eigen import Floats
from forensics.mechanics.fatigue import HALF_JOINT, exposure
from forensics.mechanics.stress import PipeLoads, judge
from forensics.mechanics.tool_joint import bending_factor
from forensics.well.string import PIPE, Component, String

STRONG = 862e6
"""Yield from which drill pipe is taken as S135 in the fatigue formulas, 125,000 psi [Pa]."""


@dataclass(frozen=True)
class MomentLoads:
    """Loads along the string at one moment; arrays of shape (m,), one row an element.

    Parameters
    ----------
    component : ndarray of int
        Row of the tally.
    tension : ndarray
        Effective tension, compression negative [N].
    state : ndarray of int
        0 none, 1 sinusoidal, 2 helical.
    contact : ndarray
        Contact force per length before buckling [N/m].
    clearance : ndarray
        Radial clearance [m].
    curvature : ndarray
        Of the hole [rad/m].
    torque, inside, outside : array_like
        Torque [N.m] and pressures [Pa]; default none.
    onset : ndarray, optional
        Load at which each place turns sinusoidal [N]; default the local load F_DP.
    """

    component: NDArray[np.int64]
    tension: Floats
    state: NDArray[np.int8]
    contact: Floats
    clearance: Floats
    curvature: Floats
    torque: ArrayLike = 0.0
    inside: ArrayLike = 0.0
    outside: ArrayLike = 0.0
    onset: Floats | None = None

    def columns(self) -> tuple[Floats | None, ...]:
        """Give the fields in order, each of the elements' shape."""
        shape = self.tension.shape
        parts = (getattr(self, part.name) for part in fields(self))
        return tuple(None if part is None else np.broadcast_to(part, shape) for part in parts)

    def only(self, some: NDArray[np.bool_]) -> MomentLoads:
        """Give some of the elements; `some` is a mask of shape (m,)."""
        return MomentLoads(*(None if part is None else part[some] for part in self.columns()))  # type: ignore[arg-type]


def joined(loads: Sequence[MomentLoads]) -> MomentLoads:
    """Put the loads of several moments end to end, all with an onset or none."""
    pairs = zip(*(one.columns() for one in loads), strict=True)
    return MomentLoads(*(None if some[0] is None else np.concatenate(some) for some in pairs))  # type: ignore[arg-type]


@dataclass(frozen=True)
class Toll:
    """What the loads do; arrays of shape (m,).

    Parameters
    ----------
    bending : ndarray
        Bending stress at the outside, of the hole's curvature and of buckling together [Pa].
    stress : ndarray
        Greatest von Mises stress [Pa].
    use : ndarray
        That over yield [-]; NaN where the yield is not known.
    rated_use : ndarray
        Of the combined rating in tension and torque [-]; NaN where not known.
    tension_margin, torque_margin : ndarray
        What could still be added [N], [N.m]; NaN where not known.
    exposure : ndarray
        Fatigue exposure of one turn of the pipe: to rank by, not a remaining life [-].
    """

    bending: Floats
    stress: Floats
    use: Floats
    rated_use: Floats
    tension_margin: Floats
    torque_margin: Floats
    exposure: Floats


def toll(string: String, loads: MomentLoads, pipe_class: str = "new", joints: bool = True) -> Toll:
    """Give what a moment's loads do to every element of the string.

    Parameters
    ----------
    string : String
        The tally.
    loads : MomentLoads
        Loads of its elements.
    pipe_class : str
        "new", "premium" or "used", for drill pipe; the rest of the string is taken as new.
    joints : bool
        Whether joints draw the bending of the hole to themselves.

    Returns
    -------
    Toll

    Raises
    ------
    CaseError
        If the class is not one of these.

    Notes
    -----
    Curvature of the hole and of buckling are added, as they may lie in one plane. Jointed pipe that is not
    buckled is bent more than the hole is, by `tool_joint.bending_factor`.
    """
    columns = np.full((7, len(loads.tension)), np.nan)
    parts = (loads.torque, loads.inside, loads.outside)
    torque, inside, outside = (np.broadcast_to(part, loads.tension.shape) for part in parts)
    for row in np.unique(loads.component):
        some = loads.component == row
        part = string.components[int(row)]
        moment = _moment(part, loads, some, joints)
        tension = loads.tension[some]
        acting = PipeLoads(tension, moment, torque[some], inside[some], outside[some])
        judged = judge(part, acting, pipe_class if part.kind in PIPE else "new")
        bending = moment * part.od / (2 * part.inertia)
        turn = exposure(bending, tension / part.area, 1.0, fatigue_grade(part))
        margins = (judged.tension_margin, judged.torque_margin)
        columns[:, some] = (bending, judged.stress, judged.use, judged.rated_use, *margins, turn)
    return Toll(*columns)


def fatigue_grade(part: Component) -> str:
    """Name the grade whose fatigue formula a component goes by: "E75", or "S135" where its yield says so."""
    return "S135" if (part.yield_strength or 0.0) >= STRONG else "E75"


def worst_by_component(component: NDArray[np.int64], values: Floats) -> dict[int, tuple[int, float]]:
    """Find the greatest of an element's values in each component.

    Parameters
    ----------
    component : ndarray of int, shape (m,)
        Row of the tally of each element.
    values : ndarray, shape (m,)
        Such as `Toll.use`; NaN where not known.

    Returns
    -------
    dict
        From row of the tally to element and value; components of which nothing is known are left out.

    Examples
    --------
    >>> worst_by_component(np.array([0, 0, 1, 2]), np.array([0.2, 0.5, 0.1, np.nan]))
    {0: (1, 0.5), 1: (2, 0.1)}
    """
    found: dict[int, tuple[int, float]] = {}
    for row in np.unique(component):
        inside = np.flatnonzero((component == row) & ~np.isnan(values))
        if inside.size:
            at = int(inside[np.argmax(values[inside])])
            found[int(row)] = (at, float(values[at]))
    return found


def _moment(part: Component, loads: MomentLoads, some: NDArray[np.bool_], joints: bool) -> Floats:
    """Bending moment of the elements of one component [N.m]."""
    tension, state = loads.tension[some], loads.state[some]
    # a support has no clearance to buckle in
    gap = np.maximum(loads.clearance[some], 0.0)
    onset = None if loads.onset is None else loads.onset[some]
    place = PipeInHole(-tension, part.stiffness, np.where(gap > 0, gap, 1.0), loads.contact[some], onset)
    wound = np.where(gap > 0, after_buckling(place, state).curvature, 0.0)
    factor = np.ones(tension.shape)
    if joints and part.kind in PIPE and part.tool_joint_od is not None:
        known = bending_factor(tension, part.stiffness, HALF_JOINT)
        factor = np.where((state == 0) & np.isfinite(known), known, 1.0)
    return part.stiffness * (np.abs(loads.curvature[some]) * factor + wound)
