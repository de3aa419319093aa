"""After buckling: what a sinusoid or a helix does to the pipe and to the wall.

Between onset and helix three descriptions of the sinusoid are to be had, by name:

- "periodic": the solution of `sinusoid`, interpolated; continuous at onset; the default.
- "weak": its weakly non-linear form, one wave of amplitude A with ``(F / F_DP)^2 = (1 + 3/4 A^2)^2
  (1 - A^2/8)``; continuous too, its rate within 2 % and its shortening within 5 % up to 1.4 F_DP.
- "mitchell": the published correlations, which start at onset and do not meet the helix: at the end of their
  range, 2.8 F_DP, the lateral rate steps by 9 % and the shortening by 50 %. They give rate and shortening;
  contact is then left at what it was before buckling, and curvature follows the rate.

The load is compared with the local load F_DP, or with an onset that is given, such as one with a
near-vertical term: stretching the sinusoid to start there is this program's own.

References
----------
Lubinski, A., Althouse, W. S. and Logan, J. L. (1962), "Helical buckling of tubing sealed in packers",
J. Pet. Technol. 14.
Mitchell, R. F. (1999), "Buckling analysis in deviated wells: a practical method", SPE Drill. & Compl. 14
(lateral rate; the coefficient of the shortening from memory).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics import helix
from forensics.mechanics.eigen import Floats
from forensics.mechanics.selfconsistent import local_load
from forensics.mechanics.sinusoid import sinusoid_table

METHODS = ("periodic", "weak", "mitchell")


@dataclass(frozen=True)
class PipeInHole:
    """A buckled place: arrays that broadcast together.

    Parameters
    ----------
    force : array_like
        Effective compression [N].
    stiffness : array_like
        EI [N.m2].
    clearance : array_like
        Radial clearance r [m].
    contact : array_like
        Contact force per length before buckling, at this force [N/m].
    onset : array_like, optional
        Load at which it became sinusoidal [N]; default the local load F_DP.
    """

    force: ArrayLike
    stiffness: ArrayLike
    clearance: ArrayLike
    contact: ArrayLike
    onset: ArrayLike | None = None

    @property
    def ratio(self) -> Floats:
        """Compression over the onset [-]."""
        onset = self.onset
        if onset is None:
            onset = local_load(self.stiffness, self.contact, self.clearance)
        onset = np.asarray(onset, dtype=float)
        force = np.asarray(self.force, dtype=float)
        return np.where(onset > 0, force / np.where(onset > 0, onset, 1.0), np.where(force > 0, np.inf, 0.0))


@dataclass(frozen=True)
class Buckled:
    """What buckling does; arrays of the shape of the place.

    Parameters
    ----------
    contact : ndarray
        Mean contact force per length [N/m].
    curvature : ndarray
        Greatest curvature of the pipe's axis [rad/m].
    moment : ndarray
        Greatest bending moment [N.m].
    pitch : ndarray
        Length of one wave or turn [m]; infinite where it is straight.
    shortening : ndarray
        Per length [-].
    rate : ndarray
        Greatest lateral rate, round the hole [rad/m].
    """

    contact: Floats
    curvature: Floats
    moment: Floats
    pitch: Floats
    shortening: Floats
    rate: Floats


def helical(place: PipeInHole) -> Buckled:
    """Give what the helix does: Lubinski's helix, pressed on the wall by its side weight beside.

    Parameters
    ----------
    place : PipeInHole
        `onset` is not used.

    Returns
    -------
    Buckled
    """
    force, stiffness, gap = place.force, place.stiffness, place.clearance
    turn = helix.pitch(force, stiffness)
    moment = helix.bending_moment(force, gap)
    return Buckled(
        contact=np.asarray(place.contact, dtype=float) + helix.contact_force(force, stiffness, gap),
        curvature=helix.curvature(force, stiffness, gap),
        moment=np.broadcast_to(moment, turn.shape),
        pitch=turn,
        shortening=helix.shortening(force, stiffness, gap),
        rate=2 * np.pi / turn,
    )


def sinusoidal(place: PipeInHole, method: str = "periodic") -> Buckled:
    """Give what the sinusoid does.

    Parameters
    ----------
    place : PipeInHole
        Below its onset all is straight; beyond 2.63 times it the last sinusoid there is stands.
    method : str
        "periodic", "weak" or "mitchell".

    Returns
    -------
    Buckled

    Raises
    ------
    ValueError
        If the method is none of these.

    Examples
    --------
    >>> place = PipeInHole([1.7e5, 2.2e5], 1.23e6, 0.0445, 258.3, onset=1.69e5)
    >>> sinusoidal(place).shortening.round(8)
    array([3.00e-07, 1.55e-05])
    """
    if method not in METHODS:
        raise ValueError(f"method came as {method!r}; expected one of {METHODS}")
    rate, bend, short, press, number = _parts(np.asarray(place.ratio, dtype=float), method)
    whole = helical(place)
    buckled = rate > 0
    wave = np.where(buckled, whole.pitch * math.sqrt(0.5) / number, np.inf)
    return Buckled(
        contact=np.asarray(place.contact, dtype=float) * press,
        curvature=whole.curvature * bend,
        moment=whole.moment * bend,
        pitch=wave,
        shortening=whole.shortening * short,
        rate=whole.rate * rate,
    )


def after_buckling(place: PipeInHole, state: ArrayLike, method: str = "periodic") -> Buckled:
    """Give what buckling does by the state of each place.

    Parameters
    ----------
    place : PipeInHole
        The places.
    state : array_like of int
        0 none, 1 sinusoidal, 2 helical.
    method : str
        For the sinusoid, as in `sinusoidal`.

    Returns
    -------
    Buckled
        A straight place keeps its contact; everything else is zero there.
    """
    state = np.asarray(state)
    turn = helical(place)
    # the table of sinusoids takes its time to make: only where there is one
    wave = sinusoidal(place, method) if np.any(state == 1) else turn
    contact = np.asarray(place.contact, dtype=float)

    def pick(name: str, straight: float | Floats) -> Floats:
        some = np.where(state == 1, getattr(wave, name), straight)
        return np.where(state == 2, getattr(turn, name), some)

    return Buckled(
        contact=pick("contact", contact),
        curvature=pick("curvature", 0.0),
        moment=pick("moment", 0.0),
        pitch=pick("pitch", np.inf),
        shortening=pick("shortening", 0.0),
        rate=pick("rate", 0.0),
    )


def mitchell_lateral_rate(ratio: ArrayLike) -> Floats:
    """Give Mitchell's greatest lateral rate over that of the helix, by load over F_DP.

    Parameters
    ----------
    ratio : array_like
        F / F_DP [-].

    Returns
    -------
    ndarray
        ``1.1227 (1 - F_DP / F)^0.46`` up to 2.8, then 1; zero below 1 [-].
    """
    return _correlation(ratio, 1.1227, 0.46)


def mitchell_shortening(ratio: ArrayLike) -> Floats:
    """Give Mitchell's shortening over that of the helix, by load over F_DP.

    Parameters
    ----------
    ratio : array_like
        F / F_DP [-].

    Returns
    -------
    ndarray
        ``0.7285 (1 - F_DP / F)^0.92`` up to 2.8, then 1; zero below 1 [-].
    """
    return _correlation(ratio, 0.7285, 0.92)


def _correlation(ratio: ArrayLike, factor: float, power: float) -> Floats:
    ratio = np.asarray(ratio, dtype=float)
    over = 1 - 1 / np.maximum(ratio, 1.0)
    return np.where(ratio > 2.8, 1.0, factor * over**power)


def weak_amplitude(ratio: ArrayLike) -> Floats:
    """Give the amplitude of the weakly non-linear sinusoid, by load over onset.

    Parameters
    ----------
    ratio : array_like
        F / F_DP [-].

    Returns
    -------
    ndarray
        A [rad]: zero up to 1, ``sqrt(16/11 (F / F_DP - 1))`` just above, held beyond 2.

    Notes
    -----
    The energy of one wave, averaged over its length to fourth order in A, is least for the wave number
    ``q^2 = 1 / (2 + 3/2 A^2)`` and for A by ``gamma (1 - A^2/8) = q^4``.
    """
    ratio = np.clip(np.asarray(ratio, dtype=float), 1.0, 2.0)
    square = 16 / 11 * (ratio - 1)
    for _ in range(30):  # Newton's method; the left side grows steadily in the range
        wide, low = 1 + 0.75 * square, 1 - square / 8
        slope = 1.5 * wide * low - wide**2 / 8
        square = square - (wide**2 * low - ratio**2) / slope
    return np.sqrt(np.maximum(square, 0.0))


def _parts(ratio: Floats, method: str) -> tuple[Floats, Floats, Floats, Floats, Floats]:
    """Rate, curvature and shortening over the helix's; contact over w_c; wave number."""
    if method == "periodic":
        table = sinusoid_table()
        columns = (table.rate, table.curvature, table.shortening, table.contact, table.wave_number)
        # all grow as the root of what is over the onset: that is the even scale to interpolate on
        over, known = np.sqrt(np.maximum(ratio - 1, 0.0)), np.sqrt(table.ratio - 1)
        rate, bend, short, press, number = (np.interp(over, known, column) for column in columns)
        return rate, bend, short, press, number
    if method == "weak":
        square = weak_amplitude(ratio) ** 2
        number = (2 + 1.5 * square) ** -0.5
        rate = np.sqrt(2 * square) * number
        slope, gamma = square * number**2 / 2, number**4 / (1 - square / 8)
        weight = gamma * (1 - square / 4 + square**2 / 64)
        press = (weight + slope - 1.5 * slope**2 - slope * number**2) / gamma
        # at the crest it bends by the wave, on the low side by its way round the hole
        bend = 2 * np.maximum(np.sqrt(square) * number**2, square * number**2)
        return rate, bend, 2 * slope, press, number
    rate = mitchell_lateral_rate(ratio)
    flat = np.full(ratio.shape, math.sqrt(0.5))
    return rate, rate, mitchell_shortening(ratio), np.ones(ratio.shape), flat
