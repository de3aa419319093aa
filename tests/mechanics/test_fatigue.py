"""Fatigue: limits of the published formulas, and a ranking that doesn't pretend to be a life."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics.mechanics import fatigue
from forensics.mechanics.pipe import Tube

PSI = 4.4482216152605 / 0.0254**2
PIPE = Tube(0.1143, 0.0971804)


def test_compression_is_taken_as_no_tension():
    np.testing.assert_allclose(fatigue.permissible_bending([-1e8, 0.0]), 18000 * PSI, rtol=1e-9)
    assert fatigue.permissible_bending(0.0, "S135") == pytest.approx(20000 * PSI)


def test_tension_takes_it_away_and_beyond_the_range_nothing_is_left():
    for grade, top in (("E75", 67000), ("S135", 133400)):
        stands = fatigue.permissible_bending(np.linspace(0, top, 50) * PSI, grade)
        assert np.all(np.diff(stands[5:]) < 0)
        assert np.all(stands > 0)
        assert fatigue.permissible_bending((top + 1) * PSI, grade) == 0
    with pytest.raises(ValueError, match="grade came as 'X95'"):
        fatigue.permissible_bending(0.0, "X95")


def test_short_joints_or_little_tension_leave_the_holes_own_curvature():
    # tanh(u)/u is 1: bending stress E OD c / 2
    curvature = float(fatigue.permissible_dogleg(PIPE, 10.0, 206.8e9))
    stands = float(fatigue.permissible_bending(10.0 / PIPE.area))
    assert 206.8e9 * PIPE.outer_diameter * curvature / 2 == pytest.approx(stands, rel=1e-4)


@given(st.floats(1e6, 2e8), st.floats(0.0, 3e8), st.floats(1.0, 1e5))
def test_exposure_grows_with_everything(bending, mean, turns):
    base = float(fatigue.exposure(bending, mean, turns))
    assert fatigue.exposure(1.1 * bending, mean, turns) == pytest.approx(base * 1.1**4)
    assert fatigue.exposure(bending, mean, 2 * turns) == pytest.approx(2 * base)
    # the E75 formula grows at first, up to 22 MPa of tension, by less than a tenth
    assert fatigue.exposure(bending, mean + 1e8, turns) > base * 0.7


def test_s_n_line_at_its_own_points():
    # a million turns at a range of 10^((15.117 - 6)/4) = 190 MPa use one
    span = 10 ** ((15.117 - 6) / 4) * 1e6
    assert fatigue.exposure(span / 2, 0.0, 1e6) == pytest.approx(1.0)


def test_no_bending_no_exposure_and_too_much_tension_is_endless():
    assert fatigue.exposure(0.0, 1e9, 100.0) == 0
    assert fatigue.exposure(1e6, 1e9, 100.0) == math.inf


def test_ranking_is_stable_and_leaves_out_what_is_not_known():
    assert fatigue.ranking([2.0, math.nan, 2.0, 8.0, 0.0]) == [(3, 1.0), (0, 0.25), (2, 0.25)]
    assert fatigue.ranking([]) == []
    # few turns at high stress before many at low
    exposures = fatigue.exposure([3e7, 9e7, 6e7], 0.0, [900, 20, 60])
    assert [row for row, _ in fatigue.ranking(exposures)] == [1, 2, 0]
