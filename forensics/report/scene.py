"""What every section and figure is drawn from: the findings, how to show them, the main episodes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from forensics.episodes.catalogue import Episode, standing
from forensics.episodes.groups import is_routine
from forensics.episodes.headline import gravity
from forensics.report.words import Show

if TYPE_CHECKING:
    from forensics.findings import Findings

MAIN_CAP = 10


@dataclass(frozen=True)
class Scene:
    """Findings, the way to show them, and the episodes that get figures."""

    findings: Findings
    show: Show
    mains: tuple[Episode, ...]


def main_episodes(episodes: tuple[Episode, ...], cap: int = MAIN_CAP) -> tuple[Episode, ...]:
    """Choose the episodes that get figures, in time order: at most `cap`, routine running left out.

    The order of gravity is the headline's own, so that what it speaks of is among them.

    Where every episode is routine, the one that came nearest to mattering stands in. What the engineer
    rejected gets none.
    """
    kept = standing(episodes)
    notable = [episode for episode in kept if not is_routine(episode)]
    ranked = sorted(notable or kept, key=gravity, reverse=True)
    chosen = ranked[: cap if notable else 1]
    return tuple(sorted(chosen, key=lambda e: (e.start, e.id)))
