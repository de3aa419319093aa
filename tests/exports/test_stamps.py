"""Times and numbers as text files carry them."""

import datetime as dt
import math

import pytest

from forensics.exports.stamps import number, stamp
from forensics.logs.zone import tzinfo_of


@pytest.mark.parametrize(
    ("seconds", "text"),
    [
        (0.0, "1970-01-01T00:00:00+00:00"),
        (0.9996, "1970-01-01T00:00:01+00:00"),
        (-0.25, "1969-12-31T23:59:59.750+00:00"),
        (1_935_792_000.1, "2031-05-06T00:00:00.100+00:00"),
    ],
)
def test_stamps(seconds, text):
    assert stamp(seconds, dt.UTC) == text


def test_stamp_follows_summer_time():
    london = tzinfo_of("Europe/London")
    assert stamp(1_935_792_000.0, london).endswith("+01:00")
    assert stamp(1_935_792_000.0 - 120 * 86400, london).endswith("+00:00")


@pytest.mark.parametrize(
    ("value", "shown"), [(None, None), (math.nan, None), (math.inf, None), (1.23456, 1.23), (-0.001, 0.0)]
)
def test_numbers(value, shown):
    assert number(value, 2) == shown
    if shown == 0.0:
        assert math.copysign(1.0, number(value, 2)) == 1.0
