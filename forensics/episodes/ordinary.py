"""Weight that ordinary friction kept from the bit, where nothing buckled."""

from __future__ import annotations

import numpy as np

from forensics.episodes import wording
from forensics.episodes.material import NOISE_MULTIPLE, Material
from forensics.estimate import Estimate
from forensics.friction.assumptions import assumed_factor
from forensics.rig.view import Activity

#: Weight lost while sliding is worth a sentence from this [N], or this part of the surface weight.
WORTH = (20.0e3, 0.3)

#: The largest loss is told at this quantile of the slid samples, so that no single sample makes it.
QUANTILE = 0.98

FEWEST = 30

#: A load ratio from which the threshold was near enough to say so.
NEAR = 0.85


def largest_loss(material: Material) -> tuple[int, Estimate] | None:
    """Weight lost while sliding with an unbuckled string, where it was largest.

    Parameters
    ----------
    material : Material

    Returns
    -------
    row : int
        Row of the log.
    lost : Estimate
        [N]; its interval is the drag's, over the calibration's draws of friction.
    None
        Where nothing was slid, or the loss is not worth telling.
    """
    loads, rig = material.loads, material.rig
    lost = rig.wob_surface - loads.bit_load
    slid = (rig.activity == Activity.DRILL_SLIDE) & (loads.state == 0) & np.isfinite(lost) & material.log.used
    rows = np.flatnonzero(slid)
    if len(rows) < FEWEST:
        return None
    order = rows[np.argsort(lost[rows])]
    row = int(order[int(QUANTILE * (len(order) - 1))])
    value = float(lost[row])
    least = max(WORTH[0], WORTH[1] * float(rig.wob_surface[row]), NOISE_MULTIPLE * material.noise("hookload"))
    if value < least:
        return None
    draws = material.calibration.draws
    spread = 0.0
    if len(draws):
        multiple = material.friction_multiple(np.array([row]), draws[:, :-1])[:, 0]
        spread = float(np.std(multiple)) * value
    half = 1.6448536269514722 * spread
    return row, Estimate(value, value - half, value + half, "re-zeroed surface weight")


def ordinary_loss(material: Material, system: str, dragging: bool = False) -> str:
    """Tell of weight lost to plain sliding friction; empty where there was none worth telling.

    Parameters
    ----------
    material : Material
    system : str
        "metric" or "field".
    dragging : bool
        Whether drag beyond the calibrated friction was found too: then not all of it is ordinary.

    Returns
    -------
    str
    """
    found = largest_loss(material)
    if found is None:
        return ""
    row, lost = found
    bit = float(material.bit[row])
    what = "sliding drag," if dragging else "ordinary sliding drag,"
    return (
        f"While sliding, up to {wording.size(lost, 'force', system)} of the weight set down did not reach "
        f"the bit (at {wording.depth(bit, system)}): {what} {_friction(material, row)}."
    )


def near_threshold(material: Material) -> str:
    """Say how near the string came to buckling, or how far past it; empty where it stayed well clear."""
    ratio = material.loads.peak_ratio
    largest = float(np.nanmax(ratio)) if np.isfinite(ratio).any() else 0.0
    if np.asarray(material.loads.state).any():
        onset = material.case.criteria.helical_onset.capitalize()
        return f"the load ratio came up to {largest:.2f}: sinusoidal, short of helical onset by {onset}"
    return f"the load ratio came up to {largest:.2f}, near the threshold" if largest >= NEAR else ""


def _friction(material: Material, row: int) -> str:
    """Name the factor that carries most of the drag, and the assumed one beside it."""
    kind = "open" if material.open_share[row] > 0.5 else "cased"
    factor = next(s.factor for s in material.calibration.sections if s.kind == kind)
    where = "open-hole" if kind == "open" else "cased-hole"
    if not factor.determined:
        return f"the {where} factor assumed to be {factor.value:.2f}"
    assumed = assumed_factor(kind, material.case, material.well)
    return (
        f"the {where} factor at {factor.value:.2f} ({factor.low:.2f} to {factor.high:.2f}; assumed before "
        f"calibration: {assumed.value:.2f})"
    )
