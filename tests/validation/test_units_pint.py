"""Unit factors against pint's registry, an independent table.

pint takes its factors from CODATA and NIST SP 811; agreement is to rounding of double precision, save
where its own definition is shorter (noted).
"""

import pint
import pytest

from forensics import units

REGISTRY = pint.UnitRegistry()
G = "standard_gravity"
# Our spelling, quantity, pint's expression, SI unit.
PAIRS = [
    ("ft", "length", "foot", "m"),
    ("ftUS", "length", "survey_foot", "m"),
    ("in", "length", "inch", "m"),
    ("lbf", "force", "force_pound", "N"),
    ("klbf", "force", "kip", "N"),
    ("kgf", "force", "force_kilogram", "N"),
    ("tonnef", "force", "force_metric_ton", "N"),
    ("tonfUS", "force", "force_ton", "N"),
    ("tonfUK", "force", "force_long_ton", "N"),
    ("kdaN", "force", "1000 * decanewton", "N"),
    ("ft.lbf", "moment", "foot * force_pound", "N*m"),
    ("lbf.in", "moment", "inch * force_pound", "N*m"),
    ("kgf.m", "moment", "force_kilogram * meter", "N*m"),
    ("psi", "pressure", "psi", "Pa"),
    ("ksi", "stress", "ksi", "Pa"),
    ("bar", "pressure", "bar", "Pa"),
    ("atm", "pressure", "atmosphere", "Pa"),
    ("kgf/cm2", "pressure", "force_kilogram / centimeter**2", "Pa"),
    ("ppg", "density", "pound / gallon", "kg/m**3"),
    ("pcf", "density", "pound / foot**3", "kg/m**3"),
    ("lbm/bbl", "density", "pound / oil_barrel", "kg/m**3"),
    ("psi/ft", "density", f"psi / foot / {G}", "kg/m**3"),
    ("g/cm3", "density", "gram / centimeter**3", "kg/m**3"),
    ("gpm", "flow", "gallon / minute", "m**3/s"),
    ("bbl/min", "flow", "oil_barrel / minute", "m**3/s"),
    ("L/min", "flow", "liter / minute", "m**3/s"),
    ("ft3/min", "flow", "foot**3 / minute", "m**3/s"),
    ("ft/h", "speed", "foot / hour", "m/s"),
    ("ft/min", "speed", "foot / minute", "m/s"),
    ("m/h", "speed", "meter / hour", "m/s"),
    ("deg", "angle", "degree", "rad"),
    ("c", "angle", "turn", "rad"),
    ("gon", "angle", "grade", "rad"),
    ("deg/100ft", "angle_per_length", "degree / (100 * foot)", "rad/m"),
    ("deg/30m", "angle_per_length", "degree / (30 * meter)", "rad/m"),
    ("lb/ft", "mass_per_length", "pound / foot", "kg/m"),
    ("ppf", "linear_weight", f"pound / foot * {G}", "N/m"),
    ("kg/m", "linear_weight", f"kilogram / meter * {G}", "N/m"),
    ("bbl", "volume", "oil_barrel", "m**3"),
    ("gal", "volume", "gallon", "m**3"),
    ("c/s", "rotation", "turn / second", "rpm"),
    ("rad/s", "rotation", "radian / second", "rpm"),
]


@pytest.mark.parametrize(("spelling", "quantity", "expression", "si"), PAIRS)
def test_factor_is_that_of_pint(spelling, quantity, expression, si):
    theirs = REGISTRY.parse_expression(expression).to(si).magnitude
    assert units.factor(spelling, quantity).scale == pytest.approx(theirs, rel=1e-12)
