"""Slope of hookload against block travel, and the depth at which a string is held."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.episodes.catalogue import Kind
from forensics.episodes.travel import move_of, travel_of, with_free_length
from forensics.mechanics.free_point import give_along

STIFF = 200e3  # N/m


def set_down(make_run, lost, noise=0.5e3, speed=0.03):
    """Lower the block after 100 s; `lost` gives the hookload lost for travel since it hit, in newtons."""
    run = make_run(n=400)
    seconds = np.arange(400.0)
    travel = np.clip(seconds - 100.0, 0.0, 60.0) * speed
    random = np.random.default_rng(2)
    run.rig["block"][:] = 20.0 - travel + random.normal(0.0, 0.001, 400)
    run.rig["hookload"][:] = 700e3 - lost(np.maximum(travel - 1.0, 0.0)) + random.normal(0.0, noise, 400)
    run.noise = {**run.noise, "hookload": noise, "block_position": 0.001}
    return run


def straight(travel):
    return STIFF * travel


def test_a_solid_stop_shows_its_spring_rate(make_run):
    found = move_of(set_down(make_run, straight).material(), 0, 399)
    assert abs(found.stiffness - STIFF) < 3.0 * found.stiffness_sigma
    assert found.stiffness_sigma < 0.1 * STIFF
    assert abs(found.softening) < 3.0 * found.softening_sigma


def test_a_string_that_gives_way_grows_softer(make_run):
    found = move_of(set_down(make_run, lambda x: STIFF * (x - 0.5 * x**2)).material(), 0, 399)
    assert found.softening > 2.0 * found.softening_sigma


def test_a_pick_up_is_measured_the_other_way(make_run):
    run = set_down(make_run, straight)
    run.rig["block"] = 40.0 - run.rig["block"]
    run.rig["hookload"] = 1400e3 - run.rig["hookload"]
    assert move_of(run.material(), 0, 399, 1) is None
    found = move_of(run.material(), 0, 399, -1)
    assert abs(found.stiffness - STIFF) < 3.0 * found.stiffness_sigma


def test_no_slope_is_read_in_slips_while_turning_or_without_a_change(make_run):
    run = set_down(make_run, straight)
    run.rig["slips"][:] = True
    assert move_of(run.material(), 0, 399) is None
    run.rig["slips"][:] = False
    run.rig["turning"][:] = True
    assert move_of(run.material(), 0, 399) is None
    assert move_of(set_down(make_run, lambda x: 0.0 * x).material(), 0, 399) is None
    assert move_of(set_down(make_run, straight).material(), 0, 2) is None


def test_only_lockup_and_drag_are_asked(make_run):
    material = set_down(make_run, straight).material()
    episode = SimpleNamespace(kind=Kind.BUCKLING, start=material.time[0], end=material.time[-1], peak=0)
    assert travel_of(material, episode) is None
    episode.kind = Kind.LOCKUP
    assert travel_of(material, episode).sense == 1


def string(ea=7.0e8, fades=(-2e-4, -1.5e-4, -1e-4), count=300, length=10.0):
    md = length * np.arange(1, count + 1)
    pieces, give = np.full(count, length), np.full(count, 1.0 / ea)
    rubbed = np.array([give_along(pieces, give, np.full(count, fade)) for fade in fades])
    return SimpleNamespace(md=md, elastic=give_along(pieces, give, np.zeros(count)), rubbed=rubbed)


def test_the_free_length_covers_where_the_string_is_held(make_run):
    along = string()
    stiff = 1.0 / np.interp(1500.0, along.md, along.rubbed[1])
    run = set_down(make_run, lambda x: stiff * x)
    found = with_free_length(move_of(run.material(), 0, 399), along)
    assert found.free_length.low < 1500.0 < found.free_length.high
    assert found.free_length.value == pytest.approx(1500.0, rel=0.15)
    assert found.elastic_length < found.free_length.value  # friction's share left out makes it shorter
    assert found.free_length.determined


def test_a_slope_softer_than_the_whole_string_tells_no_depth(make_run):
    found = with_free_length(move_of(set_down(make_run, lambda x: 40e3 * x).material(), 0, 399), string())
    assert found.free_length.value == pytest.approx(3000.0)
    assert not found.free_length.determined
