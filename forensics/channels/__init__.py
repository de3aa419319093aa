"""The vocabulary of channels: one table that readers, checks and documents share.

Aliases are compared without case, blanks and signs (`WOB_AVG`, "Wob avg" and `wob.avg` are one).
"""

from __future__ import annotations

import re
from functools import lru_cache

from forensics.channels.vocabulary import BY_NAME, CHANNELS, GENERIC_DEPTH, LOOKALIKES, Channel, Need
from forensics.units import is_blank, quantities_of

__all__ = [
    "BY_NAME",
    "CHANNELS",
    "GENERIC_DEPTH",
    "LOOKALIKES",
    "Channel",
    "Need",
    "match",
    "normalise",
    "rank",
]


def normalise(name: str) -> str:
    """Bring a column's name to the form aliases are compared in.

    Examples
    --------
    >>> normalise("Weight on Bit [kkgf]"), normalise("WOB_AVG")
    ('weightonbit', 'wobavg')
    """
    bare = re.sub(r"[\[({<].*?[\])}>]", "", name).strip() or name
    return re.sub(r"[\W_]+", "", bare.casefold())


@lru_cache(maxsize=1)
def _aliases() -> dict[str, tuple[str, int]]:
    index: dict[str, tuple[str, int]] = {}
    for channel in CHANNELS:
        for rank, alias in enumerate((channel.name, *channel.aliases)):
            index.setdefault(normalise(alias), (channel.name, rank))
    return index


# A statistic in a name that no alias lists: the channel is the same, averages go first.
_STATISTIC = re.compile(r"^(?:avg|average|mean)?(.+?)(avg|average|mean|max|maximum|min|minimum|mx|mn)?$")


def rank(name: str) -> int:
    """Place of a column's name in its channel's order of preference, 0 the best."""
    found = _aliases().get(normalise(name))
    if found is not None:
        return found[1]
    return 500 if normalise(name).endswith(("max", "maximum", "mx")) else 200


def _lookup(key: str) -> tuple[str, int] | None:
    found = _aliases().get(key)
    if found is not None or len(key) < 4:
        return found
    stem = _STATISTIC.match(key)
    if stem is None or (stem.group(2) or "").startswith(("min", "mn")):
        return None
    core = _aliases().get(stem.group(1))
    largest = (stem.group(2) or "").startswith(("max", "mx"))
    if core is not None and core[0] == "hookload" and largest:
        return ("hookload_max", 100)
    return None if core is None or core[0] in {"time", "bit_depth", "hole_depth"} else core


def match(name: str, unit: str | None = None) -> tuple[str | None, str]:
    """Find which channel a column's name stands for.

    Parameters
    ----------
    name : str
        The column's name, with or without a unit in brackets.
    unit : str, optional
        The unit the file gives, where it does; one of another quantity speaks against the match.

    Returns
    -------
    channel : str or None
        Canonical name; a generic depth (`DEPT`, `MD`) comes back as `hole_depth`, see `GENERIC_DEPTH`.
    why : str
        The reason, for the list of columns in the report.

    Examples
    --------
    >>> match("HKLD_AVG", "kN")
    ('hookload', "'HKLD_AVG' is a name for hookload")
    """
    key = normalise(name)
    if key in LOOKALIKES:
        return None, LOOKALIKES[key]
    found = _lookup(key)
    if found is None:
        return None, "no channel goes by this name"
    channel = BY_NAME[found[0]]
    if channel.name == "time" or is_blank(unit) or unit is None:
        return channel.name, f"{name!r} is a name for {channel.name}"
    known = quantities_of(unit)
    if known and channel.quantity not in known and "dimensionless" not in known:
        return (
            channel.name,
            f"{name!r} is a name for {channel.name}, but {unit!r} is no unit of {channel.quantity}",
        )
    return channel.name, f"{name!r} is a name for {channel.name}"
