"""Helical buckling of tubing: Lubinski, Althouse and Logan, J. Pet. Technol., June 1962.

The worked example's totals (49.7, 165.2 and 115.5 in) were seen there; its pipe, casing and oil were seen in
a homework variant of it. Only the parts that this program computes (helical shortening, pitch, stress) come
from it here; elastic stretch, piston, ballooning and heat are written out in the test.
"""

from __future__ import annotations

import math

import pytest

from field import (
    DEG_PER_100FT,
    DP5_CLEARANCE,
    DP5_EI,
    DP5_INERTIA,
    DP5_OD,
    EI_UNIT,
    FOOT,
    FT_LBF,
    INCH,
    LB_PER_FT,
    LBF,
    PSI,
)
from forensics.mechanics import helix, pipe

E = 30e6 * PSI
TUBING = pipe.Tube(2.875 * INCH, 2.441 * INCH)
GAP = (6.094 - 2.875) / 2 * INCH
EI = E * TUBING.inertia
LENGTH = 10000 * FOOT
OIL = 141.5 / 161.5 * 62.43 / 1728  # 30 API oil [lb/in3], water at 62.43 lb/ft3


def slack_off() -> float:
    force = 20000 * LBF
    weight = 0.484307 * LBF / INCH
    return force * LENGTH / (E * TUBING.area) + under_weight(force, weight)


def under_weight(force: float, weight: float) -> float:
    """Shortening of the helix from a loaded end up to where the weight has taken the load off [m].

    The load falls evenly, and what a length shortens by goes with it: the mean is half of that at the end.
    """
    return float(helix.shortening(force, EI, GAP)) / 2 * force / weight


def test_b_l1_slack_off():
    # 44.14946 + 5.53401 in computed; 49.7 in published
    assert slack_off() / INCH == pytest.approx(49.68347, rel=1e-5)
    assert slack_off() / INCH == pytest.approx(49.7, abs=0.05)


def test_b_l4_section_numbers():
    assert TUBING.area / INCH**2 == pytest.approx(1.812027, rel=1e-6)
    assert TUBING.bore_area / INCH**2 == pytest.approx(4.679780, rel=1e-6)
    assert TUBING.outside_area / INCH**2 == pytest.approx(6.491807, rel=1e-6)
    assert TUBING.inertia / INCH**4 == pytest.approx(1.610904, rel=1e-6)
    assert pytest.approx(1.6095 * INCH) == GAP
    force = 66313.40 * LBF
    assert force / (0.640052 * LBF / INCH) / FOOT == pytest.approx(8633.85, rel=1e-6)  # neutral point
    assert helix.pitch(force, EI) / INCH == pytest.approx(239.878, rel=1e-5)
    stress = helix.bending_stress(force, GAP, TUBING.outer_diameter, TUBING.inertia)
    assert stress / PSI == pytest.approx(47621.2, rel=1e-5)


def test_b_l2_l3_pressures_and_temperature():
    # packer bore 3.25 in; 15 ppg inside with 5,000 psi more, oil outside with 1,000 psi more, 20 F cooler
    packer, inside, outside = math.pi / 4 * 3.25**2, 4.679780, 6.491807
    rise_in, rise_out = 8993.642, 1000.0  # psi at the packer, computed
    ratio = 1.387203  # square of outer over inner diameter
    piston = -120000 / (30e6 * 1.812027) * ((packer - inside) * rise_in - (packer - outside) * rise_out)
    # the pressures' force on the packer bends the tubing: compression Ap (dPi - dPo) in 0.640052 lb/in
    force, weight = packer * (rise_in - rise_out) * LBF, 0.640052 * LBF / INCH
    bent = -under_weight(force, weight) / INCH
    rise_density = 15 / 231 - OIL
    swell = -(0.3 / 30e6) / (ratio - 1) * (rise_density * 120000**2 + 2 * (5000.0 - ratio * 1000.0) * 120000)
    cooling = 6.9e-6 * -20 * 120000
    assert force / LBF == pytest.approx(66313.40, rel=1e-5)
    assert bent == pytest.approx(-46.03502, rel=2e-5)
    total = piston + bent + swell + cooling
    assert total == pytest.approx(-165.2, abs=0.05)  # published
    assert total + slack_off() / INCH == pytest.approx(-115.5, abs=0.05)  # published


@pytest.mark.parametrize(
    ("force", "contact", "turn", "stress", "bend"),
    [
        pytest.param(80000, 78.490964, 54.166208, 12264.213, 11.243002, id="B-H1"),
        pytest.param(40000, 19.622741, 76.602586, 6132.107, 5.621501, id="B-H2"),
    ],
)
def test_drill_pipe_helix(force, contact, turn, stress, bend):
    # computed from the published formulas
    load = force * LBF
    assert helix.contact_force(load, DP5_EI, DP5_CLEARANCE) / LB_PER_FT == pytest.approx(contact, rel=1e-7)
    assert helix.pitch(load, DP5_EI) / FOOT == pytest.approx(turn, rel=1e-7)
    assert helix.bending_stress(load, DP5_CLEARANCE, DP5_OD, DP5_INERTIA) / PSI == pytest.approx(
        stress, rel=1e-6
    )
    assert helix.curvature(load, DP5_EI, DP5_CLEARANCE) / DEG_PER_100FT == pytest.approx(bend, rel=1e-6)


def test_b_h1_moment_and_shortening():
    load = 80000 * LBF
    assert helix.bending_moment(load, DP5_CLEARANCE) / FT_LBF == pytest.approx(70000 / 12, rel=1e-9)
    assert helix.shortening(load, DP5_EI, DP5_CLEARANCE) == pytest.approx(1.4308249e-4, rel=1e-7)


def test_b_h3_tubing_helix():
    load, ei = 30000 * LBF, 4.8327111e7 * EI_UNIT
    assert helix.contact_force(load, ei, GAP) / LB_PER_FT == pytest.approx(89.921576, rel=1e-7)
    assert helix.pitch(load, ei) / FOOT == pytest.approx(29.719973, rel=1e-7)
    assert helix.curvature(load, ei, GAP) / DEG_PER_100FT == pytest.approx(34.347512, rel=1e-7)
    stress = helix.bending_stress(load, GAP, 2.875 * INCH, TUBING.inertia)
    assert stress / PSI == pytest.approx(21543.711, rel=1e-6)
