"""Units of logs that carry none and follow an agreed system: which system it is, by what the values show."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from forensics.errors import LogError
from forensics.logs.nulls import CODES, to_numbers
from forensics.logs.raw import RawLog


@dataclass(frozen=True)
class Clue:
    """A column whose usual value [low, high] speaks for one system: no rig shows it under the other."""

    column: str
    low: float
    high: float
    system: str
    why: str


# Bounds from what rigs can show at all: mud of 5 to 25 ppg, no pump above 7,500 psi or 1,600 gal/min.
CLUES = (
    *(Clue(name, 500.0, 3000.0, "metric", "a mud density in kg/m3") for name in ("MDIA", "MDOA")),
    *(Clue(name, 5.0, 25.0, "fps", "a mud density in lb/gal") for name in ("MDIA", "MDOA")),
    Clue("SPPA", 8000.0, 1.0e5, "metric", "no pump gives that pressure in psi"),
    Clue("MFIA", 1700.0, 1.0e4, "metric", "no rig pumps that many gal/min"),
    *(Clue(name, 3.0, 31.0, "metric", "mud below the ice point if in degF") for name in ("MTIA", "MTOA")),
    *(Clue(name, 110.0, 400.0, "fps", "boiling mud if in degC") for name in ("MTIA", "MTOA")),
)
_ASK = (
    'say which under [logs]: wits_units = "metric" (m, kdaN, kN.m, kPa, L/min) '
    'or "fps" (ft, klbf, kft.lbf, psi, gal/min)'
)
TELLING = frozenset(clue.column for clue in CLUES)


def settle_units(raw: RawLog, declared: str | None) -> RawLog:
    """Give the columns of a log the units of its system.

    Parameters
    ----------
    raw : RawLog
        As read; comes back as it is where its format carries units.
    declared : str or None
        The system the case file names.

    Returns
    -------
    RawLog
        With units; what told the system stands in its notes.

    Raises
    ------
    LogError
        If the case names no system and the values tell none, or contradict one another.
    """
    if not raw.systems:
        return raw
    found = _clues(raw)
    seen = {clue.system for clue, _ in found}
    told = "; ".join(f"{clue.column} near {value:.4g}: {clue.why}" for clue, value in found)
    if declared is None and not seen:
        raise LogError(f"WITS carries no units, and no value here tells the system; {_ASK}", file=raw.path)
    if declared is None and len(seen) > 1:
        raise LogError(f"WITS carries no units, and values here contradict each other ({told}); {_ASK}",
                       file=raw.path)  # fmt: skip
    system = declared or seen.pop()
    against = declared is not None and bool(seen - {declared})
    how = "the case file says so" if declared else told
    note = f"units by the {'metric' if system == 'metric' else 'FPS'} system of WITS: {how}"
    doubts = (f"but {told}",) if against else ()
    return replace(raw, units=raw.systems[system], notes=(*raw.notes, "; ".join((note, *doubts))), systems={})


def _clues(raw: RawLog) -> list[tuple[Clue, float]]:
    """Give the clues that hold, with the usual value each rests on."""
    found = []
    for clue in CLUES:
        if clue.column not in raw.names or (place := raw.names.index(clue.column)) not in raw.table:
            continue
        values = to_numbers(raw.table[place])[0]
        values = values[np.isfinite(values) & ~np.isin(values, CODES) & (values != 0.0)]
        if len(values) == 0:
            continue
        # What runs now and then shows itself when it runs: pressure and flow by their upper tenth.
        usual = float(np.percentile(values, 90 if clue.column in {"SPPA", "MFIA"} else 50))
        if clue.low <= usual <= clue.high:
            found.append((clue, usual))
    return found
