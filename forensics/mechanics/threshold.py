"""Thresholds as the replay judges by them: local load at the actual contact, plus the near-vertical term.

The near-vertical term carries c(n, length) (see `eigen`), which depends on the length that is held:
Lubinski's 1.94 is its value at length 7.93 and n = 0 and at no other, so no constant stands in for it.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike

from forensics.errors import CaseError, nearest
from forensics.mechanics.eigen import LIMIT, Floats, interpolate
from forensics.mechanics.selfconsistent import ContactSize, local_load, lowest_crossing

VERTICAL_HELICAL = 5.55
"""Helical onset in a vertical hole over (EI w^2)^(1/3): Wu and Juvkam-Wold, from memory.

It is twice the mean load at which one turn forms (4.05) less that at which a half wave does (2.55), all by an
energy argument that bounds loads from above.
"""

ENVELOPE_RELEASE = 1.370405
"""Least load over F_DP at which a helix still touches the wall all round (`helix_limit.unloading_limit`)."""


def weight_cube(stiffness: ArrayLike, w_cos: ArrayLike) -> Floats:
    """Give ``(EI w^2 cos^2 I)^(1/3)``, the unit of the near-vertical term [N]; zero where cos I <= 0.

    Parameters
    ----------
    stiffness : array_like
        EI [N.m2].
    w_cos : array_like
        Buoyed weight per length times cos I [N/m].

    Returns
    -------
    ndarray
        [N]
    """
    along = np.maximum(np.asarray(w_cos, dtype=float), 0.0)
    return np.cbrt(np.asarray(stiffness, dtype=float) * along**2)


def near_vertical_term(stiffness: ArrayLike, local: ArrayLike, w_cos: ArrayLike, length: ArrayLike) -> Floats:
    """Give what a nearly vertical hole adds to the local load, ``c(n, length) (EI w^2 cos^2 I)^(1/3)``.

    Parameters
    ----------
    stiffness : array_like
        EI [N.m2].
    local : array_like
        F_DP at the actual contact force [N]: ``n = (F_DP / (2 (EI w^2 cos^2 I)^(1/3)))^2``.
    w_cos : array_like
        Buoyed weight per length times cos I [N/m]; zero or less gives no term.
    length : array_like
        Length of the run of like stiffness that holds the place (the bottom assembly at the bit) [m].

    Returns
    -------
    ndarray
        [N]

    Notes
    -----
    The load is taken to fall off upwards at w cos I, without friction. For a vertical hole other figures may
    be at hand: 1.94 is that of a string of length 7.93, and 1.0188 is what no real one comes near, as a
    million lengths still need 1.183. From n = 0.1 and 20 lengths on c is between 1.5 and 1.62.

    References
    ----------
    Lubinski, A. (1950), "A study of the buckling of rotary drilling strings", API 50-178, for n = 0.
    """
    cube = weight_cube(stiffness, w_cos)
    some = cube > 0
    safe = np.where(some, cube, 1.0)
    w_safe = np.where(some, w_cos, 1.0)
    n = np.where(some, np.asarray(local, dtype=float) / (2 * safe), 1.0) ** 2
    scaled = np.asarray(length, dtype=float) * np.cbrt(w_safe / np.asarray(stiffness, dtype=float))
    return np.where(some, interpolate(n, scaled) * cube, 0.0)


def sinusoidal_load(
    stiffness: ArrayLike, contact: ArrayLike, clearance: ArrayLike, w_cos: ArrayLike, length: ArrayLike
) -> Floats:
    """Give the sinusoidal load at the contact force that is there: local load plus near-vertical term.

    Parameters
    ----------
    stiffness, contact, clearance, w_cos, length : array_like
        As in `local_load` and `near_vertical_term`.

    Returns
    -------
    ndarray
        F_sin [N]
    """
    local = local_load(stiffness, contact, clearance)
    return local + near_vertical_term(stiffness, local, w_cos, length)


def helical_load(stiffness: ArrayLike, local: ArrayLike, w_cos: ArrayLike, onset: float) -> Floats:
    """Give the helical onset ``m F_DP + c_h (EI w^2 cos^2 I)^(1/3)``.

    Parameters
    ----------
    stiffness, local, w_cos : array_like
        As in `near_vertical_term`.
    onset : float
        m, the factor of a `HelicalOnset` [-].

    Returns
    -------
    ndarray
        F_hel [N]

    Notes
    -----
    c_h is 5.55 up to n = 1 (Wu and Juvkam-Wold's vertical hole), ``1.6172 m`` from n = 100, and linear in
    log n between. The blend, and adding a near-vertical term to these criteria at all, is this program's
    own; the report names it "plus near-vertical term".
    """
    cube = weight_cube(stiffness, w_cos)
    local = np.asarray(local, dtype=float)
    n = (local / (2 * np.where(cube > 0, cube, 1.0))) ** 2
    blend = np.clip(np.log(np.maximum(n, 1e-7)) / math.log(100.0), 0.0, 1.0)
    return onset * local + cube * (VERTICAL_HELICAL + blend * (LIMIT * onset - VERTICAL_HELICAL))


def release_load(sinusoidal: ArrayLike, local: ArrayLike, rule: str) -> Floats:
    """Give the load below which a helix is let go.

    Parameters
    ----------
    sinusoidal, local : array_like
        F_sin and F_DP at the place [N].
    rule : str
        "unbuckled" (F_sin) or "envelope" (the larger of F_sin and 1.370405 F_DP).

    Returns
    -------
    ndarray
        [N]

    Raises
    ------
    CaseError
        If the rule is neither.
    """
    if rule not in ("unbuckled", "envelope"):
        known = ("unbuckled", "envelope")
        raise CaseError(f"helical_release is {rule!r}; expected one of {known}: {nearest(rule, known)}")
    sinusoidal = np.asarray(sinusoidal, dtype=float)
    if rule == "unbuckled":
        return sinusoidal
    return np.maximum(sinusoidal, ENVELOPE_RELEASE * np.asarray(local, dtype=float))


def self_consistent_load(
    stiffness: ArrayLike, clearance: ArrayLike, w_cos: ArrayLike, length: ArrayLike, size: ContactSize
) -> Floats:
    """Give the lowest compression that equals the sinusoidal load at the contact it causes.

    Parameters
    ----------
    stiffness, clearance, w_cos, length : array_like
        As in `sinusoidal_load`.
    size : ContactSize
        How contact grows with compression.

    Returns
    -------
    ndarray
        `critical_load_kN` before its unit [N].

    Notes
    -----
    The near-vertical term changes slowly with F: it is held while the rest is solved as a quartic, and
    renewed until it stands still.
    """
    factor = np.asarray(stiffness, dtype=float) / clearance
    load = lowest_crossing(factor, size, 0.0)
    for _ in range(12):
        contact = np.sqrt(np.maximum(size.a + load * (2 * np.asarray(size.b) + load * size.c), 0.0))
        local = 2 * np.sqrt(factor * contact)
        term = near_vertical_term(stiffness, local, w_cos, length)
        before, load = load, lowest_crossing(factor, size, term)
        if np.allclose(before, load, rtol=1e-9, atol=0.0):
            break
    return load
