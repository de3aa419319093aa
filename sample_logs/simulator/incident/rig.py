"""The rig of an incident: troubles stand in its way, and quiet time costs nothing."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np

from .. import core
from .. import elements as el
from ..hole import FIRST, STEP
from ..pipe import build_elements
from ..rig import ACCELERATION, Demand, Rig
from .physics import ONE, Physics
from .trouble import Trouble


@dataclass
class Obstacle:
    """Something solid that the bit meets before bottom."""

    depth: float
    stiffness: float = 2.0e7
    rate: float = 0.0  # how fast it gives under the reference load [m/s]


@dataclass
class TroubledRig(Rig):
    """A rig with troubles; keeps a leaner record than its parent."""

    physics: Physics = ONE
    static_grip: float = 0.0
    top_drive: float = 45.0e3  # N.m
    troubles: list[Trouble] = field(default_factory=list)
    obstacle: Obstacle | None = None
    ended: float = math.inf
    pressure_extra: float = 0.0  # Pa
    pressure_share: float = 0.0  # of the usual
    torque_extra: float = 0.0  # N.m
    torque_rough: float = 0.0  # share of it that comes and goes
    flow_share: float = 1.0
    stalled: bool = False
    density_shift: float = 0.0
    idle: int = 0

    def __post_init__(self) -> None:
        """Hang the string and make room for what stands in its way."""
        super().__post_init__()
        self.factors: dict[str, np.ndarray] = {}
        self.at_rest = np.zeros(self.x.size)
        self.obstacle_load = 0.0
        self.drag = self.usual = float("nan")

    def relocate(self, bit_depth: float, hours: float) -> None:
        """Go on somewhere else, hours later: what lies between was not logged."""
        self.bit_depth, self.length = bit_depth, bit_depth + self.height
        self.elements = build_elements(self.settings, self.length)
        n = len(self.elements)
        self.nodes = np.zeros((core.NODE_ROWS, n + 1))
        self.latched = np.zeros(n, dtype=np.int64)
        self._hang()
        self.moved, self.anchor = np.zeros(n + 1, dtype=bool), self.x.copy()
        self.at_rest = np.zeros(n + 1)
        self.sense, self.idle = 0, 0
        self.time += round(hours * 3600.0)

    def advance_first(self) -> None:
        """Let the string come to rest, unlogged."""
        self.logging = False
        self.advance(Demand())
        self.logging = True

    def control(self) -> np.ndarray:
        """Control vector of the core, an obstacle standing for the bottom where it comes first."""
        c = super().control()
        block = self.obstacle
        if block is not None and block.depth < self.bottom:
            c[el.BOTTOM], c[el.ROCK_STIFFNESS], c[el.DRILL_RATE] = block.depth, block.stiffness, block.rate
        elif self.stalled:
            c[el.DRILL_RATE] = 0.0
        return c

    def advance(self, demand: Demand) -> None:
        """Move one second on and record it."""
        for trouble in self.troubles:
            demand = trouble.ask(self, demand)
        self._stand_in_the_way()
        self._drive(demand)
        self.time += self.dt
        for trouble in self.troubles:
            trouble.after(self)
            trouble.note(self)
        if self.logging:
            self._record()

    def _stand_in_the_way(self) -> None:
        self.nodes[core.UP : core.DOWN + 1] = 0.0
        self.pressure_extra = self.pressure_share = self.torque_extra = self.torque_rough = 0.0
        self.flow_share, self.stalled, self.obstacle = 1.0, False, None
        for trouble in self.troubles:
            trouble.act(self)
        if self.static_grip:
            aged = 1.0 + self.physics.ageing * np.log1p(self.at_rest)
            self.nodes[core.GRIP] = self.static_grip * aged * np.exp(-self.pace / self.physics.grip_speed)

    @property
    def pace(self) -> np.ndarray:
        """Speed of every node over the last step, that of turning included [m/s]."""
        sweep = self.rpm * 0.105 * 0.07
        return np.hypot((self.x - self._before) / self.dt, sweep) if self.has_moved else np.zeros(self.x.size)

    @property
    def has_moved(self) -> bool:
        """Whether the last step kept the same nodes as now."""
        return getattr(self, "_before", None) is not None and self._before.size == self.x.size

    def _drive(self, demand: Demand) -> None:
        if demand.rpm <= 5.0 < self.rpm:
            self.nodes[core.SPENT] *= self.keep
        if self.physics.unwinding == "creeping" and self.rpm <= 5.0:
            self.nodes[core.SPENT] *= 1.0 - self.dt / 240.0
        same = demand.rpm == self.rpm and demand.pump == self.pump
        still = same and demand.speed == 0.0 and self.speed == 0.0
        self.rpm, self.pump = demand.rpm, demand.pump
        change = demand.speed - self.speed
        self.speed += max(-ACCELERATION * self.dt, min(ACCELERATION * self.dt, change))
        if abs(demand.speed) < 1e-12 and abs(self.speed) < ACCELERATION * self.dt * 1.01:
            self.speed = 0.0
        self.idle = self.idle + 1 if still and self.found_nothing else 0
        if self.has_moved:
            self.at_rest = np.where(self.pace > 1e-4, 0.0, self.at_rest + self.dt)
        if self.slips:
            self.height -= self.speed * self.dt
        if (self.slips or self.idle > 4) and hasattr(self, "found"):
            self._before = self.x.copy()
            return
        self._solve(self.speed * self.dt)

    @property
    def found_nothing(self) -> bool:
        """Whether nothing drills: then a string at rest stays as it is."""
        return hasattr(self, "found") and self.found[el.BIT_LOAD] <= 0.0

    def _solve(self, block_move: float) -> None:
        control = self.control()
        control[el.TOP] = self.x[-1] + block_move
        self.height = -control[el.TOP]
        before = self.x.copy()
        self.tension, self.geo, self.found = core.step(
            self.nodes, self.latched, self.elements, self.table, control
        )
        self._before = before
        self.obstacle_load = 0.0
        if self.obstacle is not None and self.obstacle.depth < self.bottom:
            self.obstacle_load = float(self.found[el.BIT_LOAD])
            self.obstacle.depth = float(self.found[el.NEW_BOTTOM])
        else:
            self.bottom = self.found[el.NEW_BOTTOM]
        self._feel(block_move, before)

    def renew_friction(self, cause: str, factor: np.ndarray) -> None:
        """Put one trouble's factor, beside the others', on the friction of the hole."""
        self.factors[cause] = factor
        self.table[:, el.MU] = self.hole.table[:, el.MU] * np.prod(list(self.factors.values()), axis=0)

    @property
    def bit_load(self) -> float:
        """Load on the bit from bottom [N]."""
        return 0.0 if self.obstacle_load > 0.0 else float(self.found[el.BIT_LOAD])

    @property
    def stuck_share(self) -> float:
        """Largest extra hold on a node [N]."""
        return float(self.nodes[core.UP].max())

    def _compare(self) -> None:
        """Compare hook and top drive with everyday friction, now and then."""
        self.drag = self.usual = float("nan")
        if self.slips or round(self.time) % 3:
            return
        c = self.control()
        if self.rpm > 20.0 and abs(self.speed) < 0.02:
            self.usual = float(el.turning_torque(self.x, self.tension, self.elements, self.hole.table, c))
        if self.rpm <= 5.0 and abs(self.speed) > 0.02 and self.bit_load <= 0.0:
            sign = 1.0 if self.speed > 0.0 else -1.0
            slides = self.has_moved and abs(self.x[0] - self._before[0]) > 0.3 * abs(self.speed) * self.dt
            if slides or self.stuck_share > 0.0 or self.obstacle_load > 0.0:
                plain = el.steady(self.x, self.elements, self.hole.table, c, sign)
                self.drag = float(self.string_weight - plain)

    def _record(self) -> None:
        loads = el.survey_loads(self.tension, self.geo, self.elements, self.x)
        places = np.nonzero(self.latched >= 1)[0]
        span = (self.x[places[-1] + 1], self.x[places[0]]) if len(places) else (np.nan, np.nan)
        self._compare()
        load = self.bit_load
        twist = load * self.settings["planted"].get("bit_torque_m", 0.03) if self.rpm > 5.0 else 0.0
        torque = (self.found[el.FRICTION_TORQUE] + twist + self.torque_extra) if not self.slips else 0.0
        self.rows.append(
            (
                self.time, self.height, self.tally_depth, self.x[0], self.bottom, self.hookload,
                self.string_weight, load, torque, self.rpm, self.pump, float(self.slips), loads[3], loads[0],
                loads[1], float(self.latched.max()), *span, self.zero, self.drag, self.usual,
                self.found[el.FRICTION_TORQUE], self.pressure_extra, self.pressure_share, self.torque_rough,
                self.flow_share, float(self.stalled), self.obstacle_load, self.density_shift,
                self.found[el.RESIDUAL],
            )
        )  # fmt: skip
        self.tags.append(self.tag)

    def _resize(self, elements: np.ndarray, x: np.ndarray) -> None:
        super()._resize(elements, x)
        n = len(elements)
        grown = np.zeros(n + 1)
        grown[: min(n + 1, self.at_rest.size)] = self.at_rest[: n + 1]
        self.at_rest, self._before = grown, None
        self.geo = el.geometry(self.x, self.elements, self.table, FIRST, STEP)
        keep = np.zeros(n)
        keep[: min(n, self.tension.size)] = self.tension[:n]
        self.tension = keep


COLUMNS = (
    "time", "block", "tally_depth", "bit_true", "bottom_true", "hookload", "string_weight", "bit_load",
    "torque", "rpm", "pump", "slips", "hanging", "ratio", "ratio_md", "state", "top", "bottom", "zero",
    "drag", "usual_torque", "friction_torque", "pressure_extra", "pressure_share", "torque_rough",
    "flow_share", "stalled", "obstacle", "density_shift", "residual",
)  # fmt: skip
