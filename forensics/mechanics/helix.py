"""In the helix: shape, wall force, stress and shortening of a helically buckled pipe.

Weightless pipe in a straight round hole, far from its ends; compression positive. In tension there is no
helix: contact, moment, stress and shortening are zero and the pitch is infinite.

References
----------
Lubinski, A., Althouse, W. S. and Logan, J. L. (1962), "Helical buckling of tubing sealed in packers",
J. Pet. Technol. 14 (pitch, shortening, stress).
Mitchell, R. F. (1986), "Simple frictional analysis of helical buckling of tubing", SPE Drill. Eng. 1
(wall force).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats


def pitch(force: ArrayLike, stiffness: ArrayLike) -> Floats:
    """Give the length of one turn, ``2 pi sqrt(2 EI / F)``.

    Parameters
    ----------
    force : array_like
        Effective compression [N].
    stiffness : array_like
        EI [N.m2].

    Returns
    -------
    ndarray
        [m]; infinite in tension.

    Examples
    --------
    >>> round(float(pitch(355858.0, 1.2284e6)), 2)
    16.51
    """
    force, stiffness = np.broadcast_arrays(np.asarray(force, float), np.asarray(stiffness, float))
    turn = np.full(force.shape, np.inf)
    np.divide(stiffness, force, out=turn, where=force > 0)
    return 2 * np.pi * np.sqrt(2 * turn)


def contact_force(force: ArrayLike, stiffness: ArrayLike, clearance: ArrayLike) -> Floats:
    """Give the wall force per length that the helix adds, ``r F^2 / (4 EI)``.

    Parameters
    ----------
    force : array_like
        Effective compression [N].
    stiffness : array_like
        EI [N.m2].
    clearance : array_like
        Radial clearance r [m].

    Returns
    -------
    ndarray
        [N/m]
    """
    return np.asarray(clearance) * _compression(force) ** 2 / (4 * np.asarray(stiffness, float))


def curvature(force: ArrayLike, stiffness: ArrayLike, clearance: ArrayLike) -> Floats:
    """Give the curvature of the pipe's axis, ``r F / (2 EI)``.

    Parameters
    ----------
    force, stiffness, clearance : array_like
        As in `contact_force`.

    Returns
    -------
    ndarray
        [rad/m]
    """
    return np.asarray(clearance) * _compression(force) / (2 * np.asarray(stiffness, float))


def bending_moment(force: ArrayLike, clearance: ArrayLike) -> Floats:
    """Give the bending moment, ``r F / 2``.

    Parameters
    ----------
    force : array_like
        Effective compression [N].
    clearance : array_like
        Radial clearance [m].

    Returns
    -------
    ndarray
        [N.m]
    """
    return np.asarray(clearance) * _compression(force) / 2


def bending_stress(
    force: ArrayLike, clearance: ArrayLike, outer_diameter: ArrayLike, inertia: ArrayLike
) -> Floats:
    """Give the bending stress at the outer wall, ``OD r F / (4 I)``.

    Parameters
    ----------
    force : array_like
        Effective compression [N].
    clearance : array_like
        Radial clearance [m].
    outer_diameter : array_like
        Of the body [m].
    inertia : array_like
        Second moment of area of the body [m4].

    Returns
    -------
    ndarray
        [Pa]
    """
    return bending_moment(force, clearance) * np.asarray(outer_diameter) / (2 * np.asarray(inertia, float))


def shortening(force: ArrayLike, stiffness: ArrayLike, clearance: ArrayLike) -> Floats:
    """Give the shortening per length, ``r^2 F / (4 EI)``.

    Parameters
    ----------
    force, stiffness, clearance : array_like
        As in `contact_force`.

    Returns
    -------
    ndarray
        [-]
    """
    return np.asarray(clearance) ** 2 * _compression(force) / (4 * np.asarray(stiffness, float))


def _compression(force: ArrayLike) -> Floats:
    return np.maximum(np.asarray(force, dtype=float), 0.0)
