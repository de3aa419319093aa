"""A plain planar well, marched by a string of its own, and readings of it whose truth is known."""

from __future__ import annotations

import copy
from dataclasses import dataclass
from pathlib import Path
from types import SimpleNamespace

import numpy as np

from forensics.case import Case, FluidSettings, FrictionSettings, LogSettings, RigSettings
from forensics.estimate import Estimate
from forensics.friction.result import Reading
from forensics.mechanics.offbottom import Weighed

SHOE = 1900.0
KICK_OFF, BUILT, LAST = 1500.0, 2100.0, np.radians(86.0)


@dataclass(frozen=True)
class PlainString:
    """Vertical, build, lateral; weight w [N/m]; `vary` makes friction wander along the hole."""

    w: float = 260.0
    vary: float = 0.0
    step: float = 60.0
    edges: tuple = ()

    def string_weight(self, kind, bit_depth, mu_cased, *mu_open):
        """March from the bit up, every reading at once [N]."""
        mu_open = mu_open * (len(self.edges) + 1 if len(mu_open) == 1 else 1)
        sign = {"pick_up": 1.0, "slack_off": -1.0, "rotating": 0.0}[kind]
        bit = np.asarray(bit_depth, dtype=float)
        n = int(np.ceil(bit.max() / self.step))
        h = bit.max() / n
        tension = np.zeros(len(bit))
        for i in range(n, 0, -1):
            middle = (i - 0.5) * h
            part = np.clip((bit - (i - 1) * h) / h, 0.0, 1.0)
            angle = np.clip((middle - KICK_OFF) / (BUILT - KICK_OFF), 0.0, 1.0) * LAST
            bend = LAST / (BUILT - KICK_OFF) if KICK_OFF < middle < BUILT else 0.0
            here = mu_open[np.searchsorted(self.edges, middle)]
            mu = (mu_cased if middle < SHOE else here) * (1.0 + self.vary * np.sin(middle / 25.0))
            contact = np.abs(tension * bend - self.w * np.sin(angle))
            tension = tension + part * h * (self.w * np.cos(angle) + sign * mu * contact)
        return tension

    def divided(self, edges):
        """Cut the open hole at depths."""
        other = copy.copy(self)
        object.__setattr__(other, "edges", tuple(edges))
        return other

    def weigh_readings(self, kinds, bit_depth, factors):
        """Weights and slopes by small differences: slow and plain."""
        bit, kinds = np.asarray(bit_depth, dtype=float), np.array(kinds)

        def weigh(at):
            out = np.zeros(len(bit))
            for kind in set(kinds.tolist()):
                out[kinds == kind] = self.string_weight(kind, bit[kinds == kind], *at)
            return out

        steps = np.eye(len(factors)) * 1e-4
        weight = weigh(factors)
        slopes = np.column_stack([(weigh(np.array(factors) + step) - weight) / 1e-4 for step in steps])
        return Weighed(weight, slopes, weight)

    def torque(self, bit_depth, mu):
        """Torque that grows with the pipe beyond the kick-off [N.m]."""
        bit = np.asarray(bit_depth, dtype=float)
        side = np.interp(bit, [0.0, KICK_OFF, BUILT, 9000.0], [0.0, 0.0, 4.0e5, 4.0e5 + 6900.0 * self.w])
        return mu * 0.08 * side

    def open_length(self, bit_depth):
        """Pipe below the shoe [m]."""
        return np.maximum(np.asarray(bit_depth) - SHOE, 0.0)

    def string_weights(self, kind, bit_depth, mu_cased, mu_open):
        """Weigh at pairs of factors [N]."""
        pairs = zip(mu_cased, mu_open, strict=True)
        return np.array([self.string_weight(kind, bit_depth, c, o) for c, o in pairs])

    def slack_off_ratio(self, bit_depth, cased, open_):
        """Nothing buckles here [-]."""
        del cased, open_
        return np.zeros(len(np.atleast_1d(bit_depth)))

    def above_rotary(self, block, bit_depth):
        """Pipe in the derrick [N]."""
        del bit_depth
        return 300.0 * np.asarray(block)


def make_case(**changes):
    here = Path("case.toml")
    settings = {"rig": RigSettings(), "friction": FrictionSettings()} | changes
    return Case(
        here, "x", "x", LogSettings((here,)), here, here, here, FluidSettings(density=1300.0), **settings
    )


def make_well(friction=(np.nan, np.nan)):
    hole = SimpleNamespace(
        top=np.array([0.0, SHOE]),
        bottom=np.array([SHOE, 5000.0]),
        kind=("cased", "open"),
        friction=np.array(friction),
        shoe=SHOE,
    )
    return SimpleNamespace(hole=hole)


def make_rig(block=300.0e3, half=3.0e3, determined=True):
    return SimpleNamespace(
        block_weight=Estimate(block, block - half, block + half, "in-slips plateau", determined),
        pump_shift=None,
        breakover=None,
        noise={"hookload": 700.0},
    )


def make_readings(
    truth, depths, factors, kinds=("pick_up", "slack_off", "rotating"), noise=1500.0, block=301.0e3
):
    """Make readings of the truth at (cased, open) factors with noise [N]."""
    rng = np.random.default_rng(7)
    depths = np.asarray(depths, dtype=float)
    made = []
    for kind in kinds:
        weight = truth.string_weight(kind, depths, *factors)
        height = rng.uniform(5.0, 30.0, len(depths))
        value = block + truth.above_rotary(height, depths) + weight + rng.normal(0.0, noise, len(depths))
        made += [
            Reading(kind, 1000.0 * i, 1000.0 * i + 30.0, d, h, v, 700.0, 30, pumping=False)
            for i, (d, h, v) in enumerate(zip(depths, height, value, strict=True))
        ]
    return tuple(made)


TRUTH = (0.22, 0.31)
RUN = np.concatenate([np.arange(900.0, 1900.0, 120.0), np.arange(1950.0, 4500.0, 90.0)])


def factors(calibration):
    return {s.kind: s.factor for s in calibration.sections}
