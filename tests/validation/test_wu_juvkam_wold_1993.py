"""Helical onset on loading against the abstract of SPE 25503 (Wu and Juvkam-Wold 1993), seen."""

from __future__ import annotations

import pytest

from forensics.mechanics.critical import (
    Place,
    chen_lin_cheatham_1990,
    dawson_paslay_1984,
    wu_juvkam_wold_1993,
)

FLAT = Place(1.2e6, 0.045, 250.0, 1.5707963)


def test_b_s2_about_1_8_times_the_sinusoidal_load():
    assert wu_juvkam_wold_1993(FLAT) / dawson_paslay_1984(FLAT) == pytest.approx(1.8, abs=0.05)
    assert wu_juvkam_wold_1993(FLAT) / dawson_paslay_1984(FLAT) == pytest.approx(1.8284271, rel=2e-8)


def test_b_s3_about_1_3_times_the_older_helical_load():
    assert wu_juvkam_wold_1993(FLAT) / chen_lin_cheatham_1990(FLAT) == pytest.approx(1.3, abs=0.05)
    assert wu_juvkam_wold_1993(FLAT) / chen_lin_cheatham_1990(FLAT) == pytest.approx(1.2928932, rel=1e-7)
