"""The sample wells' simulator against closed forms: a lie there would be a lie in every recovered truth."""

from __future__ import annotations

import math
import sys
from pathlib import Path

import numpy as np
import pytest

ROOT = Path(__file__).resolve().parents[1]
sys.path.insert(0, str(ROOT / "sample_logs"))

from simulator import core  # noqa: E402
from simulator import elements as el  # noqa: E402
from simulator.build import load_settings  # noqa: E402
from simulator.driller import Driller  # noqa: E402
from simulator.hole import FIRST, STEP, build_hole  # noqa: E402
from simulator.rig import Rig  # noqa: E402

BENDING, CONTACT = 5.0e5, 0.13


def flat_hole(inclination, diameter=0.2159, friction=0.25):
    """Hole table with the inclination [rad] given along measured depth, and the depths."""
    md = np.arange(FIRST, 3000.0, STEP)
    inc = np.array([inclination(m) for m in md])
    table = np.column_stack(
        [np.sin(inc), 0.0 * inc, np.cos(inc), np.full_like(md, diameter), np.full_like(md, friction)]
    )
    return table


def chain(count, length, weight, bending=BENDING):
    """Like elements in a row; `weight` [N/m] may be an array from the bit up."""
    rows = np.zeros((count, 7))
    rows[:, el.LENGTH] = length
    rows[:, el.COMPLIANCE] = length / 5.0e8
    rows[:, el.BENDING] = bending
    rows[:, el.CONTACT_OD] = CONTACT
    rows[:, el.WEIGHT] = rows[:, el.WEIGHT_AIR] = np.asarray(weight) * length
    rows[:, el.STIFF_RUN] = count * length
    return rows


def controls(rpm=0.0, bottom=1e9):
    c = np.zeros(11)
    c[[el.DT, el.BOTTOM, el.ROCK_STIFFNESS, el.UNTWIST]] = 1.0, bottom, 5e7, 0.3
    c[el.SLIDER_STIFFNESS] = el.USUAL_SLIDER_STIFFNESS
    c[el.DRILL_EXPONENT] = 1.0
    c[el.TURN_RATE] = rpm * 2.0 * math.pi / 60.0
    c[[el.MD_FIRST, el.MD_STEP]] = FIRST, STEP
    return c


def push(rows, table, control, bit, speed, seconds):
    """Move the top at a constant speed from rest; returns the last tensions and results."""
    nodes = np.zeros((core.NODE_ROWS, len(rows) + 1))
    nodes[core.PLACE] = bit - np.concatenate([[0.0], np.cumsum(rows[:, el.LENGTH])])
    shapes = np.zeros(len(rows), dtype=np.int64)
    for _ in range(seconds):
        control[el.TOP] = nodes[core.PLACE, -1] + speed
        tension, _, found = core.step(nodes, shapes, rows, table, control)
    return tension, found, shapes, nodes


@pytest.mark.parametrize("speed", [0.1, -0.1])
def test_horizontal_drag_is_friction_times_weight(speed):
    rows = chain(60, 20.0, 150.0)
    table = flat_hole(lambda _: math.pi / 2)
    _, found, shapes, _ = push(rows, table, controls(), 2000.0, speed, 60)
    assert shapes.max() == 0
    # the held top node slides on nothing: half an element less
    assert found[el.TOP_TENSION] == pytest.approx(-math.copysign(0.25 * 150.0 * 1190.0, speed), rel=1e-5)


def test_capstan_in_a_weightless_bend():
    # 1000 to 1300 m turn from level (above) to plumb (below); only the pipe below the bend has weight
    weight = np.where(np.arange(160) < 40, 1000.0, 0.0)
    rows = chain(160, 5.0, weight)
    table = flat_hole(lambda m: math.pi / 2 * (1.0 - min(max((m - 1000.0) / 300.0, 0.0), 1.0)))
    _, found, _, _ = push(rows, table, controls(), 1600.0, -0.05, 60)
    hung = 1000.0 * 200.0
    assert found[el.TOP_TENSION] == pytest.approx(hung * math.exp(0.25 * math.pi / 2), rel=2e-3)


def test_turning_takes_the_friction_off():
    rows = chain(60, 20.0, 150.0)
    table = flat_hole(lambda _: math.pi / 3)
    _, found, _, _ = push(rows, table, controls(rpm=120.0), 2000.0, 0.01, 120)
    # 0.01 m/s along, omega R across: the drag left is the share along
    side, sweep = 150.0 * math.sin(math.pi / 3), 4.0 * math.pi * CONTACT / 2
    share = 0.01 / math.hypot(0.01, sweep)
    drag = 0.25 * side * 1190.0 * share
    assert found[el.TOP_TENSION] == pytest.approx(150.0 * 1200.0 * 0.5 - drag, rel=1e-5)
    torque = 0.25 * side * 1200.0 * CONTACT / 2 * sweep / math.hypot(0.01, sweep)
    assert found[el.FRICTION_TORQUE] == pytest.approx(torque, rel=1e-3)


def test_helix_in_a_level_hole_grows_as_the_tangent():
    # F(x) = 2 sqrt(EI w/r) tan(atan(F0 sqrt(r/(4 EI w))) + mu x sqrt(r w/(4 EI))): helical all along
    w, r, mu = 150.0, (0.2159 - CONTACT) / 2, 0.25
    rows = chain(50, 5.0, w)
    table = flat_hole(lambda _: math.pi / 2)
    tension, found, shapes, _ = push(rows, table, controls(bottom=2001.0), 2000.0, 0.01, 140)
    assert (shapes == 2).all()
    x = 5.0 * (np.arange(50) + 0.5)
    size = 2.0 * math.sqrt(BENDING * w / r)
    load = size * np.tan(np.arctan(found[el.BIT_LOAD] / size) + mu * x * math.sqrt(r * w / (4.0 * BENDING)))
    np.testing.assert_allclose(-tension, load, rtol=1e-3)


def small_rig(**planted):
    settings = load_settings(ROOT / "sample_logs" / "settings" / "lateral_slide.toml")
    settings["planted"] |= planted
    hole = build_hole(settings, np.random.default_rng(1))
    rig = Rig(settings, hole, 3850.0, height=20.0, bottom=3856.0)
    return rig, Driller(rig, np.random.default_rng(2))


def test_moving_weights_agree_with_sums_along_the_string():
    rig, driller = small_rig()
    loads = {}
    driller.hold(5, rpm=80.0)
    loads[0.0] = rig.string_weight
    driller.move(-5.0, 0.1)
    loads[-1.0] = max(row[6] for row in rig.rows)
    driller.move(5.0, 0.1)
    loads[1.0] = min(row[6] for row in rig.rows)
    for sign, load in loads.items():
        summed = el.steady(rig.x, rig.elements, rig.hole.table, rig.control(), sign)
        assert load == pytest.approx(summed, rel=6e-3)
    assert max(row[22] for row in rig.rows) < 1.0  # newtons out of balance at the worst node


def test_weight_set_down_stays_where_friction_holds_it():
    rig, driller = small_rig()
    driller.zero = rig.hookload_at_rest()
    driller.tag_bottom(0.0, 2e3)
    driller.stack(280e3)
    locked = rig.found[el.BIT_LOAD]
    driller.pump = 0.0  # nothing drills: a small pick-up is not felt at the bit
    driller.move(-0.15, 0.02)
    assert driller.wob() < 240e3
    assert rig.found[el.BIT_LOAD] == pytest.approx(locked, rel=1e-3)
    driller.pump = 1.0
    driller.hold(120)
    assert rig.found[el.BIT_LOAD] < 0.8 * locked
    driller.hold(10, rpm=80.0)
    assert rig.latched.max() == 0


def test_nothing_is_borrowed_from_the_analysis():
    for path in (ROOT / "sample_logs").rglob("*.py"):
        words = path.read_text(encoding="utf-8")
        assert "import forensics" not in words
        assert "from forensics" not in words
        assert "pipelines" not in words


def test_same_seed_gives_the_same_run():
    first, second = (small_rig() for _ in range(2))
    for _, driller in (first, second):
        driller.weight_check(rotate=10)
    np.testing.assert_array_equal(np.array(first[0].rows), np.array(second[0].rows))
