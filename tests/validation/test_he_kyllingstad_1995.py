"""Critical load in curved holes: He and Kyllingstad 1995 (formula from memory, high).

The numbers come from the closed form of a pure build and from a root search, which agree. The sense of the
effect was seen in the abstract of Wu and Juvkam-Wold, J. Energy Resour. Technol. 117 (1995) 214.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from field import DEG_PER_100FT, DP5_CLEARANCE, DP5_EI, DP5_WEIGHT, LBF
from forensics.mechanics.critical import Place, dawson_paslay_1984, he_kyllingstad_1995
from forensics.mechanics.selfconsistent import ContactSize
from forensics.mechanics.threshold import self_consistent_load


@pytest.mark.parametrize(
    ("inclination", "rate", "pounds"),
    [
        pytest.param(60, 3, 62645.45, id="B-C1"),
        pytest.param(60, 10, 150609.78, id="B-C2"),
        pytest.param(90, 10, 151817.42, id="B-C3"),
        pytest.param(30, 3, 55658.67, id="B-C4"),
    ],
)
def test_build(inclination, rate, pounds):
    angle, k = math.radians(inclination), rate * DEG_PER_100FT
    place = Place(DP5_EI, DP5_CLEARANCE, DP5_WEIGHT, angle, k)
    load = float(he_kyllingstad_1995(place))
    assert load / LBF == pytest.approx(pounds, rel=1e-7)
    side = DP5_WEIGHT * math.sin(angle)
    closed = 2 * DP5_EI * k / DP5_CLEARANCE * (1 + math.sqrt(1 + DP5_CLEARANCE * side / (DP5_EI * k**2)))
    assert load == pytest.approx(closed, rel=1e-12)
    # the threshold's own solver, with no weight along the hole, is the same criterion
    size = ContactSize(side**2, side * k, k**2)
    assert self_consistent_load(DP5_EI, DP5_CLEARANCE, 0.0, 300.0, size) == pytest.approx(load, rel=1e-9)


def test_curved_is_larger_and_tends_to_straight():
    rates = np.array([10.0, 3.0, 1.0, 0.1, 0.001]) * DEG_PER_100FT
    place = Place(DP5_EI, DP5_CLEARANCE, DP5_WEIGHT, math.radians(60), rates)
    load = he_kyllingstad_1995(place)
    straight = float(dawson_paslay_1984(place))
    assert np.all(np.diff(load) < 0)
    assert load[1] > 1.7 * straight
    assert load[-1] == pytest.approx(straight, rel=1e-3)
