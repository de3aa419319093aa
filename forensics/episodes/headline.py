"""The finding in words: what happened, when, where, how, what it cost, and how sure that is."""

from __future__ import annotations

from collections import Counter

import numpy as np

from forensics.episodes import wording
from forensics.episodes.catalogue import (
    RESIDUAL_QUANTITY,
    Consequence,
    Episode,
    Headline,
    Kind,
    State,
    standing,
)
from forensics.episodes.causes.names import Cause
from forensics.episodes.causes.weigh import UNTOLD
from forensics.episodes.causes.words import cause_sentence
from forensics.episodes.confidence import confidence
from forensics.episodes.groups import DOING, is_routine, rule_label
from forensics.episodes.material import NOISE_MULTIPLE, Material
from forensics.episodes.measure import helical_span
from forensics.episodes.ordinary import ordinary_loss
from forensics.episodes.sensitivity import sensitivity_sentence
from forensics.episodes.spans import Span
from forensics.episodes.verdict_words import apart_from, confirmation, rejections, standing_word
from forensics.estimate import Estimate

#: Episodes told one by one below the sentence.
TOLD = 6

#: Torque left in a string that does not turn counts from this part of the usual rotating torque.
TRAPPED = 0.3

QUIET = (
    "Nothing passed a threshold that matters: no helical buckling, no lockup, no drag or torque beyond "
    "the model."
)

GRAVITY = {
    Consequence.LOCKED_UP: 4,
    Consequence.ROTATED_BUCKLED: 3,
    Consequence.WEIGHT_LOST: 2,
    Consequence.NONE: 0,
}


def headline(material: Material, episodes: tuple[Episode, ...]) -> Headline:
    """Put the finding in words.

    Parameters
    ----------
    material : Material
    episodes : tuple of Episode
        With causes.

    Returns
    -------
    Headline
        One sentence, its confidence, the main episodes, and what the data can't tell. Routine running is
        counted in the details and kept out of the sentence, as is what the engineer rejected.
    """
    system = material.system
    kept = standing(episodes)
    main = sorted((e for e in kept if not is_routine(e)), key=gravity, reverse=True)
    loaded = bool(main) and main[0].kind in (Kind.BUCKLING, Kind.LOCKUP)
    if loaded:
        sentence = _loaded(material, main[0], system)
    elif main:
        sentence = _dragging(material, main, system)
    else:
        sentence = apart_from(episodes, QUIET)
    if not loaded:
        sentence = f"{sentence} {ordinary_loss(material, system, bool(main))}".rstrip()
    if main:
        sentence = f"{sentence} {confirmation(main[0])}".rstrip()
    return Headline(
        sentence=sentence,
        confidence=confidence(material, main, cleared=len(kept) < len(episodes)),
        details=(*_details(material, kept, main, system), *rejections(episodes)),
        can_not_tell=_unknown(material, main),
    )


def gravity(episode: Episode) -> tuple[float, ...]:
    """Order of episodes by how much they matter, gravest last."""
    lost = episode.lost_weight.value
    beyond = abs(episode.peak_residual.value) if episode.peak_residual is not None else 0.0
    return (
        float(GRAVITY[episode.consequence]),
        float(episode.kind in (Kind.BUCKLING, Kind.LOCKUP)),
        float(episode.state is State.HELICAL),
        float(episode.kind is Kind.BUCKLING),
        lost if np.isfinite(lost) else 0.0,
        float(episode.kind is Kind.DRAG),
        beyond,
        float(np.nan_to_num(episode.probability)),
        episode.duration,
    )


def _loaded(material: Material, episode: Episode, system: str) -> str:
    """Tell of buckling or lockup."""
    doing = DOING.get(episode.activity, DOING["unknown"])
    bit = float(material.bit[episode.peak])
    when = wording.period(episode.start, episode.end, material.log.timezone)
    what = _what(material, episode, system)
    doing = "" if episode.activity == "unknown" else f"{doing} "
    text = _capital(f"{doing}with the bit at {wording.depth(bit, system)}, {when}, the string {what}")
    text += _cost(material, episode, system)
    if episode.cause:
        text += f" {cause_sentence(episode)}"
    return text


def _what(material: Material, episode: Episode, system: str) -> str:
    """Say what the string did and where."""
    where = ""
    if np.isfinite(episode.top_md) and np.isfinite(episode.bottom_md):
        where = f" from {wording.depths(episode.top_md, episode.bottom_md, system)}"
    if episode.state is State.HELICAL:
        top, bottom = helical_span(material, Span(episode.first, episode.last))
        buckled = f"buckled into a helix from {wording.depths(top, bottom, system)}"
    elif episode.state is State.SINUSOIDAL:
        buckled = f"buckled sinusoidally{where}"
    else:
        buckled = ""
    if episode.consequence is Consequence.LOCKED_UP:
        return f"{buckled} and locked up" if buckled else f"locked up{where} without buckling"
    if episode.consequence is Consequence.ROTATED_BUCKLED:
        return f"{buckled} and was turned in that state"
    return buckled or "was under load"


def _cost(material: Material, episode: Episode, system: str) -> str:
    """Say how much weight was lost."""
    lost, helical = episode.lost_weight, episode.lost_to_buckling
    least = NOISE_MULTIPLE * material.noise("hookload")
    if not (np.isfinite(lost.value) and lost.value > least and not lost.low <= 0.0):
        return "."
    end = "reach the bit" if material.rig.on_bottom[episode.peak] else "get to the lower end"
    text = f": at its worst {wording.size(lost, 'force', system)} of the weight set down did not {end}"
    if np.isfinite(helical.value) and helical.value > 0.0:
        text += f", {wording.size(helical, 'force', system)} of it beyond ordinary sliding drag"
    return text + "."


def _dragging(material: Material, main: list[Episode], system: str) -> str:
    """Tell of drag and torque where nothing buckled."""
    worst = main[0]
    counts = Counter(e.kind for e in main)
    told = " and ".join(
        wording.times(counts[k], f"{k.value} episode") for k in (Kind.DRAG, Kind.TORQUE) if counts[k]
    )
    quantity = RESIDUAL_QUANTITY[worst.kind]
    peak = worst.peak_residual
    text = f"No buckling or lockup that mattered, but {told}"
    if peak is not None:
        what = "hookload" if worst.kind is Kind.DRAG else "torque"
        doing = DOING.get(worst.activity, DOING["unknown"])
        text += (
            f": at the largest, {doing} with the bit at {wording.depth(worst.peak_md, system)}, "
            f"{wording.period(worst.start, worst.end, material.log.timezone)}, the {what} was "
            f"{_beyond(peak, quantity, system)}"
        )
    causes = Counter(e.cause for e in main if e.cause)
    text += "."
    if causes:
        leading, number = causes.most_common(1)[0]
        if leading == worst.cause:
            text += f" {cause_sentence(worst)}"
        elif leading != Cause.NO_DATA.value and not leading.startswith(UNTOLD):
            text += f" Most often best supported: {leading} ({number} of {len(main)})."
    return text


def _beyond(residual: Estimate, quantity: str, system: str) -> str:
    """Write a residual as more or less than the model says."""
    side = "more" if residual.value > 0.0 else "less"
    low, high = sorted((abs(residual.low), abs(residual.high)))
    size = Estimate(abs(residual.value), low, high, residual.source)
    return f"{wording.size(size, quantity, system)} {side} than the model says"


def _details(
    material: Material, episodes: tuple[Episode, ...], main: list[Episode], system: str
) -> tuple[str, ...]:
    """Tell the main episodes one by one, and count the rest."""
    said = []
    inside = [e for e in main if e.kind is Kind.LOCKUP and any(_holds(other, e) for other in main)]
    told = [e for e in main if e not in inside]
    for episode in told[:TOLD]:
        when = wording.period(episode.start, episode.end, material.log.timezone)
        line = f"{episode.id}: {rule_label(episode)}, {when}"
        if np.isfinite(episode.lost_weight.value):
            line += f", lost weight {wording.size(episode.lost_weight, 'force', system)}"
        if episode.peak_residual is not None:
            line += f", {_beyond(episode.peak_residual, RESIDUAL_QUANTITY[episode.kind], system)}"
        if np.isfinite(episode.probability):
            line += f", probability {episode.probability:.2f}"
        if episode.cause:
            line += f"; {episode.cause}"
        if episode.verdict is not None:
            line += f"; {standing_word(episode)}"
        said.append(line + ".")
    rest = len(main) - len(told[:TOLD])
    if rest:
        said.append(f"{wording.times(rest, 'more episode')} in the table.")
    routine = [e for e in episodes if is_routine(e)]
    if routine:
        hours = sum(e.duration for e in routine) / 3600.0
        said.append(
            f"{wording.times(len(routine), 'episode')} of routine sinusoidal running, {hours:.1f} h in all, "
            "cost no weight: kept out of the finding."
        )
    said.append(sensitivity_sentence(material))
    return tuple(line for line in said if line)


def _holds(outer: Episode, inner: Episode) -> bool:
    """Whether a buckling episode holds another in time."""
    return outer.kind is Kind.BUCKLING and outer.first <= inner.first and outer.last >= inner.last


def _unknown(material: Material, main: list[Episode]) -> tuple[str, ...]:
    """Say what the finding can't tell."""
    said = []
    untold = [e.id for e in main if e.cause.startswith(UNTOLD)]
    if untold:
        said.append(f"Causes of {_listed(untold)} {UNTOLD} with these data.")
    bare = [e.id for e in main if e.cause == Cause.NO_DATA.value]
    if bare:
        said.append(f"The log does not show enough to name a cause of {_listed(bare)}.")
    loaded = [e for e in main if e.kind in (Kind.BUCKLING, Kind.LOCKUP)]
    unknown = [e.id for e in loaded if not np.isfinite(e.lost_weight.value)]
    if unknown:
        said.append(f"How much weight was lost in {_listed(unknown)}: no reference weight was read near it.")
    trapped = [e.id for e in loaded if trapped_torque(material, e)]
    if trapped:
        said.append(
            f"Torque stayed in the string while it did not turn in {_listed(trapped)}: part of the friction "
            "was spent on twist, and more weight may have reached the bit than reconstructed."
        )
    return tuple(said)


def trapped_torque(material: Material, episode: Episode) -> bool:
    """Whether torque stayed up while the string did not turn.

    Parameters
    ----------
    material : Material
    episode : Episode

    Returns
    -------
    bool
        False where there is no torque channel.
    """
    torque = material.log.get("torque")
    turning = material.rig.turning
    usual = material.usual_torque
    if torque is None or not np.isfinite(usual):
        return False
    rows = slice(episode.first, episode.last + 1)
    still = torque[rows][~turning[rows] & ~material.rig.slips[rows]]
    still = still[np.isfinite(still)]
    return bool(len(still) and usual > 0.0 and np.median(still) > TRAPPED * usual)


def _listed(ids: list[str]) -> str:
    shown = ", ".join(ids[:8])
    return f"{shown} and {len(ids) - 8} more" if len(ids) > 8 else shown


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
