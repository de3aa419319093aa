"""What the kernels are told of each row."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.logs.table import TimeLog
from forensics.replay.samples import _bit_turns, _calm, _share


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
