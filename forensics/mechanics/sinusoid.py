"""The sinusoid of a pipe on the low side, beyond its onset: its shape, and how far it goes.

The equation is that of `helix_shape`; here it is solved by waves about the low side, ``theta = sum a_k
sin((2k + 1) q s)``, of the length that costs least energy, as a long pipe finds it. The answer starts from
nothing at F_DP, is stable as far as it goes, and ends where its branch folds back, at 2.63 F_DP. Before that,
at 1.771 F_DP, its wall force falls to zero half-way up its swings: a sinusoid that the wall only pushes ends
there. Its greatest lateral rate agrees to 1 % with Mitchell's published correlation between 1.2 and 2.6 F_DP.

Two rules of the trade do not come out of it. The sinusoid is said to reach a limit of its own near gamma =
1/7 (1.32 F_DP): it swings 41 degrees up there, touches the wall all along and is stable; nothing happens. And
the pipe is said to be able to lift off the low side some 40 % above F_DP: in terms of energy it can (a helix
then costs no more than lying straight, which is Chen's onset), but the sinusoid itself keeps to the wall up
to 1.771.

References
----------
Mitchell, R. F. (1999), "Buckling analysis in deviated wells: a practical method", SPE Drill. & Compl. 14
(the correlation).
Miska, S., Qiu, W., Volk, L. and Cunha, J. C. (1996), "An improved analysis of axial force along coiled tubing
in inclined/horizontal wellbores", SPE 37056 (end of the stable sinusoid at 1.875 F_DP; from memory).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path

import numpy as np

from forensics.mechanics.eigen import Floats

_HARMONICS = 16
_ORDER = 2 * np.arange(_HARMONICS) + 1
_PHASE = (np.arange(_HARMONICS) + 0.5) / _HARMONICS * math.pi / 2
_SINE, _COSINE = np.sin(np.outer(_PHASE, _ORDER)), np.cos(np.outer(_PHASE, _ORDER))
_STEP, _HIGHEST = 0.04, 2.56  # of the amplitude [rad]; at the highest the branch folds back


@dataclass(frozen=True)
class Sinusoid:
    """One sinusoid, length scaled by ``sqrt(EI / F)``.

    Parameters
    ----------
    amplitude : float
        Greatest angle from the low side [rad].
    gamma : float
        Side weight, ``EI w_c / (r F^2)`` [-].
    wave_number : float
        q [-].
    harmonics : ndarray, shape (m,)
        a_k [rad].
    """

    amplitude: float
    gamma: float
    wave_number: float
    harmonics: Floats

    @property
    def ratio(self) -> float:
        """F over F_DP."""
        return 0.5 / math.sqrt(self.gamma)

    def angle(self, phase: Floats, derivative: int = 0) -> Floats:
        """Give theta or a derivative along the pipe at phases q s [rad], shape (k,)."""
        number = _ORDER * self.wave_number
        waves = np.sin(np.outer(phase, _ORDER) + derivative * math.pi / 2)
        return waves @ (self.harmonics * number**derivative)

    def wall_force(self, phase: Floats) -> Floats:
        """Give the wall force over ``r F^2 / EI`` at phases [rad], shape (k,)."""
        theta, slope, bend, twist = (self.angle(phase, order) for order in range(4))
        return self.gamma * np.cos(theta) + slope**2 - slope**4 + 3 * bend**2 + 4 * slope * twist

    def energy(self) -> float:
        """Give the energy per length over ``r^2 F^2 / EI``, that of the straight pipe being zero [-]."""
        theta, slope, bend = (self.angle(QUARTER, order) for order in range(3))
        bent, raised = bend**2 + slope**4 - slope**2, self.gamma * (1 - np.cos(theta))
        return float(np.mean(0.5 * bent + raised))


QUARTER = (np.arange(64) + 0.5) / 64 * math.pi / 2
"""Phases of a quarter wave whose plain mean is that of the whole wave [rad]."""


def sinusoid(amplitude: float) -> Sinusoid:
    """Solve for the sinusoid of a given amplitude, and the load that it belongs to.

    Parameters
    ----------
    amplitude : float
        Greatest angle from the low side, above 0 and up to 2.56 [rad].

    Returns
    -------
    Sinusoid
        The shape of least energy over all wave lengths.

    Raises
    ------
    ValueError
        If the amplitude is outside that range.

    Examples
    --------
    >>> round(sinusoid(0.72).ratio, 3)
    1.323
    """
    if not 0 < amplitude <= _HIGHEST:
        raise ValueError(f"amplitude came as {amplitude}; expected above 0, up to {_HIGHEST} rad")
    below = [wave for wave in _branch() if wave[0] <= amplitude]
    start = below[-1] if below else _weak(amplitude)
    return _shape(amplitude, _solve(amplitude, np.array(start[1])))


@lru_cache(maxsize=1)
def _branch() -> tuple[tuple[float, tuple[float, ...]], ...]:
    """Follow the branch in steps of amplitude, each starting from the two before."""
    found: list[tuple[float, tuple[float, ...]]] = [_weak(_STEP)]
    for number in range(1, round(_HIGHEST / _STEP) + 1):
        amplitude = number * _STEP
        start = np.array(found[-1][1])
        if number > 3:
            start += start - np.array(found[-2][1])
        found.append((amplitude, tuple(_solve(amplitude, start))))
    return tuple(found[1:])


def _weak(amplitude: float) -> tuple[float, tuple[float, ...]]:
    """Give one harmonic alone: amplitude, wave number and gamma to first order."""
    square = amplitude**2
    number, gamma = (2 + 1.5 * square) ** -0.5, 0.25 - 11 / 32 * square
    return amplitude, (amplitude, *[0.0] * (_HARMONICS - 1), number, gamma)


def _solve(amplitude: float, start: Floats) -> Floats:
    """Newton's method on harmonics, wave number and gamma; derivatives by a complex step."""
    unknown = start.astype(float)
    for _ in range(25):
        moved = unknown[None, :] + 1e-30j * np.eye(unknown.size)
        change = np.array([_miss(row, amplitude).imag / 1e-30 for row in moved]).T
        move = np.linalg.solve(change, -_miss(unknown, amplitude))
        unknown = unknown + move
        if np.abs(move).max() < 1e-13:
            break
    return unknown


def _miss(unknown: Floats, amplitude: float) -> Floats:
    """By how much the equation, the free wave length and the amplitude are missed."""
    harmonics, wave_number, gamma = unknown[:-2], unknown[-2], unknown[-1]
    number = _ORDER * wave_number
    slope, bend = _COSINE @ (harmonics * number), -_SINE @ (harmonics * number**2)
    moment = _SINE @ (harmonics * number**4) - 6 * slope**2 * bend + bend
    moment = moment + gamma * np.sin(_SINE @ harmonics)
    # energy does not change with the wave length; alternate signs sum to the value at the crest
    length = np.mean(2 * bend**2 + 2 * slope**4 - slope**2)
    crest = (harmonics * (-1.0) ** np.arange(_HARMONICS)).sum() - amplitude
    return np.concatenate([moment, [length, crest]])


def _shape(amplitude: float, unknown: Floats) -> Sinusoid:
    return Sinusoid(amplitude, float(unknown[-1]), float(unknown[-2]), unknown[:-2])


@dataclass(frozen=True)
class SinusoidTable:
    """What sinusoids do, by load; each array of shape (k,), in order of load.

    Parameters
    ----------
    ratio : ndarray
        F / F_DP [-].
    amplitude : ndarray
        Greatest angle from the low side [rad].
    wave_number : ndarray
        Over ``sqrt(F / EI)`` [-].
    rate : ndarray
        Greatest theta' over that of Lubinski's helix, ``sqrt(F / (2 EI))`` [-].
    curvature : ndarray
        Greatest curvature over that of the helix, ``r F / (2 EI)`` [-].
    shortening : ndarray
        Over that of the helix, ``r^2 F / (4 EI)`` [-].
    contact : ndarray
        Mean wall force over w_c [-].
    least_contact : ndarray
        Least wall force over w_c [-].
    """

    ratio: Floats
    amplitude: Floats
    wave_number: Floats
    rate: Floats
    curvature: Floats
    shortening: Floats
    contact: Floats
    least_contact: Floats


TABLE_FILE = Path(__file__).with_name("sinusoid_table.npy")


@lru_cache(maxsize=1)
def sinusoid_table() -> SinusoidTable:
    """Load the table of the whole branch that ships with the package, once.

    Returns
    -------
    SinusoidTable
        The values of `build_sinusoid_table`.
    """
    return SinusoidTable(*np.load(TABLE_FILE))


def build_sinusoid_table() -> SinusoidTable:
    """Tabulate the whole branch afresh, from the onset to the fold.

    Returns
    -------
    SinusoidTable
        Its first row is the onset, where all is straight.

    Examples
    --------
    To renew the shipped file: ``np.save(TABLE_FILE, np.array(astuple(build_sinusoid_table())))``.
    """
    fine = np.linspace(0, math.pi / 2, 181)
    rows = [(1.0, 0.0, math.sqrt(0.5), 0.0, 0.0, 0.0, 1.0, 1.0)]
    for amplitude, unknown in _branch():
        wave = _shape(amplitude, np.array(unknown))
        # over the helix's own: square slope 1/2, curvature 1/2
        rate = float(wave.angle(fine[:1], 1)[0]) * math.sqrt(2)
        curvature = 2 * float(np.hypot(wave.angle(fine, 2), wave.angle(fine, 1) ** 2).max())
        short = 2 * float(np.mean(wave.angle(QUARTER, 1) ** 2))
        mean = float(wave.wall_force(QUARTER).mean()) / wave.gamma
        least = float(wave.wall_force(fine).min()) / wave.gamma
        rows.append((wave.ratio, amplitude, wave.wave_number, rate, curvature, short, mean, least))
    return SinusoidTable(*np.array(rows).T)
