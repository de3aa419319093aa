"""Columns with any ends: splines against the exact slope by Airy and Scorer functions, and limits."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import special

from forensics.mechanics.airy_column import exact_column_load, scorer, scorer_integral
from forensics.mechanics.columns import BIT_ENDS, TOP_ENDS, Ends, column_load
from forensics.mechanics.eigen import LIMIT, column_eigenvalue
from naive_mechanics import column_by_beam_elements

ALL_ENDS = [Ends(bit, top) for bit in BIT_ENDS for top in TOP_ENDS]


@pytest.mark.parametrize("ends", ALL_ENDS, ids=lambda e: f"{e.bit}-{e.top}")
@pytest.mark.parametrize("length", [2.0, 5.5, 33.0, 1e5])
def test_splines_are_the_exact_solution_without_side_load(ends, length):
    assert column_load(0.0, length, ends) == pytest.approx(exact_column_load(length, ends), rel=2e-8)


@pytest.mark.parametrize("ends", ALL_ENDS, ids=lambda e: f"{e.bit}-{e.top}")
@pytest.mark.parametrize(("n", "length"), [(1.0, 4.0), (60.0, 6.0), (3000.0, 3.0)])
def test_splines_are_beam_elements_under_side_load(ends, n, length):
    slow = column_by_beam_elements(n, length, ends.bit, ends.top, 90)
    assert column_load(n, length, ends) == pytest.approx(slow, rel=1e-5)


@pytest.mark.parametrize("length", [8.0, 80.0])
def test_second_and_third_mode_too(length):
    for mode in (2, 3):
        exact = exact_column_load(length, mode=mode)
        assert column_load(0.0, length, mode=mode) == pytest.approx(exact, rel=1e-8)


def test_scorers_function():
    # Gi'' - t Gi = -1/pi, Gi(0) = Bi(0)/3, Gi'(0) = Bi'(0)/3, and the integral of its derivative
    assert scorer(0.0)[0] == pytest.approx(special.airy(0)[2] / 3, rel=1e-10)
    assert scorer(0.0)[1] == pytest.approx(special.airy(0)[3] / 3, rel=1e-10)
    for x in (-4.0, 0.5, 30.0):
        bend = (scorer(x + 1e-4)[1] - scorer(x - 1e-4)[1]) / 2e-4
        assert bend - x * scorer(x)[0] == pytest.approx(-1 / math.pi, rel=1e-6)
    place, weight = np.polynomial.legendre.leggauss(40)
    area = sum(w * scorer(1.5 + 4.5 * p)[0] for p, w in zip(place, weight, strict=True)) * 4.5
    assert scorer_integral(-3.0, 6.0) == pytest.approx(area, rel=1e-10)


@pytest.mark.parametrize(
    ("bit", "limit"),
    [("pinned", 1.018792971647471), ("guided", 2.338107410459767), ("clamped", 2.338107410459767)],
)
def test_free_top_has_a_load_of_its_own_that_no_length_changes(bit, limit):
    # the first zeros of Ai' and Ai
    for length in (8.0, 200.0, 1e6):
        assert column_load(0.0, length, Ends(bit, "free")) == pytest.approx(limit, rel=1e-6)


def test_great_side_load_forgets_the_top():
    # long enough that a free top, which buckles at sqrt(n) plus the weight below it, is not the first
    loads = [column_load(400.0, 40.0, Ends("pinned", top)) for top in TOP_ENDS]
    assert np.ptp(loads) < 1e-8 * loads[0]


@pytest.mark.parametrize(("bit", "limit"), [("pinned", LIMIT), ("guided", LIMIT), ("clamped", 3.71151416)])
def test_what_great_side_load_leaves_to_the_bit_end(bit, limit):
    # 4^(1/3) times the first zero of Ai', and of Ai where the bit is clamped
    c = column_load(1e6, 30.0, Ends(bit)) - 2e3
    assert c == pytest.approx(limit, rel=6e-3)
    assert abs(c - limit) < abs(column_load(1e4, 30.0, Ends(bit)) - 2e2 - limit)


def test_free_end_on_a_bed_of_springs_buckles_by_itself():
    # Hetenyi: a long beam on springs buckles at a free end at half of 2 sqrt(n); weight adds its length
    assert column_load(1e4, 3.0, Ends("pinned", "free")) == pytest.approx(100 + 3.0, rel=2e-3)


def test_stiffer_ends_bear_more():
    for n, length in ((0.0, 8.0), (1.0, 5.0), (50.0, 3.0)):
        bit = [column_load(n, length, Ends(end)) for end in ("pinned", "clamped")]
        top = [column_load(n, length, Ends("pinned", end)) for end in ("free", "held", "clamped")]
        assert bit[0] < bit[1]
        assert top == sorted(top)


def test_default_is_the_string_of_the_table():
    assert column_load(3.0, 12.0) - 2 * math.sqrt(3.0) == column_eigenvalue(3.0, 12.0)


def test_refusals():
    with pytest.raises(ValueError, match="ends came as 'welded'"):
        Ends("welded")
    with pytest.raises(ValueError, match="2 or more"):
        exact_column_load(1.0)
    with pytest.raises(ValueError, match="length came as"):
        column_load(0.0, -1.0)
