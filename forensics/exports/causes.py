"""The causes weighed for an episode, as `summary.json` has them under it."""

from __future__ import annotations

from typing import Any

from forensics.episodes.catalogue import CauseView, Episode
from forensics.exports.stamps import number


def causes_content(episode: Episode, detailed: bool) -> dict[str, Any]:
    """Lay out causes and evidence of one episode.

    Parameters
    ----------
    episode : Episode
    detailed : bool
        Whether to give the measurements with what each says of each cause, not only the ranking.

    Returns
    -------
    dict
        "ranked", likeliest first, and "measurements", empty where not detailed.
    """
    return {
        "ranked": [
            {"cause": view.cause, "probability": number(view.probability, 4)} for view in episode.causes
        ],
        "measurements": _measurements(episode.causes) if detailed else [],
    }


def _measurements(views: tuple[CauseView, ...]) -> list[dict[str, Any]]:
    """Give each measurement once, with its likelihood ratio and origin for every cause that it speaks of."""
    rows: dict[str, dict[str, Any]] = {}
    for view in views:
        for said in view.evidence:
            row = rows.setdefault(
                said.name,
                {
                    "name": said.name,
                    "value": number(said.value, 6),
                    "unit": said.unit,
                    "text": said.text,
                    "figure": said.figure,
                    "says": [],
                },
            )
            row["says"].append(
                {"cause": view.cause, "likelihood_ratio": number(said.ratio, 3), "origin": said.origin}
            )
    return list(rows.values())
