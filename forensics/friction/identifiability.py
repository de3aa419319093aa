"""What the readings can and can't tell apart, and how what they can't trades off."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.friction.assumptions import WIDEST, Z90, Prior
from forensics.friction.parameters import BLOCK, FIRST, REST, SCALE, names
from forensics.friction.result import OpenDirection

Floats = NDArray[np.float64]

#: A direction of the parameters is open where the readings know less of it than the prior does.
LEAST_KNOWN = 1.0

#: The readings tell of friction where they halve the sigma of some combination of factors; of its square:
LEAST_LEARNED = 0.25

#: A parameter takes part in a direction that makes up this share of its own variance or more.
TAKES_PART = 0.3

#: What a reader thinks in, by unit: a factor of 0.01, 1 kN, 1 % of a weight.
STEPS = {"N": (1e3, "1 kN", 1e-3, "kN"), "-": (0.01, "0.01", 1.0, "")}


@dataclass(frozen=True)
class Verdict:
    """Whether each factor is determined, shape (sections,), the open directions, and sentences.

    `told` is whether the readings tell anything of the factors, be it only a combination of them.
    """

    told: bool
    determined: NDArray[np.bool_]
    directions: tuple[OpenDirection, ...]
    sentences: tuple[str, ...]


def judge(prior: Prior, cov: Floats, bears: tuple[bool, ...]) -> Verdict:
    """Decide which friction factors the readings determine, and name what they leave open.

    Parameters
    ----------
    prior : Prior
    cov : ndarray, shape (p, p)
        Posterior covariance of the parameters.
    bears : tuple of bool
        Whether any reading feels each section's friction at all.

    Returns
    -------
    Verdict
    """
    labels = names(len(bears))
    sd = np.sqrt(np.diag(cov))
    width = 2.0 * Z90 * sd[FIRST:]
    determined = (width <= WIDEST) & np.array(bears)
    directions = open_directions(prior, cov, labels)
    left = np.linalg.eigvalsh(_left(prior, cov, np.arange(FIRST, len(labels)))[0])
    told = bool(left.min() <= LEAST_LEARNED)
    determined &= told
    said = (
        _why(FIRST + k, labels, prior, (bears[k] and told, bears[k], directions))
        for k in np.flatnonzero(~determined).tolist()
    )
    return Verdict(told, determined, directions, tuple(said))


def open_directions(prior: Prior, cov: Floats, labels: tuple[str, ...]) -> tuple[OpenDirection, ...]:
    """Directions of block weight, weight per length and factors that the readings leave mostly open.

    Eigenvectors of the posterior against the prior, everything else averaged out: an eigenvalue above a half
    means that the readings know less of that direction than was assumed beforehand.

    Parameters
    ----------
    prior : Prior
    cov : ndarray, shape (p, p)
        Posterior covariance.
    labels : tuple of str, length p

    Returns
    -------
    tuple of OpenDirection
        The least known first; those that hold neither a factor nor the block weight are left out.
    """
    wanted = np.array([BLOCK, SCALE, *range(FIRST, len(labels))])
    wanted = wanted[prior.free[wanted]]
    if not len(wanted):
        return ()
    whitened, root = _left(prior, cov, wanted)
    left, vectors = np.linalg.eigh(whitened)
    left = np.maximum(left, 1e-12)
    spread = root @ vectors * np.sqrt(left)  # columns: one sigma along each direction
    share = spread**2 / (spread**2).sum(axis=1, keepdims=True)
    made = []
    for d in np.argsort(-left):
        known = max(0.0, 1.0 / float(left[d]) - 1.0)
        part = np.flatnonzero(share[:, d] >= TAKES_PART)
        kept = [int(wanted[i]) for i in part[np.argsort(-share[part, d])]]
        if known >= LEAST_KNOWN or not any(i >= FIRST or i == BLOCK for i in kept):
            continue
        moves = {i: float(spread[np.flatnonzero(wanted == i)[0], d]) for i in kept}
        named = {labels[i]: move for i, move in moves.items()}
        made.append(OpenDirection(named, known, _trade(moves, labels)))
    return tuple(made)


def _left(prior: Prior, cov: Floats, wanted: NDArray[np.int64]) -> tuple[Floats, Floats]:
    """Set the posterior covariance of some parameters against their prior's; with the prior's root."""
    root = np.linalg.cholesky(prior.cov[np.ix_(wanted, wanted)])
    halfway = np.linalg.solve(root, cov[np.ix_(wanted, wanted)])
    return np.linalg.solve(root, halfway.T), root


def _trade(moves: dict[int, float], labels: tuple[str, ...]) -> str:
    """Say in words how the parameters of a direction trade off."""
    first = next((i for i in moves if i >= FIRST), next(iter(moves)))
    others = [i for i in moves if i != first]
    if not others:
        return f"The {_hole(labels[first])}: the readings hardly notice when it alone changes."
    step, said, _, _ = STEPS[_unit(first)]
    told = []
    for other in others:
        slope = moves[other] / moves[first] * step
        sense = "more" if slope > 0.0 else "less"
        told.append(f"{_amount(abs(slope), other)} {sense} of the {_hole(labels[other])}")
    return (
        f"The {_hole(labels[first])} trades off against the "
        f"{' and the '.join(_hole(labels[i]) for i in others)}: {said} more of it with {' and '.join(told)} "
        "leaves the readings as they are."
    )


def _unit(index: int) -> str:
    return REST[index][1] if index < FIRST else "-"


def _amount(value: float, index: int) -> str:
    _, _, scale, unit = STEPS[_unit(index)]
    return f"{value * scale:.2g} {unit}".strip()


def _why(
    k: int, labels: tuple[str, ...], prior: Prior, found: tuple[bool, bool, tuple[OpenDirection, ...]]
) -> str:
    """Say why a factor is not determined, and what was done about it."""
    told, bears, directions = found
    label, assumed = labels[k], prior.centre[k]
    if not bears:
        where = "that feels the cased hole" if k == FIRST else "below the shoe"
        if k > FIRST + 1:
            where = "that deep"
        none = f"No pick-up or slack-off reading with pipe {where}"
        return f"{none}: the {_hole(label)} is not known, the assumed {assumed:.2f} was kept."
    few = f"The readings scatter too much, or are too few, to tell the {_hole(label)}"
    if not told:
        return f"{few}: the assumed {assumed:.2f} was kept."
    tied = next((d for d in directions if label in d.moves and len(d.moves) > 1), None)
    if tied is not None:
        other = next(name for name in tied.moves if name != label)
        return (
            f"The {_hole(label)} hides behind the {_hole(other)}: the readings fix a combination of the two "
            f"only; it leans on the assumed {assumed:.2f}, moved along with what the others show."
        )
    return f"{few}: it leans on the assumed {assumed:.2f}, and its interval says how far it could be."


def _hole(label: str) -> str:
    return label.replace("cased factor", "cased-hole factor").replace("open factor", "open-hole factor")
