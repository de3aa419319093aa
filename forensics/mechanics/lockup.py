"""Lockup of a helically buckled string at constant inclination, in closed form.

Going from the bit towards the surface, the compression a sliding-in string must carry obeys

    dF/dx = a + b F^2,   a = w (mu sin I - cos I),   b = mu r / (4 EI):

friction on the low side less the weight along the hole, plus friction on the helix's own wall force.
Where a > 0 (flatter than the sliding angle) F grows as a tangent and becomes infinite at a finite distance:
lockup. Where a < 0 the weight wins up to a load ``sqrt(-a / b)``, above which it locks up all the same.
The side weight stays in the wall force beside the helix's; authors differ on this, and a weight of zero
gives the branch that leaves it out.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats


@dataclass(frozen=True)
class HelicalRun:
    """A run of one pipe, helical, sliding in, in a straight hole.

    Parameters
    ----------
    stiffness : float
        EI [N.m2].
    clearance : float
        Radial clearance [m].
    weight : float
        Buoyed weight per length [N/m].
    friction : float
        Sliding friction factor [-], above zero.
    inclination : float
        From vertical [rad]; default horizontal.
    """

    stiffness: float
    clearance: float
    weight: float
    friction: float
    inclination: float = math.pi / 2

    @property
    def growth(self) -> float:
        """a: what friction on the low side adds per length, less the weight along the hole [N/m]."""
        # a cosine of 6e-17 at 90 degrees is no weight along the hole
        along = 0.0 if self.inclination == math.pi / 2 else math.cos(self.inclination)
        return self.weight * (self.friction * math.sin(self.inclination) - along)

    @property
    def helical_growth(self) -> float:
        """b: what friction on the helix adds per length and per square of the load [1/(N.m)]."""
        return self.friction * self.clearance / (4 * self.stiffness)

    @property
    def scale(self) -> float:
        """``sqrt(|a| / b)``, the load at which both parts are alike [N]."""
        return math.sqrt(abs(self.growth) / self.helical_growth)


@dataclass(frozen=True)
class QuickLimit:
    """The closed form's answer for the lowest stretch of the hole, with a helix all along.

    Parameters
    ----------
    limit : float
        Most load that reaches the bit through it, however much is slacked off [N].
    length : float
        Of the stretch, from the bit up [m].
    inclination : float
        Mean of the stretch [rad].
    """

    limit: float
    length: float
    inclination: float


@dataclass(frozen=True)
class SlackOff:
    """What more slacking off would have brought to the lower end at one moment [N].

    Parameters
    ----------
    more : float
        Weight slacked off further: 50 kN, or what was left on the hook.
    arrives : float
        Of it, what would have reached the lower end.
    limit : float
        Most that can stand on the lower end, with all that hung slacked off.
    spent : float
        Weight slacked off further, beyond which less than a twentieth of any addition arrives; NaN where more
        than that does until nine tenths of what hung are slacked off.
    quick : QuickLimit or None
        The closed form's answer; None where the hole is not even over a long enough stretch.
    """

    more: float
    arrives: float
    limit: float
    spent: float = float("nan")
    quick: QuickLimit | None = None


def sliding_angle(friction: float) -> float:
    """Give the inclination beyond which pipe does not slide down under its own weight, ``atan(1 / mu)``.

    Parameters
    ----------
    friction : float
        [-], not negative.

    Returns
    -------
    float
        [rad]

    Examples
    --------
    >>> round(math.degrees(sliding_angle(0.25)), 4)
    75.9638
    """
    return math.atan2(1.0, friction)


def load_along(distance: ArrayLike, bit_load: float, run: HelicalRun) -> Floats:
    """Give the compression at distances from the bit towards the surface, for a given bit load.

    Parameters
    ----------
    distance : array_like
        From the bit upwards [m].
    bit_load : float
        Compression at the bit [N], not negative.
    run : HelicalRun
        Pipe and hole.

    Returns
    -------
    ndarray
        [N]; infinite from the lockup distance on. Where the weight wins, F falls to zero and on into
        tension, where only the straight part acts.

    References
    ----------
    Mitchell, R. F. (1986), "Simple frictional analysis of helical buckling of tubing", SPE Drill. Eng. 1.
    Wu, J. and Juvkam-Wold, H. C. (1993), "Study of helical buckling of pipes in horizontal wells",
    SPE 25503.
    """
    x = np.asarray(distance, dtype=float)
    a, b, scale = run.growth, run.helical_growth, run.scale
    locked = x >= lockup_distance(bit_load, run)
    inside = np.where(locked, 0.0, x)
    if a > 0:
        load = scale * np.tan(math.atan(bit_load / scale) + math.sqrt(a * b) * inside)
    elif a == 0:
        load = bit_load / (1 - b * bit_load * inside)
    else:
        grown = np.tanh(math.sqrt(-a * b) * inside)
        load = scale * (bit_load - scale * grown) / (scale - bit_load * grown)
        # past the neutral point there is no helix: the straight string hangs
        neutral = math.atanh(min(bit_load / scale, 1 - 1e-16)) / math.sqrt(-a * b)
        hangs = (bit_load < scale) & (inside > neutral)
        load = np.where(hangs, a * (inside - neutral), load)
    return np.where(locked, np.inf, load)


def lockup_distance(bit_load: float, run: HelicalRun) -> float:
    """Give the distance from the bit at which the compression becomes infinite.

    Parameters
    ----------
    bit_load : float
        Compression at the bit [N], not negative.
    run : HelicalRun
        Pipe and hole.

    Returns
    -------
    float
        [m]; infinite where the string does not lock up at this load.
    """
    a, b, scale = run.growth, run.helical_growth, run.scale
    if a > 0:
        return (math.pi / 2 - math.atan(bit_load / scale)) / math.sqrt(a * b)
    if a == 0:
        return 1 / (b * bit_load) if bit_load > 0 else math.inf
    return math.atanh(scale / bit_load) / math.sqrt(-a * b) if bit_load > scale else math.inf


def bit_load_limit(length: float, run: HelicalRun) -> float:
    """Give the most load that reaches the bit through a helical run, however much is slacked off.

    Parameters
    ----------
    length : float
        Of the run [m], above zero; may be infinite.
    run : HelicalRun
        Pipe and hole.

    Returns
    -------
    float
        [N]; zero where the run locks up under its own drag. For a long vertical run it tends to
        ``2 sqrt(EI w / (mu r))``.
    """
    a, b, scale = run.growth, run.helical_growth, run.scale
    if a == 0:
        return 1 / (b * length)
    phase = math.sqrt(abs(a) * b) * length
    if a < 0:
        return scale / math.tanh(phase)
    return scale / math.tan(phase) if phase < math.pi / 2 else 0.0
