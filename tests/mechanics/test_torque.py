"""Torque on a helix: limits, energy by plain minimising, and the published pitch."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import optimize

from forensics.mechanics import helix, torque
from forensics.mechanics.kernels_judge import lowered, winding_wall
from naive_mechanics import wound_contact, wound_rate

EI, GAP, SIDE = 1.23e6, 0.0445, 258.3


def energy(rate: float, force: float, moment: float) -> float:
    return EI * rate**4 / 2 - force * rate**2 / 2 - moment * rate**3 / 2


def test_no_torque_is_lubinskis_helix():
    assert 2 * math.pi / wound_rate(2e5, EI, 0.0) == pytest.approx(helix.pitch(2e5, EI))
    assert wound_contact(2e5, EI, GAP, 0.0) == pytest.approx(helix.contact_force(2e5, EI, GAP))
    assert torque.onset_drop(2e5, EI, 0.0) == 0


def test_the_twins_turn_rate_costs_least_energy():
    found = optimize.minimize_scalar(lambda k: energy(k, 2e5, 3e4), bounds=(0.1, 1.0), method="bounded")
    assert wound_rate(2e5, EI, 3e4) == pytest.approx(found.x, rel=1e-5)


def test_the_twins_pitch_is_miska_and_cunhas():
    # F = 8 pi^2 EI / p^2 - 3 pi M / p (from memory)
    pitch = 2 * math.pi / wound_rate(2e5, EI, 3e4)
    assert 8 * math.pi**2 * EI / pitch**2 - 3 * math.pi * 3e4 / pitch == pytest.approx(2e5)


def test_the_twins_contact_is_what_widening_the_helix_would_free():
    # wall force: minus the change of energy with the clearance, at the same turn rate
    rate = wound_rate(2e5, EI, 3e4)
    assert wound_contact(2e5, EI, GAP, 3e4) == pytest.approx(-2 * GAP * energy(rate, 2e5, 3e4))


def test_the_replays_wall_force_is_the_twins_to_first_order():
    bare = helix.contact_force(2e5, EI, GAP)
    for moment in (5e3, 2e4):
        pressed = float(bare) + winding_wall(GAP / (4 * EI), EI, -2e5, moment)
        beyond = wound_contact(2e5, EI, GAP, moment) - float(bare)
        assert pressed - bare == pytest.approx(beyond, rel=0.05)
    assert winding_wall(GAP / (4 * EI), EI, 1e5, 2e4) == 0


def test_drop_of_chens_onset_by_plain_minimising():
    """What is left out is second order, M^2 / (16 EI)."""
    chen = math.sqrt(2) * 2 * math.sqrt(EI * SIDE / GAP)
    for moment in (5e3, 2e4, 6e4):
        least = optimize.minimize_scalar(
            lambda k, m=moment: EI * k**2 - m * k + 2 * SIDE / (GAP * k**2),
            bounds=(0.05, 1.0),
            method="bounded",
        ).fun
        drop = float(torque.onset_drop(chen, EI, moment))
        assert chen - least == pytest.approx(drop + moment**2 / (16 * EI), rel=1e-3)
        assert lowered(0.0, chen, EI, moment) == pytest.approx(chen - drop, rel=1e-12)


def test_whichever_way_it_turns_and_edges():
    assert torque.onset_drop(2e5, EI, -2e4) == torque.onset_drop(2e5, EI, 2e4) > 0
    assert torque.onset_drop(0.0, EI, 2e4) == 0
    assert lowered(1.99e5, 2e5, EI, 2e4) == 1.99e5
    assert np.isnan(torque.onset_drop(2e5, EI, np.nan))
