"""Torque per turn in 1,000 ft: web excerpt "Allowable torque and pull", field column, seen."""

from __future__ import annotations

import math

import pytest

from field import FOOT, FT_LBF, INCH, PSI
from forensics.mechanics import pipe
from forensics.mechanics.pipe import Tube

G = 11.71e6 * PSI  # the source's


@pytest.mark.parametrize(
    ("outside", "inside", "factor"),
    [
        pytest.param(3.5, 2.764, 4599.73, id="P-40"),
        pytest.param(3.5, 2.602, 5228.08, id="P-41"),
        pytest.param(4.5, 3.826, 9820.87, id="P-42"),
        pytest.param(4.5, 3.64, 11763.50, id="P-43"),
        pytest.param(5.0, 4.408, 12412.92, id="P-44"),
        pytest.param(5.0, 4.276, 14581.51, id="P-45"),
        pytest.param(5.0, 4.0, 18509.75, id="P-46"),
    ],
)
def test_one_turn_in_1000_ft(outside, inside, factor):
    tube = Tube(outside * INCH, inside * INCH)
    turned = pipe.twist(factor * FT_LBF, 1000 * FOOT, tube.polar, G)
    assert float(turned) / (2 * math.pi) == pytest.approx(1.0, rel=2e-6)


def test_p_47_turns_at_24000_ft_lbf():
    tube = Tube(5 * INCH, 4.276 * INCH)
    turned = pipe.twist(24000 * FT_LBF, 1000 * FOOT, tube.polar, G)
    assert float(turned) / (2 * math.pi) == pytest.approx(1.64592, abs=6e-6)
