"""Strings weighed side by side, with slopes: against the plain march, differences and exact solutions."""

from __future__ import annotations

import math
from functools import lru_cache

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from forensics.mechanics.ground import least_onset
from forensics.mechanics.kernels_judge import latch
from forensics.mechanics.kernels_march import place_at
from forensics.mechanics.offbottom import SIGMA, OffBottomModel, Weighed
from forensics.well.fluid import constant_fluid
from forensics.well.hole import Hole
from forensics.well.model import Well
from forensics.well.string import Component, String
from forensics.well.trajectory import build_trajectory
from tests.marches import tension_from_bit
from tests.naive_mechanics import weigh_with_slopes
from tests.wells import build_well, one_pipe_well

EDGES = (1900.0, 2600.0)
FACTORS = (0.2, 0.25, 0.3, 0.28)


@lru_cache(maxsize=1)
def model() -> OffBottomModel:
    return OffBottomModel(build_well(turn=0.3), 3400.0).divided(EDGES)


def mixed(count: int, seed: int = 3) -> tuple[list[str], np.ndarray]:
    rng = np.random.default_rng(seed)
    return rng.choice(list(SIGMA), count).tolist(), rng.uniform(20.0, 3390.0, count)


def close(got: np.ndarray, exact: np.ndarray) -> None:
    """To rounding of the largest load."""
    np.testing.assert_array_equal(np.isnan(got), np.isnan(exact))
    np.testing.assert_allclose(got, exact, rtol=0.0, atol=1e-12 * np.nanmax(np.abs(exact)))


@pytest.mark.parametrize("count", [1, 7, 64, 150])
def test_as_the_plain_march(count):
    kinds, bits = mixed(count)
    got = model().weigh_readings(kinds, bits, FACTORS, 0.97)
    slow = [
        weigh_with_slopes(model(), kind, bit, FACTORS, 0.97) for kind, bit in zip(kinds, bits, strict=True)
    ]
    close(got.weight, np.array([weight for weight, _ in slow]))
    close(np.column_stack([got.slopes, got.by_scale]), np.array([by for _, by in slow]))


def test_as_the_plain_march_in_a_helix():
    """Slack-off so rough that the lateral winds up; at the deepest bits the string locks up."""
    bits = np.linspace(2600.0, 3390.0, 60)
    rough = (0.3, 0.45, 0.5, 0.55)
    got = model().weigh_readings(["slack_off"] * 60, bits, rough)
    slow = [weigh_with_slopes(model(), "slack_off", bit, rough) for bit in bits]
    assert model().slack_off_ratio(bits, *rough).max() > 2
    weight = np.array([weight for weight, _ in slow])
    np.testing.assert_array_equal(np.isnan(got.weight), np.isnan(weight))
    # a string about to lock up lets any rounding grow
    sound = weight > -1e6
    assert sound.sum() > 20
    close(got.weight[sound], weight[sound])
    close(got.slopes[sound], np.array([by[:-1] for _, by in slow])[sound])


def test_slopes_are_those_of_small_differences():
    kinds, bits = mixed(100)

    def at(change: int, by: float) -> Weighed:
        moved = [*FACTORS, 1.02]
        moved[change] += by
        return model().weigh_readings(kinds, bits, moved[:-1], moved[-1])

    here = at(0, 0.0)
    slopes = np.column_stack([here.slopes, here.by_scale])
    for p in range(len(FACTORS) + 1):
        step = 1e-5
        difference = (at(p, step).weight - at(p, -step).weight) / (2 * step)
        np.testing.assert_allclose(difference, slopes[:, p], atol=1e-7 * np.abs(slopes[:, p]).max() + 1e-3)


@settings(max_examples=40, deadline=None)
@given(st.floats(30.0, 3390.0), st.lists(st.floats(0.0, 0.35), min_size=4, max_size=4))
def test_more_friction_in_any_section_is_more_drag(bit, factors):
    got = model().weigh_readings(["pick_up", "slack_off"], [bit, bit], factors)
    assert np.all(got.slopes[0] >= 0.0)
    assert np.isnan(got.weight[1]) or np.all(got.slopes[1] <= 0.0)


def test_a_turning_string_knows_no_friction():
    got = model().weigh_readings(["rotating"] * 3, [800.0, 2000.0, 3300.0], FACTORS)
    assert not got.slopes.any()
    np.testing.assert_allclose(got.by_scale, got.weight, rtol=1e-12)


@settings(max_examples=25, deadline=None)
@given(st.floats(30.0, 3390.0), st.floats(0.0, 0.3), st.floats(0.0, 0.3), st.floats(0.8, 1.2))
def test_weights_are_of_first_degree_in_weight(bit, cased, open_hole, scale):
    """Without a helix all forces go with the weights: Euler's theorem for the slope."""
    got = model().weigh_readings(["pick_up"], [bit], (cased, open_hole), scale)
    assert got.by_scale[0] * scale == pytest.approx(got.weight[0], rel=1e-9)


@pytest.mark.parametrize("kind", ["pick_up", "slack_off"])
def test_straight_incline(kind):
    """Exact: W L (cos I -+ mu sin I), so the slope is -+ W L sin I."""
    angle, length = math.radians(55.0), 2000.0
    one = OffBottomModel(one_pipe_well(angle, length), length)
    hangs = float(one.pipe.weight[0]) * length
    got = one.weigh_readings([kind], [length], (0.1, 0.3))
    assert got.weight[0] == pytest.approx(
        hangs * (math.cos(angle) - SIGMA[kind] * 0.3 * math.sin(angle)), rel=1e-6
    )
    np.testing.assert_allclose(got.slopes[0], [0.0, -SIGMA[kind] * hangs * math.sin(angle)], rtol=1e-6)
    assert got.by_scale[0] == pytest.approx(got.weight[0], rel=1e-9)


@pytest.mark.parametrize("kind", ["pick_up", "slack_off"])
def test_capstan_above_a_straight_incline(kind):
    """Exact: heavy pipe on an open incline hangs on weightless pipe in a cased bend of constant rate.

    T = W L (cos a +- mu sin a) exp(+- mu' a) at the rotary, a the angle of the bend, and its slopes.
    """
    angle, bent, straight, sign = math.radians(60.0), 1200.0, 800.0, -SIGMA[kind]
    md = np.array([0.0, bent, bent + straight])
    path = build_trajectory(md, np.array([0.0, angle, angle]), np.zeros(3))
    hole = Hole(
        np.array([0.0, bent]),
        np.array([bent, 2100.0]),
        np.full(2, 0.3),
        ("cased", "open"),
        ("", ""),
        np.full(2, np.nan),
    )
    heavy = Component("heavy", "hwdp", straight, 0.127, 0.0762, 700.0, 0.168)
    light = Component("light", "drillpipe", 9000.0, 0.127, 0.1086, 1e-9, 0.168)
    one = OffBottomModel(Well(path, hole, String((heavy, light)), constant_fluid(0.0)), 2000.0)
    in_bend, on_incline = 0.25, 0.3
    below = 700.0 * straight * (math.cos(angle) + sign * on_incline * math.sin(angle))
    turns = math.exp(sign * in_bend * angle)
    got = one.weigh_readings([kind], [2000.0], (in_bend, on_incline))
    assert got.weight[0] == pytest.approx(below * turns, rel=1e-4)
    exact = [sign * angle * below * turns, sign * 700.0 * straight * math.sin(angle) * turns]
    np.testing.assert_allclose(got.slopes[0], exact, rtol=3e-4)


@settings(max_examples=15, deadline=None)
@given(st.floats(100.0, 3390.0), st.floats(0.0, 2e5), st.floats(0.0, 0.2))
def test_a_loaded_string_without_helices_is_the_replays_march(bit, load, factor):
    up = tension_from_bit(model(), factor, bit, 1.0, -load)[1]
    got = model().loaded_weight([bit, bit], load, (factor, factor))
    np.testing.assert_allclose(got, up[-1], rtol=0.0, atol=1e-12 * np.abs(up).max())


def test_load_ratio_of_a_level_string():
    """Exact: pushed from the rotary, load mu w x, against the Dawson-Paslay load 2 sqrt(EI w / r)."""
    one = OffBottomModel(one_pipe_well(math.pi / 2, 2000.0), 2000.0)
    weight, gap = float(one.pipe.weight[0]), (0.2159 - 0.168) / 2
    # load is taken at the middle of the topmost element of ten metres
    exact = 0.25 * weight * 1995.0 / (2.0 * math.sqrt(float(one.pipe.ei[0]) * weight / gap))
    assert one.slack_off_ratio([500.0, 2000.0], 0.1, 0.25)[1] == pytest.approx(exact, rel=1e-6)


def test_a_depth_beyond_the_tables_is_refused():
    with pytest.raises(ValueError, match="what the tables cover"):
        model().string_weight("pick_up", [100.0, 3500.0], 0.2, 0.2)
    with pytest.raises(ValueError, match="what the tables cover"):
        model().weigh_readings(["pick_up"], [math.nan], FACTORS)


def test_sections_of_one_factor_are_the_whole():
    kinds, bits = mixed(40)
    whole = OffBottomModel(model().well, 3400.0).weigh_readings(kinds, bits, (0.2, 0.3))
    parts = model().weigh_readings(kinds, bits, (0.2, 0.3))
    np.testing.assert_allclose(parts.weight, whole.weight, rtol=1e-13)
    np.testing.assert_allclose(parts.slopes[:, 1:].sum(axis=1), whole.slopes[:, 1], atol=1e-6)


def test_sections_lie_where_the_edges_are():
    one = model()
    md = np.arange(len(one.hole.open_hole)) * one.hole.step
    assert set(one.section[md < 1500.0]) == {0}
    for number, (top, bottom) in enumerate([(1500.0, 1900.0), (1900.0, 2600.0), (2600.0, 3400.0)], start=1):
        inside = (md > top + 0.5) & (md < bottom)
        assert set(one.section[inside]) == {number}
        assert np.all(one.friction(*FACTORS)[inside] == FACTORS[number])
    bits = np.array([1700.0, 2000.0, 3000.0])
    slopes = one.weigh_readings(["pick_up"] * 3, bits, FACTORS).slopes
    np.testing.assert_array_equal(slopes != 0.0, [[1, 1, 0, 0], [1, 1, 1, 0], [1, 1, 1, 1]])


def test_what_does_not_fit_is_refused():
    with pytest.raises(ValueError, match="expected ascending depths"):
        model().divided((2000.0, 1900.0))
    with pytest.raises(ValueError, match="expected 1 or 3"):
        model().friction(0.2, 0.3, 0.4)


@settings(max_examples=200, deadline=None)
@given(st.floats(30.0, 3390.0), st.integers(0, 400), st.floats(1.0, 1e6), st.floats(0.7, 1.3))
def test_no_helix_starts_below_the_least_load(bit, j, load, scale):
    one = model()
    setting = one.setting(0.0, 0.0)
    place = place_at(setting.hole, setting.pipe, bit, scale)
    j = min(j, place.top)
    i = max(place.first - ((int(setting.pipe.node[j]) + int(setting.pipe.node[j + 1])) >> 1), 0)
    least = least_onset(one.criteria)[one.criteria.kind[j], i] * min(scale, 1.0)
    assert not latch(setting, place, j, i, -min(load, 0.999 * least))
