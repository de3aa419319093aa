"""What loads do to the pipe's body: combined stress against yield, and what is left of API RP 7G's ratings.

Axial force, bending, torsion and pressure act together at the bore and at the outside, on the side that
bending stretches and on the side that it squeezes: the greatest von Mises stress of these four points
counts. The force given is the effective one, as the loads along the string are; the steel's own is ``T +
p_i A_i - p_o A_o``.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from forensics.mechanics.eigen import Floats
from forensics.mechanics.pipe import SHEAR_YIELD, Tube, tension_left, torsional_yield, von_mises, worn
from forensics.well.string import Component


@dataclass(frozen=True)
class PipeLoads:
    """Loads on a piece of pipe; arrays that broadcast together.

    Parameters
    ----------
    tension : array_like
        Effective tension, compression negative [N].
    moment : array_like
        Bending moment, of the hole's curvature and of buckling [N.m].
    torque : array_like
        [N.m]
    inside, outside : array_like
        Pressures [Pa].
    """

    tension: ArrayLike
    moment: ArrayLike = 0.0
    torque: ArrayLike = 0.0
    inside: ArrayLike = 0.0
    outside: ArrayLike = 0.0


@dataclass(frozen=True)
class PipeUse:
    """How much of a pipe's strength its loads use; arrays of the loads' shape.

    Parameters
    ----------
    stress : ndarray
        Greatest von Mises stress of the body [Pa].
    use : ndarray
        That over yield [-]; NaN where the yield is not known.
    rated_use : ndarray
        Tension and torque over what API RP 7G's combined rating allows [-]; 1 is the limit. With ratings of
        the component's own the greater of the uses counts. NaN where nothing is known.
    tension_margin, torque_margin : ndarray
        Pull and torque that could still be added, the other staying as it is [N], [N.m].
    """

    stress: Floats
    use: Floats
    rated_use: Floats
    tension_margin: Floats
    torque_margin: Floats


def true_axial(tube: Tube, loads: PipeLoads) -> Floats:
    """Give the force in the steel, ``T + p_i A_i - p_o A_o``.

    Parameters
    ----------
    tube : Tube
        The body.
    loads : PipeLoads
        Effective tension and pressures.

    Returns
    -------
    ndarray
        [N], tension positive.
    """
    pressed = np.asarray(loads.inside, dtype=float) * tube.bore_area
    return np.asarray(loads.tension, dtype=float) + pressed - np.asarray(loads.outside) * tube.outside_area


def lame(tube: Tube, diameter: float, inside: ArrayLike, outside: ArrayLike) -> tuple[Floats, Floats]:
    """Give radial and hoop stress in a thick tube under pressure, after Lame.

    Parameters
    ----------
    tube : Tube
        The body.
    diameter : float
        Where in the wall, from the bore to the outside, above zero [m].
    inside, outside : array_like
        Pressures [Pa].

    Returns
    -------
    tuple of ndarray
        Radial and hoop stress, tension positive [Pa].
    """
    inside, outside = np.asarray(inside, dtype=float), np.asarray(outside, dtype=float)
    bore, rim = tube.inner_diameter**2, tube.outer_diameter**2
    mean = (inside * bore - outside * rim) / (rim - bore)
    rest = (inside - outside) * bore * rim / ((rim - bore) * diameter**2)
    return mean - rest, mean + rest


def combined_stress(tube: Tube, loads: PipeLoads) -> Floats:
    """Give the greatest von Mises stress of the body under all its loads together.

    Parameters
    ----------
    tube : Tube
        The body, worn as its class says.
    loads : PipeLoads
        What acts on it.

    Returns
    -------
    ndarray
        [Pa]

    Notes
    -----
    Radial and hoop stress after Lame, at the radius in question; bending ``M rho / I``; shear ``M_t rho /
    J``.

    Examples
    --------
    >>> tube = Tube(0.127, 0.1086104)
    >>> float(combined_stress(tube, PipeLoads(1e6, 5e3, 20e3, 25e6, 20e6)).round(-6) / 1e6)
    394.0
    """
    axial = true_axial(tube, loads) / tube.area
    points = []
    for diameter in (tube.inner_diameter, tube.outer_diameter):
        if diameter == 0:
            continue  # a solid bar has no bore
        radial, hoop = lame(tube, diameter, loads.inside, loads.outside)
        bent = np.abs(np.asarray(loads.moment, dtype=float)) * diameter / (2 * tube.inertia)
        shear = np.asarray(loads.torque, dtype=float) * diameter / (2 * tube.polar)
        points += [von_mises(axial + side * bent, hoop, radial, shear) for side in (1.0, -1.0)]
    return np.max(np.broadcast_arrays(*points), axis=0)


def rated_use(tube: Tube, yield_strength: float, tension: ArrayLike, torque: ArrayLike) -> Floats:
    """Give how much of API RP 7G's combined rating a pull and a torque use together.

    Parameters
    ----------
    tube : Tube
        The body, worn as its class says.
    yield_strength : float
        Minimum yield stress [Pa].
    tension, torque : array_like
        At the same time [N], [N.m]; compression counts as nothing.

    Returns
    -------
    ndarray
        ``sqrt((P / A Y)^2 + (Q / Q_y)^2)`` [-]; 1 on the line ``Q = 0.577 (2J/OD) sqrt(Y^2 - (P/A)^2)``.

    References
    ----------
    API RP 7G, appendix A.
    """
    pull = np.maximum(np.asarray(tension, dtype=float), 0.0) / (tube.area * yield_strength)
    turn = np.abs(np.asarray(torque, dtype=float)) / (SHEAR_YIELD * tube.polar_modulus * yield_strength)
    return np.hypot(pull, turn)


def judge(component: Component, loads: PipeLoads, pipe_class: str = "new") -> PipeUse:
    """Hold a component's loads against its strength.

    Parameters
    ----------
    component : Component
        Row of the tally; its own ratings, where given, bind beside the body's.
    loads : PipeLoads
        What acts on it.
    pipe_class : str
        "new", "premium" or "used": the body is rated with what wall is left.

    Returns
    -------
    PipeUse

    Raises
    ------
    CaseError
        If the class is not one of these.
    """
    tube = worn(Tube(component.od, component.id), pipe_class)
    stress = combined_stress(tube, loads)
    strength = component.yield_strength
    pull = np.maximum(np.asarray(loads.tension, dtype=float), 0.0)
    turn = np.abs(np.asarray(loads.torque, dtype=float))
    most_pull = np.asarray(component.tensile_rating if component.tensile_rating else np.nan)
    most_turn = np.asarray(component.torque_rating if component.torque_rating else np.nan)
    use, rated = np.full(np.shape(stress), np.nan), np.fmax(pull / most_pull, turn / most_turn)
    if strength is not None:
        use = stress / strength
        rated = np.fmax(rated, rated_use(tube, strength, pull, turn))
        most_pull = np.fmin(most_pull, tension_left(tube, strength, turn))
        most_turn = np.fmin(most_turn, torsional_yield(tube, strength, pull))
    return PipeUse(stress, use, rated, most_pull - pull, most_turn - turn)
