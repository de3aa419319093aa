"""The excerpt: anonymous, read again, and loaded as the run it was taken from."""

import numpy as np
import pandas as pd
import pytest

import cases
from forensics.case import load_case
from forensics.errors import InputError
from forensics.logs.read import read_time_logs
from forensics.well.model import load_well
from pipelines import cli, incident
from pipelines.excerpting import write_excerpt

JOB = cases.Job(duration=3700.0)
NAMES = ("Heron", "heron", "Drill pipe", "intermediate casing", "time.csv")


@pytest.fixture(scope="module")
def case(tmp_path_factory):
    return cases.make_case(tmp_path_factory.mktemp("run"), JOB)


@pytest.fixture(scope="module")
def log(case):
    return read_time_logs(load_case(case))


@pytest.fixture(scope="module")
def span(log):
    stamps = pd.to_datetime(log.time[[200, -200]], unit="s", utc=True)
    return tuple(stamp.isoformat() for stamp in stamps)


@pytest.fixture(scope="module")
def excerpt(case, span):
    write_excerpt(case, span, case.parent / "excerpt")
    return case.parent / "excerpt" / "case.toml"


def test_nothing_names_the_run(excerpt, log):
    text = "".join(path.read_text(encoding="utf-8") for path in excerpt.parent.iterdir())
    for name in NAMES:
        assert name not in text
    day = pd.to_datetime(log.time[0], unit="s", utc=True).strftime("%Y-%m-%d")
    assert day not in text


def test_the_log_is_the_same_moved(excerpt, log):
    again = read_time_logs(load_case(excerpt))
    rows = slice(200, len(log) - 199)
    np.testing.assert_allclose(np.diff(again.time), np.diff(log.time[rows]))
    moved = again.get("bit_depth") - log.get("bit_depth")[rows]
    np.testing.assert_allclose(moved, moved[0], atol=1e-6)
    assert 40.0 <= moved[0] <= 160.0
    np.testing.assert_array_equal(again.get("torque"), log.get("torque")[rows])


def test_the_hook_carries_the_pipe_added_and_no_more(excerpt, case, log):
    """The weight of a vertical stretch is w L: exact."""
    again = read_time_logs(load_case(excerpt))
    well, moved = load_well(load_case(case)), load_well(load_case(excerpt))
    rows = slice(200, len(log) - 199)
    bit = log.get("bit_depth")[200]
    depth = again.get("bit_depth")[0] - bit
    added = moved.rotating_weight([bit + depth])[0] - well.rotating_weight([bit])[0]
    grown = again.hookload_logged - log.hookload_logged[rows]
    assert np.nanmedian(grown) == pytest.approx(added, abs=60.0)
    # in slips the hook carries the block alone, and goes on doing so
    assert np.nanmin(np.abs(grown)) == 0.0


def test_the_run_below_is_loaded_as_it_was(excerpt, case, log):
    first = incident.run(case, case.parent / "one", quiet=True)
    second = incident.run(excerpt, case.parent / "two", quiet=True)
    whole = pd.read_parquet(first.folder / "history.parquet")["wob_bit_kN"][200 : len(log) - 199]
    cut = pd.read_parquet(second.folder / "history.parquet")["wob_bit_kN"]
    late = slice(len(cut) // 3, None)
    off = np.abs(whole.to_numpy()[late] - cut.to_numpy()[late])
    assert np.nanmedian(off) < 3.0


def test_a_format_that_cannot_be_cut_is_written_anew_and_said(case, span, tmp_path):
    frame = pd.read_csv(case.parent / "time.csv")
    for path in case.parent.glob("*.csv"):
        (tmp_path / path.name).write_bytes(path.read_bytes())
    frame.to_parquet(tmp_path / "time.parquet")
    text = case.read_text().replace("time.csv", "time.parquet")
    (tmp_path / "case.toml").write_text(text)
    said = write_excerpt(tmp_path / "case.toml", span, tmp_path / "out")
    assert "written anew" in said[0]
    again = read_time_logs(load_case(tmp_path / "out" / "case.toml"))
    assert len(again) > 1000


@pytest.mark.parametrize(
    ("start", "end", "words"),
    [("yesterday", "today", "two stamps"), ("1999-01-01", "1999-01-02", "the run goes from")],
)
def test_a_window_without_the_run_is_refused(case, tmp_path, start, end, words):
    with pytest.raises(InputError, match=words):
        write_excerpt(case, (start, end), tmp_path / "out")
    assert not (tmp_path / "out").exists()


def test_the_command(case, span, tmp_path, capsys):
    argv = ["inspect", str(case), "--excerpt", *span, "--out", str(tmp_path / "e")]
    assert cli.main(argv) == cli.DONE
    assert (tmp_path / "e" / "case.toml").is_file()
    assert "excerpt:" in capsys.readouterr().out
