"""What an episode led to."""

from __future__ import annotations

import numpy as np

from forensics.episodes.catalogue import Consequence, Episode, Kind
from forensics.episodes.material import NOISE_MULTIPLE, Material
from forensics.episodes.spans import Span

#: Weight lost to buckling counts from this [N], or from this part of the surface weight.
LOST = (5.0e3, 0.05)


def consequence_of(material: Material, episode: Episode, lockups: list[Span]) -> Consequence:
    """Judge what an episode led to, the gravest first.

    Parameters
    ----------
    material : Material
    episode : Episode
    lockups : list of Span
        Where the lockup rule held.

    Returns
    -------
    Consequence
        `none` for drag and torque, and for sinusoidal running that cost no weight: that is routine.
    """
    if episode.kind is Kind.LOCKUP:
        return Consequence.LOCKED_UP
    if episode.kind is not Kind.BUCKLING:
        return Consequence.NONE
    if any(span.first <= episode.last and span.last >= episode.first for span in lockups):
        return Consequence.LOCKED_UP
    if turned_helical(material, episode) >= material.window(material.case.criteria.minimum_duration / 2.0):
        return Consequence.ROTATED_BUCKLED
    lost = episode.lost_to_buckling
    surface = float(material.rig.wob_surface[episode.peak])
    least = max(LOST[0], NOISE_MULTIPLE * material.noise("hookload"), LOST[1] * np.nan_to_num(surface))
    if np.isfinite(lost.value) and lost.value >= least and not lost.low <= 0.0:
        return Consequence.WEIGHT_LOST
    return Consequence.NONE


def turned_helical(material: Material, episode: Episode) -> float:
    """Time the string turned while helical [s]."""
    rows = slice(episode.first, episode.last + 1)
    both = (material.loads.state[rows] == 2) & material.rig.turning[rows]
    return float(both.sum() * material.log.interval)
