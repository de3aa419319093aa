"""The helix under side weight: two solutions against each other, its limits, and what whirling does."""

from __future__ import annotations

import math

import numpy as np
import pytest

from forensics.mechanics import helix_limit as limit
from forensics.mechanics.helix_shape import (
    NoHelixError,
    by_boundary_values,
    by_collocation,
    first_order,
    weightless,
)
from forensics.mechanics.threshold import ENVELOPE_RELEASE

ROUND = np.linspace(0, math.pi, 91)


@pytest.mark.parametrize(
    ("mean", "gamma"),
    [(0.46102, 0.1331196), (0.46, 0.2), (0.3, 0.05), (0.2, 0.01), (0.7, 0.1)],
    ids=["at the limit", "pulled to the wall", "slack", "near 1/7", "tight"],
)
def test_two_independent_solutions_agree(mean, gamma):
    series, path = by_collocation(mean, gamma), by_boundary_values(mean, gamma)
    np.testing.assert_allclose(series.square_slope(path.angle), path.slope**2, rtol=0, atol=1e-8)
    np.testing.assert_allclose(series.along(path.angle), path.along, rtol=0, atol=1e-8)
    pressed = gamma * np.cos(path.angle) + path.slope**2 - path.slope**4
    pressed += 3 * path.bend**2 + 4 * path.slope * path.twist
    np.testing.assert_allclose(series.wall_force(path.angle), pressed, rtol=0, atol=1e-8)
    assert series.turn == pytest.approx(2 * path.half_turn, abs=1e-8)


def test_energy_of_the_shape_is_level():
    # the equation once integrated: the same constant all round, a balance the solver was not given there
    shape = by_collocation(0.46102, 0.1331196)
    angle = np.linspace(0.013, 3.1, 50)
    p, slope, bend = (shape.square_slope(angle, order) for order in range(3))
    level = p * bend / 2 - slope**2 / 8 - 1.5 * p**2 + p / 2 - shape.gamma * np.cos(angle)
    assert np.ptp(level) < 1e-12


def test_derivatives_of_the_series():
    shape = by_collocation(0.4, 0.1)
    h = 1e-5
    for order in (0, 1):
        ahead, behind = shape.square_slope(1 + h, order), shape.square_slope(1 - h, order)
        assert shape.square_slope(1.0, order + 1) == pytest.approx((ahead - behind) / (2 * h), abs=1e-9)


def test_side_weight_presses_as_much_as_it_weighs_over_a_turn():
    # vertical balance of one turn: wall force, as a vector, carries the weight
    shape = by_collocation(0.46102, 0.1331196)
    angle = np.linspace(0, 2 * math.pi, 400, endpoint=False)
    length = 1 / np.sqrt(shape.square_slope(angle))
    carried = (shape.wall_force(angle) * np.cos(angle) * length).sum() / length.sum()
    assert carried == pytest.approx(shape.gamma, rel=1e-10)


def test_weightless_helix_presses_evenly():
    shape = by_collocation(0.5, 0.0)
    np.testing.assert_allclose(shape.square_slope(ROUND), 0.5, atol=1e-14)
    np.testing.assert_allclose(shape.wall_force(ROUND), 0.25, atol=1e-14)
    # Lubinski's pitch: 2 pi sqrt(2 EI / F)
    assert shape.turn == pytest.approx(2 * math.pi * math.sqrt(2))


def test_first_order_answer_is_good_to_second_order():
    wide, narrow = (
        np.abs(by_collocation(0.5, g).square_slope(ROUND) - first_order(0.5, g).square_slope(ROUND)).max()
        for g in (0.02, 0.01)
    )
    assert wide / narrow == pytest.approx(4.0, rel=0.05)


def test_unloading_limit():
    found = limit.unloading_limit()
    assert found.ratio == pytest.approx(1.370405, abs=5e-7)
    assert found.mean == pytest.approx(0.46102, abs=5e-6)
    assert found.gamma == pytest.approx(0.1331196, abs=5e-8)
    assert pytest.approx(found.ratio, abs=5e-7) == ENVELOPE_RELEASE
    shape = by_collocation(found.mean, found.gamma)
    assert shape.least_wall_force() == pytest.approx(0.0, abs=1e-9)
    assert shape.wall_force(math.pi) == pytest.approx(shape.least_wall_force())


def test_no_other_slope_bears_more_side_weight():
    most = limit.unloading_limit().gamma
    gammas = [limit.largest_gamma(mean) for mean in (0.15, 0.3, 0.44, 0.48, 0.6, 0.9)]
    assert max(gammas) < most
    assert gammas[2] > 0.99 * most


def test_contact_ends_first_for_tight_helices_and_existence_first_for_slack_ones():
    assert limit.largest_gamma(0.3) == limit.largest_gamma(0.3, contact=False)
    assert limit.largest_gamma(0.46) < 0.6 * limit.largest_gamma(0.46, contact=False)


def test_helices_exist_between_a_seventh_and_one():
    # at both ends nothing is borne: the fold comes down at 1/7, contact is lost at 1
    assert limit.largest_gamma(1 / 7 + 1e-3) < 1e-4
    assert limit.largest_gamma(0.999) == pytest.approx(0.0, abs=1e-3)
    assert weightless(1.0).least_wall_force() == pytest.approx(0.0, abs=1e-15)
    for mean in (0.14, 1.0):
        with pytest.raises(ValueError, match="between 1/7 and 1"):
            limit.largest_gamma(mean)


def test_what_is_no_helix_is_refused():
    with pytest.raises(NoHelixError, match="no helix of mean"):
        by_collocation(0.3, 0.2)
    with pytest.raises(NoHelixError):
        by_boundary_values(0.3, 0.1)


def test_weightless_helix_is_stable_above_a_sixth():
    # second variation of the even helix: wave number squared plus 6 k^2 - 1
    for mean in (0.15, 0.2, 0.5):
        assert limit.rigidity(weightless(mean)) == pytest.approx(6 * mean - 1, abs=2e-4)
    assert limit.least_stable_mean(0.0) == pytest.approx(1 / 6)
    assert limit.least_stable_mean(1e-6) == pytest.approx(1 / 6, rel=1e-3)


def test_helix_at_the_unloading_limit_is_stable():
    found = limit.unloading_limit()
    shape = by_collocation(found.mean, found.gamma)
    assert min(limit.rigidity(shape, wave) for wave in (0.02, 0.1, 0.3, 0.6, 1.0)) > 0.9


def test_long_waves_are_the_first_to_grow():
    bound = limit.least_stable_mean(0.05)
    just, under = by_collocation(bound + 2e-3, 0.05), by_collocation(bound - 2e-3, 0.05)
    assert all(limit.rigidity(just, wave) > 0 for wave in (0.02, 0.1, 0.3, 0.6, 1.0))
    assert limit.rigidity(under) < 0


def test_side_weight_takes_stability_before_existence():
    bound = limit.least_stable_mean(0.06)
    assert 1 / 6 < bound < 0.46
    assert limit.largest_gamma(bound, contact=False) > 0.06
    with pytest.raises(ValueError, match="gamma came as"):
        limit.least_stable_mean(0.13)


def test_lying_still_a_helix_lets_go_at_the_limit():
    np.testing.assert_allclose(limit.unloading_load([0.0, 1e5]), [0.0, 137040.5], atol=0.1)


def test_whirling_helix_is_the_resting_one_at_more_compression():
    # 45 kg/m at two turns a second: the wave's own speed gives the same m c^2
    local, stiffness, mass, rate = 1.7e5, 1.23e6, 45.0, 4 * math.pi
    found = limit.unloading_limit()
    total = found.ratio * local
    speed = rate / (math.sqrt(found.mean) * math.sqrt(total / stiffness))
    left = float(limit.unloading_load(local, stiffness, mass, rate))
    assert left == pytest.approx(total - mass * speed**2, rel=1e-12)
    assert left < float(limit.unloading_load(local, stiffness, mass, rate / 2)) < total
    assert limit.unloading_load(local, stiffness, mass, 20 * rate) == 0
    # the mean slope is taken as k
    shape = by_collocation(found.mean, found.gamma)
    assert 2 * math.pi / shape.turn == pytest.approx(math.sqrt(found.mean), rel=0.015)
