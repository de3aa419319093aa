"""Drill pipe turning in dog-legs: Lubinski 1961, as API RP 7G has it (formulas from memory, high)."""

from __future__ import annotations

import pytest

from field import DEG_PER_100FT, INCH, LBF, PSI
from forensics.mechanics.fatigue import HALF_JOINT, permissible_dogleg
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
    assert pytest.approx(180 * INCH) == HALF_JOINT
