"""Measurements of an episode, each a pure function of the run and the episode.

To add one: a function from Subject to a number in the module it fits, and its row in that module's
`MEASURES`; a module of its own is entered here.
"""

from __future__ import annotations

import numpy as np

from forensics.episodes.causes.measures import around, bottom, drag, loads, log, motion, place, sensor
from forensics.episodes.causes.measures.base import Measure, Subject

__all__ = ["MEASURES", "Measure", "Subject", "take_all"]

_TAKEN = tuple(
    measure
    for module in (loads, drag, around, motion, bottom, place, sensor, log)
    for measure in module.MEASURES
)

#: Every measurement; the last counts the others that the log can't show.
MEASURES: tuple[Measure, ...] = (*_TAKEN, log.SILENT)


def take_all(subject: Subject) -> dict[str, float]:
    """Take every measurement of an episode.

    Parameters
    ----------
    subject : Subject

    Returns
    -------
    dict of str to float
        By name [SI]; NaN where the log can't show it.
    """
    values = {measure.name: float(measure.take(subject)) for measure in _TAKEN}
    silent = float(np.mean(~np.isfinite(list(values.values()))))
    return {**values, log.SILENT.name: silent}
