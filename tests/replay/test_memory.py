"""The load memory against the exact solution of an elastic bar with Coulomb friction on a flat floor.

A bar at rest and free of load, pushed at one end with force P: slip reaches P / (mu w) along it, the load
falls off linearly, and the end moves in by P^2 / (2 mu w EA). Pulled back by D, the new slip reaches
D / (2 mu w). (Exact solution by equilibrium; a textbook result for bonded and frictional bars.)
"""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest

from forensics.case import Case, FluidSettings, LogSettings
from forensics.mechanics.kernels_judge import stand_at
from forensics.mechanics.kernels_replay import HOLD, REACH, SLIDE, TURN, Rules, Run, Samples, all_moving
from forensics.replay.model import build_model
from forensics.replay.room import fresh, go, room
from forensics.well.string import Component
from tests.wells import build_well, one_pipe_well

MU = 0.25
# thick pipe in a tight hole, so that nothing buckles in these loads
STIFF = Component("stiff", "drillpipe", 9000.0, 0.20, 0.10, 900.0, 0.21)
NEVER = Rules(band=1.0, tolerance=1e3, rate=0.0, exponent=1.0)


def case_for() -> Case:
    here = Path()
    return Case(here, "bar", "bar", LogSettings(()), here, here, here, FluidSettings(1200.0))


@pytest.fixture(scope="module")
def bar():
    """Lay out a horizontal bar 3 km long, and what the kernels need."""
    well = one_pipe_well(math.pi / 2, 3000.0, STIFF)
    model = build_model(well, case_for(), 3000.0)
    at = model.setting(MU, MU)
    weight = float(at.pipe.weight[0])
    return at, model, weight


def rows(top, direction, **changes) -> Samples:
    n = len(top)
    base = {
        "bit": np.full(n, 3000.0),
        "top": np.asarray(top, dtype=float),
        "mode": np.full(n, SLIDE, dtype=np.int8),
        "direction": np.asarray(direction, dtype=np.int8),
        "travel": np.zeros(n),
        "drilling": np.zeros(n, dtype=bool),
        "free": np.zeros(n, dtype=bool),
        "share": np.zeros(n),
        "down": np.ones(n),
        "up": np.ones(n),
        "scale": np.ones(n),
        "step": np.ones(n),
        "witness": np.full(n, np.inf),
        "ends": np.zeros((n, 3)),
    }
    return Samples(**(base | changes))


@pytest.mark.parametrize("push", [50e3, 200e3, 400e3])
def test_push_reaches_as_far_as_friction_lets_it(bar, push):
    at, model, weight = bar
    memory, now = fresh(model)
    go(at, rows([0.0, -push], [1, 1]), NEVER, (memory, now))
    reach = 3000.0 - now[REACH]
    assert reach == pytest.approx(push / (MU * weight), abs=10.0)  # one station
    x = at.pipe.x[:301]
    exact = np.minimum(0.0, -push + MU * weight * (3000.0 - x))
    assert np.allclose(memory.tension[:301], exact, atol=MU * weight * 10.0)


def test_pull_back_slips_half_as_far_and_leaves_the_rest_locked_in(bar):
    at, model, weight = bar
    memory, now = fresh(model)
    push, back = 400e3, 300e3
    go(at, rows([0.0, -push, -push + back], [1, 1, -1]), NEVER, (memory, now))
    assert 3000.0 - now[REACH] == pytest.approx(back / (2 * MU * weight), abs=10.0)
    x = 3000.0 - at.pipe.x[:301]
    loaded = np.minimum(0.0, -push + MU * weight * x)
    unloading = -push + back - MU * weight * x
    assert np.allclose(memory.tension[:301], np.minimum(unloading, 0.0) * (unloading > loaded) + loaded
                       * (unloading <= loaded), atol=MU * weight * 10.0)


def test_rotation_wipes_the_memory(bar):
    at, model, _ = bar
    memory, now = fresh(model)
    mode = np.array([SLIDE, SLIDE, TURN], dtype=np.int8)
    go(at, rows([0.0, -200e3, 0.0], [1, 1, 1], mode=mode), NEVER, (memory, now))
    assert np.allclose(memory.tension[:301], 0.0, atol=1.0)


def test_slips_keep_profile_and_states(bar):
    at, model, _ = bar
    memory, now = fresh(model)
    go(at, rows([0.0, -200e3], [1, 1]), NEVER, (memory, now))
    before = memory.tension.copy()
    mode = np.array([HOLD, HOLD], dtype=np.int8)
    go(at, rows([-900e3, -900e3], [1, -1], mode=mode), NEVER, (memory, now))
    assert np.array_equal(memory.tension, before)


def test_small_readings_do_not_ratchet(bar):
    at, model, _ = bar
    memory, now = fresh(model)
    rules = NEVER._replace(band=2e3)
    go(at, rows([0.0, -200e3], [1, 1]), rules, (memory, now))
    before = memory.tension.copy()
    noise = -200e3 + 1.9e3 * np.sin(np.arange(200))
    go(at, rows(noise, np.ones(200)), rules, (memory, now))
    assert np.array_equal(memory.tension, before)


@pytest.mark.parametrize("drilled", [0.01, 0.04])
def test_bit_unloads_a_pushed_bar_by_the_length_it_drills(bar, drilled):
    """Exact: an evenly loaded bar sliding out by u loses sqrt(2 u EA mu w) of load at that end."""
    at, model, weight = bar
    memory, now = fresh(model)
    load = 300e3
    start = rows([-load], [1], mode=np.array([TURN], dtype=np.int8))
    go(at, start, NEVER, (memory, now))
    steps = 200
    rules = NEVER._replace(rate=drilled / steps, exponent=0.0, band=1e9)
    samples = rows(np.full(steps, -load), np.zeros(steps), drilling=np.ones(steps, bool))
    found = go(at, samples, rules, (memory, now))
    drop = math.sqrt(2 * drilled * at.pipe.ea[0] * MU * weight)
    assert found.bit_load[0] < load
    assert load - found.bit_load[-1] == pytest.approx(drop, rel=0.02)


def test_once_through_the_string_follows_the_hookload_both_ways():
    """Drilling off with the block still: the hookload rises and the bit load falls with it."""
    well = build_well()
    model = build_model(well, case_for(), 2400.0)
    at = model.setting(0.2, 0.25)
    slack = float(model.string_weight("slack_off", 2400.0, 0.2, 0.25)[0])
    memory, now = fresh(model)
    feed = np.linspace(slack, slack - 60e3, 30)
    top = np.concatenate([[slack + 5e3], feed, feed[::-1]])
    samples = rows(top, np.ones(len(top)), bit=np.full(len(top), 2400.0))
    found = go(at, samples, NEVER, (memory, now))
    assert found.full[-1] == 1
    assert found.bit_load[30] > 30e3
    assert found.bit_load[-1] < 3e3


def test_a_string_drilled_off_after_a_small_lift_is_still_picked_up():
    """Raised a little, held while the bit drills the slack off, then raised: the pick-up is one."""
    well = build_well()
    model = build_model(well, case_for(), 3400.0)
    at = model.setting(0.2, 0.25)
    slack = float(model.string_weight("slack_off", 3400.0, 0.2, 0.25)[0])
    lifted = float(model.string_weight("pick_up", 3400.0, 0.2, 0.25)[0])
    memory, now = fresh(model)
    hold = np.full(300, slack - 40e3)
    down, up = np.linspace(slack + 60e3, slack - 60e3, 60), np.linspace(slack, lifted + 5e3, 60)
    top = np.concatenate([down, hold, up])
    way = np.concatenate([np.ones(60), -np.ones(360)])
    travel = np.concatenate([np.linspace(0, 2, 60), np.full(300, 0.03), np.linspace(0.03, 3.0, 60)])
    drilling, step = np.arange(420) < 361, np.full(420, 5.0)
    samples = rows(top, way, bit=np.full(420, 3400.0), travel=travel, drilling=drilling, step=step)
    found = go(at, samples, NEVER._replace(rate=2e-7), (memory, now))
    assert found.full[355] == 1
    assert found.full[-1] == -1
    assert found.bit_load[-1] == 0.0


def test_a_partial_pick_up_keeps_what_is_locked_in_below():
    well = build_well()
    model = build_model(well, case_for(), 3400.0)
    at = model.setting(0.2, 0.25)
    slack = float(model.string_weight("slack_off", 3400.0, 0.2, 0.25)[0])
    memory, now = fresh(model)
    down = np.linspace(slack + 60e3, slack - 80e3, 60)
    up = np.linspace(slack - 80e3, slack - 20e3, 20)
    way = np.concatenate([np.ones(60), -np.ones(20)])
    found = go(at, rows(np.concatenate([down, up]), way, bit=np.full(80, 3400.0)), NEVER, (memory, now))
    assert found.bit_load[59] > 10e3
    assert found.bit_load[79] == pytest.approx(found.bit_load[59])
    assert found.reach[79] < 3400.0


def test_a_march_against_the_motion_stays_within_the_weight_above():
    slim = Component("slim", "drillpipe", 9000.0, 0.089, 0.07, 200.0, 0.12)
    well = one_pipe_well(math.pi / 2, 3000.0, slim)
    model = build_model(well, case_for(), 3000.0)
    at = model.setting(MU, MU)
    # a share of friction that holds up and not down: helices would feed on themselves to infinity
    samples = rows([-200e3] * 3, [-1] * 3, mode=np.full(3, TURN, dtype=np.int8), share=np.full(3, -0.8))
    found = go(at, samples, NEVER, fresh(model))
    most = 200e3 + 1.001 * float(at.pipe.weight[0]) * 3000.0
    assert np.isfinite(found.bit_load).all()
    assert (found.bit_load <= most).all()
    assert np.isfinite(found.ratio).all()


def test_a_string_that_keeps_its_hookload_over_metres_is_moving_whatever_the_model_says(bar):
    """Below the model's slack-off weight: steady over metres it moves, losing a spring's load it is held."""
    at, model, _ = bar
    low = float(model.string_weight("slack_off", 3000.0, MU, MU)[0]) - 50e3
    spring = float(at.pipe.ea[0]) / 3000.0
    travel = np.linspace(0.0, 60.0, 61)
    clear = {"bit": np.full(61, 3000.0), "travel": travel, "free": np.ones(61, dtype=bool)}
    verdicts = []
    for top in (np.full(61, low), low - spring * travel):
        run = Run(rows(top, np.ones(61), **clear), NEVER, room(61, 1, 1), *fresh(model), 1e9)
        place = stand_at(at.hole, at.pipe, 3000.0, 1.0, np.zeros(3))
        verdicts.append([all_moving(at, run, place, t) for t in range(61)])
    assert not any(verdicts[0][:3])
    assert verdicts[0][-1]
    assert not any(verdicts[1])
