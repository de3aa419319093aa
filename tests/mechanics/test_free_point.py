"""Compliance of a held string against exact solutions."""

import numpy as np
import pytest

from forensics.mechanics.free_point import give_along, held_at


def test_without_fading_a_string_is_springs_in_a_row():
    """The trade's free length: the sum of L / EA over the components."""
    lengths, ea = np.array([2000.0, 500.0, 100.0]), np.array([7.0e8, 1.4e9, 3.0e9])
    assert give_along(lengths, 1.0 / ea, np.zeros(3)) == pytest.approx(np.cumsum(lengths / ea))


def test_round_a_bend_an_increment_falls_off_as_on_a_capstan():
    """Weightless pipe in an arc: an increment is multiplied by exp(-mu kappa s), so the integral is exact."""
    mu, kappa, ea, length = 0.3, 1.0 / 400.0, 7.0e8, 600.0
    k = 37
    along = give_along(np.full(k, length / k), np.full(k, 1.0 / ea), np.full(k, -mu * kappa))
    s = length * np.arange(1, k + 1) / k
    assert along == pytest.approx((1.0 - np.exp(-mu * kappa * s)) / (mu * kappa * ea))


def test_the_depth_is_read_back_and_never_below_the_bit():
    md = np.array([1000.0, 2000.0, 3000.0])
    along = give_along(np.full(3, 1000.0), np.array([1e-9, 2e-9, 2e-9]), np.zeros(3))
    assert held_at(float(along[1]), md, along) == pytest.approx(2000.0)
    assert held_at(0.5e-6, md, along) == pytest.approx(500.0)
    assert held_at(1e-3, md, along) == np.inf
