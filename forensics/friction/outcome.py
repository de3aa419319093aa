"""A finished fit put into the calibration's words: sections, weights, parameters, sentences."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from forensics.estimate import Estimate
from forensics.friction.assumptions import Z90, Assumed
from forensics.friction.identifiability import Verdict
from forensics.friction.parameters import BLOCK, FIRST, REST, SCALE, SHARE
from forensics.friction.result import Calibration, FrictionSection, HeldOut, Parameter, Reading
from forensics.friction.robust import Fit, Problem
from forensics.friction.rotational import Rotational, rms
from forensics.friction.spread import Posterior, draw, fold

if TYPE_CHECKING:
    from forensics.case import Case
    from forensics.rig.view import RigView
    from forensics.well.model import Well

Floats = NDArray[np.float64]

#: A number beside the factors counts as determined where the readings halve what was assumed of it.
HALVED = 0.5


@dataclass(frozen=True)
class Solved:
    """A finished fit, how sure it is, what it can't tell, and how well it foretells."""

    problem: Problem
    fit: Fit
    after: Posterior
    verdict: Verdict
    bears: tuple[bool, ...]
    rotational: Rotational | None
    held_out: HeldOut | None
    edges: tuple[float, ...] = ()

    @property
    def sd(self) -> Floats:
        """One sigma of each parameter, shape (p,)."""
        return np.sqrt(np.diag(self.after.cov))


def result(
    solved: Solved,
    weights: tuple[Reading, ...],
    torques: tuple[Reading, ...],
    well: Well,
    case: Case,
    rig: RigView,
) -> Calibration:
    """Put a finished fit into a calibration.

    Parameters
    ----------
    solved : Solved
    weights, torques : tuple of Reading
        As fitted.
    well : Well
    case : Case
    rig : RigView

    Returns
    -------
    Calibration
    """
    p, given = solved.fit.p, solved.problem.prior.given_block
    block, bias = _block(solved, rig)
    rows = fold(solved.problem, solved.fit)
    draws = draw(p, solved.after.cov, rows)
    if given is not None:
        draws[:, -1] -= p[BLOCK] - given
    rotational = solved.rotational
    residuals = [solved.fit.residuals]
    if rotational is not None:
        residuals.append(rotational.residuals)
    return Calibration(
        sections=_sections(solved, weights, well, case.friction.fixed),
        block_weight=block,
        hookload_bias=bias,
        pipe_above_rotary=_told(solved, SHARE),
        rotational=rotational.factor if rotational else None,
        readings=weights + torques,
        residuals=np.concatenate(residuals),
        residual_rms=rms(solved.fit.residuals[solved.fit.heard & solved.problem.plain]),
        draws=draws,
        can_not_tell=_sentences(solved) + (rotational.sentences if rotational else ()),
        weight_scale=_told(solved, SCALE),
        torque_loss=rotational.loss if rotational else None,
        edges=solved.edges,
        gain=rows @ solved.after.gain,
        held_out=solved.held_out,
        open_directions=solved.verdict.directions,
        parameters=_parameters(solved, block, bias),
        breakover=rig.breakover,
    )


def _block(solved: Solved, rig: RigView) -> tuple[Estimate, Estimate]:
    """Block weight and bias: a bias exists only where a block weight is given."""
    p, prior, n = solved.fit.p, solved.problem.prior, len(solved.problem.value)
    # where plateau and steady weights disagree by more than the plateau's own sigma, neither is that good
    sd = solved.sd[BLOCK] * max(1.0, abs(p[BLOCK] - prior.centre[BLOCK]) / prior.sigma[BLOCK])
    if prior.given_block is not None:
        given = prior.given_block
        told = bool(sd < HALVED * prior.sigma[BLOCK])
        bias = _estimate(p[BLOCK] - given, sd, "steady weights", n, told)
        return Estimate(given, given, given, "case file"), bias
    bias = Estimate(0.0, 0.0, 0.0, "part of the block weight", determined=False)
    # without steady weights nothing was learned beyond what the rig's own readings say
    return (_estimate(p[BLOCK], sd, "steady weights", n) if n else rig.block_weight), bias


def _told(solved: Solved, k: int) -> Estimate:
    """Give a parameter that counts as determined where the readings halve its prior's width."""
    sd, sigma = float(solved.sd[k]), float(solved.problem.prior.sigma[k])
    determined = bool(sd < HALVED * sigma)
    return _estimate(solved.fit.p[k], sd, "steady weights", len(solved.problem.value), determined)


def _estimate(value: float, sd: float, source: str, samples: int, determined: bool = True) -> Estimate:
    told = bool(determined) and samples > 0
    low, high = float(value - Z90 * sd), float(value + Z90 * sd)
    return Estimate(float(value), low, high, source if told else "assumed", told, samples)


def _parameters(solved: Solved, block: Estimate, bias: Estimate) -> tuple[Parameter, ...]:
    """Every number of the joint fit, with the block weight and the bias as two."""
    rest = [Parameter(name, unit, _told(solved, k)) for k, (name, unit) in enumerate(REST) if k != BLOCK]
    made = [Parameter("block weight", "N", block), Parameter("hookload bias", "N", bias), *rest]
    if solved.rotational is not None:
        made.append(Parameter("rotational factor", "-", solved.rotational.factor))
        made.append(Parameter("torque lost in the top drive", "N.m", solved.rotational.loss))
    return tuple(made)


def _sections(
    solved: Solved, weights: tuple[Reading, ...], well: Well, fixed: bool
) -> tuple[FrictionSection, ...]:
    """One section of cased hole, then the open ones; a kind the well lacks has no length."""
    hole, prior = well.hole, solved.problem.prior
    shoe = float(hole.shoe)
    bottom = max(float(np.max(hole.bottom)), shoe)
    marks = (0.0, shoe, *solved.edges, bottom)
    depth = np.array([r.bit_depth for r in weights], dtype=float)
    heard = (solved.problem.sign != 0.0) & solved.fit.heard
    made = []
    for k in range(len(marks) - 1):
        kind, assumed = ("open", prior.open) if k else ("cased", prior.cased)
        felt = int((heard & (depth > marks[k] + 1.0)).sum())
        made.append(FrictionSection(kind, marks[k], marks[k + 1], _factor(solved, k, fixed, assumed, felt)))
    return tuple(made)


def _factor(solved: Solved, k: int, fixed: bool, assumed: Assumed, samples: int) -> Estimate:
    value, sd = float(solved.fit.p[FIRST + k]), float(solved.sd[FIRST + k])
    if fixed:
        return Estimate(value, value, value, f"fixed ({assumed.source})", determined=False)
    low, high = max(0.0, value - Z90 * sd), value + Z90 * sd
    if solved.verdict.determined[k]:
        return Estimate(value, low, high, "steady weights", samples=samples)
    leaning = "leaning on the assumed" if solved.bears[k] and solved.verdict.told else "assumed"
    return Estimate(value, low, high, f"{leaning} ({assumed.source})", determined=False, samples=samples)


def _sentences(solved: Solved) -> tuple[str, ...]:
    """Say what a reader should know about readings that are one-sided, let go, or not there."""
    problem = solved.problem
    if not len(problem.value):
        said = "No steady pick-up, slack-off or rotating weight was found: the friction factors are assumed."
        return (said,)
    told = list(solved.verdict.sentences)
    near = int((problem.near & solved.fit.heard).sum())
    if near:
        told.append(
            f"{near} slack-off weights are of a string near or past its buckling load: they show the helix "
            "as well as friction, count for less, and are in no error of the fit."
        )
    signs = set(problem.sign.tolist())
    missing = [name for name, sign in (("pick-up", 1.0), ("slack-off", -1.0)) if sign not in signs]
    if len(missing) == 1:
        told.append(
            f"There are no {missing[0]} readings: friction rests on the string's weight and the block weight "
            "being right."
        )
    if 0.0 not in signs:
        told.append("There are no rotating weights: the frictionless weight was not checked.")
    let_go = int((~solved.fit.heard).sum())
    if let_go:
        told.append(
            f"{let_go} of {len(problem.value)} weight readings stand apart from the rest and were left "
            "out of the base friction."
        )
    return tuple(told)
