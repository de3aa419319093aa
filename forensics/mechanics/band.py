"""How far past the published helical onsets a load is: a band, not a verdict.

Authors differ by a factor of two on when a pipe turns helical: Chen, Lin and Cheatham 1990 give the mean load
while it forms, Wu and Juvkam-Wold 1993 the load at the end of forming, Mitchell 1997 the load at which no
sinusoid is left. A load between them may stand in either shape, so the words name what it has passed.
"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.mechanics.critical import CRITERIA, HELICAL_ONSETS, Place
from forensics.mechanics.eigen import Floats
from forensics.mechanics.threshold import helical_load
from forensics.units import display_unit

ORDER = tuple(sorted(HELICAL_ONSETS, key=lambda name: HELICAL_ONSETS[name].factor))
"""Names of the onsets from the lowest load to the highest."""


def onset_loads(stiffness: ArrayLike, local: ArrayLike, w_cos: ArrayLike) -> Floats:
    """Give every published helical onset, the near-vertical term added; `torque.onset_drop` is left out.

    Parameters
    ----------
    stiffness : array_like
        EI [N.m2].
    local : array_like
        F_DP at the actual contact force [N].
    w_cos : array_like
        Buoyed weight per length times cos I [N/m].

    Returns
    -------
    ndarray, shape (3, ...)
        In the order of `ORDER` [N].
    """
    return np.array([helical_load(stiffness, local, w_cos, HELICAL_ONSETS[name].factor) for name in ORDER])


def onsets_passed(load: ArrayLike, onsets: ArrayLike) -> NDArray[np.int64]:
    """Count the published onsets that a compression has passed.

    Parameters
    ----------
    load : array_like
        Compression [N].
    onsets : array_like, shape (3, ...)
        From `onset_loads` [N].

    Returns
    -------
    ndarray of int
        0 to 3; 0 where the load is not known.

    Examples
    --------
    >>> onsets_passed([90e3, 250e3, 500e3], np.array([[239e3], [309e3], [478e3]])).tolist()
    [0, 1, 3]
    """
    return (np.asarray(load, dtype=float) >= np.asarray(onsets, dtype=float)).sum(axis=0)


def band_words(least: int, most: int | None = None) -> str:
    """Say in words which published onsets were passed.

    Parameters
    ----------
    least : int
        Onsets that the load has passed, or that the low end of its interval has.
    most : int, optional
        Onsets that the high end has passed; default `least`.

    Returns
    -------
    str
        Such as "past Chen, short of Wu and Mitchell".

    Raises
    ------
    ValueError
        If the numbers are not 0 to 3, in order.

    Examples
    --------
    >>> band_words(3), band_words(2)
    ('past all criteria', 'past Chen and Wu, short of Mitchell')
    >>> band_words(1, 2)
    'past Chen, perhaps past Wu, short of Mitchell'
    """
    most = least if most is None else most
    if not 0 <= least <= most <= len(ORDER):
        raise ValueError(f"onsets passed came as {least} to {most}; expected 0 to {len(ORDER)}, in order")
    if least == most and least in (0, len(ORDER)):
        return "past all criteria" if least else "short of all criteria"
    names = [name.capitalize() for name in ORDER]
    parts = [("past", names[:least]), ("perhaps past", names[least:most]), ("short of", names[most:])]
    return ", ".join(f"{word} {_list(some)}" for word, some in parts if some)


def validity_words(place: Place, system: str = "metric") -> str:
    """Say at one place which helical onsets are used beyond the range they were published for.

    Parameters
    ----------
    place : Place
        One place: scalars.
    system : str
        "metric" or "field": unit of the curvatures.

    Returns
    -------
    str
        Empty where all hold.

    Examples
    --------
    >>> validity_words(Place(1.23e6, 0.0445, 241.0, math.radians(60), math.radians(3) / 30))
    'Chen, Wu and Mitchell hold for 15 to 90 deg and up to 0.5 deg/30m; here 60.0 deg and 3.0 deg/30m'
    """
    # a hole that points upwards presses the pipe as its mirror image does
    angle = float(np.asarray(place.inclination))
    mirrored = replace(place, inclination=min(angle, math.pi - angle))
    outside: dict[tuple[float, float, float], list[str]] = {}
    for name in ORDER:
        validity = CRITERIA[HELICAL_ONSETS[name].criterion]
        if not bool(np.all(validity.covers(mirrored))):
            outside.setdefault((*validity.inclination, validity.curvature), []).append(name.capitalize())
    if not outside:
        return ""
    label, scale = display_unit("angle_per_length", system)
    said = [
        f"{_list(names)} {'holds' if len(names) == 1 else 'hold'} for {math.degrees(low):.0f} to "
        f"{math.degrees(high):.0f} deg and up to {most / scale:.1f} {label}"
        for (low, high, most), names in outside.items()
    ]
    bend = float(np.hypot(place.build, np.asarray(place.turn) * math.sin(angle))) / scale
    return f"{'; '.join(said)}; here {math.degrees(angle):.1f} deg and {bend:.1f} {label}"


def _list(names: list[str]) -> str:
    return " and ".join([", ".join(names[:-1]), names[-1]]) if len(names) > 1 else names[0]
