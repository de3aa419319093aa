"""The band of published onsets: counts, words, validity and clearance."""

from __future__ import annotations

import math

import numpy as np
import pytest

from forensics.mechanics import band
from forensics.mechanics.critical import Place
from forensics.mechanics.selfconsistent import local_load

EI, GAP, SIDE = 1.23e6, 0.0445, 258.3
LOCAL = float(local_load(EI, SIDE, GAP))


def test_onsets_in_a_level_hole_are_the_published_multiples():
    onsets = band.onset_loads(EI, LOCAL, 0.0)
    np.testing.assert_allclose(onsets / LOCAL, [math.sqrt(2), 2 * math.sqrt(2) - 1, 2 * math.sqrt(2)])
    assert band.ORDER == ("chen", "wu", "mitchell")


def test_count_and_words_go_together():
    onsets = band.onset_loads(EI, [LOCAL] * 4, 0.0)
    passed = band.onsets_passed(LOCAL * np.array([1.2, 1.5, 2.0, 3.0]), onsets)
    assert [band.band_words(int(k)) for k in passed] == [
        "short of all criteria",
        "past Chen, short of Wu and Mitchell",
        "past Chen and Wu, short of Mitchell",
        "past all criteria",
    ]


def test_torque_lowers_the_band():
    assert band.onsets_passed(1.40 * LOCAL, band.onset_loads(EI, LOCAL, 0.0)) == 0
    assert band.onsets_passed(1.40 * LOCAL, band.onset_loads(EI, LOCAL, 0.0) - 0.03 * LOCAL) == 1


def test_interval_that_spans_onsets():
    assert band.band_words(0, 3) == "perhaps past Chen, Wu and Mitchell"
    assert band.band_words(2, 3) == "past Chen and Wu, perhaps past Mitchell"
    assert band.band_words(0, 1) == "perhaps past Chen, short of Wu and Mitchell"
    for bad in ((2, 1), (-1, 0), (1, 4)):
        with pytest.raises(ValueError, match="onsets passed came as"):
            band.band_words(*bad)


def test_unknown_load_has_passed_nothing():
    assert band.onsets_passed(np.nan, band.onset_loads(EI, LOCAL, 0.0)) == 0


def test_validity_in_words():
    assert band.validity_words(Place(EI, GAP, SIDE, 1.0)) == ""
    assert band.validity_words(Place(EI, GAP, SIDE, math.radians(4))) == (
        "Chen, Wu and Mitchell hold for 15 to 90 deg and up to 0.5 deg/30m; here 4.0 deg and 0.0 deg/30m"
    )
    bent = Place(EI, GAP, SIDE, 1.0, math.radians(3) / 30)
    assert band.validity_words(bent, "field").endswith("; here 57.3 deg and 3.0 deg/100ft")
