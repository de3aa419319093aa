"""Lines of a log written again: stamps and numbers moved, everything else as it was."""

import datetime as dt

import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics.exports.rewrite import Change, rewrite_line, shift_number, shift_stamp

DAYS = st.dates(dt.date(1995, 1, 1), dt.date(2040, 12, 31))


@pytest.mark.parametrize(
    "form", ["%Y-%m-%d", "%Y/%m/%d", "%d.%m.%Y", "%d/%m/%y", "%d-%b-%Y", "%d-%b-%y", "%d%b%Y", "%Y%m%d"]
)
@given(day=DAYS, days=st.integers(-9000, 9000))
def test_a_date_comes_back_in_its_own_form(form, day, days):
    """Against the calendar of the standard library."""
    text = f"{day.strftime(form)} 07:08:09"
    moved = day + dt.timedelta(days=days)
    if not 1995 <= moved.year <= 2040:
        return
    assert shift_stamp(text, days) == f"{moved.strftime(form)} 07:08:09"


def test_the_month_may_come_first():
    assert shift_stamp("03/31/2021 00:00", 1, month_first=True) == "04/01/2021 00:00"
    assert shift_stamp("31/03/2021 00:00", 1, month_first=False) == "01/04/2021 00:00"


@pytest.mark.parametrize("scale", [1, 10**3, 10**6, 10**9])
def test_counts_since_1970_move_by_days(scale):
    assert int(shift_stamp(str(1617192005 * scale), 2)) == (1617192005 + 2 * 86400) * scale


@pytest.mark.parametrize("text", ["07:08:09", "-999.25", "n/a", "", "12.5", "99/99/2021"])
def test_what_holds_no_date_stays(text):
    assert shift_stamp(text, 100) == text


@given(st.decimals(-800, 90000, allow_nan=False, places=3), st.integers(-500, 500))
def test_a_number_keeps_its_decimals(value, amount):
    assert float(shift_number(f"{value:.3f}", amount)) == pytest.approx(float(value) + amount, abs=1e-9)
    assert len(shift_number(f"{value:.3f}", amount).split(".")[1]) == 3


def test_decimal_commas_null_codes_and_text_stay_what_they_are():
    assert shift_number("12,50", 1.0) == "13,50"
    assert shift_number("-999.25", 10.0) == "-999.25"
    assert shift_number("ERR", 10.0) == "ERR"
    assert shift_number('"100"', 5.0) == '"105"'


@pytest.mark.parametrize(
    ("line", "delimiter", "wanted"),
    [
        ("2021-03-31 10:00:00,100.0,a name,5", ",", "2021-04-01 10:00:00,110.0,,5"),
        ('2021-03-31;"100,5";"x;y";5', ";", '2021-04-01;"110,5";;5'),
        ("  2021-03-31   100.0  name  5", " ", "  2021-04-01   110.0  0  5"),
        ("2021-03-31\t100\tname\t5\tmore", "\t", "2021-04-01\t110\t\t5\t"),
    ],
)
def test_a_line_keeps_its_dialect(line, delimiter, wanted):
    changes = [Change("time"), Change("number", 10.0), Change("blank"), Change("keep")]
    assert rewrite_line(line, delimiter, changes, (1, False)) == wanted
