"""Torque on a helix: limits, energy by plain minimising, and the published pitch."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import optimize

from forensics.mechanics import helix, torque

EI, GAP, SIDE = 1.23e6, 0.0445, 258.3


def energy(rate: float, force: float, moment: float) -> float:
    return EI * rate**4 / 2 - force * rate**2 / 2 - moment * rate**3 / 2


def test_no_torque_is_lubinskis_helix():
    assert 2 * math.pi / torque.turn_rate(2e5, EI, 0.0) == pytest.approx(helix.pitch(2e5, EI))
    assert torque.contact_force(2e5, EI, GAP, 0.0) == pytest.approx(helix.contact_force(2e5, EI, GAP))
    assert torque.onset_drop(EI, SIDE, GAP, 0.0) == 0


def test_turn_rate_costs_least_energy():
    found = optimize.minimize_scalar(lambda k: energy(k, 2e5, 3e4), bounds=(0.1, 1.0), method="bounded")
    assert torque.turn_rate(2e5, EI, 3e4) == pytest.approx(found.x, rel=1e-5)


def test_pitch_is_miska_and_cunhas():
    # F = 8 pi^2 EI / p^2 - 3 pi M / p (from memory)
    pitch = 2 * math.pi / torque.turn_rate(2e5, EI, 3e4)
    assert 8 * math.pi**2 * EI / pitch**2 - 3 * math.pi * 3e4 / pitch == pytest.approx(2e5)


def test_contact_is_what_widening_the_helix_would_free():
    # wall force: minus the change of energy with the clearance, at the same turn rate
    rate = float(torque.turn_rate(2e5, EI, 3e4))
    assert torque.contact_force(2e5, EI, GAP, 3e4) == pytest.approx(-2 * GAP * energy(rate, 2e5, 3e4))


def test_drop_of_the_onset_by_plain_minimising():
    for moment in (5e3, 2e4, 6e4):
        least = optimize.minimize_scalar(
            lambda k, m=moment: EI * k**2 - m * k + 2 * SIDE / (GAP * k**2),
            bounds=(0.05, 1.0),
            method="bounded",
        ).fun
        chen = math.sqrt(2) * 2 * math.sqrt(EI * SIDE / GAP)
        assert torque.onset_drop(EI, SIDE, GAP, moment) == pytest.approx(chen - least, rel=1e-6)


def test_drop_to_first_order_whichever_way_it_turns():
    first = 100.0 * (2 * SIDE / (EI * GAP)) ** 0.25
    np.testing.assert_allclose(torque.onset_drop(EI, SIDE, GAP, [100.0, -100.0]), first, rtol=1e-3)


def test_switch_and_edges():
    assert torque.onset_drop(EI, SIDE, GAP, 2e4, applied=False) == 0
    np.testing.assert_array_equal(torque.onset_drop(EI, [0.0, SIDE], GAP, 2e4) > 0, [False, True])
    assert torque.turn_rate(-1e5, EI, 2e4) == 0
    assert torque.contact_force(-1e5, EI, GAP, 2e4) == 0
