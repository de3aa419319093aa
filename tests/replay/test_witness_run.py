"""A sample run with a gauge at the bit instead of its pressures: what that mends, and what it must not."""

from __future__ import annotations

import gzip
from dataclasses import replace
from functools import lru_cache
from pathlib import Path
from types import SimpleNamespace

import numpy as np
import pandas as pd
import pytest

from forensics.case import load_case
from forensics.friction.calibrate import calibrate
from forensics.friction.readings import find_readings
from forensics.loads import Basis
from forensics.logs.read import read_time_logs
from forensics.replay.model import build_model
from forensics.replay.ready import block_zero, ready
from forensics.replay.run import replay
from forensics.rig.understand import understand_rig
from forensics.well.model import load_well

FOLDER = Path(__file__).parents[2] / "sample_logs" / "cuttings_friction"
PRESSURES = ("differential_pressure", "standpipe_pressure")


@lru_cache(maxsize=1)
def sample():
    """Read and calibrate the run once, its pressures left out; with the true bit load [N] at its rows."""
    case = load_case(FOLDER / "case.toml")
    log = read_time_logs(case)
    well = load_well(case)
    rig = understand_rig(log, well, case)
    model = build_model(well, case, float(np.nanmax(log.get("bit_depth"))), block_zero(rig))
    calibration = calibrate(find_readings(log, rig, well), well, case, model, rig)
    with gzip.open(FOLDER / "truth.csv.gz", "rt") as file:
        truth = pd.read_csv(file)
    at = pd.to_datetime(truth["time"], utc=True).astype("int64").to_numpy() / 1e9
    at = at / 10.0 ** np.round(np.log10(at[0] / log.time[0]))
    true = 1e3 * np.interp(log.time, at, truth["bit_load_kN"])
    sliding = np.interp(log.time, at, (truth["activity"] == "drill_slide").astype(float)) == 1.0
    log = replace(log, values={**vars(log)["values"], **dict.fromkeys(PRESSURES, np.full(len(log), np.nan))})
    made = {"rig": rig, "calibration": calibration, "case": case, "model": model, "well": well}
    return SimpleNamespace(log=log, true=true, sliding=sliding, **made)


def loads(gauge=None):
    """Replay with the gauge given, shape (n,)."""
    run = sample()
    given = {} if gauge is None else {"downhole_wob": gauge}
    log = replace(run.log, values={**vars(run.log)["values"], **given})
    return replay(ready(log, run.well, run.rig, run.calibration, run.case, run.model))


def error(found):
    """Root mean square error of the bit load in the slides [N]."""
    run = sample()
    return float(np.sqrt(np.mean((found.bit_load - run.true)[run.sliding] ** 2)))


def gauge(scale=1.0):
    """Give the true load as an untared gauge tells it."""
    true = sample().true
    return scale * (true + 45e3 + np.random.default_rng(5).normal(0.0, 1.5e3, len(true)))


def test_a_gauge_at_the_bit_shows_the_friction_that_grew():
    without, with_gauge = loads(), loads(gauge())
    assert error(with_gauge) < 4e3
    assert error(with_gauge) < 0.6 * error(without)
    assert with_gauge.witness.moved.max() > 1.2
    assert (with_gauge.basis == Basis.DOWNHOLE).any()
    disagreed = [check.sigmas for check in with_gauge.witness.slides]
    assert max(disagreed) > 3.0  # the hookload alone was wrong there, and that is said


def test_drilling_rate_alone_shows_most_of_it():
    run, found = sample(), loads()
    alone = float(np.sqrt(np.nanmean((found.witness.by_hookload - run.true)[run.sliding] ** 2)))
    assert error(found) < 0.3 * alone


@pytest.mark.parametrize("scale", [1e-3, 4.448, 0.0])
def test_a_gauge_that_is_wrong_changes_nothing(scale):
    without, with_gauge = loads(), loads(gauge(scale))
    assert not with_gauge.witness.responses[0].heard
    assert with_gauge.witness.responses[0].why
    assert np.array_equal(with_gauge.bit_load, without.bit_load)
