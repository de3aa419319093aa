"""What the analysis makes of the sample wells, against the truth that came with them.

The logs were made by `sample_logs/simulator`, a lumped elastic string in time that shares no code and no
formulation with the analysis, with errors of modulus, weight, friction, survey, drilling rate and rig
sensors that the case files do not tell.
"""

from __future__ import annotations

import gzip
import json
from functools import lru_cache
from pathlib import Path
from types import SimpleNamespace

import numpy as np
import pandas as pd
import pytest
from sklearn.metrics import f1_score

from forensics.case import load_case
from forensics.episodes.catalogue import Kind, State
from forensics.report.derived import helix_bending_stress
from forensics.rig.view import Activity
from pipelines.analysis import analyse
from pipelines.progress import Progress

SAMPLES = Path(__file__).parent.parent / "sample_logs"
WELLS = ("lateral_slide", "lateral_twin", "liner_lockup", "cuttings_friction")
STATES = {"none": 0, "sinusoidal": 1, "helical": 2}


@lru_cache(maxsize=4)
def well(name: str) -> SimpleNamespace:
    """Analyse a sample and lay its truth beside it, row by row."""
    folder = SAMPLES / name
    found = analyse(load_case(folder / "case.toml"), Progress(quiet=True))
    with gzip.open(folder / "truth.csv.gz", "rt") as file:
        truth = pd.read_csv(file)
    since = pd.to_datetime(truth["time"], utc=True) - pd.Timestamp(0, tz="UTC")
    stamps = since.dt.total_seconds().to_numpy()
    _, mine, its = np.intersect1d(found.log.time.round(3), stamps.round(3), return_indices=True)
    assert len(mine) > 0.99 * len(truth)
    facts = json.loads((folder / "truth.json").read_text())
    return SimpleNamespace(found=found, truth=truth.iloc[its], rows=mine, facts=facts)


def seconds(spans: list[list[str]]) -> list[tuple[float, float]]:
    return [(pd.Timestamp(a).timestamp(), pd.Timestamp(b).timestamp()) for a, b in spans]


def states(case: SimpleNamespace) -> tuple[np.ndarray, np.ndarray]:
    return case.truth["state"].map(STATES).to_numpy(), case.found.loads.state[case.rows]


@pytest.mark.parametrize("kind", ["cased", "open"])
@pytest.mark.parametrize("name", WELLS)
def test_friction_is_found_with_an_honest_interval(name, kind):
    case = well(name)
    factor = next(s.factor for s in case.found.calibration.sections if s.kind == kind)
    true = case.facts["friction"]["cased_deviated" if kind == "cased" else kind]
    assert factor.determined
    assert factor.value == pytest.approx(true, abs=0.02)
    assert factor.high - factor.low <= 0.06
    assert factor.low - 0.01 <= true <= factor.high + 0.01


@pytest.mark.parametrize("name", WELLS)
def test_activity_is_told_sample_by_sample(name):
    case = well(name)
    told = [Activity(code).word for code in case.found.rig.activity[case.rows]]
    true = case.truth["activity"].tolist()
    assert f1_score(true, told, labels=sorted(set(true)), average="macro", zero_division=0) >= 0.9


@pytest.mark.parametrize("name", ["lateral_slide", "liner_lockup"])
def test_helical_samples_are_found(name):
    true, told = states(well(name))
    assert f1_score(true == 2, told == 2) >= 0.9


@pytest.mark.parametrize("name", ["lateral_twin", "cuttings_friction"])
def test_friction_alone_is_not_taken_for_a_helix(name):
    case = well(name)
    assert not (case.found.loads.state == 2).any()
    assert not any(e.kind in (Kind.LOCKUP,) or e.state == "helical" for e in case.found.episodes)


@pytest.mark.parametrize("name", ["lateral_slide", "lateral_twin", "cuttings_friction"])
def test_bit_load_is_reconstructed(name):
    case = well(name)
    true = case.truth["bit_load_kN"].to_numpy()
    error = case.found.loads.bit_load[case.rows] / 1e3 - true
    assert np.sqrt(np.mean(error**2)) < 0.1 * np.ptp(true)


def test_a_partial_pick_up_keeps_the_lock_in():
    """While the surface weight is back to nothing, what the simulator keeps on the bit is kept."""
    case = well("lateral_slide")
    true = case.truth["bit_load_kN"].to_numpy()
    surface = case.truth["wob_surface_kN"].to_numpy()
    sliding = (case.truth["activity"] == "drill_slide").to_numpy()
    locked = sliding & (true > 15.0) & (surface < 0.5 * true)
    assert locked.sum() > 20
    told = case.found.loads.bit_load[case.rows] / 1e3
    assert np.mean(np.abs(told - true)[locked]) < 0.1 * np.ptp(true)
    assert np.mean(told[locked]) > 0.7 * np.mean(true[locked])


def test_the_twin_and_the_slide_differ_in_cause_not_in_weight():
    """Both lose weight; only one buckles, and only that one's report says so."""
    slide, twin = well("lateral_slide").found, well("lateral_twin").found
    assert any(e.kind is Kind.BUCKLING and e.cause.startswith("buckling") for e in slide.episodes)
    assert not any(e.cause.startswith("buckling") for e in twin.episodes)
    assert "buckl" in slide.headline.sentence


def test_the_liner_is_seen_to_lock_up():
    case = well("liner_lockup")
    spans = seconds(case.facts["lockup_intervals"])
    long = [span for span in spans if span[1] - span[0] >= 20.0]
    found = [(e.start, e.end) for e in case.found.episodes if e.kind is Kind.LOCKUP]
    seen = [any(start < b and end > a for start, end in found) for a, b in long]
    assert long
    assert np.mean(seen) >= 0.75


def test_drag_of_cuttings_is_found_where_it_was():
    case = well("cuttings_friction")
    key = next(k for k in case.facts if k.startswith("drag"))
    spans = seconds(case.facts[key])
    found = [(e.start, e.end) for e in case.found.episodes if e.kind is Kind.DRAG]
    seen = [any(start < b and end > a for start, end in found) for a, b in spans]
    real = [any(start < b and end > a for a, b in spans) for start, end in found]
    assert np.mean(seen) >= 0.8
    assert np.mean(real) >= 0.8


@pytest.mark.parametrize("name", ["lateral_slide", "liner_lockup"])
def test_helical_episodes_say_what_they_passed_and_what_they_did_to_the_pipe(name):
    """The onset that flags a helix is Chen's, and its bending is Lubinski's at the place of the peak."""
    found = well(name).found
    helical = [e for e in found.episodes if e.state is State.HELICAL and e.kind is Kind.BUCKLING]
    assert helical
    assert all("past Chen" in e.onsets or e.onsets == "past all criteria" for e in helical)
    for episode in (e for e in helical if e.id in found.tolls):
        buckled = [part for part in found.tolls[episode.id].parts if part.state == 2]
        assert buckled
        published = helix_bending_stress(found, episode, episode.peak_compression.value)
        # the greatest load ratio need not be where it bends most, and the hole bends it too
        assert max(part.bending for part in buckled) >= 0.95 * published > 0
        assert all(part.stress >= part.bending for part in buckled)
        assert all(np.isnan(part.use) for part in buckled)  # these tallies give no yield
