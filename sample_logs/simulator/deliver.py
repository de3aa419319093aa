"""Write a case folder as a rig and an office would hand it over."""

from __future__ import annotations

import gzip
import json
from datetime import datetime, timedelta
from pathlib import Path

import numpy as np
import pandas as pd

# name, unit, scale (shown = SI / scale), decimals
METRIC = {
    "bit_depth": ("DBTM", "m", 1.0, 2), "hole_depth": ("DMEA", "m", 1.0, 2),
    "block_position": ("BPOS", "m", 1.0, 2), "hookload": ("HKLA", "kN", 1e3, 1),
    "wob": ("WOBA", "kN", 1e3, 1), "torque": ("TQA", "kN.m", 1e3, 2), "rpm": ("RPMA", "rpm", 1.0, 0),
    "standpipe_pressure": ("SPPA", "bar", 1e5, 1), "flow_in": ("MFIA", "L/min", 1 / 6e4, 0),
    "rop": ("ROPA", "m/h", 1 / 3600.0, 1), "differential_pressure": ("DIFP", "bar", 1e5, 1),
    "mud_density": ("MDIA", "g/cm3", 1e3, 3), "flow_out": ("MFOA", "L/min", 1 / 6e4, 0),
    "toolface": ("GTF", "deg", 0.017453293, 0),
}  # fmt: skip
FIELD = {
    "bit_depth": ("BITD", "ft", 0.3048, 2), "hole_depth": ("HDTH", "ft", 0.3048, 2),
    "block_position": ("BHT", "ft", 0.3048, 2), "hookload": ("HKLD", "klbf", 4448.2216, 2),
    "wob": ("SWOB", "klbf", 4448.2216, 2), "torque": ("STOR", "kft.lbf", 1355.81795, 2),
    "rpm": ("SRPM", "rpm", 1.0, 0), "standpipe_pressure": ("SPPA", "psi", 6894.757, 0),
    "flow_in": ("TFLO", "gpm", 6.30902e-5, 1), "rop": ("ROP", "ft/h", 0.3048 / 3600.0, 1),
    "differential_pressure": ("DIFF", "psi", 6894.757, 0), "mud_density": ("MDI", "ppg", 119.826427, 2),
    "flow_out": ("FLOWOUT", "gpm", 6.30902e-5, 1), "toolface": ("GTF", "deg", 0.017453293, 0),
}  # fmt: skip


def stamps(start: str, seconds: pd.Series) -> list[datetime]:
    """Clock times of the rows."""
    first = datetime.fromisoformat(start)
    return [first + timedelta(seconds=float(s)) for s in seconds]


def converted(rows: pd.DataFrame, names: dict, channels: list[str]) -> pd.DataFrame:
    """Columns in the units and names of the delivery."""
    out = {}
    for channel in channels:
        name, _, scale, decimals = names[channel]
        out[name] = (rows[channel] / scale).round(decimals) + 0.0  # no minus nought
    return pd.DataFrame(out)


def write_csv(path: Path, rows: pd.DataFrame, settings: dict, layout: dict) -> None:
    """One CSV log; the layout names separators, nulls and how time and units are written."""
    names = FIELD if layout.get("units") == "field" else METRIC
    channels = layout.get("channels", [c for c in names if c in rows])
    body = converted(rows, names, channels)
    clock = stamps(settings["start"], rows["time"] + layout.get("clock_shift", 0.0))
    body.insert(0, "TIME", [c.strftime(layout.get("stamp", "%Y-%m-%dT%H:%M:%SZ")) for c in clock])
    sep, mark = layout.get("separator", ","), layout.get("decimal", ".")
    null = layout.get("null", "-999.25").replace(".", mark)
    units = ["", *(names[c][1] for c in channels)]
    if layout.get("unit_row", False):
        head = sep.join(body.columns) + "\n" + sep.join(units) + "\n"
    else:
        titles = [f"{c} [{u}]" if u else c for c, u in zip(body.columns, units, strict=True)]
        head = sep.join(titles) + "\n"
    text = head + body.to_csv(
        sep=sep, decimal=mark, na_rep=null, index=False, header=False, lineterminator="\n"
    )
    data = text.encode(layout.get("encoding", "utf-8"))
    path.write_bytes(gzip.compress(data, mtime=0) if path.suffix == ".gz" else data)


def write_las(path: Path, rows: pd.DataFrame, settings: dict, layout: dict) -> None:
    """One LAS 2.0 log in elapsed seconds, with its start in the header."""
    names = FIELD if layout.get("units", "field") == "field" else METRIC
    channels = layout.get("channels", [c for c in names if c in rows])
    body = converted(rows, names, channels)
    first = stamps(settings["start"], rows["time"])[0]
    elapsed = rows["time"].to_numpy() - rows["time"].iloc[0]
    lines = [
        "~Version information", " VERS.   2.0 : CWLS LOG ASCII STANDARD - VERSION 2.0",
        " WRAP.    NO : One line per step",
        "~Well information", f" STRT.S  {0.0:.1f} : Start", f" STOP.S  {elapsed[-1]:.1f} : Stop",
        " STEP.S  0 : Irregular", " NULL.  -999.25 : Null value", " COMP.   INVENTED OPERATOR : Company",
        f" WELL.   {settings['case']['well'].upper()} : Well", f" DATE.   {first:%d-%b-%Y} : Date",
        "~Parameter information", f" STIM.   {first:%Y-%m-%dT%H:%M:%SZ} : Start time, UTC",
        "~Curve information", " ETIM.S   : Elapsed time",
        *(f" {names[c][0]}.{names[c][1]}   : {c.replace('_', ' ').capitalize()}" for c in channels),
        "~A  ETIM " + " ".join(names[c][0] for c in channels),
    ]  # fmt: skip
    body.insert(0, "ETIM", elapsed)
    text = body.to_csv(sep=" ", na_rep="-999.25", index=False, header=False, lineterminator="\n")
    path.write_bytes(("\n".join(lines) + "\n" + text).encode())


def write_tables(folder: Path, survey: dict, settings: dict, field: bool) -> None:
    """Survey, hole and string tables."""
    foot, inch = 0.3048, 0.0254
    d, du = (foot, "ft") if field else (1.0, "m")
    pd.DataFrame(
        {
            f"md [{du}]": np.round(survey["md"] / d, 2),
            "inclination [deg]": np.round(survey["inclination"], 2),
            "azimuth [deg]": np.round(survey["azimuth"], 2),
        }
    ).to_csv(folder / "survey.csv", index=False, lineterminator="\n")
    rows, top = [], 0.0
    for row in settings["well"]["holes"]:
        bottom = min(row["bottom"], settings["well"]["table_end"])
        rows.append((top / d, bottom / d, round(row["diameter"] / inch, 4), row["kind"], row["name"]))
        top = bottom
    head = [f"top [{du}]", f"bottom [{du}]", "diameter [in]", "kind", "name"]
    pd.DataFrame(rows, columns=head).round(2 if field else 3).to_csv(
        folder / "hole.csv", index=False, lineterminator="\n"
    )
    weight, wu = (1.488164, "lb/ft") if field else (1.0, "kg/m")
    parts = []
    for c in settings["string"]["components"]:
        joint = round(c["tool_joint_od"] / inch, 4) if "tool_joint_od" in c else None
        tensile = round(c["tensile_kN"] / (4.4482216 if field else 1.0), 0) if "tensile_kN" in c else None
        parts.append(
            (
                c["name"], c["kind"], round(c["length"] / d, 2), round(c["od"] / inch, 4),
                round(c["id"] / inch, 4), round(c["weight"] / weight, 2), joint, tensile,
            )
        )  # fmt: skip
    head = [
        "name", "kind", f"length [{du}]", "od [in]", "id [in]", f"weight [{wu}]", "tool_joint_od [in]",
        f"tensile_rating [{'klbf' if field else 'kN'}]",
    ]  # fmt: skip
    table = pd.DataFrame(parts, columns=head)
    table.dropna(axis=1, how="all").to_csv(folder / "string.csv", index=False, lineterminator="\n")


def write_case(folder: Path, settings: dict, logs: list[str], field: bool) -> None:
    """Write the case file: what the office knows, not what was planted."""
    case, rig = settings["case"], settings["rig"]
    density = settings["fluid"]["density"]
    shown = f"{density / 119.826427:.2f} ppg" if field else f"{density / 1000.0:.3f} g/cm3"
    lines = [
        "format = 1", "", "[case]", f'id = "{case["id"]}"', f'title = "{case["title"]}"',
        f'well = "{case["well"]}"', f'section = "{case["section"]}"', f'mud_system = "{case["mud_system"]}"',
        'notes = "Invented well: the log was made by a simulator"', "", "[logs]",
        "time = [" + ", ".join(f'"{name}"' for name in logs) + "]",
        f'timezone = "{case.get("timezone", "UTC")}"',
    ]  # fmt: skip
    for channel, choice in case.get("channels", {}).items():
        if "[logs.channels]" not in lines:
            lines += ["", "[logs.channels]"]
        lines.append(f"{channel} = {choice}")
    lines += ["", "[survey]", 'file = "survey.csv"', "", "[hole]", 'file = "hole.csv"']
    lines += ["", "[string]", 'file = "string.csv"', "", "[fluid]", f'density = "{shown}"']
    inside = settings["fluid"].get("density_inside")
    if inside is not None:
        lines.append(f'density_inside = "{inside:g} kg/m3"')
    lines += ["", "[rig]"]
    if case.get("tell_block_weight", False):
        told = rig["block_weight"] + case.get("block_weight_error_kN", 0.0)
        lines.append(
            f'block_weight = "{told / 4.4482216:.1f} klbf"' if field else f'block_weight = "{told:.0f} kN"'
        )
    if rig.get("lines"):
        lines += [f"lines = {rig['lines']}", f"sheave_efficiency = {rig['sheave_efficiency']}"]
    if "assumed" in case:
        lines += ["", "[friction]"] + [f"{k} = {v}" for k, v in case["assumed"].items()]
    (folder / "case.toml").write_text("\n".join(lines) + "\n", encoding="utf-8")


def write_truth(folder: Path, truth: pd.DataFrame, facts: dict, settings: dict) -> None:
    """Truth by sample (gzip CSV, only the stamps the log has) and of the whole run (JSON)."""
    rows = truth.copy()
    rows["time"] = [c.strftime("%Y-%m-%dT%H:%M:%SZ") for c in stamps(settings["start"], rows["time"])]
    text = rows.to_csv(index=False, lineterminator="\n")
    (folder / "truth.csv.gz").write_bytes(gzip.compress(text.encode(), 9, mtime=0))
    first = datetime.fromisoformat(settings["start"])

    def clock(pairs: list[list[float]]) -> list[list[str]]:
        return [[f"{first + timedelta(seconds=s):%Y-%m-%dT%H:%M:%SZ}" for s in pair] for pair in pairs]

    for key in (
        "buckling_episodes",
        "helical_episodes",
        "lockup_intervals",
        "drag_episodes",
        "torque_episodes",
    ):
        if key in facts:
            facts[key] = clock(facts[key])
    (folder / "truth.json").write_text(json.dumps(facts, indent=1) + "\n", encoding="utf-8")
