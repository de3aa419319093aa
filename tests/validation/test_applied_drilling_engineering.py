"""Jets of a bit: the worked nozzles of *Applied Drilling Engineering*, 1986, chapter 4 (from memory, medium).

Three nozzles of 13/32 in, 400 gal/min of 12 lb/gal mud, discharge coefficient 0.95: 1,169 psi and 820 lbf.
"""

from __future__ import annotations

import math

import pytest

from field import INCH, LBF, PSI
from forensics.mechanics.hydraulics import bit_pressure_drop, jet_thrust
from forensics.units import parse_quantity

AREA = 3 * math.pi / 4 * (13 / 32 * INCH) ** 2
THRUST = float(jet_thrust(parse_quantity("400 gpm", "flow"), parse_quantity("12 ppg", "density"), AREA))


def test_pressure_drop_of_three_nozzles():
    assert pytest.approx(0.3889, abs=5e-5) == AREA / INCH**2
    assert float(bit_pressure_drop(THRUST, AREA)) / PSI == pytest.approx(1169, abs=0.6)


def test_thrust_of_the_jets():
    assert pytest.approx(820, abs=0.6) == THRUST / LBF
    # the book's form: 0.01823 C_d q sqrt(rho dp)
    drop = float(bit_pressure_drop(THRUST, AREA)) / PSI
    assert pytest.approx(0.01823 * 0.95 * 400 * math.sqrt(12 * drop), rel=5e-4) == THRUST / LBF
