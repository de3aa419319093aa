"""A zone's name as an object that clocks understand."""

import datetime as dt

import pytest

from forensics.errors import CaseError
from forensics.logs.zone import tzinfo_of


@pytest.mark.parametrize(
    ("name", "hours"),
    [("UTC", 0), ("Z", 0), ("+02:00", 2), ("-0330", -3.5), ("UTC+1", 1), ("Europe/London", 1), ("gmt", 0)],
)
def test_zones_by_name_and_offset(name, hours):
    summer = dt.datetime(2031, 7, 1, tzinfo=tzinfo_of(name))
    assert summer.utcoffset() == dt.timedelta(hours=hours)


@pytest.mark.parametrize("name", ["Mars/Base", "rig time", "../etc"])
def test_no_zone_is_refused(name):
    with pytest.raises(CaseError, match="unknown time zone"):
        tzinfo_of(name)
