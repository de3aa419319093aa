"""Combined stress and use of strength: single loads, balances, and the published combined rating."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics.errors import CaseError
from forensics.mechanics import pipe
from forensics.mechanics.pipe import Tube
from forensics.mechanics.stress import PipeLoads, combined_stress, judge, lame, rated_use, true_axial
from forensics.well.string import Component

BODY, YIELD = Tube(0.127, 0.1086104), 931e6
PART = Component("dp", "drillpipe", 9e3, 0.127, 0.1086104, 310.0, 0.168, yield_strength=YIELD)


def test_single_loads_are_the_plain_formulas():
    assert combined_stress(BODY, PipeLoads(1e6)) == pytest.approx(1e6 / BODY.area)
    assert combined_stress(BODY, PipeLoads(0.0, 1e4)) == pytest.approx(1e4 / BODY.modulus)
    turned = combined_stress(BODY, PipeLoads(0.0, 0.0, 3e4))
    assert turned == pytest.approx(math.sqrt(3) * 3e4 / BODY.polar_modulus)
    assert combined_stress(BODY, PipeLoads(-1e6, 1e4)) == pytest.approx(1e6 / BODY.area + 1e4 / BODY.modulus)


def test_equal_pressure_alone_is_no_stress_and_effective_tension_sees_to_that():
    # hanging in mud: the pressure squeezes from all sides, the effective force is nothing
    assert combined_stress(BODY, PipeLoads(0.0, inside=4e7, outside=4e7)) == pytest.approx(0.0, abs=1.0)
    assert true_axial(BODY, PipeLoads(0.0, inside=4e7, outside=4e7)) == pytest.approx(-4e7 * BODY.area)


def test_capped_tube_is_pulled_by_its_pressure():
    # a thin capped tube: hoop twice the axial, so von Mises is sqrt(3)/2 of the hoop
    thin = Tube(1.0, 0.998)
    hoop = 1e6 * 0.999 / (2 * 0.001)
    assert combined_stress(thin, PipeLoads(0.0, inside=1e6)) == pytest.approx(
        hoop * math.sqrt(3) / 2, rel=5e-3
    )


@given(st.floats(-1e6, 1e6), st.floats(0, 2e4), st.floats(-4e4, 4e4), st.floats(0, 6e7), st.floats(0, 6e7))
def test_signs_and_points(tension, moment, torque, inside, outside):
    loads = PipeLoads(tension, moment, torque, inside, outside)
    found = combined_stress(BODY, loads)
    assert found == pytest.approx(
        combined_stress(BODY, PipeLoads(tension, -moment, -torque, inside, outside))
    )
    # never less than without bending: one side adds to what is there
    assert found >= combined_stress(BODY, PipeLoads(tension, 0.0, torque, inside, outside)) * (1 - 1e-9) - 1.0
    # the bore without bending is the published form, radial stress there the pressure itself
    radial, hoop = lame(BODY, BODY.inner_diameter, inside, outside)
    assert radial == pytest.approx(-inside, abs=1e-3)
    shear = torque * BODY.inner_diameter / 2 / BODY.polar
    bore = pipe.von_mises(true_axial(BODY, loads) / BODY.area, hoop, radial, shear)
    assert found >= float(bore) * (1 - 1e-9) - 1.0


def test_arrays_broadcast_and_solid_bars_pass():
    assert combined_stress(BODY, PipeLoads(np.zeros((3, 1)), np.ones(4))).shape == (3, 4)
    assert combined_stress(Tube(0.1, 0.0), PipeLoads(1e5)) == pytest.approx(1e5 / Tube(0.1, 0.0).area)


@given(st.floats(0.0, 0.99), st.floats(0.01, 1.5))
def test_combined_rating_is_used_up_on_the_published_line(part, scale):
    # API RP 7G, appendix A: torque allowed under a pull; straight lines from the origin use in proportion
    pull = part * float(pipe.tension_left(BODY, YIELD, 0.0))
    turn = float(pipe.torsional_yield(BODY, YIELD, pull))
    assert rated_use(BODY, YIELD, scale * pull, scale * turn) == pytest.approx(scale, rel=1e-9)


def test_compression_uses_no_tension_rating():
    assert rated_use(BODY, YIELD, -1e6, 0.0) == 0


def test_component_is_judged_by_body_and_by_its_ratings():
    loads = PipeLoads([5e5, -2e5], [0.0, 4e3], [2e4, 2e4])
    body = judge(PART, loads)
    np.testing.assert_allclose(body.use, body.stress / YIELD)
    assert body.tension_margin[0] == pytest.approx(float(pipe.tension_left(BODY, YIELD, 2e4)) - 5e5)
    assert body.torque_margin[0] == pytest.approx(float(pipe.torsional_yield(BODY, YIELD, 5e5)) - 2e4)
    # weaker joints bind
    joint = judge(Component("j", "drillpipe", 9e3, 0.127, 0.1086, 310.0, torque_rating=3e4), loads)
    assert np.all(np.isnan(joint.use))
    np.testing.assert_allclose(joint.rated_use, 2 / 3)
    np.testing.assert_allclose(joint.torque_margin, 1e4)


def test_worn_pipe_has_less_left():
    loads = PipeLoads(8e5, 2e3, 2e4)
    uses = [judge(PART, loads, name) for name in ("new", "premium", "used")]
    assert uses[0].use < uses[1].use < uses[2].use
    assert uses[0].tension_margin > uses[1].tension_margin > uses[2].tension_margin
    with pytest.raises(CaseError, match="pipe_class is 'old'"):
        judge(PART, loads, "old")


def test_nothing_known_nothing_said():
    bare = judge(Component("x", "sub", 1.0, 0.127, 0.1, 300.0), PipeLoads(1e5))
    assert np.isnan(bare.use)
    assert np.isnan(bare.rated_use)
    assert bare.stress > 0
