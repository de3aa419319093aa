"""Verdicts in a file find their episodes by time, kind and depth; what they can't find is said."""

from dataclasses import replace
from pathlib import Path

import pytest

from forensics.case import Case, FluidSettings, LogSettings, RecordSettings
from forensics.episodes.catalogue import Consequence, Episode, Kind, State, Verdict, Word, standing
from forensics.episodes.causes.names import Cause
from forensics.episodes.causes.words import cause_sentence
from forensics.episodes.describe import describe, tell, weigh_episodes
from forensics.episodes.groups import group, is_routine
from forensics.episodes.verdict_file import WrittenVerdict, read_verdicts
from forensics.episodes.verdicts import judge, verdict_remarks
from forensics.errors import TableError
from forensics.estimate import Estimate

NAN = float("nan")
START = 1_935_792_000.0  # 2031-05-06 00:00 UTC
FILE = Path("verdicts.csv")
HEAD = "start,end,top_md_m,bottom_md_m,kind,verdict,cause,note,id\n"
SPAN = "2031-05-06T00:10:00Z,2031-05-06T00:20:00Z"


def episode(name, first, last, kind=Kind.BUCKLING, depths=(1500.0, 2300.0), **changes):
    """Make an episode from minute to minute of the day."""
    nothing = Estimate(NAN, NAN, NAN, "not applicable", False)
    made = Episode(
        name, kind, State.HELICAL, START + 60.0 * first, START + 60.0 * last, 0, 1, 0, "drill_slide", *depths,
        1800.0, nothing, nothing, nothing, nothing, 0.9, Consequence.WEIGHT_LOST, cause="buckling",
    )  # fmt: skip
    return replace(made, **changes)


def verdict(first, last, kind=None, depths=(NAN, NAN), word=Word.REJECT, line=2, **changes):
    """Write a verdict from minute to minute of the day."""
    return WrittenVerdict(line, START + 60.0 * first, START + 60.0 * last, *depths, kind, word, **changes)


def put(written, *episodes):
    """Put one verdict to episodes: the id it went to, and the remark."""
    (placed,) = judge((written,), episodes, FILE, "UTC").placed
    return placed.episode, placed.remark


def case_in(folder, named=None):
    return Case(
        folder / "case.toml", "x", "x", LogSettings((folder / "t.csv",)), folder, folder, folder,
        FluidSettings(1200.0), records=RecordSettings(verdicts=named),
    )  # fmt: skip


def read(folder, *rows, head=HEAD):
    (folder / "verdicts.csv").write_text(head + "".join(f"{row}\n" for row in rows), encoding="utf-8")
    return read_verdicts(case_in(folder, folder / "verdicts.csv"))


def test_a_row_is_read_with_its_units_and_stamps(tmp_path):
    head = "# by hand\nStart,End,top [ft],bottom [ft],Kind,Verdict,Cause,Note,Id\n"
    row = "2031-05-06T02:10:00+02:00,2031-05-06 00:20:00,1000,2000,Buckling,Relabel,Pack-off,seen at 4,E7"
    (found,) = read(tmp_path, row, head=head)
    assert (found.start, found.end) == (START + 600.0, START + 1200.0)
    assert (found.top_md, found.bottom_md) == pytest.approx((304.8, 609.6))
    assert (found.line, found.kind, found.word) == (3, Kind.BUCKLING, Word.RELABEL)
    assert (found.cause, found.note, found.id) == ("pack-off", "seen at 4", "E7")


def test_rows_without_a_verdict_say_nothing(tmp_path):
    assert read(tmp_path, f"{SPAN},,,buckling,,,,E001") == ()
    assert read(tmp_path) == ()


@pytest.mark.parametrize(
    ("row", "named"),
    [
        (f"{SPAN},,,,acept,,,", ("'verdict'", "'acept'", "did you mean 'accept'?")),
        (f"{SPAN},,,,relabel,differental sticking,,", ("'cause'", "did you mean 'differential sticking'?")),
        (f"{SPAN},,,,relabel,,,", ("'cause'", "is empty beside 'relabel'", "pack-off")),
        (f"{SPAN},,,,reject,pack-off,,", ("'cause'", "beside 'reject'")),
        (f"{SPAN},,,,,,not here,", ("'note'", "no verdict")),
        (f"{SPAN},,,helix,reject,,,", ("'kind'", "known are: buckling")),
        (f"{SPAN},20,10,,reject,,,", ("'bottom_md_m'", "above the top")),
        ("2031-05-06T00:20:00Z,2031-05-06T00:10:00Z,,,,reject,,,", ("'end'", "not after the start")),
        ("yesterday,2031-05-06T00:10:00Z,,,,reject,,,", ("'start'", "'yesterday'")),
    ],
)
def test_a_bad_row_is_refused_with_its_place(tmp_path, row, named):
    with pytest.raises(TableError) as caught:
        read(tmp_path, f"{SPAN},,,,accept,,,", row)
    assert "verdicts.csv, line 3" in str(caught.value)
    for words in named:
        assert words in str(caught.value)


def test_a_file_without_the_column_is_refused(tmp_path):
    with pytest.raises(TableError, match="no column 'verdict'"):
        read(tmp_path, SPAN, head="start,end\n")


def test_a_header_spelt_nearly_right_is_refused_and_a_strange_one_passed_over(tmp_path):
    row = f"{SPAN},accept,seen"
    with pytest.raises(TableError, match="did you mean 'note'"):
        read(tmp_path, row, head="start,end,verdict,notte\n")
    assert [w.note for w in read(tmp_path, row, head="start,end,verdict,who\n")] == [""]


def test_a_file_beside_the_case_is_taken_and_said(tmp_path):
    read(tmp_path, f"{SPAN},,,,reject,,,")
    case = case_in(tmp_path)
    written = read_verdicts(case)
    placed = judge(written, (episode("E1", 10, 20),), FILE, "UTC").placed
    (said,) = verdict_remarks(case, placed)
    assert "verdicts.csv beside the case file was read" in said
    assert verdict_remarks(case_in(tmp_path, tmp_path / "verdicts.csv"), placed) == ()
    assert read_verdicts(case_in(tmp_path / "elsewhere")) == ()


@pytest.mark.parametrize("shift", [-0.8, -0.4, 0.0, 0.4, 0.8])
def test_edges_may_move_by_tens_of_seconds(shift):
    moved = (episode("E3", 10 + shift, 20 - shift), episode("E4", 22 + shift, 30 + shift))
    assert put(verdict(10, 20, Kind.BUCKLING, (1500.0, 2300.0)), *moved) == ("E3", "")
    assert put(verdict(22, 30, Kind.BUCKLING, id="E3"), *moved) == ("E4", "")


def test_half_of_the_shorter_is_needed():
    assert put(verdict(15, 25), episode("E1", 10, 20))[0] == "E1"
    name, remark = put(verdict(15.1, 25.1), episode("E1", 10, 20))
    assert name == ""
    assert "the nearest, E1 (" in remark
    assert "less than half" in remark


def test_kind_and_depth_decide_where_given():
    both = (episode("E1", 10, 20), episode("E2", 10, 20, Kind.LOCKUP))
    assert put(verdict(10, 20, Kind.LOCKUP), *both) == ("E2", "")
    assert "matches E1, E2 alike" in put(verdict(10, 20), *both)[1]
    assert put(verdict(10, 20, id="E2"), *both) == ("E2", "")
    assert "is buckling, not torque" in put(verdict(10, 20, Kind.TORQUE), both[0])[1]
    assert "other depths" in put(verdict(10, 20, None, (2400.0, 2500.0)), both[0])[1]
    assert put(verdict(10, 20, None, (NAN, 1600.0)), both[0])[0] == "E1"
    assert put(verdict(10, 20, None, (5.0, 6.0)), episode("E1", 10, 20, depths=(NAN, NAN)))[0] == "E1"


def test_of_nested_episodes_the_one_meant_is_taken():
    nested = (episode("E1", 0, 100), episode("E2", 40, 45, Kind.LOCKUP))
    assert put(verdict(40, 45.5), *nested) == ("E2", "")
    assert put(verdict(1, 99), *nested) == ("E1", "")


def test_an_episode_that_fell_in_two_alike_halves_takes_no_verdict():
    halves = (episode("E1", 10, 14.8), episode("E2", 15.2, 20))
    assert "matches E1, E2 alike" in put(verdict(10, 20, Kind.BUCKLING), *halves)[1]


def test_a_short_verdict_on_a_long_episode_is_pointed_out():
    name, remark = put(verdict(50, 51), episode("E1", 0, 100))
    assert name == "E1"
    assert "lasts 6000 s" in remark


def test_far_and_empty_are_said():
    assert "E1" in put(verdict(40, 50), episode("E1", 10, 20), episode("E0", 0, 5))[1]
    assert put(verdict(40, 50), episode("E1", 10, 20))[1].endswith("is 1200 s earlier")
    assert put(verdict(1, 2), episode("E1", 10, 20))[1].endswith("is 480 s later")
    assert put(verdict(1, 2)) == ("", "matches no episode: the run has none")


def test_two_verdicts_on_one_episode_are_refused_with_both_lines():
    pair = (verdict(10, 20, line=2), verdict(11, 20, line=9, word=Word.ACCEPT))
    with pytest.raises(TableError, match=r"line 9: .* line 2, E1 \(") as caught:
        judge(pair, (episode("E1", 10, 20),), FILE, "UTC")
    assert caught.value.line == 9


def test_a_relabelled_episode_keeps_the_programs_ranking_beside_the_engineers_cause():
    written = verdict(10, 20, word=Word.RELABEL, cause=Cause.STICKING.value, note="overpull")
    (found,) = judge((written,), (episode("E1", 10, 20),), FILE, "UTC").episodes
    assert found.cause == "differential sticking"
    assert found.verdict == Verdict(Word.RELABEL, "differential sticking", "overpull", "buckling")
    said = cause_sentence(found)
    assert said == (
        "Cause by the engineer: differential sticking; the program's own: best-supported cause: buckling."
    )


def test_a_routine_episode_with_a_cause_is_routine_no_more():
    quiet = episode("E1", 10, 20, state=State.SINUSOIDAL, consequence=Consequence.NONE, cause="")
    assert is_routine(quiet)
    written = verdict(10, 20, word=Word.RELABEL, cause=Cause.SENSOR.value)
    (found,) = judge((written,), (quiet,), FILE, "UTC").episodes
    assert not is_routine(found)
    assert "the program had named none" in cause_sentence(found)


@pytest.fixture
def buckled(make_run):
    """Make a run that buckles into a helix, and sinusoidally later on."""
    run = make_run().buckle(slice(1000, 1300), ratio=2.0, helical=slice(1020, 1280))
    run.rig["wob_surface"][1000:1300] = 150.0e3
    return run.buckle(slice(2000, 2500)).with_draws().material()


def test_rejected_episodes_leave_headline_and_families(buckled):
    weighed = weigh_episodes(buckled)
    found = describe(buckled)
    assert found.episodes
    span = found.episodes[0]
    written = tuple(
        WrittenVerdict(k + 2, e.start, e.end, NAN, NAN, e.kind, Word.REJECT, note="load cell")
        for k, e in enumerate(found.episodes)
    )
    judged = judge(written, weighed.episodes, FILE, "UTC")
    told = tell(buckled, replace(weighed, episodes=judged.episodes))
    assert len(told.episodes) == len(found.episodes)
    assert standing(told.episodes) == ()
    assert told.families == ()
    assert {e.family for e in told.episodes} == {""}
    assert "buckled" in found.headline.sentence
    assert "buckled" not in told.headline.sentence
    assert told.headline.sentence.startswith("Apart from")
    assert "it rests on the engineer's verdict" in told.headline.confidence
    assert any(f"{span.id} (" in line and "load cell" in line for line in told.headline.details)


def test_an_accepted_episode_is_confirmed_in_the_headline(buckled):
    weighed = weigh_episodes(buckled)
    first = weighed.episodes[0]
    written = (WrittenVerdict(2, first.start, first.end, NAN, NAN, first.kind, Word.ACCEPT),)
    told = tell(buckled, replace(weighed, episodes=judge(written, weighed.episodes, FILE, "UTC").episodes))
    assert told.headline.sentence.endswith("The engineer confirmed this episode.")
    assert any("confirmed by the engineer" in line for line in told.headline.details)


def test_groups_count_what_stands(buckled):
    many = tuple(episode(f"E{k}", 10 * k, 10 * k + 5) for k in range(3))
    out = (replace(many[0], verdict=Verdict(Word.REJECT)), *many[1:])
    grouped, families = group(buckled, out)
    assert [f.members for f in families] == [("E1", "E2")]
    assert grouped[0].family == ""


def test_buckling_did_not_lead_to_a_lockup_that_was_rejected(buckled):
    weighed = weigh_episodes(buckled)
    first = replace(weighed.episodes[0], consequence=Consequence.LOCKED_UP)
    lock = replace(first, id="E900", kind=Kind.LOCKUP, first=first.first + 10, verdict=Verdict(Word.REJECT))
    out = tell(buckled, replace(weighed, episodes=(first, lock)))
    assert out.episodes[0].consequence is not Consequence.LOCKED_UP
    kept = tell(buckled, replace(weighed, episodes=(first, replace(lock, verdict=None))))
    assert kept.episodes[0].consequence is Consequence.LOCKED_UP
    outer = tell(buckled, replace(weighed, episodes=(replace(first, verdict=Verdict(Word.REJECT)), lock)))
    assert outer.families == ()
    inside = replace(lock, verdict=None)
    named = tell(buckled, replace(weighed, episodes=(replace(first, verdict=Verdict(Word.REJECT)), inside)))
    assert any("Within their time, still counted: E900." in line for line in named.headline.details)
