"""How poor the log is where the episode is."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from forensics.episodes.causes.measures.base import NAN, Measure, Subject
from forensics.episodes.causes.names import Cause


def missing(s: Subject) -> float:
    """How many of the wanted channels the log lacks."""
    return float(s.usual.lacking)


def interval(s: Subject) -> float:
    """Usual sampling interval [s]."""
    return float(s.material.log.interval)


def lost(s: Subject) -> float:
    """Part of the time around the episode in gaps, or with rows set aside."""
    m = s.material
    start, end = max(s.episode.start - 600.0, m.time[0]), min(s.episode.end + 600.0, m.time[-1])
    rows = m.rows_between(start, end)
    used = float(np.count_nonzero(m.log.used[rows])) * m.log.interval
    return float(np.clip(1.0 - used / max(end - start, m.log.interval), 0.0, 1.0))


def uncalibrated(s: Subject) -> float:
    """Part of the hole sections whose friction the run did not determine."""
    sections = [x for x in s.material.calibration.sections if x.bottom > x.top]
    return float(np.mean([not x.factor.determined for x in sections])) if sections else 1.0


def _of_the_log(
    name: str,
    take: Callable[[Subject], float],
    edges: tuple[float, ...],
    words: str,
    how: tuple[str, str],
) -> Measure:
    """Make a measurement that speaks of nothing but whether the log is enough; `how`: figure, quantity."""
    return Measure(name, take, edges, words, how[0], how[1], about=Cause.NO_DATA)


MEASURES = (
    _of_the_log(
        "channels missing",
        missing,
        (0.5, 1.5, 2.5, 4.5),
        "of six channels that tell causes apart the log lacks {}",
        ("files", "count"),
    ),
    _of_the_log("sampling", interval, (1.5, 5.5, 15.0), "the log has a sample every {}", ("files", "time")),
    _of_the_log(
        "time without samples",
        lost,
        (0.03, 0.15, 0.4),
        "{} of the time around it has no usable sample",
        ("strip", "share"),
    ),
    _of_the_log(
        "friction not determined",
        uncalibrated,
        (0.25, 0.75),
        "the run did not determine the friction of {} of its sections",
        ("fan", "share"),
    ),
)

#: Taken from the other measurements, once they are.
SILENT = _of_the_log(
    "measurements without a reading",
    lambda _: NAN,
    (0.15, 0.25, 0.35, 0.5),
    "{} of the measurements could not be taken",
    ("files", "share"),
)
