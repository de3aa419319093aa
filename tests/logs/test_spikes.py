"""Spikes go, real changes stay."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import naive_logs
from forensics.logs.spikes import find_jumps, find_spikes, median_of_five, rule_for

RULE = rule_for("hookload", 1.0)
COARSE = rule_for("hookload", 10.0)


def trip(n=1200, noise=2e3, seed=1):
    """Give a trip's hookload: string weight, slips for a while every 300 s, a tag, an overpull held."""
    rng = np.random.default_rng(seed)
    clean = np.full(n, 1.2e6)
    for start in range(200, n, 300):
        clean[start : start + 80] = 3.0e5
        clean[start + 80 : start + 84] = [7.0e5, 1.3e6, 1.28e6, 1.25e6]
    clean[100:112] += 2.5e5
    clean[400:405] -= 3.0e5
    return clean + noise * rng.standard_normal(n)


@given(st.lists(st.floats(-1e6, 1e6), min_size=1, max_size=40))
def test_running_median_is_the_obvious_one(values):
    assert median_of_five(np.array(values)).tolist() == naive_logs.median_of_five(values)


def test_nothing_is_taken_from_a_trip_with_slips_tags_and_overpull():
    assert not find_spikes(trip(), RULE).any()


@pytest.mark.parametrize("size", [-1.1e6, -2e5, 9e4, 2e6])
@pytest.mark.parametrize("length", [1, 2])
@pytest.mark.parametrize("place", [30, 250, 700])
def test_a_short_excursion_is_found_and_nothing_else(size, length, place):
    values = trip()
    values[place : place + length] += size
    assert np.flatnonzero(find_spikes(values, RULE)).tolist() == list(range(place, place + length))


def test_three_samples_are_no_spike():
    values = trip()
    values[30:33] += 4e5
    assert not find_spikes(values, RULE).any()


def test_coarse_samples_are_spikes_only_where_nothing_real_reaches():
    values = trip(noise=2e3)[::10]
    values[5] += 3e5
    assert not find_spikes(values, COARSE).any()
    values[5] = 1.5e4
    values[9] = 2.9e6
    assert np.flatnonzero(find_spikes(values, COARSE)).tolist() == [5, 9]


def test_missing_samples_are_passed_over():
    values = trip()
    values[[28, 29, 32, 33]] = np.nan
    values[30] += 5e5
    assert np.flatnonzero(find_spikes(values, RULE)).tolist() == [30]


@pytest.mark.parametrize("values", [[], [1.0], [np.nan] * 20, [5.0] * 50, [1.0, 2.0, 1.0]])
def test_degenerate_input_has_no_spikes(values):
    values = np.array(values, dtype=float)
    assert not find_spikes(values, RULE).any()
    assert not find_jumps(values, np.arange(len(values), dtype=float)).any()


def depth(n=600):
    return 2000.0 + 0.3 * np.arange(n), np.arange(n, dtype=float)


def test_a_depth_that_jumps_away_and_back_is_found():
    values, time = depth()
    values[100:140] = 0.2
    values[300] += 50.0
    found = np.flatnonzero(find_jumps(values, time))
    assert found.tolist() == [*range(100, 140), 300]


def test_a_change_of_reference_stays():
    values, time = depth()
    values[300:] += 40.0
    assert not find_jumps(values, time).any()


def test_a_bad_start_of_the_record_is_found():
    values, time = depth()
    values[:3] = 0.0
    assert np.flatnonzero(find_jumps(values, time)).tolist() == [0, 1, 2]


def test_steps_of_a_metre_at_a_tag_stay():
    values, time = depth()
    values[200:205] -= 1.0
    assert not find_jumps(values, time).any()


def test_a_long_gap_near_the_ends_is_no_jump():
    values, time = depth()
    for split in (5, 595):
        moved, later = values.copy(), time.copy()
        moved[split:] += 900.0
        later[split:] += 7200.0
        assert not find_jumps(moved, later).any()


def test_a_gap_allows_for_the_way_gone_in_it():
    values, time = depth()
    time[300:] += 600.0
    values[300:] += 250.0
    assert not find_jumps(values, time).any()
