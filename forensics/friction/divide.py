"""Where the open hole's friction changes: cut only where the readings plainly ask for it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.friction.assumptions import Prior
from forensics.friction.parameters import FIRST
from forensics.friction.result import Reading
from forensics.friction.robust import HEARD, LET_GO, Fit, Problem, biweight, fit, follow_envelope
from forensics.friction.spread import blocks, posterior
from forensics.friction.surface import OffBottom

Floats = NDArray[np.float64]

#: Depths tried as cuts, evenly down the open hole that was weighed; sections are no shorter than this [m].
CANDIDATES = 15
SHORTEST = 100.0

#: Cuts made at most, one after the other.
MOST_CUTS = 3

#: A cut must gain this much log-likelihood beyond its price, half the log of the stands for each of its two
#: numbers: more than ten on the scale of the criterion of Schwarz (1978), "very strong" by Kass and
#: Raftery (1995), J. Am. Stat. Assoc. 90(430).
VERY_STRONG = 5.0

#: Neighbours that differ by less than this, or this part of the smaller, are the wander of any friction.
LEAST_STEP = (0.03, 0.15)

#: Fewer pick-up and slack-off readings below the shoe than this are never cut.
FEWEST = 12

#: A factor beyond these shows something other than rubbing: no cut that needs it is made.
PLAUSIBLE = (0.05, 0.50)

#: Sigmas by which neighbours must differ in the end.
SURE = 2.0

#: Share of the pulled and lowered readings that a cut may leave apart.
MOST_APART = 0.10

ROUNDS = 3
ROUNDS_ENVELOPE = 12


@dataclass(frozen=True)
class Tangent:
    """String weights about given factors: `weight` (n,), `slopes` (n, s) [N], `factors` (s,)."""

    weight: Floats
    slopes: Floats
    factors: Floats

    def at(self, factors: Floats) -> tuple[Floats, Floats]:
        """Weights and slopes at other factors nearby."""
        return self.weight + self.slopes @ (factors - self.factors), self.slopes

    def take(self, rows: NDArray[np.bool_]) -> Tangent:
        """Only some of the readings."""
        return replace(self, weight=self.weight[rows], slopes=self.slopes[rows])


@dataclass(frozen=True)
class Scene:
    """What the search needs beside the problem.

    `prior` makes a prior from whether each section is felt; `shoe` [m].
    """

    weights: tuple[Reading, ...]
    model: OffBottom
    shoe: float
    prior: Callable[[tuple[bool, ...]], Prior]

    @property
    def bit_depth(self) -> Floats:
        """Of the readings [m]."""
        return np.array([r.bit_depth for r in self.weights], dtype=float)


def divide(problem: Problem, whole: Fit, scene: Scene) -> tuple[Problem, Fit, tuple[float, ...]]:
    """Cut the open hole where the readings ask for it, and fit again.

    Parameters
    ----------
    problem : Problem
        With one open section.
    whole : Fit
        Its solution.
    scene : Scene

    Returns
    -------
    problem, fit, edges
        As given, and no edges, where nothing asks.

    Notes
    -----
    Solids add drag too, and more to pulling than to lowering. A cut must therefore leave hardly a reading
    apart, at the scatter of the readings that agreed without it: pulled and lowered weights tell one story.
    All cuts are tried on the model's tangent, the chosen ones fitted on the model itself.
    """
    candidates = _candidates(problem, scene)
    if not len(candidates):
        return problem, whole, ()
    tangent = _tangent(scene, tuple(candidates.tolist()), whole.p[FIRST:])
    if not np.isfinite(tangent.weight).all():
        return problem, whole, ()
    chosen: tuple[float, ...] = ()
    stands = len(np.unique(blocks(scene.bit_depth)))
    best = _loss(*_cut(problem, whole, tangent, (candidates, chosen, scene)), whole)
    while len(chosen) < MOST_CUTS:
        found = {}
        for edge in candidates:
            edges = tuple(sorted({*chosen, float(edge)}))
            if len(edges) > len(chosen) and np.all(np.diff(edges) >= SHORTEST):
                tried = _cut(problem, whole, tangent, (candidates, edges, scene))
                good = _sensible(tried[1].p) and _apart(*tried, whole) <= MOST_APART
                found[edges] = _loss(*tried, whole) if good else np.inf
        edges = min(found, key=found.get, default=chosen)
        if edges == chosen or best - found[edges] < VERY_STRONG + np.log(stands):
            break
        best, chosen = found[edges], edges
    if not chosen:
        return problem, whole, ()
    cut, found = _refit(problem, _start(whole, len(chosen)), chosen, scene)
    return (cut, found, chosen) if _stand_apart(cut, found, scene) else (problem, whole, ())


def _candidates(problem: Problem, scene: Scene) -> Floats:
    """Depths worth trying; none where too little was weighed below the shoe, or a helix is in the weights."""
    depth = scene.bit_depth
    felt = (problem.sign != 0.0) & (depth > scene.shoe)
    if felt.sum() < FEWEST or problem.near.any() or not problem.prior.free[FIRST:].all():
        return np.zeros(0)
    last = float(depth[felt].max())
    count = min(CANDIDATES, int((last - scene.shoe) / SHORTEST) - 1)
    return np.linspace(scene.shoe, last, count + 2)[1:-1] if count > 0 else np.zeros(0)


def _tangent(scene: Scene, edges: tuple[float, ...], factors: Floats) -> Tangent:
    """Weigh all readings, with slopes against every section; one open factor serves all."""
    at = np.concatenate([factors[:1], np.resize(factors[1:], len(edges) + 1)])
    kinds = tuple(r.kind for r in scene.weights)
    weighed = scene.model.divided(edges).weigh_readings(kinds, scene.bit_depth, tuple(at.tolist()))
    return Tangent(weighed.weight, weighed.slopes, at)


def _felt(edges: tuple[float, ...], problem: Problem, scene: Scene) -> tuple[bool, ...]:
    """Whether any pulled or lowered string reaches into each section."""
    deepest = float(scene.bit_depth[problem.sign != 0.0].max())
    return (True, *(deepest > top + 1.0 for top in (scene.shoe, *edges)))


def _start(whole: Fit, cuts: int) -> Floats:
    return np.concatenate([whole.p, np.full(cuts, whole.p[-1])])


def _cut(
    problem: Problem, whole: Fit, tangent: Tangent, cut: tuple[Floats, tuple[float, ...], Scene]
) -> tuple[Problem, Fit]:
    """Fit with the open hole cut at some of the candidates, on the tangent."""
    candidates, edges, scene = cut
    group = np.searchsorted(edges, np.append(scene.shoe, candidates), side="right")
    columns = [tangent.slopes[:, 1:][:, group == k].sum(axis=1) for k in range(len(edges) + 1)]
    slopes = np.column_stack([tangent.slopes[:, 0], *columns])
    merged = Tangent(tangent.weight, slopes, tangent.factors[: len(edges) + 2])
    prior = scene.prior(_felt(edges, problem, scene))
    part = replace(problem, surface=merged, prior=prior)
    start = follow_envelope(part, _start(whole, len(edges)), np.ones(len(problem.value)), ROUNDS_ENVELOPE)
    return part, fit(part, start)


def _loss(problem: Problem, found: Fit, whole: Fit) -> float:
    """Negative log posterior, by the biweight's loss at the scatter of the fit to the whole."""
    u = found.residuals / (problem.sigma * whole.inflation)
    cut = np.where(u * problem.sign > 0.0, *LET_GO)
    inside = np.clip(1.0 - (u / cut) ** 2, 0.0, 1.0)
    return float(np.sum(cut**2 / 6.0 * (1.0 - inside**3)) + 0.5 * np.sum(problem.prior.apart(found.p) ** 2))


def _apart(problem: Problem, found: Fit, whole: Fit) -> float:
    """Share of pulled and lowered readings that a fit leaves apart, at the scatter of the whole's."""
    pulled = problem.sign != 0.0
    u = found.residuals[pulled] / (problem.sigma[pulled] * whole.inflation)
    return float(np.mean(biweight(u, problem.sign[pulled]) < HEARD))


def _sensible(p: Floats) -> bool:
    """Whether factors are those of rubbing, and neighbours differ by more than any friction wanders."""
    opened = p[FIRST + 1 :]
    step = np.abs(np.diff(opened))
    least = np.maximum(LEAST_STEP[0], LEAST_STEP[1] * np.minimum(opened[1:], opened[:-1]))
    return bool(np.all(step >= least) and opened.min() >= PLAUSIBLE[0] and opened.max() <= PLAUSIBLE[1])


def _stand_apart(problem: Problem, found: Fit, scene: Scene) -> bool:
    """Whether neighbours differ by more than all that is uncertain of them, errors of the model included."""
    cov = posterior(problem, found, scene.bit_depth).cov[FIRST + 1 :, FIRST + 1 :]
    variance = np.diag(cov)[1:] + np.diag(cov)[:-1] - 2.0 * np.diag(cov, 1)
    return bool(np.all(np.abs(np.diff(found.p[FIRST + 1 :])) >= SURE * np.sqrt(variance)))


def _refit(problem: Problem, start: Floats, edges: tuple[float, ...], scene: Scene) -> tuple[Problem, Fit]:
    """Fit on the model itself: its tangent is taken anew at each solution."""
    prior = scene.prior(_felt(edges, problem, scene))
    p = start
    for turn in range(ROUNDS):
        tangent = _tangent(scene, edges, p[FIRST:])
        problem = replace(problem, surface=tangent, prior=prior)
        if turn == 0:
            p = follow_envelope(problem, p, np.ones(len(problem.value)), ROUNDS_ENVELOPE)
        found = fit(problem, p)
        p = found.p
    return problem, found
