"""What an episode did to the pipe, as `summary.json` has it under the episode."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from forensics.exports.stamps import number

if TYPE_CHECKING:
    from forensics.episodes.pipe import PartToll, PipeToll

STATES = ("none", "sinusoidal", "helical")


def pipe_content(toll: PipeToll | None) -> dict[str, Any] | None:
    """Lay out the toll of one episode.

    Parameters
    ----------
    toll : PipeToll or None
        None where the episode has none: it pressed nothing.

    Returns
    -------
    dict or None
        Stresses [MPa], forces [kN], moments [kN.m], depths [m]; None where there is no number.
    """
    if toll is None:
        return None
    turned = toll.turned
    return {
        "torque_from": toll.torque_from,
        "pressure_from": toll.pressure_from,
        "parts": [_part(part) for part in toll.parts],
        "turned_while_buckled": turned
        and {
            "revolutions": number(turned.revolutions, 1),
            "fatigue_rank": turned.rank,
            "fatigue_share_of_greatest": number(turned.share, 4),
        },
    }


def slack_off_content(toll: PipeToll | None, surface_weight: float) -> dict[str, float | None] | None:
    """Lay out what slacking off more would have brought to the lower end at the peak of an episode.

    Parameters
    ----------
    toll : PipeToll or None
        None where the episode has none.
    surface_weight : float
        Weight set down at surface at that moment [N].

    Returns
    -------
    dict or None
        Forces [kN], length [m]; None where the string was not sliding.
    """
    if toll is None or toll.slack_off is None:
        return None
    asked = toll.slack_off
    return {
        "more_kN": number(asked.more / 1e3, 2),
        "would_arrive_kN": number(asked.arrives / 1e3, 2),
        "most_that_arrives_kN": number(asked.limit / 1e3, 2),
        "nothing_more_from_surface_weight_kN": number((surface_weight + asked.spent) / 1e3, 2),
        "closed_form_most_kN": number(asked.quick.limit / 1e3, 2) if asked.quick else None,
        "closed_form_length_m": number(asked.quick.length, 1) if asked.quick else None,
    }


def _part(part: PartToll) -> dict[str, Any]:
    strength = part.component.yield_strength
    return {
        "component": part.component.name,
        "buckled": part.buckled,
        "md_m": number(part.md, 1),
        "state": STATES[part.state],
        "bending_MPa": number(part.bending / 1e6, 2),
        "stress_MPa": number(part.stress / 1e6, 2),
        "yield_MPa": None if strength is None else number(strength / 1e6, 1),
        "yield_use": number(part.use, 4),
        "rated_use": number(part.rated_use, 4),
        "tension_margin_kN": number(part.tension_margin / 1e3, 1),
        "torque_margin_kNm": number(part.torque_margin / 1e3, 2),
    }
