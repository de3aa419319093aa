"""What the kernels are told of each row."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.logs.table import TimeLog
from forensics.replay.ready import block_zero
from forensics.replay.samples import _being_set, _bit_turns, _calm, _share


def log_with(**channels) -> TimeLog:
    time = np.arange(5.0)
    values = {"bit_depth": time, "hookload": time, **channels}
    return TimeLog(time, values, time, np.ones(5, dtype=bool), np.zeros(5, dtype=np.int8), 1.0)


def test_a_lost_rotary_speed_is_no_standstill():
    model = SimpleNamespace(pipe=SimpleNamespace(radius=np.array([0.07])))
    height = np.linspace(10.0, 9.0, 5)
    whole = _share(log_with(rpm=np.full(5, 100.0)), height, model)
    gapped = _share(log_with(rpm=np.array([100.0, 100.0, np.nan, 100.0, 100.0])), height, model)
    assert np.allclose(gapped, whole)
    assert 0.0 < whole[2] < 0.5


@pytest.mark.parametrize(
    ("channels", "shown"),
    [
        ({"flow_in": np.array([0.0, 0.4, 0.6, 1.0, np.nan])}, [False, False, True, True, False]),
        ({"standpipe_pressure": np.ones(5)}, [False, True, True, True, False]),
        ({"flow_in": np.full(5, np.nan)}, [True] * 5),
        ({}, [True] * 5),
    ],
)
def test_a_bit_turns_with_half_the_usual_flow_or_while_the_pumps_show(channels, shown):
    rig = SimpleNamespace(pumping=np.array([False, True, True, True, False]), usual_flow=1.0)
    assert _bit_turns(log_with(**channels), rig).tolist() == shown


def test_a_lone_block_reading_is_no_rush_up_and_down():
    model = SimpleNamespace(pipe=SimpleNamespace(radius=np.array([0.07])))
    height = np.linspace(10.0, 9.0, 5)
    off = np.where(np.arange(5) == 2, -10.0, height)
    share = _share(log_with(rpm=np.full(5, 100.0)), _calm(off), model)
    assert np.abs(share).max() < 0.5
    assert np.array_equal(_calm(height), height)


def being_set(hookload, direction=0):
    """Rows held before slips, which are seen from row 20 on, three rows being the most."""
    n = len(hookload)
    rig = SimpleNamespace(
        hookload=np.array(hookload), direction=np.full(n, direction), noise={"hookload": 1e3}
    )
    return np.flatnonzero(_being_set(rig, np.arange(n) >= 20, 3)).tolist()


def test_what_slips_take_off_the_hook_before_they_are_seen_is_held():
    falling = [900e3] * 18 + [600e3, 450e3] + [400e3] * 5
    assert being_set(falling) == [18, 19]
    assert being_set([900e3] * 20 + [400e3] * 5) == []


def test_a_hookload_lowered_by_the_block_is_no_slips():
    falling = [900e3] * 18 + [600e3, 450e3] + [400e3] * 5
    assert being_set(falling, direction=1) == []


def test_heights_made_up_from_depth_put_no_pipe_above_the_rotary():
    slips = np.zeros(4, dtype=bool)
    of_a_block = SimpleNamespace(block=np.array([2.0, 10.0, 30.0, np.nan]), slips=slips)
    of_a_trip = SimpleNamespace(block=np.array([2.0, 100.0, 900.0, np.nan]), slips=slips)
    assert block_zero(of_a_block) == pytest.approx(2.0, abs=0.3)
    assert block_zero(of_a_trip) == np.inf
