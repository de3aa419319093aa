"""The likely path: scatter within the survey's accuracy goes, bends stay, and its doubt is honest."""

from __future__ import annotations

import numpy as np
import pytest

from forensics.well.likely import STATION_SIGMA, likely_path
from forensics.well.trajectory import angle_between, build_trajectory, tangent_of


def tangents(path):
    return tangent_of(path.inclination, path.azimuth)


def kick_off(rng, sigma):
    """Two degrees, built at 2.5 degrees per 30 m from station 50 on, held at 62: truth and survey."""
    md = np.arange(0.0, 3601.0, 30.0)
    inclination = np.radians(2.0 + 2.5 * np.clip(np.arange(len(md)) - 50, 0, 24))
    truth = tangent_of(inclination, np.full(len(md), 0.6))
    seen = truth + sigma * rng.standard_normal(truth.shape)
    surveyed = build_trajectory(
        md, np.arctan2(np.hypot(seen[:, 0], seen[:, 1]), seen[:, 2]), np.arctan2(seen[:, 1], seen[:, 0])
    )
    return truth, surveyed


def test_scatter_goes_and_the_kick_off_stays():
    truth, surveyed = kick_off(np.random.default_rng(2), STATION_SIGMA)
    likely = likely_path(surveyed, STATION_SIGMA).mean
    straight = slice(2, 48)
    assert np.median(likely.dogleg[straight]) < 0.5 * np.median(surveyed.dogleg[straight])
    assert np.degrees(likely.dogleg[52:72]) == pytest.approx(2.5, abs=0.2)
    # a bend smeared over its neighbours would move the station at its start by far more than it may be off
    assert angle_between(tangents(likely), tangents(surveyed)).max() < 4.0 * STATION_SIGMA
    before, after = (angle_between(tangents(path), truth) for path in (surveyed, likely))
    assert np.sqrt(np.mean(after**2)) < 0.85 * np.sqrt(np.mean(before**2))


def test_a_survey_without_scatter_stands():
    _, surveyed = kick_off(np.random.default_rng(0), 0.0)
    found = likely_path(surveyed, STATION_SIGMA)
    assert angle_between(tangents(found.mean), tangents(surveyed)).max() < 0.5 * STATION_SIGMA
    assert found.sigma < 0.75 * STATION_SIGMA


def test_the_survey_speaks_for_its_own_accuracy():
    found = [likely_path(kick_off(np.random.default_rng(k), s * STATION_SIGMA)[1], STATION_SIGMA).sigma
             for k, s in enumerate((0.4, 1.0, 1.8))]  # fmt: skip
    assert found[0] < found[1] < found[2]
    assert found[1] == pytest.approx(STATION_SIGMA, rel=0.25)


def test_draws_hold_the_truth_as_often_as_they_say():
    """Paths whose curvature wanders as bits do, surveyed with error: 90 % intervals over 40 of them."""
    inside = []
    for k in range(40):
        rng = np.random.default_rng(100 + k)
        md = np.arange(0.0, 1801.0, 30.0)
        bends = np.cumsum(np.radians(0.3) * rng.standard_normal((len(md), 2)), axis=0) * 0.3
        way = np.cumsum(bends, axis=0)
        true = np.column_stack([way + np.array([0.3, 0.0]), np.ones(len(md))])
        true /= np.linalg.norm(true, axis=1)[:, None]
        seen = true + STATION_SIGMA * rng.standard_normal(true.shape)
        inclination = np.arctan2(np.hypot(seen[:, 0], seen[:, 1]), seen[:, 2])
        surveyed = build_trajectory(md, inclination, np.arctan2(seen[:, 1], seen[:, 0]))
        found = likely_path(surveyed, STATION_SIGMA)
        spread = found.draw(rng.standard_normal((len(md), 200))).std(axis=1)
        off = tangents(found.mean) - true
        across = off - np.einsum("ij,ij->i", off, true)[:, None] * true
        inside.append(np.mean(np.abs(across[:, 1]) < 1.645 * spread))
    assert 0.84 <= np.mean(inside) <= 0.95


def test_draws_spread_as_the_full_matrix_says():
    """Slow twin: the inverse of the same precision, put together densely."""
    _, surveyed = kick_off(np.random.default_rng(3), STATION_SIGMA)
    found = likely_path(surveyed, STATION_SIGMA)
    upper = np.zeros((len(surveyed.md),) * 2)
    for k in range(3):
        upper += np.diag(found.factor[2 - k, k:], k)
    draws = found.draw(np.random.default_rng(0).standard_normal((len(upper), 6000)))
    assert np.allclose(draws.std(axis=1), np.sqrt(np.diag(np.linalg.inv(upper.T @ upper))), rtol=0.06)


@pytest.mark.parametrize("stations", [1, 2, 3, 121])
def test_an_exact_survey_is_the_path(stations):
    _, surveyed = kick_off(np.random.default_rng(4), STATION_SIGMA)
    few = build_trajectory(
        surveyed.md[:stations], surveyed.inclination[:stations], surveyed.azimuth[:stations]
    )
    found = likely_path(few, 0.0)
    assert found.mean is few
    assert np.abs(found.draw(np.ones((stations, 1)))).max() < 1e-8
