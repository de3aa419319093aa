"""The sinusoid: its equation, balances, limits, and where it stops touching the wall."""

from __future__ import annotations

import math
from dataclasses import astuple

import numpy as np
import pytest
from scipy import integrate, optimize

from forensics.mechanics.sinusoid import QUARTER, Sinusoid, build_sinusoid_table, sinusoid, sinusoid_table


@pytest.mark.parametrize("amplitude", [0.05, 0.5, 1.2, 2.0])
def test_it_solves_its_equation_everywhere(amplitude):
    wave = sinusoid(amplitude)
    phase = np.linspace(0.02, 1.55, 40)
    theta, slope, bend, _, fourth = (wave.angle(phase, order) for order in range(5))
    miss = fourth - 6 * slope**2 * bend + bend + wave.gamma * np.sin(theta)
    assert np.abs(miss).max() < 2e-7 * max(1.0, np.abs(fourth).max())


@pytest.mark.parametrize("amplitude", [0.3, 1.0])
def test_integrating_along_the_pipe_comes_back_to_the_low_side(amplitude):
    # second method: start at the crest and integrate a quarter wave
    wave = sinusoid(amplitude)
    start = [wave.angle(np.array([math.pi / 2]), order)[0] for order in range(4)]

    def rate(_, y):
        return [y[1], y[2], y[3], (6 * y[1] ** 2 - 1) * y[2] - wave.gamma * math.sin(y[0])]

    span = (0.0, math.pi / 2 / wave.wave_number)
    end = integrate.solve_ivp(rate, span, start, "DOP853", rtol=1e-11, atol=1e-13).y[:, -1]
    assert end[0] == pytest.approx(0.0, abs=1e-8)
    assert end[2] == pytest.approx(0.0, abs=1e-8)
    assert -end[1] == pytest.approx(wave.angle(np.zeros(1), 1)[0], abs=1e-8)


def test_wave_length_costs_least_energy():
    # shapes forced to another length, all else equal, cost more
    wave = sinusoid(0.7)
    around = [
        Sinusoid(0.7, wave.gamma, wave.wave_number * factor, wave.harmonics).energy()
        for factor in (0.99, 1, 1.01)
    ]
    assert around[1] < min(around[0], around[2])
    assert around[2] - around[1] == pytest.approx(around[0] - around[1], rel=0.1)


def test_onset_is_dawson_and_paslays():
    # gamma = 1/4 and a wave number of sqrt(1/2), whence pi (EI r / w)^(1/4) for half a wave
    wave = sinusoid(1e-3)
    assert wave.gamma == pytest.approx(0.25, rel=1e-5)
    assert wave.wave_number == pytest.approx(math.sqrt(0.5), rel=1e-5)
    assert wave.energy() == pytest.approx(0.0, abs=1e-12)


def test_amplitude_grows_as_the_root_of_what_is_over_the_onset():
    # A^2 = 16/11 (F / F_DP - 1) to first order, by averaging the energy
    small = sinusoid(0.02)
    assert 0.02**2 / (small.ratio - 1) == pytest.approx(16 / 11, rel=2e-3)


def test_wall_carries_the_weight():
    # upward part of the wall force over a wave is the weight
    wave = sinusoid(1.0)
    upward = np.mean(wave.wall_force(QUARTER) * np.cos(wave.angle(QUARTER)))
    assert upward == pytest.approx(wave.gamma, rel=1e-9)


def test_it_leaves_the_wall_at_1_771_and_folds_back_at_2_63():
    fine = np.linspace(0, math.pi / 2, 400)
    least = optimize.brentq(lambda a: sinusoid(a).wall_force(fine).min(), 1.0, 1.4, xtol=1e-6)
    assert sinusoid(least).ratio == pytest.approx(1.771, abs=1e-3)
    # Miska et al. 1996, from memory: the stable sinusoid ends at 1.875
    assert sinusoid(least).ratio == pytest.approx(1.875, rel=0.06)
    table = sinusoid_table()
    assert np.all(np.diff(table.ratio) > 0)
    assert np.diff(table.ratio)[-1] < 0.1 * np.diff(table.ratio).max()
    assert table.ratio[-1] == pytest.approx(2.63, abs=1e-3)


def test_table_is_the_solution():
    table = sinusoid_table()
    wave = sinusoid(float(table.amplitude[20]))
    assert table.ratio[20] == pytest.approx(wave.ratio)
    assert table.rate[20] == pytest.approx(math.sqrt(2) * wave.angle(np.zeros(1), 1)[0])
    # integrals over a wave, by a plain finer sum
    phase = (np.arange(2000) + 0.5) / 2000 * math.pi / 2
    assert table.shortening[20] == pytest.approx(2 * np.mean(wave.angle(phase, 1) ** 2), rel=1e-9)
    assert table.contact[20] == pytest.approx(wave.wall_force(phase).mean() / wave.gamma, rel=1e-9)


def test_no_such_sinusoid():
    for amplitude in (0.0, 2.7, math.nan):
        with pytest.raises(ValueError, match="amplitude came as"):
            sinusoid(amplitude)


def least_second_variation(wave: Sinusoid, part: float) -> float:
    """Least of eta'''' - ((6 theta'^2 - 1) eta')' + gamma cos(theta) eta over waves of one Bloch number."""
    points = 96
    phase = np.arange(points) * 2 * math.pi / points
    order = np.fft.fftfreq(points, 1 / points)
    kept = np.flatnonzero(np.abs(order) < points / 3)
    pair = np.subtract.outer(np.arange(points), np.arange(points)) % points
    stretch = (np.fft.fft(6 * wave.angle(phase, 1) ** 2 - 1) / points)[pair]
    weight = (np.fft.fft(wave.gamma * np.cos(wave.angle(phase))) / points)[pair]
    number = wave.wave_number * (order + part / 2)
    form = np.diag(number**4) + number[:, None] * stretch * number + weight
    return float(np.linalg.eigvalsh(form[np.ix_(kept, kept)])[0])


@pytest.mark.parametrize("amplitude", [0.2, 0.72, 1.2, 1.8, 2.4])
def test_no_disturbance_takes_energy_from_it(amplitude):
    # a shift along the pipe costs nothing; every other disturbance, of many waves or of few, costs some
    wave = sinusoid(amplitude)
    assert least_second_variation(wave, 0.0) == pytest.approx(0.0, abs=1e-6)
    assert all(least_second_variation(wave, part) > 0 for part in (0.02, 0.1, 0.3, 0.6, 1.0))


def test_the_shipped_table_is_the_one_that_is_built():
    shipped, built = (np.array(astuple(table)) for table in (sinusoid_table(), build_sinusoid_table()))
    assert np.allclose(shipped, built, rtol=1e-9, atol=1e-12)
