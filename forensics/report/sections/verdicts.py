"""What the engineer made of the episodes, and verdicts that found none."""

from __future__ import annotations

from forensics.case import Case
from forensics.episodes.catalogue import Episode, Word
from forensics.episodes.verdict_file import verdicts_path
from forensics.report.elements import Column, Element, Notice, Table
from forensics.report.scene import Scene
from forensics.report.words import count, plain

ROWS = 200
MARKS = {Word.ACCEPT: "confirmed", Word.REJECT: "rejected", Word.RELABEL: "relabelled"}


def mark(episode: Episode) -> str | tuple[str, ...]:
    """Cell of an episode's verdict, the note under it; empty where there is none."""
    if episode.verdict is None:
        return ""
    word = MARKS[episode.verdict.word]
    return (word, episode.verdict.note) if episode.verdict.note else word


def cause_cell(episode: Episode) -> str | tuple[str, ...]:
    """Cell of an episode's cause: the engineer's with the program's own under it, where there are two."""
    if episode.word is not Word.RELABEL or episode.verdict is None:
        return plain(episode.cause)
    own = plain(episode.verdict.program_cause) or "none named"
    return (f"by the engineer: {plain(episode.cause)}", f"the program's own: {own}")


def sentence(episode: Episode) -> str:
    """Say what the engineer made of an episode; empty where nothing."""
    if episode.verdict is None:
        return ""
    said = f"{MARKS[episode.verdict.word].capitalize()} by the engineer"
    return f"{said}: {episode.verdict.note}" if episode.verdict.note else said


def notices(scene: Scene) -> list[Element]:
    """Point out verdicts that changed nothing, or were put to an unlike episode; none where all is well."""
    said = [f"Line {p.written.line}: the verdict {p.remark}." for p in scene.findings.verdicts if p.remark]
    if not said:
        return []
    if len(said) > ROWS:
        said = [*said[:ROWS], f"{count(len(said) - ROWS, 'more verdict')} in summary.json."]
    return [Notice(f"Verdicts to look at again in {_file(scene.findings.case)}", tuple(said))]


def tables(scene: Scene) -> list[Element]:
    """Every verdict as written, beside its episode; no table where there are none."""
    placed, show = scene.findings.verdicts, scene.show
    if not placed:
        return []
    columns = (
        Column("line", "number"), Column(f"from ({show.timezone})"), Column(f"to ({show.timezone})"),
        Column("kind"), Column("verdict"), Column("cause"), Column("note"), Column("episode", "code"),
    )  # fmt: skip
    rows = tuple(
        (
            str(p.written.line),
            show.time(p.written.start),
            show.time(p.written.end),
            p.written.kind or "not given",
            p.written.word.value,
            p.written.cause,
            p.written.note,
            p.episode or "none",
        )
        for p in placed[:ROWS]
    )
    note = (
        "A verdict is put to the episode of its kind that shares at least half of the shorter one's time and "
        "its depths, where given; one that fits none, or several alike, changes nothing. Who gave it is not "
        "recorded."
    )
    if len(placed) > ROWS:
        note += f" The first {ROWS} of {len(placed)} are listed; summary.json has all."
    caption = f"The engineer's verdicts, as read from {_file(scene.findings.case)}"
    return [Table(caption, columns, rows, note, dense=True)]


def _file(case: Case) -> str:
    path = verdicts_path(case)
    return "the file of verdicts" if path is None else path.name
