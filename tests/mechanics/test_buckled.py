"""After buckling: continuity at onset, agreement of the descriptions, and the step that one of them makes."""

from __future__ import annotations

import math

import numpy as np
import pytest

from forensics.mechanics import buckled, helix
from forensics.mechanics.buckled import METHODS, PipeInHole
from forensics.mechanics.selfconsistent import local_load
from forensics.mechanics.sinusoid import sinusoid, sinusoid_table

EI, GAP, SIDE = 1.23e6, 0.0445, 258.3
LOCAL = float(local_load(EI, SIDE, GAP))


def at(ratio: object) -> PipeInHole:
    return PipeInHole(LOCAL * np.asarray(ratio, dtype=float), EI, GAP, SIDE)


@pytest.mark.parametrize("method", METHODS)
def test_nothing_happens_below_onset_and_little_just_above(method):
    found = buckled.sinusoidal(at([-1.0, 0.0, 0.5, 1.0, 1 + 1e-9]), method)
    np.testing.assert_allclose(found.contact, SIDE, rtol=1e-6)
    np.testing.assert_array_equal(found.moment[:4], 0.0)
    np.testing.assert_array_equal(found.pitch[:4], np.inf)
    assert np.all(found.shortening >= 0)
    assert found.moment[-1] < 1e-3 * helix.bending_moment(LOCAL, GAP)
    assert found.shortening[-1] < 1e-6 * helix.shortening(LOCAL, EI, GAP)


def test_weak_form_is_the_solution_near_onset():
    ratio = np.linspace(1.001, 1.4, 30)
    table = sinusoid_table()
    exact, weak = buckled.sinusoidal(at(ratio)), buckled.sinusoidal(at(ratio), "weak")
    np.testing.assert_allclose(weak.rate, exact.rate, rtol=0.02)
    np.testing.assert_allclose(weak.shortening, exact.shortening, rtol=0.05)
    np.testing.assert_allclose(weak.contact, exact.contact, rtol=0.02)
    np.testing.assert_allclose(weak.pitch, exact.pitch, rtol=0.005)
    np.testing.assert_allclose(buckled.weak_amplitude(table.ratio[1:4]), table.amplitude[1:4], rtol=2e-3)


def test_weak_amplitude_meets_its_own_equation():
    ratio = np.array([1.0, 1.1, 1.9])
    square = buckled.weak_amplitude(ratio) ** 2
    np.testing.assert_allclose((1 + 0.75 * square) ** 2 * (1 - square / 8), ratio**2, rtol=1e-12)
    assert buckled.weak_amplitude(3.0) == buckled.weak_amplitude(2.0)


def test_interpolation_meets_the_solution_between_rows():
    for amplitude in (0.06, 0.7, 1.5):
        wave = sinusoid(amplitude)
        found = buckled.sinusoidal(at(wave.ratio))
        slope = wave.angle(np.zeros(1), 1)[0] * math.sqrt(wave.ratio * LOCAL / EI)
        assert found.rate == pytest.approx(slope, rel=1e-3)


def test_wave_length_at_onset():
    # 2 pi (EI r / w_c)^(1/4)
    found = buckled.sinusoidal(at(1 + 1e-9))
    assert found.pitch == pytest.approx(2 * math.pi * (EI * GAP / SIDE) ** 0.25, rel=1e-4)


def test_sinusoid_does_less_than_the_helix():
    ratio = np.linspace(1.0, 2.6, 50)
    wave, turn = buckled.sinusoidal(at(ratio)), buckled.helical(at(ratio))
    for name in ("contact", "moment", "shortening", "rate"):
        assert np.all(getattr(wave, name) < getattr(turn, name))
        assert np.all(np.diff(getattr(wave, name)) > 0)


def test_helix_is_lubinskis_with_its_side_weight():
    found = buckled.helical(at(2.0))
    assert found.contact == pytest.approx(SIDE + GAP * (2 * LOCAL) ** 2 / (4 * EI))
    # at F_DP the helix presses just as much as the side weight: 4 times at twice that
    assert found.contact == pytest.approx(5 * SIDE)
    assert found.moment == pytest.approx(EI * found.curvature)
    assert found.moment * 0.127 / (2 * 5.94e-6) == pytest.approx(
        helix.bending_stress(2 * LOCAL, GAP, 0.127, 5.94e-6)
    )


def test_states_choose():
    found = buckled.after_buckling(at([1.5, 1.5, 1.5]), [0, 1, 2])
    wave, turn = buckled.sinusoidal(at(1.5)), buckled.helical(at(1.5))
    np.testing.assert_allclose(found.contact, [SIDE, wave.contact, turn.contact])
    np.testing.assert_allclose(found.moment, [0.0, wave.moment, turn.moment])
    np.testing.assert_allclose(found.pitch, [np.inf, wave.pitch, turn.pitch])
    np.testing.assert_allclose(found.shortening, [0.0, wave.shortening, turn.shortening])


def test_given_onset_shifts_the_start():
    place = PipeInHole([1.2 * LOCAL, 1.4 * LOCAL], EI, GAP, SIDE, onset=1.3 * LOCAL)
    found = buckled.sinusoidal(place)
    assert found.shortening[0] == 0
    assert 0 < found.shortening[1] < buckled.sinusoidal(at(1.4)).shortening


def test_weightless_place_and_missing_values():
    found = buckled.after_buckling(PipeInHole([1e4, np.nan], EI, GAP, [0.0, SIDE]), [2, 1])
    assert found.contact[0] == pytest.approx(float(helix.contact_force(1e4, EI, GAP)))
    assert np.isnan(found.shortening[1])


def test_unknown_method():
    with pytest.raises(ValueError, match="method came as 'exact'"):
        buckled.sinusoidal(at(1.5), "exact")
