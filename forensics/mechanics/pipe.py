"""Pipe bodies: sections, wear classes, and what they bear in tension, torsion and both.

The formulas are those of API RP 7G. Wear classes reduce the outside only, as the recommended practice
does for tension and torsion: premium pipe keeps 80 % of its wall, used pipe (class 2) 70 %.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from forensics.errors import CaseError, nearest
from forensics.mechanics.eigen import Floats
from forensics.units import G

SHEAR_YIELD = 0.577
"""Yield in shear over yield in tension, as API RP 7G rounds 1/sqrt(3)."""

WALL_LEFT: dict[str, float] = {"new": 1.0, "premium": 0.8, "used": 0.7}
"""Part of the wall that each class of drill pipe is rated with."""


@dataclass(frozen=True)
class Tube:
    """A round tube.

    Parameters
    ----------
    outer_diameter, inner_diameter : float
        [m]

    Raises
    ------
    ValueError
        If the bore is negative or not smaller than the outside.

    Examples
    --------
    >>> tube = Tube(0.127, 0.1086104)
    >>> round(tube.area * 1e6, 1), round(tube.inertia * 1e8, 1)
    (3403.0, 593.9)
    """

    outer_diameter: float
    inner_diameter: float

    def __post_init__(self) -> None:
        """Refuse what is no tube."""
        if not 0 <= self.inner_diameter < self.outer_diameter:
            raise ValueError(
                f"bore came as {self.inner_diameter} m and outside as {self.outer_diameter} m; "
                "expected a bore of zero or more, smaller than the outside"
            )

    @property
    def area(self) -> float:
        """Area of the steel [m2]."""
        return math.pi / 4 * (self.outer_diameter**2 - self.inner_diameter**2)

    @property
    def bore_area(self) -> float:
        """Area of the bore [m2]."""
        return math.pi / 4 * self.inner_diameter**2

    @property
    def outside_area(self) -> float:
        """Area within the outside [m2]."""
        return math.pi / 4 * self.outer_diameter**2

    @property
    def inertia(self) -> float:
        """Second moment of area [m4]."""
        return math.pi / 64 * (self.outer_diameter**4 - self.inner_diameter**4)

    @property
    def polar(self) -> float:
        """Polar second moment of area [m4]."""
        return 2 * self.inertia

    @property
    def modulus(self) -> float:
        """Section modulus in bending [m3]."""
        return 2 * self.inertia / self.outer_diameter

    @property
    def polar_modulus(self) -> float:
        """Section modulus in torsion [m3]."""
        return 2 * self.modulus

    def weight(self, density: float) -> float:
        """Give the weight in air of the plain tube [N/m] at a steel density [kg/m3]."""
        return self.area * density * G


def worn(tube: Tube, pipe_class: str) -> Tube:
    """Give the tube that a wear class is rated with.

    Parameters
    ----------
    tube : Tube
        As new.
    pipe_class : str
        "new", "premium" or "used".

    Returns
    -------
    Tube
        Same bore, thinner wall.

    Raises
    ------
    CaseError
        If the class is not one of them.
    """
    if pipe_class not in WALL_LEFT:
        raise CaseError(
            f"pipe_class is {pipe_class!r}; expected new, premium or used: {nearest(pipe_class, WALL_LEFT)}"
        )
    bore = tube.inner_diameter
    return Tube(bore + WALL_LEFT[pipe_class] * (tube.outer_diameter - bore), bore)


def torsional_yield(tube: Tube, yield_strength: float, tension: ArrayLike = 0.0) -> Floats:
    """Give the torque at which the body yields while it carries a tension.

    Parameters
    ----------
    tube : Tube
        The body, worn as its class says.
    yield_strength : float
        Minimum yield stress Y [Pa].
    tension : array_like
        Pull P at the same time [N].

    Returns
    -------
    ndarray
        ``0.577 (2 J / OD) sqrt(Y^2 - (P / A)^2)`` [N.m]; zero where the pull alone yields it.

    References
    ----------
    API RP 7G, appendix A (in field units the factor reads 0.096167).
    """
    pull = np.asarray(tension, dtype=float) / tube.area
    left = np.sqrt(np.maximum(yield_strength**2 - pull**2, 0.0))
    return SHEAR_YIELD * tube.polar_modulus * left


def tension_left(tube: Tube, yield_strength: float, torque: ArrayLike) -> Floats:
    """Give the pull at which the body yields while it carries a torque; the inverse of `torsional_yield`.

    Parameters
    ----------
    tube : Tube
        The body, worn as its class says.
    yield_strength : float
        Minimum yield stress [Pa].
    torque : array_like
        At the same time [N.m].

    Returns
    -------
    ndarray
        ``A Y`` without torque [N]; zero where the torque alone yields it.
    """
    shear = np.asarray(torque, dtype=float) / (SHEAR_YIELD * tube.polar_modulus)
    return tube.area * np.sqrt(np.maximum(yield_strength**2 - shear**2, 0.0))


def von_mises(axial: ArrayLike, hoop: ArrayLike, radial: ArrayLike, shear: ArrayLike = 0.0) -> Floats:
    """Give the equivalent stress of three principal stresses and a shear on the cross-section.

    Parameters
    ----------
    axial, hoop, radial, shear : array_like
        [Pa], tension positive; axial is the true stress, bending included.

    Returns
    -------
    ndarray
        [Pa]
    """
    axial, hoop, radial, shear = (np.asarray(part, dtype=float) for part in (axial, hoop, radial, shear))
    pairs = (axial - hoop) ** 2 + (hoop - radial) ** 2 + (radial - axial) ** 2
    return np.sqrt(0.5 * pairs + 3 * shear**2)
