"""Slow, obvious marches along the string, for comparison with the compiled ones."""

from __future__ import annotations

from itertools import pairwise

import numpy as np

from forensics.well.model import Well
from forensics.well.string import buoyed_weight

DOWN = np.array([0.0, 0.0, 1.0])


def lateral_load(tension: float, weight: float, tangent: np.ndarray, curvature: np.ndarray) -> float:
    """|T kappa + w (d - (d.t) t)|, vectors written out."""
    return float(np.linalg.norm(tension * curvature + weight * (DOWN - (DOWN @ tangent) * tangent)))


def tension_at_rotary(
    well: Well, friction: float, bit: float, sigma: float, tension_bit: float = 0.0, step: float = 0.25
) -> float:
    """March up in plain small steps, direction looked up anew at each."""
    edges = np.append(np.arange(0.0, bit, step), bit)
    way = well.trajectory.at(bit - 0.5 * (edges[:-1] + edges[1:]))
    weights = [buoyed_weight(c, well.fluid.typical, well.fluid.inside) for c in well.string.components]
    tension = tension_bit
    for k, (low, high) in enumerate(pairwise(edges)):
        row = int(well.string.index_at(np.array([0.5 * (low + high)]))[0])
        force = lateral_load(tension, weights[row], way.tangent[k], way.curvature[k])
        tension += (weights[row] * way.tangent[k, 2] - sigma * friction * force) * (high - low)
    return tension
