"""Everything that loads the pipe at one moment: a profile with its torque, pressures and geometry."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.loads import Profile
from forensics.mechanics.kernels_judge import GIVE
from forensics.mechanics.toll import MomentLoads
from forensics.replay.run import Replay
from forensics.replay.torsion import origin, torque_along
from forensics.units import G

Floats = NDArray[np.float64]

PRESSED = "standpipe pressure inside, nothing taken off for flow along the bore; mud column outside"
NO_PRESSURE = "pressure left out: the log has no standpipe pressure there"


@dataclass(frozen=True)
class Loaded:
    """Loads of the string's elements, from the bit up, and in words where torque and pressure come from."""

    loads: MomentLoads
    torque_from: str
    pressure_from: str


def loaded(run: Replay, profile: Profile) -> Loaded:
    """Put together what acts on every element of the string at the moment of a profile.

    Parameters
    ----------
    run : Replay
        Made ready.
    profile : Profile
        Taken from the same run; one row an element, from the bit up.

    Returns
    -------
    Loaded
    """
    hole, pipe, criteria = run.model.hole, run.model.pipe, run.model.criteria
    row, rows = profile.row, np.arange(len(profile.md))
    first = int(float(run.prepared.samples.bit[row]) / hole.step + 0.5)
    index = np.maximum(first - ((pipe.node[rows] + pipe.node[rows + 1]) >> 1), 0)
    give = criteria.at[criteria.kind[rows], index, GIVE]
    weight = pipe.weight[rows] * float(run.prepared.samples.scale[row])
    pull = profile.tension
    square = pull * (pull * hole.kappa2[index] + 2.0 * weight * hole.kappa_d[index])
    torque = torque_along(run, row, index)
    inside, outside, pressure_from = _pressures(run, profile, hole.tvd[index])
    loads = MomentLoads(
        component=pipe.component[rows],
        tension=profile.tension,
        state=profile.state,
        contact=np.sqrt(np.maximum(square + weight**2 * hole.sin2[index], 0.0)),
        clearance=4.0 * pipe.ei[rows] * give,
        curvature=np.sqrt(hole.kappa2[index]),
        torque=np.nan_to_num(torque),
        inside=inside,
        outside=outside,
        onset=profile.sinusoidal,
    )
    return Loaded(loads, origin(run, row, torque), pressure_from)


def _pressures(run: Replay, profile: Profile, tvd: Floats) -> tuple[Floats, Floats, str]:
    """Pressures inside and outside each element [Pa], and where they are from."""
    pump = run.log.get("standpipe_pressure")
    pressed = float(pump[profile.row]) if pump is not None else float("nan")
    if not np.isfinite(pressed):
        # the mud columns alone squeeze evenly, which strains no steel
        return np.zeros_like(tvd), np.zeros_like(tvd), NO_PRESSURE
    fluid = run.well.fluid
    density = float(fluid.outside_at(profile.time, run.prepared.samples.bit[profile.row])[0])
    bore = density if fluid.inside is None else fluid.inside
    return bore * G * tvd + max(pressed, 0.0), density * G * tvd, PRESSED
