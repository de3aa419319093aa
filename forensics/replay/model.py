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


def factors(calibration: Calibration) -> tuple[float, float]:
    """Cased and open-hole friction factors; the default where the hole has no such stretch."""
    found = {section.kind: section.factor.value for section in calibration.sections}
    told = DEFAULT_FACTOR | found
    return told["cased"], told["open"]
