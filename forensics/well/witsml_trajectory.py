"""A survey from a WITSML trajectory: measured depth, inclination and azimuth; the rest is computed anew."""

from __future__ import annotations

import math
from collections import Counter
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from forensics.errors import TableError
from forensics.tables import Table
from forensics.well.trajectory import DEPTH_NOISE, build_trajectory, find_fault
from forensics.well.witsml_objects import Element, read_objects

Floats = NDArray[np.float64]
HEADERS = {"md": "md", "inclination": "incl", "azimuth": "azi"}
# Angles alike to within this are one station written twice [rad].
SAME_ANGLE = math.radians(0.01)
# A TVD off by more than this, and by more than this share of the depth, is another path's [m].
TVD_OFF, TVD_SHARE = 2.0, 0.002


def read_trajectory(file: Path) -> tuple[Table, tuple[str, ...]]:
    """Read the stations of a WITSML trajectory as a survey table.

    Parameters
    ----------
    file : Path
        A document of one trajectory, or of several of which one is marked definitive.

    Returns
    -------
    Table
        md, inclination, azimuth, in order of depth.
    tuple of str
        What was left out or repaired, with counts.

    Raises
    ------
    TableError
        If there is no usable station, or several trajectories and none is definitive.

    References
    ----------
    Energistics, WITSML data schemas 1.3.1.1 and 1.4.1.1, `trajectory` object.
    """
    chosen, remarks = _choose(read_objects(file, "trajectory", "trajectorys"))
    stations = [station for part in chosen for station in part.every("trajectoryStation")]
    if not stations:
        raise chosen[0].error("the trajectory holds no trajectoryStation; export it with its stations")
    kept, md, inc, azi = _usable(stations, file.name, remarks)
    if not kept:
        raise chosen[0].error(f"none of {len(stations)} stations has md, incl and azi; export them")
    order = np.argsort(md, kind="stable")
    if (np.diff(order) < 0).any():
        remarks.append(f"{file.name}: {int((np.diff(order) < 0).sum())} stations stood out of order; sorted")
    order = _without_repeats(order, md, inc, azi, remarks, file.name)
    md, inc, azi = md[order], inc[order], azi[order]
    # "2e-11" and "-1.5e-6" are both the rotary table.
    md[0] = 0.0 if abs(md[0]) < DEPTH_NOISE else md[0]
    lines = tuple(kept[i].line for i in order)
    tvd = np.array([kept[i].number("length", "tvd") for i in order])
    remarks += _hold_against_tvd(file.name, (md, inc, azi), tvd)
    remarks += _north(chosen[0], file.name)
    numbers = {"md": md, "inclination": inc, "azimuth": azi}
    return Table(file, lines, numbers, {}, HEADERS), tuple(remarks)


def _choose(found: list[Element]) -> tuple[list[Element], list[str]]:
    """Take the one trajectory, its parts where it is cut into several, or the one marked definitive."""
    uids = {t.attributes.get("uid", "") for t in found}
    if len(found) == 1 or (len(uids) == 1 and "" not in uids):
        return found, []
    marked = [t for t in found if t.word("definitive").casefold() in {"true", "1"}]
    if len(marked) == 1:
        name = marked[0].word("name") or marked[0].attributes.get("uid", "")
        others = f"{len(found) - 1} others left out"
        return marked, [f"{found[0].file.name}: trajectory {name!r} is marked definitive and taken, {others}"]
    names = ", ".join(repr(t.word("name") or t.attributes.get("uid", "?")) for t in found[:12])
    raise TableError(
        f"holds {len(found)} trajectories ({names}), {len(marked)} of them marked definitive; keep the one "
        "of this hole",
        file=found[0].file,
        line=found[1].line,
    )


def _usable(
    stations: list[Element], name: str, remarks: list[str]
) -> tuple[list[Element], Floats, Floats, Floats]:
    """Leave out stations that were rejected or lack a number, and count them."""
    out: Counter[str] = Counter()
    kept, rows = [], []
    for station in stations:
        row = [station.number("length", "md")]
        row += [station.number("angle", key) for key in ("incl", "azi")]
        if row[1] == 0.0 and math.isnan(row[2]):
            row[2] = 0.0
        if station.word("statusTrajStation").casefold() == "rejected":
            out["marked rejected"] += 1
        elif any(map(math.isnan, row)):
            out["without md, incl or azi"] += 1
        else:
            kept.append(station)
            rows.append(row)
    for why, count in out.items():
        remarks.append(f"{name}: {count} of {len(stations)} stations left out: {why}")
    md, inc, azi = np.array(rows, dtype=np.float64).reshape(-1, 3).T.copy()
    return kept, md, inc, azi


def _without_repeats(
    order: NDArray[np.intp], md: Floats, inc: Floats, azi: Floats, remarks: list[str], name: str
) -> NDArray[np.intp]:
    """Leave out a station told twice; stations that disagree at one depth stay, to be refused."""
    keep = np.ones(len(order), dtype=bool)
    for place in range(1, len(order)):
        a, b = order[place - 1], order[place]
        turn = (azi[b] - azi[a] + math.pi) % (2.0 * math.pi) - math.pi
        same = abs(inc[b] - inc[a]) < SAME_ANGLE and abs(turn) * math.sin(inc[b]) < SAME_ANGLE
        keep[place] = not (md[b] - md[a] < DEPTH_NOISE and same)
    if not keep.all():
        remarks.append(f"{name}: {int((~keep).sum())} stations told twice; one of each was kept")
    return order[keep]


def _hold_against_tvd(name: str, stations: tuple[Floats, Floats, Floats], tvd: Floats) -> list[str]:
    """Say where the file's own vertical depths are not those of its angles."""
    known = np.isfinite(tvd)
    if known.sum() < 3 or find_fault(*stations) is not None:
        return []
    path = build_trajectory(*stations)
    off = (tvd - path.tvd)[known]
    limit = max(TVD_OFF, TVD_SHARE * float(path.md[-1]))
    if (np.abs(tvd[known] - path.md[known]) < 0.01).all() and np.abs(off).max() > limit:
        return [f"{name}: tvd repeats md in every station; it was left aside and computed from the angles"]
    if np.abs(off).max() <= limit:
        return []
    if np.ptp(off) <= limit:
        other = f"{np.median(off):+.1f} m off the path of the angles throughout: it counts from another datum"
        return [f"{name}: tvd stands {other}; depths here are measured from that of md"]
    far = f"{np.abs(off).max():.1f} m off the path that md, incl and azi give"
    return [f"{name}: tvd is up to {far}: check that the stations are of this hole; the angles were used"]


def _north(trajectory: Element, name: str) -> list[str]:
    if "magnetic" in trajectory.word("aziRef").casefold():
        return [f"{name}: azimuths are from magnetic north; taken as they are, as only the shape counts"]
    return []
