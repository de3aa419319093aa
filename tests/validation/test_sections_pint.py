"""Stiffness, weights and buoyancy against the same formulas carried with units by pint."""

import math

import pint
import pytest

from forensics.units import parse_quantity
from forensics.well.string import Component, buoyed_weight, plain_weight


@pytest.fixture(scope="module")
def ureg():
    return pint.UnitRegistry()


PIPES = [("5 in", "4.276 in"), ("6.5 in", "2.8125 in"), ("177.8 mm", "159.4 mm"), ("0.5 ft", "0.25 ft")]


def of_both(ureg, text, quantity):
    """One number, by our parser in SI and by pint as a quantity."""
    number, unit = text.split()
    names = {
        "in": "inch",
        "ppg": "pound/gallon",
        "lb/ft3": "pound/foot**3",
        "g/cm3": "gram/cm**3",
        "psi": "psi",
    }
    return parse_quantity(text, quantity), float(number) * ureg.Unit(names.get(unit, unit))


@pytest.mark.parametrize(("od", "bore"), PIPES)
@pytest.mark.parametrize("modulus", ["30e6 psi", "206.8 GPa"])
def test_stiffness(ureg, od, bore, modulus):
    our_od, their_od = of_both(ureg, od, "length")
    our_bore, their_bore = of_both(ureg, bore, "length")
    our_e, their_e = of_both(ureg, modulus, "stress")
    pipe = Component("p", "drillpipe", 1.0, our_od, our_bore, 1.0, youngs_modulus=our_e)
    bending = their_e * math.pi / 64 * (their_od**4 - their_bore**4)
    axial = their_e * math.pi / 4 * (their_od**2 - their_bore**2)
    assert pipe.stiffness == pytest.approx(bending.to("newton*meter**2").magnitude, rel=1e-12)
    assert pipe.axial == pytest.approx(axial.to("newton").magnitude, rel=1e-12)


@pytest.mark.parametrize(("od", "bore"), PIPES)
@pytest.mark.parametrize(
    ("mud", "inside"), [("12 ppg", "12 ppg"), ("1.32 g/cm3", "0 g/cm3"), ("80 lb/ft3", "9 ppg")]
)
def test_buoyed_weight(ureg, od, bore, mud, inside):
    our_od, their_od = of_both(ureg, od, "length")
    our_bore, their_bore = of_both(ureg, bore, "length")
    our_mud, their_mud = of_both(ureg, mud, "density")
    our_inside, their_inside = of_both(ureg, inside, "density")
    our_steel, their_steel = of_both(ureg, "490 lb/ft3", "density")
    pipe = Component(
        "p", "liner", 1.0, our_od, our_bore, plain_weight(our_od, our_bore, our_steel), density=our_steel
    )
    # The tube's own mass, plus what it holds, less what it pushes aside: no buoyancy factor in it.
    steel = their_steel * math.pi / 4 * (their_od**2 - their_bore**2)
    held = their_inside * math.pi / 4 * their_bore**2
    displaced = their_mud * math.pi / 4 * their_od**2
    expected = ((steel + held - displaced) * ureg.standard_gravity).to("newton/meter").magnitude
    assert float(buoyed_weight(pipe, our_mud, our_inside)) == pytest.approx(expected, rel=1e-9)
