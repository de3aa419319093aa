"""The proof of a calibration: readings of whole stands foretold by a fit that never saw them."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.friction.result import HeldOut
from forensics.friction.robust import Fit, Problem, fit
from forensics.friction.rotational import LEAST_GROUPS, Rotational, rms
from forensics.friction.spread import blocks

Floats = NDArray[np.float64]


def hold_out(
    problem: Problem, whole: Fit, bit_depth: Floats, rotational: Rotational | None = None
) -> HeldOut | None:
    """Leave out each group of neighbouring stands in turn and foretell its readings from the others.

    Parameters
    ----------
    problem : Problem
    whole : Fit
        The fit to all readings; refits go on from it.
    bit_depth : ndarray, shape (n,)
        Of the readings [m]; the groups are blocks of it.
    rotational : Rotational or None
        For the torque's own error.

    Returns
    -------
    HeldOut or None
        None where there are fewer than four groups.

    Notes
    -----
    Readings of one stand share their errors, so leaving out rows at random would prove nothing. What the
    fit to all lets go, strings near buckling and weights written down by hand are left out of both errors,
    so that they speak of the same readings.
    """
    label = blocks(bit_depth)
    groups = int(label.max()) + 1 if len(label) else 0
    if groups < LEAST_GROUPS:
        return None
    residuals = np.empty(len(bit_depth))
    for k in range(groups):
        out = label == k
        without = fit(problem.take(~out), whole.p)
        foretold, _ = problem.take(out).model(without.p)
        residuals[out] = problem.value[out] - foretold
    heard = whole.heard & problem.plain
    torque = (float("nan"), float("nan")) if rotational is None else rotational.held_out
    return HeldOut(
        folds=groups,
        readings=int(heard.sum()),
        rms=rms(residuals[heard]),
        in_sample=rms(whole.residuals[heard]),
        torque_rms=torque[0],
        torque_in_sample=torque[1],
        residuals=residuals,
    )
