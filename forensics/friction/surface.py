"""String weight of every reading as a smooth function of the two friction factors.

The soft string is marched once on a small Chebyshev grid of factors; the fit, its Jacobian and the
draws then cost a small matrix product each, whatever the string's length.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

Floats = NDArray[np.float64]

#: Nodes a side and span of factors. exp(mu * angle) with 2 rad of bends is held to 1e-5 of its value.
NODES = 6
SPAN = (0.0, 0.8)


class OffBottom(Protocol):
    """What the calibration needs of the off-bottom model."""

    def string_weight(self, kind: str, bit_depth: Floats, mu_cased: float, mu_open: float) -> Floats:
        """Hookload of the string alone at the rotary [N]."""

    def torque(self, bit_depth: Floats, mu: float) -> Floats:
        """Torque to turn the string off bottom [N.m]."""

    def open_length(self, bit_depth: Floats) -> Floats:
        """Length of string in open hole [m]."""

    def above_rotary(self, block: Floats) -> Floats:
        """Weight of the pipe between rotary and hook [N]."""


@dataclass(frozen=True)
class ResponseSurface:
    """String weight of n readings over (cased, open) friction; coefficients of shape (n, m, m) [N]."""

    coefficients: Floats

    def at(self, cased: float, open_: float) -> tuple[Floats, Floats, Floats]:
        """Weights and their slopes against the cased and the open factor.

        Parameters
        ----------
        cased, open_ : float
            Friction factors [-].

        Returns
        -------
        weight, slope_cased, slope_open : ndarray, shape (n,)
            [N].
        """
        tc, dc = _basis(cased)
        to, do = _basis(open_)
        along = self.coefficients @ to
        return along @ tc, along @ dc, (self.coefficients @ do) @ tc


def _basis(mu: float) -> tuple[Floats, Floats]:
    """Chebyshev polynomials and their slopes at a factor."""
    half = 0.5 * (SPAN[1] - SPAN[0])
    x = (mu - SPAN[0]) / half - 1.0
    eye = np.eye(NODES)
    slopes = chebyshev.chebder(eye, axis=0)
    return chebyshev.chebval(x, eye), chebyshev.chebval(x, slopes) / half


def build_surface(model: OffBottom, kinds: tuple[str, ...], bit_depth: Floats) -> ResponseSurface:
    """March the model on the grid of factors for every reading.

    Parameters
    ----------
    model : OffBottom
    kinds : tuple of str, length n
        "pick_up", "slack_off" or "rotating".
    bit_depth : ndarray, shape (n,)
        [m].

    Returns
    -------
    ResponseSurface
    """
    nodes = chebyshev.chebpts1(NODES)
    factors = SPAN[0] + 0.5 * (nodes + 1.0) * (SPAN[1] - SPAN[0])
    inverse = np.linalg.inv(chebyshev.chebvander(nodes, NODES - 1))
    coefficients = np.zeros((len(bit_depth), NODES, NODES))
    which = np.array(kinds)
    for kind in sorted(set(kinds)):
        rows = np.flatnonzero(which == kind)
        depths = np.asarray(bit_depth, dtype=float)[rows]
        if kind == "rotating":  # no axial friction: one march serves
            coefficients[rows, 0, 0] = model.string_weight(kind, depths, factors[0], factors[0])
            continue
        grid = np.array([[model.string_weight(kind, depths, c, o) for o in factors] for c in factors])
        coefficients[rows] = np.einsum("ia,jb,abn->nij", inverse, inverse, grid)
    return ResponseSurface(coefficients)
