"""One invented run written in every format that a reader takes, each by the format's own rules."""

from __future__ import annotations

import gzip
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pandas as pd

START = np.datetime64("2031-05-14T22:00:00")
ROWS = 90
STEP = 120
# Channel: values in SI, decimals kept in the unit each writer takes.
_K = np.arange(ROWS)


def run() -> dict[str, np.ndarray]:
    """Give the run in SI, rounded so that every format holds it: over midnight, with gaps in two channels."""
    wave = np.round(np.sin(_K / 5.0), 2)
    rpm = np.where(_K < 10, np.nan, np.where(_K % 30 < 20, 60.0, 0.0))
    return {
        "bit_depth": np.round(2000.0 + 0.2 * _K - 3.0 * wave, 2),
        "hole_depth": np.round(2005.0 + 0.2 * _K, 2),
        "block_position": np.round(20.0 + 8.0 * wave, 2),
        "hookload": np.round(1.2e6 + 4e4 * wave + np.where(_K % 2, 1e3, 0.0), -2),
        "torque": np.where(_K % 17 == 16, np.nan, np.round(1.5e4 + 3e3 * wave, -1)),
        "rpm": rpm,
        "standpipe_pressure": np.round(2.1e7 + 1e6 * wave, -3),
        "flow_in": np.round(0.035 + 0.001 * wave, 5),
        "mud_density": np.full(ROWS, 1250.0),
    }


def seconds() -> np.ndarray:
    """Stamps [s since 1970 UTC]."""
    return START.astype("datetime64[s]").astype(float) + STEP * _K


def _iso(zone: str = "Z") -> list[str]:
    return [f"{stamp}{zone}" for stamp in (START + STEP * _K.astype("timedelta64[s]")).astype(str)]


# Mnemonic and unit of each channel, with its SI value.
METRIC = {
    "bit_depth": ("DBTM", "m", 1.0),
    "hole_depth": ("DMEA", "m", 1.0),
    "block_position": ("BPOS", "m", 1.0),
    "hookload": ("HKLA", "kdaN", 1e4),
    "torque": ("TQA", "kN.m", 1e3),
    "rpm": ("RPMA", "rpm", 1.0),
    "standpipe_pressure": ("SPPA", "kPa", 1e3),
    "flow_in": ("MFIA", "L/min", 1e-3 / 60),
    "mud_density": ("MDIA", "kg/m3", 1.0),
}
_KLBF, _PSI = 4448.2216152605, 6894.757293168
FIELD = {
    "bit_depth": ("DBTM", "ft", 0.3048),
    "hole_depth": ("DMEA", "ft", 0.3048),
    "block_position": ("BPOS", "ft", 0.3048),
    "hookload": ("HKLA", "klbf", _KLBF),
    "torque": ("TQA", "kft.lbf", 0.3048 * _KLBF),
    "rpm": ("RPMA", "rpm", 1.0),
    "standpipe_pressure": ("SPPA", "psi", _PSI),
    "flow_in": ("MFIA", "gpm", 3.785411784e-3 / 60),
    "mud_density": ("MDIA", "ppg", 119.826427317),
}
Columns = dict[str, tuple[str, np.ndarray]]


def columns(system: dict[str, tuple[str, str, float]]) -> Columns:
    """Mnemonic to unit and values."""
    return {name: (unit, run()[channel] / si) for channel, (name, unit, si) in system.items()}


def cells(system: dict[str, tuple[str, str, float]], null: str) -> list[list[str]]:
    """Rows of numbers as text."""
    data = [values for _, values in columns(system).values()]
    return [[null if np.isnan(v) else f"{v:.8g}" for v in row] for row in zip(*data, strict=True)]


def _write_csv(path: Path, delimiter: str = ",", decimal: str = ".") -> None:
    head = [f"{name} [{unit}]" for name, (unit, _) in columns(METRIC).items()]
    lines = [delimiter.join(["time", *head])]
    for stamp, row in zip(_iso(), cells(METRIC, ""), strict=True):
        lines.append(delimiter.join([stamp, *(cell.replace(".", decimal) for cell in row)]))
    text = "\n".join(lines) + "\n"
    if path.suffix == ".gz":
        path.write_bytes(gzip.compress(text.encode()))
    else:
        path.write_text(text)


def _las_head(version: str, wrap: str, curves: list[str]) -> str:
    def item(name: str, value: str, about: str) -> str:
        # LAS 1.2 puts a text value where later versions put its description.
        return f" {name}. {about} : {value}\n" if version == "1.2" else f" {name}. {value} : {about}\n"

    start, stop = _iso("")[0], _iso("")[-1]
    return (
        f"~Version Information\n VERS. {version} : CWLS\n WRAP. {wrap} : lines\n"
        "~Well Information\n"
        f" STRT.S 0 : {start}\n STOP.S {STEP * (ROWS - 1)} : {stop}\n STEP.S {STEP} :\n NULL. -999.25 :\n"
        + item("COMP", "INVENTED", "COMPANY") + item("WELL", "NONE", "WELL") + item("DATE", start, "LOG DATE")
        + "~Curve Information\n" + "".join(curves)
    )  # fmt: skip


def _write_las(path: Path, version: str, wrapped: bool = False) -> None:
    curves = [" ETIM.S : elapsed time\n"]
    curves += [f" {name}.{unit} : {name}\n" for name, (unit, _) in columns(METRIC).items()]
    body = []
    for k, row in enumerate(cells(METRIC, "-999.25")):
        if wrapped:
            body += [str(STEP * k), *(" ".join(row[i : i + 4]) for i in range(0, len(row), 4))]
        else:
            body.append(" ".join([str(STEP * k), *row]))
    head = _las_head(version, "YES" if wrapped else "NO", curves)
    path.write_text(f"{head}~A  ETIM\n" + "\n".join(body) + "\n")


def _write_las_3(path: Path) -> None:
    curves = ["DATE_TIME . : stamp {YYYY-MM-DDThh:mm:ss}\n"]
    curves += [f"{name}.{unit} : {name} {{F}}\n" for name, (unit, _) in columns(FIELD).items()]
    body = [",".join([s, *row]) for s, row in zip(_iso(""), cells(FIELD, ""), strict=True)]
    path.write_text(
        "~Version\nVERS. 3.0 : CWLS LOG ASCII STANDARD - VERSION 3.0\nWRAP. NO : one line a step\n"
        "DLM. COMMA : delimiter\n~Well\nSTRT. : \nSTOP. : \nSTEP. 0 : \nNULL. -999.25 : \n"
        "~Log_Parameter\nMUD. OBM : mud type {S}\n~Log_Definition\n"
        + "".join(curves) + "~Log_Data | Log_Definition\n" + "\n".join(body) + "\n"
    )  # fmt: skip


def _curve(name: str, unit: str, place: int | None) -> str:
    number = f"<columnIndex>{place}</columnIndex>" if place else ""
    return (
        f'<logCurveInfo uid="{name}"><mnemonic>{name}</mnemonic>{number}<unit>{unit}</unit>'
        "<typeLogData>double</typeLogData></logCurveInfo>\n"
    )


def _write_witsml_131(path: Path) -> None:
    """Columns by columnIndex, curves out of order, the log cut into two parts of one uid."""
    data = [",".join([s, *row]) for s, row in zip(_iso(), cells(METRIC, ""), strict=True)]
    curves = [_curve(name, unit, i) for i, (name, (unit, _)) in enumerate(columns(METRIC).items(), 2)]
    curves = [*reversed(curves), _curve("Time", "s", 1)]

    def part(rows: list[str]) -> str:
        return (
            '<log uidWell="w" uidWellbore="b" uid="l1"><nameWell>Invented</nameWell><name>drilling</name>'
            "<indexType>date time</indexType><nullValue>-999.25</nullValue>"
            '<indexCurve columnIndex="1">Time</indexCurve>\n'
            + "".join(curves)
            + "<logData>"
            + "".join(f"<data>{row}</data>\n" for row in rows)
            + "</logData></log>\n"
        )

    path.write_text(
        '<?xml version="1.0" encoding="UTF-8"?>\n'
        '<logs xmlns="http://www.witsml.org/schemas/131" version="1.3.1.1">\n'
        + part(data[40:]) + part(data[:40]) + "</logs>\n"
    )  # fmt: skip


def _write_witsml_141(path: Path) -> None:
    """Columns by mnemonicList; hydraulics in a log of their own, prefixed names, a log by depth beside."""
    both = columns(FIELD)
    rows = cells(FIELD, "-999.25")
    hydraulics = [name in {"SPPA", "MFIA", "MDIA"} for name in both]

    def log(uid: str, wanted: bool) -> str:
        names = [name for name, is_other in zip(both, hydraulics, strict=True) if is_other == wanted]
        units = ", ".join(["s", *(both[name][0] for name in names)])
        data = [
            ",".join([s, *(c for c, is_other in zip(row, hydraulics, strict=True) if is_other == wanted)])
            for s, row in zip(_iso("+00:00"), rows, strict=True)
        ]
        curves = "".join(_curve(name, both[name][0], None) for name in reversed(names))
        listed = ",".join(["TIME", *names])
        return (
            f'<w:log uid="{uid}"><w:indexType>date time</w:indexType><w:nullValue>-999.25</w:nullValue>'
            "<w:indexCurve>TIME</w:indexCurve>"
            + curves.replace("<", "<w:").replace("<w:/", "</w:")
            + f"<w:logData><w:mnemonicList>{listed}</w:mnemonicList><w:unitList>{units}</w:unitList>"
            + "".join(f"<w:data>{row}</w:data>\n" for row in data)
            + "</w:logData></w:log>\n"
        )  # fmt: skip

    depth = (
        '<w:log uid="d"><w:indexType>measured depth</w:indexType><w:indexCurve>DEPT</w:indexCurve><w:logData>'
        "<w:mnemonicList>DEPT,HKLA</w:mnemonicList><w:unitList>m,kN</w:unitList><w:data>1,2</w:data>"
        "</w:logData></w:log>\n"
    )
    path.write_text(
        '<?xml version="1.0"?>\n<w:logs xmlns:w="http://www.witsml.org/schemas/1series" version="1.4.1.1">\n'
        + depth + log("a", False) + log("b", True) + "</w:logs>\n"
    )  # fmt: skip


def _write_wits(path: Path, system: dict[str, tuple[str, str, float]]) -> None:
    codes = {"DBTM": "0108", "DMEA": "0110", "BPOS": "0112", "HKLA": "0114", "TQA": "0118", "RPMA": "0120",
             "SPPA": "0121", "MFIA": "0130", "MDIA": "0132"}  # fmt: skip
    frames = []
    for stamp, row in zip(_iso(""), cells(system, "-9999"), strict=True):
        day, clock = stamp.split("T")
        # Dates and clocks go as whole numbers: leading zeros vanish.
        lines = [f"0105{int(day.replace('-', '')[2:])}", f"0106{int(clock.replace(':', ''))}", "01072"]
        lines += [f"{codes[name]}{cell}" for name, cell in zip(columns(system), row, strict=True)]
        frames.append("\r\n".join(["&&", *lines, "!!"]))
    path.write_text("\r\n".join(frames) + "\r\n", newline="")


def _write_parquet(path: Path, zoned: bool) -> None:
    stamps = pd.to_datetime(seconds(), unit="s", utc=True)
    names = {f"{name} ({unit})": values for name, (unit, values) in columns(FIELD).items()}
    frame = pd.DataFrame(names, index=stamps if zoned else stamps.tz_localize(None))
    frame.to_parquet(path) if zoned else frame.reset_index(names="time").to_parquet(path, index=False)


# How a file of each kind is called, which reader it belongs to, and who writes it.
WRITERS: dict[str, tuple[str, str, Callable[[Path], None]]] = {
    "csv": ("run.csv", "CSV", _write_csv),
    "csv packed": ("run.csv.gz", "CSV", _write_csv),
    "csv with semicolons": ("run.txt", "CSV", lambda path: _write_csv(path, ";", ",")),
    "las 1.2": ("run12.las", "LAS", lambda path: _write_las(path, "1.2")),
    "las 2.0": ("run20.las", "LAS", lambda path: _write_las(path, "2.0")),
    "las wrapped": ("wrapped.las", "LAS", lambda path: _write_las(path, "2.0", wrapped=True)),
    "las 3.0": ("run30.las", "LAS", _write_las_3),
    "witsml 1.3.1.1": ("run131.xml", "WITSML", _write_witsml_131),
    "witsml 1.4.1.1": ("run141.xml", "WITSML", _write_witsml_141),
    "wits metric": ("metric.wits", "WITS", lambda path: _write_wits(path, METRIC)),
    "wits fps": ("fps.txt", "WITS", lambda path: _write_wits(path, FIELD)),
    "parquet": ("run.parquet", "Parquet", lambda path: _write_parquet(path, zoned=False)),
    "parquet zoned": ("zoned.parquet", "Parquet", lambda path: _write_parquet(path, zoned=True)),
}
