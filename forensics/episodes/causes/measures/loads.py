"""What the reconstruction says of an episode: its kind, how near to buckling, what was lost to it."""

from __future__ import annotations

import numpy as np

from forensics.episodes.catalogue import Kind, State
from forensics.episodes.causes.measures.base import NAN, Measure, Subject, named

KINDS = ("sinusoidal buckling", "helical buckling", "lockup", "drag", "torque")

LOADED = (Kind.BUCKLING, Kind.LOCKUP)


def kind(s: Subject) -> float:
    """Kind of the episode, as a number of `KINDS`."""
    if s.episode.kind is Kind.BUCKLING:
        return float(s.episode.state is State.HELICAL)
    return float({Kind.LOCKUP: 2, Kind.DRAG: 3, Kind.TORQUE: 4}[s.episode.kind])


def load_ratio(s: Subject) -> float:
    """Peak load ratio."""
    return s.episode.peak_load_ratio.value


def lost_share(s: Subject) -> float:
    """Part of the lost weight that is beyond ordinary sliding drag."""
    lost = s.episode.lost_weight.value
    if not lost > 0.0:
        return NAN
    return float(np.clip(s.episode.lost_to_buckling.value / lost, 0.0, 1.0))


def chance(s: Subject) -> float:
    """Chance that the rule of a buckling or lockup holds, over the draws."""
    return s.episode.probability if s.episode.kind in LOADED else NAN


def friction(s: Subject) -> float:
    """Calibrated less assumed friction factor of the hole that carries most drag."""
    from forensics.friction.assumptions import assumed_factor

    m = s.material
    where = "open" if m.open_share[s.episode.peak] > 0.5 else "cased"
    found = [x for x in m.calibration.sections if x.kind == where and x.factor.determined]
    if not found:
        return NAN
    nearest = min(found, key=lambda x: max(x.top - s.place, s.place - x.bottom, 0.0))
    return nearest.factor.value - assumed_factor(where, m.case, m.well).value


def stiffness(s: Subject) -> float:
    """Slope of hookload against block going down, over the spring rate of the whole string; the steepest."""
    m = s.material
    rows = m.rows_between(s.episode.start - 60.0, s.episode.end)
    block, hook = m.rig.block[rows], m.rig.hookload[rows]
    down = (m.rig.direction[rows] > 0) & ~m.rig.slips[rows] & ~m.rig.turning[rows]
    step = max(round(15.0 / m.log.interval), 3)
    if len(block) <= step:
        return NAN
    travel, drop = block[:-step] - block[step:], hook[:-step] - hook[step:]
    whole = down[:-step] & down[step:] & (travel > 0.05)
    if whole.sum() < 3:
        return NAN
    return float(np.quantile(drop[whole] / travel[whole], 0.9) / m.spring_rate[s.episode.peak])


MEASURES = (
    Measure("kind of episode", kind, named(KINDS), "the episode is {}", "strip", "word", KINDS),
    Measure(
        "load ratio",
        load_ratio,
        (0.5, 0.8, 1.0, 1.4, 2.0),
        "compression reached {} times the sinusoidal load",
        "profile",
        "ratio",
    ),
    Measure(
        "share lost to buckling",
        lost_share,
        (0.05, 0.2, 0.4, 0.6),
        "{} of the lost weight is beyond ordinary sliding drag",
        "profile",
        "share",
    ),
    Measure(
        "chance over the draws",
        chance,
        (0.3, 0.6, 0.9),
        "its rule holds in {} of the draws of friction and weight",
        "profile",
        "share",
    ),
    Measure(
        "calibrated friction",
        friction,
        (-0.04, 0.02, 0.06, 0.12),
        "calibrated factor less the assumed one: {}",
        "fan",
        "ratio",
    ),
    Measure(
        "stiffness going down",
        stiffness,
        (0.1, 0.3, 0.6, 1.0, 1.5),
        "hookload fell with the block at {} times the whole string's spring rate",
        "strip",
        "ratio",
    ),
)
