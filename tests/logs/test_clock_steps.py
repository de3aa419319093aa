"""Clocks set while they recorded, and files whose clocks disagree."""

from pathlib import Path

import numpy as np
import pytest

from forensics.errors import LogError
from forensics.logs.clock_offset import find_offsets
from forensics.logs.clock_steps import mend_clocks
from forensics.logs.join import join
from forensics.logs.piece import Piece

START = 1_900_000_800.0 // 3600.0 * 3600.0


def signals(true, seed=5):
    """Bit, block and hookload of a rig that works the string all the time."""
    rng = np.random.default_rng(seed)
    block = 15.0 + 12.0 * np.sin(true / 170.0)
    return {
        "bit_depth": 2000.0 + 4e-3 * (true - START) - block,
        "block_position": block,
        "hookload": 1e6 + 1e5 * np.sign(np.cos(true / 170.0)) + rng.normal(0.0, 2e3, len(true)),
    }


def piece(stamps, true, name="log.csv", rows=slice(None), drop=(), **more):
    values = {k: v[rows] for k, v in (signals(true) | more).items() if k not in drop}
    stamps = np.asarray(stamps, dtype=float)[rows]
    return Piece(Path(name), stamps, 2 + np.arange(len(true))[rows], values)


def local(true, at, shift):
    return true + np.where(true >= at, shift, 0.0)


@pytest.mark.parametrize("interval", [1.0, 5.0, 30.0])
def test_an_hour_told_twice_is_undone_and_said(interval):
    true = START + interval * np.arange(int(4 * 3600 / interval))
    made = mend_clocks([piece(local(true, START + 7200.0, -3600.0), true)])
    np.testing.assert_allclose(made.pieces[0].time, true)
    rows = int(2 * 3600 / interval)
    assert [(s.name, s.samples) for s in made.steps] == [("clock setting undone", rows)]
    assert f"line {2 + rows}: set back by an hour" in made.steps[0].detail
    assert "summer time" in made.warnings[0]
    assert "[logs] timezone" in made.warnings[0]


def test_an_hour_left_out_is_undone_where_the_block_moves_and_stays_a_gap_where_it_stands():
    true = START + 5.0 * np.arange(2880)
    stamps = local(true, START + 7200.0, 3600.0)
    made = mend_clocks([piece(stamps, true)])
    np.testing.assert_allclose(made.pieces[0].time, true)
    assert "set forward by an hour" in made.steps[0].detail
    still = piece(stamps, true, bit_depth=np.full(2880, 2000.0), block_position=np.full(2880, 9.0))
    assert mend_clocks([still]).steps == []
    later = local(true, START + 7500.0, 3600.0)
    assert mend_clocks([piece(later, true)]).steps == [], "no clock is set at five past"


@pytest.mark.parametrize("seconds", [40.0, 700.0])
def test_a_clock_put_right_by_some_seconds_is_carried_on(seconds):
    true = START + np.arange(6000.0)
    made = mend_clocks([piece(local(true, START + 2000.0, -seconds), true)])
    np.testing.assert_allclose(made.pieces[0].time, true)
    assert f"{seconds:.0f} s" in made.warnings[0]


def test_rows_that_come_late_are_no_setting_of_the_clock():
    true = START + np.arange(900.0)
    rows = np.r_[0:200, 300:500, 200:300, 500:900]
    made = mend_clocks([piece(true, true, rows=rows)])
    assert made.steps == []
    np.testing.assert_array_equal(join([piece(true, true, rows=rows)])[0], true)


def test_a_block_written_twice_is_no_setting_of_the_clock():
    true = START + np.arange(900.0)
    rows = np.r_[0:400, 300:900]
    assert mend_clocks([piece(true, true, rows=rows)]).steps == []
    time, _, steps, _ = join([piece(true, true, rows=rows)])
    np.testing.assert_array_equal(time, true)
    assert ("merged duplicate stamps", 100) in {(s.name, s.samples) for s in steps}


def test_a_clock_set_back_between_two_files_goes_on_through_those_that_follow():
    true = START + 5.0 * np.arange(4320)
    stamps = local(true, START + 7200.0, -3600.0)
    parts = [slice(0, 1440), slice(1440, 2880), slice(2880, 4320)]
    pieces = [piece(stamps, true, f"{i}.csv", rows) for i, rows in enumerate(parts)]
    made = mend_clocks(pieces)
    np.testing.assert_allclose(np.concatenate([p.time for p in made.pieces]), true)
    assert len(made.warnings) == 1
    assert made.warnings[0].startswith("1.csv: the clock was set back by an hour")


def test_a_setting_within_a_file_goes_on_through_the_next():
    true = START + 5.0 * np.arange(4320)
    stamps = local(true, START + 5000.0, -3600.0)
    parts = (slice(0, 2000), slice(2000, None))
    pieces = [piece(stamps, true, f"{i}.csv", rows) for i, rows in enumerate(parts)]
    made = mend_clocks(pieces)
    np.testing.assert_allclose(np.concatenate([p.time for p in made.pieces]), true)


def test_where_the_bit_does_not_go_on_the_file_is_still_refused():
    true = START + np.arange(6000.0)
    jump = np.where(true < START + 3000.0, 2000.0, 900.0) + 0.01 * (true - START)
    other = piece(local(true, START + 3000.0, -1000.0), true, bit_depth=jump)
    assert mend_clocks([other]).steps == []
    with pytest.raises(LogError, match="come twice, not alike"):
        join([other])


def test_two_recorders_of_one_hour_are_two_recorders():
    true = START + np.arange(7200.0)
    one = piece(true[:5000], true[:5000], "a.csv")
    other = piece(true[2000:], true[2000:], "b.csv", hookload=signals(true)["hookload"][2000:] + 3e4)
    assert mend_clocks([one, other]).steps == []


@pytest.mark.parametrize(("shift", "words"), [(10800.0, "3 h ahead of"), (-19800.0, "5.5 h behind")])
def test_a_file_with_another_clock_is_found_by_its_bit_depth(shift, words):
    true = START + 5.0 * np.arange(4320)
    one = piece(true, true, "a.csv")
    other = piece(true[500:3500] + shift, true[500:3500], "b.csv", drop=("hookload",), torque=np.zeros(3000))
    said = find_offsets([one, other])
    assert len(said) == 1
    assert words in said[0]
    zone = "+03:00" if shift > 0 else "-05:30"
    assert f'"b.csv" = "{zone}"' in said[0]
    assert "b.csv\" =" not in find_offsets([one, other], "Europe/Oslo")[0]
    right = piece(true[500:3500], true[500:3500], "b.csv", drop=("hookload",), torque=np.zeros(3000))
    assert find_offsets([one, right]) == []


def test_files_that_follow_one_another_have_one_clock():
    true = START + 5.0 * np.arange(12_000)
    pieces = [piece(true, true, f"{i}.csv", slice(1000 * i, 1000 * i + 1000)) for i in range(12)]
    assert find_offsets(pieces) == []


def test_a_bit_that_stands_tells_no_clock():
    true = START + 5.0 * np.arange(4320)
    still = {"bit_depth": np.full(4320, 2000.0)}
    other = piece(true + 7200.0, true, "b.csv", drop=("hookload",), **still)
    assert find_offsets([piece(true, true, "a.csv", **still), other]) == []
