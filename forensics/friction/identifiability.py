"""What the readings can and can't tell apart."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.friction.assumptions import KINDS, Prior

Floats = NDArray[np.float64]

#: A factor counts as determined where the readings cut its prior's width to this part or less.
DETERMINED = 0.5

#: Two parameters whose errors are tied more closely than this hide behind each other.
TIED = 0.8

NAMES = (
    "block weight",
    "pipe above the rotary",
    "weight per length",
    "cased factor",
    "open factor",
    "drift of weight",
)


@dataclass(frozen=True)
class Verdict:
    """What to hold at its assumed value, and why, in sentences.

    `held` has shape (6,): True for factors the readings can't tell.
    """

    held: NDArray[np.bool_]
    sentences: tuple[str, ...]


def judge(cov: Floats, prior: Prior, bears: tuple[bool, bool]) -> Verdict:
    """Decide which friction factors the readings determine.

    A direction of the parameters that the readings leave as wide as the prior is open. The factor with
    the widest part in it is held at its assumed value; the other is judged again given that.

    Parameters
    ----------
    cov : ndarray, shape (6, 6)
        Posterior covariance of (block, share, scale, cased, open, drift).
    prior : Prior
    bears : tuple of bool
        Whether any reading bears on the cased, and on the open, factor at all.

    Returns
    -------
    Verdict
    """
    held = np.zeros(len(prior.sigma), dtype=bool)
    sentences: list[str] = []
    current = cov.copy()
    for _ in KINDS:
        ratio = np.sqrt(np.diag(current)) / prior.sigma
        ratio[held] = 0.0
        worst = 3 + int(np.argmax(ratio[3:5]))
        if ratio[worst] <= DETERMINED:
            break
        sentences.append(_why(worst, cov, bears[worst - 3], prior))
        held[worst] = True
        lever = current[:, worst] / current[worst, worst]
        current = current - np.outer(lever, current[worst, :])
    return Verdict(held, tuple(sentences))


def _why(k: int, cov: Floats, bears: bool, prior: Prior) -> str:
    kind = KINDS[k - 3]
    assumed = prior.centre[k]
    kept = f"the assumed {assumed:.2f} was kept"
    if not bears:
        where = "below the shoe" if kind == "open" else "that feels the cased hole"
        none = f"No pick-up or slack-off reading with pipe {where}"
        return f"{none}: the {kind}-hole factor is not known, {kept}."
    spread = np.sqrt(np.diag(cov))
    tied = np.abs(cov[k]) / np.maximum(spread * spread[k], 1e-300)
    tied[k] = 0.0
    other = int(np.argmax(tied))
    if tied[other] > TIED:
        return (
            f"The {kind}-hole factor hides behind the {NAMES[other]}: the readings fix a combination of the "
            f"two only; {kept} and the rest follows from it."
        )
    return f"The readings scatter too much, or are too few, to tell the {kind}-hole factor: {kept}."
