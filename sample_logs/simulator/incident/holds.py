"""Troubles that hold the string both ways: differential sticking, pack-off."""

from __future__ import annotations

import math

import numpy as np

from .. import core
from ..rig import Demand
from .rig import TroubledRig
from .trouble import Trouble

ARM = 0.085  # m: at which a hold on the large part of the string resists turning


class Holding(Trouble):
    """What the two have in common: a hold that also resists turning, to a stall where it is strong."""

    hold = 0.0
    wound = 0.0

    def ask(self, rig: TroubledRig, demand: Demand) -> Demand:
        """Stall the top drive where the hold is stronger than it."""
        wants = demand.rpm > 5.0 and not rig.slips
        free = float(rig.found[3]) if hasattr(rig, "found") and rig.rpm > 5.0 else 4.0e3
        weak = 0.7 if self.wound > 0.0 else 1.0  # once it stands it takes less to hold it
        if wants and self.hold * ARM + free > weak * rig.top_drive:
            self.wound = min(rig.top_drive, self.wound + 1.5e3 * rig.dt)
            return Demand(demand.speed, 0.0, demand.pump)
        self.wound = max(0.0, self.wound - 4.0e3 * rig.dt) if self.hold > 0.0 else 0.0
        return demand

    def axial(self) -> float:
        """Give what is left of the hold along the hole while torque is wound into it [N]."""
        return math.sqrt(max(self.hold**2 - (self.wound / ARM) ** 2, (0.2 * self.hold) ** 2))


class Sticking(Holding):
    """The string sucked to a permeable bed while it stood still; flow stays full."""

    cause = "differential sticking"

    def settle(self, rig: TroubledRig) -> None:
        """Let the bed be where the stiff part of the string now is."""
        self.top = max(rig.hole.shoe, float(rig.x[0]) - self.rng.uniform(60.0, 220.0))
        self.bottom = float(rig.x[0]) + self.rng.uniform(5.0, 70.0)

    def place(self, rig: TroubledRig) -> None:
        """Set how strongly and how fast the cake holds."""
        self.most = (0.08 + 0.55 * self.size) * self.rng.uniform(1.0, 1.5) * rig.hookload_at_rest()
        self.smear = self.rng.uniform(0.05, 0.8)  # m: over which it lets go
        self.tau = self.rng.uniform(240.0, 900.0)
        self.still, self.slip, self.on, self.loaded = 0.0, 0.0, True, False
        self.weaken, self.ease = 1.0, self.rng.uniform(250.0, 1500.0)  # s of working it

    def _nodes(self, rig: TroubledRig) -> np.ndarray:
        inside = (rig.x > self.top) & (rig.x < self.bottom)
        inside[8:] = False
        return np.nonzero(inside)[0]

    def act(self, rig: TroubledRig) -> None:
        """Hold the nodes that lie in the bed."""
        nodes = self._nodes(rig)
        if self.physics.cake == "exponential":
            grown = 1.0 - math.exp(-self.still / self.tau)
        else:
            grown = min(1.2, math.sqrt(self.still / (4.0 * self.tau)))
        share = min(1.0, 0.35 + 0.65 * len(nodes) / 4.0) if len(nodes) else 0.0
        self.hold = self.most * grown * share * self.weaken * max(0.0, 1.0 - self.slip / self.smear)
        if self.hold > 0.0:
            rig.nodes[core.UP, nodes] += self.axial() / len(nodes)
            rig.nodes[core.DOWN, nodes] += self.axial() / len(nodes)
            rig.torque_extra += self.wound if rig.rpm <= 5.0 else 0.0

    def after(self, rig: TroubledRig) -> None:
        """Count the time stood still; let go once the string has slipped a little."""
        nodes = self._nodes(rig)
        moved = float(np.abs(rig.x - rig._before)[nodes].max()) if rig.has_moved and len(nodes) else 0.0
        holding = self.hold > 12.0e3
        self.loaded = holding and (self.loaded or abs(rig.speed) > 0.005 or self.wound > 2.0e3)
        self.felt = self.loaded and not rig.slips
        if len(nodes) == 0 or (rig.rpm > 5.0 and not rig.slips):
            self.still = 0.0
        elif moved > 3.0e-4:
            self.slip += moved
            if self.slip > self.smear:
                self.still = self.slip = 0.0
        else:
            self.still += rig.dt
            worked = holding and (self.wound > 2.0e3 or abs(rig.speed) > 0.005)
            self.weaken *= 1.0 - rig.dt / self.ease if worked else 1.0


class PackOff(Holding):
    """Solids close the annulus: pressure jumps, returns fall, the string is held up, down and round."""

    cause = "pack-off"

    def place(self, rig: TroubledRig) -> None:
        """Set how tight it gets."""
        rng = self.rng
        self.most = (0.08 + 0.7 * self.size) * rig.hookload_at_rest() * rng.uniform(0.8, 1.2)
        self.extra = (6.0 + 80.0 * self.size) * 1e5 * rng.uniform(0.7, 1.3)
        self.shut = min(0.92, 0.1 + 0.8 * self.size)
        self.rise = rng.uniform(5.0, 40.0)
        self.ease, self.wash = rng.uniform(12.0, 40.0), rng.uniform(400.0, 1500.0)  # m, s
        self.level = self.goal = self.rough = self.last_pump = 0.0

    def begin(self, rig: TroubledRig) -> None:
        """Close it."""
        super().begin(rig)
        self.goal = 1.0
        self.top, self.bottom = float(rig.x[min(6, rig.x.size - 1)]), float(rig.x[0])

    def ripe(self, rig: TroubledRig) -> bool:
        """Close as the string comes up, or soon after the pumps were started."""
        started = self.last_pump < 0.5 <= rig.pump
        self.last_pump = rig.pump
        return not rig.slips and (rig.speed < -0.08 or started) and rig.x[0] > rig.hole.shoe + 5.0

    def act(self, rig: TroubledRig) -> None:
        """Hold both ways, choke the flow."""
        self.hold = self.most * self.level
        if self.hold <= 0.0:
            return
        self.rough = 0.9 * self.rough + 0.43 * self.rng.normal()
        last = min(5, rig.x.size - 1)
        rig.nodes[core.UP, :last] += self.axial() / last * max(0.3, 1.0 + 0.15 * self.rough)
        rig.nodes[core.DOWN, :last] += 0.8 * self.axial() / last
        rig.torque_extra += self.wound if rig.rpm <= 5.0 else self.hold * 0.03 * max(0.1, 1.0 + self.rough)
        rig.pressure_extra += self.extra * self.level * rig.pump * max(0.4, 1.0 + 0.15 * self.rough)
        rig.flow_share *= 1.0 - self.shut * self.level

    def after(self, rig: TroubledRig) -> None:
        """Close within seconds; open as it is worked and washed."""
        if not self.on:
            return
        if self.level < self.goal:
            self.level = min(self.goal, self.level + rig.dt / self.rise)
        if self.level >= 0.99 * self.goal:
            moved = abs(rig.x[0] - rig._before[0]) if rig.has_moved else 0.0
            worked = moved / self.ease + rig.dt / self.wash * (rig.pump > 0.1)
            worked += rig.dt / (0.4 * self.wash) * (rig.rpm > 5.0)
            self.goal = self.level = self.level * (1.0 - min(worked, 0.5))
            if self.level < 0.08:
                self.level = self.goal = 0.0
        self.felt = self.level > 0.0 and not rig.slips and (abs(rig.speed) > 0.005 or rig.pump > 0.1)
