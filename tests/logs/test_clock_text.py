"""Dates and clocks as rigs write them."""

import datetime as dt

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics.logs import clock_number
from forensics.logs.clock_text import day_number, find_order, looks_like_clock, looks_like_date, take_apart
from forensics.logs.zone import to_utc, zone_of

EPOCH = dt.date(1970, 1, 1)


def day(year, month, number):
    return (dt.date(year, month, number) - EPOCH).days


@pytest.mark.parametrize(
    ("text", "expected", "clock"),
    [
        ("00:00:00 01-Jan-20", day(2020, 1, 1), 0.0),
        ("07-Jan-12", day(2012, 1, 7), None),
        ("00.00.00 08-Jan-12", day(2012, 1, 8), 0.0),
        ("Mon Jul 20 15-46-36 2015", day(2015, 7, 20), 56796.0),
        ("2013-Jul-05 08:32", day(2013, 7, 5), 30720.0),
        ("29/01/2020-03:00:00", day(2020, 1, 29), 10800.0),
        ("2031-05-14T10:00:00.250+02:00", day(2031, 5, 14), 36000.25),
        ("20310514T100000Z", day(2031, 5, 14), 36000.0),
        ("14.05.2031 10:00:30", day(2031, 5, 14), 36030.0),
        ("5/14/2031 1:30 PM", None, 48600.0),
        ("12/31/99 12:00:00 AM", None, 0.0),
        ("2031/05/14 24:00:00", day(2031, 5, 14), 86400.0),
        ("14 mai 2031", day(2031, 5, 14), None),
        ("20310514", day(2031, 5, 14), None),
    ],
)
def test_forms_met(text, expected, clock):
    stamp = take_apart(text)
    assert stamp.clock == clock
    if expected is not None:
        assert day_number(stamp.date, "dmy") == expected
    assert looks_like_date(text)


@pytest.mark.parametrize(
    ("text", "offset"),
    [
        ("2012-09-16T07:44:12-05:00", -18000.0),
        ("2012-09-16T07:44:12Z", 0.0),
        ("2012-09-16 07:44:12 +0530", 19800.0),
        ("2012-09-16 07:44", None),
    ],
)
def test_offsets(text, offset):
    assert take_apart(text).offset == offset


@pytest.mark.parametrize(
    "text", ["", "-999.25", "1234.5", "hookload", "12:30", "12345", "99/99/2020", "1.2.3.4"]
)
def test_what_is_no_date(text):
    assert not looks_like_date(text)


def test_clocks_alone():
    assert looks_like_clock("10:00:00")
    assert looks_like_clock("1:30 PM")
    assert not looks_like_clock("2031-05-14 10:00:00")
    assert not looks_like_clock("25:99:00")


@pytest.mark.parametrize(
    ("dates", "order"),
    [
        (["14/05/2031"], "dmy"),
        (["05/14/2031"], "mdy"),
        (["04/05/2031"], None),
        (["05/05/2031"], "either"),
        (["2031-05-04"], "either"),
        (["04/05/2031", "05/05/2031", "06/05/2031"], "dmy"),
        (["05/04/2031", "05/05/2031"], "mdy"),
        (["14/05/2031", "05/15/2031"], "clash"),
        ([], "either"),
    ],
)
def test_order_of_day_and_month_comes_from_the_data(dates, order):
    assert find_order(dates) == order


@given(
    st.datetimes(dt.datetime(1990, 1, 1), dt.datetime(2060, 1, 1)),
    st.sampled_from(
        [
            "%Y-%m-%d %H:%M:%S",
            "%d-%b-%y %H:%M:%S",
            "%H:%M:%S %d-%b-%Y",
            "%Y%m%d %H%M%S",
            "%b %d %Y %H:%M:%S",
            "%d.%m.%Y %H:%M:%S",
            "%d/%m/%Y %I:%M:%S %p",
            "%Y/%m/%d-%H:%M:%S",
        ]
    ),
)
def test_every_form_returns_the_moment_it_was_made_of(moment, form):
    stamp = take_apart(moment.strftime(form))
    assert day_number(stamp.date, "dmy") == (moment.date() - EPOCH).days
    assert stamp.clock == moment.hour * 3600 + moment.minute * 60 + moment.second


@given(st.text(max_size=40))
def test_no_text_breaks_the_parser(text):
    take_apart(text)
    looks_like_date(text)
    day_number(text, "mdy")


def test_zones():
    assert zone_of("UTC") == 0.0
    assert zone_of("UTC-3") == -10800.0
    summer = to_utc(np.array([day(2031, 7, 1) * 86400.0, np.nan]), zone_of("Europe/Oslo"))
    assert summer[0] == day(2031, 7, 1) * 86400.0 - 7200.0
    assert np.isnan(summer[1])


def test_the_hour_told_twice_goes_by_the_order_of_its_stamps():
    change = day(2031, 10, 26) * 86400.0
    local = change + np.array([1.5, 2.0, 2.5, 2.0, 2.5, 3.0]) * 3600.0
    assert np.diff(to_utc(local, zone_of("Europe/Oslo"))).tolist() == [1800.0] * 5


def test_packed_dates_and_serial_days():
    assert clock_number.days(np.array([310514.0, 20310514.0, 90512.0])).tolist() == [
        day(2031, 5, 14),
        day(2031, 5, 14),
        day(2009, 5, 12),
    ]
    assert clock_number.days(np.array([43831.0])).tolist() == [day(2020, 1, 1)]
    assert np.isnan(clock_number.days(np.array([np.nan, -1.0, 311399.0]))).all()


def test_counter_that_overflowed_32_bits_is_unwrapped():
    true = 2.0e9 + 1.0e4 * np.arange(40000)
    wrapped = (true + 2**31) % 2**32 - 2**31
    found = clock_number.read(wrapped, "S", "TIME")
    np.testing.assert_allclose(np.diff(found.seconds), 10.0)


@pytest.mark.parametrize(
    ("values", "unit", "why"),
    [
        (1.9e9 + np.arange(5), None, "epoch in s"),
        (1e3 * (1.9e9 + np.arange(5)), None, "epoch in ms"),
        (48000 + np.arange(5) / 17280, None, "serial days"),
        (np.arange(5.0), "MIN", "elapsed time"),
        (np.arange(5.0), "M", "elapsed time"),
        (np.array([235950.0, 235955.0, 0.0, 5.0]), "HHMMSS", "clock HHMMSS"),
    ],
)
def test_numbers_told_by_size_and_unit(values, unit, why):
    assert why in clock_number.read(values, unit, "TIME").why


def test_numbers_of_another_quantity_are_no_time():
    assert clock_number.read(np.arange(5.0), "bar", "TIME") is None
    assert clock_number.read(np.array([np.nan]), None, "TIME") is None
