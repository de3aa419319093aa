"""How sure a finding is, and on what grounds."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from forensics.episodes.catalogue import Episode, Kind
from forensics.episodes.chances import CERTAIN
from forensics.episodes.material import Material
from forensics.episodes.ordinary import near_threshold
from forensics.replay.witness.agree import check_rows

#: Chance that the rule holds from which a finding is called sure, and likely.
SURE, LIKELY = 0.9, 0.6

#: Friction factors outside this mean that the model is wrong (common practice, no source).
USUAL = (0.10, 0.50)

#: How far a finding's grounds can be trusted: each step costs a grade of confidence.
SOUND, WEAK, WRONG = 0, 1, 2

#: Standard errors from which hookload and witness tell different bit loads.
FAR = 2.0


def _friction_words(material: Material) -> tuple[str, int]:
    """Say what the friction rests on, and how weak that is (see `SOUND`)."""
    sections = [s for s in material.calibration.sections if s.bottom > s.top]
    assumed = [s.kind for s in sections if not s.factor.determined]
    if assumed:
        return f"the {' and '.join(dict.fromkeys(assumed))}-hole friction is assumed, not determined", WEAK
    odd = [s for s in sections if not USUAL[0] <= s.factor.value <= USUAL[1]]
    if odd:
        found = " and ".join(f"{s.kind}-hole {s.factor.value:.2f}" for s in odd)
        said = f"the friction found ({found}) is outside what any mud gives"
        return f"{said}, so string, mud, survey or block weight may be wrong", WRONG
    return "friction was determined from this run's own weights", SOUND


def grounds(material: Material, episode: Episode | None) -> tuple[str, int]:
    """Say what a finding rests on, and how far that can be trusted.

    Parameters
    ----------
    material : Material
    episode : Episode or None
        The gravest, where there is one.

    Returns
    -------
    str, int
        In words; `SOUND`, `WEAK` (no more than moderate confidence) or `WRONG` (low).
    """
    words, level = _friction_words(material)
    if material.log.get("rpm") is None and material.log.get("torque") is None:
        words, level = f"{words}; rotation was not logged and is guessed", max(level, WEAK)
        if (
            episode is not None and episode.kind is Kind.LOCKUP
        ):  # its rule asks for a string that doesn't turn
            level = WRONG
    if material.doubts:
        words += "; the log contradicts the case's survey, string or mud (see the data account)"
        level = WRONG
    witness = material.loads.witness
    if witness is not None and episode is not None:
        check = check_rows(witness, episode.first, episode.last, material.time)
        if check is not None and abs(check.sigmas) > FAR:
            words += "; the bit's own witness tells another bit load than the hookload"
            level = max(level, WEAK)
        elif check is not None:
            words += "; the bit's own witness agrees with the bit load"
    return words, level


def confidence(material: Material, main: Sequence[Episode], cleared: bool = False) -> str:
    """Grade the finding, and say on what.

    Parameters
    ----------
    material : Material
    main : sequence of Episode
        Those that matter, the gravest first.
    cleared : bool
        Whether the engineer rejected episodes: where none is left, the finding rests on that too.

    Returns
    -------
    str
        "high", "moderate" or "low", and why.
    """
    if not material.calibration.readings and not material.calibration.block_weight.determined:
        return (
            "low: the log shows neither a steady off-bottom weight nor the block's weight, so friction and "
            "block weight are assumed"
        )
    words, level = grounds(material, main[0] if main else None)
    if not main:
        near = "it rests on the engineer's verdict" if cleared else near_threshold(material)
        grade = ("high", "moderate", "low")[max(level, WEAK) if near else level]
        return f"{grade}: {words}; {near}" if near else f"{grade}: {words}"
    chance = main[0].probability
    if not np.isfinite(chance):
        return f"low: the spread over friction draws was not reckoned; {words}"
    least = SOUND if chance >= SURE else WEAK if chance >= LIKELY else WRONG
    grade = ("high", "moderate", "low")[max(level, least)]
    share = "every draw" if chance >= CERTAIN else f"{100.0 * chance:.0f} % of the draws"
    return f"{grade}: its rule holds in {share} of friction, weight, survey and hole; {words}"
