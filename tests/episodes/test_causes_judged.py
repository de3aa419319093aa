"""Causes judged on simulated incidents of another physics than the one they were learned on.

`data/causes/signs.csv.gz` holds what was measured in a few hundred of them; it is made anew by
`benchmarks/bench_causes.py measure` and `thin` whenever a measurement changes. The whole set is judged by
`benchmarks/bench_causes.py judge`.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from forensics.episodes.causes.measures import MEASURES
from tests.benchmarks import bench_causes, causes_judge, causes_learn

SIGNS = Path(__file__).parents[1] / "data" / "causes" / "signs.csv.gz"
SAMPLES = Path(__file__).parents[2] / "sample_logs"


@pytest.fixture(scope="module")
def rows():
    return bench_causes.read_signs(SIGNS)


@pytest.fixture(scope="module")
def judged(rows):
    return causes_judge.ranked(rows)


def test_the_sample_holds_every_measurement_and_cause(rows):
    assert {measure.name for measure in MEASURES} <= set(rows[0])
    assert {row["cause"] for row in rows} == set(causes_learn.CAUSES)
    assert len(rows) >= 300


def test_most_causes_are_told_and_few_surely_wrong(judged):
    scores = causes_judge.scores(*judged)
    assert scores["right"] >= 0.75
    assert scores["wrong"] <= 0.03
    assert scores["stated"] >= 0.4


def test_it_foretells_better_than_simpler_rules(rows, judged):
    own = causes_judge.scores(*judged)
    for name, other in causes_judge.simpler(rows).items():
        simpler = causes_judge.scores(*other)
        assert own["log"] < simpler["log"], name
        assert own["brier"] < simpler["brier"], name


def test_what_is_said_comes_true_as_often(judged):
    """Within ten points, and twice the chance scatter of so few."""
    for low, _, count, said, right in causes_judge.reliability(*judged):
        slack = 0.10 + 2.0 * np.sqrt(said * (1.0 - said) / count)
        assert abs(said - right) <= slack, f"from {low}: said {said:.2f}, came true {right:.2f} of {count}"


def test_learning_finds_what_was_planted():
    """Two causes, one telling measurement among noise: the telling one gets the power and the counts."""
    rng = np.random.default_rng(3)
    telling = next(j for j, m in enumerate(MEASURES) if m.name == "pressure peak")
    cause = rng.integers(0, 2, 400)
    bins = np.column_stack([rng.integers(0, m.bins, 400) for m in MEASURES])
    bins[:, telling] = np.where(rng.random(400) < 0.9, 4 * cause, 4 * (1 - cause))
    content = causes_learn.learn(causes_learn.Table(bins, cause))
    found = content["measures"]["pressure peak"]
    powers = [m["power"] for name, m in content["measures"].items() if name != "pressure peak"]
    assert found["power"] > np.quantile(powers, 0.9)
    counts = {name: np.array(found["counts"][name]) for name in causes_learn.CAUSES[:2]}
    assert counts["buckling"][0] == pytest.approx(0.9 * (cause == 0).sum(), abs=15)
    assert sum(counts["buckling"]) == (cause == 0).sum()


def test_incidents_made_on_the_spot_are_told(tmp_path, monkeypatch):
    monkeypatch.setattr(sys, "path", [*sys.path, str(SAMPLES)])
    from simulator.incident.make import make_incident

    rows = []
    stuck = "differential sticking"
    for cause, seed in (("motor stall", 6100), (stuck, 6201), (stuck, 6204)):
        folder = tmp_path / str(seed)
        make_incident(cause, seed, "other", folder)
        rows.append({"episode": "", "error": ""} | bench_causes.measure(folder))
    assert not any(row["error"] for row in rows)
    found = [{name: str(value) for name, value in row.items()} for row in rows if row["episode"]]
    assert len(found) >= 2
    chance, truth = causes_judge.ranked(found)
    assert (chance.argmax(axis=1) == truth).all()
