"""Make one incident: draw a well and a plan, play the story, write the case folder with its truth."""

from __future__ import annotations

import json
from datetime import datetime, timedelta
from pathlib import Path

import numpy as np

from ..deliver import FIELD, METRIC, write_case, write_csv, write_tables
from ..hole import build_hole, delivered_survey
from .cases import BUCKLING, COMPANIONS, KINDS, NOTHING, POOR, make_trouble
from .hand import RATIO, Hand
from .instruments import log_rows, measure, true_frame
from .physics import SETS, Physics
from .rig import TroubledRig
from .stories import STORIES, Plan, Story
from .trouble import Trouble
from .truth import facts_of
from .wells import draw_settings

Rng = np.random.Generator
CAUSES = tuple(KINDS)
HIDDEN = ("friction higher than assumed", "poor hole cleaning", "differential sticking")
TIMED = ("friction higher than assumed", "pack-off", "motor stall", "sensor or tare fault")


def choose_work(cause: str, rng: Rng) -> tuple[str, str]:
    """Kind of work and of well for a cause."""
    kind = KINDS[cause]
    work = str(rng.choice(kind.works))
    return work, "lateral" if work == "line" else str(rng.choice(kind.paths))


def draw_plan(work: str, settings: dict, rng: Rng) -> tuple[Plan, float]:
    """Numbers of the story, and the depth of the hole at its start."""
    stand = settings["rig"]["stand"]
    depth, shoe = settings["well"]["total_depth"], settings["well"]["holes"][0]["bottom"]
    length = rng.uniform(0.8, 2.0) * 3600.0
    stands = int(length / (150.0 + stand / 0.3))
    bottom = depth
    if work == "drill":
        bottom = depth - rng.uniform(90.0, 300.0)
        begin = bottom - rng.uniform(4.0, 15.0)
    elif work in ("pull", "wipe"):
        begin = bottom - rng.uniform(3.0, 30.0)
    else:
        latest = depth - stands * stand - 20.0
        begin = shoe - rng.uniform(1.5, 4.0) * stand
        if rng.uniform() < 0.6 and latest > begin:
            begin = rng.uniform(begin, latest)
    plan = Plan(begin, stands, length)
    plan.wob = rng.uniform(40, 120) * 1e3 * (0.5 if settings["case"]["section"].endswith("6.125 in") else 1.0)
    parts = settings["string"]["components"]
    heavy = sum(c["length"] * c["weight"] for c in parts if c["name"] in ("mwd", "motor", "collar", "hwdp"))
    if settings["well"]["profile"][-1][1] < 20.0:
        plan.wob = min(plan.wob, 0.6 * 8.3 * heavy)
    plan.drop = plan.wob * rng.uniform(1.2, 2.2)
    plan.rest_at = rng.uniform(0.3, 0.55)
    plan.rest = rng.uniform(60, 1500) if rng.uniform() < 0.3 else 0.0
    return plan, bottom


def span_of(work: str, plan: Plan, settings: dict) -> dict:
    """Depths that the bit will pass in the main part."""
    way = plan.stands * settings["rig"]["stand"]
    low, high = plan.begin, plan.begin + way
    if work == "pull":
        low, high = plan.begin - way, plan.begin
    elif work == "wipe":
        low, high = plan.begin - 0.4 * way, plan.begin
    elif work == "drill":
        low, high = plan.begin - 400.0, plan.begin + 40.0
    shoe = settings["well"]["holes"][0]["bottom"]
    return {"low": max(low, 400.0), "high": high, "shoe": shoe}


def draw_troubles(cause: str, work: str, rng: Rng, physics: Physics, span: dict) -> list[Trouble]:
    """Draw the trouble of the cause, and sometimes a second one."""
    size = float(rng.beta(1.6, 1.1))
    made = []
    if KINDS[cause].make is not None:
        made.append(make_trouble(cause, size, rng, physics, span))
    if cause == POOR:
        hidden = str(rng.choice(HIDDEN))
        made.append(make_trouble(hidden, 0.3 + 0.7 * size, rng, physics, span))
    others = [c for c in COMPANIONS.get(cause, ()) if work in KINDS[c].works]
    if others and rng.uniform() < 0.18:
        made.append(make_trouble(str(rng.choice(others)), 0.5 * size + 0.1, rng, physics, span))
    return made


def draw_hand(rig: TroubledRig, rng: Rng, physics: Physics, liner: bool) -> Hand:
    """Draw a driller with habits of his own."""
    haste = rng.uniform(*physics.hasty)
    rest = rig.hookload_at_rest()
    return Hand(
        rig, rng, haste=haste, rpm=0.0 if liner else rng.uniform(60, 130),
        trip_speed=rng.uniform(0.2, 0.35) + 0.15 * haste,
        check_speed=rng.uniform(0.08, 0.16), check_length=rng.uniform(4.5, 8.0),
        overpull=rng.uniform(0.12, 0.25) * rest * (1.0 + haste), set_down=rng.uniform(0.09, 0.2) * rest,
    )  # fmt: skip


def prepare(cause: str, work: str, plan: Plan, rig: TroubledRig, rng: Rng) -> None:
    """Fit plan and rig to the cause."""
    if cause == "differential sticking" or (cause == POOR and plan.rest == 0.0):
        plan.rest = rng.uniform(500, 2600)
    if cause == BUCKLING:
        size = float(rng.beta(1.3, 1.1))
        plan.most, plan.drop = 1.05 + 1.3 * size, 600.0e3
        plan.turned_softly = bool(rng.uniform() < 0.7)
    for trouble in rig.troubles:
        trouble.place(rig)
        if trouble.cause in TIMED:
            trouble.share = rng.uniform(0.2, 0.55)
        if trouble.cause == "motor stall":
            trouble.target = plan.wob
            plan.drop = plan.wob * 2.0
    if work == "line":
        plan.drop = 0.0


def play(cause: str, seed: int, physics: Physics) -> tuple[TroubledRig, dict, str]:
    """Play one incident; returns the rig with its record, the delivered survey and the work done."""
    rng = np.random.default_rng([seed, 77])
    work, path = choose_work(cause, rng)
    settings = draw_settings(path, work == "line", physics, seed)
    settings["instrument"] |= {
        "lag": rng.uniform(*physics.lag), "flow_power": rng.uniform(*physics.flow_power),
        "return_lag": rng.uniform(8.0, 40.0),
    }  # fmt: skip
    plan, bottom = draw_plan(work, settings, rng)
    if cause == BUCKLING and work == "line":
        settings["planted"]["friction_open"] = rng.uniform(0.42, 0.7)
        deep = settings["well"]["total_depth"] - plan.stands * settings["rig"]["stand"] - 30.0
        plan.begin = max(plan.begin, deep - rng.uniform(0.0, 200.0))
    hole = build_hole(settings, np.random.default_rng([seed, 1]))
    survey = delivered_survey(settings, hole, np.random.default_rng([seed, 2]))
    start = max(hole.shoe * rng.uniform(0.5, 0.85), 350.0)
    rig = TroubledRig(
        settings, hole, min(start, hole.shoe - 4.0 * settings["rig"]["stand"]), height=1.3, bottom=bottom,
        physics=physics, static_grip=rng.uniform(*physics.static_grip),
    )  # fmt: skip
    rig.troubles = draw_troubles(cause, work, rng, physics, span_of(work, plan, settings))
    prepare(cause, work, plan, rig, rng)
    hand = draw_hand(rig, rng, physics, work == "line")
    if cause == BUCKLING and work == "line":
        hand.set_down = 0.75 * rig.hookload_at_rest()
    rig.zero = rig.hookload_at_rest()
    story = Story(hand, plan, rng)
    rig.advance_first()
    story.open()
    STORIES[work](story)
    return rig, survey, work


def happened(cause: str, rig: TroubledRig) -> bool:
    """Whether what was meant to happen did, or nothing where nothing was meant to."""
    ratio = [row[RATIO] for row in rig.rows]
    if cause == BUCKLING:
        return sum(r > 1.02 for r in ratio) > 120
    if cause == NOTHING:
        return max(ratio) < 1.0
    return cause == POOR or any(t.cause == cause and t.times for t in rig.troubles)


def spoil(settings: dict, rng: Rng) -> list[str]:
    """Make a log too poor to tell: few channels, far apart, noisy. Returns the channels left."""
    inst = settings["instrument"]
    inst["interval"] = int(rng.choice([20, 30, 60]))
    inst["hookload_noise_kN"] *= rng.uniform(2.0, 6.0)
    left = ["bit_depth", "hookload"]
    for name, odds in (("block_position", 0.4), ("hole_depth", 0.5), ("rpm", 0.25), ("torque", 0.2),
                       ("standpipe_pressure", 0.2), ("flow_in", 0.15)):  # fmt: skip
        if rng.uniform() < odds:
            left.append(name)
    return left


def channels_left(cause: str, settings: dict, rng: Rng) -> list[str]:
    """Channels of the delivery: some rigs lack one or the other."""
    if cause == POOR:
        return spoil(settings, rng)
    names = [n for n in METRIC if n in FIELD]
    odds = {"toolface": 0.35, "flow_out": 0.3, "differential_pressure": 0.1, "mud_density": 0.3, "rop": 0.2}
    if rng.uniform() < 0.33:
        missing = ("standpipe_pressure", "torque", "differential_pressure", "block_position", "flow_in")
        odds[str(rng.choice(missing))] = 1.0
    if "liner" in settings["case"]["section"]:
        odds |= {"toolface": 1.0, "differential_pressure": 1.0, "rop": 1.0}
    return [n for n in names if rng.uniform() >= odds.get(n, 0.0)]


def make_incident(cause: str, seed: int, physics: str, folder: Path) -> dict:
    """Write the case folder of one incident.

    Parameters
    ----------
    cause : str
        One of `CAUSES`.
    seed : int
        The same seed gives the same incident.
    physics : str
        "one" or "other".
    folder : Path
        Where the case is written.

    Returns
    -------
    dict
        What truth.json holds.
    """
    for again in range(8):
        rig, survey, work = play(cause, seed + 10_000_000 * again, SETS[physics])
        if happened(cause, rig):
            break
    else:
        raise RuntimeError(f"{cause} never showed in eight tries from seed {seed}: draw it in other wells")
    rng = np.random.default_rng([seed, 3])
    settings = rig.settings
    channels = channels_left(cause, settings, rng)
    true = true_frame(rig)
    if len(true) / settings["instrument"]["interval"] > 8000:
        settings["instrument"]["interval"] = 2
    rows = log_rows(measure(rig, true, rng), settings, rng, SETS[physics])
    first = datetime.fromisoformat(settings["start"])

    def clock(second: float) -> str:
        return f"{first + timedelta(seconds=float(second)):%Y-%m-%dT%H:%M:%SZ}"

    facts = facts_of(rig, true, cause, clock) | {"work": work, "physics": physics, "seed": seed}
    folder.mkdir(parents=True, exist_ok=True)
    field = settings["delivery"]["tables"] == "field"
    layout = {"channels": [c for c in channels if c in rows], "units": "field" if field else "metric"}
    write_csv(folder / "log.csv.gz", rows, settings, layout)
    write_tables(folder, survey, settings, field)
    write_case(folder, settings, ["log.csv.gz"], field)
    (folder / "truth.json").write_text(json.dumps(facts, indent=1) + "\n", encoding="utf-8")
    return facts


__all__ = ["CAUSES", "NOTHING", "make_incident", "play"]
