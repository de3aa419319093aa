"""What pressure and flow do to a string's axial force, and to the reading on the hook.

The marches carry the effective tension ``T = T_true - p_i A_i + p_o A_o``. In it pressures drop out of the
balance along the pipe, whatever the flow loses to friction on the bore; a closed end has T = 0 whatever the
pressures are; and the hook, below a closed swivel, carries T of the top. So neither standpipe pressure nor
the bit's pressure drop times an area shows on the hook: what does is the momentum that the jets carry away,
which lifts the bit and presses the string from below, and the rub of the returns on the outside, which lifts
it too and is not reckoned here. The steel's own force does change, by ``p_i A_i - p_o A_o``: that is the one
that stress is taken from (`stress.true_axial`).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats

DISCHARGE = 0.95
"""Discharge coefficient of bit nozzles (Applied Drilling Engineering, 1986, from memory, high)."""


def bit_pressure_drop(thrust: ArrayLike, area: float) -> Floats:
    """Give the pressure that a bit's nozzles take, from the thrust of their jets: ``J / (2 C_d^2 A)``.

    Parameters
    ----------
    thrust : array_like
        From `jet_thrust` [N].
    area : float
        Of all nozzles together, above zero [m2].

    Returns
    -------
    ndarray
        ``rho Q^2 / (2 C_d^2 A^2)`` [Pa]

    Examples
    --------
    Nozzles of 0.3889 in2, 400 gal/min of 12 lb/gal mud, in psi:

    >>> area = 0.3889 * 0.0254**2
    >>> round(float(bit_pressure_drop(jet_thrust(400 * 6.30902e-5, 12 * 119.826, area), area)) / 6894.757)
    1169
    """
    return np.asarray(thrust, dtype=float) / (2 * DISCHARGE**2 * area)


def jet_thrust(flow: ArrayLike, density: ArrayLike, area: float) -> Floats:
    """Give the force with which the jets lift a bit, ``rho Q^2 / A``.

    Parameters
    ----------
    flow : array_like
        [m3/s]
    density : array_like
        Of the mud inside [kg/m3].
    area : float
        Of all nozzles together, above zero [m2].

    Returns
    -------
    ndarray
        [N]; the speed in the bore, under a tenth of the jets', is left out.
    """
    return np.asarray(density, dtype=float) * np.asarray(flow, dtype=float) ** 2 / area
