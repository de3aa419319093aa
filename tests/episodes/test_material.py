"""Quantities the rules share, against what the plain well makes them."""

from __future__ import annotations

import numpy as np
import pytest


def test_spring_rate_is_stiffness_over_length(make_run):
    material = make_run().material()
    np.testing.assert_allclose(material.spring_rate, 600.0e6 / 4000.0)


def test_spring_rate_goes_on_with_the_top_pipe(make_run):
    run = make_run()
    run.values["bit_depth"][:] = 5000.0
    np.testing.assert_allclose(run.material().spring_rate, 600.0e6 / 5000.0)


def test_open_share_follows_inclined_length_and_friction(make_run):
    """Inclined from 1500 m, shoe at 2000 m, bit at 4000 m; factors 0.2 and 0.3."""
    share = make_run().material().open_share[0]
    assert share == pytest.approx(2000.0 * 0.3 / (2000.0 * 0.3 + 500.0 * 0.2), abs=0.02)


def test_friction_multiple_is_one_at_the_calibrated_factors(make_run):
    material = make_run().material()
    multiple = material.friction_multiple(np.array([0]), np.array([[0.2, 0.3], [0.4, 0.6]]))
    np.testing.assert_allclose(multiple[:, 0], [1.0, 2.0])


def test_drag_is_positive_for_more_friction_either_way(make_run):
    for direction in ("in", "out"):
        material = make_run().trip(direction, slice(500, 900), extra=60.0e3).material()
        assert np.all(material.drag[500:900] == 60.0e3)


def test_windows_are_never_under_three_samples(make_run):
    assert make_run(interval=15.0).material().window(20.0) == 45.0
    assert make_run().material().window(20.0) == 20.0


def test_unknown_depths_are_passed_over(make_run):
    run = make_run()
    run.values["bit_depth"][10:20] = np.nan
    material = run.material()
    assert np.isnan(material.rotating_weight[10:20]).all()
    assert np.isfinite(material.rotating_weight[30:]).all()
