"""The local buckling load, and where a load that makes its own contact force meets it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats


@dataclass(frozen=True)
class ContactSize:
    """Contact force per length as it grows with compression F: ``sqrt(a + 2 b F + c F^2)``.

    With the averaged vectors g (weight across the hole) and k (curvature), ``a = g.g``, ``b = -g.k`` and
    ``c = k.k``; b is positive in a build, negative in a drop. [N2/m2, N/m2, 1/m2]
    """

    a: ArrayLike
    b: ArrayLike
    c: ArrayLike


def local_load(stiffness: ArrayLike, contact: ArrayLike, clearance: ArrayLike) -> Floats:
    """Give the load at which a pipe pressed on the wall buckles sideways, ``2 sqrt(EI w_c / r)``.

    Parameters
    ----------
    stiffness : array_like
        EI [N.m2].
    contact : array_like
        Contact force per length at the actual load, averaged over a wave [N/m].
    clearance : array_like
        Radial clearance [m], above zero.

    Returns
    -------
    ndarray
        F_DP [N].

    References
    ----------
    Dawson, R. and Paslay, P. R. (1984), "Drillpipe buckling in inclined holes", J. Pet. Technol. 36.
    He, X. and Kyllingstad, A. (1995), "Helical buckling and lock-up conditions for coiled tubing in
    curved wells", SPE Drill. & Compl. 10 (the true contact force in place of w sin I).
    """
    return 2 * np.sqrt(np.asarray(stiffness, dtype=float) * contact / clearance)


def lowest_crossing(factor: Floats, size: ContactSize, term: ArrayLike) -> Floats:
    """Find the lowest load F that equals the local load at its own contact, plus a given term.

    Parameters
    ----------
    factor : ndarray
        EI / r [N.m].
    size : ContactSize
        How contact grows with compression.
    term : array_like
        What is added to the local load [N].

    Returns
    -------
    ndarray
        Lowest root, at least `term`, of ``(F - term)^4 = (4 factor)^2 (a + 2 b F + c F^2)`` [N].
        NaN where an input is not finite.

    Notes
    -----
    By the eigenvalues of the companion matrix, scaled so that roots are near 1, then two Newton steps.
    """
    scale, a, b, c, term = np.broadcast_arrays(4 * factor, size.a, size.b, size.c, term)
    # unit of force: the larger of the straight-hole load and the curvature's own, so that roots are near 1
    straight, bend = np.sqrt(scale * np.sqrt(a)), scale * np.sqrt(c)
    unit = np.maximum(np.maximum(straight, bend), 1e-9)
    # x = (F - term) / unit: x^4 - p x^2 - 2 q x - r = 0
    p = (bend / unit) ** 2
    q = scale**2 * (b + c * term) / unit**3
    r = scale**2 * (a + term * (2 * b + c * term)) / unit**4
    known = np.isfinite(p) & np.isfinite(q) & np.isfinite(r)
    p, q, r = (np.where(known, part, 0.0) for part in (p, q, r))
    companion = np.zeros((*p.shape, 4, 4))
    companion[..., (1, 2, 3), (0, 1, 2)] = 1.0
    companion[..., 0, 3], companion[..., 1, 3], companion[..., 2, 3] = r, 2 * q, p
    roots = np.linalg.eigvals(companion)
    real = (np.abs(roots.imag) < 1e-7) & (roots.real >= 0)
    lowest = np.min(np.where(real, roots.real, np.inf), axis=-1)
    lowest = np.where(np.isfinite(lowest), lowest, 0.0)
    for _ in range(2):  # Newton's polish; a double root is left as it is
        value = lowest**4 - p * lowest**2 - 2 * q * lowest - r
        slope = 4 * lowest**3 - 2 * p * lowest - 2 * q
        lowest = np.where(np.abs(slope) > 1e-6, lowest - value / np.where(slope == 0, 1.0, slope), lowest)
    return np.where(known, term + unit * lowest, np.nan)
