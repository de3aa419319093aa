"""Sheave friction by the block's last travel."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from forensics.case import RigSettings
from forensics.rig.sheaves import TURN_OVER, direction_factor, hook_factor, play

RIG = RigSettings(lines=12, sheave_efficiency=0.985)
UP, STILL, DOWN = (direction_factor(way, RIG) for way in (-1, 0, 1))


def test_a_reversal_turns_over_with_travel_and_not_before_it():
    down = np.linspace(20.0, 10.0, 101)
    still = np.full(50, 10.0)
    up = 10.0 + np.linspace(0.0, 2.0 * TURN_OVER, 81)
    factor = hook_factor(np.concatenate([down, still, up]), RIG)
    assert factor[0] == STILL
    np.testing.assert_allclose(factor[100:150], DOWN)
    # half the travel later it stands in the middle, the whole travel later it has turned over
    assert factor[151 + 20] == pytest.approx(STILL, abs=0.002)
    np.testing.assert_allclose(factor[151 + 41 :], UP)


def test_a_reversal_between_two_slow_readings_is_turned_over_at_once():
    factor = hook_factor(np.array([20.0, 18.0, 16.0, 18.0, 20.0]), RIG)
    np.testing.assert_allclose(factor, [STILL, DOWN, DOWN, UP, UP])


def test_lost_heights_move_nothing():
    factor = hook_factor(np.array([20.0, 10.0, np.nan, np.nan, 10.0]), RIG)
    np.testing.assert_allclose(factor[1:], DOWN)


@given(arrays(float, st.integers(1, 60), elements=st.floats(-50, 50)))
def test_play_against_its_plain_rule(height):
    """A play: the follower is pushed along by whichever end it is pressed against."""
    follower, out = height[0], []
    half = 0.5 * TURN_OVER
    for here in height:
        follower = min(max(follower, here - half), here + half)
        out.append((follower - here) / half)
    np.testing.assert_allclose(play(height, TURN_OVER), out, atol=1e-9)


def test_without_lines_or_efficiency_the_reading_stands():
    assert hook_factor(np.zeros(3), RigSettings(lines=12)) == 1.0
