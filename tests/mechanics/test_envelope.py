"""The unloading limit of a helix in a level hole, solved from its own equations.

Pipe on a cylinder, angle from the low side, p = (angle')^2 as a function of the angle, length scaled by
sqrt(EI / F), gamma = EI w sin I / (r F^2): with G = F / F_DP, gamma = 1 / (4 G^2).
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy import optimize

from forensics.mechanics.threshold import ENVELOPE_RELEASE

POINTS = 32
ANGLE = 2 * np.pi * np.arange(POINTS) / POINTS
WAVES = np.fft.fftfreq(POINTS, 1 / POINTS)


def slopes(p):
    spectrum = np.fft.fft(p)
    return (np.fft.ifft((1j * WAVES) ** order * spectrum).real for order in (1, 2))


def helix(mean, gamma):
    """Periodic solution of mean square slope `mean` by collocation, from the first-order one."""

    def residual(unknown):
        p, constant = unknown[:-1], unknown[-1]
        first, second = slopes(p)
        tangential = p * second / 2 - first**2 / 8 - 1.5 * p**2 + p / 2 - gamma * np.cos(ANGLE) - constant
        return np.append(tangential, p.mean() - mean)

    guess = mean + 2 * gamma * np.cos(ANGLE) / (1 - 7 * mean)
    solution, _, done, words = optimize.fsolve(
        residual, np.append(guess, mean / 2 - 1.5 * mean**2), full_output=True, xtol=1e-12
    )
    assert done == 1, words
    return solution[:-1]


def least_wall_force(mean, gamma):
    p = helix(mean, gamma)
    first, second = slopes(p)
    return (gamma * np.cos(ANGLE) + p - p**2 + 0.75 * first**2 + 2 * p * second).min()


def largest_gamma(mean):
    return optimize.brentq(lambda gamma: least_wall_force(mean, gamma), 0.05, 0.16, xtol=1e-6)


def test_weightless_helix_presses_evenly():
    p = helix(0.5, 0.0)
    np.testing.assert_allclose(p, 0.5, atol=1e-12)
    assert least_wall_force(0.5, 0.0) == pytest.approx(0.25)


def test_least_load_with_wall_contact_all_round():
    best = optimize.minimize_scalar(lambda k: -largest_gamma(k), bounds=(0.42, 0.5), method="bounded")
    assert best.x == pytest.approx(0.46, abs=0.01)
    assert pytest.approx(1 / np.sqrt(4 * -best.fun), rel=1e-3) == ENVELOPE_RELEASE
