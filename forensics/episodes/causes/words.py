"""What a report's sentences say of the cause of an episode."""

from __future__ import annotations

from dataclasses import replace

from forensics.episodes.catalogue import CauseView, Episode, Verdict, Word
from forensics.episodes.causes.names import Cause
from forensics.episodes.causes.weigh import UNTOLD

#: Chance from which a cause is stated, and from which one beside it is not ruled out.
STATED, NOT_RULED_OUT = 0.8, 0.1


def cause_sentence(episode: Episode) -> str:
    """Say what caused an episode, no more surely than the probabilities allow.

    Parameters
    ----------
    episode : Episode
        With a cause.

    Returns
    -------
    str
        A cause is called the best supported from `STATED` on; below, it is the likeliest one, and what is
        not ruled out stands beside it.
    """
    if episode.verdict is not None and episode.word is Word.RELABEL:
        return _relabelled(episode, episode.verdict)
    if episode.cause.startswith(UNTOLD):
        *most, last = [_chance_of(view) for view in episode.causes[: _leading(episode)]]
        return f"The causes {', '.join(most)} and {last} {UNTOLD}."
    if episode.cause == Cause.NO_DATA.value:
        return "The log does not show enough to name a cause."
    if not episode.causes:
        return f"Best-supported cause: {episode.cause}."
    first, *others = episode.causes
    if first.probability >= STATED:
        return f"Best-supported cause: {_chance_of(first)}."
    beside = [_chance_of(view) for view in others if view.probability >= NOT_RULED_OUT][:3]
    rest = f"; not ruled out: {_joined(beside)}" if beside else ", not firmly"
    return f"Likeliest cause: {_chance_of(first)}{rest}."


def _relabelled(episode: Episode, verdict: Verdict) -> str:
    """Give the engineer's cause with what the program had said."""
    said = f"Cause by the engineer: {verdict.cause}"
    if not verdict.program_cause:
        return f"{said}; the program had named none."
    own = cause_sentence(replace(episode, cause=verdict.program_cause, verdict=None))
    return f"{said}; the program's own: {own[:1].lower()}{own[1:]}"


def _leading(episode: Episode) -> int:
    """How many causes the episode's own words name."""
    names = episode.cause.removeprefix(f"{UNTOLD}: ")
    return max(sum(view.cause in names for view in episode.causes[:3]), 2)


def _chance_of(view: CauseView) -> str:
    return f"{view.cause} ({100.0 * view.probability:.0f} %)"


def _joined(names: list[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"
