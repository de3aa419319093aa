"""Stresses in a thick tube after Lame, and in a curved hole; computed, the constant from memory."""

from __future__ import annotations

import pytest

from field import DEG_PER_100FT, INCH, LBF, PSI
from forensics.mechanics import pipe
from forensics.mechanics.pipe import Tube
from forensics.mechanics.stress import PipeLoads, combined_stress

TUBING = Tube(2.875 * INCH, 2.441 * INCH)


@pytest.mark.parametrize(("pull", "equivalent"), [(0.0, 67212.707), (50000.0, 62077.993)])
def test_p_88_von_mises_at_the_bore(pull, equivalent):
    radial, hoop = pipe.bore_stresses(TUBING, 10000 * PSI, 0.0)
    assert radial / PSI == pytest.approx(-10000)
    assert hoop / PSI == pytest.approx(61652.441, rel=1e-7)
    stress = pipe.von_mises(pull * LBF / TUBING.area, hoop, radial)
    assert float(stress) / PSI == pytest.approx(equivalent, rel=1e-7)


def test_p_89_bending_stress_per_inch_and_degree():
    # handbook constant 218 (from memory, high); 218.1662 computed
    stress = float(pipe.bending_stress(INCH, DEG_PER_100FT, 30e6 * PSI)) / PSI
    assert stress == pytest.approx(218.1662, rel=1e-6)
    assert stress == pytest.approx(218, rel=1e-3)


def test_p_90_bending_stress_of_drill_pipe():
    stress = pipe.bending_stress(5 * INCH, 10 * DEG_PER_100FT, 30e6 * PSI)
    assert float(stress) / PSI == pytest.approx(10908.308, rel=1e-7)


@pytest.mark.parametrize(("pull", "equivalent"), [(0.0, 67212.707), (50000.0, 62077.993)])
def test_p_88_by_the_combined_stress_of_effective_loads(pull, equivalent):
    # the row's axial force is the steel's own; the effective one lacks the pressure on the bore
    inside = 10000 * PSI
    effective = pull * LBF - inside * TUBING.bore_area
    stress = combined_stress(TUBING, PipeLoads(effective, inside=inside))
    assert float(stress) / PSI == pytest.approx(equivalent, rel=1e-7)
