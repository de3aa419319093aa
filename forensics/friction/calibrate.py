"""Friction factors and weights from steady off-bottom readings.

All readings are fitted together, with a weak joint prior at the assumed values, so that what the readings
can't tell stays where it was assumed to be, and is said to.
"""

from __future__ import annotations

from dataclasses import replace
from functools import partial
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from forensics.friction import identifiability
from forensics.friction.assumptions import HELIX_OWN, build_prior
from forensics.friction.divide import Scene, divide
from forensics.friction.heldout import hold_out
from forensics.friction.outcome import Solved, result
from forensics.friction.parameters import FIRST
from forensics.friction.problem import NEAR_BUCKLING, SIGNS, build_problem, depths, sound, thin
from forensics.friction.result import Calibration, Reading
from forensics.friction.robust import Fit, Problem, fit
from forensics.friction.rotational import fit_rotational
from forensics.friction.spread import Posterior, posterior
from forensics.friction.surface import OffBottom

if TYPE_CHECKING:
    from forensics.case import Case
    from forensics.rig.view import RigView
    from forensics.well.model import Well

Floats = NDArray[np.float64]


def calibrate(
    readings: tuple[Reading, ...], well: Well, case: Case, model: OffBottom, rig: RigView
) -> Calibration:
    """Calibrate friction, block weight and weight per length on a run's steady readings.

    Parameters
    ----------
    readings : tuple of Reading
        Steady pick-up, slack-off and rotating weights [N] and off-bottom torques [N.m]; those written down by
        hand are heard with a wide sigma of their own.
    well : Well
    case : Case
        Assumed friction, and whether it is fixed; block weight where given.
    model : OffBottom
        Hookload and torque of the string off bottom at given factors.
    rig : RigView
        Block weight from the in-slips plateau, pump effect.

    Returns
    -------
    Calibration
        Factors the readings can't tell lean on their assumed value and are marked.

    Notes
    -----
    Model: reading = block weight + bias + share * pipe above the rotary + scale * string weight + pumps +
    drift in time, and what sheaves add or take. The soft string is of first degree in weight, so one scale
    serves weight and drag; it may drift a little with depth, so that a small error of weight does not move
    the block weight. Lopsided biweight loss (see `robust`); intervals are 90 %.

    References
    ----------
    Johancsik et al. (1984), J. Pet. Technol. 36(6) (the friction model); Beaton and Tukey (1974),
    Technometrics 16(2) (the biweight).
    """
    weights = thin(tuple(r for r in readings if r.kind in SIGNS and sound(r)))
    torques = thin(tuple(r for r in readings if r.kind == "torque" and sound(r)))
    bears = _bears(weights, model)
    pulled = depths(tuple(r for r in weights if SIGNS[r.kind] != 0.0))
    reach = float(np.ptp(pulled)) if len(pulled) else 0.0
    prior = partial(build_prior, case, well, rig, reach=reach)
    problem = build_problem(weights, model, prior(bears))
    problem, found = _solve(problem, depths(weights), model)
    problem, found, edges = divide(problem, found, Scene(weights, model, float(well.hole.shoe), prior))
    bears += bears[-1:] * len(edges)
    weights = tuple(replace(r, buckled=bool(b)) for r, b in zip(weights, problem.near, strict=True))
    rotational = fit_rotational(torques, model, float(found.p[FIRST:].mean()))
    after = posterior(problem, found, depths(weights))
    if case.friction.fixed:
        bears = (False,) * len(bears)
        verdict = identifiability.Verdict(False, np.array(bears), (), ())
    else:
        verdict = identifiability.judge(problem.prior, after.cov, bears)
        if not verdict.told:
            found, after = _hold(problem, depths(weights))
    proof = hold_out(problem, found, depths(weights), rotational)
    solved = Solved(problem, found, after, verdict, bears, rotational, proof, edges)
    return result(solved, weights, torques, well, case, rig)


def _hold(problem: Problem, bit_depth: Floats) -> tuple[Fit, Posterior]:
    """Keep the assumed factors, and how unsure they are, where the readings tell nothing of them."""
    held = replace(problem, prior=problem.prior.held())
    found = fit(held)
    after = posterior(held, found, bit_depth)
    cov = after.cov.copy()
    cov[FIRST:, FIRST:] = problem.prior.cov[FIRST:, FIRST:]
    return found, replace(after, cov=cov)


def _bears(weights: tuple[Reading, ...], model: OffBottom) -> tuple[bool, ...]:
    """Whether any reading feels the friction of the cased, and of the open, hole."""
    drags = np.array([SIGNS[r.kind] != 0.0 for r in weights], dtype=bool)
    if not drags.any():
        return False, False
    deep = np.asarray(model.open_length(depths(weights)), dtype=float) > 1.0
    return True, bool((drags & deep).any())


def _solve(problem: Problem, bit_depth: Floats, model: OffBottom) -> tuple[Problem, Fit]:
    """Fit without the slack-off weights of a string that nears buckling, then with them, less trusted.

    They show the helix as well as friction, and near lockup so steeply that alone they would outvote all.
    """
    down = problem.sign < 0.0
    found = fit(problem)
    near = np.zeros(len(down), dtype=bool)
    for _ in range(3):
        before, near = near, np.zeros(len(down), dtype=bool)
        if down.any():
            ratio = model.slack_off_ratio(bit_depth[down], *(float(f) for f in found.p[FIRST:]))
            near[down] = ~(ratio <= NEAR_BUCKLING)
        if (near == before).all():
            break
        found = fit(problem.take(~near))
    if not near.any():
        return problem, found
    steep = np.abs(problem.surface.at(found.p[FIRST:])[1] @ found.p[FIRST:])
    sigma = np.where(near, np.hypot(problem.sigma, HELIX_OWN * steep), problem.sigma)
    problem = replace(problem, near=near, sigma=sigma)
    return problem, fit(problem, found.p)
