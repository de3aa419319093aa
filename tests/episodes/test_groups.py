"""Groups by rule while few, by likeness where many."""

from __future__ import annotations

import numpy as np
import pytest

from forensics.episodes.find import find_episodes
from forensics.episodes.groups import ROUTINE, _agreements, _cluster, group, is_routine


def test_few_episodes_are_labelled_by_rule(make_run):
    run = make_run().buckle(slice(500, 700)).buckle(slice(1000, 1300), helical=slice(1100, 1200))
    material = run.material()
    episodes, families = group(material, find_episodes(material)[0])
    assert [e.family for e in episodes] == [ROUTINE, "helical buckling while sliding"]
    assert is_routine(episodes[0])
    assert [f.name for f in families] == ["helical buckling while sliding", ROUTINE]
    assert all(np.isnan(f.stability) for f in families)
    assert "load ratio 2.00" in families[0].description


def test_nothing_to_group(make_run):
    assert group(make_run().material(), ()) == ((), ())


def many(make_run):
    """Twelve drag episodes pulling out high up and six helical ones deep down."""
    run = make_run(n=20000).trip("out")
    for n in range(12):
        rows = slice(500 + 400 * n, 600 + 400 * n + 5 * n)
        run.loads["drag_residual"][rows] = 60.0e3 + 2.0e3 * n
    run.values["bit_depth"][10000:] = 4500.0
    run.loads["drag_residual"][10000:] = np.nan
    run.rig["activity"][10000:] = 3
    run.rig["on_bottom"][10000:] = True
    run.rig["wob_surface"][10000:] = 60.0e3
    for n in range(6):
        first = 11000 + 900 * n
        run.buckle(slice(first, first + 400), ratio=1.5 + 0.02 * n, helical=slice(first + 50, first + 200))
    return run


def test_many_episodes_are_grouped_by_likeness(make_run):
    material = many(make_run).material()
    found, _ = find_episodes(material)
    assert len(found) == 18
    episodes, families = group(material, found)
    by_kind = {kind: {e.family for e in episodes if e.kind.value == kind} for kind in ("drag", "buckling")}
    assert by_kind["drag"].isdisjoint(by_kind["buckling"])
    assert sum(len(f.members) for f in families) == 18
    assert all(0.5 <= f.stability <= 1.0 for f in families)
    assert any("helical buckling" in f.name for f in families)
    again = group(material, found)
    assert again == (episodes, families)


def test_identical_episodes_are_one_group():
    labels, stability = _cluster(np.zeros((15, 4)))
    assert set(labels.tolist()) == {0}
    assert stability == {0: 1.0}


def test_agreement_is_one_for_the_same_split_and_low_for_a_chance_one():
    labels = np.repeat([0, 1], 10)
    assert _agreements(labels, 1 - labels) == {0: pytest.approx(1.0), 1: pytest.approx(1.0)}
    mixed = np.tile([0, 1], 10)
    assert all(value < 0.2 for value in _agreements(labels, mixed).values())
