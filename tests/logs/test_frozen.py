"""Stopped sensors are told from values that stand still by right."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import naive_logs
from forensics.logs.frozen import find_frozen, is_lively, runs_of


def rig(n=1500, noise=2e3, seed=2):
    """Give a trip in: the bit goes down out of slips and stands in slips, where the block goes up."""
    rng = np.random.default_rng(seed)
    phase = np.arange(n) % 150
    slips = phase >= 100
    bit = 1000.0 + 0.28 * np.cumsum(~slips)
    block = np.where(slips, 30.0 * (phase - 100) / 50.0, 30.0 - 0.3 * phase)
    hook = np.where(slips, 3e5, 1.2e6) + noise * rng.standard_normal(n)
    torque = 1e4 + 200.0 * rng.standard_normal(n)
    return {"bit_depth": bit, "block_position": block, "hookload": hook, "torque": torque}


@given(st.lists(st.sampled_from([0.0, 1.0, 2.0, float("nan")]), max_size=40), st.integers(1, 5))
def test_runs_are_the_obvious_ones(values, shortest):
    assert runs_of(np.array(values), shortest) == naive_logs.runs_of(values, shortest)


@pytest.mark.parametrize("channel", ["hookload", "bit_depth", "block_position", "torque"])
def test_a_sound_log_has_no_frozen_sensor(channel):
    assert not find_frozen(channel, rig(), 1.0).any()


def test_hookload_that_stops_while_the_bit_moves_is_frozen():
    values = rig()
    values["hookload"][320:350] = values["hookload"][320]
    assert np.flatnonzero(find_frozen("hookload", values, 1.0)).tolist() == list(range(320, 350))


def test_hookload_steady_in_slips_is_legal():
    values = rig()
    values["hookload"][405:445] = 3e5
    assert not find_frozen("hookload", values, 1.0).any()


def test_a_log_without_noise_may_stand_still_above_slips():
    values = rig(noise=0.0)
    assert not is_lively(values["hookload"])
    values["bit_depth"][:] = 1500.0
    assert not find_frozen("hookload", values, 1.0).any()


def test_hookload_above_slips_never_repeats_in_a_noisy_log():
    values = rig()
    values["bit_depth"][300:400] = values["bit_depth"][300]
    values["hookload"][310:330] = 1.2e6
    assert find_frozen("hookload", values, 1.0).sum() == 20


def test_zero_torque_is_a_reading():
    values = rig()
    values["torque"][200:1000] = 0.0
    assert not find_frozen("torque", values, 1.0).any()
    values["torque"][200:1000] = 7.2e3
    assert find_frozen("torque", values, 1.0).sum() == 800


def test_block_that_stops_while_the_bit_goes_on_is_frozen():
    values = rig()
    values["block_position"][300:1000] = 12.0
    assert find_frozen("block_position", values, 1.0).sum() >= 700


def test_bit_that_stands_while_the_block_carries_it_up_and_down_is_frozen():
    values = rig(n=3000)
    values["bit_depth"][300:2700] = values["bit_depth"][300]
    assert find_frozen("bit_depth", values, 1.0).sum() >= 2400


@pytest.mark.parametrize("n", [0, 1, 5])
def test_too_short_a_log_says_nothing(n):
    values = {name: data[:n] for name, data in rig().items()}
    for channel in values:
        assert not find_frozen(channel, values, 1.0).any()
