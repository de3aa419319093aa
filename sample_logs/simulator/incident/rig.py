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
    longest: float = 4.0  # s: the driller wants no longer step

    def __post_init__(self) -> None:
        """Hang the string and make room for what stands in its way."""
        super().__post_init__()
        self.factors: dict[str, np.ndarray] = {}
        self.at_rest, self.pace = np.zeros(self.x.size), np.zeros(self.x.size)
        self._before: np.ndarray | None = None
        self.asleep = False
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
        self.at_rest, self.pace, self._before = np.zeros(n + 1), np.zeros(n + 1), None
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

    def _choose_step(self, demand: Demand) -> float:
        """Take long steps while nothing changes, short ones near whatever could stop the string [s]."""
        if self.slips or self.asleep:
            longest = 4.0
        else:
            near = self.obstacle is not None and self.obstacle.depth - self.x[0] < 6.0
            held = self.nodes[core.UP].max() > 3.0e3
            changing = abs(demand.speed - self.speed) > 0.02 or demand.rpm * self.rpm == 0.0 != demand.rpm
            longest = 1.0 if near or held or changing or demand.pump != self.pump else 2.0
        return min(longest, self.longest)

    def advance(self, demand: Demand) -> None:
        """Move a step on and record it."""
        self.dt = self._choose_step(demand)
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

    def _age(self) -> None:
        """Note how fast every node went in the last step, turning included [m/s], and how long it rests."""
        size = self.nodes.shape[1]
        if not self.has_moved:
            self.pace = np.zeros(size)
        elif self.asleep:
            self.pace = np.zeros(size)
            self.at_rest += self.dt
        else:
            self.pace = np.hypot((self.x - self._before) / self.dt, self.rpm * 0.105 * 0.07)
            self.at_rest = np.where(self.pace > 1e-4, 0.0, self.at_rest + self.dt)

    @property
    def has_moved(self) -> bool:
        """Whether the last step kept the same nodes as now."""
        return self._before is not None and self._before.size == self.nodes.shape[1]

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
        if self.slips:
            self.height -= self.speed * self.dt
        self.asleep = (self.slips or self.idle > 4) and self.found_something
        if not self.asleep:
            self._solve(self.speed * self.dt)
        elif self.has_moved:
            self._before[:] = self.x
        if self.static_grip:
            self._age()

    @property
    def tenth(self) -> bool:
        """Whether ten seconds were completed in the last step."""
        return math.floor(self.time / 10.0) != math.floor((self.time - self.dt) / 10.0)

    @property
    def found_nothing(self) -> bool:
        """Whether nothing drills: then a string at rest stays as it is."""
        return self.found_something and self.found[el.BIT_LOAD] <= 0.0

    @property
    def found_something(self) -> bool:
        """Whether any step was taken."""
        return hasattr(self, "found")

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
        if self.slips or (self.dt == 1.0 and round(self.time) % 3):
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
        same = self.asleep and self.rows and self.rows[-1][-1] == self.x.size
        if same and self.rpm <= 5.0 and self.torque_extra == 0.0:
            self._record_rest()
            return
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
                self.found[el.RESIDUAL], float(self.x.size),
            )
        )  # fmt: skip
        self.tags.append(self.tag)

    def _record_rest(self) -> None:
        """Write the last row again, with what can change while the string rests."""
        row = list(self.rows[-1])
        fresh = {
            "time": self.time, "block": self.height, "hookload": self.hookload, "rpm": self.rpm,
            "pump": self.pump, "slips": float(self.slips), "zero": self.zero, "torque": 0.0,
            "pressure_extra": self.pressure_extra, "pressure_share": self.pressure_share,
            "flow_share": self.flow_share, "torque_rough": self.torque_rough, "stalled": float(self.stalled),
            "density_shift": self.density_shift, "drag": float("nan"), "usual_torque": float("nan"),
            "tally_depth": self.tally_depth,
        }  # fmt: skip
        for name, value in fresh.items():
            row[PLACES[name]] = value
        self.rows.append(tuple(row))
        self.tags.append(self.tag)

    def _resize(self, elements: np.ndarray, x: np.ndarray) -> None:
        super()._resize(elements, x)
        n = len(elements)
        grown = np.zeros(n + 1)
        grown[: min(n + 1, self.at_rest.size)] = self.at_rest[: n + 1]
        self.at_rest, self.pace, self._before = grown, np.zeros(n + 1), None
        self.geo = el.geometry(self.x, self.elements, self.table, FIRST, STEP)
        keep = np.zeros(n)
        keep[: min(n, self.tension.size)] = self.tension[:n]
        self.tension = keep


COLUMNS = (
    "time", "block", "tally_depth", "bit_true", "bottom_true", "hookload", "string_weight", "bit_load",
    "torque", "rpm", "pump", "slips", "hanging", "ratio", "ratio_md", "state", "top", "bottom", "zero",
    "drag", "usual_torque", "friction_torque", "pressure_extra", "pressure_share", "torque_rough",
    "flow_share", "stalled", "obstacle", "density_shift", "residual", "nodes",
)  # fmt: skip
PLACES = {name: k for k, name in enumerate(COLUMNS)}
