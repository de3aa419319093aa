"""Troubles that add drag all along a stretch: higher friction, cuttings, a crooked hole."""

from __future__ import annotations

import numpy as np

from .. import core
from ..elements import T_DOWN
from ..hole import wander
from .rig import TroubledRig
from .trouble import Trouble

HEAVY_NODES = 4  # nodes from the bit up that count as the stiff, large part of the string


class HigherFriction(Trouble):
    """Mud changed or lubricant lost: contact holds more, everywhere the new mud has come to."""

    cause = "friction higher than assumed"
    passes = False

    def place(self, rig: TroubledRig) -> None:
        """Decide how much, how fast, and whether the casing takes part."""
        self.gain = 0.15 + 1.1 * self.size * self.rng.uniform(0.8, 1.2)
        self.ramp = self.rng.uniform(300.0, 2400.0)
        self.cased = bool(self.rng.uniform() < 0.5)
        self.all_along = bool(self.rng.uniform() < 0.3)
        self.new_mud = not self.all_along and self.rng.uniform() < 0.4
        self.shift = float(self.rng.uniform(-60.0, 90.0)) if self.new_mud else 0.0
        self.top, self.bottom = (0.0 if self.cased else rig.hole.shoe), rig.hole.total_depth
        self.level = 0.0
        self.where = (rig.hole.md >= self.top).astype(float)
        if self.all_along:
            told = rig.settings["case"]
            planted = rig.settings["planted"]
            told["assumed"] = {k: round(planted[f"friction_{k}"], 2) for k in ("cased", "open")}
            if self.rng.uniform() < 0.75:
                told["assumed"]["fixed"] = "true"
            self.on, self.level = True, 1.0
            self._spread(rig)

    def after(self, rig: TroubledRig) -> None:
        """Let it come on: with time, or as far as the new mud was pumped."""
        if self.on and self.level < 1.0 and (rig.pump > 0.3 or not self.new_mud):
            self.level = min(1.0, self.level + rig.dt / self.ramp)
            rig.density_shift = self.shift * min(1.0, 4.0 * self.level)
            if rig.tenth:
                self._spread(rig)
        self.felt = self.on and self.level > 0.25 and not rig.slips

    def _spread(self, rig: TroubledRig) -> None:
        level = self.level
        share = np.full(len(rig.hole.md), level)
        if self.new_mud and self.physics.bed == "dunes":  # the front of the mud comes up the annulus
            share = (rig.hole.md > rig.x[0] * (1.0 - level)).astype(float)
        rig.renew_friction(self.cause, 1.0 + self.gain * share * self.where)


class Cuttings(Trouble):
    """A bed of cuttings: grows with footage, most while sliding; goes with rotation and flow."""

    cause = "poor hole cleaning"
    passes = False

    def place(self, rig: TroubledRig) -> None:
        """Lay down what was left by the hours before."""
        rng, hole = self.rng, rig.hole
        angle = np.degrees(hole.inclination)
        self.prone = np.exp(-(((angle - 52.0) / 20.0) ** 2)) + 0.45 * (angle > 68.0)
        self.prone *= (hole.md > hole.shoe - 60.0) & (hole.md < hole.total_depth)
        self.level = self.prone * rng.uniform(0.3, 0.8) * (1.0 + 0.3 * wander(hole.md, rng, 90.0)).clip(0.1)
        self.level = self.level.clip(0.0, 1.0)
        self.gain = 0.15 + 0.65 * self.size
        self.force = (0.03 + 0.26 * self.size) * rig.hookload_at_rest()
        self.clean = rng.uniform(500.0, 1500.0)
        self.grow = rng.uniform(0.02, 0.06)
        self.choke = rng.uniform(0.02, 0.09) * (0.3 + self.size)
        self.gathered = self.rough = self.mean = 0.0
        self.last_bottom, self.last_bit = rig.bottom, rig.x[0]
        self.on = True
        self._spread(rig)

    def at_bit(self, rig: TroubledRig) -> float:
        """Bed around the stiff part of the string."""
        return float(np.interp(rig.x[0] - 15.0, rig.hole.md, self.level))

    def act(self, rig: TroubledRig) -> None:
        """Plough through it: much going up, little going down."""
        self.rough = 0.93 * self.rough + 0.37 * self.rng.normal()
        lumps = max(0.2, 1.0 + 0.45 * self.rough)
        up = self.force * (0.35 * self.at_bit(rig) + 0.9 * self.gathered) * lumps
        last = min(HEAVY_NODES, rig.x.size - 1)
        rig.nodes[core.UP, :last] += up / last
        rig.nodes[core.DOWN, :last] += 0.22 * up / last
        level = self.mean
        rig.torque_rough += 0.5 * self.size * level
        rig.torque_extra += (0.02 * up * lumps) if rig.rpm > 5.0 else 0.0
        blocked = self.choke * level * (1.0 + 0.25 * self.rough) + 0.25 * self.choke * self.gathered
        rig.pressure_share += max(0.0, blocked)
        rig.flow_share *= 1.0 - 0.1 * level * self.size

    def after(self, rig: TroubledRig) -> None:
        """Settle with footage, carry off with flow and rotation, gather ahead of what is pulled."""
        move = rig.x[0] - self.last_bit
        self.last_bit = rig.x[0]
        if abs(move) < 2.0:
            if move < 0.0:
                self.gathered = min(1.0, self.gathered - move * self.at_bit(rig) / 60.0)
            else:
                self.gathered = max(0.0, self.gathered - move / 20.0)
        stirred = 1.0 if rig.rpm > 30.0 else 0.06
        flowing = rig.pump > 0.5 and not rig.slips
        if flowing:
            self.gathered *= 1.0 - rig.dt * stirred / (0.35 * self.clean)
        if rig.tenth:
            self._bed(rig, 10.0 * stirred * flowing)
        self.felt = self.size * self.mean > 0.08 and not rig.slips

    def _bed(self, rig: TroubledRig, seconds: float) -> None:
        grown = (rig.bottom - self.last_bottom) * self.grow * (1.0 if rig.rpm < 5.0 else 0.25)
        self.last_bottom = rig.bottom
        near = self.prone * (rig.hole.md < rig.x[0])
        if self.physics.bed == "saturating":
            self.level = (self.level + grown * near) * (1.0 - 0.7 * seconds / self.clean)
        else:  # dunes: the deeper cuttings go, the slower; what is stirred moves up the hole
            self.level = self.level + grown * near * (1.0 - self.level) ** 2
            self.level = self.level - 0.45 * seconds / self.clean * np.sqrt(self.level.clip(0.0))
            share = min(0.5, seconds / 60.0)
            self.level[:-1] += share * (self.level[1:] - self.level[:-1])
        self.level = self.level.clip(0.0, 1.0)
        self._spread(rig)

    def _spread(self, rig: TroubledRig) -> None:
        open_hole = (rig.hole.md > rig.hole.shoe) & (rig.hole.md < rig.x[0])
        self.mean = float(self.level[open_hole].mean()) if open_hole.any() else 0.0
        rig.renew_friction(self.cause, 1.0 + self.gain * self.level)
        inside = self.level > 0.1
        if inside.any() and not np.isfinite(self.top):
            self.top, self.bottom = float(rig.hole.md[inside][0]), float(rig.hole.md[inside][-1])


class Tortuous(Trouble):
    """A crooked stretch that the survey does not show: drag at the same depths on each pass."""

    cause = "tortuosity or ledges"
    passes = False

    def __init__(self, *args: object, depth: float = 0.0, **kwargs: object) -> None:
        super().__init__(*args, **kwargs)
        self.depth = depth

    def place(self, rig: TroubledRig) -> None:
        """Bend the hole and remember the pattern that the stiff part feels."""
        rng, hole = self.rng, rig.hole
        self.top = self.depth
        self.bottom = self.top + rng.uniform(60.0, 260.0)
        inside = (np.minimum(hole.md - self.top, self.bottom - hole.md) / 15.0).clip(0.0, 1.0)
        length = rng.uniform(65.0, 110.0) if self.physics.per_stand == 1 else rng.uniform(100.0, 170.0)
        bend = np.radians(0.3 + 1.4 * self.size) * inside
        inc = np.abs(hole.inclination + bend * wander(hole.md, rng, length))
        azi = hole.azimuth + bend * wander(hole.md, rng, length) / np.maximum(np.sin(inc), 0.3)
        hole.table[:, 0], hole.table[:, 1] = np.sin(inc) * np.cos(azi), np.sin(inc) * np.sin(azi)
        hole.table[:, T_DOWN] = np.cos(inc)
        hole.table[hole.md <= 0.0, :3] = (0.0, 0.0, 1.0)
        hole.inclination[:], hole.azimuth[:] = inc, azi
        self.pattern = inside * (0.5 + 0.5 * np.abs(wander(hole.md, rng, rng.uniform(12.0, 40.0))))
        self.force = (0.06 + 0.26 * self.size) * rig.hookload_at_rest()
        rig.table[:, :3] = hole.table[:, :3]
        rig.renew_friction(self.cause, 1.0 + 0.5 * self.size * inside)
        self.on = True

    def act(self, rig: TroubledRig) -> None:
        """Hold the stiff part where the hole is worst, both ways."""
        last = min(HEAVY_NODES, rig.x.size - 1)
        for k in range(last):
            tight = float(np.interp(rig.x[k], rig.hole.md, self.pattern))
            rig.nodes[core.UP, k] += self.force / last * tight
            rig.nodes[core.DOWN, k] += 0.8 * self.force / last * tight
        rig.torque_extra += 0.03 * float(rig.nodes[core.UP, :last].sum()) if rig.rpm > 5.0 else 0.0

    def after(self, rig: TroubledRig) -> None:
        """Show once the stiff part has reached it, whenever the string moves or turns."""
        moving = rig.rpm > 5.0 or abs(rig.speed) > 0.01
        self.felt = rig.x[0] > self.top and moving and not rig.slips
