"""What an episode did to the pipe: stress and use of strength at its peak, turns while buckled."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode, Kind
from forensics.episodes.material import Material
from forensics.loads import Profile
from forensics.mechanics.fatigue import ranking
from forensics.mechanics.toll import MomentLoads, Toll, toll, worst_by_component
from forensics.replay.loaded import Loaded, loaded
from forensics.replay.moments import profiles
from forensics.replay.run import Replay
from forensics.well.string import Component

Floats = NDArray[np.float64]

GAP = 5.0  # intervals; a longer step is a gap, and counts as one interval


@dataclass(frozen=True)
class PartToll:
    """The buckled or the other part of one component, SI; NaN where ratings are not given.

    Parameters
    ----------
    component : Component
        Row of the tally.
    buckled : bool
        Whether this is its buckled part.
    md : float
        Where the stress is greatest [m].
    state : int
        There: 0 none, 1 sinusoidal, 2 helical.
    bending, stress : float
        There: bending stress, and von Mises of axial force, bending, torsion and pressure [Pa].
    use : float
        The latter over yield [-].
    rated_use : float
        Greatest use of the rating in tension and torque in this part [-].
    tension_margin, torque_margin : float
        Least that could still be added in this part [N], [N.m].
    """

    component: Component
    buckled: bool
    md: float
    state: int
    bending: float
    stress: float
    use: float
    rated_use: float
    tension_margin: float
    torque_margin: float


@dataclass(frozen=True)
class Turned:
    """Turns of the string while buckled.

    `exposure` counts all of them at the buckled place that the greatest load under rotation bent most: a
    number to rank by [-]. `rank` is 1 for the greatest, `share` the part of the greatest; None and NaN where
    there is nothing to rank.
    """

    revolutions: float
    exposure: float
    rank: int | None = None
    share: float = float("nan")


@dataclass(frozen=True)
class PipeToll:
    """What one episode did to the pipe: by part from the bit up, where its loads are from, and its turns."""

    parts: tuple[PartToll, ...]
    torque_from: str
    pressure_from: str
    turned: Turned | None = None


def pipe_tolls(
    run: Replay, material: Material, taken: Mapping[str, Profile], episodes: Sequence[Episode]
) -> dict[str, PipeToll]:
    """Weigh what the episodes that pressed the string did to it.

    Parameters
    ----------
    run : Replay
        Made ready.
    material : Material
        The run's loads, rig view and case.
    taken : mapping of str to Profile
        Load profile at each episode's peak, by its id.
    episodes : sequence of Episode
        Those to weigh; only what pressed the string counts.

    Returns
    -------
    dict of str to PipeToll
        By id of the episode.
    """
    pressed = [e for e in episodes if e.kind in (Kind.BUCKLING, Kind.LOCKUP) and e.id in taken]
    worst = {e.id: row for e in pressed if (row := _turning_peak(material, e)) is not None}
    under = dict(zip(worst, profiles(run, list(worst.values())), strict=True))
    tolls = {}
    for episode in pressed:
        at = loaded(run, taken[episode.id])
        parts = parts_of(material, at, taken[episode.id].md)
        turned = None
        if episode.id in under:
            turned = _turned(material, episode, loaded(run, under[episode.id]).loads)
        tolls[episode.id] = PipeToll(parts, at.torque_from, at.pressure_from, turned)
    return _ranked(tolls)


def parts_of(material: Material, at: Loaded, md: Floats) -> tuple[PartToll, ...]:
    """Give the toll of each component, its buckled part apart, from the bit up.

    Parameters
    ----------
    material : Material
        Gives string and case.
    at : Loaded
        Loads of the elements.
    md : ndarray, shape (m,)
        Depth of each [m].

    Returns
    -------
    tuple of PartToll
    """
    found = _toll(material, at.loads)
    part = 2 * at.loads.component + (at.loads.state > 0)
    places = worst_by_component(part, found.stress)
    components = material.well.string.components
    return tuple(
        _part(components[key // 2], at, found, (part == key, row), md)
        for key, (row, _) in sorted(places.items())
    )


def _part(
    component: Component, at: Loaded, found: Toll, where: tuple[NDArray[np.bool_], int], md: Floats
) -> PartToll:
    some, row = where

    def least(values: Floats) -> float:
        known = values[some & np.isfinite(values)]
        return float(known.min()) if len(known) else float("nan")

    return PartToll(
        component=component,
        buckled=bool(at.loads.state[row] > 0),
        md=float(md[row]),
        state=int(at.loads.state[row]),
        bending=float(found.bending[row]),
        stress=float(found.stress[row]),
        use=float(found.use[row]),
        rated_use=-least(-found.rated_use),
        tension_margin=least(found.tension_margin),
        torque_margin=least(found.torque_margin),
    )


def _toll(material: Material, loads: MomentLoads) -> Toll:
    case = material.case
    pipe_class = case.limits.pipe_class or "new"
    return toll(material.well.string, loads, pipe_class, case.criteria.tool_joint_effect)


def _turning_peak(material: Material, episode: Episode) -> int | None:
    """Row of the greatest compression while the string turned and was buckled; None where it never did."""
    rows = np.flatnonzero(_both(material, episode)) + episode.first
    load = material.loads.peak_compression[rows]
    if not np.isfinite(load).any():
        return None
    return int(rows[np.nanargmax(load)])


def _both(material: Material, episode: Episode) -> NDArray[np.bool_]:
    """Mark the rows of an episode at which the string was buckled and turned."""
    rows = slice(episode.first, episode.last + 1)
    return (material.loads.state[rows] > 0) & material.rig.turning[rows]


def _turned(material: Material, episode: Episode, loads: MomentLoads) -> Turned:
    """Count the turns, and what they cost at the loads of the worst moment under rotation."""
    turns = _revolutions(material, episode)
    buckled = loads.state > 0
    turn = _toll(material, loads).exposure[buckled]
    worst = float(np.nanmax(turn)) if np.isfinite(turn).any() else float("nan")
    return Turned(turns, turns * worst)


def _revolutions(material: Material, episode: Episode) -> float:
    """Count the turns while any of the string was buckled; NaN where the log has no rotary speed."""
    rpm = material.log.get("rpm")
    if rpm is None:
        return float("nan")
    rows, interval = slice(episode.first, episode.last + 1), material.log.interval
    step = np.diff(material.time[episode.first : episode.last + 2])
    step = np.append(step, [interval] * (episode.last + 1 - episode.first - len(step)))
    step = np.where(step > GAP * interval, interval, step)
    return float((np.nan_to_num(rpm[rows]) * step / 60.0)[_both(material, episode)].sum())


def _ranked(tolls: dict[str, PipeToll]) -> dict[str, PipeToll]:
    """Rank the episodes by the exposure of their turns."""
    ids = list(tolls)
    exposures = [toll.turned.exposure if toll.turned else float("nan") for toll in tolls.values()]
    ranked = dict(tolls)
    for place, (row, share) in enumerate(ranking(exposures), 1):
        found = tolls[ids[row]]
        if found.turned is not None:
            ranked[ids[row]] = replace(found, turned=replace(found.turned, rank=place, share=share))
    return ranked
