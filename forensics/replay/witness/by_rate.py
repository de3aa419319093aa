"""Rate of penetration as a witness: the law of rotated footage inverted in slid footage."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.loads import Basis, RateLaw, Response
from forensics.logs.table import TimeLog
from forensics.replay.witness.respond import Heard
from forensics.rig.view import RigView

Floats = NDArray[np.float64]

SLIDE_SECONDS = 600.0  # footage over less is mostly stretch and depth noise
LEAST_SECONDS = 180.0
#: Rate while sliding over rate while turning at the same load, and its spread in log units: the string's own
#: turns are missing from the bit's (from memory; a motor gives the bit two to four times the string's turns).
SLOWER, SLOWER_SPREAD = 0.85, 0.2
STRETCH_DOUBT = 0.35  # of the shortening: the load is not spread evenly along the string


@dataclass(frozen=True)
class Footage:
    """What a slide made on paper, and how much of it was the string growing shorter.

    Parameters
    ----------
    top : ndarray, shape (n,)
        Tension at the rotary [N].
    own : ndarray, shape (n,)
        Bit load by hookload [N].
    give : float
        Length by which the whole string stretches per newton [m/N].
    """

    top: Floats
    own: Floats
    give: float

    def shortening(self, first: int, last: int) -> float:
        """How much shorter the string grew from one row to another [m].

        The tension's change is taken to run evenly from what it is at the rotary to what it is at the bit.
        """
        change = (self.top[last] - self.top[first]) - (self.own[last] - self.own[first])
        return float(-0.5 * change * self.give)


def hear_rate(
    log: TimeLog, rig: RigView, law: RateLaw, slides: list[tuple[int, int]], footage: Footage
) -> Heard:
    """Invert the rate law over parts of the slides.

    Parameters
    ----------
    log, rig : TimeLog, RigView
        The run.
    law : RateLaw
        Learned in rotated footage.
    slides : list of (int, int)
        First and one-past-last row of each.
    footage : Footage
        For what the string's own shortening takes off the footage.

    Returns
    -------
    Heard
        Load constant over each part; NaN elsewhere, and everywhere without a law.
    """
    load, sigma = np.full(len(log), np.nan), np.full(len(log), np.nan)
    response = Response(
        "rate of penetration", Basis.RATE_LAW, slope=law.rate, spread=law.spread, windows=law.samples
    )
    if not law.determined:
        return Heard(replace(response, why="too little rotary drilling to learn a rate from"), load, sigma)
    depth, noise = log.values["bit_depth"], 2.0 * rig.noise.get("bit_depth", 0.0)
    rate = law.rate * SLOWER
    for first, stop in slides:
        seconds = log.time[stop - 1] - log.time[first]
        parts = max(1, round(seconds / SLIDE_SECONDS))
        for rows in np.array_split(np.arange(first, stop), parts):
            time = log.time[rows[-1]] - log.time[rows[0]]
            if time < LEAST_SECONDS:
                continue
            shorter = footage.shortening(rows[0], rows[-1])
            made = depth[rows[-1]] - depth[rows[0]] - shorter
            doubt = float(np.hypot(noise, STRETCH_DOUBT * abs(shorter))) + 0.02
            least = float((max(made, doubt) / time / rate) ** (1.0 / law.exponent))
            load[rows] = least if made > doubt else 0.5 * least
            spread = np.hypot(np.hypot(law.spread, SLOWER_SPREAD), doubt / max(made, doubt)) / law.exponent
            sigma[rows] = max(spread, 0.2) * least
    return Heard(replace(response, heard=True), load, sigma)
