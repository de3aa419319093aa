"""Verdicts as the exports give them, and `verdicts_draft.csv`: one row an episode, ready to be filled in."""

from __future__ import annotations

import csv
import datetime as dt
import hashlib
import io
from pathlib import Path
from typing import Any

from forensics.episodes.catalogue import Episode
from forensics.episodes.verdict_file import COLUMNS as FILE_COLUMNS
from forensics.episodes.verdict_file import NAME, WrittenVerdict, has_rows
from forensics.exports.stamps import number, stamp
from forensics.exports.text import inert
from forensics.findings import Findings
from forensics.logs.zone import tzinfo_of
from forensics.tables import decode, read_table

DRAFT = "verdicts_draft.csv"
COLUMNS = ("start", "end", "top_md_m", "bottom_md_m", "kind", "verdict", "cause", "note", "id")
HELP = (
    "# Fill in verdict (accept, reject, relabel), cause (for relabel) and note; an empty verdict means none.",
    "# Save it as verdicts.csv beside the case file: the next run reads it there.",
)
# The first line: by it a draft that somebody has written in is told from one as the program left it.
MARK = "# As the program wrote it: "


def verdict_cells(episode: Episode) -> dict[str, str]:
    """Give the cells of the engineer's verdict under an episode; all empty where there is none.

    Parameters
    ----------
    episode : Episode

    Returns
    -------
    dict of str to str
        "verdict", "verdict_note", and "program_cause" where the engineer's cause took its place.
    """
    verdict = episode.verdict
    if verdict is None:
        return {"verdict": "", "verdict_note": "", "program_cause": ""}
    own = verdict.program_cause if verdict.cause else ""
    return {"verdict": verdict.word.value, "verdict_note": verdict.note, "program_cause": own}


def verdicts_content(findings: Findings) -> list[dict[str, Any]]:
    """Lay out every verdict of the file with the episode it was put to.

    Parameters
    ----------
    findings : Findings

    Returns
    -------
    list of dict
        In the file's order; "episode" is None where it matches none, "remark" says why.
    """
    return [
        {
            "line": p.written.line,
            **_written(findings, p.written),
            "episode": p.episode or None,
            "remark": p.remark,
        }
        for p in findings.verdicts
    ]


def write_draft(findings: Findings, path: Path) -> None:
    """Write the draft of a file of verdicts: the episodes with what is known of each, then verdicts of none.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    path : Path
        The file to write.
    """
    tz = tzinfo_of(findings.log.timezone)
    known = {p.episode: p.written for p in findings.verdicts if p.episode}
    rows = [_row(episode, known.get(episode.id), tz) for episode in findings.episodes]
    rows += [_written(findings, p.written) for p in findings.verdicts if not p.episode]
    text = io.StringIO()
    text.write("\n".join(HELP) + "\n")
    writer = csv.DictWriter(text, COLUMNS, lineterminator="\n")
    writer.writeheader()
    writer.writerows({name: inert(cell) for name, cell in row.items()} for row in rows)
    body = text.getvalue()
    path.write_text(f"{MARK}{_digest(body)}\n{body}", encoding="utf-8", newline="")


def keep_filled(path: Path) -> None:
    """Refuse to write a new draft over one that somebody has filled in.

    Parameters
    ----------
    path : Path
        Where the draft is to go; it need not exist.

    Raises
    ------
    TableError
        If a draft there is not as the program wrote it and holds a verdict, a cause or a note, or can't be
        read as a draft.
    """
    if not path.is_file():
        return
    first, _, body = decode(path.read_bytes()).partition("\n")
    if first == MARK + _digest(body) or not has_rows(path):
        return
    table = read_table(path, FILE_COLUMNS)
    for row in range(len(table)):
        if any(table.text(column)[row] for column in ("verdict", "cause", "note")):
            said = f"move it beside the case file as {NAME}, or delete it"
            raise table.error(f"is filled in, and a new draft would take its place; {said}", row)


def _digest(text: str) -> str:
    return hashlib.sha256(text.encode()).hexdigest()[:16]


def _row(episode: Episode, written: WrittenVerdict | None, tz: dt.tzinfo) -> dict[str, Any]:
    return {
        "start": stamp(episode.start, tz),
        "end": stamp(episode.end, tz),
        "top_md_m": number(episode.top_md, 2),
        "bottom_md_m": number(episode.bottom_md, 2),
        "kind": episode.kind.value,
        "verdict": written.word.value if written else "",
        "cause": written.cause if written else "",
        "note": written.note if written else "",
        "id": episode.id,
    }


def _written(findings: Findings, written: WrittenVerdict) -> dict[str, Any]:
    tz = tzinfo_of(findings.log.timezone)
    return {
        "start": stamp(written.start, tz),
        "end": stamp(written.end, tz),
        "top_md_m": number(written.top_md, 2),
        "bottom_md_m": number(written.bottom_md, 2),
        "kind": written.kind.value if written.kind else "",
        "verdict": written.word.value,
        "cause": written.cause,
        "note": written.note,
        "id": written.id,
    }
