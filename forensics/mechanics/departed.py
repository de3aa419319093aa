"""The tables of a well whose path, hole and string are a little off, made from those of the well itself."""

from __future__ import annotations

import copy
from dataclasses import dataclass, replace

import numpy as np

from forensics.mechanics.criteria_table import tabulate
from forensics.mechanics.grid import directions
from forensics.mechanics.offbottom import OffBottomModel, hole_arrays, pipe_arrays
from forensics.well.trajectory import Trajectory

COARSE = 4  # steps that share one look at the path: where only differences count that is as good, and cheaper


@dataclass(frozen=True)
class Departure:
    """How a well differs from what was tabulated.

    Parameters
    ----------
    path : Trajectory
        Where the hole goes instead.
    cased, opened : float
        Factors on the diameters of cased and open hole [-].
    joints : float
        What tool joints are smaller by in diameter, never below the body [m].
    stiffness : float
        Factor on bending and axial stiffness [-].
    """

    path: Trajectory
    cased: float = 1.0
    opened: float = 1.0
    joints: float = 0.0
    stiffness: float = 1.0


def departed(model: OffBottomModel, by: Departure) -> OffBottomModel:
    """Tabulate the well that differs.

    Parameters
    ----------
    model : OffBottomModel
    by : Departure

    Returns
    -------
    OffBottomModel
        Friction sections, weights per length and vertical depths are the model's own; `well` is too.
    """
    hole, pipe = model.hole, model.pipe
    count = len(hole.cos_i)
    wide = np.where(hole.open_hole, by.opened, by.cased)
    parts = model.well.string.components
    body = np.array([part.od for part in parts])[pipe.component]
    joint = np.array([part.contact_diameter() for part in parts])[pipe.component]
    worn = np.minimum(by.joints, joint - body)
    at_body = pipe.clearance_od <= body
    other = copy.copy(model)
    other.__dict__.pop("ground", None)
    other.hole = replace(hole, diameter=hole.diameter * wide, **directions(by.path, count, COARSE))
    other.pipe = replace(
        pipe,
        ei=pipe.ei * by.stiffness,
        ea=pipe.ea * by.stiffness,
        clearance_od=np.where(at_body, pipe.clearance_od, pipe.clearance_od - worn),
        radius=pipe.radius - 0.5 * worn,
    )
    other.hole_arrays, other.pipe_arrays = hole_arrays(other.hole), pipe_arrays(other.pipe)
    other.criteria = tabulate(other.hole, other.pipe, model.settings)
    other.smooth = other.setting(0.0, 0.0)
    return other
