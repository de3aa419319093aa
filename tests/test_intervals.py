"""Intervals against the truth of an invented well: they hold it about as often as they say.

The sample's simulator is an elastic string with its own friction law; 90 % intervals over one run stand or
fall together where they share an error, so the bounds are wide.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from forensics.case import load_case
from forensics.episodes.catalogue import Kind
from forensics.replay.bands import band
from forensics.rig.view import Activity
from pipelines.analysis import analyse
from pipelines.progress import Progress

SAMPLE = Path(__file__).parent.parent / "sample_logs" / "lateral_slide"


@pytest.fixture(scope="module")
def found():
    return analyse(load_case(SAMPLE / "case.toml"), Progress(quiet=True))


@pytest.fixture(scope="module")
def truth(found):
    """Truth on the log's rows, NaN where it has none."""
    table = pd.read_csv(SAMPLE / "truth.csv.gz")
    stamps = pd.to_datetime(table["time"], utc=True).astype("int64").to_numpy()
    seconds = stamps / 10.0 ** (9 if stamps[0] > 1e17 else 6 if stamps[0] > 1e14 else 0)
    _, here, there = np.intersect1d(np.round(found.log.time), np.round(seconds), return_indices=True)
    columns = {}
    for name in ("bit_load_kN", "peak_load_ratio"):
        columns[name] = np.full(len(found.log), np.nan)
        columns[name][here] = table[name].to_numpy()[there]
    return columns


def share_inside(true, low, high, rows):
    rows = rows & np.isfinite(true) & np.isfinite(low)
    assert rows.sum() > 1000
    return float(np.mean((true[rows] >= low[rows]) & (true[rows] <= high[rows])))


def test_bit_load_lies_in_its_band_while_sliding(found, truth):
    low, high = band(found.draws, "bit_load", found.loads.bit_load)
    sliding = (found.rig.activity == Activity.DRILL_SLIDE) & (found.loads.bit_load > 10e3)
    assert share_inside(truth["bit_load_kN"] * 1e3, low, high, sliding) > 0.75
    assert np.nanmedian((high - low)[sliding]) < 20e3  # a band that holds everything would tell nothing


def test_load_ratio_lies_in_its_band(found, truth):
    low, high = band(found.draws, "peak_ratio", found.loads.peak_ratio)
    assert share_inside(truth["peak_load_ratio"], low, high, found.loads.peak_ratio > 0.6) > 0.75
    assert np.nanmedian((high - low)[found.loads.peak_ratio > 0.6]) < 0.3


def test_episodes_hold_their_true_peak_and_loss(found, truth):
    peaks, losses = [], []
    for episode in found.episodes:
        if episode.kind is not Kind.BUCKLING:
            continue
        true = np.nanmax(truth["peak_load_ratio"][episode.first : episode.last + 1])
        peaks.append(episode.peak_load_ratio.low <= true <= episode.peak_load_ratio.high)
        load = episode.bit_load
        losses.append(load.low <= truth["bit_load_kN"][episode.peak] * 1e3 <= load.high)
    assert np.mean(peaks) > 0.75
    assert np.mean(losses) > 0.8
