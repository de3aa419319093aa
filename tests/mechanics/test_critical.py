"""Critical loads: criteria, thresholds, self-consistent loads, and the compiled twins."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import naive_mechanics as naive
from forensics.errors import CaseError
from forensics.mechanics import critical, threshold
from forensics.mechanics import kernels_critical as kernels
from forensics.mechanics.eigen import load_table
from forensics.mechanics.selfconsistent import ContactSize, local_load, lowest_crossing

TABLE = load_table().as_tuple()
EI, GAP = 1.2288e6, 0.0445


def compiled(ei, contact, clearance, w_cos, length):
    place = kernels.log_scaled_length(length, ei, w_cos)
    return kernels.sinusoidal_load(ei, contact, clearance, w_cos, place, TABLE)


@settings(max_examples=200, deadline=None)
@given(
    st.floats(1e4, 1e8),
    st.one_of(st.just(0.0), st.floats(1e-6, 1e5)),
    st.floats(0.002, 0.3),
    st.one_of(st.just(0.0), st.floats(-5e3, 5e3), st.floats(1e-12, 1.0)),
    st.floats(1.0, 1e4),
)
def test_compiled_sinusoidal_is_the_array_version(ei, contact, clearance, w_cos, length):
    fast, local, log_n = compiled(ei, contact, clearance, w_cos, length)
    assert fast == pytest.approx(
        float(threshold.sinusoidal_load(ei, contact, clearance, w_cos, length)), rel=1e-9
    )
    assert local == pytest.approx(float(local_load(ei, contact, clearance)), rel=1e-12)
    for onset in (math.sqrt(2), 2 * math.sqrt(2)):
        n = math.exp(min(log_n, 700.0))
        slow = float(threshold.helical_load(ei, local, w_cos, onset))
        assert kernels.helical_load(local, ei, w_cos, n, onset) == pytest.approx(slow, rel=1e-9)
        prepared = kernels.helical_prepared(local, kernels.weight_cube(ei, w_cos), log_n, onset)
        assert prepared == pytest.approx(slow, rel=1e-9)


@pytest.mark.parametrize("inclination", [0.5, 3.0, 10.0, 30.0, 60.0, 89.0, 95.0])
@pytest.mark.parametrize("length", [120.0, 900.0])
def test_threshold_is_the_slow_one(inclination, length):
    angle = math.radians(inclination)
    contact, w_cos = 240 * math.sin(angle), 240 * math.cos(angle)
    slow = naive.sinusoidal(EI, contact, GAP, w_cos, length)
    assert threshold.sinusoidal_load(EI, contact, GAP, w_cos, length) == pytest.approx(slow, rel=2e-3)
    local = float(local_load(EI, contact, GAP))
    n = (EI / w_cos) ** (1 / 3) * contact / (GAP * w_cos) if w_cos > 0 else math.inf
    for onset in critical.HELICAL_ONSETS.values():
        slow = naive.helical(local, EI, w_cos, n, onset.factor)
        assert threshold.helical_load(EI, local, w_cos, onset.factor) == pytest.approx(slow, rel=1e-7)


def test_near_vertical_term_depends_on_length_and_is_lubinskis_at_one_length_only():
    w = 1240.0
    scale = (1.7e7 / w) ** (1 / 3)
    unit = (1.7e7 * w**2) ** (1 / 3)
    term = threshold.near_vertical_term(1.7e7, 0.0, w, scale * np.array([7.9278, 20.0, 80.0])) / unit
    # Lubinski 1950, from memory; lengths 20 and 80: computed two ways
    np.testing.assert_allclose(term, [1.94, 1.71104, 1.51858], rtol=5e-4)


def test_no_term_where_the_hole_is_level_or_goes_up():
    np.testing.assert_array_equal(threshold.near_vertical_term(EI, 1e5, [0.0, -50.0], 100.0), 0.0)
    assert compiled(EI, 200.0, GAP, -1.0, 100.0)[0] == float(local_load(EI, 200.0, GAP))


def test_term_falls_smoothly_to_nothing_as_the_hole_levels():
    w_cos = 240 * np.cos(np.radians([88.0, 89.9, 89.9999]))
    term = threshold.near_vertical_term(EI, 1.6e5, w_cos, 3000.0)
    assert np.all(np.diff(term) < 0)
    assert term[-1] < 20.0


def test_helical_blend_is_continuous_and_meets_both_ends():
    unit = float(threshold.weight_cube(EI, 200.0))
    for onset in critical.HELICAL_ONSETS.values():
        m = onset.factor
        part = [
            float(threshold.helical_load(EI, 2 * unit * math.sqrt(n), 200.0, m)) / unit - 2 * m * math.sqrt(n)
            for n in (1e-9, 1.0, 10.0, 100.0, 1e4)
        ]
        flat = 1.6172330 * m
        np.testing.assert_allclose(part, [5.55, 5.55, (5.55 + flat) / 2, flat, flat], rtol=1e-6)


@pytest.mark.parametrize(
    ("name", "factor"), [("chen", 1.41421356), ("wu", 1.82842712), ("mitchell", 2.82842712)]
)
def test_dispatcher_gives_each_published_onset(name, factor):
    onset = critical.helical_onset(name)
    place = critical.Place(EI, GAP, 240.0, np.radians([20.0, 90.0]))
    np.testing.assert_allclose(onset.criterion(place) / critical.dawson_paslay_1984(place), factor, rtol=1e-8)
    assert onset.factor == pytest.approx(factor, rel=1e-8)
    assert critical.CRITERIA[onset.criterion].kind == "helical"


def test_unknown_names_are_refused_with_the_nearest():
    with pytest.raises(CaseError, match="did you mean 'mitchell'"):
        critical.helical_onset("mitchel")
    with pytest.raises(CaseError, match="did you mean 'envelope'"):
        threshold.release_load(1.0, 1.0, "envelop")


def test_release_rules():
    np.testing.assert_allclose(threshold.release_load([10.0, 10.0], [5.0, 9.0], "unbuckled"), 10.0)
    held = threshold.release_load([10.0, 10.0], [5.0, 9.0], "envelope")
    np.testing.assert_allclose(held, [10.0, 9.0 * 1.370405])


def test_every_criterion_has_the_same_form_and_a_range():
    place = critical.Place(EI, GAP, [240.0, 240.0], np.radians([2.0, 60.0]), np.radians(0.5) / 30, 0.0)
    for criterion, validity in critical.CRITERIA.items():
        assert criterion(place).shape == (2,)
        assert validity.covers(place).tolist() == [False, True]
        assert criterion.__name__[-4:].isdigit()


def test_curved_hole_in_a_drop_meets_the_lower_root():
    # 3 deg per 100 ft drop at 60 deg: the slow march from zero finds the first crossing
    for rate in (-3.0, -1.0, -0.2, 0.0, 0.5):
        k = math.radians(rate) / 30.48
        side = 258.3 * math.sin(math.radians(60))
        slow = naive.first_crossing(lambda f, k=k, s=side: 2 * math.sqrt(EI * abs(s + f * k) / GAP), 6e5)
        place = critical.Place(EI, GAP, 258.3, math.radians(60), k)
        assert critical.he_kyllingstad_1995(place) == pytest.approx(slow, rel=1e-9)


def test_a_turn_raises_the_load_whichever_way():
    rates = np.radians([-3.0, 0.0, 3.0]) / 30.48
    left, straight, right = critical.he_kyllingstad_1995(critical.Place(EI, GAP, 258.3, 1.0, 0.0, rates))
    assert left == pytest.approx(right)
    assert left > straight
    assert straight == pytest.approx(float(critical.dawson_paslay_1984(critical.Place(EI, GAP, 258.3, 1.0))))


@pytest.mark.parametrize(("inclination", "rate"), [(4.0, 2.0), (10.0, -1.5), (45.0, 3.0), (80.0, -3.0)])
def test_self_consistent_load_with_the_near_vertical_term(inclination, rate):
    angle, k, w = math.radians(inclination), math.radians(rate) / 30, 300.0
    side = w * math.sin(angle)
    size = ContactSize(side**2, side * k, k**2)
    w_cos = w * math.cos(angle)
    load = float(threshold.self_consistent_load(EI, GAP, w_cos, 400.0, size))
    own = threshold.sinusoidal_load(EI, abs(side + load * k), GAP, w_cos, 400.0)
    assert load == pytest.approx(float(own), rel=1e-5)
    slow = naive.first_crossing(
        lambda f: float(threshold.sinusoidal_load(EI, abs(side + f * k), GAP, w_cos, 400.0)), 5e5, 3000
    )
    assert load == pytest.approx(slow, rel=1e-5)


def test_self_consistent_load_takes_arrays_and_keeps_missing_rows():
    size = ContactSize(np.array([2e4, np.nan]), np.zeros(2), np.zeros(2))
    load = threshold.self_consistent_load(EI, GAP, 100.0, 400.0, size)
    np.testing.assert_array_equal(np.isnan(load), [False, True])
    assert threshold.self_consistent_load(EI, GAP, 100.0, 400.0, ContactSize([], [], [])).shape == (0,)


def test_weightless_straight_place_has_no_load():
    assert critical.he_kyllingstad_1995(critical.Place(EI, GAP, 0.0, 1.0)) == pytest.approx(0.0, abs=1e-6)


def test_units_cancel():
    # stretching every length by two and every force by three must stretch loads by three
    one = threshold.sinusoidal_load(EI, 100.0, GAP, 150.0, 200.0)
    two = threshold.sinusoidal_load(EI * 3 * 4, 100.0 * 3 / 2, GAP * 2, 150.0 * 3 / 2, 400.0)
    assert two == pytest.approx(3 * float(one), rel=1e-12)


@settings(max_examples=150, deadline=None)
@given(st.floats(1.0, 110.0), st.floats(-8.0, 8.0), st.floats(-8.0, 8.0), st.floats(0.0, 2e4))
def test_self_consistent_load_is_the_lowest_there_is(degrees, build, turn, term):
    """Whichever way the hole goes: the load meets its own criterion, and no lower load does."""
    angle, w = math.radians(degrees), 258.3
    side, k, sideways = (
        w * math.sin(angle),
        math.radians(build) / 30,
        math.radians(turn) / 30 * math.sin(angle),
    )
    size = ContactSize(side**2, side * k, k**2 + sideways**2)
    load = float(lowest_crossing(np.array(EI / GAP), size, term))

    def own(force: np.ndarray | float) -> np.ndarray:
        contact = np.hypot(side + np.asarray(force) * k, np.asarray(force) * sideways)
        return term + 2 * np.sqrt(EI * contact / GAP)

    assert float(own(load)) == pytest.approx(load, rel=1e-5, abs=1.0)
    lower = np.linspace(0.0, load * (1 - 1e-4), 400)
    assert np.all(own(lower) > lower - 1.0)
