"""The string as a spring from the rotary down, at one moment of a run: elastic, and with friction's share."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.loads import Profile
from forensics.mechanics.free_point import give_along
from forensics.mechanics.kernels_judge import GIVE
from forensics.replay.model import factors
from forensics.replay.run import Replay

Floats = NDArray[np.float64]

HELICAL = 2
FRICTION = (0.85, 1.0, 1.15)  # of the calibrated factors: what their interval leaves open


@dataclass(frozen=True)
class Springs:
    """Compliance of the string held at depths `md` (k,) [m]: `elastic` (k,), `rubbed` (3, k) [m/N].

    `rubbed` has friction's share of every increment in it, at a little less, the calibrated, and a little
    more friction; `elastic` has not. Both have the helix's own shortening.
    """

    md: Floats
    elastic: Floats
    rubbed: Floats


def springs(run: Replay, profile: Profile, sigma: float) -> Springs:
    """Read the string's compliance off a load profile.

    Parameters
    ----------
    run : Replay
        Made ready.
    profile : Profile
        At the moment asked for.
    sigma : float
        +1 while the string is set down, -1 while it is picked up.

    Returns
    -------
    Springs
    """
    pipe, hole, model = run.model.pipe, run.model.hole, run.model
    samples = run.prepared.samples
    bit, scale = float(samples.bit[profile.row]), float(samples.scale[profile.row])
    tension, count = profile.tension, len(profile.md)
    at = np.clip(np.rint(profile.md / hole.step).astype(int), 0, len(hole.cos_i) - 1)
    spring = model.criteria.at[model.criteria.kind[:count], at][:, GIVE] * (profile.state == HELICAL)
    straight = np.maximum(profile.contact - spring * tension**2, 1.0)
    weight = pipe.weight[:count] * scale
    change = (tension * hole.kappa2[at] + weight * hole.kappa_d[at]) / straight + 2.0 * spring * tension
    give = 1.0 / pipe.ea[:count] + 4.0 * pipe.ei[:count] * spring**2
    rub = sigma * model.friction(*factors(run.calibration))[at] * change
    down = slice(None, None, -1)
    lengths = (np.minimum(pipe.x[1 : count + 1], bit) - pipe.x[:count])[down]
    return Springs(
        md=(bit - pipe.x[:count])[down],
        elastic=give_along(lengths, give[down], np.zeros(count)),
        rubbed=np.array([give_along(lengths, give[down], part * rub[down]) for part in FRICTION]),
    )
