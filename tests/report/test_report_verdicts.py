"""The report marks what the engineer made of the episodes."""

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from forensics.case import RecordSettings
from forensics.episodes.catalogue import Word, standing
from forensics.episodes.verdict_file import WrittenVerdict
from forensics.episodes.verdicts import judge
from forensics.report import derived
from forensics.report.describe import describe, make_scene
from forensics.report.render import render_report
from forensics.report.scene import main_episodes
from forensics.report.sections import episodes, verdicts

NAN = float("nan")
FILE = Path("verdicts.csv")


def written(episode, word, line, **changes):
    return WrittenVerdict(line, episode.start, episode.end, NAN, NAN, episode.kind, word, **changes)


@pytest.fixture
def judged(findings):
    """Reject the first episode, relabel the second, and speak of one that is not there."""
    first, second = findings.episodes[:2]
    rows = (
        written(first, Word.REJECT, 2, note="<i>load cell</i>"),
        written(second, Word.RELABEL, 3, cause="pack-off"),
        WrittenVerdict(4, first.start - 9e5, first.start - 8e5, NAN, NAN, None, Word.ACCEPT),
    )
    done = judge(rows, findings.episodes, FILE, "UTC")
    case = replace(findings.case, records=RecordSettings(verdicts=FILE))
    return replace(findings, case=case, episodes=done.episodes, verdicts=done.placed)


def test_the_table_marks_every_verdict(judged):
    table = episodes.episode_table(make_scene(judged, "metric"))
    cells = {row[0]: (row[-2], row[-1]) for row in table.rows}
    first, second = judged.episodes[:2]
    assert cells[first.id][1] == ("rejected", "<i>load cell</i>")
    cause, mark = cells[second.id]
    assert mark == "relabelled"
    assert cause[0] == "by the engineer: pack-off"
    assert cause[1].startswith("the program's own: ")


def test_without_verdicts_the_table_has_no_such_column(findings):
    assert "verdict" not in [c.title for c in episodes.episode_table(make_scene(findings, "metric")).columns]
    assert verdicts.tables(make_scene(findings, "metric")) == []
    assert verdicts.notices(make_scene(findings, "metric")) == []


def test_what_was_rejected_gets_no_pictures_and_no_time(judged, findings):
    first = judged.episodes[0]
    assert first not in main_episodes(judged.episodes)
    assert main_episodes(judged.episodes[:1]) == ()
    assert first not in standing(judged.episodes)
    state = np.zeros(len(findings.log), dtype=np.int8)
    state[first.first - 5 : first.last + 6] = 1
    loads = replace(findings.loads, state=state)
    before, after = (derived.seconds_in_state(replace(f, loads=loads), 1) for f in (findings, judged))
    seconds = derived.row_seconds(findings)
    assert before - after == pytest.approx(seconds[first.first : first.last + 1].sum())
    assert after > 0.0


def test_a_verdict_without_an_episode_is_pointed_out_and_notes_are_escaped(judged):
    page = render_report(describe(judged, "metric"))
    assert "Verdicts to look at again in verdicts.csv" in page
    assert "Line 4: the verdict matches no episode" in page
    assert "hollow where the engineer rejected it" in page
    assert "&lt;i&gt;load cell&lt;/i&gt;" in page
    assert "<i>load cell" not in page


def test_a_run_with_everything_rejected_says_so(findings):
    rows = tuple(written(e, Word.REJECT, k + 2) for k, e in enumerate(findings.episodes))
    done = judge(rows, findings.episodes, FILE, "UTC")
    cleared = replace(findings, episodes=done.episodes, verdicts=done.placed, profiles={}, families=())
    page = render_report(describe(cleared, "metric"))
    assert "The engineer rejected all there were" in page
    assert "No episode stands" in page
