"""The invented incidents: each cause leaves the signature the trade knows it by; a quiet run leaves none."""

from __future__ import annotations

import json
import sys
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

ROOT = Path(__file__).resolve().parents[1]
sys.path.insert(0, str(ROOT / "sample_logs"))

from simulator.hole import build_hole  # noqa: E402
from simulator.incident.drags import Cuttings, HigherFriction, Tortuous  # noqa: E402
from simulator.incident.hand import Hand  # noqa: E402
from simulator.incident.holds import PackOff, Sticking  # noqa: E402
from simulator.incident.instruments import measure, true_frame  # noqa: E402
from simulator.incident.make import CAUSES, make_incident, play  # noqa: E402
from simulator.incident.motor import Stall  # noqa: E402
from simulator.incident.physics import SETS  # noqa: E402
from simulator.incident.rig import TroubledRig  # noqa: E402
from simulator.incident.sensors import HookloadFault  # noqa: E402
from simulator.incident.stops import Ledge, Undergauge  # noqa: E402
from simulator.incident.wells import draw_settings  # noqa: E402
from simulator.rig import Demand  # noqa: E402

BOTH = pytest.mark.parametrize("law", list(SETS.values()), ids=list(SETS))
BIT = 2050.0


def rig_with(law, kind=None, size=0.8, above=40.0, **where):
    """Give a rig in one tangent well, bit above bottom, with a trouble in its way; and a driller."""
    settings = draw_settings("tangent", False, law, 3)
    settings["well"] |= {"total_depth": 2400.0, "table_end": 2700.0}
    settings["well"]["holes"][0]["bottom"] = 1500.0
    settings["rig"] |= {"stand": 28.5, "elements_per_stand": 1}
    settings["planted"] |= {"pump_shift_kN": 0.0, "rate_m_h": 25.0}
    settings["instrument"] |= {"lag": 0.0, "flow_power": 1.8, "return_lag": 10.0}
    hole = build_hole(settings, np.random.default_rng(1))
    rig = TroubledRig(settings, hole, BIT, height=15.0, bottom=BIT + above, physics=law)
    trouble = None
    if kind is not None:
        trouble = kind(size, np.random.default_rng(2), law, **where)
        rig.troubles = [trouble]
        trouble.place(rig)
    rig.advance_first()
    hand = Hand(rig, np.random.default_rng(3), rpm=90.0, overpull=400e3, set_down=90e3)
    hand.deadline = 1e9
    return rig, hand, trouble


def weights(hand, pump=1.0):
    """Pick-up and slack-off weights and turning torque, bit off bottom [N, N, N.m]."""
    rig = hand.rig
    hand.move(-6.0, 0.12, pump=pump)
    up = np.median([row[6] for row in rig.rows[-25:-8]])
    hand.move(6.0, 0.12, pump=pump)
    down = np.median([row[6] for row in rig.rows[-25:-8]])
    hand.hold(20, rpm=90.0, pump=pump)
    return up, down, rig.rows[-1][8]


@BOTH
def test_a_ledge_stops_at_one_depth_and_lets_a_turning_string_by(law):
    rig, hand, ledge = rig_with(law, Ledge, depth=BIT + 6.0)
    ledge.strength = 1e9
    met = []
    for _ in range(3):
        assert not hand.move(12.0, 0.12)
        met.append(rig.x[0])
        hand.move(-8.0, 0.12)
        before = max(row[6] for row in rig.rows[-40:])
        assert before < hand._limits()[0] - 0.8 * hand.overpull  # no overpull: up it is free at once
    assert np.ptp(met) < 0.6
    assert abs(met[0] - ledge.stop) < 0.6
    assert max(row[22] for row in rig.rows) == 0.0  # pressure
    assert min(row[25] for row in rig.rows) == 1.0  # flow
    assert hand.ream_down(11.0) > 10.5


@BOTH
def test_an_undergauge_hole_must_be_reamed(law):
    rig, hand, tight = rig_with(law, Undergauge, depth=BIT + 4.0)
    tight.bottom = tight.top + 5.0
    assert not hand.move(12.0, 0.12)
    assert tight.front == pytest.approx(tight.top, abs=0.1)
    hand.move(-4.0, 0.12)
    assert tight.worst == 0.0  # let go above it
    for _ in range(6):
        hand.ream_down(BIT + 11.0 - rig.x[0])
    assert tight.front >= tight.bottom
    hand.move(-9.0, 0.12)
    assert hand.move(8.0, 0.12)


@BOTH
def test_sticking_grows_with_standing_still_and_flow_stays_full(law):
    pulls = []
    for minutes in (2.0, 30.0):
        rig, hand, stuck = rig_with(law, Sticking, size=0.4)
        hand.move(-3.0, 0.1)
        stuck.settle(rig)
        hand.hold(60.0 * minutes)
        begin = len(rig.rows)
        hand.move(-2.0, 0.05)
        rows = true_frame(rig).iloc[begin:]
        pulls.append(rows["string_weight"].max())
        assert (rows["flow_share"] == 1.0).all()
        assert (rows["pressure_extra"] == 0.0).all()
    assert pulls[1] > 1.04 * pulls[0]


@BOTH
def test_what_is_stuck_goes_neither_way_nor_round(law):
    rig, hand, stuck = rig_with(law, Sticking, size=1.0)
    rig.top_drive = 12e3
    hand.move(-3.0, 0.1)
    stuck.settle(rig)
    hand.hold(2400.0)
    hand.overpull = 60e3
    place = rig.x[0]
    assert not hand.move(-2.0, 0.05)
    assert not hand.move(2.0, 0.05)
    assert not hand.turn(30.0)
    assert abs(rig.x[0] - place) < 0.1
    assert max(row[8] for row in rig.rows[-20:]) > 8e3  # torque wound up at no rotation


@BOTH
def test_a_pack_off_lifts_the_pressure_and_holds_both_ways(law):
    rig, hand, shut = rig_with(law, PackOff)
    free = weights(hand)
    shut.begin(rig)
    hand.hold(shut.rise + 2.0)
    assert rig.pressure_extra > 5e5
    assert rig.flow_share < 0.6
    assert not hand.move(-5.0, 0.12) or rig.string_weight > free[0] + 30e3
    assert not hand.move(3.0, 0.12) or rig.string_weight < free[1] - 30e3
    hand.hold(4000.0, pump=0.4)
    assert shut.level == 0.0  # washed open in time


@BOTH
def test_cuttings_drag_more_up_than_down_and_go_with_rotation_and_flow(law):
    _, hand, bed = rig_with(law, Cuttings)
    clean, own, _ = rig_with(law)
    free = weights(own)
    dirty = weights(hand)
    assert dirty[0] - free[0] > 1.5 * (free[1] - dirty[1]) > 0.0
    before = bed.mean
    hand.hold(900.0, rpm=0.0)
    assert bed.mean > 0.9 * before  # flow alone does little
    hand.hold(3000.0, rpm=90.0)
    assert bed.mean < 0.4 * before
    cleaned = weights(hand)
    assert cleaned[0] - free[0] < 0.5 * (dirty[0] - free[0])
    assert clean.pressure_share == 0.0


@BOTH
def test_a_crooked_stretch_drags_at_the_same_depths_whatever_is_circulated(law):
    _, hand, _ = rig_with(law, Tortuous, depth=BIT - 60.0)
    _, own, _ = rig_with(law)
    free, first = weights(own), weights(hand)
    hand.hold(2000.0, rpm=90.0)
    again = weights(hand)
    assert first[0] > 1.03 * free[0]
    assert first[1] < 0.99 * free[1]
    assert first[2] > 1.03 * free[2]
    np.testing.assert_allclose(again, first, rtol=0.02)


@BOTH
def test_higher_friction_shows_up_down_and_round(law):
    rig, hand, slick = rig_with(law, HigherFriction)
    slick.new_mud = slick.all_along = False
    slick.level, before = 0.0, weights(rig_with(law)[1])
    slick.begin(rig)
    hand.hold(slick.ramp + 20.0)
    after = weights(hand)
    rest = rig.hookload_at_rest()
    assert (after[0] - rest) / (before[0] - rest) > 1.2
    assert (rest - after[1]) / (rest - before[1]) > 1.15
    assert after[2] / before[2] > 1.15


@BOTH
def test_a_stalled_motor_drills_nothing_until_the_weight_is_off(law):
    rig, hand, stall = rig_with(law, Stall, above=3.0)
    hand.zero = rig.string_weight
    stall.target = 60e3
    stall.begin(rig)
    hand.tag_bottom(90.0, 3e3)
    for _ in range(600):
        if rig.stalled:
            break
        rig.advance(Demand(0.01, 90.0, 1.0))
    assert rig.stalled
    hand.hold(2, rpm=90.0)
    bottom = rig.bottom
    hand.hold(60, rpm=90.0)
    assert rig.bottom == pytest.approx(bottom, abs=1e-6)
    pressure = [row[22] for row in rig.rows[-10:]]
    assert np.ptp(pressure) < 0.02 * np.mean(pressure)  # flat
    hand.move(-4.0, 0.1, rpm=90.0)
    hand.hold(2, rpm=90.0)
    assert not rig.stalled


@BOTH
def test_a_faulty_hookload_is_wrong_in_slips_too(law):
    rig, hand, fault = rig_with(law, HookloadFault)
    fault.mode, fault.since, fault.until, fault.shift = "step", np.inf, np.inf, 50e3
    hand.connection(minutes=3.0)
    fault.begin(rig)
    hand.hold(30)
    hand.move_to(2.0, 0.3)
    hand.connection(minutes=3.0)
    true = true_frame(rig)
    log = measure(rig, true, np.random.default_rng(4))
    error = pd.Series(log["hookload"].to_numpy() - true["hookload"].to_numpy())
    late, slips = true["time"].to_numpy() > fault.since, true["slips"].to_numpy() > 0
    for part in (slips, ~slips):
        assert error[late & part].median() == pytest.approx(50e3, abs=4e3)
        assert abs(error[~late & part].median()) < 4e3


@BOTH
def test_a_quiet_run_is_quiet(law):
    rig, _, _ = play("nothing wrong", 300, law)
    true = true_frame(rig)
    assert true["drag"].abs().max() < 0.1 * true["hanging"].max()
    assert true["ratio"].max() < 1.0
    assert not (true["stalled"] > 0).any()
    assert true["residual"].max() < 1.0  # newtons out of balance at the worst node


def test_buckling_comes_with_weight_set_down_and_goes_when_turned_off_bottom():
    rig, _, _ = play("buckling", 8, SETS["one"])
    true = true_frame(rig)
    rows = true[true["state"] >= 1]
    assert len(rows) > 60
    assert (rows["string_weight"] < rows["hanging"]).mean() > 0.95
    turned = true[(true["rpm"].rolling(6).min() > 50.0) & (true["bit_load"].rolling(6).max() == 0.0)]
    assert len(turned) > 20
    assert turned["state"].max() == 0
    gap = (turned["friction_torque"] - turned["usual_torque"]).abs().max()
    assert gap < 0.02 * turned["usual_torque"].max()  # torque off bottom as ever


def test_an_incident_is_a_case_with_its_truth(tmp_path):
    facts = make_incident("differential sticking", 7, "one", tmp_path / "case")
    told = json.loads((tmp_path / "case" / "truth.json").read_text())
    assert told["cause"] in CAUSES
    assert told["cause"] in told["causes_present"]
    assert told["start"] < told["end"]
    assert told["top_md"] < told["bottom_md"]
    assert told == json.loads(json.dumps(facts))
    assert {p.name for p in (tmp_path / "case").iterdir()} == {
        "case.toml", "hole.csv", "log.csv.gz", "string.csv", "survey.csv", "truth.json",
    }  # fmt: skip


def test_a_log_too_poor_to_tell_lacks_most_channels(tmp_path):
    facts = make_incident("not enough data", 4, "other", tmp_path / "case")
    log = pd.read_csv(tmp_path / "case" / "log.csv.gz")
    step = pd.to_datetime(log["TIME"]).diff().dt.total_seconds().median()
    assert step >= 20.0
    assert len(log.columns) <= 7
    assert facts["troubles"]


def test_the_same_seed_gives_the_same_incident():
    first, second = (np.array(play("pack-off", 5, SETS["other"])[0].rows) for _ in range(2))
    np.testing.assert_array_equal(first, second)
