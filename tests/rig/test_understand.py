"""Recipes: a few stands with their truth, sampled, roughened and robbed of channels."""

import re
import warnings
from dataclasses import replace

import numpy as np
import pytest

from forensics.rig.understand import refine_activity, understand_rig
from forensics.rig.view import Activity
from forensics.well.string import Component, String
from forensics.well.trajectory import build_trajectory


def changed(log, drop=(), **values):
    kept = {name: v for name, v in log.values.items() if name not in drop}
    return replace(log, values={**kept, **values})


def cut(log, first, last):
    part = slice(first, last)
    return replace(
        log,
        time=log.time[part],
        values={name: v[part] for name, v in log.values.items()},
        hookload_logged=log.hookload_logged[part],
        used=log.used[part],
        reason=log.reason[part],
    )


@pytest.fixture(scope="module")
def full(drilled):
    return drilled.truth()


def see(tools, log, well, **rig):
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        return understand_rig(log, well, tools.case(**rig))


@pytest.mark.parametrize(("step", "least"), [(1, 0.97), (2, 0.96), (5, 0.93), (10, 0.92)])
def test_activity_at_every_sampling(tools, drilled, full, well, step, least):
    view = see(tools, tools.log(drilled, step), well)
    assert tools.f1(view.activity, full[::step]) > least


def test_block_weight_and_references(tools, drilled, full, well):
    view = see(tools, tools.log(drilled), well)
    weight = view.block_weight
    assert weight.low < tools.block < weight.high
    assert weight.value == pytest.approx(tools.block, abs=1e3)
    load = drilled.columns()["load"]
    drilling = full == Activity.DRILL_ROTATE
    error = view.wob_surface[drilling] - load[drilling]
    assert abs(np.median(error)) < 1e3
    assert np.quantile(np.abs(error), 0.95) < 5e3
    sliding = np.isfinite(view.wob_slack_off)
    assert (
        not view.wob_slack_off[view.turning | view.slips].any()
        or not sliding[view.turning | view.slips].any()
    )
    slid = sliding & (full == Activity.DRILL_SLIDE)
    assert abs(np.median(view.wob_slack_off[slid] - load[slid])) < 3e3
    assert {tare.kind for tare in view.tares} == {"rotating", "slack_off"}
    assert len({tare.start for tare in view.tares}) >= 4


def test_weight_in_slips_is_no_weight_on_bit(tools, drilled, well):
    view = see(tools, tools.log(drilled), well)
    assert np.isnan(view.wob_surface[view.slips]).all()


@pytest.mark.parametrize(
    ("name", "make"),
    [
        ("hookload", lambda v, r: v + 5e3 * r.standard_normal(len(v))),
        ("block_position", lambda v, r: v + 0.03 * r.standard_normal(len(v))),
        ("block_position", lambda v, _: np.round(v, 1)),
        ("bit_depth", lambda v, r: v + 0.03 * r.standard_normal(len(v))),
        ("rpm", lambda v, _: 10 * np.round(v / 10)),
    ],
    ids=["5 kN noise", "3 cm block noise", "10 cm block steps", "3 cm bit noise", "rpm in tens"],
)
def test_activity_holds_on_rough_channels(tools, drilled, full, well, name, make):
    log = tools.log(drilled)
    rough = make(log.values[name], np.random.default_rng(3))
    assert tools.f1(see(tools, changed(log, **{name: rough}), well).activity, full) > 0.95


def test_activity_through_dropouts(tools, drilled, full, well):
    log, rng = tools.log(drilled), np.random.default_rng(5)
    holed = {name: v.copy() for name, v in log.values.items()}
    for _ in range(60):
        first = rng.integers(len(full))
        holed[rng.choice(list(holed))][first : first + rng.integers(1, 40)] = np.nan
    assert tools.f1(see(tools, changed(log, **holed), well).activity, full) > 0.95


@pytest.mark.parametrize(
    ("drop", "case"),
    [
        ("hole_depth", (0.97, "largest bit depth so far")),
        ("block_position", (0.96, "No block position")),
        ("rpm", (0.95, "judged by torque")),
        ("flow_in", (0.97, "judged by standpipe pressure")),
        ("flow_in standpipe_pressure", (0.7, "a hole that deepens")),
    ],
)
def test_a_missing_channel_is_stood_in_for_and_said(tools, drilled, well, drop, case):
    (least, words), full, drop = case, drilled.truth(), drop.split()
    view = see(tools, changed(tools.log(drilled), drop), well)
    assert tools.f1(view.activity, full) > least
    assert any(words in note for note in view.can_not_tell)


def test_no_rpm_and_no_torque_leaves_drilling_unknown(tools, drilled, full, well):
    view = see(tools, changed(tools.log(drilled), ("rpm", "torque")), well)
    assert (view.activity[full == Activity.DRILL_ROTATE] == Activity.UNKNOWN).mean() > 0.9
    assert (view.activity[full == Activity.CONNECTION] == Activity.CONNECTION).mean() > 0.9
    assert any("rotation there can't be told" in note for note in view.can_not_tell)


def test_rotation_is_guessed_from_the_drag_for_the_mechanics_only(tools, well):
    stand = tools.Stand(well, bit=2448.0, bottom=2500.0, drag=150e3).trip(2, 0.3)
    for sliding in (False, True, False):
        stand.drill_stand(sliding)
    stand.trip(2, -0.3)
    view = see(tools, changed(tools.log(stand), ("rpm", "torque")), well)
    turning, true = stand.columns()["rpm"] > 5, stand.truth()
    for kind in (Activity.DRILL_ROTATE, Activity.DRILL_SLIDE):
        rows = true == kind
        assert (view.turning[rows] == turning[rows]).mean() > 0.95
        assert (view.activity[rows] == Activity.UNKNOWN).mean() > 0.9
    assert any("guess" in note for note in view.can_not_tell)


def test_depth_and_hookload_alone_still_run(tools, drilled, well):
    log = tools.log(drilled)
    bare = replace(log, values={k: log.values[k] for k in ("bit_depth", "hookload")})
    view = see(tools, bare, well)
    assert len(view.can_not_tell) >= 4
    assert view.block_weight.value == pytest.approx(tools.block, abs=2e3)


def test_tared_sensor_has_no_block_weight(tools, drilled, full, well):
    log = tools.log(drilled)
    view = see(
        tools,
        changed(log, hookload=log.values["hookload"] - tools.block),
        well,
        hookload_includes_block=False,
    )
    assert view.block_weight.value == 0.0
    assert tools.f1(view.activity, full) > 0.97


def test_given_block_weight_is_kept(tools, drilled, well):
    view = see(tools, tools.log(drilled), well, block_weight=310e3)
    assert (view.block_weight.value, view.block_weight.source) == (310e3, "case file")
    (said,) = (note for note in view.can_not_tell if "In slips" in note)
    assert float(re.search(r"reads ([\d.]+) kN \(67\.\d klbf\)", said)[1]) == pytest.approx(300.0, abs=1.0)
    assert not any(
        "reads" in n for n in see(tools, tools.log(drilled), well, block_weight=302e3).can_not_tell
    )


def test_slips_channel_is_believed_only_where_physics_agrees(tools, drilled, full, well):
    log, true = tools.log(drilled), drilled.columns()["slips"]
    for flags in (true, np.roll(true, 3000), np.zeros(len(true))):
        assert tools.f1(see(tools, changed(log, slips=flags), well).activity, full) > 0.97


def test_a_stand_on_the_block_is_told_from_the_block(tools, drilled, well):
    log, slips = tools.log(drilled), drilled.columns()["slips"] > 0
    since = np.arange(len(slips)) - np.maximum.accumulate(np.where(~slips, np.arange(len(slips)), 0))
    stand = np.where(slips & (since > 90), 12e3, 0.0)
    view = see(tools, changed(log, hookload=log.values["hookload"] + stand), well)
    assert view.block_weight.value == pytest.approx(tools.block, abs=1e3)
    assert "lower of two" in view.block_weight.source


def test_a_block_that_moves_alone_is_in_slips_though_it_carries_more(tools, drilled, full, well):
    log, slips = tools.log(drilled), drilled.columns()["slips"] > 0
    moves = slips & (np.abs(np.gradient(log.values["block_position"])) > 0.05)
    first = np.flatnonzero(moves)[:60]
    heavy = log.values["hookload"].copy()
    heavy[first] += 90e3
    assert tools.f1(see(tools, changed(log, hookload=heavy), well).activity, full) > 0.97


def test_a_survey_that_ends_far_above_the_bit_is_told(tools, drilled, well):
    log = tools.log(drilled)
    deepest = np.nanmax(log.values["bit_depth"])
    for end, told in ((deepest - 30.0, False), (deepest - 400.0, True)):
        md = np.arange(0.0, end, 10.0)
        path = build_trajectory(md, np.zeros(len(md)), np.zeros(len(md)))
        notes = see(tools, log, replace(well, trajectory=path)).can_not_tell
        assert any(note.startswith("The survey ends at") for note in notes) == told


def test_no_connection_falls_back_on_the_model_and_says_so(tools, drilled, full, well):
    first = int(np.argmax(drilled.columns()["slips"] > 0)) - 5
    view = see(tools, cut(tools.log(drilled), 0, first), well)
    assert tools.f1(view.activity, full[:first]) > 0.93
    assert not view.block_weight.determined
    assert view.block_weight.low < tools.block < view.block_weight.high
    assert any("No reading in slips" in note for note in view.can_not_tell)


def test_nothing_but_drilling_is_still_drilling(tools, drilled, full, well):
    rows = np.flatnonzero(np.isin(full, (Activity.DRILL_ROTATE, Activity.DRILL_SLIDE)))
    first = rows[0] + 60
    last = first + int(np.argmax(full[first:] != full[first])) - 60
    view = see(tools, cut(tools.log(drilled), first, last), well)
    assert (view.activity == full[first:last]).mean() > 0.95
    assert any("rotating weight" in note for note in view.can_not_tell)


def test_a_trip_in_without_hole_depth_is_no_drilling(tools, well):
    trip = tools.Stand(well, bit=1500.0, bottom=2500.0).trip(8, 0.15).go(60, flow=0.02).trip(2, 0.15)
    view = see(tools, changed(tools.log(trip), ("hole_depth",)), well)
    assert not np.isin(view.activity, (Activity.DRILL_ROTATE, Activity.DRILL_SLIDE)).any()
    assert tools.f1(view.activity, trip.truth()) > 0.95


def test_a_liner_without_hole_depth_takes_the_hole_from_its_table(tools, well):
    pipe = well.string.components[-1]
    liner = Component("liner", "liner", 900.0, 0.1778, 0.159, 430.0, 0.194)
    run = replace(well, string=String((liner, pipe)))
    slow = tools.Stand(well, bit=1500.0, bottom=2990.0).trip(6, 0.03).go(60, flow=0.02)
    view = see(tools, changed(tools.log(slow), ("hole_depth",)), run)
    assert view.hole_depth.min() == pytest.approx(3000.0)
    assert not view.on_bottom.any()


def test_a_bit_depth_lost_in_slips_does_not_end_them(tools, well):
    stand = tools.Stand(well, bit=2300.0, bottom=2600.0, height=2.0).trip(4, 0.3)
    log, true = tools.log(stand), stand.truth()
    inside = np.flatnonzero(true == Activity.CONNECTION)
    last = inside[np.append(np.diff(inside) > 1, True)][1:-1]
    depth = log.values["bit_depth"].copy()
    for row in last:
        depth[row - 30 : row + 25] = np.nan  # bridged: the bit seems to move before the string does
    view = see(tools, changed(log, bit_depth=depth), well)
    early = np.concatenate([np.arange(row - 60, row - 30) for row in last])
    assert view.slips[early].mean() > 0.98


def test_slips_cut_short_by_a_gap_are_slips(tools, drilled, full, well):
    log = tools.log(drilled)
    begin = np.flatnonzero((full[1:] == Activity.CONNECTION) & (full[:-1] != Activity.CONNECTION))[1] + 1
    end = begin + np.flatnonzero(full[begin:] != Activity.CONNECTION)[0]
    early, late = cut(log, 0, begin + 14), cut(log, end, len(log.time))
    whole = replace(
        early,
        time=np.append(early.time, late.time),
        values={name: np.append(v, late.values[name]) for name, v in early.values.items()},
        hookload_logged=np.append(early.hookload_logged, late.hookload_logged),
        used=np.append(early.used, late.used),
        reason=np.append(early.reason, late.reason),
    )
    view = see(tools, whole, well)
    assert view.slips[begin + 4 : begin + 14].all()


def test_a_stand_counted_on_in_slips_does_not_end_them(tools, drilled, full, well):
    log = tools.log(drilled)
    inside = np.flatnonzero(full == Activity.CONNECTION)
    moved = log.values["bit_depth"].copy()
    moved[inside[80] :] += 28.0
    view = see(tools, changed(log, ("hole_depth",), bit_depth=moved), well)
    assert (view.activity[inside] == Activity.CONNECTION).mean() > 0.98


def test_reaming_down_is_no_drilling_though_the_hook_is_lighter(tools, well):
    stand = tools.Stand(well, bit=2480.0, bottom=2500.0)
    stand.go(30).go(40, -0.1).go(20).go(30, rpm=60, flow=0.03).go(20)
    stand.drill_stand()
    log = tools.log(stand)
    # a lateral string that turns at 60 rpm and goes down at 0.1 m/s still feels a sixth of its drag
    speed = -np.gradient(stand.columns()["block"])
    lighter = np.where(
        (stand.columns()["rpm"] > 5) & (stand.columns()["load"] == 0), speed / 0.5 * tools.drag, 0.0
    )
    view = see(tools, changed(log, hookload=log.values["hookload"] - lighter), well)
    reaming = stand.truth() == Activity.REAM_DOWN
    assert (view.activity[reaming] == Activity.REAM_DOWN).mean() > 0.8


def test_pump_shift_is_learned_and_taken_out(tools, drilled, well):
    log, flow = tools.log(drilled), drilled.columns()["flow"]
    shifted = changed(log, hookload=log.values["hookload"] - 9e3 * (flow > 0))
    view = see(tools, shifted, well)
    assert view.pump_shift is not None
    assert view.pump_shift.value == pytest.approx(-9e3, abs=1.5e3)


def test_second_pass_settles_only_what_the_first_left_open(tools, drilled, well):
    log = tools.log(drilled)
    view = see(tools, log, well)
    again = refine_activity(view, np.zeros(len(log)), log)
    changed_rows = again.on_bottom != view.on_bottom
    assert (view.bottom_vote[changed_rows] == 0).all()
    assert not (changed_rows & (view.turning | view.slips)).any()
    same = refine_activity(view, drilled.columns()["load"], log)
    assert tools.f1(same.activity, drilled.truth()) >= tools.f1(view.activity, drilled.truth()) - 0.005


@pytest.mark.parametrize("rows", [1, 2, 3, 5])
def test_next_to_no_rows_run(tools, drilled, well, rows):
    view = see(tools, cut(tools.log(drilled), 0, rows), well)
    assert len(view.activity) == rows


def test_constant_channels_run(tools, drilled, well):
    log = tools.log(drilled)
    view = see(tools, changed(log, **{k: np.full(len(log), v[0]) for k, v in log.values.items()}), well)
    assert (view.activity == Activity.STATIC).all() or (view.activity == Activity.TRIP_OUT).sum() == 0


def test_sheaves_are_taken_out_without_a_step(tools, drilled, well):
    from forensics.mechanics.hoisting import dead_line_to_hookload

    log, n, e = tools.log(drilled, noise=0.0), 10, 0.985
    speed = np.gradient(drilled.columns()["block"])
    sign = np.where(speed > 1e-3, 1, np.where(speed < -1e-3, -1, 0))
    last = np.maximum.accumulate(np.where(sign != 0, np.arange(len(sign)), 0))
    up, down = (n / dead_line_to_hookload(e, n, way) for way in ("up", "down"))
    shown = np.where(sign[last] > 0, up, down)
    view = see(
        tools, changed(log, hookload=log.values["hookload"] * shown), well, lines=n, sheave_efficiency=e
    )
    assert view.block_weight.value == pytest.approx(tools.block, abs=6e3)
    drilling = drilled.truth() == Activity.DRILL_ROTATE
    off = view.hookload[drilling] - log.values["hookload"][drilling]
    assert np.median(np.abs(off)) < 1e3
