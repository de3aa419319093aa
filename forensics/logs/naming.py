"""Names of columns: a unit glued to one is parted from it."""

from __future__ import annotations

import re
from functools import lru_cache

from forensics import channels, units
from forensics.channels import BY_NAME

_BRACKETED = re.compile(r"^(.*?)\s*[\[({<]\s*([^\])}>]*?)\s*[\])}>]?\s*$")


@lru_cache(maxsize=4096)
def split_name(name: str) -> tuple[str, str | None]:
    """Part a column's name from a unit glued to it.

    Examples
    --------
    >>> split_name("Hookload (k-lbs)"), split_name("Weight on Bit kkgf"), split_name("Surface RPM")
    (('Hookload', 'k-lbs'), ('Weight on Bit', 'kkgf'), ('Surface RPM', None))
    """
    found = _BRACKETED.match(name)
    if found and found.group(1) and (not found.group(2) or units.quantities_of(found.group(2))):
        return found.group(1), found.group(2) or None
    if channels.is_listed(name):
        return name, None
    words = [word for word in re.split(r"[\s_,;:/]+", name) if word]
    for count in (1, 2, 3):
        stem = " ".join(words[:-count])
        known = channels.match(stem)[0] if stem else None
        if known is None:
            continue
        for joint in ("", "/", "."):
            unit = joint.join(words[-count:])
            if BY_NAME[known].quantity in units.quantities_of(unit):
                return stem, unit
    return name, None
