"""The soft string as pure functions of arrays, over the compiled marches."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.grid import HoleGrid, PipeGrid
from forensics.mechanics.kernels_march import Ask, Hole, Pipe, march_up, torque_up

Floats = NDArray[np.float64]


def hole_arrays(hole: HoleGrid) -> Hole:
    """Give the hole grid as compiled code takes it."""
    return Hole(1.0 / hole.step, hole.cos_i, hole.sin2, hole.kappa2, hole.kappa_d, hole.diameter)


def pipe_arrays(pipe: PipeGrid) -> Pipe:
    """Give the pipe grid as compiled code takes it."""
    return Pipe(pipe.x, pipe.node, pipe.weight, pipe.ei, pipe.ea, pipe.clearance_od, pipe.radius)


def tension_from_bit(
    hole: HoleGrid, pipe: PipeGrid, friction: Floats, bit_depth: float, sigma: float, tension_bit: float = 0.0
) -> tuple[Floats, Floats]:
    """March the soft string up from the bit.

    Parameters
    ----------
    hole, pipe : HoleGrid, PipeGrid
        What the hole does to pipe, and what pipe is in it.
    friction : ndarray, shape (n,)
        Friction factor at each depth of the hole grid.
    bit_depth : float
        [m]
    sigma : float
        +1 while the string moves or tends to move down, -1 up, 0 without axial friction.
    tension_bit : float
        Effective tension at the bit, compression negative [N].

    Returns
    -------
    md, tension : ndarray, shape (k,)
        Depth of the nodes from the bit up to the rotary [m], and effective tension there [N].

    Notes
    -----
    Johancsik's equations in vector form: lateral load T κ + w (d - (d·t) t), dT/ds = -w cos I + σ μ N.

    References
    ----------
    Johancsik, Friesen and Dawson (1984); Sheppard, Wick and Burgess (1987).
    """
    out = np.empty(len(pipe.x))
    mu = np.ascontiguousarray(friction, dtype=float)
    ask = Ask(float(bit_depth), float(sigma), float(tension_bit), 1.0)
    march_up(hole_arrays(hole), pipe_arrays(pipe), mu, ask, out)
    nodes = int(np.searchsorted(pipe.x, bit_depth)) + 1
    return np.maximum(bit_depth - pipe.x[:nodes], 0.0), out[:nodes]


def torque_from_bit(
    hole: HoleGrid, pipe: PipeGrid, friction: Floats, bit_depth: float, tension_bit: float = 0.0
) -> float:
    """Torque at the rotary that turns the string, bit torque left out [N.m].

    Parameters are those of `tension_from_bit`; axial friction is taken as spent on rotation.
    """
    mu = np.ascontiguousarray(friction, dtype=float)
    arrays = hole_arrays(hole), pipe_arrays(pipe)
    return float(torque_up(*arrays, mu, float(bit_depth), float(tension_bit), 1.0))
