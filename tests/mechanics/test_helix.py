"""The helix: identities between its numbers, and what happens in tension."""

from __future__ import annotations

import numpy as np
import pytest

from forensics.mechanics import helix

FORCE = np.array([5e4, 2e5, 4e5])
EI, GAP, OD, INERTIA = 1.2288e6, 0.0445, 0.127, 5.94e-6


def test_shape_stress_and_moment_belong_to_one_curve():
    # curvature of a circular helix of radius r and pitch P, small slope: r (2 pi / P)^2
    bend = GAP * (2 * np.pi / helix.pitch(FORCE, EI)) ** 2
    np.testing.assert_allclose(helix.curvature(FORCE, EI, GAP), bend, rtol=1e-12)
    np.testing.assert_allclose(helix.bending_moment(FORCE, GAP), EI * bend, rtol=1e-12)
    stress = helix.bending_moment(FORCE, GAP) * OD / 2 / INERTIA
    np.testing.assert_allclose(helix.bending_stress(FORCE, GAP, OD, INERTIA), stress, rtol=1e-12)


def test_shortening_is_the_slope_squared_by_half():
    slope = 2 * np.pi * GAP / helix.pitch(FORCE, EI)
    np.testing.assert_allclose(helix.shortening(FORCE, EI, GAP), slope**2 / 2, rtol=1e-12)


def test_contact_balances_axial_load_and_bending():
    # F r q^2 pushes outwards, EI r q^4 holds back
    turn = 2 * np.pi / helix.pitch(FORCE, EI)
    balance = FORCE * GAP * turn**2 - EI * GAP * turn**4
    np.testing.assert_allclose(helix.contact_force(FORCE, EI, GAP), balance, rtol=1e-12)


@pytest.mark.parametrize("force", [0.0, -1e5])
def test_tension_makes_no_helix(force):
    assert helix.pitch(force, EI) == np.inf
    assert helix.contact_force(force, EI, GAP) == 0
    assert helix.shortening(force, EI, GAP) == 0
    assert helix.bending_stress(force, GAP, OD, INERTIA) == 0
    assert helix.curvature(force, EI, GAP) == 0


def test_missing_stays_missing():
    assert np.isnan(helix.contact_force(np.nan, EI, GAP))
