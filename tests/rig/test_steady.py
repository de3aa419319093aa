"""Steady readings: what counts, what doesn't, and what they come to."""

from dataclasses import replace

import numpy as np
import pytest

from forensics.friction.readings import find_readings
from forensics.rig.understand import understand_rig


def readings_of(tools, log, well):
    return find_readings(log, understand_rig(log, well, tools.case()), well)


def of(readings, kind):
    return [r for r in readings if r.kind == kind]


def true_weight(tools, well, reading, drag):
    hanging = well.string.components[-1]
    pipe = hanging.weight + 1250.0 * 9.80665 * hanging.inner_area
    below = float(well.rotating_weight(reading.bit_depth)[0])
    return tools.block + below + pipe * reading.block + drag


@pytest.mark.parametrize(("kind", "sign"), [("pick_up", 1), ("slack_off", -1), ("rotating", 0)])
def test_weights_come_out_as_they_are(tools, drilled, well, kind, sign):
    readings = of(readings_of(tools, tools.log(drilled), well), kind)
    assert len(readings) >= 4
    for reading in readings:
        true = true_weight(tools, well, reading, sign * tools.drag)
        assert reading.value == pytest.approx(true, abs=2.5e3)
        assert reading.samples >= 3
        assert reading.end > reading.start
        assert reading.spread < 5e3


def test_off_bottom_torque_is_the_free_torque(tools, drilled, well):
    turned = of(readings_of(tools, tools.log(drilled), well), "torque")
    assert len(turned) >= 4
    assert np.median([r.value for r in turned]) == pytest.approx(9e3, rel=0.02)
    assert all(r.rpm > 50 for r in turned)


def test_trips_give_a_few_readings_a_stand(tools, well):
    trip = tools.Stand(well, bit=2000.0, bottom=2600.0).trip(6, -0.3).trip(6, 0.3)
    log = tools.log(trip)
    readings = readings_of(tools, log, well)
    up, down = of(readings, "pick_up"), of(readings, "slack_off")
    assert 6 <= len(up) <= 18
    assert 6 <= len(down) <= 18
    assert all(r.speed == pytest.approx(0.3, rel=0.05) for r in up + down)
    assert not any(r.pumping for r in up + down)


def test_nothing_on_bottom_is_a_reading(tools, drilled, well):
    log = tools.log(drilled)
    loaded = drilled.columns()["load"] > 2e3
    for reading in readings_of(tools, log, well):
        rows = (log.time >= reading.start) & (log.time <= reading.end)
        assert not loaded[rows].any(), reading


def test_breakover_peak_is_left_out(tools, well):
    trip = tools.Stand(well, bit=2000.0, bottom=2600.0).trip(5, -0.2)
    log = tools.log(trip)
    moving = np.gradient(trip.columns()["block"]) > 0.05
    begun = np.arange(len(moving)) - np.maximum.accumulate(np.where(~moving, np.arange(len(moving)), 0))
    peak = np.where(moving & (trip.columns()["slips"] == 0) & (begun < 10), 80e3, 0.0)
    readings = of(
        readings_of(
            tools, replace(log, values={**log.values, "hookload": log.values["hookload"] + peak}), well
        ),
        "pick_up",
    )
    assert readings
    for reading in readings:
        assert reading.value == pytest.approx(true_weight(tools, well, reading, tools.drag), abs=2.5e3)


def test_a_string_that_stands_while_the_block_goes_down_gives_no_slack_off(tools, well):
    """Lockup: the hookload falls all the way, steadily; that is no weight of a string in motion."""
    stuck = tools.Stand(well, bit=2400.0, bottom=2600.0).trip(3, 0.2)
    first = len(stuck.rows)
    stuck.go(10).go(200, 0.03).go(10)
    log = tools.log(stuck)
    fall = np.zeros(len(log))
    fall[first + 10 : first + 210] = np.linspace(0.0, 250e3, 200)
    fall[first + 210 :] = 250e3
    changed = replace(log, values={**log.values, "hookload": log.values["hookload"] - fall})
    for reading in of(readings_of(tools, changed, well), "slack_off"):
        assert reading.start < log.time[first + 20]


def test_a_reading_through_a_change_of_flow_is_none(tools, well):
    trip = tools.Stand(well, bit=2000.0, bottom=2600.0).trip(4, -0.2)
    log = tools.log(trip)
    flow = np.where(np.arange(len(log)) % 20 < 10, 0.03, 0.0)
    changed = replace(log, values={**log.values, "flow_in": flow})
    assert not readings_of(tools, changed, well)
