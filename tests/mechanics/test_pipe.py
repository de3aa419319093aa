"""Pipe ratings: identities, limits, refusals."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics.errors import CaseError
from forensics.mechanics import pipe
from forensics.mechanics.pipe import Tube

BODY, YIELD = Tube(0.127, 0.1086104), 931e6


def test_areas_add_up():
    assert BODY.area == pytest.approx(BODY.outside_area - BODY.bore_area)
    assert Tube(0.1, 0.0).inertia == pytest.approx(math.pi * 0.05**4 / 4)
    assert BODY.polar_modulus * BODY.outer_diameter / 2 == pytest.approx(BODY.polar)


@pytest.mark.parametrize(("outside", "bore"), [(0.1, 0.1), (0.1, 0.2), (0.1, -0.01), (0.0, 0.0)])
def test_no_tube(outside, bore):
    with pytest.raises(ValueError, match="smaller than the outside"):
        Tube(outside, bore)


def test_wear_classes_keep_the_bore_and_part_of_the_wall():
    wall = BODY.outer_diameter - BODY.inner_diameter
    for name, left in (("new", 1.0), ("premium", 0.8), ("used", 0.7)):
        tube = pipe.worn(BODY, name)
        assert tube.inner_diameter == BODY.inner_diameter
        assert tube.outer_diameter - tube.inner_diameter == pytest.approx(left * wall)


def test_unknown_class():
    with pytest.raises(CaseError, match="did you mean 'premium'"):
        pipe.worn(BODY, "premum")


@given(st.floats(0.0, 0.999))
def test_combined_limits_are_inverse(part):
    pull = part * float(pipe.tension_left(BODY, YIELD, 0.0))
    torque = pipe.torsional_yield(BODY, YIELD, pull)
    assert float(pipe.tension_left(BODY, YIELD, torque)) == pytest.approx(pull, rel=1e-6, abs=10.0)


def test_beyond_yield_nothing_is_left():
    assert pipe.torsional_yield(BODY, YIELD, 1.01 * float(pipe.tension_left(BODY, YIELD, 0.0))) == 0
    assert pipe.tension_left(BODY, YIELD, 1.01 * pipe.torsional_yield(BODY, YIELD)) == 0


def test_torsional_yield_is_von_mises_in_shear_within_rounding():
    # 0.577 is API's rounding of 1/sqrt(3), hence 1e-3
    torque = float(pipe.torsional_yield(BODY, YIELD))
    assert pipe.von_mises(0, 0, 0, torque / BODY.polar_modulus) == pytest.approx(YIELD, rel=1e-3)
