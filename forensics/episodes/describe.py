"""The whole way from loads to finding: episodes, causes, groups, headline."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from forensics.episodes.catalogue import Episode, Family, Headline
from forensics.episodes.causes import Usual, weigh
from forensics.episodes.find import find_episodes
from forensics.episodes.groups import group, is_routine
from forensics.episodes.headline import headline
from forensics.episodes.material import Material

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
        The run's episodes.

    Returns
    -------
    Described
    """
    grouped, families = group(material, weighed.episodes)
    return Described(grouped, families, headline(material, grouped), weighed.dropped)
