"""Helical onset on loading against the abstract of SPE 25503 (Wu and Juvkam-Wold 1993), seen."""

from __future__ import annotations

import math

import pytest
from scipy import optimize

from forensics.mechanics.airy_column import exact_column_load
from forensics.mechanics.critical import (
    Place,
    chen_lin_cheatham_1990,
    dawson_paslay_1984,
    wu_juvkam_wold_1993,
)
from forensics.mechanics.threshold import VERTICAL_HELICAL

FLAT = Place(1.2e6, 0.045, 250.0, 1.5707963)


def test_b_s2_about_1_8_times_the_sinusoidal_load():
    assert wu_juvkam_wold_1993(FLAT) / dawson_paslay_1984(FLAT) == pytest.approx(1.8, abs=0.05)
    assert wu_juvkam_wold_1993(FLAT) / dawson_paslay_1984(FLAT) == pytest.approx(1.8284271, rel=2e-8)


def test_b_s3_about_1_3_times_the_older_helical_load():
    assert wu_juvkam_wold_1993(FLAT) / chen_lin_cheatham_1990(FLAT) == pytest.approx(1.3, abs=0.05)
    assert wu_juvkam_wold_1993(FLAT) / chen_lin_cheatham_1990(FLAT) == pytest.approx(1.2928932, rel=1e-7)


def test_b_v11_vertical_constants_by_the_energy_argument():
    # 2.55 and 5.55 (from memory, medium) over (EI w^2)^(1/3). One half wave in a length L costs no energy
    # at F = pi^2 / L^2 + L / 2, one turn of a helix at 4 pi^2 / L^2 + L / 2, least over L: 2.553 and 4.054,
    # the mean load while the helix forms. The load at the end of forming is twice that less the start, as
    # in the level hole, where it gives 2 sqrt(2) - 1: 5.555.
    half, turn = (
        optimize.minimize_scalar(lambda x, a=a: a / x**2 + x / 2, bounds=(1, 20), method="bounded").fun
        for a in (math.pi**2, 4 * math.pi**2)
    )
    assert half == pytest.approx(2.55, abs=5e-3)
    assert 2 * turn - half == pytest.approx(VERTICAL_HELICAL, abs=6e-3)
    # the energy argument is an upper bound: the string's own load is lower at every length from 4 on
    assert exact_column_load(4.0) < half
