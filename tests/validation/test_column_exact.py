"""Column under its own weight: exact solutions, and numbers computed elsewhere in two independent ways.

Sources: solutions by Airy and Scorer functions (B-V rows, mechanics of the pinned string); a table of the
zeros of Ai' in university notes on the linear potential (2015); Lubinski 1950 (API 50-178, from memory);
a heavy-column constant in Timoshenko's form (from memory). The check values without another source were
computed by Hermite finite elements and by Airy and Scorer functions, which agree.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import integrate, optimize, special

from field import EI_UNIT, FOOT, LB_PER_FT, LBF
from forensics.mechanics.columns import Ends, column_load
from forensics.mechanics.eigen import LIMIT, column_eigenvalue, interpolate
from forensics.mechanics.threshold import near_vertical_term, weight_cube

# pinned-pinned, F / (w l) by length: computed two ways. At 20 the exact solution (40 digits) is 1.71104054,
# four units of the seventh digit under the listed 1.71104095, hence the wider tolerance.
PINNED = [
    (4, 2.227887066, 1e-9),
    (8, 1.937039738, 1e-9),
    (10, 1.869733399, 1e-9),
    (20, 1.71104095, 4e-7),
    (64, 1.54244492, 5e-9),
    (512, 1.37875790, 5e-9),
    (4096, 1.29098918, 5e-9),
    (262144, 1.20066059, 5e-9),
]

# c(n) at length 512: computed two ways, printed to six decimals
SIDE_LOADED = [
    (0.1, 1.499765),
    (1.0, 1.561432),
    (10.0, 1.595610),
    (100.0, 1.609819),
    (1000.0, 1.614822),
    (1e4, 1.616464),
]


def by_shooting(n: float, length: float, near: float) -> float:
    """Second method: integrate from the lower end with DOP853 and close the upper end by a root search."""

    def ends(phi: float) -> float:
        def rate(x: float, y: np.ndarray) -> np.ndarray:
            y = y.reshape(4, 2)
            last = -(phi - x) * y[2] + y[1] - n * y[0]
            return np.concatenate([y[1], y[2], y[3], last])

        start = np.zeros((4, 2))
        start[1, 0] = start[3, 1] = 1.0
        way = integrate.solve_ivp(rate, (0, length), start.ravel(), method="DOP853", rtol=1e-12, atol=1e-14)
        y = way.y[:, -1].reshape(4, 2)
        return float(y[0, 0] * y[2, 1] - y[0, 1] * y[2, 0])

    return float(optimize.brentq(ends, near - 0.05, near + 0.05, xtol=1e-12))


@pytest.mark.parametrize(("length", "value", "rel"), PINNED)
def test_pinned_column_by_length(length, value, rel):
    assert column_eigenvalue(0.0, length) == pytest.approx(value, rel=rel)


@pytest.mark.parametrize(("n", "length"), [(0.0, 4.0), (0.0, 8.0), (1.0, 5.0), (50.0, 6.0)])
def test_column_by_a_second_method(n, length):
    known = 2 * math.sqrt(n) + column_eigenvalue(n, length)
    # shooting loses digits to the growing solution
    assert by_shooting(n, length, known) == pytest.approx(known, rel=1e-8)


@pytest.mark.parametrize(("n", "value"), SIDE_LOADED)
def test_side_loaded_column(n, value):
    # half a unit of the last printed digit, and a little: the list rounds 1.6148215 up
    assert column_eigenvalue(n, 512.0) == pytest.approx(value, abs=1.1e-6)


@pytest.mark.parametrize(("n", "value"), [(0.0, 1.37875790), *SIDE_LOADED])
def test_shipped_table_at_length_512(n, value):
    assert interpolate(n, 512.0) == pytest.approx(value, rel=2e-4)


def test_b_v2_v3_lubinskis_first_order_load():
    # Lubinski 1950, from memory: 1.94; reached exactly at length 7.9278 (computed)
    assert column_eigenvalue(0.0, 7.9278) == pytest.approx(1.94, abs=5e-6)
    assert column_eigenvalue(0.0, 8.0) == pytest.approx(1.94, rel=2e-3)


@pytest.mark.parametrize(("length", "value"), [(20, 1.71104), (40, 1.60032), (80, 1.51858)])
def test_b_v6_long_pinned_columns(length, value):
    assert column_eigenvalue(0.0, length) == pytest.approx(value, abs=6e-6)


@pytest.mark.parametrize(("length", "value"), [(1e3, 1.345128), (1e6, 1.182990)])
def test_b_v6_very_long_columns_by_the_asymptotic_form(length, value):
    # the large-length form of the exact solution, good to its own digits there
    assert column_eigenvalue(0.0, length) == pytest.approx(value, abs=2e-6)


def test_b_v1_no_length_reaches_the_infinite_string():
    # Wang 1986 (attribution from memory): 1.01879297 for the string whose top is free to move
    values = [column_eigenvalue(0.0, length) for length in (1e2, 1e3, 1e4, 1e5, 1e6)]
    assert values == sorted(values, reverse=True)
    assert values[-1] > 1.01879297 + 0.1


def test_b_a1_a7_limit_is_the_first_zero_of_airys_slope():
    # table of zeros of Ai', seen: -1.018793; times the cube root of 4: 1.61723303 (computed)
    assert pytest.approx(1.018793, abs=5e-7) == LIMIT / 4 ** (1 / 3)
    assert pytest.approx(1.61723303, abs=5e-9) == LIMIT
    assert pytest.approx(-(4 ** (1 / 3)) * special.ai_zeros(1)[1][0], rel=1e-12) == LIMIT


def test_b_a10_column_that_buckles_under_its_own_weight_alone():
    # Timoshenko's form, from memory: q L^3 / EI = 18.6; finite elements: 18.568725.
    # The load at the foot is then the whole weight: the eigenvalue equals the length.
    length = optimize.brentq(lambda x: column_eigenvalue(0.0, x) - x, 2.0, 3.0, xtol=1e-12)
    assert length**3 == pytest.approx(18.568725, abs=1e-6)
    assert length**3 == pytest.approx(18.6, rel=2e-3)


def test_b_v12_collars_in_pounds():
    # 6-3/4 x 2-13/16 in collars in 10 ppg mud: (EI w^2)^(1/3) = 5309.6047 lbf, x1.94 = 10300.63 (computed)
    ei, w = 30e6 * 98.831110 * EI_UNIT, 85.264269 * LB_PER_FT
    # 1.94 belongs to 7.9278 of Lubinski's lengths; the table is good to 1e-4 there
    term = near_vertical_term(ei, 0.0, w, 7.9278 * 62.27233 * FOOT)
    assert float(term) / LBF == pytest.approx(10300.63, rel=2e-4)
    assert float(weight_cube(ei, w)) / LBF == pytest.approx(5309.6047, rel=1e-7)
    # a top that is free sideways: x 1.018793
    free = column_load(0.0, 60.0, Ends("pinned", "free"))
    assert float(weight_cube(ei, w)) * free / LBF == pytest.approx(5409.39, rel=1e-6)
    assert (ei / w) ** (1 / 3) / FOOT == pytest.approx(62.27233, rel=1e-7)


def test_b_v13_drill_pipe_in_pounds():
    # 5 in pipe in 10 ppg mud: unit 976.5904 lbf, x1.94 = 1894.585 lbf (computed)
    ei, w = 4.28074752e8 * EI_UNIT, 17.700687 * LB_PER_FT
    assert float(weight_cube(ei, w)) / LBF == pytest.approx(976.5904, rel=1e-7)
    free = column_load(0.0, 60.0, Ends("pinned", "free"))
    assert float(weight_cube(ei, w)) * free / LBF == pytest.approx(994.943, rel=1e-6)
    assert float(near_vertical_term(ei, 0.0, w, 7.9278 * 55.17246 * FOOT)) / LBF == pytest.approx(
        1894.585, rel=2e-4
    )


def test_great_side_load_is_the_beam_on_a_spring():
    # c is what gravity adds: 2 sqrt(n) is the weightless beam on an elastic foundation (Hetenyi)
    n = 1e5
    assert 2 * math.sqrt(n) + column_eigenvalue(n, 60.0) == pytest.approx(2 * math.sqrt(n), rel=3e-3)
