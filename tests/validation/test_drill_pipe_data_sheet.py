"""A data sheet of 5 in 19.50 ppf S-135 NC50 drill pipe, seen: new and premium body."""

from __future__ import annotations

import pytest

from field import FT_LBF, INCH, LB_PER_FT, LBF, PSI
from forensics.mechanics import pipe
from forensics.mechanics.pipe import Tube

NEW = Tube(5 * INCH, 4.276 * INCH)
PREMIUM = pipe.worn(NEW, "premium")


def test_p_30_areas():
    assert NEW.area / INCH**2 == pytest.approx(5.275, abs=5e-4)
    assert NEW.outside_area / INCH**2 == pytest.approx(19.635, abs=5e-4)
    assert NEW.bore_area / INCH**2 == pytest.approx(14.360, abs=5e-4)


def test_p_31_moduli():
    assert NEW.modulus / INCH**3 == pytest.approx(5.708, abs=5e-4)
    assert NEW.polar_modulus / INCH**3 == pytest.approx(11.415, abs=5e-4)


def test_p_32_ratings_of_the_new_body():
    assert float(pipe.tension_left(NEW, 135000 * PSI, 0.0)) / LBF == pytest.approx(712100, rel=5e-5)
    assert float(pipe.torsional_yield(NEW, 135000 * PSI)) / FT_LBF == pytest.approx(74100, rel=5e-5)


def test_p_33_premium_section():
    # the sheet rounds the worn outside to 4.855 in, 5e-4 off in area
    assert PREMIUM.outer_diameter / INCH == pytest.approx(4.855, abs=5e-4)
    assert PREMIUM.area / INCH**2 == pytest.approx(4.154, rel=5e-4)
    assert PREMIUM.modulus / INCH**3 == pytest.approx(4.476, rel=5e-4)
    assert PREMIUM.polar_modulus / INCH**3 == pytest.approx(8.953, rel=5e-4)


def test_p_34_premium_ratings():
    assert float(pipe.tension_left(PREMIUM, 135000 * PSI, 0.0)) / LBF == pytest.approx(560800, rel=5e-4)
    assert float(pipe.torsional_yield(PREMIUM, 135000 * PSI)) / FT_LBF == pytest.approx(58100, rel=5e-4)


def test_p_35_plain_end_weight():
    # 3.4 lb/ft per in2 is 489.6 lb/ft3; the sheet prints 17.932
    density = 489.6 * 0.45359237 / 0.3048**3
    assert NEW.weight(density) / LB_PER_FT == pytest.approx(17.932, rel=2e-4)
