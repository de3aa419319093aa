"""Critical loads: the compression at which a string in a hole buckles, by published criterion.

Every criterion is a function of one `Place` (arrays along depth, one row a place), named for its authors
and year, and listed in `CRITERIA` with the range it holds for. `HELICAL_ONSETS` maps the names of a case
file to those for helical onset. What the replay compares with is in `threshold`: these criteria at the
contact force that is there, plus the near-vertical term.

What the criteria leave out stands elsewhere: torque lowers the helical ones by some per cent (`torque`); tool
joints decide the clearance (`tool_joint`; a report gives both); friction on the pipe
raises all of them, which nothing here does; and that authors differ by a factor of two is told as a band
(`band`).
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.errors import CaseError, nearest
from forensics.mechanics.eigen import Floats
from forensics.mechanics.selfconsistent import ContactSize, local_load, lowest_crossing


@dataclass(frozen=True)
class Place:
    """Where on the string, and in what hole: arrays that broadcast together.

    Parameters
    ----------
    stiffness : array_like
        Bending stiffness EI of the body [N.m2].
    clearance : array_like
        Radial clearance, (hole diameter - contact diameter) / 2 [m].
    weight : array_like
        Buoyed weight per length [N/m].
    inclination : array_like
        From vertical [rad].
    build : array_like
        Rate of inclination with depth, positive where the hole builds [rad/m].
    turn : array_like
        Rate of azimuth with depth [rad/m].
    """

    stiffness: ArrayLike
    clearance: ArrayLike
    weight: ArrayLike
    inclination: ArrayLike
    build: ArrayLike = 0.0
    turn: ArrayLike = 0.0


Criterion = Callable[[Place], Floats]


@dataclass(frozen=True)
class Validity:
    """What a criterion holds for, as data.

    Parameters
    ----------
    inclination : tuple of float
        Lowest and highest [rad]; outside it the criterion says nothing.
    curvature : float
        Highest curvature of the hole [rad/m].
    kind : str
        "sinusoidal" or "helical".
    note : str
        What it assumes.
    """

    inclination: tuple[float, float]
    curvature: float
    kind: str
    note: str

    def covers(self, place: Place) -> NDArray[np.bool_]:
        """Tell which rows of `place` lie inside the range."""
        low, high = self.inclination
        angle = np.asarray(place.inclination, dtype=float)
        bend = np.hypot(place.build, np.asarray(place.turn) * np.sin(angle))
        return (angle >= low) & (angle <= high) & (bend <= self.curvature)


@dataclass(frozen=True)
class HelicalOnset:
    """A published helical onset: its factor on the local load, and the criterion it comes from."""

    name: str
    factor: float
    criterion: Criterion
    title: str


def dawson_paslay_1984(place: Place) -> Floats:
    """Give the sinusoidal load of a straight inclined hole, ``2 sqrt(EI w sin I / r)``.

    Parameters
    ----------
    place : Place
        Curvature is not used.

    Returns
    -------
    ndarray
        [N]; zero in a vertical hole, where it does not apply.

    References
    ----------
    Dawson, R. and Paslay, P. R. (1984), "Drillpipe buckling in inclined holes", J. Pet. Technol. 36.

    Examples
    --------
    A 127 by 108.6 mm pipe in a horizontal 215.9 mm hole:

    >>> place = Place(206.8e9 * 5.941888e-6, 0.04445, 241.08493, math.pi / 2)
    >>> round(float(dawson_paslay_1984(place)) / 1e3, 2)
    163.27
    """
    return local_load(place.stiffness, _side(place), place.clearance)


def he_kyllingstad_1995(place: Place) -> Floats:
    """Give the sinusoidal load of a curved hole, met self-consistently with the contact it causes.

    Parameters
    ----------
    place : Place
        Contact per length is ``sqrt((w sin I + F build)^2 + (F sin I turn)^2)``.

    Returns
    -------
    ndarray
        Lowest F that equals ``2 sqrt(EI contact(F) / r)`` [N]. In a drop contact falls with the load, and
        beyond the side change it grows again: the root below the change is the one that is met first.

    References
    ----------
    He, X. and Kyllingstad, A. (1995), "Helical buckling and lock-up conditions for coiled tubing in
    curved wells", SPE Drill. & Compl. 10.
    """
    gravity, sideways = _side(place), np.sin(place.inclination) * np.asarray(place.turn)
    build = np.asarray(place.build, dtype=float)
    size = ContactSize(gravity**2, gravity * build, build**2 + sideways**2)
    return lowest_crossing(np.asarray(place.stiffness, dtype=float) / place.clearance, size, 0.0)


def chen_lin_cheatham_1990(place: Place) -> Floats:
    """Give the helical onset ``sqrt(2)`` times the sinusoidal load of the straight hole.

    Parameters
    ----------
    place : Place
        Curvature is not used.

    Returns
    -------
    ndarray
        [N]

    References
    ----------
    Chen, Y.-C., Lin, Y.-H. and Cheatham, J. B. (1990), "Tubing and casing buckling in horizontal wells",
    J. Pet. Technol. 42.
    """
    return math.sqrt(2) * dawson_paslay_1984(place)


def wu_juvkam_wold_1993(place: Place) -> Floats:
    """Give the helical onset on loading, ``2 sqrt(2) - 1`` times the sinusoidal load of the straight hole.

    Parameters
    ----------
    place : Place
        Curvature is not used.

    Returns
    -------
    ndarray
        [N]

    References
    ----------
    Wu, J. and Juvkam-Wold, H. C. (1993), "Helical buckling of pipes in extended reach and horizontal
    wells", J. Energy Resour. Technol. 115; and SPE 25503.
    """
    return (2 * math.sqrt(2) - 1) * dawson_paslay_1984(place)


def mitchell_1997(place: Place) -> Floats:
    """Give the load of full helical buckling on loading, ``2 sqrt(2)`` times that of the straight hole.

    Parameters
    ----------
    place : Place
        Curvature is not used.

    Returns
    -------
    ndarray
        [N]

    References
    ----------
    Mitchell, R. F. (1997), "Effects of well deviation on helical buckling", SPE Drill. & Compl. 12.
    """
    return 2 * math.sqrt(2) * dawson_paslay_1984(place)


_STRAIGHT = math.radians(0.5) / 30

CRITERIA: dict[Criterion, Validity] = {
    dawson_paslay_1984: Validity(
        (math.radians(15), math.pi / 2), _STRAIGHT, "sinusoidal", "straight hole, long pipe on the low side"
    ),
    he_kyllingstad_1995: Validity(
        (math.radians(15), math.pi), math.radians(20) / 30, "sinusoidal", "constant curvature over a wave"
    ),
    chen_lin_cheatham_1990: Validity(
        (math.radians(15), math.pi / 2), _STRAIGHT, "helical", "energy, mean load while the helix forms"
    ),
    wu_juvkam_wold_1993: Validity(
        (math.radians(15), math.pi / 2), _STRAIGHT, "helical", "energy, load at the end of forming the helix"
    ),
    mitchell_1997: Validity(
        (math.radians(15), math.pi / 2), _STRAIGHT, "helical", "on loading; on unloading sqrt(2) applies"
    ),
}

HELICAL_ONSETS: dict[str, HelicalOnset] = {
    "chen": HelicalOnset("chen", math.sqrt(2), chen_lin_cheatham_1990, "Chen, Lin and Cheatham 1990"),
    "wu": HelicalOnset("wu", 2 * math.sqrt(2) - 1, wu_juvkam_wold_1993, "Wu and Juvkam-Wold 1993"),
    "mitchell": HelicalOnset("mitchell", 2 * math.sqrt(2), mitchell_1997, "Mitchell 1997, on loading"),
}


def helical_onset(name: str) -> HelicalOnset:
    """Look a helical onset up by the name a case file uses.

    Parameters
    ----------
    name : str
        "chen", "wu" or "mitchell".

    Returns
    -------
    HelicalOnset
        The published criterion and its factor.

    Raises
    ------
    CaseError
        If the name is not one of them.
    """
    if name not in HELICAL_ONSETS:
        raise CaseError(
            f"helical_onset is {name!r}; expected chen, wu or mitchell: {nearest(name, HELICAL_ONSETS)}"
        )
    return HELICAL_ONSETS[name]


def _side(place: Place) -> Floats:
    """Weight across the hole per length [N/m]."""
    return np.asarray(place.weight, dtype=float) * np.sin(place.inclination)
