"""What one place of the string was judged by at one moment, for those who judge it further."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from forensics.mechanics.critical import Place
from forensics.mechanics.kernels_judge import GIVE, local_square
from forensics.mechanics.kernels_march import place_at
from forensics.replay.model import factors
from forensics.replay.run import Replay
from forensics.replay.torsion import torque_along


@dataclass(frozen=True)
class PlaceNumbers:
    """One place under one load, SI.

    Parameters
    ----------
    place : Place
        Stiffness, clearance, weight, inclination; the hole's curvature stands as its build.
    local : float
        F_DP at the contact force the replay judged it by, averaged over a wave [N].
    torque : float
        At the place: at surface less what friction takes above it, if the string turns [N.m]; NaN where the
        log has none.
    """

    place: Place
    local: float
    torque: float = math.nan

    @property
    def contact(self) -> float:
        """Contact force per length that gives `local` [N/m]."""
        return self.local**2 * float(self.place.clearance) / (4.0 * float(self.place.stiffness))

    @property
    def w_cos(self) -> float:
        """Buoyed weight per length along the hole [N/m]."""
        return float(self.place.weight) * math.cos(float(self.place.inclination))


def find_place(run: Replay, row: int, md: float) -> tuple[int, int] | None:
    """Find which element of the string lies at a depth, and the depth's row of the hole grid.

    Parameters
    ----------
    run : Replay
        Made ready.
    row : int
        Row of the log.
    md : float
        Measured depth [m].

    Returns
    -------
    tuple of int, or None
        None where the depth is not known or the place is a support, which does not buckle.
    """
    if not np.isfinite(md):
        return None
    model, bit = run.model, float(run.prepared.samples.bit[row])
    j = int(np.clip(np.searchsorted(model.pipe.x, bit - md, side="right") - 1, 0, len(model.pipe.ei) - 1))
    i = int(np.clip(round(md / model.hole.step), 0, len(model.hole.cos_i) - 1))
    return (j, i) if model.criteria.at[model.criteria.kind[j], i, GIVE] > 0.0 else None


def place_numbers(run: Replay, row: int, md: float, compression: float) -> PlaceNumbers | None:
    """Give what a place is judged by under a compression.

    Parameters
    ----------
    run : Replay
        Made ready.
    row : int
        Row of the log.
    md : float
        Measured depth of the place [m].
    compression : float
        There [N].

    Returns
    -------
    PlaceNumbers or None
        None where place or load is not known, and on a support.
    """
    found = find_place(run, row, md)
    if found is None or not np.isfinite(compression):
        return None
    (j, i), model = found, run.model
    samples, hole = run.prepared.samples, model.hole
    at = model.setting(*factors(run.calibration))
    placed = place_at(at.hole, at.pipe, float(samples.bit[row]), float(samples.scale[row]))
    give = model.criteria.at[model.criteria.kind[j], i, GIVE]
    place = Place(
        stiffness=float(model.pipe.ei[j]),
        clearance=4.0 * float(model.pipe.ei[j] * give),
        weight=float(model.pipe.weight[j]) * placed.scale,
        inclination=math.acos(float(np.clip(hole.cos_i[i], -1.0, 1.0))),
        build=math.sqrt(float(hole.kappa2[i])),
    )
    local = math.sqrt(local_square(at, placed, j, i, -compression))
    return PlaceNumbers(place, local, float(torque_along(run, row, np.array([i]))[0]))
