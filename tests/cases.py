"""Makes small, good case folders for tests and benchmarks to run on, and to spoil.

An invented well and a driller's script of stands, weight checks, rotated and slid footage. The weights
come from a plain two-dimensional soft string summed element by element, written for this file alone and
without buckling: the logs are coherent, so that the whole job runs on them, and no more is claimed.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from pathlib import Path

import numpy as np

G = 9.80665
BLOCK = 300e3
STAND = 28.0
LIFT = 8.0
RPM = 80.0
RADIUS = 0.084


@dataclass(frozen=True)
class Job:
    """What the invented run is like: depths in m, speeds in m/s, forces in N, times in s."""

    start_depth: float = 2400.0
    duration: float = 7400.0
    interval: float = 1.0
    kick_off: float = 900.0
    build: float = math.radians(3.0) / 30.0
    hold: float = math.radians(62.0)
    shoe: float = 1500.0
    cased: float = 0.18
    open: float = 0.25
    torque_friction: float = 0.2
    rop: float = 0.020
    weight: float = 60e3
    slide_weight: float = 25e3
    mud: float = 1250.0
    slide_share: float = 0.35
    seed: int = 7

    @property
    def end_depth(self) -> float:
        """Deeper than the run gets, with room to spare."""
        return self.start_depth + self.rop * self.duration + 4 * STAND


# name, kind, length, od, id [m], weight [kg/m], tool joint od [m]
ROWS = (
    ("Bit", "bit", 0.3, 0.2159, 0.06, 90.0, None),
    ("Motor", "motor", 8.7, 0.1715, 0.08, 110.0, None),
    ("Collars", "collar", 27.0, 0.1651, 0.0714, 136.0, None),
    ("Heavy pipe", "hwdp", 140.0, 0.127, 0.0762, 74.5, 0.1651),
    ("Drill pipe", "drillpipe", 700.0, 0.127, 0.1086, 31.9, 0.1683),
)


def inclination(job: Job, md: np.ndarray) -> np.ndarray:
    """Inclination at depths [rad]."""
    return np.clip((md - job.kick_off) * job.build, 0.0, job.hold)


def _linear_weight(job: Job, above_bit: np.ndarray) -> np.ndarray:
    ends = np.cumsum([row[2] for row in ROWS])
    index = np.minimum(np.searchsorted(ends, above_bit, side="right"), len(ROWS) - 1)
    return np.array([row[5] for row in ROWS])[index] * G * (1.0 - job.mud / 7850.0)


def string_weight(
    job: Job, depths: np.ndarray, drag: float, push: float = 0.0
) -> tuple[np.ndarray, np.ndarray]:
    """Weight at the rotary [N] and torque [N.m] for bits at `depths` and `push` [N] on each.

    `drag` is the part of friction that acts along the hole: 1 going up, -1 going down, 0 turning in place.
    """
    tension = np.full(depths.shape, -push)
    torque = np.zeros(depths.shape)
    step = 5.0
    for low in np.arange(0.0, depths.max(), step):
        length = np.clip(depths - low, 0.0, step)
        md = np.maximum(depths - low - step / 2, 0.0)
        angle = inclination(job, md)
        weight = _linear_weight(job, np.full(depths.shape, low + step / 2))
        bend = np.where((angle > 0) & (angle < job.hold), job.build, 0.0)
        contact = np.abs(weight * np.sin(angle) - tension * bend)
        friction = np.where(md < job.shoe, job.cased, job.open)
        torque += math.sqrt(1.0 - drag**2) * job.torque_friction * contact * RADIUS * length
        tension = tension + length * (weight * np.cos(angle) + drag * friction * contact)
    return tension, torque


def _phases(job: Job, number: int) -> list[tuple[str, float, float]]:
    """Phases of one stand: name, duration [s], downward speed of the block [m/s]."""
    slid = STAND * job.slide_share if number % 2 else 0.0
    phases = [
        ("slips", 110.0, 0.0),
        ("raise", STAND / 0.35, -0.35),
        ("pick_up", 50.0, -0.1),
        ("slack_off", 50.0, 0.1),
        ("rotating", 100.0, 0.0),
        ("ream", LIFT / 0.1, 0.1),
    ]
    if slid:
        phases.append(("slide", slid / job.rop, job.rop))
    return [*phases, ("drill", (STAND - slid) / job.rop, job.rop), ("lift", LIFT / 0.1, -0.1)]


def _script(job: Job) -> tuple[np.ndarray, np.ndarray]:
    """Phase name and downward speed at each sample."""
    names: list[np.ndarray] = []
    speeds: list[np.ndarray] = []
    rows, number = round(job.duration / job.interval), 0
    while sum(len(part) for part in names) < rows:
        for name, duration, speed in _phases(job, number):
            count = max(1, round(duration / job.interval))
            names.append(np.full(count, name))
            # whole samples: the speed makes up for what rounding does to the distance
            speeds.append(np.full(count, speed * duration / (count * job.interval)))
        number += 1
    return np.concatenate(names)[:rows], np.concatenate(speeds)[:rows]


def _weights(job: Job, phase: np.ndarray, bit: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Hookload, torque and bit load without noise at each sample [N, N.m, N]."""
    grid = np.linspace(bit.min() - 1.0, bit.max() + 1.0, 40)
    push = np.select([phase == "drill", phase == "slide"], [job.weight, job.slide_weight], 0.0)

    def at(drag: float, load: float = 0.0) -> tuple[np.ndarray, np.ndarray]:
        tension, torque = string_weight(job, grid, drag, load)
        return np.interp(bit, grid, tension), np.interp(bit, grid, torque)

    around = RPM * 2.0 * math.pi / 60.0 * RADIUS
    shared = {"drill": job.rop / math.hypot(around, job.rop), "ream": 0.1 / math.hypot(around, 0.1)}
    raised = np.isin(phase, ("pick_up", "lift"))
    conditions = [raised, phase == "slide", phase == "slack_off", phase == "drill", phase == "ream"]
    drilled, reamed = at(-shared["drill"], job.weight), at(-shared["ream"])
    still = at(0.0)
    hook = np.select(
        conditions,
        [at(1.0)[0], at(-1.0, job.slide_weight)[0], at(-1.0)[0], drilled[0], reamed[0]],
        still[0],
    )
    torque = np.select(
        [phase == "drill", phase == "ream", phase == "rotating"], [drilled[1] + 4000.0, reamed[1], still[1]]
    )
    return np.where(np.isin(phase, ("slips", "raise")), BLOCK, hook + BLOCK), torque, push


def log_columns(job: Job) -> dict[str, np.ndarray]:
    """Give the run's log: stamps and values in the units the names state."""
    rng = np.random.default_rng(job.seed)
    phase, speed = _script(job)
    slips = np.isin(phase, ("slips", "raise"))
    block = 30.0 - np.cumsum(speed) * job.interval
    bit = job.start_depth - LIFT + np.cumsum(np.where(slips, 0.0, speed)) * job.interval
    hole = np.maximum(np.maximum.accumulate(bit), job.start_depth)
    hook, torque, push = _weights(job, phase, bit)
    # The pipe between rotary and hook hangs from the hook too, and in air.
    hook = hook + np.where(slips, 0.0, (block - block.min()) * ROWS[-1][5] * G)
    turning = np.isin(phase, ("rotating", "ream", "drill"))
    pumping = ~slips
    flow = np.where(pumping, 2000.0, 0.0)
    millis = np.round(np.arange(len(bit)) * job.interval * 1e3).astype("timedelta64[ms]")
    stamps = np.datetime64("2031-05-06T00:00:00", "ms") + millis

    def noisy(values: np.ndarray, sigma: float) -> np.ndarray:
        return values + rng.normal(0.0, sigma, len(bit))

    hook = noisy(hook, 1500.0)
    return {
        "Time": np.char.add(np.datetime_as_string(stamps, unit="s"), "Z"),
        "Bit Depth (m)": bit,
        "Hole Depth (m)": hole,
        "Block Position (m)": block,
        "Hookload (kN)": hook / 1e3,
        "WOB (kN)": (string_weight(job, bit[:1], 0.0)[0][0] + BLOCK + 9e3 - hook) / 1e3,
        "Torque (kN.m)": np.where(turning, noisy(torque, 150.0), 0.0) / 1e3,
        "RPM (rpm)": np.where(turning, noisy(np.full(len(bit), RPM), 0.5), 0.0),
        "Standpipe Pressure (bar)": np.where(pumping, noisy(180.0 + push / 4e3, 0.3), 0.0),
        "Flow In (L/min)": np.where(pumping, noisy(flow, 5.0), 0.0),
    }


def write_log(columns: dict[str, np.ndarray], path: Path) -> None:
    """Write a log as CSV with a comma and a full stop."""
    cells = [
        values if values.dtype.kind == "U" else np.char.mod("%.3f", values) for values in columns.values()
    ]
    lines = (",".join(row) for row in zip(*cells, strict=True))
    path.write_text(",".join(columns) + "\n" + "\n".join(lines) + "\n", encoding="utf-8")


def write_well(job: Job, folder: Path) -> None:
    """Write survey, hole and string of the run."""
    md = np.append(np.arange(0.0, job.end_depth, 30.0), job.end_depth)
    angles = np.degrees(inclination(job, md))
    survey = "".join(f"{m:.2f},{a:.3f},45.00\n" for m, a in zip(md, angles, strict=True))
    (folder / "survey.csv").write_text("md [m],inclination [deg],azimuth [deg]\n" + survey)
    (folder / "hole.csv").write_text(
        "top [m],bottom [m],diameter [mm],kind,name\n"
        f"0,{job.shoe},224.4,cased,intermediate casing\n{job.shoe},{job.end_depth},215.9,open,open hole\n"
    )
    rows = "".join(
        f"{name},{kind},{length},{od * 1e3:.1f},{bore * 1e3:.1f},{weight},{joint * 1e3 if joint else ''}\n"
        for name, kind, length, od, bore, weight, joint in ROWS
    )
    (folder / "string.csv").write_text(
        "name,kind,length [m],od [mm],id [mm],weight [kg/m],tool_joint_od [mm]\n" + rows
    )


CASE = """format = 1

[case]
id = "heron-1-run-2"
title = "A quiet run in the tangent"
well = "Heron 1"

[logs]
time = ["time.csv"]
timezone = "UTC"

[survey]
file = "survey.csv"

[hole]
file = "hole.csv"

[string]
file = "string.csv"

[fluid]
density = "{mud} g/cm3"
"""


def make_case(folder: Path, job: Job | None = None) -> Path:
    """Write a good case folder; return the path of its case file."""
    job = job or Job()
    folder.mkdir(parents=True, exist_ok=True)
    write_well(job, folder)
    write_log(log_columns(job), folder / "time.csv")
    path = folder / "case.toml"
    path.write_text(CASE.format(mud=job.mud / 1e3))
    return path
