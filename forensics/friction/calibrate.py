"""Friction factors and weights from steady off-bottom readings.

All readings are fitted together, in the trade's order as a start (block, rotating weight, cased, open
hole), with weak priors at the assumed values, so that what the readings can't tell stays where it was
assumed to be, and is said to.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from forensics.estimate import Estimate
from forensics.friction import identifiability
from forensics.friction.assumptions import KINDS, Z90, Assumed, Prior, build_prior
from forensics.friction.result import Calibration, FrictionSection, Reading
from forensics.friction.robust import Fit, Problem, fit
from forensics.friction.rotational import Rotational, fit_rotational
from forensics.friction.spread import STAND, covariance, draw
from forensics.friction.surface import OffBottom, build_surface

if TYPE_CHECKING:
    from forensics.case import Case
    from forensics.rig.view import RigView
    from forensics.well.model import Well

Floats = NDArray[np.float64]

#: Which way more friction moves a reading.
SIGNS = {"pick_up": 1.0, "slack_off": -1.0, "rotating": 0.0}

#: Readings fitted at most, of each kind: more of one run add nothing but time.
MOST = 80

#: Load ratio from which a slack-off weight says more of buckling than of friction.
NEAR_BUCKLING = 0.8

#: A reading is trusted no better than this [N], or this part of its value: settling, speed, pumps.
SIGMA_FLOOR = (500.0, 0.0015)


@dataclass(frozen=True)
class Solved:
    """A finished fit with its covariance, what was held at its assumed value, and sentences."""

    fit: Fit
    cov: Floats
    held: NDArray[np.bool_]
    sentences: tuple[str, ...]


def calibrate(
    readings: tuple[Reading, ...], well: Well, case: Case, model: OffBottom, rig: RigView
) -> Calibration:
    """Calibrate friction, block weight and weight per length on a run's steady readings.

    Parameters
    ----------
    readings : tuple of Reading
        Steady pick-up, slack-off and rotating weights [N] and off-bottom torques [N.m].
    well : Well
    case : Case
        Assumed friction, and whether it is fixed; block weight where given.
    model : OffBottom
        Hookload and torque of the string off bottom at given factors.
    rig : RigView
        Block weight from the in-slips plateau.

    Returns
    -------
    Calibration
        Factors the readings can't tell keep their assumed value and are marked.

    Notes
    -----
    Model: reading = block weight + bias + share * pipe above the rotary + scale * string weight. The
    soft string is of first degree in weight, so one scale serves weight and drag; it may drift a little
    with depth, so that a small error of weight does not move the block weight. Lopsided biweight
    loss (see `robust`); intervals are 90 %.

    References
    ----------
    Johancsik et al. (1984), J. Pet. Technol. 36(6) (the friction model); Beaton and Tukey (1974),
    Technometrics 16(2) (the biweight).
    """
    weights = tuple(r for r in readings if r.kind in SIGNS and _sound(r))
    torques = _thin(tuple(r for r in readings if r.kind == "torque" and _sound(r)))
    prior = build_prior(case, well, rig)
    weights, problem, solved, buckled = _solve_unbuckled(weights, model, prior, case.friction.fixed)
    solved = replace(solved, sentences=solved.sentences + buckled)
    rotational = fit_rotational(torques, model, float(solved.fit.p[3:5].mean()))
    inputs = _Inputs(weights, torques, well, rig, rotational, model)
    return _result(solved, problem, case.friction.fixed, inputs)


def _solve_unbuckled(
    weights: tuple[Reading, ...], model: OffBottom, prior: Prior, fixed: bool
) -> tuple[tuple[Reading, ...], Problem, Solved, tuple[str, ...]]:
    """Fit without the slack-off weights of a string that nears buckling: they show the helix."""
    everything = _thin(weights)
    whole = _problem(everything, model, prior)
    depth = np.array([r.bit_depth for r in everything], dtype=float)
    down = np.array([r.kind == "slack_off" for r in everything], dtype=bool)
    kept = np.ones(len(everything), dtype=bool)
    for _ in range(3):
        weights = tuple(r for r, keep in zip(everything, kept, strict=True) if keep)
        problem = whole.take(kept)
        solved = _solve(problem, weights, model, fixed)
        cased, open_ = solved.fit.p[3:5]
        before, kept = kept, np.ones(len(everything), dtype=bool)
        kept[down] = model.slack_off_ratio(depth[down], float(cased), float(open_)) <= NEAR_BUCKLING
        if (kept == before).all():
            break
    gone = len(everything) - len(weights)
    if gone == 0:
        return weights, problem, solved, ()
    said = (
        f"{gone} slack-off weights were left out of the friction: at them the string would be near or past "
        "its buckling load."
    )
    return weights, problem, solved, (said,)


@dataclass(frozen=True)
class _Inputs:
    weights: tuple[Reading, ...]
    torques: tuple[Reading, ...]
    well: Well
    rig: RigView
    rotational: Rotational | None
    model: OffBottom


def _sound(reading: Reading) -> bool:
    return bool(np.isfinite(reading.value) and np.isfinite(reading.bit_depth) and reading.bit_depth > 0.0)


def _thin(readings: tuple[Reading, ...]) -> tuple[Reading, ...]:
    """At most `MOST` readings of each kind, evenly over the run, in time order."""
    kept: list[Reading] = []
    for kind in {r.kind for r in readings}:
        same = sorted((r for r in readings if r.kind == kind), key=lambda r: (r.start, r.bit_depth))
        if len(same) > MOST:
            same = [same[i] for i in np.linspace(0, len(same) - 1, MOST).round().astype(int)]
        kept.extend(same)
    return tuple(sorted(kept, key=lambda r: (r.start, r.kind)))


def _problem(weights: tuple[Reading, ...], model: OffBottom, prior: Prior) -> Problem:
    depth = np.array([r.bit_depth for r in weights], dtype=float)
    value = np.array([r.value for r in weights], dtype=float)
    block = np.array([r.block for r in weights], dtype=float)
    known = np.isfinite(block)
    block = np.where(known, block, block[known].mean() if known.any() else 0.0)
    above = model.above_rotary(block, depth) if known.any() else np.zeros(len(weights))
    own = np.array([r.spread / np.sqrt(min(max(r.samples, 1), 10)) for r in weights], dtype=float)
    own = np.where(np.isfinite(own), own, 0.0)
    kinds = tuple(r.kind for r in weights)
    return Problem(
        value=value,
        above=above,
        sign=np.array([SIGNS[k] for k in kinds], dtype=float),
        sigma=np.hypot(own, np.maximum(SIGMA_FLOOR[0], SIGMA_FLOOR[1] * np.abs(value))),
        place=_place(depth),
        surface=build_surface(model, kinds, depth),
        prior=prior,
    )


def _place(depth: Floats) -> Floats:
    """Where each reading lies among the depths, from -1 to 1; zero where they are all one."""
    if len(depth) == 0 or np.ptp(depth) < STAND:
        return np.zeros(len(depth))
    return 2.0 * (depth - depth.min()) / np.ptp(depth) - 1.0


def _solve(problem: Problem, weights: tuple[Reading, ...], model: OffBottom, fixed: bool) -> Solved:
    """Fit all; hold what the readings can't tell; fit the rest again."""
    depth = np.array([r.bit_depth for r in weights], dtype=float)
    free = np.array([True, True, True, not fixed, not fixed, True])
    start = problem.prior.centre
    first = fit(problem, start, free)
    cov = covariance(problem, first, depth, free)
    if fixed:
        return Solved(first, cov, np.array([False, False, False, True, True, False]), ())
    if not weights:
        said = "No steady pick-up, slack-off or rotating weight was found: the friction factors are assumed."
        return Solved(first, cov, np.array([False, False, False, True, True, False]), (said,))
    drags = problem.sign != 0.0
    open_ = np.asarray(model.open_length(depth), dtype=float) > 1.0
    verdict = identifiability.judge(cov, problem.prior, (bool(drags.any()), bool((drags & open_).any())))
    if verdict.held.any():
        start = np.where(verdict.held, problem.prior.centre, first.p)
        first = fit(problem, start, free & ~verdict.held)
        cov = covariance(problem, first, depth, free)
    return Solved(first, cov, verdict.held, verdict.sentences + _cautions(problem, first))


def _cautions(problem: Problem, solved: Fit) -> tuple[str, ...]:
    """Say what a reader should know about readings that are one-sided or were let go."""
    said: list[str] = []
    signs = set(problem.sign.tolist())
    missing = [name for name, sign in (("pick-up", 1.0), ("slack-off", -1.0)) if sign not in signs]
    if len(missing) == 1:
        said.append(
            f"There are no {missing[0]} readings: friction rests on the string's weight and the block weight "
            "being right."
        )
    if 0.0 not in signs:
        said.append("There are no rotating weights: the frictionless weight was not checked.")
    let_go = int((solved.weights < 0.1).sum())
    if let_go:
        said.append(
            f"{let_go} of {len(problem.value)} weight readings stand apart from the rest and were left "
            "out of the base friction."
        )
    return tuple(said)


def _result(solved: Solved, problem: Problem, fixed: bool, inputs: _Inputs) -> Calibration:
    p, prior = solved.fit.p, problem.prior
    sd = np.sqrt(np.diag(solved.cov))
    n = len(problem.value)
    # where plateau and steady weights disagree by more than the plateau's own sigma, neither is that good
    sd[0] *= max(1.0, abs(p[0] - prior.centre[0]) / prior.sigma[0])
    # without steady weights nothing was learned beyond what the rig's own readings say
    block = _estimate(p[0], sd[0], "steady weights", n) if n else inputs.rig.block_weight
    bias = Estimate(0.0, 0.0, 0.0, "part of the block weight", determined=False)
    if prior.given_block is not None:
        given = prior.given_block
        bias = _estimate(p[0] - given, sd[0], "steady weights", n, determined=sd[0] < 0.5 * prior.sigma[0])
        block = Estimate(given, given, given, "case file")
    usual = float(np.median(problem.surface.at(p[3], p[4])[0])) if n else 0.0
    draws = draw(p, solved.cov, (float(problem.above.mean()) if n else 0.0, usual))
    if prior.given_block is not None:
        draws[:, 2] -= p[0] - prior.given_block
    rotational = inputs.rotational
    residuals = [solved.fit.residuals]
    if rotational is not None:
        residuals.append(rotational.residuals)
    heard = solved.fit.residuals[solved.fit.weights > 0.1]
    return Calibration(
        sections=_sections(solved, problem, fixed, inputs),
        block_weight=block,
        hookload_bias=bias,
        pipe_above_rotary=_estimate(p[1], sd[1], "steady weights", n, sd[1] < 0.5 * prior.sigma[1]),
        rotational=rotational.factor if rotational else None,
        readings=inputs.weights + inputs.torques,
        residuals=np.concatenate(residuals),
        residual_rms=float(np.sqrt(np.mean(heard**2))) if len(heard) else float("nan"),
        draws=draws,
        can_not_tell=solved.sentences + (rotational.sentences if rotational else ()),
        weight_scale=_estimate(p[2], sd[2], "steady weights", n, sd[2] < 0.5 * prior.sigma[2]),
        torque_loss=rotational.loss if rotational else None,
    )


def _estimate(value: float, sd: float, source: str, samples: int, determined: bool = True) -> Estimate:
    told = bool(determined) and samples > 0
    low, high = float(value - Z90 * sd), float(value + Z90 * sd)
    return Estimate(float(value), low, high, source if told else "assumed", told, samples)


def _sections(
    solved: Solved, problem: Problem, fixed: bool, inputs: _Inputs
) -> tuple[FrictionSection, FrictionSection]:
    """One section of cased and one of open hole; a kind the well lacks has no length."""
    hole = inputs.well.hole
    shoe = float(hole.shoe)
    bottom = max(float(np.max(hole.bottom)), shoe)
    depth = np.array([r.bit_depth for r in inputs.weights], dtype=float)
    heard = (problem.sign != 0.0) & (solved.fit.weights > 0.1)
    deep = np.asarray(inputs.model.open_length(depth), dtype=float) > 1.0 if len(depth) else heard
    counts = (int(heard.sum()), int((heard & deep).sum()))
    spans = ((0.0, shoe), (shoe, bottom))
    assumed: tuple[Assumed, Assumed] = (problem.prior.cased, problem.prior.open)
    made = [
        FrictionSection(kind, *spans[k], _factor(solved, k, fixed, assumed[k], counts[k]))
        for k, kind in enumerate(KINDS)
    ]
    return made[0], made[1]


def _factor(solved: Solved, k: int, fixed: bool, assumed: Assumed, samples: int) -> Estimate:
    value = float(solved.fit.p[3 + k])
    if fixed:
        return Estimate(value, value, value, f"fixed ({assumed.source})", determined=False)
    sd = float(np.sqrt(solved.cov[3 + k, 3 + k]))
    low, high = max(0.0, value - Z90 * sd), value + Z90 * sd
    if solved.held[3 + k]:
        return Estimate(value, low, high, f"assumed ({assumed.source})", determined=False, samples=samples)
    return Estimate(value, low, high, "steady weights", samples=samples)
