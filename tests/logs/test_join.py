"""Files to one table: time order, one row a stamp, clocks that run backwards."""

from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import naive_logs
from forensics.errors import LogError
from forensics.logs.clock import wrap_midnight
from forensics.logs.join import Piece, check_direction, interval_of, join


def piece(time, **values):
    time = np.asarray(time, dtype=float)
    values = {name: np.asarray(data, dtype=float) for name, data in values.items()} or {
        "hookload": time * 1.0
    }
    return Piece(Path("log.csv"), time, 2 + np.arange(len(time)), values)


@given(
    st.lists(
        st.tuples(st.integers(0, 12), st.sampled_from([1.0, 2.0, float("nan")])), min_size=2, max_size=19
    ),
)
def test_joining_is_the_obvious_merge(rows):
    time = sorted(stamp for stamp, _ in rows)
    values = [value for _, value in rows]
    stamps, _, _, _ = joined = join([piece(time, hookload=values)])
    expected_time, expected = naive_logs.merge(time, {"hookload": values})
    assert stamps.tolist() == expected_time
    np.testing.assert_array_equal(joined[1]["hookload"], [row["hookload"] for row in expected])
    assert sum(step.samples for step in joined[2] if "duplicate" in step.name) == len(rows) - len(stamps)


def test_files_are_put_in_time_order_and_fill_each_other():
    late = piece([10, 11, 12], hookload=[3, 3, 3])
    early = piece([8, 9, 10], hookload=[1, 1, 1], torque=[5, 5, 5])
    time, values, steps, _ = join([late, early])
    assert time.tolist() == [8, 9, 10, 11, 12]
    assert values["hookload"].tolist() == [1, 1, 3, 3, 3]
    np.testing.assert_array_equal(values["torque"], [5, 5, 5, np.nan, np.nan])
    assert [(step.name, step.samples) for step in steps] == [("merged duplicate stamps", 1)]


def test_late_rows_are_sorted_and_counted():
    time, _, steps, _ = join([piece([0, 1, 3, 2, 4, 5])])
    assert time.tolist() == [0, 1, 2, 3, 4, 5]
    assert steps[0].samples == 1


def test_one_recording_in_two_unit_systems_is_no_contradiction():
    stamps = np.arange(100.0)
    values = 1e6 + 1e4 * np.sin(stamps)
    one, two = piece(stamps, hookload=values), piece(stamps, hookload=np.round(values / 4448.2) * 4448.2)
    assert join([one, two])[3] == []
    other = piece(stamps, hookload=values + 1e5)
    assert "different values" in join([one, other])[3][0]


def test_time_that_falls_throughout_is_refused():
    with pytest.raises(LogError, match=r"line 3.*runs backwards: 49 of 49"):
        check_direction(piece(np.arange(50.0)[::-1]))


def test_time_that_never_recovers_is_refused():
    with pytest.raises(LogError, match=r"line 52.*does not recover in the 40 rows"):
        check_direction(piece([*range(1000, 1050), *range(40)]))


def test_a_block_written_late_is_sorted():
    time = [*range(0, 200), *range(300, 500), *range(200, 300), *range(500, 900)]
    assert check_direction(piece(time)) == 100


def test_a_clock_set_back_over_other_values_is_refused():
    time = np.r_[0:200, 100:400].astype(float)
    with pytest.raises(LogError, match=r"line 202.*100 stamps come twice"):
        check_direction(piece(time, hookload=np.arange(500.0)))
    assert check_direction(piece(time, hookload=time * 2.0)) == 99


def test_interval_is_the_usual_step():
    assert interval_of(np.array([0.0, 1.0, 2.0, 3.0, 600.0])) == 1.0
    assert np.isnan(interval_of(np.array([5.0])))


@given(st.lists(st.integers(0, 20000), min_size=1, max_size=40))
def test_midnights_are_counted_as_by_hand(steps):
    seconds = np.cumsum(steps) % 86400
    assert wrap_midnight(seconds.astype(float)).tolist() == naive_logs.wrap_midnight(seconds.tolist())
    np.testing.assert_array_equal(
        wrap_midnight(seconds.astype(float)), np.cumsum(steps) - (steps[0] // 86400) * 86400
    )


def test_a_late_row_across_midnight_belongs_to_the_day_before():
    clock = np.array([86398.0, 86399.0, 0.0, 86399.5, 1.0, 2.0])
    assert wrap_midnight(clock).tolist() == [86398.0, 86399.0, 86400.0, 86399.5, 86401.0, 86402.0]
