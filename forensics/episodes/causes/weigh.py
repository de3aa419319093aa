"""Rank the causes of an episode, or say that they can't be told apart."""

from __future__ import annotations

import numpy as np

from forensics.episodes.catalogue import CauseView, Episode, Evidence, Kind
from forensics.episodes.causes.names import PRIOR, Cause
from forensics.episodes.causes.signals import Signals
from forensics.episodes.causes.table import MECHANICS, SIGNS
from forensics.episodes.causes.tells import Tells, measure_tells
from forensics.episodes.material import Material

#: Signs lean on the same readings, so their sum is worth less than if they were independent.
SOFTEN = 0.75

#: A cause is named alone where it is at least this likely, and this many times likelier than the next.
ALONE = 0.5
TIMES = 1.6

UNTOLD = "can't be told apart"


def weigh(material: Material, signals: Signals, episode: Episode) -> tuple[str, tuple[CauseView, ...]]:
    """Weigh all causes for one episode.

    Parameters
    ----------
    material : Material
    signals : Signals
        The run's usual values.
    episode : Episode

    Returns
    -------
    cause : str
        The best-supported cause, or that the leading two can't be told apart.
    views : tuple of CauseView
        All causes, likeliest first, with the evidence for and against each.
    """
    tells = measure_tells(material, signals, episode)
    views = rank(episode.kind, tells, episode.probability, material.system)
    return name_cause(views), views


def rank(
    kind: Kind, tells: Tells, probability: float = float("nan"), system: str = "metric"
) -> tuple[CauseView, ...]:
    """Rank causes on measurements.

    Parameters
    ----------
    kind : Kind
    tells : Tells
    probability : float
        That the episode's own rule holds over the draws.
    system : str
        "metric" or "field": what the evidence is worded in.

    Returns
    -------
    tuple of CauseView
        Likeliest first; probabilities add up to one.
    """
    evidence: dict[Cause, list[Evidence]] = {cause: [] for cause in Cause}
    if kind in (Kind.BUCKLING, Kind.LOCKUP) and np.isfinite(probability):
        weight = float(np.clip(np.log(probability / (1.0 - probability + 1e-9)), -2.0, 2.0))
        text = f"the rule holds in {100.0 * probability:.0f} % of the draws of friction and weight"
        evidence[Cause.BUCKLING].append(Evidence("chance over the draws", text, weight, MECHANICS))
    for sign in SIGNS:
        strength = sign.strength(tells) if kind in sign.kinds else float("nan")
        if not np.isfinite(strength) or abs(strength) < 0.1:
            continue
        weights = sign.seen if strength > 0.0 else sign.contrary
        for cause, weight in weights.items():
            if weight:
                words = sign.words(tells, system)
                item = Evidence(sign.name, words, float(weight * abs(strength)), sign.origin)
                evidence[cause].append(item)
    scores = np.array(
        [PRIOR[kind][cause] + SOFTEN * sum(e.weight for e in evidence[cause]) for cause in Cause]
    )
    chances = np.exp(scores - scores.max())
    chances /= chances.sum()
    views = [
        CauseView(cause.value, float(chance), tuple(evidence[cause]))
        for cause, chance in zip(Cause, chances, strict=True)
    ]
    return tuple(sorted(views, key=lambda v: -v.probability))


def name_cause(views: tuple[CauseView, ...]) -> str:
    """Name the leading cause, or the two that can't be told apart.

    Parameters
    ----------
    views : tuple of CauseView
        Likeliest first.

    Returns
    -------
    str
    """
    first, second = views[0], views[1]
    if first.probability >= ALONE and first.probability >= TIMES * second.probability:
        return first.cause
    if first.cause == Cause.NO_DATA.value:
        return first.cause
    if second.cause == Cause.NO_DATA.value:
        if first.probability >= TIMES * second.probability:
            return f"{first.cause} (weakly supported)"
        return Cause.NO_DATA.value
    return f"{UNTOLD}: {first.cause} or {second.cause}"
