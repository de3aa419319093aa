"""Stretch and free point against handbook pages, each seen.

P-92 to P-94: web excerpt "Determine free point constant". P-95: drill-string elongation after API RP 7G.
P-96, P-97: web tutorial on stuck depth. P-98, P-99: IODP Expedition 336, table T5 (tubular stretch).
"""

from __future__ import annotations

import pytest

from field import FOOT, INCH, LBF, PSI
from forensics.mechanics import pipe
from forensics.mechanics.pipe import Tube

E = 30e6 * PSI


def free_point_constant(outside: float, inside: float) -> float:
    """Feet of free pipe per inch of stretch per 1,000 lbf."""
    tube = Tube(outside * INCH, inside * INCH)
    return float(pipe.free_length(INCH, 1000 * LBF, tube.area, E)) / FOOT


def test_p_92_free_point_constant():
    assert free_point_constant(4.5, 3.826) == pytest.approx(11017.50, rel=1.1e-4)  # source rounds the area


def test_p_96_free_point_constant():
    assert free_point_constant(3.5, 2.992) == pytest.approx(6475.5, rel=1e-5)


def test_p_93_free_pipe_of_tubing():
    tube = Tube(2.875 * INCH, 2.441 * INCH)
    length = pipe.free_length(25 * INCH, 20000 * LBF, tube.area, E)
    assert float(length) / FOOT == pytest.approx(5663.0, rel=2e-4)


def test_p_97_free_pipe():
    tube = Tube(3.5 * INCH, 2.992 * INCH)
    assert float(pipe.free_length(20 * INCH, 25000 * LBF, tube.area, E)) / FOOT == pytest.approx(
        5180, rel=1e-4
    )


def test_p_94_free_drill_pipe():
    # the page's 735,294 stands for E = 29.994e6 psi with its rounded weight; Hooke gives 10549.19
    tube = Tube(5 * INCH, 4.276 * INCH)
    length = float(pipe.free_length(24 * INCH, 30000 * LBF, tube.area, E)) / FOOT
    assert length == pytest.approx(10549.19, rel=1e-6)
    assert length == pytest.approx(10547.0, rel=3e-4)


def test_p_95_elongation():
    # stretch = L T / (735000 W) with W 23.52 lb/ft as a plain weight, 3.4 lb/ft per in2 of steel
    area = 23.52 / 3.4 * INCH**2
    inches = float(pipe.stretch(230000 * LBF, 8500 * FOOT, area, E)) / INCH
    assert inches == pytest.approx(113.1, rel=6e-4)  # 735,000 is rounded to three digits


@pytest.mark.parametrize(
    ("outside", "inside", "area", "metres"),
    [
        (4.5, 4.052, 3.009, 0.0011),
        (5.5, 4.892, 4.962, 0.0007),
        (5.0, 4.25, 5.449, 0.0006),
        (5.5, 4.5, 7.854, 0.0004),
    ],
)
def test_p_98_p_99_table_of_tubulars(outside, inside, area, metres):
    tube = Tube(outside * INCH, inside * INCH)
    assert tube.area / INCH**2 == pytest.approx(area, abs=5e-4)
    # per 100 m and 1,000 lbf, printed to one or two digits
    assert float(pipe.stretch(1000 * LBF, 100.0, tube.area, E)) == pytest.approx(metres, abs=5e-5)
