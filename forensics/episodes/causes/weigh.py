"""Rank the causes of an episode, or say that they can't be told apart."""

from __future__ import annotations

import math
from collections.abc import Mapping

import numpy as np

from forensics.episodes.catalogue import CauseView, Episode, Evidence
from forensics.episodes.causes.excluded import excluded
from forensics.episodes.causes.measures import MEASURES, Subject, take_all
from forensics.episodes.causes.names import Cause
from forensics.episodes.causes.strengths import Strengths, strengths
from forensics.episodes.causes.usual import Usual
from forensics.episodes.material import Material

#: A cause is named alone where it is at least this likely, and this many times likelier than the next.
ALONE = 0.5
TIMES = 1.6

#: Causes at least this likely, over the leading one, are named beside it where it is not.
BESIDE = 0.5

UNTOLD = "can't be told apart"

#: Stands for no chance at all where a likelihood ratio is told: a thousand to one against.
NO_ROOM = -math.log(1000.0)


def weigh(material: Material, usual: Usual, episode: Episode) -> tuple[str, tuple[CauseView, ...]]:
    """Weigh all causes for one episode.

    Parameters
    ----------
    material : Material
    usual : Usual
        The run's usual values.
    episode : Episode

    Returns
    -------
    cause : str
        The best-supported cause, or that the leading ones can't be told apart.
    views : tuple of CauseView
        All causes, likeliest first, with the evidence for and against each.
    """
    views = rank(take_all(Subject(material, usual, episode)), material.system)
    views = without(views, excluded(material, episode))
    return name_cause(views), views


def without(views: tuple[CauseView, ...], gone: Mapping[Cause, str]) -> tuple[CauseView, ...]:
    """Take the chance of causes that the run leaves no room for and share it among the others.

    Parameters
    ----------
    views : tuple of CauseView
    gone : mapping of Cause to str
        Why each is ruled out, which stands in place of its evidence.

    Returns
    -------
    tuple of CauseView
        Likeliest first.
    """
    left = sum(view.probability for view in views if view.cause not in gone)
    told = [
        CauseView(
            view.cause, 0.0, (Evidence("ruled out", gone[Cause(view.cause)], NO_ROOM, "the case's tables"),)
        )
        if view.cause in gone
        else CauseView(view.cause, view.probability / left, view.evidence)
        for view in views
    ]
    return tuple(sorted(told, key=lambda v: -v.probability))


def rank(
    values: Mapping[str, float], system: str = "metric", known: Strengths | None = None
) -> tuple[CauseView, ...]:
    """Rank causes on measurements.

    Parameters
    ----------
    values : mapping of str to float
        By measurement [SI]; NaN, or left out, where there is none.
    system : str
        "metric" or "field": what the evidence is worded in.
    known : Strengths, optional
        The package's own where left out.

    Returns
    -------
    tuple of CauseView
        Likeliest first; probabilities add up to one.

    Notes
    -----
    Before evidence all causes count alike. The likelihood ratios shown are those used: they multiply, and
    the products over their sum are the probabilities, less the doubt that is shared out among all.
    """
    known = known or strengths()
    evidence: dict[Cause, list[Evidence]] = {cause: [] for cause in Cause}
    scores = np.zeros(len(Cause))
    for measure in MEASURES:
        value = values.get(measure.name, float("nan"))
        if not math.isfinite(value):
            continue
        strength = known.by_measure[measure.name]
        weights = strength.weights[:, measure.bin_of(value)]
        scores += weights
        text, scaled, unit = measure.say(value, system), measure.scaled(value), measure.unit()
        for cause, weight, origin in zip(Cause, weights.tolist(), strength.origins, strict=True):
            if weight:
                said = Evidence(measure.name, text, weight, origin, scaled, unit, measure.figure)
                evidence[cause].append(said)
    chances = np.exp(scores - scores.max())
    chances = (1.0 - known.doubt) * chances / chances.sum() + known.doubt / len(Cause)
    views = [
        CauseView(cause.value, float(chance), tuple(evidence[cause]))
        for cause, chance in zip(Cause, chances, strict=True)
    ]
    return tuple(sorted(views, key=lambda v: -v.probability))


def name_cause(views: tuple[CauseView, ...]) -> str:
    """Name the leading cause, or those that can't be told apart.

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
    near = [view.cause for view in views[:3] if view.probability >= BESIDE * first.probability]
    near = near if len(near) > 1 else [first.cause, second.cause]
    if Cause.NO_DATA.value in near:
        return Cause.NO_DATA.value
    return f"{UNTOLD}: {', '.join(near[:-1])} or {near[-1]}"
