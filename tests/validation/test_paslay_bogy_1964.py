"""Sinusoidal load of a pinned length: Paslay and Bogy 1964 (form from memory, high; numbers computed)."""

from __future__ import annotations

import math

import pytest

from field import DP5_CLEARANCE, DP5_EI, DP5_WEIGHT, FOOT, LBF
from forensics.mechanics.critical import Place
from forensics.mechanics.tool_joint import paslay_bogy_1964


@pytest.mark.parametrize(
    ("feet", "pounds"), [(30, 43667.93), (60, 43667.93), (90, 39392.18), (120, 38014.12), (500, 38025.96)]
)
def test_b_s16_by_length(feet, pounds):
    # (pi^2 EI / L^2) (n^2 + k/n^2), n = 1, 2, 2, 3, 13; the long limit is 37990.52
    place = Place(DP5_EI, DP5_CLEARANCE, DP5_WEIGHT, math.pi / 2)
    load = float(paslay_bogy_1964(place, feet * FOOT)) / LBF
    assert load == pytest.approx(pounds, rel=1e-6)
    assert load > 37990.52
