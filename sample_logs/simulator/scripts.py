"""Scripts: what was done in each invented well, from its settings."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from .driller import KN, Driller
from .rig import Demand, Rig


def trip_in(driller: Driller, stands: int, check_every: int = 0, pump: float = 0.0) -> None:
    """Run stands in; weight checks each few stands, with pumps and rotation where asked."""
    rig = driller.rig
    stub = 1.2
    for k in range(stands):
        rig.tag = "trip_in"
        driller.connection(pump_after=pump, minutes=2.0)
        driller.move_to(stub if not check_every else 9.0, driller.trip_speed, pump=pump)
        if check_every and k % check_every == 0:
            for share in np.linspace(0.1, 1.0, 15):
                driller.hold(1, pump=float(share))
            driller.hold(20)
            driller.weight_check()
            driller.hold(5, pump=0.0)
        driller.move_to(stub, driller.trip_speed, pump=pump)
        driller.hold(4, pump=pump)
    rig.tag = ""


def trip_out(driller: Driller, stands: int) -> None:
    """Pull stands, breaking each one out."""
    rig = driller.rig
    top = rig.settings["rig"]["stand"] + 1.2
    for _ in range(stands):
        rig.tag = "trip_out"
        driller.move_to(top, driller.trip_speed, pump=0.0)
        driller.move(0.25, 0.06, pump=0.0)
        driller.break_stand()
    rig.tag = ""


def skip_in(driller: Driller, depth: float) -> None:
    """Run in to a depth with nothing logged (and nobody counting)."""
    rig = driller.rig
    rig.logging = False
    while rig.tally_depth + rig.settings["rig"]["stand"] < depth:
        driller.connection(pump_after=0.0, minutes=1.5)
        driller.move_to(1.2, 0.5, pump=0.0)
    rig.logging = True


def drill_stand(driller: Driller, stand: dict) -> None:
    """One stand: connection, checks, then rotary and slide parts in the order given."""
    rig = driller.rig
    if stand.get("connection", True):
        driller.connection()
    if rig.bottom - rig.x[0] < driller.check_length + 1.0 and stand.get("check", True):
        driller.move(-1.5, 0.1)
    if stand.get("check", True):
        driller.weight_check()
    for part in stand["parts"]:
        if "rotary" in part:
            driller.rotary(part["rotary"], part.get("wob", 80.0) * KN)
        elif "ream" in part:
            ream(driller, part["ream"], part.get("times", 1))
        elif "wiper" in part:
            wipe(driller, part["wiper"], part.get("times", 1))
        elif "circulate" in part:
            driller.move(-part.get("pick", 4.0), driller.check_speed)
            driller.hold(part["circulate"], rpm=part.get("rpm", 0.0))
        else:
            driller.orient()
            driller.tag_bottom(0.0, 1.5 * KN)
            driller.slide(part["slide"], part["plan"], part.get("patience", 2400.0))
            driller.move(-5.0, driller.check_speed)
            driller.hold(15)


def wipe(driller: Driller, length: float, times: int = 1) -> None:
    """Work the pipe up and down without rotation, as far as the derrick lets it."""
    driller.rig.tag = "wiper"
    for _ in range(times):
        up = min(length, driller.rig.settings["rig"]["stand"] + 1.0 - driller.rig.height)
        driller.move(-up, 0.2)
        driller.hold(15)
        driller.move(up - 2.5, 0.2)
        driller.hold(15)
    driller.rig.tag = ""


def ream(driller: Driller, length: float, times: int = 1) -> None:
    """Work the pipe up and down with rotation."""
    driller.rig.tag = "ream"
    for _ in range(times):
        driller.move(-length, 0.15, rpm=driller.rpm)
        driller.hold(10, rpm=driller.rpm)
        driller.move(length - 0.5, 0.15, rpm=driller.rpm)
        driller.hold(10, rpm=driller.rpm)
    driller.rig.tag = ""


def lateral(rig: Rig, driller: Driller, script: dict) -> None:
    """Trip in through the casing, (unlogged) down the lateral, drill stands, pull a few."""
    driller.hold(60, pump=0.0)
    if script.get("trip_stands", 0):
        trip_in(driller, script["trip_stands"], script.get("check_every", 2))
    if "skip_to" in script:
        skip_in(driller, script["skip_to"])
    driller.zero = rig.string_weight
    for stand in script["stands"]:
        for _ in range(stand.get("repeat", 1)):
            drill_stand(driller, stand)
    if script.get("pull_stands", 0):
        if script.get("clean", 0):
            driller.move(-4.0, driller.check_speed)
            driller.hold(script["clean"], rpm=driller.rpm)
        trip_out(driller, script["pull_stands"])


def calibration(_rig: Rig, driller: Driller, script: dict) -> None:
    """Trip in with pick-up, slack-off and rotating weights every few stands, then out again with them."""
    driller.hold(60, pump=0.0)
    trip_in(driller, script["trip_stands"], script["check_every"])
    driller.hold(120, pump=1.0)
    driller.move(-6.0, driller.check_speed)
    driller.weight_check()
    driller.hold(script.get("clean", 300), rpm=driller.rpm)
    out, every = script["pull_stands"], script["check_every"]
    for k in range(out):
        trip_out(driller, 1)
        if k % every == 0:
            driller.move(-10.0, driller.trip_speed, pump=0.0)
            driller.hold(20)
            driller.weight_check()


def push_down(driller: Driller, goal: float, floor: float, speed: float) -> bool:
    """Lower the block to a height; false where the hook would carry less than `floor` [N] before."""
    rig = driller.rig
    while rig.height > goal:
        left = rig.height - goal
        near = max((rig.string_weight - floor) / (250.0 * KN), 0.08)
        rig.advance(Demand(min(speed, 0.03 + 0.25 * left, speed * near), 0.0, 0.0))
        if rig.string_weight < floor or rig.found[0] > 60.0 * KN:
            rig.speed = 0.0  # he is on the brake
            return False
    while rig.speed:
        rig.advance(Demand(0.0, 0.0, 0.0))
    return True


def liner(rig: Rig, driller: Driller, script: dict) -> None:
    """Run a liner on drill pipe: pick-up and slack-off each stand, until it goes no further."""
    floor = script["floor_kN"] * KN
    driller.hold(60, pump=0.0)
    for k in range(script["stands"]):
        rig.tag = "run"
        driller.connection(pump_after=0.0, minutes=script.get("minutes", 2.5))
        if k % script.get("pick_every", 1) == 0:
            driller.move(-min(4.0, rig.settings["rig"]["stand"] / 6.0), driller.check_speed, pump=0.0)
            driller.hold(8, pump=0.0)
        if k and k % script.get("circulate_every", 20) == 0:
            driller.hold(script.get("circulate_s", 240), pump=0.6)
        if push_down(driller, 1.2, floor, driller.trip_speed):
            driller.hold(5, pump=0.0)
            continue
        stuck(driller, script)
        break
    rig.tag = ""


def stuck(driller: Driller, script: dict) -> None:
    """Try again and again where the liner went no further, then come up and wait."""
    driller.rig.tag = "stuck"
    for attempt in script["attempts"]:
        driller.hold(attempt.get("wait", 60), pump=0.0)
        driller.move(-attempt["pick"], driller.check_speed, pump=0.0)
        driller.hold(20, pump=attempt.get("pump", 0.0))
        push_down(driller, 1.2, attempt["floor_kN"] * KN, attempt.get("speed", 0.15))
    driller.hold(240, pump=0.0)
    driller.move(-min(20.0, 29.0 - driller.rig.height), driller.check_speed, pump=0.0)
    driller.hold(120, pump=0.0)


SCRIPTS: dict[str, Callable[[Rig, Driller, dict], None]] = {
    "lateral": lateral,
    "calibration": calibration,
    "liner": liner,
}
