"""The replay under everything uncertain: what a draw may change, and what the run's readings hold."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from cases import Job, make_case
from forensics.case import load_case
from forensics.mechanics.departed import departed
from forensics.replay.bands import band
from forensics.replay.doubt import NAMES, Refit, departure, joint_draws, weight_factor
from forensics.replay.draws import ALL, FIRST, more_draws, replay_draws
from forensics.replay.ready import ready
from forensics.replay.run import replay
from forensics.rig.view import Activity
from pipelines.analysis import calibrate_run, understand
from pipelines.progress import Progress


@pytest.fixture(scope="module")
def run(tmp_path_factory):
    case = load_case(make_case(tmp_path_factory.mktemp("draws"), Job(duration=5400.0)))
    progress = Progress(quiet=True)
    found = understand(case, progress)
    model, calibration = calibrate_run(found, progress)
    return ready(found.log, found.well, found.rig, calibration, case, model)


@pytest.fixture(scope="module")
def slid(run):
    return run.rig.activity == Activity.DRILL_SLIDE


@pytest.fixture(scope="module")
def drawn(run, slid):
    return replay_draws(run, slid)


def test_draws_are_mirrored_pairs_and_repeat(run):
    draws = joint_draws(run.calibration, run.well, ALL)
    again = joint_draws(run.calibration, run.well, ALL)
    assert len(draws) == ALL
    for one, other, same in zip(draws[::2], draws[1::2], again[::2], strict=True):
        assert np.array_equal(one.normal, -other.normal)
        assert np.array_equal(one.stations, -other.stations)
        assert np.array_equal(one.readings, same.readings)
    for part in (draws[:FIRST], draws[FIRST:]):
        size = np.sqrt(np.mean([draw.normal**2 for draw in part], axis=0))
        assert size == pytest.approx(np.ones(len(NAMES)))
    opened = np.array([draw.factors[-1] for draw in draws[:FIRST]])
    whole = run.calibration.draws[:, -2]
    assert opened.mean() == pytest.approx(whole.mean(), abs=0.1 * whole.std())
    assert opened.std() == pytest.approx(whole.std(), rel=0.35)


def test_a_draw_keeps_to_the_runs_own_weights(run):
    """Another path, hole and weight move the model; refitted, it foretells the readings as before."""
    calibration, model = run.calibration, run.model
    grid = np.linspace(run.prepared.samples.bit.min(), run.prepared.samples.bit.max() + 1.0, 48)
    refit = Refit(calibration, model, grid)
    weights = calibration.weights
    kinds, depth = [r.kind for r in weights], [r.bit_depth for r in weights]

    def foretold(at, by):
        mu = [s.factor.value for s in by.sections]
        return by.block_weight.value + at.weigh_readings(kinds, depth, mu, by.weight_scale.value).weight

    before = foretold(model, calibration)
    for draw in joint_draws(calibration, run.well, ALL)[:4]:
        middle = np.array([s.factor.value for s in calibration.sections])
        still = replace(draw, factors=middle, block=calibration.block_weight.value)
        other = departed(model, departure(run.well, still))
        scale = calibration.weight_scale.value * weight_factor(still, calibration, run.well)
        loose = calibration.block_weight.value + other.weigh_readings(kinds, depth, middle, scale).weight
        held = foretold(other, refit(other, still))
        assert np.sqrt(np.mean((held - before) ** 2)) < 0.35 * np.sqrt(np.mean((loose - before) ** 2)) + 150.0


def test_draws_scatter_about_the_replay(run, slid, drawn):
    loads = replay(run)
    rows = np.flatnonzero(slid & (loads.bit_load > 10e3))
    columns = drawn.columns(rows)
    off = drawn.bit_load[:, columns] - loads.bit_load[drawn.taken[columns]]
    assert abs(np.median(off.mean(axis=0))) < 2e3
    assert 0.5e3 < np.median(off.std(axis=0)) < 8e3
    low, high = band(drawn, "bit_load", loads.bit_load)
    assert np.all((low <= loads.bit_load) & (loads.bit_load <= high) | ~drawn.covered)
    assert np.isnan(low[~drawn.covered]).all()


def test_the_well_where_the_weights_were_made_is_held(run, slid, drawn):
    """The maker of the log put 25 kN on the bit while sliding (no buckling, another soft string)."""
    rows = np.flatnonzero(slid)
    settled = rows[len(rows) // 20 :]
    low, high = band(drawn, "bit_load", replay(run).bit_load)
    assert np.nanmedian(low[settled]) < 25e3 < np.nanmedian(high[settled])


def test_more_draws_go_where_they_are_asked_for(run, slid, drawn):
    few = slid & (np.cumsum(slid) <= 200)
    more = more_draws(run, drawn, few)
    assert more.state.shape == (ALL, len(drawn.taken))
    told = more.told(more.columns(np.flatnonzero(few)))
    assert told.all()
    assert np.array_equal(more.state[:FIRST], drawn.state)
    far = more.columns(np.flatnonzero(slid)[-5:])
    assert more.told(far).sum() in (FIRST, ALL)
    assert more_draws(run, drawn, np.zeros_like(slid)) is drawn


def test_nothing_in_question_is_no_trouble(run, slid):
    none = replay_draws(run, np.zeros_like(slid))
    assert none.state.shape == (FIRST, 0)
    assert len(none.window(0, 100)[0]) == 0
    low, _ = band(none, "bit_load", np.zeros(len(slid)))
    assert np.isnan(low).all()
