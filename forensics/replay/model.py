"""The well, string and criteria as the replay's kernels take them."""

from __future__ import annotations

from forensics.case import Case
from forensics.friction.assumptions import DEFAULT_FACTOR
from forensics.friction.result import Calibration
from forensics.mechanics.offbottom import OffBottomModel
from forensics.well.model import Well


def build_model(well: Well, case: Case, depth: float, block_zero: float = 0.0) -> OffBottomModel:
    """Tabulate the well for bits down to `depth` [m]; `block_zero` as in `OffBottomModel`."""
    return OffBottomModel(well, depth, case.criteria, block_zero)


def factors(calibration: Calibration) -> tuple[float, ...]:
    """Friction factors of the cased hole and of each open section; the default where the hole has none."""
    sections = calibration.sections
    found = {kind: [s.factor.value for s in sections if s.kind == kind] for kind in DEFAULT_FACTOR}
    cased, opened = (found[kind] or [DEFAULT_FACTOR[kind]] for kind in ("cased", "open"))
    return (cased[0], *opened)
