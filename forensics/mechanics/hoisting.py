"""Block and tackle: what the dead line's pull says about the load on the hook.

Sheaves rob each line of a little tension, in the direction of motion. A weight indicator at the dead line,
scaled for still sheaves, therefore reads low while the string is hoisted and high while it is lowered:
the gap between pick-up and slack-off weight looks smaller than it is, by an amount set by the whole load
on the hook, block included.
"""

from __future__ import annotations

import math

_DIRECTIONS = ("up", "down")


def dead_line_to_hookload(efficiency: float, lines: int, direction: str, *, turning: bool = False) -> float:
    """Give the load on the hook over the tension of the dead line.

    Parameters
    ----------
    efficiency : float
        Of one sheave: tension out over tension in [-], above 0 and at most 1.
    lines : int
        Lines strung to the travelling block, at least 1.
    direction : str
        "up" while hoisting, "down" while lowering.
    turning : bool
        Whether the dead-line sheave turns too (default: it is fixed).

    Returns
    -------
    float
        [-]; the number of lines where sheaves are free of friction.

    Raises
    ------
    ValueError
        If an argument is outside its range.

    Notes
    -----
    With the dead-line sheave fixed, the sum over the lines is ``1 + 1/e + ... + 1/e**(n-1)`` hoisting and
    ``1 + e + ... + e**(n-1)`` lowering; a turning dead-line sheave adds one more factor ``1/e`` or ``e``.

    References
    ----------
    Luke, G. R. and Juvkam-Wold, H. C. (1993), "The determination of true hook-and-line tension under
    dynamic conditions", SPE Drill. & Compl. 8.

    Examples
    --------
    >>> round(dead_line_to_hookload(0.98, 10, "up"), 6), round(dead_line_to_hookload(0.98, 10, "down"), 6)
    (10.970176, 9.14636)
    """
    _check(efficiency, lines)
    if direction not in _DIRECTIONS:
        raise ValueError(f"direction came as {direction!r}; expected 'up' or 'down'")
    ratio = 1 / efficiency if direction == "up" else efficiency
    return _series(ratio, lines) * (ratio if turning else 1.0)


def fast_line_factor(efficiency: float, lines: int) -> float:
    """Give the tension of the fast line over the load on the hook while hoisting.

    Parameters
    ----------
    efficiency : float
        Of one sheave [-].
    lines : int
        Lines strung.

    Returns
    -------
    float
        [-]

    References
    ----------
    API RP 9B, "Application, care, and use of wire rope for oil field service".
    """
    return (1 / efficiency) ** lines / dead_line_to_hookload(efficiency, lines, "up")


def block_efficiency(efficiency: float, lines: int) -> float:
    """Give the efficiency of the whole block and tackle while hoisting.

    Parameters
    ----------
    efficiency : float
        Of one sheave [-].
    lines : int
        Lines strung.

    Returns
    -------
    float
        ``1 / (lines * fast line factor)`` [-].
    """
    return 1 / (lines * fast_line_factor(efficiency, lines))


def derrick_load(hookload: float, efficiency: float, lines: int) -> float:
    """Give the load on the crown: hook, fast line and dead line, the dead line taken free of friction.

    Parameters
    ----------
    hookload : float
        [N]
    efficiency : float
        Of the whole block and tackle (`block_efficiency`) [-].
    lines : int
        Lines strung.

    Returns
    -------
    float
        [N]
    """
    return hookload * (1 + efficiency + efficiency * lines) / (efficiency * lines)


def _series(ratio: float, terms: int) -> float:
    """Sum ``1 + ratio + ... + ratio**(terms - 1)`` exactly, also at ratio one."""
    return math.fsum(ratio**power for power in range(terms))


def _check(efficiency: float, lines: int) -> None:
    if not 0 < efficiency <= 1:
        raise ValueError(f"sheave efficiency came as {efficiency}; expected above 0 and at most 1")
    if lines < 1:
        raise ValueError(f"lines came as {lines}; expected at least 1")
