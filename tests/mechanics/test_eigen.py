"""The eigenvalue of the heavy column: solver against other methods, table against solver."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from forensics.mechanics import eigen
from forensics.mechanics.airy_column import exact_column_load
from naive_mechanics import column_by_differences


@pytest.mark.parametrize(("n", "length"), [(0.0, 6.0), (1.0, 8.0), (10.0, 4.0), (200.0, 6.0)])
def test_solver_agrees_with_plain_differences(n, length):
    # second order: Richardson's extrapolation takes the leading error out
    coarse, fine = (column_by_differences(n, length, points) for points in (80, 160))
    assert eigen.column_eigenvalue(n, length) == pytest.approx((4 * fine - coarse) / 3, rel=2e-4)


def test_short_column_tends_to_euler():
    # gravity is a perturbation: half the weight acts, so phi -> pi^2/L^2 + L/2
    length = 0.05
    assert eigen.column_eigenvalue(0.0, length) == pytest.approx(
        (math.pi / length) ** 2 + length / 2, rel=1e-9
    )


@pytest.mark.parametrize("n", [1.0, 30.0, 1e3, 1e5])
def test_length_stops_mattering_from_eight_on(n):
    far = eigen.column_eigenvalue(n, 300.0)
    assert eigen.column_eigenvalue(n, 8.0) == pytest.approx(far, rel=3e-4)
    assert eigen.column_eigenvalue(n, 5000.0) == pytest.approx(far, rel=1e-6)


def test_great_n_tends_to_the_first_zero_of_airys_slope():
    assert eigen.column_eigenvalue(1e6, 60.0) == pytest.approx(eigen.LIMIT, rel=1e-4)
    assert eigen.interpolate(1e14, 60.0) == pytest.approx(eigen.LIMIT, abs=1e-7)


def test_the_departure_from_the_limit_halves_when_n_grows_fourfold():
    # what carries the table past its last row
    one, four = (eigen.LIMIT - eigen.column_eigenvalue(n, 30.0) for n in (1e4, 4e4))
    assert one / four == pytest.approx(2.0, rel=0.01)


@pytest.mark.parametrize(("n", "length"), [(-1.0, 8.0), (math.nan, 8.0), (1.0, 0.0), (1.0, math.inf)])
def test_solver_refuses_what_is_no_column(n, length):
    with pytest.raises(ValueError, match="came as"):
        eigen.column_eigenvalue(n, length)


def test_shipped_table_is_what_the_solver_gives():
    table = eigen.load_table()
    assert table.values.shape == (eigen.ROWS, eigen.COLUMNS)
    pick = np.random.default_rng(3)
    for row, column in zip(
        pick.integers(0, eigen.ROWS, 60), pick.integers(0, eigen.COLUMNS, 60), strict=True
    ):
        n = math.exp(table.n0 + row * table.dn)
        length = eigen.OFFSET + math.exp(table.l0 + column * table.dl)
        # single precision in the file
        assert table.values[row, column] == pytest.approx(eigen.column_eigenvalue(n, length), rel=3e-7)


def test_build_table_fills_the_same_grid(monkeypatch):
    monkeypatch.setattr(eigen, "ROWS", 3)
    monkeypatch.setattr(eigen, "COLUMNS", 2)
    small = eigen.build_table()
    whole = eigen.load_table()
    assert small.values[0, 0] == pytest.approx(whole.values[0, 0], rel=3e-7)
    assert small.values[-1, -1] == pytest.approx(whole.values[-1, -1], rel=3e-7)
    assert small.n0 + 2 * small.dn == pytest.approx(eigen.LOG_N[1])


@settings(max_examples=60, deadline=None)
@given(st.floats(math.log(1e-6), math.log(1e7)), st.floats(math.log(8.0), math.log(1e6)))
def test_interpolation_from_length_eight_on(log_n, log_length):
    n, length = math.exp(log_n), math.exp(log_length)
    assert eigen.interpolate(n, length) == pytest.approx(eigen.column_eigenvalue(n, length), rel=5e-4)


@settings(max_examples=60, deadline=None)
@given(st.floats(math.log(1e-6), math.log(1e6)), st.floats(2.0, 8.0))
def test_interpolation_of_short_columns(log_n, length):
    # c swings with the half waves that fit; the load is made of phi = 2 sqrt(n) + c
    n = math.exp(log_n)
    exact = eigen.column_eigenvalue(n, length)
    assert abs(float(eigen.interpolate(n, length)) - exact) < 1e-3 * (exact + 2 * math.sqrt(n))


def test_short_formula_is_within_its_stated_error():
    n = np.concatenate([[0.0], np.geomspace(1e-6, 1e6, 90)])[:, None]
    length = np.geomspace(5.0, 1e6, 60)
    exact = 2 * np.sqrt(n) + eigen.interpolate(n, length)
    off = (2 * np.sqrt(n) + eigen.quick_eigenvalue(n, length)) / exact - 1
    assert np.abs(off).max() < 0.011
    assert np.sqrt((off**2).mean()) < 0.003
    # the table is held against the solver elsewhere; here, the exact solution without side load
    for column in (5.0, 20.0, 512.0, 1e6):
        known = exact_column_load(column)
        assert float(eigen.quick_eigenvalue(0.0, column)) == pytest.approx(known, rel=0.011)
    assert float(eigen.quick_eigenvalue(1e12, 50.0)) == pytest.approx(eigen.LIMIT, rel=1e-3)


def test_edges_of_the_table_hold():
    inside = eigen.interpolate([1.0, 1.0], [2.0, 1e6])
    np.testing.assert_allclose(eigen.interpolate([1.0, 1.0], [0.5, 1e9]), inside, rtol=1e-12)
    # shorter than the table the true value is greater: holding the edge is cautious
    assert eigen.column_eigenvalue(0.1, 1.0) > eigen.interpolate(0.1, 1.0)


@pytest.mark.parametrize("n", [0.0, 1e-9, 2e-7])
def test_below_the_table_the_eigenvalue_holds(n):
    assert eigen.interpolate(n, 40.0) == pytest.approx(eigen.column_eigenvalue(n, 40.0), rel=1e-4)


def test_shapes_and_missing_values():
    assert eigen.interpolate([], 8.0).shape == (0,)
    assert eigen.interpolate(np.ones((2, 1)), np.full(3, 9.0)).shape == (2, 3)
    out = eigen.interpolate([math.nan, 1.0, 1.0], [8.0, math.nan, 8.0])
    np.testing.assert_array_equal(np.isnan(out), [True, True, False])


def test_table_is_loaded_once():
    assert eigen.load_table() is eigen.load_table()
