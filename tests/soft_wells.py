"""Readings of random wells whose truth is known, from physics that shares nothing with the program's march.

The soft string is integrated as an ordinary differential equation by scipy along a smooth invented path with
short waves that no survey shows, friction that wanders along the hole, drag that grows with speed, a string
that weighs a little other than its tally says, and a rig whose sensor, pumps and sheaves are a little off.
The program gets what a rig would have: a survey with its scatter, the tally, and the readings.

References
----------
Johancsik et al. (1984), J. Pet. Technol. 36(6); Sheppard et al. (1987), SPE Drill. Eng. 2(4) (the equation).
Sizes of the errors: common practice, no source.
"""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from types import SimpleNamespace

import numpy as np
from numpy.typing import NDArray
from scipy.integrate import solve_ivp
from scipy.interpolate import CubicSpline

from forensics.case import Case, FluidSettings, LogSettings, RigSettings
from forensics.estimate import Estimate
from forensics.friction.assumptions import FACTOR_SIGMA, TOGETHER, Z90, assumed_factor
from forensics.friction.result import Reading
from forensics.well.fluid import Fluid
from forensics.well.hole import Hole
from forensics.well.likely import STATION_SIGMA
from forensics.well.model import Well
from forensics.well.string import Component, String
from forensics.well.trajectory import build_trajectory

Floats = NDArray[np.float64]

G = 9.80665
STEEL = 7850.0
MUDS = ("oil-base", "polymer", "water-base", None)
PLANS = ("drilling", "trip", "deep", "few")
KINDS = ("pick_up", "slack_off", "rotating")
SIGN = np.array([1.0, -1.0, 0.0])


@dataclass(frozen=True)
class Truth:
    """What was planted: a factor by section, block weight and bias [N], rotational factor, loss [N.m]."""

    factors: tuple[float, ...]
    block: float
    bias: float
    rotational: float
    loss: float
    edges: tuple[float, ...] = ()


@dataclass(frozen=True)
class Sample:
    """One random well as the program sees it, and its truth."""

    well: Well
    case: Case
    rig: SimpleNamespace
    readings: tuple[Reading, ...]
    truth: Truth
    depth: float
    plan: str


class World:
    """Path, friction and string as they really are, as functions of depth."""

    def __init__(self, rng: np.random.Generator, split: bool) -> None:
        self.kick = rng.uniform(400.0, 1800.0)
        rate = np.radians(rng.uniform(2.0, 5.0)) / 30.0
        self.hold = np.radians(rng.choice([rng.uniform(35.0, 70.0), rng.uniform(75.0, 90.0)]))
        self.built = self.kick + self.hold / rate
        self.depth = self.built + rng.uniform(500.0, 2000.0)
        self.shoe = self.kick + rng.uniform(0.3, 1.2) * (self.built - self.kick)
        self.edges = (self.shoe + rng.uniform(0.4, 0.6) * (self.depth - self.shoe),) if split else ()
        md = np.arange(0.0, self.depth + 400.0, 5.0)
        plain = np.clip((md - self.kick) * rate, 0.0, self.hold)
        plain = np.convolve(np.pad(plain, 4, mode="edge"), np.ones(9) / 9.0, mode="valid")
        bend = min(rng.exponential(0.08), 0.3)
        self.inclination = CubicSpline(md, plain + _waves(rng, md, bend))
        turn = np.radians(rng.uniform(-20.0, 20.0)) / 1000.0
        self.azimuth = CubicSpline(md, 1.0 + turn * md + _waves(rng, md, 0.7 * bend))
        self.density = rng.uniform(1050.0, 1550.0)
        self.parts = (
            Component("collar", "collar", rng.uniform(20.0, 50.0), 0.165, 0.071, 1300.0),
            Component("heavy", "hwdp", float(rng.choice([60.0, 150.0, 250.0])), 0.127, 0.0762, 720.0, 0.168),
            Component("pipe", "drillpipe", 9000.0, 0.127, 0.1086, rng.uniform(280.0, 330.0), 0.168),
        )
        self.scale = 1.0 + rng.normal(0.0, 0.01)
        wide = np.exp(-0.5 * (np.arange(-30, 31) * 5.0 / rng.uniform(20.0, 60.0)) ** 2)
        wander = np.convolve(rng.normal(0.0, 0.10, len(md)), wide, "same") / np.sqrt(np.sum(wide**2))
        self.wander = CubicSpline(md, wander)
        self.speed_drag = rng.uniform(0.0, 5.0)  # N for each metre of string and m/s

    def friction(self, s: Floats, factors: tuple[float, ...]) -> Floats:
        """Friction at depth s, wandering about the factor of its section."""
        return np.array(factors)[np.searchsorted([self.shoe, *self.edges], s)] * np.exp(self.wander(s))

    def means(self, factors: tuple[float, ...]) -> tuple[float, ...]:
        """Mean friction of each section, weighted by how hard the hanging string is pressed there."""
        s = np.arange(2.0, self.depth, 4.0)
        heavy = np.array([p.weight for p in self.parts])[self.part(self.depth - s)]
        heavy = heavy * (1.0 - self.density / STEEL)
        up = heavy * np.cos(self.inclination(s)) * 4.0
        tension = np.cumsum(up[::-1])[::-1]
        across = tension * self.inclination(s, 1) - heavy * np.sin(self.inclination(s))
        press = np.hypot(across, tension * np.sin(self.inclination(s)) * self.azimuth(s, 1))
        section = np.searchsorted([self.shoe, *self.edges], s)
        mu, each = self.friction(s, factors), [section == k for k in range(len(factors))]
        return tuple(float(np.average(mu[here], weights=press[here])) for here in each)

    def part(self, above_bit: Floats) -> NDArray[np.int64]:
        """Which part of the string lies at a distance above the bit."""
        return np.searchsorted(np.cumsum([p.length for p in self.parts[:2]]), above_bit)

    def weigh(self, bits: Floats, sign: Floats, factors: tuple[float, ...]) -> tuple[Floats, Floats]:
        """Tension at the rotary [N], and the torque of a string that turns [N.m]; all strings at once.

        `sign` is +1 for a string pulled up, -1 let down, 0 turned; along x from 0 at the bit to 1 at surface.
        """
        count = len(bits)
        heavy = np.array([p.weight for p in self.parts]) * self.scale * (1.0 - self.density / STEEL)
        radius = np.array([0.165, 0.168, 0.168]) / 2.0

        def slope(x: float, state: Floats) -> Floats:
            s = bits * (1.0 - x)
            part = self.part(bits - s)
            inclination, w = self.inclination(s), heavy[part]
            across = state[:count] * self.inclination(s, 1) - w * np.sin(inclination)
            side = state[:count] * np.sin(inclination) * self.azimuth(s, 1)
            drag = self.friction(s, factors) * np.hypot(across, side)
            up = w * np.cos(inclination) + sign * drag
            return np.concatenate([up * bits, drag * radius[part] * bits])

        done = solve_ivp(slope, (0.0, 1.0), np.zeros(2 * count), rtol=1e-8, atol=0.1, max_step=0.01)
        return done.y[:count, -1], done.y[count:, -1]


def _waves(rng: np.random.Generator, md: Floats, bend: float) -> Floats:
    """Short waves of the hole's direction [rad], some shorter than a survey shows; `bend` rms [deg/30 m]."""
    total = np.zeros(len(md))
    for number in 2.0 * np.pi / rng.uniform(35.0, 200.0, 4):
        size = np.radians(bend) / 30.0 / number * (2.0 / 4.0) ** 0.5
        total += size * np.sin(number * md + rng.uniform(0.0, 2.0 * np.pi))
    return total


def sample(seed: int, split: bool = False) -> Sample:
    """Invent a well, its rig and its readings.

    Parameters
    ----------
    seed : int
    split : bool
        Whether the open hole rubs differently from somewhere in its middle on.

    Returns
    -------
    Sample
    """
    rng = np.random.default_rng(seed)
    world = World(rng, split)
    well = _surveyed(rng, world)
    given = rng.random() < 0.25
    block = rng.uniform(200e3, 350e3)
    bias = rng.normal(0.0, 8e3) if given else 0.0
    here = Path("case.toml")
    mud = rng.choice(np.array(MUDS, dtype=object))
    settings = {"mud_system": mud, "rig": RigSettings(block_weight=block if given else None)}
    fluid = FluidSettings(density=world.density)
    case = Case(here, "x", "x", LogSettings((here,)), here, here, here, fluid, **settings)
    factors = _factors(rng, case, well, split)
    sigma = rng.uniform(1.0e3, 2.0e3)
    seen = block + (0.0 if given else rng.normal(0.0, sigma))
    half = 0.0 if given else Z90 * sigma
    plateau = Estimate(seen, seen - half, seen + half, "in-slips plateau")
    rig = SimpleNamespace(block_weight=plateau, pump_shift=None, breakover=None)
    rotational = float(np.clip(np.mean(factors) + rng.normal(0.0, 0.05), 0.06, 0.5))
    loss = float(np.abs(rng.normal(500.0, 800.0)))
    plan = str(rng.choice(PLANS, p=(0.4, 0.3, 0.15, 0.15)))
    turned = world.means((rotational,) * len(factors))[-1]
    truth = Truth(world.means(factors), block, bias, turned, loss, world.edges)
    depths = _depths(rng, world, plan)
    readings = _readings(rng, world, depths, (factors, block + bias, rotational, loss))
    return Sample(well, case, rig, readings, truth, world.depth, plan)


def _factors(rng: np.random.Generator, case: Case, well: Well, split: bool) -> tuple[float, ...]:
    """Draw the factors from what is known of muds."""
    centre = [assumed_factor(kind, case, well).value for kind in ("cased", "open")]
    sigma = [FACTOR_SIGMA[kind] for kind in ("cased", "open")]
    z = rng.normal(size=2)
    z[1] = TOGETHER * z[0] + np.sqrt(1.0 - TOGETHER**2) * z[1]
    cased, open_ = np.clip(np.array(centre) + np.array(sigma) * z, 0.08, 0.50).tolist()
    return (cased, open_, open_ + rng.choice([-1.0, 1.0]) * 0.10) if split else (cased, open_)


def _surveyed(rng: np.random.Generator, world: World) -> Well:
    """Give the well as survey, hole table and tally show it."""
    md = np.append(np.arange(0.0, world.depth + 200.0, 30.0), world.depth + 230.0)
    inclination = world.inclination(md) + rng.normal(0.0, STATION_SIGMA, len(md))
    across = rng.normal(0.0, STATION_SIGMA, len(md))
    azimuth = world.azimuth(md) + across / np.sin(np.maximum(inclination, 0.05))
    inclination[0] = 0.0
    return Well(
        trajectory=build_trajectory(md, np.abs(inclination), azimuth),
        hole=Hole(
            np.array([0.0, world.shoe]), np.array([world.shoe, world.depth + 300.0]),
            np.array([0.2205, 0.2159]), ("cased", "open"), ("", ""), np.full(2, np.nan),
        ),
        string=String(world.parts),
        fluid=Fluid(np.array([world.density]), np.array([0.0])),
        survey_accuracy=STATION_SIGMA,
    )  # fmt: skip


def _depths(rng: np.random.Generator, world: World, plan: str) -> Floats:
    """Give the bit depths at which the string was weighed."""
    if plan == "trip":
        return np.linspace(0.6 * world.kick, world.depth, int(rng.integers(12, 30)))
    if plan == "drilling":
        return np.linspace(world.shoe + 40.0, world.depth, int(rng.integers(8, 30)))
    if plan == "deep":
        return world.depth - np.arange(int(rng.integers(4, 10))) * 28.0
    return world.depth - rng.uniform(0.0, 600.0, 4)


def _readings(
    rng: np.random.Generator,
    world: World,
    depths: Floats,
    truth: tuple[tuple[float, ...], float, float, float],
) -> tuple[Reading, ...]:
    """Weigh the string at each depth pulled, lowered and turned, as a rig would read it."""
    factors, block, rotational, loss = truth
    bits = np.repeat(np.sort(depths), 3)
    sign = np.tile(SIGN, len(depths))
    tension, _ = world.weigh(bits, sign, factors)
    _, torque = world.weigh(bits[2::3], np.zeros(len(depths)), (rotational,) * len(factors))
    height, speed = rng.uniform(2.0, 28.0, len(bits)), rng.uniform(0.05, 0.3, len(bits))
    pipe = world.parts[-1]
    hung = (pipe.weight * world.scale + world.density * G * pipe.inner_area) * height
    when, pumping = np.linspace(-1.0, 1.0, len(bits)), rng.random(len(bits)) < 0.5
    value = block + tension + hung + sign * speed * world.speed_drag * bits
    noise = rng.uniform(500.0, 2500.0)
    value += np.repeat(rng.normal(0.0, 700.0, len(depths)), 3) + rng.normal(0.0, noise, len(bits))
    value += when * rng.normal(0.0, 1500.0) + pumping * rng.normal(0.0, 2000.0)
    value *= 1.0 - sign * rng.normal(0.0, 0.002)
    spoilt = (rng.random(len(bits)) < 0.06) & (sign != 0.0)
    value += np.where(spoilt, sign * rng.uniform(10e3, 60e3, len(bits)), 0.0)
    kept = rng.random(len(bits)) < 0.85
    made = [
        Reading(
            KINDS[i % 3], 600.0 * i, 600.0 * i + 30, bits[i], height[i], value[i], noise, 10, bool(pumping[i])
        )
        for i in np.flatnonzero(kept).tolist()
    ]
    turn = loss + torque * (1.0 + rng.normal(0.0, 0.01)) + rng.normal(0.0, 300.0, len(torque))
    made += [
        Reading("torque", 1800.0 * k, 1800.0 * k + 40, bits[3 * k], 10.0, turn[k], 300.0, 10, True, rpm=60.0)
        for k in range(len(torque))
    ]
    return tuple(made)
