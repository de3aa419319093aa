"""The draft of verdicts comes back as it was filled in, and is never written over by the next."""

import csv
import json
from dataclasses import replace

import jsonschema
import pytest

from forensics.case import RecordSettings
from forensics.episodes.catalogue import Word
from forensics.episodes.verdict_file import read_verdicts
from forensics.episodes.verdicts import judge
from forensics.errors import TableError
from forensics.exports.episodes import write_episodes
from forensics.exports.summary import summary_schema, write_summary
from forensics.exports.verdicts import DRAFT, keep_filled, write_draft

# Verdict, cause and note of the first episode and the second.
FILLED = (("accept", "", 'seen; "on the floor", twice'), ("relabel", "pack-off", "=returns stopped"))


def fill(path, filled):
    """Fill in a draft as a spreadsheet would."""
    lines = path.read_text(encoding="utf-8").splitlines(keepends=True)
    head = [line for line in lines if line.startswith("#")]
    rows = list(csv.DictReader(lines[len(head) :]))
    for row in rows:
        if row["id"] in filled:
            row["verdict"], row["cause"], row["note"] = filled[row["id"]]
    with path.open("w", encoding="utf-8", newline="") as file:
        file.writelines(head)
        writer = csv.DictWriter(file, list(rows[0]))
        writer.writeheader()
        writer.writerows(rows)


@pytest.fixture
def judged(findings, tmp_path):
    """Take findings through a draft: written, filled in, read again."""
    path = tmp_path / DRAFT
    write_draft(findings, path)
    ids = [e.id for e in findings.episodes]
    fill(path, dict(zip(ids, FILLED, strict=True)))
    case = replace(findings.case, records=RecordSettings(verdicts=path))
    done = judge(read_verdicts(case), findings.episodes, path, findings.log.timezone)
    return replace(findings, episodes=done.episodes, verdicts=done.placed)


def test_an_empty_draft_reads_as_no_verdict(findings, tmp_path):
    write_draft(findings, tmp_path / DRAFT)
    case = replace(findings.case, records=RecordSettings(verdicts=tmp_path / DRAFT))
    assert read_verdicts(case) == ()
    write_draft(replace(findings, episodes=()), tmp_path / DRAFT)
    assert read_verdicts(case) == ()


def test_a_filled_draft_finds_the_same_episodes(judged):
    first, second = judged.episodes
    assert (first.word, second.word) == (Word.ACCEPT, Word.RELABEL)
    assert first.verdict.note == 'seen; "on the floor", twice'
    assert second.cause == "pack-off"
    assert [p.episode for p in judged.verdicts] == [first.id, second.id]
    assert not any(p.remark for p in judged.verdicts)


def test_the_next_draft_carries_the_verdicts_on(judged, tmp_path):
    stray = replace(judged.verdicts[0], episode="", remark="matches no episode")
    path = tmp_path / "next.csv"
    write_draft(replace(judged, verdicts=(*judged.verdicts, stray)), path)
    case = replace(judged.case, records=RecordSettings(verdicts=path))
    read = read_verdicts(case)
    assert [(w.word, w.cause) for w in read] == [
        (Word.ACCEPT, ""), (Word.RELABEL, "pack-off"), (Word.ACCEPT, ""),
    ]  # fmt: skip
    assert read[-1].start == stray.written.start


def test_exports_tell_the_verdicts(judged, tmp_path):
    write_episodes(judged, tmp_path / "episodes.csv")
    with (tmp_path / "episodes.csv").open(encoding="utf-8", newline="") as file:
        rows = list(csv.DictReader(file))
    assert [row["verdict"] for row in rows] == ["accept", "relabel"]
    assert rows[1]["verdict_note"] == "'=returns stopped"
    own = judged.episodes[1].verdict.program_cause
    assert (rows[1]["cause"], rows[1]["program_cause"]) == ("pack-off", own)
    write_summary(judged, tmp_path / "summary.json")
    summary = json.loads((tmp_path / "summary.json").read_text(encoding="utf-8"))
    jsonschema.Draft202012Validator(summary_schema()).validate(summary)
    assert [v["episode"] for v in summary["verdicts"]] == [p.episode for p in judged.verdicts]


def test_a_filled_draft_is_not_written_over(findings, judged, tmp_path):
    with pytest.raises(TableError, match=r"line 5: is filled in"):
        keep_filled(tmp_path / DRAFT)
    write_draft(judged, tmp_path / DRAFT)  # verdicts the program wrote itself are none that could be lost
    keep_filled(tmp_path / DRAFT)
    keep_filled(tmp_path / "none.csv")
    write_draft(findings, tmp_path / DRAFT)
    fill(tmp_path / DRAFT, {})
    keep_filled(tmp_path / DRAFT)
