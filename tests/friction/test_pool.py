"""Pooling friction over runs: against closed normal algebra, direct numerical summing, and recovery."""

import numpy as np
import pytest
from scipy import stats

from forensics.friction import pool as pooling
from forensics.friction.pool import Prior, Seen, pool

PRIOR = Prior(0.28, 0.10)
Z = 1.6448536269514722


def seen(name, group, value, sigma):
    return Seen(name, group, value, value - Z * sigma, value + Z * sigma)


def test_with_no_scatter_it_is_the_weighted_mean(monkeypatch):
    """Normal values with one common mean: precision-weighted mean (closed form)."""
    monkeypatch.setattr(pooling, "SCATTER_WITHIN", 1e-9)
    monkeypatch.setattr(pooling, "SCATTER_BETWEEN", 1e-9)
    runs = [seen("a", "g", 0.20, 0.01), seen("b", "g", 0.26, 0.02), seen("c", "g", 0.24, 0.04)]
    weight = np.array([1e4, 2500.0, 625.0])
    precision = weight.sum() + 100.0
    mean = (weight @ [0.20, 0.26, 0.24] + 100.0 * 0.28) / precision
    (group,) = pool(runs, PRIOR).groups
    assert group.mean == pytest.approx(mean, abs=1e-9)
    assert group.high - group.low == pytest.approx(2 * Z / np.sqrt(precision), rel=1e-6)


def test_against_summing_it_out_by_hand(monkeypatch):
    """Two runs: the posterior of the group's mean by brute force on a fine grid of all unknowns."""
    monkeypatch.setattr(pooling, "POINTS", 41)
    runs = [seen("a", "g", 0.18, 0.012), seen("b", "g", 0.30, 0.02)]
    m = np.linspace(-0.3, 0.8, 1501)
    grid = np.linspace(0.0, 4.0, 41)
    total = np.zeros_like(m)
    for w in pooling.SCATTER_WITHIN * grid:
        like = np.prod([stats.norm.pdf(r.value, m, np.hypot(r.sigma, w)) for r in runs], axis=0)
        for b in pooling.SCATTER_BETWEEN * grid:
            weight = np.exp(-0.5 * ((w / pooling.SCATTER_WITHIN) ** 2 + (b / pooling.SCATTER_BETWEEN) ** 2))
            total += weight * like * stats.norm.pdf(m, PRIOR.centre, np.hypot(PRIOR.sigma, b))
    share = np.cumsum(total) / total.sum()
    (group,) = pool(runs, PRIOR).groups
    assert group.mean == pytest.approx(float(total @ m / total.sum()), abs=2e-4)
    assert group.low == pytest.approx(float(np.interp(0.05, share, m)), abs=1e-3)
    assert group.high == pytest.approx(float(np.interp(0.95, share, m)), abs=1e-3)


def test_the_next_run_falls_in_its_range_about_as_often_as_said(monkeypatch):
    """Simulated from the model's own levels: 80 % ranges of 150 groups."""
    monkeypatch.setattr(pooling, "POINTS", 9)
    rng = np.random.default_rng(11)
    hits = 0
    for _ in range(150):
        common = PRIOR.centre + PRIOR.sigma * rng.standard_normal()
        within, between = np.abs(0.05 * rng.standard_normal(2))
        mean = common + between * rng.standard_normal(2)
        runs = []
        for k in range(6):
            sigma = rng.uniform(0.005, 0.03)
            true = mean[k % 2] + within * rng.standard_normal()
            runs.append(seen(f"{k}", "ab"[k % 2], true + sigma * rng.standard_normal(), sigma))
        group = pool(runs, PRIOR).groups[0]
        hits += group.p10 <= mean[0] + within * rng.standard_normal() <= group.p90
    low, high = stats.binom.ppf([0.001, 0.999], 150, 0.8)
    assert low <= hits <= high


def test_runs_are_drawn_towards_their_own_group():
    runs = [seen(f"a{k}", "a", 0.20, 0.01) for k in range(5)] + [seen("odd", "a", 0.26, 0.03)]
    runs += [seen(f"b{k}", "b", 0.35, 0.01) for k in range(5)]
    told = pool(runs, PRIOR)
    odd = next(r for r in told.runs if r.name == "odd")
    assert 0.20 < odd.value < 0.26
    assert [g.group for g in told.groups] == ["a", "b"]
    assert told.groups[0].mean < 0.23
    assert told.groups[1].mean > 0.33
    # a group nobody ran in is known worse than either
    assert told.other.p90 - told.other.p10 > told.groups[0].p90 - told.groups[0].p10


def test_one_run_alone_leaves_the_next_one_wide():
    told = pool([seen("a", "g", 0.25, 0.01)], PRIOR)
    group = told.groups[0]
    assert group.p90 - group.p10 > 0.06
    assert group.runs == 1


def test_nothing_seen_is_refused():
    with pytest.raises(ValueError, match="at least one"):
        pool([], PRIOR)
