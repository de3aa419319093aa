"""What the finding says of the engineer's verdicts."""

from __future__ import annotations

from collections.abc import Sequence

from forensics.episodes import wording
from forensics.episodes.catalogue import Episode, Word, standing
from forensics.episodes.groups import is_routine, rule_label
from forensics.episodes.verdicts import rejected

#: Rejected episodes told one by one.
TOLD = 6

CONFIRMED = "confirmed by the engineer"


def confirmation(episode: Episode) -> str:
    """Say as a sentence that the engineer accepted an episode; empty where not."""
    return "The engineer confirmed this episode." if episode.word is Word.ACCEPT else ""


def standing_word(episode: Episode) -> str:
    """Say as a clause what the engineer made of an episode that stands; empty where nothing."""
    words = {Word.ACCEPT: CONFIRMED, Word.RELABEL: "cause by the engineer"}
    return words.get(episode.word, "") if episode.word is not None else ""


def rejections(episodes: Sequence[Episode]) -> tuple[str, ...]:
    """Name what the engineer rejected, with the notes, in a sentence; none where nothing was.

    Parameters
    ----------
    episodes : sequence of Episode

    Returns
    -------
    tuple of str
    """
    out = rejected(episodes)
    if not out:
        return ()
    named = [_named(e) for e in out[:TOLD]]
    more = f" and {len(out) - TOLD} more" if len(out) > TOLD else ""
    count = wording.times(len(out), "episode")
    said = f"{count} rejected by the engineer, left out of finding, groups and counts"
    inside = [e.id for e in standing(episodes) if any(o.start <= e.start and e.end <= o.end for o in out)]
    rest = f" and {len(inside) - TOLD} more" if len(inside) > TOLD else ""
    left = f" Within their time, still counted: {', '.join(inside[:TOLD])}{rest}." if inside else ""
    return (f"{said}: {', '.join(named)}{more}.{left}",)


def apart_from(episodes: Sequence[Episode], quiet: str) -> str:
    """Word the finding that nothing mattered so that it says whose verdict that rests on."""
    out = [e for e in rejected(episodes) if not is_routine(e)]
    if not out:
        return quiet
    left = wording.times(len(out), "episode")
    return f"Apart from {left} that the engineer rejected, {quiet[:1].lower()}{quiet[1:]}"


def _named(episode: Episode) -> str:
    note = episode.verdict.note if episode.verdict is not None else ""
    return f"{episode.id} ({rule_label(episode)}{f'; {note}' if note else ''})"
