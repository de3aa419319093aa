"""The invented incidents: each cause leaves the signature the trade knows it by; a quiet run leaves none."""

from __future__ import annotations

import json
import sys
from pathlib import Path

import numpy as np
import pytest

ROOT = Path(__file__).resolve().parents[1]
sys.path.insert(0, str(ROOT / "sample_logs"))

from simulator.incident.instruments import true_frame  # noqa: E402
from simulator.incident.make import CAUSES, make_incident, play  # noqa: E402
from simulator.incident.physics import SETS  # noqa: E402


@pytest.mark.parametrize("physics", ["one", "other"])
def test_a_quiet_run_is_quiet(physics):
    rig, _, _ = play("nothing wrong", 300, SETS[physics])
    true = true_frame(rig)
    assert true["drag"].abs().max() < 0.1 * true["hanging"].max()
    assert true["ratio"].max() < 1.0
    assert not (true["stalled"] > 0).any()
    assert true["residual"].max() < 1.0  # newtons out of balance at the worst node


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


def test_the_same_seed_gives_the_same_incident():
    first, second = (np.array(play("pack-off", 5, SETS["other"])[0].rows) for _ in range(2))
    np.testing.assert_array_equal(first, second)
