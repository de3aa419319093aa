"""The replay's thresholds against the criteria as published, place by place."""

from __future__ import annotations

import math
from types import SimpleNamespace

import pytest

from forensics.mechanics.kernels_judge import latch, next_state, thresholds
from forensics.mechanics.kernels_march import place_at
from forensics.mechanics.limits import SUPPORT
from forensics.mechanics.threshold import helical_load, sinusoidal_load
from forensics.replay.model import build_model
from forensics.replay.moments import critical_load
from tests.replay.test_memory import case_for
from tests.wells import build_well, one_pipe_well


@pytest.mark.parametrize("inclination", [0.5, 3.0, 20.0, 60.0, 89.5])
@pytest.mark.parametrize("scale", [1.0, 0.97])
def test_straight_hole_gives_the_published_loads(inclination, scale):
    angle = math.radians(inclination)
    model = build_model(one_pipe_well(angle, 2000.0), case_for(), 2000.0)
    at = model.setting(0.2, 0.2)
    place = place_at(at.hole, at.pipe, 1500.0, scale)
    weight = at.pipe.weight[5] * scale
    ei, gap, run = at.pipe.ei[5], 0.5 * (0.2159 - 0.168), model.pipe.stiff_run[5]
    local, low, high = thresholds(at, place, 5, 2000, -50e3)
    w_cos = weight * math.cos(angle)
    assert local == pytest.approx(2.0 * math.sqrt(ei * weight * math.sin(angle) / gap), rel=1e-9)
    published = sinusoidal_load(ei, weight * math.sin(angle), gap, w_cos, run)
    assert low == pytest.approx(float(published), rel=1e-3)
    assert high == pytest.approx(float(helical_load(ei, local, w_cos, math.sqrt(2.0))), rel=1e-3)
    assert latch(at, place, 5, 2000, -1.001 * high)
    assert not latch(at, place, 5, 2000, -0.999 * high)


def test_a_support_is_not_judged():
    at = build_model(build_well(), case_for(), 2000.0).setting(0.2, 0.2)
    place = place_at(at.hole, at.pipe, 1950.0, 1.0)
    assert min(thresholds(at, place, 0, 3900, -500e3)) >= SUPPORT


def test_states_remember():
    """None to helical and back: the helix lasts to the sinusoidal load, or to its own limit."""
    levels = (100.0, 110.0, 160.0)
    assert next_state(0, 109.0, levels, 0) == 0
    assert next_state(0, 111.0, levels, 0) == 1
    assert next_state(1, 161.0, levels, 0) == 2
    assert next_state(2, 111.0, levels, 0) == 2
    assert next_state(2, 109.0, levels, 0) == 0
    assert next_state(2, 136.0, levels, 1) == 1
    assert next_state(2, 138.0, levels, 1) == 2


@pytest.mark.parametrize("inclination", [20.0, 60.0, 89.5])
def test_the_critical_load_is_where_load_and_threshold_meet(inclination):
    """In a straight hole contact does not depend on load: the self-consistent load is the threshold."""
    model = build_model(one_pipe_well(math.radians(inclination), 2000.0), case_for(), 2000.0)
    run = SimpleNamespace(
        model=model, prepared=SimpleNamespace(samples=SimpleNamespace(bit=[1500.0], scale=[0.98]))
    )
    place = place_at(model.hole_arrays, model.pipe_arrays, 1500.0, 0.98)
    low = thresholds(model.setting(0.2, 0.2), place, 5, 2000, -50e3)[1]
    assert critical_load(run, 0, 1445.0) == pytest.approx(low, rel=1e-3)
    assert math.isnan(critical_load(run, 0, math.nan))
