"""The rig: block, slips, stands, pumps and top drive over the string, recording every second."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from . import core
from . import elements as el
from .hole import FIRST, STEP, Hole
from .pipe import build_elements, mark_runs, stand_elements

Floats = NDArray[np.float64]
ACCELERATION = 0.05  # m/s2: the block never jumps to its speed


@dataclass
class Demand:
    """What the driller asks for during the next second."""

    speed: float = 0.0  # block, down positive [m/s]
    rpm: float = 0.0
    pump: float = 0.0  # share of the usual flow


@dataclass
class Rig:
    """State of the rig and the string; `advance` moves it by one second."""

    settings: dict
    hole: Hole
    bit_depth: float
    height: float = 2.0
    bottom: float = 0.0
    time: float = 0.0
    dt: float = 1.0
    slips: bool = False
    logging: bool = True
    speed: float = 0.0
    rpm: float = 0.0
    pump: float = 0.0
    load_in_slips: float = 0.0
    zero: float = 0.0
    tag: str = ""
    rows: list[tuple] = field(default_factory=list)
    tags: list[str] = field(default_factory=list)

    def __post_init__(self) -> None:
        """Hang the string, at rest and without friction, with the bit near the depth given."""
        self.length = self.bit_depth + self.height
        self.elements = build_elements(self.settings, self.length)
        n = len(self.elements)
        self.nodes = np.zeros((core.NODE_ROWS, n + 1))
        self.latched = np.zeros(n, dtype=np.int64)
        planted = self.settings["planted"]
        self.keep = planted.get("trapped_torque", 0.0)
        self.block_weight = self.settings["rig"]["block_weight"] * 1e3
        self.pump_shift = planted.get("pump_shift_kN", 0.0) * 1e3
        self.table = self.hole.table.copy()
        self.bed = 0.0
        self._hang()
        self.moved = np.zeros(n + 1, dtype=bool)
        self.anchor = self.x.copy()
        self.sense = 0
        self.travel = 0.0

    def _hang(self) -> None:
        n = len(self.elements)
        self.x[n] = -self.height
        for j in range(n - 1, -1, -1):
            self.x[j] = self.x[j + 1] + self.elements[j, el.LENGTH]
        for _ in range(3):
            g = el.geometry(self.x, self.elements, self.hole.table, FIRST, STEP)
            weight = np.cumsum(g[:, el.E_WEIGHT] * g[:, el.E_COS])
            for j in range(n - 1, -1, -1):
                pull = weight[j] - 0.5 * g[j, el.E_WEIGHT] * g[j, el.E_COS]
                stretch = self.elements[j, el.COMPLIANCE] * pull
                self.x[j] = self.x[j + 1] + self.elements[j, el.LENGTH] + stretch

    @property
    def x(self) -> Floats:
        """Measured depth of every node, bit first [m]."""
        return self.nodes[core.PLACE]

    @property
    def tally_depth(self) -> float:
        """Bit depth as the rig counts it: pipe in the hole by the tally, blind to stretch."""
        return self.length + self.x[-1]

    def control(self) -> Floats:
        """Control vector of the core for the present state."""
        planted = self.settings["planted"]
        c = np.empty(11)
        c[el.TOP] = self.x[-1]
        c[el.DT] = self.dt
        c[el.TURN_RATE] = self.rpm * 2.0 * math.pi / 60.0
        c[el.BOTTOM] = self.bottom
        rate = planted["rate_m_h"] / 3600.0 * (1.0 if self.rpm > 5.0 else planted.get("slide_rate", 0.8))
        c[el.DRILL_RATE] = rate * self.formation() if self.pump > 0.5 else 0.0
        c[el.DRILL_EXPONENT] = planted.get("rate_exponent", 1.0)
        c[el.ROCK_STIFFNESS] = 5.0e7
        c[el.UNTWIST] = planted.get("untwist_m", 0.3)
        c[el.MD_FIRST] = FIRST
        c[el.MD_STEP] = STEP
        c[el.SLIDER_STIFFNESS] = planted.get("slider_stiffness", el.USUAL_SLIDER_STIFFNESS)
        return c

    def formation(self) -> float:
        """Drillability of the rock at the bit, varying slowly along the hole."""
        swing = self.settings["planted"].get("rate_variation", 0.1)
        return 1.0 + swing * math.sin(self.bottom / 11.0) * math.cos(self.bottom / 29.0)

    def advance(self, demand: Demand) -> None:
        """Move one second on and record it."""
        if demand.rpm <= 5.0 < self.rpm:
            self.nodes[core.SPENT] *= self.keep
        self.rpm, self.pump = demand.rpm, demand.pump
        change = demand.speed - self.speed
        self.speed += max(-ACCELERATION * self.dt, min(ACCELERATION * self.dt, change))
        if abs(demand.speed) < 1e-12 and abs(self.speed) < ACCELERATION * self.dt * 1.01:
            self.speed = 0.0
        block_move = self.speed * self.dt
        control = self.control()
        if not self.slips:
            control[el.TOP] = self.x[-1] + block_move
            self.height = -control[el.TOP]
        else:
            self.height -= block_move
            control[el.TURN_RATE] = 0.0
        before = self.x.copy()
        self.tension, self.geo, self.found = core.step(
            self.nodes, self.latched, self.elements, self.table, control
        )
        self.bottom = self.found[el.NEW_BOTTOM]
        self.time += self.dt
        self._feel(block_move, before)
        self._settle_cuttings(control[el.BOTTOM])
        if self.logging:
            self._record()

    def _settle_cuttings(self, bottom_before: float) -> None:
        """Let cuttings pile up with footage and be carried off by flow, faster with rotation."""
        bed = self.settings["planted"].get("bed")
        if not bed:
            return
        grown = (self.bottom - bottom_before) * bed["grow_slide" if self.rpm <= 5.0 else "grow_rotary"]
        washed = self.dt / bed["clean_s"] if self.pump > 0.5 and self.rpm > 30.0 else 0.0
        if self.found[el.BIT_LOAD] > 1e3:
            washed *= bed.get("clean_on_bottom", 0.1)
        self.bed = min(max(self.bed * (1.0 - washed) + grown, 0.0), 1.0)
        if round(self.time) % 10 == 0:
            inside = (self.hole.md > bed["top"]) & (self.hole.md < bed["bottom"])
            lumps = 1.0 + 0.35 * np.sin(self.hole.md / 9.0) * np.sin(self.hole.md / 31.0)
            extra = (bed["factor"] - 1.0) * self.bed * lumps
            self.table[:, el.MU] = self.hole.table[:, el.MU] * np.where(inside, 1.0 + extra, 1.0)

    def plain_drag(self) -> float:
        """Find what the hook carries beyond everyday friction, while all of the string slides [N]."""
        if self.slips or self.rpm > 5.0 or self.found[el.BIT_LOAD] > 0.0 or abs(self.speed) < 0.02:
            return float("nan")
        if self.reach < self.x[0] - 0.1 or self.latched.max() > 0:
            return float("nan")
        sign = 1.0 if self.speed > 0.0 else -1.0
        usual = el.steady(self.x, self.elements, self.hole.table, self.control(), sign)
        return float(self.string_weight - usual)

    def usual_torque(self) -> float:
        """Friction torque that everyday friction would take now, while turning without travel [N.m]."""
        if self.slips or self.rpm < 30.0 or abs(self.speed) > 0.02 or self.latched.max() == 2:
            return float("nan")
        table = self.hole.table
        return float(el.turning_torque(self.x, self.tension, self.elements, table, self.control()))

    def slack(self) -> float:
        """Find the block travel that only turns a full pick-up into a full slack-off, moving no bit [m]."""
        if self.slips or self.rpm > 5.0:
            return 0.0
        return float(el.slack(self.x, self.elements, self.table, self.control()))

    def _feel(self, block_move: float, before: Floats) -> None:
        """Keep track of how deep the last surface motion has been felt."""
        if self.slips:
            return
        sense = int(np.sign(block_move)) if abs(block_move) > 2e-4 else 0
        if self.rpm > 5.0 or (sense and sense != self.sense):
            self.anchor = before
            self.moved[:] = self.rpm > 5.0
            self.sense = sense or self.sense
        self.moved |= np.abs(self.x - self.anchor) > 1.5e-4

    @property
    def reach(self) -> float:
        """Depth down to which every node has moved since the last reversal."""
        still = np.nonzero(~self.moved[:-1])[0]
        return float(self.x[0] if len(still) == 0 else self.x[still[-1] + 1])

    @property
    def hookload(self) -> float:
        """True pull on the hook [N]."""
        if self.slips:
            return self.block_weight + self.load_in_slips
        lift = self.pump_shift if self.pump > 0.3 else 0.0
        return self.found[el.TOP_TENSION] + self.block_weight + lift

    @property
    def string_weight(self) -> float:
        """True tension at the hook, pump shift left out [N]."""
        return self.found[el.TOP_TENSION]

    def hookload_at_rest(self) -> float:
        """Frictionless hanging weight of the string [N]."""
        g = el.geometry(self.x, self.elements, self.hole.table, FIRST, STEP)
        return float((g[:, el.E_WEIGHT] * g[:, el.E_COS]).sum())

    def _record(self) -> None:
        loads = el.survey_loads(self.tension, self.geo, self.elements, self.x)
        spans = [np.nan] * 4
        for k, level in enumerate((1, 2)):
            places = np.nonzero(self.latched >= level)[0]
            if len(places):
                spans[2 * k] = self.x[places[-1] + 1]
                spans[2 * k + 1] = self.x[places[0]]
        bit = self.found[el.BIT_LOAD]
        bit_torque = 0.0
        if bit > 0.0 and self.rpm > 5.0:
            bit_torque = bit * self.settings["planted"].get("bit_torque_m", 0.03)
        self.rows.append(
            (
                self.time, self.height, self.tally_depth, self.x[0], self.bottom, self.hookload,
                self.string_weight, bit, self.found[el.FRICTION_TORQUE] + bit_torque, self.rpm, self.pump,
                float(self.slips), loads[3], loads[0], loads[1], loads[2], float(self.latched.max()),
                *spans, self.reach, self.found[el.RESIDUAL], self.zero, self.length,
                self.plain_drag(),
                self.usual_torque(), self.found[el.FRICTION_TORQUE], self.bed, self.slack(),
            )
        )  # fmt: skip
        self.tags.append(self.tag)

    def add_stand(self) -> None:
        """Screw one stand onto the string while it hangs in slips."""
        rows = stand_elements(self.settings, self.length)
        top = self.x[-1]
        pull = max(float(self.tension[-1]), 0.0)
        added = top - np.cumsum(rows[:, el.LENGTH] + rows[:, el.COMPLIANCE] * pull)
        self._resize(np.vstack([self.elements, rows]), np.append(self.x, added))
        self.length += float(rows[:, el.LENGTH].sum())
        self.height = -self.x[-1]

    def drop_stand(self) -> None:
        """Break one stand out while the string hangs in slips."""
        count = self.settings["rig"].get("elements_per_stand", 1)
        self.length -= float(self.elements[-count:, el.LENGTH].sum())
        self._resize(self.elements[:-count], self.x[:-count])
        self.height = -self.x[-1]

    def _resize(self, elements: Floats, x: Floats) -> None:
        n, old = len(elements), len(self.elements)

        def fit(values: NDArray, size: int) -> NDArray:
            grown = np.zeros(size, dtype=values.dtype)
            grown[: min(size, len(values))] = values[:size]
            return grown

        self.nodes = np.array([fit(row, n + 1) for row in self.nodes])
        self.nodes[core.PLACE] = x
        self.latched, self.moved = fit(self.latched, n), fit(self.moved, n + 1)
        if n > old:
            self.moved[old:] = True
        self.elements = elements.copy()
        mark_runs(self.elements)
        self.anchor = self.x.copy() if n < old else np.append(self.anchor, self.x[old + 1 :])


COLUMNS = (
    "time", "block", "tally_depth", "bit_true", "bottom_true", "hookload", "string_weight", "bit_load",
    "torque", "rpm", "pump", "slips", "hanging", "ratio", "ratio_md", "compression", "state",
    "top", "bottom", "helical_top", "helical_bottom", "reach", "residual", "zero", "tally", 
    "drag", "usual_torque", "friction_torque", "bed", "slack",
)  # fmt: skip
