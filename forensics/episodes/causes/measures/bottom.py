"""What the bit and the pumps answered: pressure at like flow, differential pressure, drilling rate."""

from __future__ import annotations

import numpy as np

from forensics.episodes.causes.measures.base import FEWEST, NAN, Measure, Subject, middle
from forensics.episodes.causes.usual import slope


def pressure_rise(s: Subject) -> float:
    """Median pressure at like flow over the hours around, less one."""
    here = middle(s.usual.pressure[s.rows])
    return here / s.usual_pressure - 1.0


def pressure_peak(s: Subject) -> float:
    """Largest pressure at like flow, spikes of a few samples left out, over the usual one, less one."""
    m = s.material
    rows = m.rows_between(s.episode.start - 120.0, s.episode.end + 120.0)
    here = s.usual.pressure[rows]
    here = here[np.isfinite(here)]
    if len(here) < 2 * FEWEST:
        return NAN
    return float(np.sort(here)[-FEWEST]) / s.usual_pressure - 1.0


def differential(s: Subject) -> float:
    """Differential pressure at its highest, a few samples left out, over the run's while drilling."""
    m = s.material
    values = s.usual.channel("differential_pressure")
    if values is None or not s.usual.differential > 0.0:
        return NAN
    rows = m.rows_between(s.episode.start - 60.0, s.episode.end + 60.0)
    here = values[rows][m.rig.pumping[rows] & np.isfinite(values[rows])]
    return float(np.sort(here)[-FEWEST] / s.usual.differential) if len(here) >= 2 * FEWEST else NAN


def answer(s: Subject) -> float:
    """Slope of pressure against surface weight while drilling, over the run's own."""
    m = s.material
    rows = m.rows_between(s.episode.start - 120.0, s.episode.end)
    drilled = np.flatnonzero(s.usual.drilling[rows]) + rows.start
    usual = s.usual.response
    if len(drilled) < 2 * FEWEST or not usual > 0.0:
        return NAN
    return slope(m, drilled) / usual


def witness(s: Subject) -> float:
    """Bit load by hookload less that by the bit's own witness, in standard errors of the difference."""
    heard = s.material.loads.witness
    if heard is None:
        return NAN
    rows = s.rows
    with np.errstate(invalid="ignore"):
        return middle(
            (heard.by_hookload[rows] - heard.load[rows]) / np.hypot(heard.own_sigma[rows], heard.sigma[rows])
        )


def progress(s: Subject) -> float:
    """Rate at which the hole got deeper on bottom in the episode, over the run's while drilling."""
    m = s.material
    on = m.rig.on_bottom[s.rows] & m.rig.pumping[s.rows]
    if on.sum() < FEWEST or not s.usual.rate > 0.0:
        return NAN
    return middle(s.usual.progress[s.rows][on]) / s.usual.rate


def least_progress(s: Subject) -> float:
    """Slowest half minute on bottom in the episode, over the run's usual rate."""
    m = s.material
    rows = m.rows_between(s.episode.start, s.episode.end + 30.0)
    on = m.rig.on_bottom[rows] & m.rig.pumping[rows]
    if on.sum() < FEWEST or not s.usual.rate > 0.0:
        return NAN
    return float(np.nanmin(s.usual.progress[rows][on]) / s.usual.rate)


MEASURES = (
    Measure(
        "pressure at like flow",
        pressure_rise,
        (-0.03, 0.03, 0.08, 0.2),
        "pressure at like flow {} above the usual",
        "strip",
        "share",
    ),
    Measure(
        "pressure peak",
        pressure_peak,
        (0.03, 0.08, 0.15, 0.3),
        "pressure peaked {} above the usual",
        "strip",
        "share",
    ),
    Measure(
        "differential pressure",
        differential,
        (0.5, 1.2, 2.0, 3.0),
        "differential pressure came up to {} times the run's usual",
        "strip",
        "ratio",
    ),
    Measure(
        "weight answered at the bit",
        answer,
        (0.1, 0.4, 0.8, 1.3),
        "pressure answered the surface weight at {} of the run's slope",
        "strip",
        "ratio",
    ),
    Measure(
        "bit's own witness",
        witness,
        (-2.0, -0.5, 0.5, 2.0, 4.0),
        "bit load by hookload less by the bit's own witness: {} standard errors",
        "strip",
        "ratio",
    ),
    Measure(
        "drilling rate",
        progress,
        (0.1, 0.4, 0.8, 1.3),
        "the hole got deeper at {} of the run's rate",
        "strip",
        "ratio",
    ),
    Measure(
        "slowest drilling",
        least_progress,
        (0.02, 0.2, 0.5),
        "at its slowest the hole got deeper at {} of the run's rate",
        "strip",
        "ratio",
    ),
)
