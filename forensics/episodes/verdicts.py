"""The engineer's verdicts put to the episodes they speak of, by time, kind and depth."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case
from forensics.episodes import wording
from forensics.episodes.catalogue import Episode, Verdict, Word
from forensics.episodes.groups import rule_label
from forensics.episodes.verdict_file import WrittenVerdict, verdicts_path
from forensics.errors import TableError

Floats = NDArray[np.float64]

#: A verdict speaks of an episode where they share at least this part of the shorter one's time.
SHARED = 0.5
#: Of several episodes, one is meant where it is at least this many times as like the verdict as the next.
CLEAR = 1.25
#: Below this likeness a match is pointed out: the one lasts several times as long as the other.
UNLIKE = 0.25


@dataclass(frozen=True)
class PlacedVerdict:
    """A verdict as written, the id of the episode it speaks of (empty: none), and what to know of that.

    `remark` says why it speaks of none, or that the match is a poor one; empty where all is well.
    """

    written: WrittenVerdict
    episode: str
    remark: str = ""


@dataclass(frozen=True)
class Judged:
    """Episodes with their verdicts, and every verdict with its episode, in the file's order."""

    episodes: tuple[Episode, ...]
    placed: tuple[PlacedVerdict, ...]


def judge(
    written: Sequence[WrittenVerdict], episodes: tuple[Episode, ...], path: Path, timezone: str
) -> Judged:
    """Put every verdict to its episode.

    Parameters
    ----------
    written : sequence of WrittenVerdict
    episodes : tuple of Episode
        With the program's own causes.
    path : Path
        The file of verdicts, for refusals.
    timezone : str
        Zone in which remarks give times.

    Returns
    -------
    Judged
        Verdicts that match no episode, or several alike, change nothing and carry a remark.

    Raises
    ------
    TableError
        If two verdicts speak of one episode.
    """
    placed = tuple(place(verdict, episodes, timezone) for verdict in written)
    _refuse_pairs(placed, episodes, path, timezone)
    by_id = {p.episode: p.written for p in placed if p.episode}
    return Judged(tuple(_with(e, by_id.get(e.id)) for e in episodes), placed)


def place(verdict: WrittenVerdict, episodes: Sequence[Episode], timezone: str) -> PlacedVerdict:
    """Find the episode a verdict speaks of.

    Parameters
    ----------
    verdict : WrittenVerdict
    episodes : sequence of Episode
    timezone : str

    Returns
    -------
    PlacedVerdict
        To an episode that shares at least `SHARED` of the shorter one's time with it, is of its kind and
        meets its depths, where given, and is clearly more like it in time than any other.
    """
    if not episodes:
        return PlacedVerdict(verdict, "", "matches no episode: the run has none")
    shared, likeness = _likeness(verdict, episodes)
    fits = np.array([_same_kind(verdict, e) and _meets(verdict, e) for e in episodes])
    found = np.flatnonzero((shared >= SHARED) & fits)
    if not len(found):
        return PlacedVerdict(verdict, "", _missed(verdict, episodes, shared, timezone))
    found = found[np.argsort(-likeness[found], kind="stable")]
    best = float(likeness[found[0]])
    alike = [episodes[k] for k in found.tolist() if CLEAR * likeness[k] > best]
    meant = alike[0] if len(alike) == 1 else next((e for e in alike if e.id == verdict.id), None)
    if meant is None:
        ids = ", ".join(e.id for e in alike)
        return PlacedVerdict(verdict, "", f"matches {ids} alike: narrow its times, or give kind or depths")
    if best < UNLIKE:
        lasts, span = (f"{seconds:.0f} s" for seconds in (meant.duration, verdict.end - verdict.start))
        said = f"was taken for {meant.id}, which lasts {lasts}, while it speaks of {span}"
        return PlacedVerdict(verdict, meant.id, said)
    return PlacedVerdict(verdict, meant.id)


def verdict_remarks(case: Case, placed: Sequence[PlacedVerdict]) -> tuple[str, ...]:
    """Say where verdicts came from unasked, and which found no episode or a poor match; a sentence each."""
    path = verdicts_path(case)
    if path is None:
        return ()
    said = [f"{path.name}, line {p.written.line}: the verdict {p.remark}." for p in placed if p.remark]
    if case.records.verdicts is None:
        count = wording.times(len(placed), "verdict")
        said.insert(0, f"{path.name} beside the case file was read, though [records] names none: {count}.")
    return tuple(said)


def _with(episode: Episode, written: WrittenVerdict | None) -> Episode:
    if written is None:
        return episode
    verdict = Verdict(written.word, written.cause, written.note, episode.cause)
    return replace(episode, verdict=verdict, cause=written.cause or episode.cause)


def _likeness(verdict: WrittenVerdict, episodes: Sequence[Episode]) -> tuple[Floats, Floats]:
    """Time shared as a part of the shorter one's, and of both together, each of shape (n,)."""
    start, end = (np.array([getattr(e, name) for e in episodes]) for name in ("start", "end"))
    both = np.maximum(np.minimum(end, verdict.end) - np.maximum(start, verdict.start), 0.0)
    own = verdict.end - verdict.start
    shorter = np.minimum(end - start, own)
    return both / np.maximum(shorter, 1e-9), both / (own + (end - start) - both)


def _same_kind(verdict: WrittenVerdict, episode: Episode) -> bool:
    return verdict.kind is None or verdict.kind is episode.kind


def _meets(verdict: WrittenVerdict, episode: Episode) -> bool:
    """Whether the depths meet; an end that is not known is open."""
    top = np.fmax(verdict.top_md, episode.top_md)
    bottom = np.fmin(verdict.bottom_md, episode.bottom_md)
    return not top > bottom


def _missed(verdict: WrittenVerdict, episodes: Sequence[Episode], shared: Floats, timezone: str) -> str:
    """Say that no episode matches, and how the nearest misses."""
    apart = [max(e.start - verdict.end, verdict.start - e.end, 0.0) for e in episodes]
    order = sorted(
        range(len(episodes)),
        key=lambda k: (apart[k], -shared[k], not _same_kind(verdict, episodes[k]), episodes[k].id),
    )
    k = order[0]
    near = episodes[k]
    if shared[k] >= SHARED:
        how = "lies at other depths" if _same_kind(verdict, near) else f"is {near.kind}, not {verdict.kind}"
    elif apart[k] > 0.0:
        how = f"is {apart[k]:.0f} s {'later' if near.start >= verdict.end else 'earlier'}"
    else:
        how = "shares less than half of the shorter one's time with it"
    return f"matches no episode; the nearest, {_named(near, timezone)}, {how}"


def _named(episode: Episode, timezone: str) -> str:
    return f"{episode.id} ({rule_label(episode)}, {wording.period(episode.start, episode.end, timezone)})"


def _refuse_pairs(
    placed: Sequence[PlacedVerdict], episodes: Sequence[Episode], path: Path, timezone: str
) -> None:
    first: dict[str, int] = {}
    for p in placed:
        line, other = p.written.line, first.get(p.episode)
        if other is not None:
            named = _named(next(e for e in episodes if e.id == p.episode), timezone)
            said = f"speaks of the same episode as line {other}, {named}; keep one of the two"
            raise TableError(said, file=path, line=line)
        if p.episode:
            first[p.episode] = line


def rejected(episodes: Sequence[Episode]) -> tuple[Episode, ...]:
    """Give the episodes that the engineer rejected."""
    return tuple(e for e in episodes if e.word is Word.REJECT)
