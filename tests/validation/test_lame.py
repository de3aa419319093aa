"""Stresses in a thick tube after Lame, and in a curved hole; computed, the constant from memory."""

from __future__ import annotations

import numpy as np
import pytest

from field import DEG_PER_100FT, INCH, LBF, PSI
from forensics.mechanics import pipe
from forensics.mechanics.pipe import Tube
from forensics.mechanics.stress import PipeLoads, combined_stress, lame
from forensics.mechanics.toll import MomentLoads, toll
from forensics.well.string import Component, String

TUBING = Tube(2.875 * INCH, 2.441 * INCH)


@pytest.mark.parametrize(("pull", "equivalent"), [(0.0, 67212.707), (50000.0, 62077.993)])
def test_p_88_von_mises_at_the_bore(pull, equivalent):
    radial, hoop = lame(TUBING, TUBING.inner_diameter, 10000 * PSI, 0.0)
    assert radial / PSI == pytest.approx(-10000)
    assert hoop / PSI == pytest.approx(61652.441, rel=1e-7)
    stress = pipe.von_mises(pull * LBF / TUBING.area, hoop, radial)
    assert float(stress) / PSI == pytest.approx(equivalent, rel=1e-7)


def bent_by_the_hole(inches: float, degrees: float) -> float:
    """Bending stress [psi] of an unloaded solid bar of 30e6 psi in a hole that turns so much in 100 ft."""
    bar = Component("bar", "collar", 100.0, inches * INCH, 0.0, 1.0, youngs_modulus=30e6 * PSI)
    nothing, some = np.zeros(1), np.array([degrees * DEG_PER_100FT])
    loads = MomentLoads(np.zeros(1, int), nothing, np.zeros(1, np.int8), nothing, np.full(1, 0.05), some)
    return float(toll(String((bar,)), loads).bending[0]) / PSI


def test_p_89_bending_stress_per_inch_and_degree():
    # handbook constant 218 (from memory, high); 218.1662 computed
    assert bent_by_the_hole(1, 1) == pytest.approx(218.1662, rel=1e-6)
    assert bent_by_the_hole(1, 1) == pytest.approx(218, rel=1e-3)


def test_p_90_bending_stress_of_drill_pipe():
    assert bent_by_the_hole(5, 10) == pytest.approx(10908.308, rel=1e-7)


@pytest.mark.parametrize(("pull", "equivalent"), [(0.0, 67212.707), (50000.0, 62077.993)])
def test_p_88_by_the_combined_stress_of_effective_loads(pull, equivalent):
    # the row's axial force is the steel's own; the effective one lacks the pressure on the bore
    inside = 10000 * PSI
    effective = pull * LBF - inside * TUBING.bore_area
    stress = combined_stress(TUBING, PipeLoads(effective, inside=inside))
    assert float(stress) / PSI == pytest.approx(equivalent, rel=1e-7)
