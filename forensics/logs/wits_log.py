"""Logs as captures of WITS level 0: frames between && and !!, one item a line, codes instead of names."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from forensics.errors import LogError
from forensics.logs.nulls import WORDS
from forensics.logs.packed import UNPACK_ERRORS, open_bytes
from forensics.logs.raw import Keep, RawLog
from forensics.logs.systems import TELLING

if TYPE_CHECKING:
    import pandas as pd

# Code, short mnemonic, metric unit, FPS unit.
_ITEMS = """
0101 WID - -        0102 SKNO - -       0103 RID - -        0104 SQID - -       0105 DATE - -
0106 TIME - -       0107 ACTC - -       0108 DBTM m ft      0109 DBTV m ft      0110 DMEA m ft
0111 DVER m ft      0112 BPOS m ft      0113 ROPA m/h ft/h  0114 HKLA kdaN klbf 0115 HKLX kdaN klbf
0116 WOBA kdaN klbf 0117 WOBX kdaN klbf 0118 TQA kN.m kft.lbf                   0119 TQX kN.m kft.lbf
0120 RPMA rpm rpm   0121 SPPA kPa psi   0122 CHKP kPa psi   0123 SPM1 - -       0124 SPM2 - -
0125 SPM3 - -       0126 TVA m3 bbl     0127 TVCA m3 bbl    0128 MFOP % %       0129 MFOA L/min gpm
0130 MFIA L/min gpm 0131 MDOA kg/m3 ppg 0132 MDIA kg/m3 ppg 0133 MTOA degC degF 0134 MTIA degC degF
0135 MCOA - -       0136 MCIA - -       0137 STKC - -       0138 LSTK - -       0139 DRTM m ft
0140 GASA % %       0717 GTF deg deg    0915 MWBA kdaN klbf 0916 MWBX kdaN klbf 0917 MTQA kN.m kft.lbf
0918 MTQX kN.m kft.lbf
"""
ITEMS = {code: (name, {"metric": metric, "fps": fps}) for code, name, metric, fps in re.findall(
    r"(\d{4}) (\S+) (\S+) (\S+)", _ITEMS)}  # fmt: skip
SYSTEMS = ("metric", "fps")
_ITEM = re.compile(r"(\d{4})\s*(.*)")
# No value is longer; a line of this length is no item [characters].
LONGEST = 4096


@dataclass
class _Capture:
    """What the frames hold: rows by code, and what had to be put up with."""

    rows: dict[str, list[int]] = field(default_factory=dict)
    texts: dict[str, list[str | None]] = field(default_factory=dict)
    lines: list[int] = field(default_factory=list)
    truncated: int = 0
    outside: int = 0
    odd: int = 0


def sniff(path: Path, head: bytes) -> bool:
    """Tell whether a file is a capture of WITS frames: a line of && with an item on the next."""
    del path
    return re.search(rb"^[^\S\n]*&&[^\S\n]*\r?\n\s*\d{4}", head[:65536], re.MULTILINE) is not None


def read(path: Path, head: bytes, keep: Keep) -> RawLog:
    """Read a capture of WITS level 0.

    Parameters
    ----------
    path : Path
        The file.
    head : bytes
        Its first bytes.
    keep : callable
        Says which columns to load, by name.

    Returns
    -------
    RawLog
        One row a frame of the general time-based record (01), or of the record most often sent where there
        is none. Items of other records stand in the row they came with or after. Columns go by the item's
        short mnemonic; items without one by their code, such as "0141". `systems` holds the units.

    Raises
    ------
    LogError
        If no frame is whole.

    References
    ----------
    API PUBL 3855 / IADC, WITS, revision 1.1: level 0 and predefined records. Item codes from memory.
    """
    del head
    found = _Capture()
    frames = list(_frames(path, found))
    if not frames:
        raise LogError(
            f"found no whole WITS frame ({found.truncated} broken off); expected lines of items, such as "
            "01082450.3, between && and !!",
            file=path,
        )
    counted = Counter(record for _, frame in frames for record in {code[:2] for code, _ in frame})
    main = "01" if "01" in counted else counted.most_common(1)[0][0]
    _fill(found, frames, main, keep)
    if not found.lines:
        raise LogError("found no WITS item that is read; expected record 01", file=path)
    codes = list(found.texts)
    names = tuple(ITEMS[code][0] if code in ITEMS else code for code in codes)
    return RawLog(
        path=path,
        format="WITS level 0",
        names=names,
        units=(None,) * len(names),
        table=_table(found, codes),
        first_line=found.lines[0],
        lines=np.array(found.lines),
        notes=_notes(found, main, counted),
        dropped=found.truncated,
        about={name: f"WITS item {code}" for name, code in zip(names, codes, strict=True)},
        by="time",
        systems={system: tuple(_unit(code, system) for code in codes) for system in SYSTEMS},
    )


def _unit(code: str, system: str) -> str | None:
    unit = ITEMS[code][1][system] if code in ITEMS else "-"
    return None if unit == "-" else unit


def _frames(path: Path, found: _Capture) -> Iterator[tuple[int, list[tuple[str, str]]]]:
    """Part the lines into whole frames, each with the line it starts on; count what is none."""
    frame: list[tuple[str, str]] | None = None
    start = 0
    for number, line in enumerate(_lines(path), 1):
        if line.startswith("&&"):
            found.truncated += frame is not None
            frame, start = [], number
        elif line.startswith("!!"):
            if frame:
                yield start, frame
            frame = None
        elif not line:
            continue
        elif frame is None:
            found.outside += 1
        elif item := _ITEM.fullmatch(line):
            frame.append((item[1], item[2]))
        else:
            found.odd += 1
    found.truncated += frame is not None


def _lines(path: Path) -> Iterator[str]:
    """Lines of the file without outer blanks; one too long to be an item comes cut."""
    try:
        with open_bytes(path) as file:
            while line := file.readline(LONGEST):
                if not line.endswith(b"\n") and len(line) == LONGEST:
                    while (rest := file.readline(2**20)) and not rest.endswith(b"\n"):
                        pass
                yield line.decode("latin-1").strip(" \t\r\n\x00")
    except UNPACK_ERRORS as error:
        raise LogError(f"the file can't be unpacked: {error}", file=path) from error


def _fill(found: _Capture, frames: list[tuple[int, list[tuple[str, str]]]], main: str, keep: Keep) -> None:
    """Give each frame of the main record a row, and the items of others the row they came with or after."""
    names = {code: ITEMS[code][0] if code in ITEMS else code for _, frame in frames for code, _ in frame}
    wanted = {code: keep(name) or name in TELLING for code, name in names.items()}
    # Items that every record repeats: who, when and what, told once by the main one.
    repeated = {f"{number:02d}" for number in range(1, 8)}
    for line, frame in frames:
        if any(code[:2] == main for code, _ in frame):
            found.lines.append(line)
        if not found.lines:
            continue
        row = len(found.lines) - 1
        for code, text in frame:
            if code[:2] != main and code[2:] in repeated:
                continue
            texts, rows = found.texts.setdefault(code, []), found.rows.setdefault(code, [])
            if wanted[code]:
                rows.append(row)
                texts.append(None if text.casefold() in WORDS else text)


def _table(found: _Capture, codes: list[str]) -> pd.DataFrame:
    import pandas as pd

    columns = {}
    for number, code in enumerate(codes):
        if not found.rows[code]:
            continue
        series = pd.Series(found.texts[code], index=found.rows[code], dtype="object")
        # An item told twice in one frame counts as told last.
        series = series[~series.index.duplicated(keep="last")].reindex(range(len(found.lines)))
        converted = pd.to_numeric(series, errors="coerce")
        columns[number] = converted if converted.notna().sum() == series.notna().sum() else series
    return pd.DataFrame(columns)


def _notes(found: _Capture, main: str, counted: Counter[str]) -> tuple[str, ...]:
    others = sorted(set(counted) - {main})
    told = [f"one row a frame of record {main}"]
    if others:
        told.append(f"items of record {', '.join(others)} stand in the row they came with or after")
    for count, what in (
        (found.truncated, "frames that break off were left out"),
        (found.outside, "lines outside any frame were passed over"),
        (found.odd, "lines within frames that are no item were passed over"),
    ):
        if count:
            told.append(f"{count} {what}")
    return tuple(told)
