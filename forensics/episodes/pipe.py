"""What an episode did to the pipe: stress and use of strength at its peak, turns while buckled."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, fields, replace

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode, Kind
from forensics.episodes.material import Material
from forensics.loads import Profile
from forensics.mechanics.fatigue import ranking
from forensics.mechanics.lockup import SlackOff
from forensics.mechanics.toll import MomentLoads, Toll, joined, toll, worst_by_component
from forensics.replay.loaded import Loaded, loaded
from forensics.replay.moments import profiles_in_turn
from forensics.replay.run import Replay
from forensics.well.string import Component

Floats = NDArray[np.float64]

CHUNK = 100_000  # elements weighed at one go, some tens of megabytes
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
    """What one episode did to the pipe: by part from the bit up, where its loads are from, and its turns.

    `slack_off` is what slacking off more would have brought to the lower end at the peak, while sliding.
    """

    parts: tuple[PartToll, ...]
    torque_from: str
    pressure_from: str
    turned: Turned | None = None
    slack_off: SlackOff | None = None


@dataclass(frozen=True)
class _Piece:
    """Elements of one profile that are weighed: for whom, their loads and depths [m]."""

    id: str
    turning: bool
    at: Loaded
    md: Floats
    slack_off: SlackOff | None


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
        Load profile at the peak of the episodes whose whole string is weighed, by id; of the others only
        what was buckled is.
    episodes : sequence of Episode
        Those to weigh; only what pressed the string counts.

    Returns
    -------
    dict of str to PipeToll
        By id of the episode.
    """
    pressed = [e for e in episodes if e.kind in (Kind.BUCKLING, Kind.LOCKUP)]
    tolls: dict[str, PipeToll] = {}
    costs: dict[str, float] = {}
    for some in _chunks(_pieces(run, material, taken, pressed)):
        _weigh(material, some, tolls, costs)
    for episode in pressed:
        if episode.id in costs and episode.id in tolls:
            turns = _revolutions(material, episode)
            turned = Turned(turns, turns * costs[episode.id])
            tolls[episode.id] = replace(tolls[episode.id], turned=turned)
    return _ranked({e.id: tolls[e.id] for e in pressed if e.id in tolls})


def _pieces(
    run: Replay, material: Material, taken: Mapping[str, Profile], pressed: Sequence[Episode]
) -> Iterator[_Piece]:
    """Give what is to be weighed, profile after profile."""
    asked: dict[int, list[tuple[str, bool]]] = {}
    for episode in pressed:
        if episode.id not in taken:
            asked.setdefault(episode.peak, []).append((episode.id, False))
        worst = _turning_peak(material, episode)
        if worst is not None:
            asked.setdefault(worst, []).append((episode.id, True))
    for episode in pressed:
        if episode.id in taken:
            whole = taken[episode.id]
            yield _Piece(episode.id, False, loaded(run, whole), whole.md, whole.slack_off)
    for profile in profiles_in_turn(run, asked):
        at, buckled = loaded(run, profile), profile.state > 0
        only = replace(at, loads=at.loads.only(buckled))
        for name, turning in asked[profile.row]:
            yield _Piece(name, turning, only, profile.md[buckled], profile.slack_off)


def _chunks(pieces: Iterator[_Piece]) -> Iterator[list[_Piece]]:
    """Put pieces together so that they are weighed many at a time, and not all held at once."""
    some: list[_Piece] = []
    for piece in pieces:
        some.append(piece)
        if sum(len(one.md) for one in some) > CHUNK:
            yield some
            some = []
    if some:
        yield some


def _weigh(
    material: Material, pieces: list[_Piece], tolls: dict[str, PipeToll], costs: dict[str, float]
) -> None:
    """Weigh pieces at one go: parts into `tolls`, what one turn cost at the worst place into `costs`."""
    found = _toll(material, joined([piece.at.loads for piece in pieces]))
    ends = np.cumsum([len(piece.md) for piece in pieces]).tolist()
    for piece, first, last in zip(pieces, [0, *ends[:-1]], ends, strict=True):
        own = Toll(*(getattr(found, part.name)[first:last] for part in fields(Toll)))
        if not piece.turning:
            parts = parts_of(material, piece.at, own, piece.md)
            tolls[piece.id] = PipeToll(
                parts, piece.at.torque_from, piece.at.pressure_from, slack_off=piece.slack_off
            )
            continue
        known = own.exposure[np.isfinite(own.exposure)]
        costs[piece.id] = float(known.max()) if len(known) else float("nan")


def parts_of(material: Material, at: Loaded, found: Toll, md: Floats) -> tuple[PartToll, ...]:
    """Give the toll of each component, its buckled part apart, from the bit up.

    Parameters
    ----------
    material : Material
        Gives the string.
    at : Loaded
        Loads of the elements.
    found : Toll
        What they do.
    md : ndarray, shape (m,)
        Depth of each [m].

    Returns
    -------
    tuple of PartToll
    """
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
