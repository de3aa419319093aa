"""Calibration on readings whose truth is known: a plain planar well, marched by a string of its own."""

from __future__ import annotations

from dataclasses import replace
from types import SimpleNamespace

import numpy as np
import pytest

from forensics.case import FrictionSettings, RigSettings
from forensics.friction.assumptions import assumed_factor
from forensics.friction.calibrate import calibrate
from forensics.friction.result import Reading
from plain_well import (
    RUN,
    TRUTH,
    PlainString,
    factors,
    make_case,
    make_readings,
    make_rig,
    make_well,
)


@pytest.fixture
def plain():
    return PlainString()


def check(calibration, truth=TRUTH, width=0.075):
    for estimate, value in zip(factors(calibration).values(), truth, strict=True):
        assert estimate.determined
        assert estimate.value == pytest.approx(value, abs=0.02)
        assert estimate.low <= value <= estimate.high
        assert estimate.high - estimate.low <= width


def test_factors_come_back_from_clean_readings(plain):
    found = calibrate(make_readings(plain, RUN, TRUTH), make_well(), make_case(), plain, make_rig())
    check(found)
    assert found.block_weight.low <= 301.0e3 <= found.block_weight.high
    assert found.weight_scale.value == pytest.approx(1.0, abs=0.01)
    assert found.residual_rms < 3.0e3
    assert found.hookload_bias.value == 0.0


def test_planted_model_error_is_survived(plain):
    truth = PlainString(w=262.5, vary=0.15, step=11.0)
    found = calibrate(make_readings(truth, RUN, TRUTH), make_well(), make_case(), plain, make_rig())
    check(found)
    assert found.weight_scale.value == pytest.approx(262.5 / 260.0, abs=0.01)


def test_slant_well_against_closed_form():
    """Straight slant: drag is mu w L sin I exactly, so nothing is marched on the truth's side."""
    w, angle = 300.0, np.radians(50.0)

    class Slant(PlainString):
        """Closed form."""

        def string_weight(self, kind, bit_depth, mu_cased, mu_open, *_):
            """Weight and drag of a straight string [N]."""
            sign = {"pick_up": 1.0, "slack_off": -1.0, "rotating": 0.0}[kind]
            cased = np.minimum(bit_depth, 1900.0)
            felt = mu_cased * cased + mu_open * (bit_depth - cased)
            return w * (bit_depth * np.cos(angle) + sign * felt * np.sin(angle))

    found = calibrate(
        make_readings(Slant(), RUN, TRUTH, noise=0.0), make_well(), make_case(), Slant(), make_rig()
    )
    assert factors(found)["cased"].value == pytest.approx(0.22, abs=0.002)
    assert factors(found)["open"].value == pytest.approx(0.31, abs=0.003)


def test_drag_episodes_do_not_enter_the_base_friction(plain):
    readings = list(make_readings(plain, RUN, TRUTH))
    rows = [i for i, r in enumerate(readings) if r.kind != "rotating" and r.bit_depth > 3300.0]
    for n, i in enumerate(rows):  # solids: more drag both ways, growing with time
        r = readings[i]
        push = 25.0e3 + 70.0e3 * n / len(rows)
        readings[i] = replace(r, value=r.value + (push if r.kind == "pick_up" else -0.7 * push))
    assert len(rows) / len(readings) > 0.2
    found = calibrate(tuple(readings), make_well(), make_case(), plain, make_rig())
    check(found, width=0.08)  # over half of the open-hole readings are spoilt
    assert any("left out" in s for s in found.can_not_tell)


def test_no_readings_keep_the_assumed_values(plain):
    found = calibrate((), make_well(), make_case(), plain, make_rig())
    got = factors(found)
    assert (got["cased"].value, got["open"].value) == (0.20, 0.28)
    assert not got["cased"].determined
    assert not got["open"].determined
    assert "No steady pick-up" in found.can_not_tell[0]
    assert found.block_weight.value == 300.0e3
    assert np.isnan(found.residual_rms)
    assert found.draws.shape == (64, 3)


def test_readings_inside_casing_leave_the_open_hole_unknown(plain):
    found = calibrate(
        make_readings(plain, np.arange(1200.0, 1890.0, 28.0), TRUTH),
        make_well(),
        make_case(),
        plain,
        make_rig(),
    )
    got = factors(found)
    assert not got["open"].determined
    assert got["open"].value == pytest.approx(0.28)
    assert any("open-hole factor is not known" in s for s in found.can_not_tell)


def test_one_depth_fixes_only_a_combination(plain):
    depths = np.full(12, 3000.0) + np.arange(12.0)
    readings = make_readings(plain, depths, TRUTH, kinds=("pick_up", "rotating"))
    found = calibrate(readings, make_well(), make_case(), plain, make_rig())
    got = factors(found)
    assert sum(not e.determined for e in got.values()) >= 1
    assert any("hides behind" in s for s in found.can_not_tell)
    # what is kept and what follows together still carry the drag that was measured
    modelled = plain.string_weight("pick_up", depths[:1], got["cased"].value, got["open"].value)
    real = plain.string_weight("pick_up", depths[:1], *TRUTH)
    assert modelled[0] == pytest.approx(real[0], rel=0.02)


def test_readings_deep_in_a_lateral_alone_do_not_part_the_sections(plain):
    # more friction in the build than elsewhere: pulling feels it more than lowering does
    truth = PlainString(vary=0.15, step=11.0)
    deep = np.arange(4000.0, 4150.0, 6.0)
    found = calibrate(make_readings(truth, deep, TRUTH), make_well(), make_case(), plain, make_rig())
    got = factors(found)
    assert not all(estimate.determined for estimate in got.values())
    assert any("the assumed" in said for said in found.can_not_tell)
    for estimate, value in zip(got.values(), TRUTH, strict=True):
        assert estimate.low <= value <= estimate.high
    # what they do tell is the drag of the two together
    assert got["open"].value == pytest.approx(TRUTH[1], abs=0.05)


def test_slack_off_alone_is_said(plain):
    found = calibrate(
        make_readings(plain, RUN, TRUTH, kinds=("slack_off",)), make_well(), make_case(), plain, make_rig()
    )
    assert any("no pick-up readings" in s for s in found.can_not_tell)
    for estimate, value in zip(factors(found).values(), TRUTH, strict=True):
        assert estimate.low <= value <= estimate.high


def test_given_block_weight_leaves_a_bias(plain):
    case = make_case(rig=RigSettings(block_weight=295.0e3))
    found = calibrate(make_readings(plain, RUN, TRUTH), make_well(), case, plain, make_rig())
    assert found.block_weight.value == 295.0e3
    assert found.hookload_bias.low <= 6.0e3 <= found.hookload_bias.high
    assert found.draws[:, 2].mean() == pytest.approx(295.0e3, abs=1.0e3)


def test_fixed_friction_is_used_as_given(plain):
    case = make_case(friction=FrictionSettings(cased=0.17, open=0.24, fixed=True))
    found = calibrate(make_readings(plain, RUN, TRUTH), make_well(), case, plain, make_rig())
    got = factors(found)
    assert (got["cased"].value, got["open"].value) == (0.17, 0.24)
    assert np.ptp(found.draws[:, 0]) == 0.0


def test_hole_table_goes_before_case_file(plain):
    case = make_case(friction=FrictionSettings(cased=0.17, open=0.24))
    found = calibrate((), make_well(friction=(0.13, np.nan)), case, plain, make_rig())
    assert factors(found)["cased"].value == pytest.approx(0.13)
    assert factors(found)["cased"].source == "assumed (hole table)"
    assert factors(found)["open"].value == pytest.approx(0.24)


def test_draws_carry_the_intervals_and_repeat(plain):
    readings = make_readings(plain, RUN, TRUTH)
    found = calibrate(readings, make_well(), make_case(), plain, make_rig())
    again = calibrate(readings, make_well(), make_case(), plain, make_rig())
    np.testing.assert_array_equal(found.draws, again.draws)
    open_ = factors(found)["open"]
    assert found.draws[:, 1].mean() == pytest.approx(open_.value, abs=0.003)
    inside = np.mean((found.draws[:, 1] >= open_.low) & (found.draws[:, 1] <= open_.high))
    assert 0.8 <= inside <= 0.98
    assert found.draws[:, 2].std() < 3.0e3


def test_intervals_cover_the_truth_as_often_as_they_say(plain):
    """Coverage of 90 % intervals over repeated noise, with friction that varies along the hole."""
    hits = 0
    rng = np.random.default_rng(3)
    base = make_readings(PlainString(w=261.0, vary=0.1), RUN, TRUTH, noise=0.0)
    for _ in range(12):
        noisy = tuple(replace(r, value=r.value + rng.normal(0.0, 3.0e3)) for r in base)
        got = factors(calibrate(noisy, make_well(), make_case(), plain, make_rig()))
        hits += sum(e.low <= t <= e.high for e, t in zip(got.values(), TRUTH, strict=True))
    assert hits >= 18


def torque_readings(plain, factor, loss, depths=RUN):
    rng = np.random.default_rng(1)
    value = loss + plain.torque(depths, factor) + rng.normal(0.0, 150.0, len(depths))
    return tuple(
        Reading("torque", 1000.0 * i, 1000.0 * i + 40, d, 10.0, v, 150.0, 40, pumping=True, rpm=60.0)
        for i, (d, v) in enumerate(zip(depths, value, strict=True))
    )


def test_torque_gives_a_rotational_factor_and_the_loss(plain):
    readings = make_readings(plain, RUN, TRUTH) + torque_readings(plain, 0.27, 1200.0)
    found = calibrate(readings, make_well(), make_case(), plain, make_rig())
    assert found.rotational.value == pytest.approx(0.27, abs=0.01)
    assert found.rotational.low <= 0.27 <= found.rotational.high
    assert found.torque_loss.value == pytest.approx(1200.0, abs=400.0)
    assert len(found.residuals) == len(found.readings)


def test_torque_of_one_depth_cannot_tell_the_loss(plain):
    readings = torque_readings(plain, 0.27, 0.0, depths=np.full(8, 3500.0))
    found = calibrate(readings, make_well(), make_case(), plain, make_rig())
    assert not found.torque_loss.determined
    assert found.rotational.low <= 0.27 <= found.rotational.high


def test_unknown_block_heights_are_survived(plain):
    readings = tuple(replace(r, block=np.nan) for r in make_readings(plain, RUN, TRUTH))
    found = calibrate(readings, make_well(), make_case(), plain, make_rig(determined=False))
    assert factors(found)["open"].value == pytest.approx(0.31, abs=0.02)


def test_cost_stays_small_for_many_readings(plain):
    """The model is marched on a fixed grid of factors, however many readings there are."""
    calls = []
    model = SimpleNamespace(
        string_weight=plain.string_weight,
        string_weights=lambda kind, depth, c, o: (
            calls.append((len(depth), len(c))) or plain.string_weights(kind, depth, c, o)
        ),
        torque=plain.torque,
        open_length=plain.open_length,
        above_rotary=plain.above_rotary,
        slack_off_ratio=plain.slack_off_ratio,
        divided=plain.divided,
    )
    readings = make_readings(plain, np.linspace(1000.0, 4500.0, 400), TRUTH)
    check(calibrate(readings, make_well(), make_case(), model, make_rig()))
    assert len(calls) == 2
    assert max(calls) <= (80, 169)


@pytest.mark.parametrize(
    ("mud", "cased", "open_"),
    [
        ("Oil-base mud, low toxicity", 0.18, 0.21),
        ("KCl polymer water-base", 0.19, 0.25),
        ("WBM", 0.25, 0.32),
        (None, 0.20, 0.28),
        ("unheard of", 0.20, 0.28),
    ],
)
def test_the_kind_of_mud_sets_what_is_assumed(mud, cased, open_):
    """Usual ranges by mud: trade values, from memory."""
    case = make_case(mud_system=mud)
    assert assumed_factor("cased", case, make_well()).value == cased
    assert assumed_factor("open", case, make_well()).value == open_
    stated = make_case(mud_system=mud, friction=FrictionSettings(cased=0.3))
    assert assumed_factor("cased", stated, make_well()).value == 0.3


def test_a_tie_moves_cased_and_open_together(plain):
    """Where one depth shows their sum only, more friction than assumed is put down to both."""
    depths = np.full(12, 3000.0) + np.arange(12.0)
    high = make_readings(plain, depths, (0.30, 0.42), kinds=("pick_up", "rotating"))
    found = calibrate(high, make_well(), make_case(), plain, make_rig())
    got = factors(found)
    assert got["cased"].value > 0.25
    assert got["cased"].low <= 0.30 <= got["cased"].high
    assert got["open"].low <= 0.42 <= got["open"].high
    (tied,) = [d for d in found.open_directions if {"cased factor", "open factor"} <= set(d.moves)]
    assert "trades off" in tied.sentence
    # the slope named is the one that leaves the pick-up weight as it is, by the model itself
    step = 0.02
    slope = tied.moves["open factor"] / tied.moves["cased factor"]

    def pulled(cased, open_):
        at = (got["cased"].value + cased, got["open"].value + open_)
        return plain.string_weight("pick_up", depths[:1], *at)

    alone = abs(pulled(step, 0.0) - pulled(0.0, 0.0))
    assert abs(pulled(step, slope * step) - pulled(0.0, 0.0)) < 0.1 * alone


def test_nothing_told_keeps_what_was_assumed_and_its_width(plain):
    one = make_readings(plain, [700.0], TRUTH, kinds=("pick_up",))
    found = calibrate(one, make_well(), make_case(), plain, make_rig(determined=False))
    got = factors(found)
    assert (got["cased"].value, got["open"].value) == (0.20, 0.28)
    assert not any(e.determined for e in got.values())
    assert got["cased"].high - got["cased"].low == pytest.approx(2 * 1.645 * 0.08, rel=0.01)
    assert found.held_out is None


def test_stands_left_out_are_foretold_as_well_as_the_noise_allows(plain):
    readings = make_readings(plain, RUN, TRUTH) + torque_readings(plain, 0.27, 1200.0)
    proof = calibrate(readings, make_well(), make_case(), plain, make_rig()).held_out
    assert proof.folds >= 8
    assert proof.in_sample <= proof.rms <= 1.3 * proof.in_sample
    assert proof.rms == pytest.approx(1500.0, rel=0.2)
    assert proof.torque_in_sample <= proof.torque_rms == pytest.approx(150.0, rel=0.4)


def test_what_is_left_out_is_not_seen(plain):
    """Spoil one stand: its own error shows in full, as no fit with it would."""
    readings = make_readings(plain, RUN, TRUTH, noise=0.0)
    deepest = max(r.bit_depth for r in readings)
    spoilt = tuple(replace(r, value=r.value + 6.0e3 * (r.bit_depth == deepest)) for r in readings)
    found = calibrate(spoilt, make_well(), make_case(), plain, make_rig())
    rows = [i for i, r in enumerate(found.weights) if r.bit_depth == deepest]
    assert found.held_out.residuals[rows] == pytest.approx(np.full(len(rows), 6.0e3), abs=500.0)


def test_gain_tells_how_another_model_would_be_fitted(plain):
    """A slightly heavier model fitted anew lands where the gain says, without fitting anew."""
    readings = make_readings(plain, RUN, TRUTH, noise=300.0)
    found = calibrate(readings, make_well(), make_case(), plain, make_rig())
    heavy = PlainString(w=261.0, vary=0.1, step=60.0)
    again = calibrate(readings, make_well(), make_case(), heavy, make_rig())
    f = [s.factor.value for s in found.sections]
    depths = np.array([r.bit_depth for r in found.weights])
    kinds = np.array([r.kind for r in found.weights])
    change = np.zeros(len(depths))
    for kind in set(kinds):
        rows = kinds == kind
        both = [model.string_weight(kind, depths[rows], *f) for model in (heavy, plain)]
        change[rows] = both[0] - both[1]
    moved = -found.gain @ change
    real = [s.factor.value - v for s, v in zip(again.sections, f, strict=True)]
    assert found.gain.shape == (3, len(depths))
    assert np.abs(real).max() > 0.002
    assert moved[:2] == pytest.approx(real, abs=0.0005)


def test_open_hole_is_cut_where_its_friction_changes(plain):
    """Planted: 0.24 down to 3000 m, 0.40 below."""
    truth = plain.divided((3000.0,))
    readings = make_readings(truth, RUN, (0.22, 0.24, 0.40))
    found = calibrate(readings, make_well(), make_case(), plain, make_rig())
    (edge,) = found.edges
    assert edge == pytest.approx(3000.0, abs=170.0)  # candidates lie that far apart
    cased, upper, lower = (s.factor for s in found.sections)
    assert cased.low <= 0.22 <= cased.high
    assert upper.value == pytest.approx(0.24, abs=0.03)
    assert lower.value == pytest.approx(0.40, abs=0.03)
    assert [s.kind for s in found.sections] == ["cased", "open", "open"]
    assert found.draws.shape == (64, 4)
    assert found.gain.shape[0] == 4


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_even_friction_is_not_cut(plain, seed):
    rng = np.random.default_rng(seed)
    truth = PlainString(vary=0.1)
    readings = (replace(r, value=r.value + rng.normal(0.0, 1e3)) for r in make_readings(truth, RUN, TRUTH))
    assert calibrate(tuple(readings), make_well(), make_case(), plain, make_rig()).edges == ()
