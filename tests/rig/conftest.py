"""A drilled stand in fifty lines: one spring, one slider, one bottom, and the truth of it."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
import pytest

from forensics.case import Case, FluidSettings, LogSettings, RigSettings
from forensics.logs.table import TimeLog
from forensics.well.fluid import constant_fluid
from forensics.well.hole import Hole
from forensics.well.model import Well
from forensics.well.string import Component, String
from forensics.well.trajectory import build_trajectory

BLOCK = 300e3
DRAG = 60e3
SPRING = 120e3  # N/m
USUAL_FLOW = 0.03
STAND = 28.0
OPEN = 0.4  # the bit load from which the bit is on bottom, in kN


def straight_well() -> Well:
    """Vertical to 1000 m, then 60 degrees."""
    md = np.arange(0.0, 6000.0, 30.0)
    inclination = np.clip((md - 1000.0) / 600.0, 0.0, 1.0) * np.radians(60.0)
    string = String(
        (
            Component("bit", "bit", 0.3, 0.2159, 0.05, 1000.0),
            Component("hwdp", "hwdp", 120.0, 0.127, 0.0762, 720.0, 0.165),
            Component("dp", "drillpipe", 3000.0, 0.127, 0.1086, 310.0, 0.165),
        )
    )
    hole = Hole(
        top=np.array([0.0, 1800.0]),
        bottom=np.array([1800.0, 3000.0]),
        diameter=np.array([0.2244, 0.2159]),
        kind=("cased", "open"),
        name=("", ""),
        friction=np.array([np.nan, np.nan]),
    )
    return Well(build_trajectory(md, inclination, np.zeros(len(md))), hole, string, constant_fluid(1250.0))


@dataclass
class Stand:
    """A driller's hands; every call moves time on second by second."""

    well: Well
    bit: float = 2500.0
    height: float = STAND
    bottom: float = 2500.0
    friction: float = 0.0
    load: float = 0.0
    block_alone: float = BLOCK
    drag: float = DRAG
    rows: list[tuple] = field(default_factory=list)

    def go(
        self, seconds: float, speed: float = 0.0, rpm: float = 0.0, flow: float = 0.0, slips: bool = False
    ) -> Stand:
        """Run on with block speed (down positive), rotation and flow held."""
        for _ in range(int(seconds)):
            self.height -= speed
            if not slips:
                self.bit += speed
                self.friction = (
                    float(np.clip(self.friction - SPRING * speed, -self.drag, self.drag)) if rpm < 5 else 0.0
                )
                self.load = max(0.0, (self.bit - self.bottom) * SPRING)
                if self.load > 0 and flow > 0:
                    self.bottom += 0.012 * self.load / 80e3
                    self.load = max(0.0, (self.bit - self.bottom) * SPRING)
            pull = self.weight() + self.friction - self.load
            carried = self.block_alone + (0.0 if slips else pull)
            torque = 0.0 if slips or rpm < 5 else 9e3 + 0.05 * self.load
            self.rows.append(
                (
                    self.height,
                    self.bit,
                    max(self.bottom, self.bit),
                    carried,
                    rpm,
                    flow,
                    slips,
                    self.load,
                    torque,
                )
            )
        return self

    def weight(self) -> float:
        """Weigh string and pipe above the rotary."""
        return self._base(self.bit) + 428.0 * self.height

    def _base(self, bit: float) -> float:
        key = round(bit / 5.0)
        cache = self.__dict__.setdefault("_cache", {})
        for k in (key, key + 1):
            if k not in cache:
                cache[k] = float(self.well.rotating_weight(5.0 * k)[0])
        f = bit / 5.0 - key
        return cache[key] + f * (cache[key + 1] - cache[key])

    def connection(self, stand: float = STAND) -> Stand:
        """In slips: block up empty, a stand made up."""
        self.go(30, slips=True).go(56, -0.5 * stand / 28.0, slips=True).go(60, slips=True)
        return self

    def drill_stand(self, sliding: bool = False) -> Stand:
        """Weights, a stand of hole, a pick-up, and slips."""
        self.go(20).go(30, -0.1).go(10)
        self.go(15, flow=USUAL_FLOW).go(60, rpm=60, flow=USUAL_FLOW)
        self.go(15, flow=USUAL_FLOW).go(35, 0.05, flow=USUAL_FLOW).go(5, flow=USUAL_FLOW)
        rpm = 0.0 if sliding else 90.0
        self.go(20, rpm=rpm, flow=USUAL_FLOW)
        while self.load < 20e3:
            self.go(1, 0.05, rpm, USUAL_FLOW)
        while self.height > 4.0:
            self.go(1, 0.012, rpm, USUAL_FLOW)
        self.go(40, rpm=rpm, flow=USUAL_FLOW)
        self.go(50, -0.1, flow=USUAL_FLOW).go(60, rpm=60, flow=USUAL_FLOW).go(10, flow=USUAL_FLOW).go(
            30, 0.1
        ).go(10)
        self.bottom_before = self.bottom
        return self.connection()

    def trip(self, stands: int, speed: float) -> Stand:
        """Trip stands in (down positive) or out."""
        for _ in range(stands):
            seconds = int(abs(24.0 / speed))
            self.go(10).go(seconds, speed).go(10)
            self.go(20, slips=True).go(48, -0.5 * np.sign(speed), slips=True).go(20, slips=True)
        return self

    def columns(self) -> dict[str, np.ndarray]:
        """Give the truth, column by column."""
        names = ("block", "bit", "hole", "hookload", "rpm", "flow", "slips", "load", "torque")
        return {n: np.array(c, dtype=float) for n, c in zip(names, zip(*self.rows, strict=True), strict=True)}

    def truth(self) -> np.ndarray:
        """Activity by the definitions, from what really happened."""
        c = self.columns()
        speed = np.zeros(len(c["block"]))
        t = np.arange(len(speed), dtype=float)
        last = t[-1]
        late, early = np.minimum(t + 7.5, last), np.maximum(t - 7.5, 0.0)
        speed = (np.interp(late, t, c["block"]) - np.interp(early, t, c["block"])) / (late - early)
        turning, pumping, on = c["rpm"] > 5, c["flow"] > 0.3 * USUAL_FLOW, c["load"] > 1e3
        down, up = speed < -0.01, speed > 0.01
        return np.select(
            [
                c["slips"] > 0.5,
                on & pumping & turning,
                on & pumping,
                turning & down,
                turning & up,
                turning,
                down,
                up,
                pumping,
            ],
            [1, 2, 3, 4, 5, 6, 7, 8, 9],
            10,
        )


def make_log(
    stand: Stand, step: int = 1, noise: float = 1.0, drop: tuple[str, ...] = (), seed: int = 1
) -> TimeLog:
    """Give the stand as a log: sampled, rounded, noisy, with channels left out."""
    c = {name: values[::step] for name, values in stand.columns().items()}
    rng = np.random.default_rng(seed)
    n = len(c["bit"])
    hookload = c["hookload"] + noise * 1.5e3 * rng.standard_normal(n)
    values = {
        "bit_depth": np.round(c["bit"] + noise * 0.002 * rng.standard_normal(n), 2),
        "hole_depth": np.round(c["hole"], 2),
        "block_position": np.round(c["block"] + noise * 0.005 * rng.standard_normal(n), 2),
        "hookload": np.round(hookload, -2),
        "rpm": np.round(np.where(c["rpm"] > 0, c["rpm"] + noise * 1.5 * rng.standard_normal(n), 0.0)),
        "torque": c["torque"] + noise * 300.0 * rng.standard_normal(n),
        "flow_in": np.where(c["flow"] > 0, c["flow"] + noise * 2e-4 * rng.standard_normal(n), 0.0),
        "standpipe_pressure": 2e5
        + (c["flow"] / USUAL_FLOW) ** 2 * 180e5
        + noise * 1e5 * rng.standard_normal(n),
    }
    for name in drop:
        del values[name]
    return TimeLog(
        time=1.7e9 + step * np.arange(n, dtype=float),
        values=values,
        hookload_logged=hookload,
        used=np.ones(n, dtype=bool),
        reason=np.zeros(n, dtype=np.int8),
        interval=float(step),
    )


def make_case(**rig) -> Case:
    """Make a case with nothing but rig settings."""
    nowhere = Path("nowhere")
    return Case(
        path=nowhere, id="x", title="x", logs=LogSettings(()), survey=nowhere, hole=nowhere, string=nowhere,
        fluid=FluidSettings(density=1250.0), rig=RigSettings(**rig),
    )  # fmt: skip


def macro_f1(found: np.ndarray, true: np.ndarray) -> float:
    """Mean F1 over the classes present in the truth."""
    scores = []
    for kind in np.unique(true):
        hit = np.sum((found == kind) & (true == kind))
        scores.append(2 * hit / max(np.sum(found == kind) + np.sum(true == kind), 1))
    return float(np.mean(scores))


@pytest.fixture(scope="session")
def well() -> Well:
    return straight_well()


@pytest.fixture(scope="session")
def drilled(well) -> Stand:
    stand = Stand(well, bit=2496.0, bottom=2500.0)
    for sliding in (False, True, False, True):
        stand.drill_stand(sliding)
    return stand


@pytest.fixture(scope="session")
def tools():
    class Tools:
        log = staticmethod(make_log)
        case = staticmethod(make_case)
        f1 = staticmethod(macro_f1)
        Stand = Stand
        block, drag = BLOCK, DRAG

    return Tools
