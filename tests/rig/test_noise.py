"""Noise, resolution and windows, each against a plain value."""

import numpy as np
import pytest

from forensics.rig import noise

RNG = np.random.default_rng(7)


def test_noise_of_white_noise_on_a_slope_and_steps():
    x = 3.0 * RNG.standard_normal(5000) + np.linspace(0, 5000, 5000) + 400.0 * (np.arange(5000) > 2500)
    assert noise.short_noise(x) == pytest.approx(3.0, rel=0.1)


def test_noise_is_never_below_rounding():
    x = np.round(np.linspace(0, 50, 20000) ** 1.1 + 2.0 * (np.arange(20000) > 9000), 1)
    assert noise.resolution(x) == pytest.approx(0.1)
    assert noise.short_noise(x) == pytest.approx(0.1 / 12**0.5)


def test_a_channel_that_rests_at_zero_is_judged_by_its_moving_rows():
    x = np.zeros(10000)
    x[7000:8000] = 90.0 + 2.0 * RNG.standard_normal(1000)
    assert noise.short_noise(x) == pytest.approx(2.0, rel=0.2)


def test_a_channel_that_only_steps_has_no_noise():
    x = np.where(np.arange(2000) % 20 < 10, 0.03, 0.0)
    assert noise.short_noise(x) == 0.0


def test_speeding_up_is_no_noise_of_a_block_at_rest():
    speed = np.where(np.arange(4000) % 200 < 60, RNG.uniform(-3, 3, 4000), 0.0)
    x = np.cumsum(speed) + 0.004 * RNG.standard_normal(4000)
    assert 0.004 < noise.short_noise(x, at_rest=True) < 0.008


def test_a_sensor_slower_than_the_log_keeps_its_noise():
    x = np.repeat(2.0 * RNG.standard_normal(1000), 3)
    assert noise.short_noise(x) == pytest.approx(2.0, rel=0.2)


@pytest.mark.parametrize("x", [[], [1.0], [1.0, 2.0], [np.nan] * 5, [4.0] * 50])
def test_noise_of_next_to_nothing_is_zero(x):
    assert noise.short_noise(np.array(x, dtype=float)) == 0.0


def test_rounding_left_by_a_change_of_unit_is_no_noise():
    x = np.repeat(np.arange(100.0), 3) * 0.3048
    x[1::2] += 1e-12
    assert noise.short_noise(x) > 1e-3 or noise.short_noise(x) == 0.0


@pytest.mark.parametrize(("seconds", "interval", "count"), [(15, 1, 15), (15, 2, 9), (15, 5, 3), (15, 30, 3)])
def test_windows_hold_three_samples_at_least(seconds, interval, count):
    assert noise.samples_in(seconds, interval) == count


def test_fill_bridges_gaps_and_holds_ends():
    out = noise.fill(np.array([np.nan, 1.0, np.nan, 3.0, np.nan]))
    np.testing.assert_allclose(out, [1, 1, 2, 3, 3])


def test_rate_of_a_straight_line_is_its_slope_even_where_stamps_are_uneven():
    time = np.cumsum(RNG.uniform(0.5, 3.0, 400))
    np.testing.assert_allclose(noise.rate(0.25 * time, time, 15.0), 0.25)


def test_rate_of_one_row_is_zero():
    assert noise.rate(np.array([5.0]), np.array([0.0]), 15.0).tolist() == [0.0]


def test_runs_and_rows_are_inverse():
    mask = RNG.random(300) > 0.4
    np.testing.assert_array_equal(noise.rows_of(noise.runs_of(mask), 300), mask)


def test_span_in_matches_a_plain_loop():
    mask, x = RNG.random(300) > 0.3, RNG.random(300)
    runs = noise.runs_of(mask)
    plain = [np.ptp(x[a:b]) for a, b in zip(runs.start, runs.stop, strict=True)]
    np.testing.assert_allclose(noise.span_in(x, runs), plain)


def test_hold_keeps_the_last_word():
    votes = np.array([0, 2, 0, -1, 0, 0], dtype=np.int8)
    assert noise.hold(votes, initial=-1).tolist() == [-1, 2, 2, -1, -1, -1]


def test_travel_since_starts_anew_in_each_stretch():
    mask = np.array([False, True, True, False, True, True])
    x = np.array([0.0, 1.0, 3.0, 9.0, 9.0, 7.0])
    assert noise.travel_since(mask, x).tolist() == [0, 0, 2, 0, 0, 2]


def test_despeckle_turns_lone_rows_over():
    mask = np.array([0, 0, 0, 1, 0, 0, 0, 1, 1, 1, 1], dtype=bool)
    assert noise.despeckle(mask, 3).tolist() == [False] * 7 + [True] * 4
