"""`episodes.csv`: one row an episode, in the contract's names and units."""

from __future__ import annotations

import csv
import datetime as dt
from collections.abc import Mapping
from pathlib import Path

from forensics.episodes.catalogue import Episode, Kind, Travel
from forensics.estimate import Estimate
from forensics.exports.stamps import number, stamp
from forensics.exports.text import inert
from forensics.exports.verdicts import verdict_cells
from forensics.findings import Findings
from forensics.logs.zone import tzinfo_of

Cell = str | float | None

ESTIMATES: Mapping[str, tuple[str, float, int]] = {
    "peak_load_ratio": ("peak_load_ratio", 1.0, 4),
    "peak_compression_kN": ("peak_compression", 1e3, 3),
    "lost_weight_kN": ("lost_weight", 1e3, 3),
    "lost_to_buckling_kN": ("lost_to_buckling", 1e3, 3),
}
# What the hook carries, or the top drive turns against, beyond the model at the peak; by the episode's kind.
RESIDUALS: Mapping[str, Kind] = {"peak_drag_residual_kN": Kind.DRAG, "peak_torque_residual_kNm": Kind.TORQUE}
ENDS = ("low", "high")
# What came to the columns later with its interval, and what stood there without one.
LATER = ("bit_load_kN", "free_length_m")
# Slope of hookload against block travel in the move that led into the episode, and how much of it was lost.
TRAVEL = (
    "stiffness_kN_per_m",
    "stiffness_error_kN_per_m",
    "softening",
    "softening_error",
    "elastic_length_m",
)
BOUNDED = ("top_md_m", "bottom_md_m", "probability")
COLUMNS = (
    "id",
    "start",
    "end",
    "duration_s",
    "kind",
    "state",
    "activity",
    "top_md_m",
    "bottom_md_m",
    "peak_md_m",
    *ESTIMATES,
    "probability",
    "consequence",
    "family",
    "cause",
    "note",
    *(f"{name}_{end}" for name in ESTIMATES for end in ENDS),
    "critical_load_kN",
    "onsets",
    "onsets_beyond",
    *(f"{name}{end}" for name in (*RESIDUALS, *LATER) for end in ("", *(f"_{end}" for end in ENDS))),
    *(f"{name}_{end}" for name in BOUNDED for end in ENDS),
    *TRAVEL,
    # The engineer's verdict, and the cause that the program had named where the engineer's took its place.
    "verdict",
    "verdict_note",
    "program_cause",
)


def episode_row(episode: Episode, tz: dt.tzinfo) -> dict[str, Cell]:
    """Lay out one episode under the contract's names.

    Parameters
    ----------
    episode : Episode
        The episode, in SI.
    tz : datetime.tzinfo
        Zone to show times in.

    Returns
    -------
    dict of str to str, float or None
        One cell for each of `COLUMNS`, in their order; None where there is no number. Forces [kN], depths
        [m], duration [s].
    """
    row: dict[str, Cell] = {
        "id": episode.id,
        "start": stamp(episode.start, tz),
        "end": stamp(episode.end, tz),
        "duration_s": number(episode.duration, 3),
        "kind": episode.kind.value,
        "state": episode.state.value,
        "activity": episode.activity,
        "top_md_m": number(episode.top_md, 2),
        "bottom_md_m": number(episode.bottom_md, 2),
        "peak_md_m": number(episode.peak_md, 2),
        "probability": number(episode.probability, 4),
        "consequence": episode.consequence.value,
        "family": episode.family,
        "cause": episode.cause,
        "note": episode.note,
        "critical_load_kN": number(episode.critical_load / 1e3, 3),
        "onsets": episode.onsets,
        "onsets_beyond": episode.onsets_beyond,
        **verdict_cells(episode),
    }
    for name, (attribute, scale, decimals) in ESTIMATES.items():
        row |= _cells(name, getattr(episode, attribute), scale, decimals)
    for name, kind in RESIDUALS.items():
        row |= _cells(name, episode.peak_residual if episode.kind is kind else None, 1e3, 3)
    row |= _cells("bit_load_kN", episode.bit_load, 1e3, 3)
    travel = episode.travel
    row |= _cells("free_length_m", None if travel is None else travel.free_length, 1.0, 1)
    row |= dict.fromkeys(TRAVEL) if travel is None else _slope(travel)
    unknown = (float("nan"), float("nan"))
    ends = [unknown if end is None else (end.low, end.high) for end in episode.ends or (None, None)]
    for name, bounds, decimals in zip(BOUNDED, (*ends, episode.probability_range), (2, 2, 4), strict=True):
        row |= {f"{name}_{end}": number(value, decimals) for end, value in zip(ENDS, bounds, strict=True)}
    return {name: row[name] for name in COLUMNS}


def _slope(travel: Travel) -> dict[str, Cell]:
    """Lay out the slope of a move."""
    values = (
        (travel.stiffness / 1e3, 2), (travel.stiffness_sigma / 1e3, 2), (travel.softening, 3),
        (travel.softening_sigma, 3), (travel.elastic_length, 1),
    )  # fmt: skip
    return {name: number(value, places) for name, (value, places) in zip(TRAVEL, values, strict=True)}


def _cells(name: str, estimate: Estimate | None, scale: float, decimals: int) -> dict[str, Cell]:
    """Value and interval of an estimate; all empty where there is none."""
    if estimate is None:
        return dict.fromkeys((name, f"{name}_low", f"{name}_high"))
    return {
        name: number(estimate.value / scale, decimals),
        f"{name}_low": number(estimate.low / scale, decimals),
        f"{name}_high": number(estimate.high / scale, decimals),
    }


def episode_rows(findings: Findings) -> list[dict[str, Cell]]:
    """Lay out all episodes of a run, in the order of the catalogue.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.

    Returns
    -------
    list of dict
        One `episode_row` for each episode.
    """
    tz = tzinfo_of(findings.log.timezone)
    return [episode_row(episode, tz) for episode in findings.episodes]


def write_episodes(findings: Findings, path: Path) -> None:
    """Write `episodes.csv`: UTF-8, comma, a header row, an empty cell where there is no number.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    path : Path
        The file to write.
    """
    with path.open("w", encoding="utf-8", newline="") as file:
        writer = csv.DictWriter(file, COLUMNS, lineterminator="\n")
        writer.writeheader()
        writer.writerows({name: inert(cell) for name, cell in row.items()} for row in episode_rows(findings))
