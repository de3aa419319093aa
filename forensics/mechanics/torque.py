"""What torque does to a helix: it winds it up, and lets it form a little earlier.

A helix of turn rate k (radians per length) twists the pipe's axis by r^2 k^3 / 2 per length, and torque
does work on that. Per length and over r^2, its energy is ``EI k^4 / 2 - F k^2 / 2 - M k^3 / 2``, beside the
weight's w / r for lying all round instead of on the low side. The pipe takes the hand that the torque
favours. A sinusoid turns as much one way as the other, so that its onset does not change to first order.
The helix that has formed presses harder on the wall, by ``r M k^3`` to first order.

With ``[criteria] torque_effect = "on"`` the replay lowers its helical threshold and presses its helices by
this, at the torque of the place (`kernels_judge.lowered`, `kernels_judge.winding_wall`).

References
----------
He, X., Halsey, G. W. and Kyllingstad, A. (1995), "Interactions between torque and helical buckling in
drilling", SPE 30521 (from memory: the effect, and that it is of the order of some per cent).

Miska, S. and Cunha, J. C. (1995), "An analysis of helical buckling of tubulars subjected to axial and
torsional loading in inclined wellbores", SPE 29460 (from memory: ``F = 8 pi^2 EI / p^2 - 3 pi M / p``).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats


def onset_drop(onset: ArrayLike, stiffness: ArrayLike, torque: ArrayLike) -> Floats:
    """Give what torque takes off a helical onset, to first order.

    Parameters
    ----------
    onset : array_like
        Load at which the pipe turns helical without torque, not negative [N].
    stiffness : array_like
        EI [N.m2].
    torque : array_like
        Along the pipe at the place, whichever way [N.m].

    Returns
    -------
    ndarray
        ``M sqrt(F / (2 EI))``: torque times the turn rate of the helix that forms [N].

    Notes
    -----
    Chen's onset is the least load at which a helix costs no more than lying straight: ``F = EI k^2 - M k +
    2 w_c / (r k^2)``, least over k. There this is exact to first order, and what it leaves out is
    ``M^2 / (16 EI)``, some tens of newtons. For the other onsets, and near vertical, taking the helix's own
    turn rate likewise is this program's own.

    Examples
    --------
    127 mm pipe in a horizontal 215.9 mm hole with 20 kN.m: a few per cent of 239 kN.

    >>> float(onset_drop(239e3, 1.23e6, 20e3).round(-2))
    6200.0
    """
    load = np.maximum(np.asarray(onset, dtype=float), 0.0)
    return np.abs(np.asarray(torque, dtype=float)) * np.sqrt(load / (2 * np.asarray(stiffness, dtype=float)))
