"""A quiet run to plant episodes in: sliding on bottom at 4000 m, 1 Hz, nothing wrong."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from types import SimpleNamespace

import numpy as np
import pytest

from forensics.case import Case, CriteriaSettings, FluidSettings, LogSettings
from forensics.episodes.material import Material
from forensics.estimate import Estimate
from forensics.friction.result import Calibration, FrictionSection
from forensics.loads import DrawHistory, LoadHistory, RateLaw, RatioMap
from forensics.logs.table import TimeLog
from forensics.rig.view import Activity, RigView

START = 1.7e9
SHOE = 2000.0


class PlainHole:
    """Cased to the shoe, open below."""

    shoe = SHOE
    top = np.array([0.0, SHOE])
    bottom = np.array([SHOE, 5000.0])
    kind = ("cased", "open")
    friction = np.array([np.nan, np.nan])

    def is_open(self, md):
        """Below the shoe."""
        return np.asarray(md) > SHOE


class PlainString:
    """4000 m of one pipe of EA 600 MN, which gives 150 kN a metre, above a motor."""

    ends = np.array([4000.0])
    components = (SimpleNamespace(kind="motor"), SimpleNamespace(kind="drillpipe"))

    def values(self, name):
        """Property by component."""
        return {"axial": np.array([600.0e6])}[name]


class PlainPath:
    """Vertical to 1500 m, then straight at 85 degrees with a dogleg at 3000 m."""

    def at(self, md):
        """Inclination and curvature at depths."""
        md = np.asarray(md, dtype=float)
        turn = np.where(np.abs(md - 3000.0) < 15.0, 8.0, 0.5) * np.radians(1.0) / 30.0
        inclination = np.where(md < 1500.0, 0.0, np.radians(85.0))
        return SimpleNamespace(inclination=inclination, curvature=np.column_stack([turn, 0 * turn, 0 * turn]))


def make_well():
    """Everything the rules ask of a well."""
    return SimpleNamespace(
        hole=PlainHole(),
        string=PlainString(),
        trajectory=PlainPath(),
        rotating_weight=lambda bit: 400.0e3 + 20.0 * (np.asarray(bit, dtype=float) - 4000.0),
    )


def make_calibration(**changes):
    sections = tuple(
        FrictionSection(kind, top, bottom, Estimate(mu, mu - 0.02, mu + 0.02, "steady weights"))
        for kind, top, bottom, mu in (("cased", 0.0, SHOE, 0.2), ("open", SHOE, 5000.0, 0.3))
    )
    rng = np.random.default_rng(0)
    draws = np.column_stack(
        [rng.normal(0.2, 0.012, 64), rng.normal(0.3, 0.012, 64), rng.normal(300e3, 500.0, 64)]
    )
    block = Estimate(300.0e3, 299.0e3, 301.0e3, "steady weights")
    found = Calibration(
        sections=sections,
        block_weight=block,
        hookload_bias=Estimate(0.0, 0.0, 0.0, "x"),
        pipe_above_rotary=Estimate(1.0, 0.9, 1.1, "x"),
        rotational=Estimate(0.25, 0.24, 0.26, "off-bottom torque"),
        readings=(),
        residuals=np.zeros(0),
        residual_rms=1e3,
        draws=draws,
    )
    return replace(found, **changes)


def make_case(**criteria):
    here = Path("case.toml")
    return Case(
        here,
        "x",
        "x",
        LogSettings((here,)),
        here,
        here,
        here,
        FluidSettings(density=1300.0),
        criteria=CriteriaSettings(**criteria),
    )


class Run:
    """Arrays to write episodes into, and the material they make."""

    def __init__(self, n=3600, interval=1.0, activity=Activity.DRILL_SLIDE):
        def full(value):
            return np.full(n, float(value))

        self.n, self.interval = n, interval
        self.values = {
            "bit_depth": full(4000.0),
            "hookload": full(650.0e3),
            "block_position": full(20.0),
            "rpm": full(0.0),
            "torque": full(0.0),
            "standpipe_pressure": full(20.0e6),
            "flow_in": full(0.035),
            "differential_pressure": full(2.0e6),
        }
        self.rig = {
            "hookload": full(650.0e3),
            "block": full(20.0),
            "hole_depth": full(4000.0),
            "wob_surface": full(60.0e3),
            "wob_slack_off": full(30.0e3),
            "slips": np.zeros(n, bool),
            "turning": np.zeros(n, bool),
            "pumping": np.ones(n, bool),
            "on_bottom": np.ones(n, bool),
            "direction": np.ones(n, np.int8),
            "activity": np.full(n, activity, np.int8),
        }
        self.loads = {
            "bit_load": full(30.0e3),
            "peak_ratio": full(0.4),
            "peak_md": full(2400.0),
            "peak_compression": full(40.0e3),
            "state": np.zeros(n, np.int8),
            "top": full(np.nan),
            "bottom": full(np.nan),
            "helical_top": full(np.nan),
            "helical_bottom": full(np.nan),
            "reach": full(4000.0),
            "basis": np.zeros(n, np.int8),
            "drag_residual": full(np.nan),
            "torque_residual": full(np.nan),
            "model_hookload": full(np.nan),
            "straight_drag": full(30.0e3),
            "stretch": full(0.0),
        }
        self.noise = {"hookload": 700.0, "torque": 100.0, "standpipe_pressure": 0.1e6}
        self.draws = None
        self.calibration = make_calibration()
        self.case = make_case()
        self.used = np.ones(n, bool)

    def buckle(self, rows, ratio=1.5, helical=None, top=2300.0, bottom=2600.0):
        """Buckle the string over rows, helical over `helical`."""
        self.loads["state"][rows] = 1
        self.loads["peak_ratio"][rows] = ratio
        self.loads["peak_compression"][rows] = 40.0e3 / 0.4 * ratio
        self.loads["top"][rows], self.loads["bottom"][rows] = top, bottom
        if helical is not None:
            self.loads["state"][helical] = 2
            self.loads["peak_ratio"][helical] = ratio + 0.5
            self.loads["helical_top"][helical], self.loads["helical_bottom"][helical] = (
                top + 50.0,
                bottom - 50.0,
            )
        return self

    def trip(self, direction, drag_rows=slice(0, 0), extra=60.0e3):
        """Make the run a trip off bottom; `extra` drag over `drag_rows` [N]."""
        coming = direction == "in"
        n = self.n
        self.rig["on_bottom"][:] = False
        self.rig["activity"][:] = Activity.TRIP_IN if coming else Activity.TRIP_OUT
        self.rig["direction"][:] = 1 if coming else -1
        sign = -1.0 if coming else 1.0
        self.values["bit_depth"][:] = 3500.0 - sign * 0.1 * np.arange(n)
        self.rig["block"][:] = 20.0 + sign * (0.1 * np.arange(n) % 28.0)
        self.loads["model_hookload"][:] = 700.0e3 + sign * 150.0e3
        self.loads["drag_residual"][:] = 0.0
        self.loads["drag_residual"][drag_rows] = sign * extra
        self.rig["wob_surface"][:] = np.nan
        return self

    def with_draws(self, ratios=(0.8, 0.9, 1.0, 1.1, 1.2), spread=3.0e3):
        """Repeat the replay with peak ratios scaled, and bit loads shifted to match."""
        k = len(ratios)
        scale = np.array(ratios)[:, None]
        peak = self.loads["peak_ratio"] * scale
        state = np.where(self.loads["state"] == 0, 0, np.where(peak >= 1.0, self.loads["state"], 0)).astype(
            np.int8
        )
        load = self.loads["bit_load"] - spread * (scale - 1.0) * 10.0
        def rows(values):
            return np.broadcast_to(values, (k, self.n)).astype(np.float32)

        line = 20.0e3 * np.linspace(-1.0, 1.0, k)[:, None, None] * np.array([1.0, 0.0, -1.0])[:, None]
        self.draws = DrawHistory(
            weights=np.full(k, 1.0 / k),
            factors=np.column_stack([np.linspace(0.18, 0.22, k), np.linspace(0.28, 0.32, k)]),
            block=np.full(k, 300.0e3),
            covered=np.ones(self.n, bool),
            taken=np.arange(self.n),
            state=state,
            peak_ratio=peak.astype(np.float32),
            compression=rows(self.loads["peak_compression"] * scale),
            bit_load=load.astype(np.float32),
            top=rows(np.where(state > 0, self.loads["top"] - 50.0 * (scale - 1.0), np.nan)),
            bottom=rows(np.where(state > 0, self.loads["bottom"] + 50.0 * (scale - 1.0), np.nan)),
            multiple=rows(scale),
            depth=np.array([0.0, 6000.0]),
            lines=np.broadcast_to(line, (k, 3, 2)),
        )
        return self

    def material(self):
        """Freeze it."""
        time = START + self.interval * np.arange(self.n)
        log = TimeLog(
            time, self.values, self.values["hookload"], self.used, np.zeros(self.n, np.int8), self.interval
        )
        rig = RigView(
            block_weight=self.calibration.block_weight, noise=self.noise, usual_flow=0.035, **self.rig
        )
        edges = np.array([0.0, 1.0])
        loads = LoadHistory(
            **self.loads,
            ratio_map=RatioMap(edges, edges, np.zeros((1, 1))),
            rate_law=RateLaw(0.0, 1.0, False, 0, 0.0),
        )
        return Material(log, rig, loads, self.draws, self.calibration, make_well(), self.case)


@pytest.fixture
def make_run():
    """Build a quiet run."""
    return Run
