"""The limit of the bit load against closed forms."""

from __future__ import annotations

import math

import numpy as np
import pytest

from forensics.mechanics import lockup
from forensics.mechanics.kernels_judge import stand_at
from forensics.mechanics.kernels_replay import TURN
from forensics.mechanics.lockup import HelicalRun, QuickLimit, SlackOff, load_along
from forensics.replay.margin import MORE, bit_load_limit, slack_off
from forensics.replay.model import build_model
from forensics.replay.quick import quick_limit
from forensics.replay.room import fresh
from tests.replay.test_memory import case_for, rows
from tests.wells import build_well, one_pipe_well


def test_a_straight_steep_hole_hands_down_its_weight_less_drag():
    """Exact: w L (cos I - mu sin I), where the loads stay short of any helix."""
    angle, length = math.radians(30), 300.0
    model = build_model(one_pipe_well(angle, length), case_for(), length)
    samples = rows([0.0, 0.0], [1, 1], bit=np.full(2, length))
    limit = bit_load_limit(model, samples, np.array([True, True]), (0.2, 0.2))
    exact = model.pipe.weight[0] * length * (math.cos(angle) - 0.2 * math.sin(angle))
    assert limit == pytest.approx(exact, rel=1e-4)


def test_helices_lower_the_limit_and_rows_not_asked_for_have_none():
    """A vertical string over a lateral: 2 sqrt(EI w / (mu r)) bounds what a helix lets through."""
    model = build_model(build_well(), case_for(), 3400.0)
    bits = np.array([2000.0, 2700.0, 3400.0])
    samples = rows([0.0] * 3, [1] * 3, bit=bits, step=np.full(3, 60.0))
    limit = bit_load_limit(model, samples, np.array([True, False, True]), (0.25, 0.25))
    assert math.isnan(limit[1])
    assert limit[2] < limit[0]
    pipe, gap = model.pipe, 0.5 * (0.2159 - 0.168)
    bound = 2.0 * math.sqrt(pipe.ei[-1] * pipe.weight[-1] / (0.25 * gap))
    assert limit[0] < bound


@pytest.mark.parametrize("inclination", [0.0, 50.0, 70.0])
def test_more_slacking_off_through_a_helix_is_the_closed_form(inclination):
    """Helical from the bit to the neutral point, hanging above it: exact at constant inclination."""
    angle, length, factor = math.radians(inclination), 1500.0, 0.3
    model = build_model(one_pipe_well(angle, length), case_for(), length)
    run = HelicalRun(
        float(model.pipe.ei[0]), 0.5 * (0.2159 - 0.168), float(model.pipe.weight[0]), factor, angle
    )

    def exact(hookload: float) -> float:
        """Bit load of the string that is helical below its neutral point; by bisection."""
        low, high = 0.0, 2e6
        for _ in range(60):
            load = 0.5 * (low + high)
            over = float(load_along(length, load, run)) < -hookload  # too little weight set down
            low, high = (load, high) if over else (low, load)
        return load

    hangs = -run.growth * length
    top = 0.6 * hangs
    memory, _ = fresh(model)
    memory.state[:] = 2
    memory.tension[0] = -exact(top)
    found = slack_off(model.setting(factor, factor), memory, rows([top], [1], bit=np.full(1, length)), 0)
    more = min(MORE, top)
    assert found.more == more
    assert found.limit == pytest.approx(exact(0.0), rel=5e-3)
    assert found.arrives == pytest.approx(exact(top - more) - exact(top), rel=0.02)
    assert found.arrives < more


def test_what_turns_has_none_and_what_stands_on_the_bit_stays():
    angle, length = math.radians(30), 300.0
    model = build_model(one_pipe_well(angle, length), case_for(), length)
    memory, _ = fresh(model)
    turning = rows([0.0], [1], bit=np.full(1, length), mode=np.full(1, TURN, dtype=np.int8))
    assert slack_off(model.setting(0.2, 0.2), memory, turning, 0) is None
    memory.tension[0] = -500e3
    held = slack_off(model.setting(0.2, 0.2), memory, rows([1e3], [1], bit=np.full(1, length)), 0)
    assert (held.more, held.arrives, held.limit) == (1e3, 0.0, 500e3)


def test_weight_from_which_on_next_to_nothing_more_arrives():
    """A vertical helix chokes: just before it more than a twentieth of 20 kN arrives, just after it less."""
    model, top = build_model(one_pipe_well(0.0, 4000.0), case_for(), 4000.0), 800e3
    setting = model.setting(0.3, 0.3)

    def at(hookload: float) -> SlackOff:
        memory, _ = fresh(model)
        memory.state[:] = 2
        return slack_off(setting, memory, rows([hookload], [1], bit=np.full(1, 4000.0)), 0)

    spent = at(top).spent
    assert 0.0 < spent < top
    before, there, after = (at(top - spent + step + MORE).arrives for step in (2e4, 0.0, -2e4))
    assert there - before > 1000.0
    assert after - there < 1000.0


def test_without_friction_all_arrives_to_the_last_and_there_is_no_lockup():
    model = build_model(one_pipe_well(math.radians(30), 300.0), case_for(), 300.0)
    memory, _ = fresh(model)
    found = slack_off(model.setting(0.0, 0.0), memory, rows([30e3], [1], bit=np.full(1, 300.0)), 0)
    assert math.isnan(found.spent)
    assert found.quick is None


@pytest.mark.parametrize("inclination", [20.0, 60.0, 88.0])
def test_quick_limit_is_the_closed_form_and_bounds_the_march(inclination):
    angle, length, factor = math.radians(inclination), 1500.0, 0.3
    model = build_model(one_pipe_well(angle, length), case_for(), length)
    pipe = model.pipe
    run = HelicalRun(float(pipe.ei[0]), 0.5 * (0.2159 - 0.168), float(pipe.weight[0]), factor, angle)
    memory, _ = fresh(model)
    memory.state[:] = 2
    found = slack_off(model.setting(factor, factor), memory, rows([50e3], [1], bit=np.full(1, length)), 0)
    assert found.quick.limit == pytest.approx(lockup.bit_load_limit(length, run), rel=1e-9)
    assert (found.quick.length, found.quick.inclination) == pytest.approx((length, angle))
    assert found.limit <= found.quick.limit


def test_quick_limit_takes_the_even_stretch_and_no_bend():
    model = build_model(build_well(), case_for(), 3400.0)
    setting = model.setting(0.2, 0.2)

    def at(bit: float) -> QuickLimit | None:
        return quick_limit(setting, stand_at(setting.hole, setting.pipe, bit, 1.0, np.zeros(3)))

    # the lateral begins at 1,830 m, and the build comes within six degrees of it some 60 m higher
    assert at(3400.0).length == pytest.approx(3400.0 - 1830.0 + 60.0, abs=15.0)
    assert math.degrees(at(3400.0).inclination) == pytest.approx(90.0, abs=0.5)
    # in the build, in too short a lateral, and where tools are a fifth of the stretch
    assert at(1700.0) is None
    assert at(2000.0) is None
    assert at(2200.0) is None
