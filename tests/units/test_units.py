"""Spellings to SI, refusals, and back for showing."""

import contextlib
import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics import units
from forensics.errors import UnitError

SPELLINGS = {
    # as written, quantity: SI value of one
    ("KKGF", "force"): 9806.65,
    ("1000 kgf", "force"): 9806.65,
    ("T", "force"): 9806.65,
    ("TON", "force"): 9806.65,
    ("tonne", "force"): 9806.65,
    ("KDAN", "force"): 1e4,
    ("KDN", "force"): 1e4,
    ("k-lbs", "force"): 4448.2216152605,
    ("1000 lbf", "force"): 4448.2216152605,
    ("kips", "force"): 4448.2216152605,
    ("kg", "force"): 9.80665,
    ("KMN", "moment"): 1e3,
    ("KNM", "moment"): 1e3,
    ("KMDN", "moment"): 1e4,
    ("km.daN", "moment"): 1e4,
    ("kJ", "moment"): 1e3,
    ("kft-lbf", "moment"): 1355.8179483314,
    ("k ft-lbs", "moment"): 1355.8179483314,
    ("kip-ft", "moment"): 1355.8179483314,
    ("KFLB", "moment"): 1355.8179483314,
    ("daN.m", "moment"): 10.0,
    ("c/min", "rotation"): 1.0,
    ("c/s", "rotation"): 60.0,
    ("Hz", "rotation"): 60.0,
    ("LPM", "flow"): 1e-3 / 60,
    ("L/MN", "flow"): 1e-3 / 60,
    ("M3/M", "flow"): 1 / 60,
    ("gpm", "flow"): 6.30901964e-5,
    ("KPA", "pressure"): 1e3,
    ("psig", "pressure"): 6894.757293168,
    ("G/CC", "density"): 1e3,
    ("G/C3", "density"): 1e3,
    ("s.g.", "density"): 1e3,
    ("KGM3", "density"): 1.0,
    ("lbm/galUS", "density"): 119.826427317,
    ("psi/ft", "density"): 119.826427317 / 0.0519480519,
    ("M/HR", "speed"): 1 / 3600,
    ("mph", "speed"): 1 / 3600,
    ("ft/hr", "speed"): 0.3048 / 3600,
    ("FEET", "length"): 0.3048,
    ("mRKB", "length"): 1.0,
    ("0.1 in", "length"): 0.00254,
    ("..1IN", "length"): 0.00254,
    ("ftUS", "length"): 1200 / 3937,
    ("°/100'", "angle_per_length"): math.radians(1) / 30.48,
    ("dega/30m", "angle_per_length"): math.radians(1) / 30,
    ("ppf", "linear_weight"): 14.593902937,
    ("kg/m", "linear_weight"): 9.80665,
    ("N/m", "linear_weight"): 1.0,
    ("lb/ft", "mass_per_length"): 1.488163944,
    ("ksi", "stress"): 6894757.293168,
    ("[kN]", "force"): 1e3,
}


@pytest.mark.parametrize(("spelling", "quantity"), SPELLINGS)
def test_spellings_met_on_rigs(spelling, quantity):
    assert units.factor(spelling, quantity).scale == pytest.approx(SPELLINGS[spelling, quantity], rel=2e-9)


def test_time_per_length_is_turned_over():
    speeds = units.to_si([2.0, 0.0, -1.0, np.nan], "min/ft", "speed")
    assert speeds[0] == pytest.approx(0.3048 / 120.0)
    assert np.isnan(speeds[1:]).all()


@pytest.mark.parametrize(
    ("text", "quantity", "value"),
    [
        ("12.25 in", "length", 0.31115),
        ("9 5/8 in", "length", 0.244475),
        ("-1 1/2 in", "length", -0.0381),
        ("290 kN", "force", 290e3),
        ("1.25 g/cm3", "density", 1250.0),
        ("30 min", "time", 1800.0),
        ("0 g/cm3", "density", 0.0),
        ("45°", "angle", math.pi / 4),
        ("0.2", "dimensionless", 0.2),
        ("20 %", "dimensionless", 0.2),
        (" 1e3 N ", "force", 1e3),
        ("8.5in", "diameter", 0.2159),
    ],
)
def test_quantities_are_read_with_their_unit(text, quantity, value):
    assert units.parse_quantity(text, quantity) == pytest.approx(value)


@pytest.mark.parametrize(
    ("text", "quantity", "words"),
    [
        ("12.25", "length", "has no unit.*'12.25 m'"),
        (12.25, "length", "has no unit"),
        (True, "force", "needed text"),
        ("12.25 kN", "length", "unit of force, needed one of length"),
        ("5 knn", "force", "did you mean|known are"),
        ("twelve in", "length", "needed a number"),
        ("12,25 in", "length", "decimal mark as a point"),
        ("1e999 m", "length", "finite"),
        ("1 1/0 in", "length", "divides by zero"),
        (None, "force", "needed text"),
        ("3 psi", "density", "unit of pressure or stress"),
        ("", "force", "needed a number"),
    ],
)
def test_refusals_say_what_is_needed(text, quantity, words):
    with pytest.raises(UnitError, match=words):
        units.parse_quantity(text, quantity)


def test_unknown_quantity_names_the_nearest():
    with pytest.raises(UnitError, match="did you mean 'force'"):
        units.factor("kN", "farce")
    with pytest.raises(UnitError, match="unknown unit system"):
        units.show(1.0, "force", "imperial")


@pytest.mark.parametrize("word", ["", None, "----", "....", "unitless", "Euc", "BAD_UNIT-?", "na", "None"])
def test_blank_units_are_known_for_what_they_are(word):
    assert units.is_blank(word)


@pytest.mark.parametrize("word", ["%", "m", "kN", "psi"])
def test_units_are_not_blank(word):
    assert not units.is_blank(word)


def test_shown_as_each_system_has_it():
    assert units.show(290e3, "force") == "290.0 kN"
    assert units.show(290e3, "force", "field") == "65.2 klbf"
    assert units.show(math.nan, "force") == "n/a"
    assert units.show(-0.01, "force") == "0.0 kN"
    assert units.show(math.radians(3) / 30.48, "angle_per_length", "field") == "3.00 deg/100ft"


@given(
    st.sampled_from([(q, u) for q in units.QUANTITIES for u in units.spellings(q)]),
    st.floats(1e-6, 1e6, allow_subnormal=False),
)
def test_every_unit_keeps_order_and_returns(pair, value):
    quantity, unit = pair
    found = units.factor(unit, quantity)
    si = float(units.to_si(value, unit, quantity))
    back = found.scale / si if found.inverse else (si - found.offset) / found.scale
    assert back == pytest.approx(value, rel=1e-12)
    assert units.parse_quantity(f"{value!r} {unit}", quantity) == pytest.approx(si, rel=1e-12)


@given(st.text(max_size=12))
def test_no_text_breaks_the_look_up(text):
    with contextlib.suppress(UnitError):
        units.factor(text, "force")
    units.is_blank(text)
    units.quantities_of(text)


@pytest.mark.parametrize("system", units.SYSTEMS)
@pytest.mark.parametrize("quantity", [*units.QUANTITIES, "diameter"])
def test_display_units_are_units_of_the_table(quantity, system):
    label, scale = units.display_unit(quantity, system)
    assert scale == pytest.approx(units.factor(label or "1", quantity).scale)
