"""Heavy columns with other ends: tables of the zeros of Airy functions, and self-weight columns.

Sources: a table of the zeros of Ai and Ai' in university notes on the linear potential (2015, seen); the
self-weight constants 7.8373 (copies of the encyclopaedia article on self-buckling, seen) and 18.6, 52.5 and
74.6 (Timoshenko's form of the heavy column, from memory, medium); modes and ends of vertical strings
computed by Hermite finite elements and by Airy and Scorer functions, which agree. Wang 1986 for the
infinite string (from memory).
"""

from __future__ import annotations

import math

import pytest
from scipy import optimize

from forensics.mechanics.airy_column import exact_column_load
from forensics.mechanics.columns import Ends, column_load

# a string whose top is free to move sideways needs minus a zero of Ai' (pinned bit) or of Ai (guided bit)
ZEROS = {
    "B-A1": (Ends("pinned", "free"), 1, 1.018793),
    "B-A2": (Ends("pinned", "free"), 2, 3.248198),
    "B-A3": (Ends("pinned", "free"), 3, 4.820099),
    "B-A4": (Ends("guided", "free"), 1, 2.338107),
    "B-A5": (Ends("guided", "free"), 2, 4.087949),
    "B-A6": (Ends("guided", "free"), 3, 5.52056),
}


@pytest.mark.parametrize("row", ZEROS)
def test_table_of_zeros(row):
    ends, mode, published = ZEROS[row]
    # half a unit of the last printed digit
    assert column_load(0.0, 60.0, ends, mode) == pytest.approx(published, abs=6e-7)
    assert exact_column_load(60.0, ends, mode) == pytest.approx(published, abs=6e-7)


# q L^3 / EI at which a column buckles under its weight alone: the load at the foot is then the weight
SELF_WEIGHT = {
    "B-A9": (Ends("clamped", "free"), 7.83734744, 7.8373, 1e-5),
    "B-A10": (Ends("pinned", "held"), 18.568725, 18.6, 2e-3),
    "B-A11": (Ends("clamped", "held"), 52.500663, 52.5, 2e-5),
    "B-A12": (Ends("clamped", "clamped"), 74.628569, 74.6, 5e-4),
}


@pytest.mark.parametrize("row", SELF_WEIGHT)
def test_column_under_its_own_weight(row):
    ends, computed, published, rel = SELF_WEIGHT[row]
    length = optimize.brentq(lambda x: column_load(0.0, x, ends) - x, 1.9, 4.5, xtol=1e-12)
    assert length**3 == pytest.approx(computed, abs=2e-6)
    assert length**3 == pytest.approx(published, rel=rel)


@pytest.mark.parametrize(("length", "value"), [(8, 4.10019), (20, 3.88055), (80, 3.70203)])
def test_b_v7_second_mode_of_the_pinned_string(length, value):
    assert column_load(0.0, length, mode=2) == pytest.approx(value, abs=6e-6)


@pytest.mark.parametrize("length", [8.0, 20.0, 80.0])
def test_b_v8_guided_bit(length):
    assert column_load(0.0, length, Ends("guided")) == pytest.approx(2.338107, abs=6e-7)


@pytest.mark.parametrize(("length", "value"), [(8, 3.45911), (20, 3.23797)])
def test_b_v9_clamped_bit(length, value):
    assert column_load(0.0, length, Ends("clamped")) == pytest.approx(value, abs=6e-6)


def test_b_v1_free_top_from_length_five_on():
    # 1.01879297, to 2e-5 at 5 already
    assert column_load(0.0, 5.0, Ends("pinned", "free")) == pytest.approx(1.01879297, rel=2e-5)
    assert column_load(0.0, 8.0, Ends("pinned", "free")) == pytest.approx(1.01879297, rel=1e-7)


@pytest.mark.parametrize(("length", "value"), [(4.0, 2.227887066), (8.0, 1.937039738), (10.0, 1.869733399)])
def test_b_v2_v4_v5_in_closed_form(length, value):
    assert exact_column_load(length) == pytest.approx(value, abs=6e-10)


def test_b_v3_length_of_lubinskis_figure():
    length = optimize.brentq(lambda x: exact_column_load(x) - 1.94, 7.0, 9.0)
    assert length == pytest.approx(7.9278, abs=6e-5)


def test_b_a8_clamped_bit_with_great_side_load():
    # 4^(1/3) x 2.33810741; the departure falls as one over the fourth root of n
    c = [column_load(n, 30.0, Ends("clamped")) - 2 * math.sqrt(n) for n in (1e3, 1.6e4, 2.56e5)]
    near, far = 2 * c[1] - c[0], 2 * c[2] - c[1]
    assert far == pytest.approx(3.71151416, rel=1e-3)
    assert abs(far - 3.71151416) < abs(near - 3.71151416)
