"""Levels of detail: no smallest or largest is lost, and the pack gives back what it took."""

import base64
import zlib

import numpy as np
import pytest

from forensics.report.explore.levels import COARSEST, FINEST, MISSING, Pack, level, level_times, steps

KINDS = {"f8": "<f8", "f4": "<f4", "i2": "<i2", "u1": "u1"}


def unpack(pack, name):
    """Read an array as the page does."""
    how = pack.index[name]
    data = zlib.decompress(base64.b64decode(pack.text()))
    codes = np.frombuffer(data, KINDS[how["kind"]], how["count"], how["at"])
    if how["kind"] != "i2":
        return codes
    return np.where(codes == MISSING, np.nan, how["base"] + how["scale"] * codes)


@pytest.mark.parametrize("count", [0, 1, 2, 3999, 172_800, 3_000_000])
def test_levels_end_where_a_screen_can_draw_them(count):
    found = steps(count)
    numbers = [count if step == 1 else 2 * -(-count // step) for step in found]
    assert numbers[0] <= FINEST + 2
    assert numbers[-1] <= COARSEST + 2
    assert list(found) == sorted(found)


@pytest.mark.parametrize("step", [1, 2, 8, 7, 64])
def test_every_bin_keeps_its_smallest_and_largest(step):
    rng = np.random.default_rng(11)
    values = rng.normal(size=1003)
    values[rng.random(1003) < 0.3] = np.nan
    values[200:400] = np.nan
    told = level(values, step)
    if step == 1:
        assert np.array_equal(told, values, equal_nan=True)
        return
    for k, start in enumerate(range(0, len(values), step)):
        seen = [v for v in values[start : start + step] if np.isfinite(v)]
        pair = told[2 * k : 2 * k + 2]
        assert np.isnan(pair).all() if not seen else list(pair) == [min(seen), max(seen)]


def test_times_of_a_level_lie_in_their_bins_in_order():
    time = np.cumsum(np.random.default_rng(2).uniform(0.5, 2.0, 997))
    told = level_times(time, 8)
    assert len(told) == len(level(time, 8))
    assert (np.diff(told) >= 0.0).all()
    assert (told[0::2] == time[::8]).all()
    assert (told[1:-1:2] < time[8::8]).all()


@pytest.mark.parametrize("size", [0, 1, 5])
def test_short_series_stay_as_they_are(size):
    values = np.arange(float(size))
    assert np.array_equal(level(values, 8)[-1:], values[-1:])


def test_packed_numbers_come_back_to_a_step():
    values = np.random.default_rng(3).normal(800.0, 120.0, 5000)
    values[17] = np.nan
    pack = Pack()
    pack.whole("odd", np.arange(3), "u1")  # what follows must still begin where numbers of 8 bytes may
    pack.numbers("hookload", values)
    pack.whole("time", np.arange(5.0), "f8")
    back = unpack(pack, "hookload")
    assert pack.index["hookload"]["kind"] == "i2"
    assert np.isnan(back[17])
    assert np.nanmax(np.abs(back - values)) <= 0.5001 * np.ptp(values[np.isfinite(values)]) / 65534
    assert np.array_equal(unpack(pack, "time"), np.arange(5.0))
    assert all(how["at"] % 8 == 0 for how in pack.index.values())


def test_stray_values_do_not_coarsen_the_rest():
    values = np.random.default_rng(4).normal(5.0, 1.0, 5000)
    values[3] = 1e9
    pack = Pack()
    pack.numbers("torque", values)
    assert np.allclose(unpack(pack, "torque"), values, rtol=1e-6)


@pytest.mark.parametrize("values", [[], [np.nan, np.nan], [4.5, 4.5]])
def test_series_without_a_span_come_back(values):
    pack = Pack()
    pack.numbers("flat", np.array(values))
    assert np.allclose(unpack(pack, "flat"), values, equal_nan=True)
