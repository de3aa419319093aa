"""Which unit a column is likely in, by the size of its values: the fix where the unit given can't be."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics import units
from forensics.channels import BY_NAME
from forensics.errors import UnitError
from forensics.units import show

Floats = NDArray[np.float64]
_FORCES = ("kN", "klbf", "tonnef", "kdaN", "N", "lbf", "kgf", "daN")
# Units a rig may have meant, likeliest first.
_LIKELY = {
    "hookload": _FORCES,
    "hookload_max": _FORCES,
    "wob": _FORCES,
    "bit_depth": ("m", "ft"),
    "torque": ("kN.m", "kft.lbf", "daN.m", "N.m", "ft.lbf"),
    "rpm": ("rpm", "rev/s", "rad/s"),
    "standpipe_pressure": ("bar", "psi", "kPa", "MPa", "Pa"),
    "flow_in": ("L/min", "gal/min", "m3/min", "m3/h", "bbl/min", "m3/s"),
    "mud_density": ("g/cm3", "ppg", "kg/m3"),
    "inclination": ("deg", "rad"),
    "toolface": ("deg", "rad"),
}
# Sizes that are usual on a rig at work [SI; rpm in rev/min]. From memory of common practice, no source.
_USUAL = {
    "hookload": (1.5e5, 6.0e6),
    "hookload_max": (1.5e5, 6.0e6),
    "wob": (2.0e4, 6.0e5),
    "bit_depth": (100.0, 12000.0),
    "torque": (2.0e3, 1.0e5),
    "rpm": (20.0, 300.0),
    "standpipe_pressure": (2.0e6, 6.0e7),
    "flow_in": (3.0e-3, 0.11),
    "mud_density": (800.0, 2500.0),
}


def likely_units(channel: str, data: Floats) -> tuple[str, ...]:
    """Give units under which the values would be usual ones for the channel.

    Parameters
    ----------
    channel : str
        Canonical name.
    data : ndarray, shape (n,)
        As the file has them, in whatever unit.

    Returns
    -------
    tuple of str
        Likeliest first; at most three.
    """
    quantity = BY_NAME[channel].quantity
    known = data[np.isfinite(data)]
    if len(known) == 0:
        return ()
    top = float(np.percentile(np.abs(known), 95))
    low, high = _USUAL.get(channel, (BY_NAME[channel].plausible[1] * 1e-3, BY_NAME[channel].plausible[1]))
    names = _LIKELY.get(channel, units.spellings(quantity))
    fits = [name for name in names if low <= float(units.to_si(top, name, quantity)) <= high]
    return tuple(fits[:3])


def likely_unit(channel: str, data: Floats) -> str:
    """Say under which units the values would be usual ones for the channel; empty where none is."""
    fits = likely_units(channel, data)
    if not fits:
        return ""
    known = data[np.isfinite(data)]
    top = float(np.percentile(np.abs(known), 95))
    return f"values near {top:g} would be usual in {' or '.join(fits)}; "


def likely_fix(channel: str, data: Floats, read_in: str | None) -> str:
    """Say which unit would make values usual that can't be in the unit they were read in.

    Parameters
    ----------
    channel : str
        Canonical name.
    data : ndarray, shape (n,)
        The values in question [SI].
    read_in : str or None
        The unit they were read in.

    Returns
    -------
    str
        A clause that names the unit read, the likely one with what it makes of the values, and where to
        give it.
    """
    quantity = BY_NAME[channel].quantity
    ask = f"check its unit, and give it under [logs.channels] {channel}"
    try:
        unit = units.factor(read_in or "", quantity)
    except UnitError:
        return ask
    with np.errstate(divide="ignore"):
        as_read = unit.scale / data if unit.inverse else (data - unit.offset) / unit.scale
    middle = float(np.median(as_read[np.isfinite(as_read)]))
    fits = [u for u in likely_units(channel, as_read) if units.factor(u, quantity).scale != unit.scale]
    if not fits:
        return f"it was read in {read_in}: {ask}"
    likely = [f"{u} ({show(float(units.to_si(middle, u, quantity)), quantity)})" for u in fits]
    return (
        f"{middle:.4g} was read in {read_in}, and is likely in {' or '.join(likely)}: give its unit under "
        f"[logs.channels] {channel}"
    )
