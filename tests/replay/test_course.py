"""Profiles through the run: where loads change, and the places nearest their threshold."""

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.loads import Profile
from forensics.replay.course import STATIONS, moments, worst_places


def loads(ratio):
    return SimpleNamespace(peak_ratio=ratio, bit_load=0.0 * ratio, reach=0.0 * ratio)


def profile(tension, sinusoidal):
    nothing = np.zeros(len(tension))
    return Profile(0, 0.0, nothing, tension, sinusoidal, 1.4 * sinusoidal, nothing, nothing.astype(np.int8))


def test_moments_crowd_where_loads_change():
    ratio = np.zeros(10_000)
    ratio[6000:6500] = 1.5 * np.sin(np.arange(500) / 10.0) ** 2
    rows = moments(loads(ratio), (17,), most=300)
    assert 17 in rows
    assert (np.diff(rows) > 0).all()
    inside = np.count_nonzero((rows >= 6000) & (rows < 6500))
    assert inside > len(rows) / 2
    assert np.diff(rows).max() < 10_000 / (0.25 * 300), "quiet time has its share"


@pytest.mark.parametrize("count", [0, 1, 2, 5])
def test_moments_of_short_runs(count):
    assert list(moments(loads(np.ones(count)), ())) == list(range(count))


def test_missing_loads_are_no_change():
    rows = moments(loads(np.full(50, np.nan)), (3,))
    assert list(rows) == list(range(50))


def test_worst_places_keep_ends_and_the_nearest_to_the_threshold():
    rng = np.random.default_rng(8)
    tension, sinusoidal = rng.normal(0.0, 1e5, 1234), rng.uniform(5e4, 2e5, 1234)
    sinusoidal[rng.random(1234) < 0.2] = np.nan
    at = worst_places(profile(tension, sinusoidal))
    assert len(at) == STATIONS
    assert (np.diff(at) > 0).all()
    assert (at[0], at[-1]) == (0, 1233)
    inner = np.arange(10, 1224)
    assert np.nanmax(-tension[at] / sinusoidal[at]) >= np.nanmax(-tension[inner] / sinusoidal[inner])


def test_short_strings_are_kept_whole():
    assert list(worst_places(profile(np.zeros(7), np.ones(7)))) == list(range(7))
