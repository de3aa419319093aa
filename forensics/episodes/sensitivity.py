"""How the number of episodes hangs on the rules' own settings."""

from __future__ import annotations

from dataclasses import replace

from forensics.episodes.catalogue import Kind
from forensics.episodes.find import flag_rows, span_rule
from forensics.episodes.material import Material
from forensics.episodes.spans import find_spans

#: Bridge gap and least duration are tried at these multiples.
TRIED = (0.5, 1.0, 2.0)


def sensitivity(material: Material) -> dict[Kind, tuple[int, int]]:
    """Count the episodes with bridge gap and least duration halved and doubled, each on its own.

    Parameters
    ----------
    material : Material

    Returns
    -------
    dict of Kind to (int, int)
        Fewest and most spans found, for kinds that have any.
    """
    flags, _ = flag_rows(material)
    counts: dict[Kind, tuple[int, int]] = {}
    for kind, flagged in flags.items():
        if not flagged.any():
            continue
        rule = span_rule(material, kind)
        numbers = [
            len(find_spans(flagged, material.time, tried)[0])
            for part in TRIED
            for tried in (
                replace(rule, bridge_gap=part * rule.bridge_gap),
                replace(rule, least=max(part * rule.least, material.window(0.0))),
            )
        ]
        if max(numbers):
            counts[kind] = (min(numbers), max(numbers))
    return counts


def sensitivity_sentence(material: Material) -> str:
    """Say how many episodes other settings would give; empty where there are none at all."""
    told = [
        f"{low} {kind.value}" if low == high else f"{low} to {high} {kind.value}"
        for kind, (low, high) in sensitivity(material).items()
    ]
    if not told:
        return ""
    criteria = material.case.criteria
    return (
        f"Sensitivity: with the bridged gap ({criteria.bridge_gap:g} s) or the least duration "
        f"({criteria.minimum_duration:g} s) halved or doubled there would be {', '.join(told)} episodes."
    )
