"""What every section and figure is drawn from: the findings, how to show them, the main episodes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from forensics.episodes.catalogue import Consequence, Episode, Kind, State
from forensics.report.words import Show

if TYPE_CHECKING:
    from forensics.findings import Findings

MAIN_CAP = 10

_WEIGHT = {
    Consequence.ROTATED_BUCKLED: 3.0,
    Consequence.LOCKED_UP: 3.0,
    Consequence.WEIGHT_LOST: 2.0,
    Consequence.NONE: 0.0,
}


@dataclass(frozen=True)
class Scene:
    """Findings, the way to show them, and the episodes that get figures."""

    findings: Findings
    show: Show
    mains: tuple[Episode, ...]


def is_routine(episode: Episode) -> bool:
    """Whether an episode is harmless sinusoidal running: counted, kept out of the finding."""
    return (
        episode.kind is Kind.BUCKLING
        and episode.state is not State.HELICAL
        and episode.consequence is Consequence.NONE
    )


def severity(episode: Episode) -> float:
    """How much an episode matters, for choosing which get figures; larger matters more.

    Consequence counts most, then a helix, then the probability that it happened, then lost weight.
    """
    weight = _WEIGHT[episode.consequence]
    weight += 1.0 if episode.state is State.HELICAL else 0.0
    weight -= 2.0 if is_routine(episode) else 0.0
    sure = episode.probability if np.isfinite(episode.probability) else 0.5
    lost = episode.lost_weight.value
    lost_share = min(max(lost, 0.0) / 1e6, 1.0) if np.isfinite(lost) else 0.0
    return weight + sure + lost_share


def main_episodes(episodes: tuple[Episode, ...], cap: int = MAIN_CAP) -> tuple[Episode, ...]:
    """Choose the episodes that get figures, in time order: at most `cap`, routine running left out.

    Where every episode is routine, the one that came nearest to mattering stands in.
    """
    notable = [episode for episode in episodes if not is_routine(episode)]
    ranked = sorted(notable or episodes, key=lambda e: (-severity(e), e.start, e.id))
    chosen = ranked[: cap if notable else 1]
    return tuple(sorted(chosen, key=lambda e: (e.start, e.id)))
