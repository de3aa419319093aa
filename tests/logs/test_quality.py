"""What is set aside, by what reason, and what is left alone."""

import numpy as np
import pytest

from forensics.logs.quality import clean
from forensics.logs.slow import fill_between
from forensics.logs.stray import mend_stamps
from forensics.logs.table import Reason

N = 600


def log(**channels):
    """Give a quiet log with channels of one's own."""
    rng = np.random.default_rng(3)
    time = np.arange(float(N))
    values = {
        "hookload": 1.2e6 + 2e3 * rng.standard_normal(N),
        "bit_depth": 2000.0 + 0.1 * time,
        "rpm": np.full(N, 80.0),
        "torque": 1e4 + 300.0 * rng.standard_normal(N),
    }
    return time, {**values, **channels}


def counts(work):
    return {(step.name, step.channel): step.samples for step in work.steps}


def test_a_sound_log_is_left_as_it_is():
    time, values = log()
    work = clean(time, values, 1.0)
    assert work.steps == []
    assert work.warnings == []
    for name, data in values.items():
        np.testing.assert_array_equal(work.values[name], data)


def test_impossible_values_are_out_of_range():
    time, values = log()
    values["torque"][10:13] = -1.3e6
    values["rpm"][5] = -895.0
    values["hookload"][20] = -5e6
    work = clean(time, values, 1.0)
    assert counts(work) == {("out of range", c): n for c, n in (("torque", 3), ("rpm", 1), ("hookload", 1))}
    assert work.cause["hookload"][20] == Reason.OUT_OF_RANGE
    assert np.isnan(work.values["torque"][10:13]).all()
    assert values["rpm"][5] == -895.0


def test_negative_depths_while_handling_pipe_are_kept():
    time, values = log(bit_depth=np.linspace(-45.5, 60.0, N))
    work = clean(time, values, 1.0)
    assert np.isfinite(work.values["bit_depth"]).all()


def test_a_channel_with_no_believable_value_is_left_out():
    time, values = log(mud_density=np.full(N, 11.2e3))
    work = clean(time, values, 1.0)
    assert "mud_density" not in work.values
    assert any("mud density left out" in warning for warning in work.warnings)


@pytest.mark.parametrize("channel", ["block_position", "slips", "pit_volume", "downhole_wob", "hole_depth"])
def test_zero_throughout_means_nobody_measured(channel):
    time, values = log(**{channel: np.zeros(N)})
    work = clean(time, values, 1.0)
    assert channel not in work.values
    assert counts(work)["all zero", channel] == N


def test_no_rotation_and_no_torque_are_readings():
    time, values = log(rpm=np.zeros(N), torque=np.zeros(N), wob=np.zeros(N), flow_in=np.zeros(N))
    work = clean(time, values, 1.0)
    assert {"rpm", "torque", "wob", "flow_in"} <= work.values.keys()


def test_zero_torque_while_the_string_turns_is_missing():
    time, values = log(torque=np.zeros(N))
    assert "torque" not in clean(time, values, 1.0).values


def test_torque_in_the_wrong_unit_is_left_out_and_said_so():
    time, values = log()
    values["torque"] = values["torque"] / 1e3
    work = clean(time, values, 1.0)
    assert "torque" not in work.values
    assert counts(work)["absurd unit", "torque"] == N
    assert any("check its unit" in warning for warning in work.warnings)


def test_spikes_give_their_reason():
    time, values = log()
    values["hookload"][50] = 2.9e6
    values["bit_depth"][70:75] = 0.0
    work = clean(time, values, 1.0)
    assert work.cause["hookload"][50] == Reason.SPIKE_HOOKLOAD
    assert (work.cause["bit_depth"][70:75] == Reason.SPIKE_DEPTH).all()


def test_a_brief_zero_hookload_is_no_value():
    time, values = log()
    values["hookload"][100:108] = 0.0
    work = clean(time, values, 1.0)
    assert (work.cause["hookload"][100:108] == Reason.NULL_HOOKLOAD).all()
    assert counts(work)["zero for no value", "hookload"] == 8


@pytest.mark.parametrize(("block_moves", "kept"), [(True, True), (False, False)])
def test_zeros_in_slips_of_a_tared_sensor_are_readings(block_moves, kept):
    time, values = log(bit_depth=np.full(N, 2000.0))
    values["hookload"][100:200] = 0.0
    values["block_position"] = np.interp(
        time, [0, 120, 180, N], [1.0, 1.0, 28.0 if block_moves else 1.2, 1.0]
    )
    assert np.isfinite(clean(time, values, 1.0).values["hookload"][100:200]).all() == kept


def test_gaps_are_counted_with_their_length():
    time, values = log()
    time[300:] += 600.0
    time[500:] += 60.0
    step = clean(time, values, 1.0).steps[-1]
    assert (step.name, step.samples) == ("gap", 2)
    assert "longest 601 s" in step.detail


def test_a_slow_depth_is_interpolated_and_a_slow_speed_repeated():
    time, values = log()
    values["bit_depth"][time % 5 != 0] = np.nan
    values["rpm"][time % 3 != 0] = np.nan
    work = clean(time, values, 1.0)
    np.testing.assert_allclose(work.values["bit_depth"][:596], 2000.0 + 0.1 * time[:596])
    assert (work.cause["bit_depth"][:596] == 0).all()
    assert (work.values["rpm"][:598] == 80.0).all()
    assert counts(work)["interpolated between readings", "bit_depth"] == 476


def test_an_outage_is_not_filled():
    time, values = log()
    values["rpm"][100:500] = np.nan
    assert np.isnan(clean(time, values, 1.0).values["rpm"][100:500]).all()
    assert not fill_between(time, values["rpm"], 1.0, hold=True)[1].any()


def test_a_date_that_changes_late_is_mended():
    time = 86400.0 * 5 - 100.0 + np.arange(200.0)
    late = time.copy()
    late[100:130] -= 86400.0
    mended, steps = mend_stamps(late, "log.csv")
    np.testing.assert_array_equal(mended, time)
    assert steps[0].samples == 30


def test_a_lone_stamp_out_of_line_is_blanked_and_a_gap_is_not():
    time = np.arange(200.0)
    time[100:] += 5e5
    assert mend_stamps(time, "log.csv")[1] == []
    time[50] = 9e8
    mended, steps = mend_stamps(time, "log.csv")
    assert np.flatnonzero(np.isnan(mended)).tolist() == [50]
    assert steps[0].name == "stamp out of line"
