"""Turning bent pipe: what bending it stands, and which of several episodes wore it most.

Fatigue of drill pipe scatters by a factor of ten in life between like pieces, depends on corrosion and on
what the pipe had been through before, and no log shows either. So nothing here is a remaining life:
exposures are numbers to rank episodes of one run by. A pipe that turns about its own axis in a bend is bent
to and fro once a turn; one that whirls round the hole with its bend is not, so that counting surface turns
is cautious.

References
----------
Lubinski, A. (1961), "Maximum permissible dog-legs in rotary boreholes", J. Pet. Technol. 13; API RP 7G
(bending that drill pipe stands under tension; formulas from memory, high). Hansford, J. E. and Lubinski, A.
(1966), "Cumulative fatigue damage of drill pipe in dog-legs", J. Pet. Technol. 18 (adding up turns; from
memory). DNV-RP-C203, curve B1 in air (stress range against cycles; from memory, medium).
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats
from forensics.mechanics.pipe import Tube

_PSI = 4.4482216152605 / 0.0254**2
HALF_JOINT = 4.572
"""Half the distance between joints in API RP 7G's formulas, 180 in [m]."""

SN_INTERCEPT, SN_SLOPE = 15.117, 4.0
"""``log10 N = 15.117 - 4 log10 S``, S the stress range in MPa: base metal, high quality, in air."""


def permissible_bending(mean_stress: ArrayLike, grade: str = "E75") -> Floats:
    """Give the bending stress that drill pipe stands for very many turns while it carries a tension.

    Parameters
    ----------
    mean_stress : array_like
        Tension over area [Pa]; compression is taken as none.
    grade : str
        "E75" or "S135".

    Returns
    -------
    ndarray
        [Pa]; zero where the tension alone is beyond the formula's range (67,000 and 133,400 psi).

    Raises
    ------
    ValueError
        If the grade is neither.

    Notes
    -----
    In psi: E75 ``19500 - (10/67) s - (0.6/670^2) (s - 33500)^2``; S135 ``20000 (1 - s / 145000)``.
    """
    s = np.maximum(np.asarray(mean_stress, dtype=float), 0.0) / _PSI
    if grade == "E75":
        stands, most = 19500 - 10 / 67 * s - 0.6 / 670**2 * (s - 33500) ** 2, 67000
    elif grade == "S135":
        stands, most = 20000 * (1 - s / 145000), 133400
    else:
        raise ValueError(f"grade came as {grade!r}; expected E75 or S135")
    return np.where(s <= most, stands, 0.0) * _PSI


def permissible_dogleg(
    tube: Tube, tension: ArrayLike, modulus: float, grade: str = "E75", half_joint: float = HALF_JOINT
) -> Floats:
    """Give the hole curvature in which turning pipe under tension is bent as much as it stands.

    Parameters
    ----------
    tube : Tube
        The body.
    tension : array_like
        Above zero [N].
    modulus : float
        Young's [Pa].
    grade : str
        As in `permissible_bending`.
    half_joint : float
        Half the distance between joints [m].

    Returns
    -------
    ndarray
        [rad/m]

    Notes
    -----
    Tension draws the bend towards the joints: the pipe's curvature there is the hole's times
    ``K L / tanh(K L)``, ``K = sqrt(T / EI)`` (see `tool_joint.bending_factor`).
    """
    tension = np.asarray(tension, dtype=float)
    reach = half_joint * np.sqrt(tension / (modulus * tube.inertia))
    stands = permissible_bending(tension / tube.area, grade)
    return 2 * stands / (modulus * tube.outer_diameter) * np.tanh(reach) / reach


def exposure(
    bending: ArrayLike, mean_stress: ArrayLike, revolutions: ArrayLike, grade: str = "E75"
) -> Floats:
    """Give what turning bent pipe uses of its life by a published S-N line: a number to rank by.

    Parameters
    ----------
    bending : array_like
        Amplitude of the bending stress [Pa].
    mean_stress : array_like
        Tension over area at the same time [Pa].
    revolutions : array_like
        Turns of the pipe [-].
    grade : str
        As in `permissible_bending`.

    Returns
    -------
    ndarray
        Turns over turns to failure [-]: not a remaining life (see the module).

    Notes
    -----
    The stress range is twice the bending, enlarged by what tension takes off the permissible bending. There
    is no stress below which turns do not count, as corroded pipe has none.

    Examples
    --------
    Twice the stress counts sixteen-fold:

    >>> low, high = exposure([50e6, 100e6], 0.0, 1000.0)
    >>> float((high / low).round(3))
    16.0
    """
    stands = permissible_bending(mean_stress, grade)
    bare = permissible_bending(0.0, grade)
    span, stands = np.broadcast_arrays(2 * np.abs(np.asarray(bending, dtype=float)) / 1e6, stands)
    bent = span > 0
    enlarged = np.where(stands > 0, span * bare / np.where(stands > 0, stands, 1.0), np.inf)
    counted = np.where(bent, enlarged, span)
    return np.asarray(revolutions, dtype=float) * counted**SN_SLOPE / 10**SN_INTERCEPT


def ranking(exposures: ArrayLike) -> list[tuple[int, float]]:
    """Rank episodes by their exposure.

    Parameters
    ----------
    exposures : array_like, shape (k,)
        From `exposure`, one an episode [-]; NaN where not known.

    Returns
    -------
    list of tuple
        Row and its share of the greatest, from the greatest down; rows without exposure are left out.

    Examples
    --------
    >>> ranking([1e-9, 4e-9, 0.0])
    [(1, 1.0), (0, 0.25)]
    """
    values = [float(value) for value in np.asarray(exposures, dtype=float)]
    known = [row for row, value in enumerate(values) if value > 0 and not math.isnan(value)]
    known.sort(key=lambda row: (-values[row], row))
    return [(row, values[row] / values[known[0]]) for row in known]
