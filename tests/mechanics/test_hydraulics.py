"""Jets and pressures: balances, and what a closed end does to the effective tension."""

from __future__ import annotations

import math

import numpy as np
import pytest

from forensics.mechanics.hydraulics import DISCHARGE, bit_pressure_drop, jet_thrust
from forensics.mechanics.kernels_replay import TURN
from forensics.mechanics.pipe import Tube
from forensics.mechanics.stress import PipeLoads, true_axial
from forensics.replay.model import build_model
from forensics.replay.room import fresh, go
from tests.replay.test_memory import NEVER, case_for, rows
from tests.wells import one_pipe_well

AREA = 0.3889 * 0.0254**2


def test_the_drop_is_bernoullis_with_loss_and_the_thrust_is_momentum():
    flow, density = 0.025, 1440.0
    speed = flow / AREA
    thrust = jet_thrust(flow, density, AREA)
    assert thrust == pytest.approx(density * flow * speed)
    assert bit_pressure_drop(thrust, AREA) == pytest.approx(0.5 * density * speed**2 / DISCHARGE**2)
    assert jet_thrust(0.0, density, AREA) == 0


def test_a_closed_end_has_no_effective_tension_whatever_the_pressures():
    """Pressure on the end pulls the steel with p_i A_i and pushes it with p_o A_o."""
    tube, inside, outside = Tube(0.127, 0.1086), 30e6, 18e6
    pulled = inside * tube.bore_area - outside * tube.outside_area
    assert true_axial(tube, PipeLoads(0.0, inside=inside, outside=outside)) == pytest.approx(pulled)


@pytest.mark.parametrize("load", [0.0, 60e3])
def test_jets_press_the_string_and_not_the_bottom(load):
    """Turning without friction: the hook carries less by the thrust, and the bit load is as without."""
    well = one_pipe_well(math.radians(30.0), 1000.0)
    model = build_model(well, case_for(), 1000.0)
    hangs = float(model.string_weight("rotating", 1000.0, 0.0, 0.0)[0])
    ends = np.zeros((2, 3))
    ends[:, 2] = 8e3
    turn = {"mode": np.full(2, TURN, dtype=np.int8), "bit": np.full(2, 1000.0), "drilling": ends[:, 0] == 0}
    carried = fresh(model)
    found = go(
        model.setting(0.2, 0.2), rows([hangs - load - 8e3] * 2, [0, 0], ends=ends, **turn), NEVER, carried
    )
    assert found.bit_load == pytest.approx(load, abs=5.0)
    assert carried[0].tension[0] == pytest.approx(-load - 8e3, abs=5.0)
