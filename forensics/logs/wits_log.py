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
# No value is longer; a line of this length is no item [bytes].
LONGEST = 4096
CHUNK = 2**20
# Items that every record repeats: who, when and what.
REPEATED = frozenset(f"{number:02d}" for number in range(1, 8))


@dataclass
class _Capture:
    """What the frames hold: rows by code, and what had to be put up with."""

    main: str
    rows: dict[str, list[int]] = field(default_factory=dict)
    texts: dict[str, list[bytes]] = field(default_factory=dict)
    lines: list[int] = field(default_factory=list)
    records: set[str] = field(default_factory=set)
    truncated: int = 0
    outside: int = 0
    odd: int = 0

    def meet(self, code: str, keep: Keep) -> str:
        """Make a column of an item met for the first time; "" where it is not to be loaded."""
        self.records.add(code[:2])
        # What every record repeats is told once by the main one.
        if code[:2] != self.main and code[2:] in REPEATED:
            return ""
        self.rows[code], self.texts[code] = [], []
        name = ITEMS[code][0] if code in ITEMS else code
        return code if keep(name) or name in TELLING else ""


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
    found = _Capture(_main_record(head))
    _walk(path, found, keep)
    if not found.lines:
        raise LogError(
            f"found no whole WITS frame of record {found.main} ({found.truncated} broken off); expected "
            "lines of items, such as 01082450.3, between && and !!",
            file=path,
        )
    codes = list(found.texts)
    names = tuple(ITEMS[code][0] if code in ITEMS else code for code in codes)
    return RawLog(
        path=path,
        format="WITS level 0",
        names=names,
        units=(None,) * len(names),
        table=_table(found),
        first_line=found.lines[0],
        lines=np.array(found.lines),
        notes=_notes(found),
        dropped=found.truncated,
        about={name: f"WITS item {code}" for name, code in zip(names, codes, strict=True)},
        by="time",
        systems={system: tuple(_unit(code, system) for code in codes) for system in SYSTEMS},
    )


def _unit(code: str, system: str) -> str | None:
    unit = ITEMS[code][1][system] if code in ITEMS else "-"
    return None if unit == "-" else unit


def _main_record(head: bytes) -> str:
    """Name the record whose frames are rows: the general time-based one, or the one most often sent."""
    counted = Counter(re.findall(r"^\s*(\d\d)\d\d", head.decode("latin-1"), re.MULTILINE))
    return "01" if "01" in counted or not counted else counted.most_common(1)[0][0]


def _walk(path: Path, found: _Capture, keep: Keep) -> None:
    """Walk the lines once: whole frames go into the columns, what is none is counted."""
    frame: list[tuple[str, bytes]] | None = None
    start, whole, main = 0, False, found.main.encode()
    loaded: dict[bytes, str] = {}
    for number, line in enumerate(_lines(path), 1):
        mark = line[:2]
        if mark == b"&&":
            found.truncated += frame is not None
            frame, start, whole = [], number, False
        elif mark == b"!!":
            if frame is not None:
                _add(found, frame, start if whole else None)
            frame = None
        elif not line:
            continue
        elif frame is None:
            found.outside += 1
        elif line[:4] in loaded or (len(line) >= 4 and line[:4].isdigit()):
            whole = whole or mark == main
            if line[:4] not in loaded:
                loaded[line[:4]] = found.meet(line[:4].decode(), keep)
            if code := loaded[line[:4]]:
                frame.append((code, line[4:]))
        else:
            found.odd += 1
    found.truncated += frame is not None


def _lines(path: Path) -> Iterator[bytes]:
    """Lines of the file without outer blanks; one too long to be an item comes cut."""
    tail = b""
    try:
        with open_bytes(path) as file:
            while chunk := file.read(CHUNK):
                lines = (tail + chunk).split(b"\n")
                tail = lines.pop()[:LONGEST]
                for line in lines:
                    yield line[:LONGEST].strip(b" \t\r\x00")
    except UNPACK_ERRORS as error:
        raise LogError(f"the file can't be unpacked: {error}", file=path) from error
    yield tail.strip(b" \t\r\x00")


def _add(found: _Capture, frame: list[tuple[str, bytes]], line: int | None) -> None:
    """Give a frame of the main record a row, and the items of others the row they came with or after."""
    if line is not None:
        found.lines.append(line)
    if not found.lines:
        return
    row = len(found.lines) - 1
    for code, text in frame:
        found.rows[code].append(row)
        found.texts[code].append(text)


def _table(found: _Capture) -> pd.DataFrame:
    import pandas as pd

    columns = {}
    for number, code in enumerate(found.texts):
        rows = np.array(found.rows[code], dtype=np.int64)
        if len(rows) == 0:
            continue
        # An item told twice in one frame counts as told last.
        last = np.append(np.diff(rows) > 0, True)
        series = pd.Series(_values(found.texts[code]), index=rows)[last]
        columns[number] = series.reindex(range(len(found.lines)))
    return pd.DataFrame(columns)


def _values(texts: list[bytes]) -> pd.Series | np.ndarray:
    """Turn an item's texts into numbers where all are, or leave them text without words for "no value"."""
    import pandas as pd

    try:
        return np.array(texts).astype(np.float64)
    except ValueError:
        words = [text.decode("latin-1").strip() for text in texts]
        series = pd.Series([None if word.casefold() in WORDS else word for word in words], dtype="object")
        converted = pd.to_numeric(series, errors="coerce")
        told = converted if converted.notna().sum() == series.notna().sum() else series
        return told.to_numpy()


def _notes(found: _Capture) -> tuple[str, ...]:
    others = sorted(found.records - {found.main})
    told = [f"one row a frame of record {found.main}"]
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
