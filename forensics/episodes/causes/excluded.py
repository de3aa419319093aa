"""Causes that the run's own string and hole leave no room for: facts, not evidence."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from forensics.episodes.catalogue import Episode
from forensics.episodes.causes.names import Cause
from forensics.episodes.material import Material


def excluded(material: Material, episode: Episode) -> Mapping[Cause, str]:
    """Say which causes the run leaves no room for, and why.

    Parameters
    ----------
    material : Material
    episode : Episode

    Returns
    -------
    mapping of Cause to str
        The reason, as a sentence's part. Common practice, no source: a motor stalls only where there is one;
        a string sticks by pressure, and a hole is under gauge, only where the bit has left the casing.
    """
    out = {}
    if not any(part.kind == "motor" for part in material.well.string.components):
        out[Cause.STALL] = "the string has no motor"
    deepest = np.nanmax(material.bit[episode.first : episode.last + 1], initial=0.0)
    if not material.well.hole.is_open(np.arange(0.0, deepest, 5.0)).any():
        why = "the whole string stands in casing"
        out |= {Cause.STICKING: why, Cause.UNDERGAUGE: why}
    return out
