"""What loads do along a string: each element is what the single functions say of it."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from forensics.errors import CaseError
from forensics.mechanics import fatigue, helix
from forensics.mechanics.stress import PipeLoads, judge
from forensics.mechanics.toll import MomentLoads, toll, worst_by_component
from forensics.mechanics.tool_joint import bending_factor
from forensics.well.string import Component, String

COLLAR = Component("dc", "collar", 60.0, 0.1715, 0.0714, 1450.0)
PIPE = Component("dp", "drillpipe", 3e3, 0.127, 0.1086, 310.0, 0.168, yield_strength=931e6)
STRING = String((COLLAR, PIPE))
LOADS = MomentLoads(
    component=np.array([0, 1, 1, 1]),
    tension=np.array([-5e4, -2.5e5, -5e4, 6e5]),
    state=np.array([0, 2, 0, 0], dtype=np.int8),
    contact=np.full(4, 240.0),
    clearance=np.array([0.022, 0.024, 0.024, 0.024]),
    curvature=np.array([0.0, 0.0, 1e-3, 2e-3]),
    torque=np.array([5e3, 1e4, 1e4, 2e4]),
)


def test_helix_bends_as_lubinskis():
    found = toll(STRING, LOADS)
    stress = helix.bending_stress(2.5e5, 0.024, 0.127, PIPE.inertia)
    assert found.bending[1] == pytest.approx(stress)
    assert found.bending[0] == 0


def test_hole_bends_jointed_pipe_by_its_joints():
    found = toll(STRING, LOADS)
    for row, tension, curvature in ((2, -5e4, 1e-3), (3, 6e5, 2e-3)):
        factor = float(bending_factor(tension, PIPE.stiffness, fatigue.HALF_JOINT))
        plain = PIPE.youngs_modulus * curvature * 0.127 / 2
        assert found.bending[row] == pytest.approx(factor * plain)
        assert factor > 1


def test_strength_is_each_components_own():
    found = toll(STRING, LOADS)
    moment = found.bending[3] * 2 * PIPE.inertia / PIPE.od
    alone = judge(PIPE, PipeLoads(6e5, moment, 2e4))
    assert found.use[3] == pytest.approx(float(alone.use))
    assert found.tension_margin[3] == pytest.approx(float(alone.tension_margin))
    assert np.isnan(found.use[0])  # no yield given
    assert found.stress[0] > 0


def test_exposure_is_that_of_one_turn():
    found = toll(STRING, LOADS)
    grade = fatigue.exposure(found.bending[3], 6e5 / PIPE.area, 1.0, "S135")
    assert found.exposure[3] == pytest.approx(float(grade))
    assert found.exposure[0] == 0


def test_wear_is_for_pipe_only():
    new, used = toll(STRING, LOADS), toll(STRING, LOADS, "used")
    assert np.all(used.stress[1:] > new.stress[1:])
    assert used.stress[0] == new.stress[0]
    with pytest.raises(CaseError, match="pipe_class"):
        toll(STRING, LOADS, "old")


def test_support_and_pressure():
    tight = replace(LOADS, clearance=np.zeros(4))
    assert toll(STRING, tight).bending[1] == 0
    squeezed = toll(STRING, replace(LOADS, inside=4e7, outside=4e7))
    np.testing.assert_allclose(squeezed.stress, toll(STRING, LOADS).stress, rtol=1e-9)


def test_worst_by_component():
    found = toll(STRING, LOADS)
    assert worst_by_component(LOADS.component, found.use) == {1: (3, pytest.approx(found.use[3]))}
    assert worst_by_component(LOADS.component, np.full(4, np.nan)) == {}
