"""The case file: what one run is, which files tell of it, and what to assume.

`load_case` reads a TOML file; the objects it makes hold every number in SI.
"""

from forensics.case.loader import load_case
from forensics.case.settings import (
    Case,
    ChannelChoice,
    CriteriaSettings,
    FluidSettings,
    FrictionSettings,
    LimitSettings,
    LogSettings,
    RecordSettings,
    RigSettings,
    TieIn,
)

__all__ = [
    "Case",
    "ChannelChoice",
    "CriteriaSettings",
    "FluidSettings",
    "FrictionSettings",
    "LimitSettings",
    "LogSettings",
    "RecordSettings",
    "RigSettings",
    "TieIn",
    "load_case",
]
