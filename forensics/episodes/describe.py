"""The whole way from loads to finding: episodes, causes, groups, headline."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from forensics.episodes.catalogue import Episode, Family, Headline, Kind, standing
from forensics.episodes.causes import Usual, weigh
from forensics.episodes.consequence import consequence_of
from forensics.episodes.find import find_episodes
from forensics.episodes.groups import group, is_routine
from forensics.episodes.headline import headline
from forensics.episodes.material import Material
from forensics.episodes.spans import Span
from forensics.episodes.verdicts import rejected

__all__ = ["Described", "Material", "describe"]


@dataclass(frozen=True)
class Described:
    """What a run's loads came to: catalogue, groups, finding, and what the rules dropped by reason."""

    episodes: tuple[Episode, ...]
    families: tuple[Family, ...]
    headline: Headline
    dropped: Mapping[str, int]


@dataclass(frozen=True)
class Weighed:
    """Episodes with their causes weighed, in time order, and spans the rules dropped, by reason."""

    episodes: tuple[Episode, ...]
    dropped: Mapping[str, int]


def describe(material: Material) -> Described:
    """Find episodes, weigh their causes, group them and put the finding in words.

    Parameters
    ----------
    material : Material
        One run's log, rig view, loads, draws, calibration, well and case.

    Returns
    -------
    Described
    """
    return tell(material, weigh_episodes(material))


def weigh_episodes(material: Material) -> Weighed:
    """Find episodes and weigh their causes.

    Parameters
    ----------
    material : Material

    Returns
    -------
    Weighed
    """
    episodes, dropped = find_episodes(material)
    usual = Usual(material)
    weighed = []
    for episode in episodes:
        if is_routine(episode):  # it cost nothing: there is no cause to look for
            weighed.append(episode)
            continue
        cause, views = weigh(material, usual, episode)
        weighed.append(replace(episode, cause=cause, causes=views))
    return Weighed(tuple(weighed), dropped)


def tell(material: Material, weighed: Weighed) -> Described:
    """Group episodes and put the finding in words.

    Parameters
    ----------
    material : Material
    weighed : Weighed
        The run's episodes, with the engineer's verdicts where there are any.

    Returns
    -------
    Described
    """
    grouped, families = group(material, _without_rejected(material, weighed.episodes))
    return Described(grouped, families, headline(material, grouped), weighed.dropped)


def _without_rejected(material: Material, episodes: tuple[Episode, ...]) -> tuple[Episode, ...]:
    """Judge anew what buckling led to where it had led to a lockup that the engineer rejected."""
    locked = [e for e in rejected(episodes) if e.kind is Kind.LOCKUP]
    if not locked:
        return episodes
    left = [Span(e.first, e.last) for e in standing(episodes) if e.kind is Kind.LOCKUP]
    return tuple(
        replace(e, consequence=consequence_of(material, e, left))
        if e.kind is Kind.BUCKLING and any(out.first <= e.last and out.last >= e.first for out in locked)
        else e
        for e in episodes
    )
