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
    "is_listed",
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


# Parts of names, the more particular first, for names that stand in no list.
_PATTERNS = tuple(
    (re.compile(pattern), channel)
    for pattern, channel in (
        (r"^(?:dh|downhole|mwd).*(?:wob|weightonbit)|(?:wob|weightonbit).*downhole", "downhole_wob"),
        (r"^(?:dh|downhole|mwd).*(?:torque|tq)|torque.*downhole", "downhole_torque"),
        (r"(?:hook|(?<!s)hk).*(?:max|mx)", "hookload_max"),
        (r"hookl|hookweight|(?<!s)hkl|stringweight|hoistload", "hookload"),
        (r"weightonbit|wtonbit|bitw|wob", "wob"),
        (r"bit.*(?:dep|md|dpt)|^bitd|^bdep|dep.*bit", "bit_depth"),
        (r"(?:hole|total).*(?:dep|md)|^hd(?:ep|th|pt)|^tdep|dep.*hole", "hole_depth"),
        (r"^bl(?:oc)?k|blockp|blockh|^bht$|travel+ingbl|^bp(?:os)?|hook(?:pos|height)", "block_position"),
        (r"tor(?:q|que)|^(?:st|td|rt|sf)?t(?:q|rq)", "torque"),
        (r"^(?:top|rot|surf|string|drill|td|rt|s|avg|pipe).*rpm|^rpm|rotaryspeed|rotspeed", "rpm"),
        (r"diff?.*pres|^dif|pres.*diff?|deltap", "differential_pressure"),
        (r"standpipe|stndpipe|^spp|pump.*pres|^ppr|mud.*pres", "standpipe_pressure"),
        (r"flow.*out|mudout|^fl?o?out|return.*flow", "flow_out"),
        (r"flow|pump.*(?:rate|out)|mudin$|^fl?in", "flow_in"),
        (r"^(?:mud)?(?:w|wt|weight|den|density|dens).*in$|^mud(?:w|d)", "mud_density"),
        (r"active.*vol|pit.*vol|tank.*vol|^pvt", "pit_volume"),
        (r"^rop|penetration", "rop"),
        (r"toolface|^tface|^gtf|^tf$", "toolface"),
        (r"incl?.*cont|cont.*incl?|^inclin", "inclination"),
    )
)
# Words that make a name something else than the channel's reading.
_OTHER_THING = re.compile(
    r"^min|set(?:p|point)|limit|alarm|target|command|cmd|qual|stdev|std$|variance|delta(?!p)|temp|tvd|vert|bitrpm|motor.*rpm|"
    r"rpm.*bit|rpm.*motor|total.*rpm|turb|choke|annul|casing|kill|torqueam|amps|current|min(?:imum)?$|rate.*bit|cost|hours|revs|"
    r"ecd|stick|slip|shock|vib|strok|spm|off|zero|ref|calc|model|plan|sens|status|flag"
)


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


def _by_pattern(key: str) -> str | None:
    """Find the channel a name that no alias lists seems to mean; for set points and the like, none."""
    if _OTHER_THING.search(key):
        return None
    return next((channel for pattern, channel in _PATTERNS if pattern.search(key)), None)


def is_listed(name: str) -> bool:
    """Tell whether a name stands in the vocabulary, for a channel or for a look-alike."""
    key = normalise(name)
    return key in LOOKALIKES or _lookup(key) is not None


def match(name: str, unit: str | None = None) -> tuple[str | None, str]:
    """Find which channel a column's name stands for.

    Parameters
    ----------
    name : str
        The column's name, with or without a unit in brackets.
    unit : str, optional
        The unit the file gives. A name that only looks like a channel's needs one of its quantity;
        None asks for the name alone to decide.

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
        guessed = _by_pattern(key)
        # A guess from part of a name counts only where the unit bears it out.
        if guessed is None or (unit is not None and BY_NAME[guessed].quantity not in quantities_of(unit)):
            return None, "no channel goes by this name"
        return guessed, f"{name!r} looks like a name for {guessed}"
    channel = BY_NAME[found[0]]
    why = f"{name!r} is a name for {channel.name}"
    known = () if unit is None or is_blank(unit) or channel.name == "time" else quantities_of(unit)
    if known and channel.quantity not in known and "dimensionless" not in known:
        why += f", but {unit!r} is no unit of {channel.quantity}"
    return channel.name, why
