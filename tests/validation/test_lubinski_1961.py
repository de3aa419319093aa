"""Drill pipe turning in dog-legs: Lubinski 1961, as API RP 7G has it (formulas from memory, high)."""

from __future__ import annotations

import pytest

from field import DEG_PER_100FT, INCH, LBF, PSI
from forensics.mechanics.fatigue import HALF_JOINT, dogleg_for_side_force, permissible_dogleg
from forensics.mechanics.pipe import Tube
from forensics.mechanics.tool_joint import bending_factor

PIPE = Tube(4.5 * INCH, 3.826 * INCH)


@pytest.mark.parametrize(
    ("pull", "degrees"), [(50e3, 7.242254), (100e3, 4.836800), (150e3, 3.575569), (200e3, 2.693578)]
)
def test_p_91_permissible_dogleg(pull, degrees):
    # 4.5 x 3.826 in E-75 of 30e6 psi, half joint 180 in
    found = float(permissible_dogleg(PIPE, pull * LBF, 30e6 * PSI)) / DEG_PER_100FT
    assert found == pytest.approx(degrees, rel=2e-7)
    # the same by the bending factor: curvature at the joint is what the stress allows
    allowed = found * float(bending_factor(pull * LBF, 30e6 * PSI * PIPE.inertia, HALF_JOINT))
    stress = allowed * DEG_PER_100FT * 30e6 * PSI * PIPE.outer_diameter / 2
    assert 10000 * PSI < stress < 19500 * PSI


def test_t_15_side_force_on_a_joint():
    # 108000 F / (pi L T) with L in inches: 2,000 lbf at 200,000 lbf, half joint 180 in
    found = float(dogleg_for_side_force(2000 * LBF, 200e3 * LBF)) / DEG_PER_100FT
    assert pytest.approx(180 * INCH) == HALF_JOINT
    assert found == pytest.approx(1.9098593, rel=1e-7)
