"""Sinusoidal load of a straight inclined hole: Dawson and Paslay 1984 (the formula from memory, high).

Numbers were computed from the formula with E = 30e6 psi; the factor pair 2 and 2.828 was seen in Ghalambor
and Guo's course notes (2005, equations 24 and 25), the tubing case is from memory (medium).
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from field import DP5_CLEARANCE, DP5_EI, DP5_WEIGHT, EI_UNIT, FOOT, INCH, LB_PER_FT, LBF
from forensics.mechanics.critical import (
    Place,
    chen_lin_cheatham_1990,
    dawson_paslay_1984,
    mitchell_1997,
    wu_juvkam_wold_1993,
)
from forensics.mechanics.grid import wave_length

CASES = {
    "B-S8": (DP5_WEIGHT, 1.75, 90, (37990.52, 53726.7, 69462.9, 107453.4)),
    "B-S9": (DP5_WEIGHT, 1.75, 60, (35354.16, 49998.3, 64642.5, 99996.7)),
    "B-S10": (DP5_WEIGHT, 1.75, 30, (26863.35, 37990.5, 49117.7, 75981.0)),
    "B-S11": (DP5_WEIGHT, 0.9375, 60, (48302.98, 68310.7, 88318.5, 136621.5)),
    "B-S12": (19.5 * LB_PER_FT, 1.75, 90, (39874.70, 56391.3, 72908.0, 112782.7)),
}


@pytest.mark.parametrize("case", CASES)
def test_drill_pipe_with_all_helical_multiples(case):
    weight, gap, inclination, published = CASES[case]
    place = Place(DP5_EI, gap * INCH, weight, math.radians(inclination))
    criteria = (dawson_paslay_1984, chen_lin_cheatham_1990, wu_juvkam_wold_1993, mitchell_1997)
    loads = [float(criterion(place)) / LBF for criterion in criteria]
    np.testing.assert_allclose(loads, published, rtol=1e-6)


def test_b_s8_s9_in_newtons():
    place = Place(DP5_EI, DP5_CLEARANCE, DP5_WEIGHT, np.radians([90.0, 60.0]))
    np.testing.assert_allclose(dawson_paslay_1984(place) / 1e3, [168.990, 157.263], atol=6e-4)


def test_b_s14_metric_pipe():
    # 127 x 108.6 mm, 206.8 GPa, 29.02 kg/m, mud 1.20, steel 7.85, hole 215.9 mm
    inertia = math.pi / 64 * (0.127**4 - 0.1086**4)
    weight = 29.02 * 9.80665 * (1 - 1.20 / 7.85)
    assert inertia == pytest.approx(5.941888e-6, rel=1e-7)
    assert weight == pytest.approx(241.08493, rel=1e-7)
    place = Place(206.8e9 * inertia, (0.2159 - 0.127) / 2, weight, np.radians([90.0, 60.0]))
    np.testing.assert_allclose(dawson_paslay_1984(place) / 1e3, [163.27386, 151.94344], rtol=1e-7)


def test_b_s15_half_wave_of_the_sinusoid():
    # pi (EI r / (w sin I))^(1/4), computed; contact is averaged over twice that
    wave = wave_length(np.array([DP5_EI]), np.array([DP5_CLEARANCE]), np.array([DP5_WEIGHT]))
    assert wave[0] / 2 / FOOT == pytest.approx(39.301, abs=6e-4)


def test_b_s1_factors_in_course_notes():
    place = Place(1.0, 1.0, 1.0, math.pi / 2)
    assert dawson_paslay_1984(place) == pytest.approx(2)
    assert chen_lin_cheatham_1990(place) == pytest.approx(2.828, rel=2e-4)


def test_b_s17_s18_tubing_in_casing():
    # 2-7/8 in 6.5 lb/ft (2.441) in 7 in 32 lb/ft (6.094), 10 ppg, 60 deg, 30,000 lbf at the end
    ei = 30e6 * math.pi / 64 * (2.875**4 - 2.441**4) * EI_UNIT
    weight = (6.5 + (4.67978 - 6.491807) * 0.52) * LB_PER_FT
    place = Place(ei, (6.094 - 2.875) / 2 * INCH, weight, math.radians(60))
    local = float(dawson_paslay_1984(place))
    # published with rounded inputs, whose rounding is not known: 5e-4
    assert local / LBF == pytest.approx(6939.0, rel=5e-4)
    end, along = 30000 * LBF, weight * math.cos(math.radians(60))
    buckled = (end - local) / along / FOOT
    assert buckled == pytest.approx(8295, rel=5e-4)
    assert (end - float(chen_lin_cheatham_1990(place))) / along / FOOT == pytest.approx(7262.2, rel=1e-3)
    assert (end - float(mitchell_1997(place))) / along / FOOT == pytest.approx(3730.8, rel=1e-3)
