"""Limits between shapes in Mitchell 1999, "Buckling Analysis in Deviated Wells: A Practical Method", seen."""

from __future__ import annotations

import math

import pytest

from forensics.mechanics.critical import HELICAL_ONSETS, Place, dawson_paslay_1984, mitchell_1997
from forensics.mechanics.threshold import ENVELOPE_RELEASE, release_load

FLAT = Place(1.2e6, 0.045, 250.0, math.pi / 2)


def test_b_s4_paslay_load_is_the_root_of_four_w_ei_over_r():
    assert dawson_paslay_1984(FLAT) == pytest.approx(math.sqrt(4 * 250.0 * 1.2e6 / 0.045), rel=1e-12)


def test_b_s4_helical_on_loading_at_2_8():
    assert mitchell_1997(FLAT) / dawson_paslay_1984(FLAT) == pytest.approx(2.8, abs=0.05)
    assert HELICAL_ONSETS["mitchell"].factor == pytest.approx(2.8284271, rel=1e-8)


def test_b_s4_unloading_limit_at_1_4():
    # our own envelope of wall contact, 1.370 F_DP, lies within 3.2 % of the published 1.4
    assert pytest.approx(math.sqrt(2), rel=0.033) == ENVELOPE_RELEASE
    local = float(dawson_paslay_1984(FLAT))
    assert release_load(local, local, "envelope") == pytest.approx(1.4 * local, rel=0.03)
