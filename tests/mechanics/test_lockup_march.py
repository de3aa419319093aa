"""The replay's helical march against closed-form lockup, at several constant inclinations."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest

from forensics.case import Case, FluidSettings, LogSettings
from forensics.mechanics.kernels_judge import stand_at
from forensics.mechanics.kernels_memory import rise
from forensics.mechanics.lockup import HelicalRun, load_along, lockup_distance
from forensics.replay.model import build_model
from forensics.replay.room import fresh
from tests.wells import DRILL_PIPE, one_pipe_well

HERE = Path()
CASE = Case(HERE, "w", "w", LogSettings(()), HERE, HERE, HERE, FluidSettings(1200.0))
FACTOR, DEPTH = 0.3, 700.0


@pytest.mark.parametrize("degrees", [30.0, 60.0, 80.0, 90.0])
@pytest.mark.parametrize("bit_load", [1.2e5, 2.4e5])
def test_helical_march_is_the_closed_form(degrees, bit_load):
    angle = math.radians(degrees)
    model = build_model(one_pipe_well(angle, DEPTH), CASE, DEPTH)
    setting = model.setting(FACTOR, FACTOR)
    memory, _ = fresh(model)
    memory.state[:] = 2
    place = stand_at(setting.hole, setting.pipe, DEPTH, 1.0, np.zeros(3))
    rise(setting, memory, place, 1.0, -bit_load, True)
    gap = (0.2159 - 0.168) / 2
    run = HelicalRun(DRILL_PIPE.stiffness, gap, float(model.pipe.weight[0]), FACTOR, angle)
    reach = min(DEPTH, 0.9 * lockup_distance(bit_load, run))
    x = model.pipe.x[(model.pipe.x <= reach)]
    closed = load_along(x, bit_load, run)
    # stations of ten metres follow a load that grows as a tangent to a per cent short of lockup
    assert reach > 400
    helical = closed > 0
    np.testing.assert_allclose(-memory.work[: len(x)][helical], closed[helical], rtol=0.01, atol=200.0)
