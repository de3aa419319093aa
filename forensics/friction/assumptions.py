"""What is assumed of friction and weights before the readings are heard, and how firmly."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from forensics.case import Case
    from forensics.rig.view import RigView
    from forensics.well.model import Well

KINDS = ("cased", "open")

#: Middle of the usual ranges for water- and oil-base muds (trade values, from memory).
DEFAULT_FACTOR = {"cased": 0.20, "open": 0.28}

#: Usual factors by kind of mud, cased and open; the first whose words the case's `mud_system` holds counts
#: (trade values, from memory).
BY_MUD: tuple[tuple[tuple[str, ...], dict[str, float]], ...] = (
    (("synthetic", "sbm"), {"cased": 0.15, "open": 0.20}),
    (("oil", "obm", "diesel", "invert"), {"cased": 0.18, "open": 0.21}),
    (("polymer",), {"cased": 0.19, "open": 0.25}),
    (("brine", "completion fluid"), {"cased": 0.33, "open": 0.35}),
    (("water", "wbm", "gel", "bentonite"), {"cased": 0.25, "open": 0.32}),
)

#: One sigma of the weak prior: the spread of usual factors over muds (trade values, from memory).
FACTOR_SIGMA = {"cased": 0.08, "open": 0.10}

#: One sigma of the string's weight per length: tolerance, wear and mud density together.
SCALE_SIGMA = 0.02

#: One sigma of how that scale drifts from the middle of the readings' depths to their ends: a component,
#: the survey's vertical depth or the mud of the moment is a little off.
DRIFT_SIGMA = 0.003

#: One sigma of the share of the pipe above the rotary that the sensor carries.
SHARE_SIGMA = 0.3

#: A hookload sensor's zero is trusted no better than this [N], whatever the plateau's scatter says.
BLOCK_SIGMA_FLOOR = 1.0e3

#: One sigma of the block weight where nothing was seen of it [N].
BLOCK_SIGMA_UNKNOWN = 50.0e3

#: One sigma of a sensor's constant bias where the block weight is given: this much, or a part of it [N, -].
BIAS_SIGMA = (10.0e3, 0.03)

Z90 = 1.6448536269514722

LOWEST = np.array([-np.inf, 0.0, 0.9, 0.01, 0.01, -0.02])
HIGHEST = np.array([np.inf, 1.2, 1.1, 0.6, 0.6, 0.02])


@dataclass(frozen=True)
class Assumed:
    """A friction factor assumed for a kind of hole, and where the number came from."""

    value: float
    source: str


@dataclass(frozen=True)
class Prior:
    """Prior centres and sigmas of (block or block + bias [N], share, scale, cased, open, drift of the scale).

    `given_block` is the block weight of the case file [N], None where it is to be learned.
    """

    centre: NDArray[np.float64]
    sigma: NDArray[np.float64]
    cased: Assumed
    open: Assumed
    given_block: float | None


def assumed_factor(kind: str, case: Case, well: Well) -> Assumed:
    """Find the factor to start from: hole table, case file, kind of mud, the program's default.

    Parameters
    ----------
    kind : str
        "cased" or "open".
    case : Case
    well : Well
        Its hole table may carry a friction column.

    Returns
    -------
    Assumed
    """
    hole = well.hole
    rows = np.array([k == kind for k in hole.kind], dtype=bool)
    friction = np.asarray(hole.friction, dtype=float)
    rows &= np.isfinite(friction)
    if rows.any():
        length = np.maximum((np.asarray(hole.bottom) - np.asarray(hole.top))[rows], 1e-6)
        return Assumed(float(np.average(friction[rows], weights=length)), "hole table")
    stated = getattr(case.friction, kind)
    if stated is not None:
        return Assumed(float(stated), "case file")
    mud = (case.mud_system or "").casefold()
    for words, factors in BY_MUD:
        if any(word in mud for word in words):
            return Assumed(factors[kind], f"usual in {case.mud_system}")
    return Assumed(DEFAULT_FACTOR[kind], "the program's default")


def build_prior(case: Case, well: Well, rig: RigView) -> Prior:
    """Gather the prior from case file, hole table and the rig's in-slips plateau.

    Parameters
    ----------
    case : Case
    well : Well
    rig : RigView

    Returns
    -------
    Prior
    """
    cased, open_ = assumed_factor("cased", case, well), assumed_factor("open", case, well)
    seen = rig.block_weight
    given = case.rig.block_weight if case.rig.hookload_includes_block else None
    block = seen.value if np.isfinite(seen.value) else 0.0
    if given is not None:
        block = given
        sigma = max(BIAS_SIGMA[0], BIAS_SIGMA[1] * given)
    else:
        width = seen.high - seen.low
        sigma = width / (2.0 * Z90) if np.isfinite(width) else BLOCK_SIGMA_UNKNOWN
        sigma = max(sigma, BLOCK_SIGMA_FLOOR if seen.determined else BLOCK_SIGMA_UNKNOWN)
    return Prior(
        centre=np.array([block, 1.0, 1.0, cased.value, open_.value, 0.0]),
        sigma=np.array(
            [sigma, SHARE_SIGMA, SCALE_SIGMA, FACTOR_SIGMA["cased"], FACTOR_SIGMA["open"], DRIFT_SIGMA]
        ),
        cased=cased,
        open=open_,
        given_block=given,
    )
