"""A made-up run, plausible to look at, for the report to be rendered from."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest

from forensics.case import Case, FluidSettings, LimitSettings, LogSettings
from forensics.episodes.catalogue import CauseView, Consequence, Episode, Evidence, Family, Kind, State
from forensics.estimate import Estimate
from forensics.findings import Findings, Headline
from forensics.friction.result import Calibration, FrictionSection, Reading
from forensics.loads import Fan, LoadHistory, Profile, RateLaw, RatioMap
from forensics.logs.table import FileRecord, Reason, SourceColumn, Step, TimeLog
from forensics.rig.view import Activity, RigView, Tare
from forensics.well.fluid import constant_fluid
from forensics.well.hole import Hole
from forensics.well.model import Well
from forensics.well.string import Component, String
from forensics.well.trajectory import build_trajectory

START = 1_714_723_200.0  # 2024-05-03 08:00 UTC
BLOCK = 310e3
CYCLE = 3600.0  # one stand


def estimate(value: float, half: float, source: str = "readings of the run", **extra) -> Estimate:
    return Estimate(value, value - half, value + half, source, **extra)


def make_case(**changes) -> Case:
    settings = {
        "path": Path("case.toml"),
        "id": "heron-2-run-5",
        "title": "Lost weight while sliding, 8.5 in lateral",
        "logs": LogSettings((Path("day1.csv"), Path("day2.las")), timezone="Europe/Oslo"),
        "survey": Path("survey.csv"),
        "hole": Path("hole.csv"),
        "string": Path("string.csv"),
        "fluid": FluidSettings(density=1320.0),
        "well": "Heron 2",
        "rig_name": "Rig 14",
        "section": "8.5 in",
        "mud_system": "oil-base",
        "limits": LimitSettings(hookload=2200e3, torque=30e3, wob=150e3, overpull=300e3),
    }
    return Case(**(settings | changes))


def make_well() -> Well:
    md = np.array([0.0, 900.0, 1500.0, 1800.0, 2500.0, 3500.0, 4300.0])
    inclination = np.radians([0.0, 2.0, 35.0, 60.0, 88.0, 90.5, 90.0])
    azimuth = np.radians([40.0, 40.0, 42.0, 45.0, 45.0, 46.0, 46.0])
    hole = Hole(
        top=np.array([0.0, 1200.0, 2600.0]), bottom=np.array([1200.0, 2600.0, 4300.0]),
        diameter=np.array([0.3153, 0.2205, 0.2159]), kind=("cased", "cased", "open"),
        name=("casing 13 3/8", "casing 9 5/8", "open hole"), friction=np.full(3, np.nan),
    )  # fmt: skip
    string = String((
        Component("bit", "bit", 0.3, 0.2159, 0.07, 600.0),
        Component("motor", "motor", 8.5, 0.171, 0.08, 1100.0),
        Component("hwdp", "hwdp", 84.0, 0.127, 0.0762, 720.0, 0.1651),
        Component("pipe", "drillpipe", 4200.0, 0.127, 0.1086, 310.0, 0.1683, tensile_rating=1760e3),
    ))  # fmt: skip
    return Well(build_trajectory(md, inclination, azimuth), hole, string, constant_fluid(1320.0))


def make_log(n: int, interval: float = 1.0) -> tuple[TimeLog, np.ndarray, np.ndarray]:
    """Log, activity and reconstructed bit load of n rows."""
    rng = np.random.default_rng(7)
    time = START + interval * np.arange(n)
    time[n // 2 :] += 1800.0 if n > 100 else 0.0
    phase = (time - START) % CYCLE
    activity = np.select(
        [phase < 1500, phase < 1620, phase < 2900, phase < 3050, phase < 3150, phase < 3250],
        [Activity.DRILL_ROTATE, Activity.ROTATE_OFF_BOTTOM, Activity.DRILL_SLIDE, Activity.TRIP_OUT,
         Activity.TRIP_IN, Activity.REAM_UP],
        Activity.CONNECTION,
    ).astype(np.int8)  # fmt: skip
    slide, rotate = activity == Activity.DRILL_SLIDE, activity == Activity.DRILL_ROTATE
    ramp = np.where(slide, (phase - 1620) / 1280, 0.0)
    surface = np.where(rotate, 80e3, np.where(slide, 40e3 + 170e3 * ramp, 0.0)) + rng.normal(0, 2e3, n)
    bit = np.where(rotate, 78e3, np.where(slide, np.minimum(25e3 + 30e3 * ramp, 45e3), 0.0))
    depth = 3300.0 + 9.0 * (time - START) / CYCLE
    hookload = 1050e3 - surface + np.where(activity == Activity.TRIP_OUT, 160e3, 0.0)
    hookload = np.where(activity == Activity.CONNECTION, BLOCK, hookload) + rng.normal(0, 3e3, n)
    values = {
        "bit_depth": depth - np.where(slide | rotate, 0.0, 4.0),
        "hole_depth": depth,
        "block_position": 30.0 - 28.0 * np.clip(phase / 2900, 0, 1),
        "hookload": hookload,
        "wob": surface + 25e3,
        "torque": np.where(rotate, 14e3, 900.0) + rng.normal(0, 400, n),
        "rpm": np.where(rotate | (activity == Activity.ROTATE_OFF_BOTTOM), 120.0, 0.0),
        "standpipe_pressure": np.where(activity == Activity.CONNECTION, 0.0, 240e5) + rng.normal(0, 2e5, n),
        "flow_in": np.where(activity == Activity.CONNECTION, 0.0, 0.035),
    }
    reason = np.zeros(n, dtype=np.int8)
    reason[:: max(n // 50, 1)] = Reason.SPIKE_HOOKLOAD
    columns = (
        SourceColumn("day1.csv", "HKLA", "kdaN", "hookload", "WITS mnemonic"),
        SourceColumn("day1.csv", "GAS <b>", None, None, "no channel of this name"),
    )
    middle = float(time[n // 2]) if n else START
    files = (
        FileRecord("day1.csv", "ab" * 32, "csv", n // 2, START, middle, interval, columns),
        FileRecord(
            "day2.las", "cd" * 32, "las 2.0", n - n // 2, middle, float(time[-1]) if n else START, interval
        ),
    )
    history = (
        Step("join files", n),
        Step("set aside spikes", int((reason > 0).sum()), "hookload", "over 6 sigma"),
    )
    log = TimeLog(time, values, hookload, reason == 0, reason, interval, "Europe/Oslo", history, files)
    return log, activity, bit


def make_loads(log: TimeLog, activity: np.ndarray, bit: np.ndarray) -> LoadHistory:
    n = len(log)
    slide = activity == Activity.DRILL_SLIDE
    ramp = np.where(slide, ((log.time - START) % CYCLE - 1620) / 1280, 0.0)
    ratio = np.where(slide, 0.4 + 1.6 * ramp, np.where(activity == Activity.DRILL_ROTATE, 0.55, 0.0))
    state = np.select([ratio > 1.41, ratio > 1.0], [2, 1], 0).astype(np.int8)
    top = np.where(state > 0, 2700.0 - 400 * (ratio - 1), np.nan)
    bottom = np.where(state > 0, 2900.0 + 300 * (ratio - 1), np.nan)
    rng = np.random.default_rng(3)
    edges = np.linspace(log.time[0], log.time[-1], 241) if n else np.array([START, START + 1])
    md_edges = np.linspace(0.0, 3600.0, 181)
    centre = 0.5 * (md_edges[1:] + md_edges[:-1])
    at = np.interp(edges[:-1], log.time, ratio) if n else np.zeros(1)
    values = np.array([r * np.exp(-(((centre - 2800.0) / 500.0) ** 2)) for r in at])
    values[:, centre > 3340.0] = np.nan
    nothing = np.full(n, np.nan)
    drag = np.where(activity == Activity.TRIP_OUT, rng.normal(0, 4e3, n), np.nan)
    return LoadHistory(
        bit_load=bit,
        peak_ratio=ratio,
        peak_md=np.where(ratio > 0, 2800.0, np.nan),
        peak_compression=ratio * 90e3,
        state=state,
        top=top,
        bottom=bottom,
        helical_top=np.where(state == 2, top + 40, np.nan),
        helical_bottom=np.where(state == 2, bottom - 40, np.nan),
        reach=log.values["bit_depth"] - 600 * (ratio > 1.6),
        basis=np.zeros(n, dtype=np.int8),
        drag_residual=drag,
        torque_residual=nothing.copy(),
        model_hookload=np.where(activity == Activity.TRIP_OUT, 1205e3, np.nan),
        straight_drag=20e3 + 0 * ratio,
        stretch=0.4 + 0 * ratio,
        ratio_map=RatioMap(edges, md_edges, values),
        rate_law=RateLaw(1e-9, 1.0, determined=True, samples=2000, spread=0.1),
    )


def make_rig(log: TimeLog, activity: np.ndarray) -> RigView:
    n = len(log)
    surface = log.values["wob"] - 25e3
    turning = log.values["rpm"] > 5
    return RigView(
        block_weight=estimate(BLOCK, 4e3, "in-slips plateau", samples=640),
        hookload=log.values["hookload"],
        slips=activity == Activity.CONNECTION,
        turning=turning,
        pumping=log.values["flow_in"] > 0.01,
        on_bottom=np.isin(activity, [2, 3]),
        direction=np.zeros(n, dtype=np.int8),
        block=log.values["block_position"],
        hole_depth=log.values["hole_depth"],
        activity=activity,
        wob_surface=surface,
        wob_slack_off=surface - 20e3,
        noise={"hookload": 3e3, "torque": 400.0},
        usual_flow=0.035,
        tares=(Tare(START, START + CYCLE, 3300.0, "rotating", 740e3, -25e3, 90),),
        can_not_tell=("The log has no differential pressure, so the bit load has no second witness.",),
    )


def make_calibration(readings: int) -> Calibration:
    rng = np.random.default_rng(5)
    base = {"pick_up": 1210e3, "rotating": 1050e3, "slack_off": 930e3}
    made = tuple(
        Reading(
            kind,
            START + 60 * k,
            START + 60 * k + 20,
            3250.0 + 3 * k,
            12.0,
            base[kind] + rng.normal(0, 4e3),
            2e3,
            20,
            pumping=True,
        )
        for k in range(readings)
        for kind in base
    )
    sections = (
        FrictionSection(
            "cased", 0.0, 2600.0, estimate(0.21, 0.018, "pick-up and slack-off in casing", samples=14)
        ),
        FrictionSection("open", 2600.0, 4300.0, Estimate(0.28, 0.2, 0.36, "case file", determined=False)),
    )
    return Calibration(
        sections,
        estimate(BLOCK, 4e3, "in-slips plateau"),
        Estimate(0.0, 0.0, 0.0, "no block weight given"),
        estimate(1.0, 0.2, "sawtooth over stands"),
        estimate(0.19, 0.03, "off-bottom torque", samples=22),
        made,
        rng.normal(0, 4e3, len(made)),
        4.1e3,
        np.zeros((8, 3)),
        can_not_tell=("Open-hole friction could not be told from the readings; 0.28 was kept.",),
    )


def make_fan() -> Fan:
    depth = np.linspace(500.0, 3400.0, 40)
    rotating = BLOCK + 250.0 * np.minimum(depth, 2900.0)
    drag = 50.0 * depth * (depth / 3400.0)
    return Fan(
        depth,
        rotating + drag,
        rotating,
        rotating - 0.75 * drag,
        rotating + 0.9 * drag,
        rotating + 1.1 * drag,
        rotating - 0.85 * drag,
        rotating - 0.66 * drag,
    )


def make_profile(row: int, time: float, compression: float = 160e3) -> Profile:
    md = np.linspace(3310.0, 0.0, 420)
    tension = np.interp(md, [0, 1500, 2500, 2800, 3310], [720e3, 220e3, -30e3, -compression, -40e3])
    sinusoidal = np.where(md > 1500, 85e3 + 15e3 * np.sin(md / 180.0), 60e3)
    load = -tension
    state = np.select([load > 1.41 * sinusoidal, load > sinusoidal], [2, 1], 0).astype(np.int8)
    contact = 200.0 + np.where(state == 2, 900.0, 0.0) + 100.0 * (md > 1500)
    return Profile(row, time, md, tension, sinusoidal, 1.41 * sinusoidal, contact, state)


def make_causes() -> tuple[CauseView, ...]:
    weight = Evidence("contact share", "72 % of the lost weight needs helical wall contact", 1.4, "replay")
    torque = Evidence("torque trend", "off-bottom torque did not rise before it", -0.8, "torque channel")
    return (CauseView("helical_buckling", 0.81, (weight, torque)), CauseView("cuttings_bed", 0.12, (torque,)))


def make_episode(k: int, log: TimeLog, **changes) -> Episode:
    n = len(log)
    first = min(int((k + 0.5) * n / 12) % n, n - 2)
    last = min(first + max(n // 40, 1), n - 1)
    settings = {
        "id": f"E{k + 1:03d}",
        "kind": Kind.BUCKLING,
        "state": State.HELICAL,
        "start": float(log.time[first]),
        "end": float(log.time[last]),
        "first": first,
        "last": last,
        "peak": (first + last) // 2,
        "activity": "drill_slide",
        "top_md": 2650.0,
        "bottom_md": 2980.0,
        "peak_md": 2800.0,
        "peak_load_ratio": estimate(1.83, 0.22, "replay draws"),
        "peak_compression": estimate(162e3, 14e3, "replay draws"),
        "lost_weight": estimate(118e3, 16e3, "replay draws"),
        "lost_to_buckling": estimate(71e3, 19e3, "replay draws"),
        "probability": 0.97,
        "consequence": Consequence.WEIGHT_LOST,
        "family": "A",
        "cause": "helical_buckling",
        "note": "helical from 2,690 to 2,940 m",
        "causes": make_causes(),
    }
    return Episode(**(settings | changes))


def make_findings(n: int = 7200, episodes: int = 3, readings: int = 12, case: Case | None = None) -> Findings:
    """Make up a whole run of n rows with so many episodes."""
    log, activity, bit = make_log(n)
    kinds = (
        {}, {"kind": Kind.LOCKUP, "consequence": Consequence.LOCKED_UP, "state": State.NONE},
        {"state": State.SINUSOIDAL, "consequence": Consequence.NONE, "family": "B"},
        {"consequence": Consequence.ROTATED_BUCKLED}, {"kind": Kind.DRAG, "state": State.NONE, "family": "C"},
    )  # fmt: skip
    found = tuple(make_episode(k, log, **kinds[k % len(kinds)]) for k in range(episodes))
    profiles = {e.id: make_profile(e.peak, float(log.time[e.peak])) for e in found}
    families = tuple(
        Family(
            name,
            f"like in load ratio and depth ({name})",
            tuple(e.id for e in found if e.family == name),
            0.83,
        )
        for name in sorted({e.family for e in found})
    )
    headline = Headline(
        "While sliding from 10:27 the string buckled helically at 2,690 to 2,940 m and locked up; 118 kN "
        "of the surface weight never reached the bit.",
        "likely (0.97)",
        ("Wall contact of the helix explains 71 kN of it.", "Friction explains the rest."),
        ("Whether the hole was clean: no flow out in the log.",),
    )
    return Findings(
        case or make_case(),
        log,
        make_well(),
        make_rig(log, activity),
        make_calibration(readings),
        make_loads(log, activity, bit),
        make_fan(),
        found,
        families,
        profiles,
        headline,
        dropped={"shorter than 20 s": 4},
        inputs={"case.toml": "ef" * 32},
        warnings=("One survey station only at TD.",),
    )


@pytest.fixture
def build() -> Callable[..., Findings]:
    return make_findings


@pytest.fixture
def build_episode() -> Callable[..., Episode]:
    return make_episode


@pytest.fixture
def build_case() -> Callable[..., Case]:
    return make_case


@pytest.fixture(scope="session")
def findings() -> Findings:
    return make_findings()
