"""The replay's thresholds against the criteria as published, place by place."""

from __future__ import annotations

import math
from dataclasses import replace
from types import SimpleNamespace

import numpy as np
import pytest

from forensics.mechanics.criteria_table import SUPPORT
from forensics.mechanics.critical import Place, he_kyllingstad_1995
from forensics.mechanics.kernels_judge import latch, next_state, thresholds
from forensics.mechanics.kernels_march import place_at
from forensics.mechanics.selfconsistent import ContactSize
from forensics.mechanics.threshold import helical_load, self_consistent_load, sinusoidal_load
from forensics.replay.model import build_model
from forensics.replay.moments import critical_load
from forensics.well.trajectory import build_trajectory
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


def _arc(build: float, turn: float):
    """One pipe in a hole that bends evenly about 60 degrees, from 600 to 900 m [deg/30 m]."""
    md = np.concatenate([np.arange(0.0, 601.0, 100.0), np.arange(610.0, 901.0, 10.0), [2000.0]])
    along = np.clip(md - 600.0, 0.0, 300.0)
    start = 60.0 - 5.0 * build  # at 750 m the hole stands at 60 degrees
    inclination = np.radians(np.minimum(start, start * md / 300.0) + build * along / 30.0)
    way = build_trajectory(md, inclination, np.radians(turn * along / 30.0))
    well = replace(one_pipe_well(0.0, 2000.0), trajectory=way)
    model = build_model(well, case_for(), 1000.0)
    samples = SimpleNamespace(bit=[1000.0], scale=[1.0])
    return SimpleNamespace(model=model, prepared=SimpleNamespace(samples=samples))


@pytest.mark.parametrize(("build", "turn"), [(3.0, 0.0), (1.0, 0.0), (-0.5, 0.0), (-3.0, 0.0), (0.0, 4.0)])
def test_in_a_curved_hole_it_is_the_first_crossing_of_what_the_replay_judges_by(build, turn):
    """Build, drop (lower root) and turn: a plain scan of the replay's own threshold, and the closed form."""
    run = _arc(build, turn)
    model, at = run.model, run.model.setting(0.2, 0.2)
    place = place_at(at.hole, at.pipe, 1000.0, 1.0)
    j, i = int(np.searchsorted(model.pipe.x, 250.0, side="right")) - 1, 1500
    found = critical_load(run, 0, 750.0)
    loads = np.linspace(1e3, 1.02 * found, 4000)
    over = [load >= thresholds(at, place, j, i, -load)[1] for load in loads]
    assert found == pytest.approx(loads[over.index(True)], rel=1e-3)
    ei, gap, weight = at.pipe.ei[j], 0.5 * (0.2159 - 0.168), at.pipe.weight[j]
    angle, rates = math.radians(60.0), np.radians([build, turn]) / 30.0
    w_sin, w_cos = weight * math.sin(angle), weight * math.cos(angle)
    size = ContactSize(w_sin**2, w_sin * rates[0], rates[0] ** 2 + (math.sin(angle) * rates[1]) ** 2)
    exact = float(self_consistent_load(ei, gap, w_cos, model.pipe.stiff_run[j], size))
    assert found == pytest.approx(exact, rel=0.02)  # contact averaged over a wave of 24 m here
    bare = float(he_kyllingstad_1995(Place(ei, gap, weight, angle, rates[0], rates[1])))
    straight = 2 * math.sqrt(ei * w_sin / gap)
    assert (found > straight) == (bare > straight)
