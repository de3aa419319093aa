"""What is assumed of friction and weights before the readings are heard, and how firmly."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from forensics.friction.parameters import FIRST, HIDDEN

if TYPE_CHECKING:
    from forensics.case import Case
    from forensics.rig.view import RigView
    from forensics.well.model import Well

Floats = NDArray[np.float64]

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

#: Correlation of the two over muds and wells: a mud that rubs more in casing rubs more on rock. The ratios of
#: `BY_MUD`, 1.1 to 1.3 for factors that differ by two, say so (trade values, from memory).
TOGETHER = 0.8

#: One sigma by which the factors of two stretches of one open hole differ (an assumption of ours).
APART = 0.06

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

#: One sigma of what the pumps still add once the shift the log shows was taken out [N].
PUMP_SIGMA = 2.0e3

#: One sigma of the sensor's slow drift from the middle of the run to its ends [N].
SLOW_SIGMA = 1.5e3

#: One sigma of the part of the hookload that sheaves add or take once what is known of them was taken out.
SHEAVE_SIGMA = 0.002

#: Doglegs too short for the survey press the string against the wall by its tension: a side force of this
#: part of the string's weight, and one sigma; what bends of 0.05 to 0.3 deg/30 m rms do that lie between
#: stations (invented paths). Little beside a lateral's drag, a good part of a vertical well's.
HIDDEN_CENTRE = 0.008
HIDDEN_SIGMA = 0.020

#: A soft string on a surveyed path is trusted to this part of its drag, one sigma: what all readings
#: share, and pick-up against slack-off. Survey scatter, friction that varies along the hole and
#: stiffness left out do not show in the residuals.
DRAG_SIGMA = 0.03
SPLIT_SIGMA = 0.015

#: Friction wanders along a hole: what the readings feel of a kind of hole differs from its mean by this part,
#: one sigma. Of casing they feel the stretch where it bends, which is short (invented paths, with friction
#: that wanders by a tenth over some hundred metres).
WANDER_SIGMA = {"cased": 0.05, "open": 0.02}

#: The split averages out over a run that was weighed over more than this in bit depth [m]. One weighed only
#: deep in a lateral parts cased and open hole by nothing but how pulling differs from lowering.
SPLIT_OVER = 450.0

#: A string near or past its buckling load feels friction that differs by this part from what it seems, one
#: sigma of all such readings, and of each by itself: where the helix starts is known no better.
HELIX_SIGMA = 0.10
HELIX_OWN = 0.05

#: A factor counts as determined where its 90 % interval is no wider than this: the kind of mud alone tells
#: that much (usual ranges for one kind of mud and hole are 0.05 to 0.10 wide; trade values, from memory).
WIDEST = 0.10

Z90 = 1.6448536269514722


@dataclass(frozen=True)
class Assumed:
    """A friction factor assumed for a kind of hole, and where the number came from."""

    value: float
    source: str


@dataclass(frozen=True)
class Prior:
    """Joint normal prior of the parameters, in the order of `parameters.names`.

    `centre` has shape (p,), `cov` (p, p); a parameter without variance stays where it is. `given_block` is
    the block weight of the case file [N], None where it is to be learned.
    """

    centre: Floats
    cov: Floats
    cased: Assumed
    open: Assumed
    given_block: float | None

    @cached_property
    def sigma(self) -> Floats:
        """One sigma of each parameter, shape (p,)."""
        return np.sqrt(np.diag(self.cov))

    @cached_property
    def free(self) -> NDArray[np.bool_]:
        """Which parameters can move, shape (p,)."""
        return self.sigma > 0.0

    @cached_property
    def root(self) -> Floats:
        """Lower root of the free parameters' covariance, shape (f, f)."""
        return np.linalg.cholesky(self.cov[np.ix_(self.free, self.free)])

    def held(self) -> Prior:
        """Hold every factor where it is assumed to be."""
        cov = self.cov.copy()
        cov[FIRST:, :] = cov[:, FIRST:] = 0.0
        return replace(self, cov=cov)

    def apart(self, p: Floats) -> Floats:
        """How far parameters lie from the centre, in sigmas of independent directions, shape (f,)."""
        return np.linalg.solve(self.root, (p - self.centre)[self.free])


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


def build_prior(case: Case, well: Well, rig: RigView, bears: tuple[bool, ...], reach: float) -> Prior:
    """Gather the prior from case file, hole table and the rig's in-slips plateau.

    Parameters
    ----------
    case : Case
    well : Well
    rig : RigView
    bears : tuple of bool, one for each section: the cased hole, then the open ones
        Whether any reading feels the friction of that section. Where none does, its factor stays where it
        was assumed to be, whatever the others turn out as.
    reach : float
        Bit depths over which the string was pulled and lowered [m].

    Returns
    -------
    Prior
    """
    cased, open_ = assumed_factor("cased", case, well), assumed_factor("open", case, well)
    block, sigma, given = _block(case, rig)
    shift = rig.pump_shift
    pumps = PUMP_SIGMA if shift is None else (shift.high - shift.low) / (2.0 * Z90)
    split = SPLIT_SIGMA / (1.0 + reach / SPLIT_OVER) ** 0.5
    ours = (HIDDEN_SIGMA, DRAG_SIGMA, split, HELIX_SIGMA)
    rest = np.array([sigma, SHARE_SIGMA, SCALE_SIGMA, DRIFT_SIGMA, pumps, SLOW_SIGMA, SHEAVE_SIGMA, *ours])
    cov = np.zeros((len(rest) + len(bears),) * 2)
    cov[: len(rest), : len(rest)] = np.diag(rest**2)
    if not case.friction.fixed:
        cov[len(rest) :, len(rest) :] = _factor_cov(bears)
    at = np.array([block, 1.0, 1.0, *[0.0] * (len(rest) - 3), cased.value, *[open_.value] * (len(bears) - 1)])
    at[HIDDEN] = HIDDEN_CENTRE
    return Prior(at, cov, cased, open_, given)


def _block(case: Case, rig: RigView) -> tuple[float, float, float | None]:
    """Block weight expected, its sigma, and the case file's where it gives one [N]."""
    seen = rig.block_weight
    given = case.rig.block_weight if case.rig.hookload_includes_block else None
    if given is not None:
        return given, max(BIAS_SIGMA[0], BIAS_SIGMA[1] * given), given
    width = seen.high - seen.low
    sigma = width / (2.0 * Z90) if np.isfinite(width) else BLOCK_SIGMA_UNKNOWN
    sigma = max(sigma, BLOCK_SIGMA_FLOOR if seen.determined else BLOCK_SIGMA_UNKNOWN)
    return (seen.value if np.isfinite(seen.value) else 0.0), sigma, None


def _factor_cov(bears: tuple[bool, ...]) -> Floats:
    """Covariance of the factors: cased and open go together, stretches of one open hole more so."""
    sigma = np.array([FACTOR_SIGMA["cased"], *[FACTOR_SIGMA["open"]] * (len(bears) - 1)])
    alike = 1.0 - 0.5 * (APART / FACTOR_SIGMA["open"]) ** 2
    together = np.full((len(bears), len(bears)), alike)
    together[0, :] = together[:, 0] = TOGETHER
    deaf = ~np.array(bears)
    together[deaf, :] = together[:, deaf] = 0.0
    np.fill_diagonal(together, 1.0)
    return together * np.outer(sigma, sigma)
