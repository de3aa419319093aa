"""Breakover: a peak planted after a long stand comes back, and where nothing sticks there is none."""

import numpy as np
import pytest

from forensics.rig.understand import understand_rig


def pull(stand, extra):
    """Start upward with `extra` static friction that lets go after a metre or so, then on at full drag."""
    usual = stand.drag
    stand.drag = usual + extra
    stand.go(4, -0.3)
    stand.drag = usual
    return stand.go(60, -0.3)


def breakovers(tools, stand, well, step=1):
    return understand_rig(tools.log(stand, step), well, tools.case()).breakover


@pytest.fixture
def tripped(tools, well):
    return tools.Stand(well, bit=2300.0, bottom=2600.0, height=2.0).trip(3, -0.3)


def test_a_planted_peak_comes_back_with_its_standing_time(tools, tripped, well):
    found = breakovers(tools, pull(tripped.go(600), 35e3), well)
    last = len(found) - 1
    # the slips before it count: the pipe stood in them
    assert found.still[last] == pytest.approx(700, abs=40)
    assert found.peak[last] - found.steady[last] == pytest.approx(35e3, abs=4e3)
    assert found.bit[last] == pytest.approx(tripped.bit + 64 * 0.3, abs=1.0)
    others = (found.peak - found.steady)[:-1]
    assert np.abs(others).max(initial=0.0) < 5e3


def test_turning_meanwhile_is_no_standing(tools, tripped, well):
    found = breakovers(tools, pull(tripped.go(600).go(60, rpm=60).go(30), 0.0), well)
    assert found.still[-1] < 60


def test_a_slow_log_shows_no_peak(tools, tripped, well):
    assert len(breakovers(tools, pull(tripped.go(600), 35e3), well, step=10)) == 0
