"""Stamps coarser than the rows, dates told now and then, files written from their end."""

import numpy as np
import pytest

from forensics.logs.clock import _carry_dates
from forensics.logs.stray import mend_stamps

LIVELY = np.random.default_rng(3).normal(1e6, 1e3, 400)


@pytest.mark.parametrize("share", [2, 5, 12])
def test_rows_that_share_a_stamp_are_spread_evenly(share):
    true = 1e9 + np.arange(400) / share
    mended, steps = mend_stamps(np.floor(true), "x.csv", LIVELY)
    np.testing.assert_allclose(mended, true, atol=1e-6)
    assert steps[0].name == "stamp shared by rows"


def test_recording_that_begins_within_a_stamp_keeps_its_spacing():
    true = 1e9 + 0.6 + np.arange(400) / 5
    mended, _ = mend_stamps(np.floor(true + 1e-6), "x.csv", LIVELY)
    np.testing.assert_allclose(np.diff(mended), 0.2, atol=1e-3)


def test_the_same_rows_told_twice_are_not_spread():
    time = np.repeat(1e9 + np.arange(200.0), 2)
    mended, steps = mend_stamps(time, "x.csv", np.repeat(LIVELY[:200], 2))
    np.testing.assert_array_equal(mended, time)
    assert steps == []
    assert mend_stamps(time, "x.csv", None)[1] == []


def test_rows_that_share_a_stamp_as_their_channels_alternate_are_left_to_be_merged():
    time = np.repeat(1e9 + np.arange(200.0), 2)
    assert mend_stamps(time, "x.csv", np.where(np.arange(400) % 2, np.nan, LIVELY))[1] == []


def test_a_few_shared_stamps_are_no_coarse_clock():
    time = 1e9 + np.arange(400.0)
    time[100] = time[99]
    assert mend_stamps(time, "x.csv", LIVELY)[1] == []


def test_a_date_told_once_a_page_is_carried_over_midnights():
    clock = 86000.0 + 100.0 * np.arange(20)
    days = np.full(20, np.nan)
    days[3], days[12] = 5.0, 6.0
    carried = _carry_dates(days, clock % 86400)
    np.testing.assert_array_equal(carried, 5.0 + (clock >= 86400))


def test_dates_told_in_most_rows_are_left_as_they_are():
    days = np.array([1.0, 1.0, np.nan, 1.0])
    np.testing.assert_array_equal(_carry_dates(days, np.arange(4.0)), days)
