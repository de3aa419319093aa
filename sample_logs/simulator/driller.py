"""What a driller does with his hands: moves, connections, weight checks, rotary drilling, slides."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np

from .rig import Demand, Rig

KN = 1e3


@dataclass
class Driller:
    """A rig and the habits of the person at the brake."""

    rig: Rig
    rng: np.random.Generator
    rpm: float = 80.0
    pump: float = 1.0
    trip_speed: float = 0.35
    check_speed: float = 0.13
    check_length: float = 7.0
    zero: float = 0.0  # string weight he reckons from [N], without block
    checks: list[dict] = field(default_factory=list)

    def hold(self, seconds: float, rpm: float = 0.0, pump: float | None = None) -> None:
        """Keep the block still."""
        pump = self.pump if pump is None else pump
        for _ in range(round(seconds)):
            self.rig.advance(Demand(0.0, rpm, pump))

    def move(self, distance: float, speed: float, rpm: float = 0.0, pump: float | None = None) -> None:
        """Move the block: distance down positive [m], at a speed with a hand's unsteadiness."""
        pump = self.pump if pump is None else pump
        start = self.rig.height
        sign = math.copysign(1.0, distance)
        while True:
            left = abs(distance) - abs(start - self.rig.height)
            if left <= max(0.005, self.rig.speed**2 / 0.11):
                break
            wanted = min(speed, 0.02 + 0.25 * left) * (1.0 + 0.02 * self.rng.normal())
            self.rig.advance(Demand(sign * wanted, rpm, pump))
            if sign > 0 and self.rig.found[0] > 10 * KN:
                self.rig.speed = 0.0  # he has run into bottom
                break
        while self.rig.speed:
            self.rig.advance(Demand(0.0, rpm, pump))

    def move_to(self, height: float, speed: float, rpm: float = 0.0, pump: float | None = None) -> None:
        """Move the block to a height above the rotary."""
        distance = self.rig.height - height
        if abs(distance) > 0.01:
            self.move(distance, speed, rpm, pump)

    def connection(self, pump_after: float | None = None, minutes: float = 3.0) -> None:
        """Set slips, fetch a stand, screw it on, take the weight again."""
        rig = self.rig
        self.hold(8, pump=0.0)
        rig.slips, rig.load_in_slips = True, 0.0
        quarter = minutes * 60.0 / 4.0 * self.rng.uniform(0.8, 1.3)
        self.hold(quarter, pump=0.0)
        stub = rig.height
        self.move_to(stub + rig.settings["rig"]["stand"] + 0.5, 0.5, pump=0.0)
        rig.load_in_slips = 0.7 * self.stand_weight()
        self.hold(quarter, pump=0.0)
        self.move_to(stub + rig.settings["rig"]["stand"], 0.1, pump=0.0)
        self.hold(quarter / 2, pump=0.0)
        rig.load_in_slips = 0.0
        rig.add_stand()
        self.hold(quarter / 2, pump=0.0)
        rig.slips = False
        self.move(-0.4, 0.06, pump=0.0)
        after = self.pump if pump_after is None else pump_after
        if after > 0.0:
            for share in np.linspace(0.1, after, 20):
                self.hold(1, pump=float(share))
            self.hold(10, pump=after)

    def break_stand(self, minutes: float = 2.5) -> None:
        """Set slips with a stand above the rotary, rack it back, latch on again."""
        rig = self.rig
        self.hold(5, pump=0.0)
        rig.slips, rig.load_in_slips = True, 0.0
        third = minutes * 20.0 * self.rng.uniform(0.8, 1.3)
        self.hold(third, pump=0.0)
        rig.drop_stand()
        stub = rig.height
        rig.height = stub + rig.settings["rig"]["stand"]
        rig.load_in_slips = 0.6 * self.stand_weight()
        self.hold(third, pump=0.0)
        rig.load_in_slips = 0.0
        self.move_to(stub, 0.5, pump=0.0)
        self.hold(third, pump=0.0)
        rig.slips = False

    def stand_weight(self) -> float:
        """Weight of one stand in air [N]."""
        last = self.rig.settings["string"]["components"][-1]
        return last["weight"] * 9.80665 * self.rig.settings["rig"]["stand"]

    def weight_check(self, rotate: float = 45.0, set_zero: bool = True) -> None:
        """Pick-up, slack-off and rotating weights over the same few metres, off bottom."""
        self.rig.tag = "check"
        begin = self.rig.time
        self.move(-self.check_length, self.check_speed)
        self.hold(12)
        self.move(self.check_length, self.check_speed)
        self.hold(12)
        if rotate:
            self.hold(rotate, rpm=self.rpm)
            if set_zero:
                self.zero = self.rig.string_weight
                self.mind_zero()
            self.hold(6)
        self.checks.append({"start": begin, "end": self.rig.time, "depth": self.rig.x[0]})
        self.rig.tag = ""

    def mind_zero(self) -> None:
        """Zero the rig's weight indicator: often forgotten, never exact."""
        if self.rng.uniform() > self.rig.settings["instrument"].get("forgets_zero", 0.4):
            error = self.rng.normal(0.0, self.rig.settings["instrument"].get("zero_error_kN", 10.0))
            self.rig.zero = self.zero + error * KN

    def wob(self) -> float:
        """Weight the driller believes he has set down [N]."""
        return self.zero - self.rig.string_weight

    def tag_bottom(self, rpm: float, load: float, speed: float = 0.1) -> None:
        """Go down until a little weight is taken."""
        while True:
            gap = self.rig.bottom - self.rig.x[0]
            wanted = min(speed, 0.015 + 0.06 * max(gap - 0.3, 0.0))
            self.rig.advance(Demand(wanted, rpm, self.pump))
            if self.rig.found[0] > load:
                return
            if self.wob() > 8.0 * load + 250 * KN:
                return

    def rotary(self, length: float, target: float, floor: float = 1.5) -> None:
        """Drill a length with rotation, holding weight; stops short where the block runs out."""
        rig = self.rig
        rig.tag = "rotary"
        self.tag_bottom(self.rpm, 3 * KN)
        goal = rig.bottom + length
        gain = rig.elements[:, 1].sum() / 25.0
        base, drift, swing = 0.004, 0.0, 0.0
        while rig.bottom < goal and rig.height > floor:
            drift += 0.02 * (-drift) + 0.01 * self.rng.normal()
            swing = 0.9 * swing + 0.1 * self.rng.normal()
            error = target * (1.0 + drift) - self.wob()
            base = min(max(base + 0.01 * gain * error, 0.0), 0.05)
            speed = base + gain * error
            rig.advance(Demand(min(max(speed, -0.01), 0.05), self.rpm + swing, self.pump))
        self.drill_off(self.rpm, 40)
        rig.tag = ""

    def drill_off(self, rpm: float, seconds: float) -> None:
        """Block still, let the weight drill away."""
        self.hold(seconds, rpm=rpm)

    def orient(self) -> None:
        """Pick up, work the pipe to lose torque, leave the toolface where it is wanted."""
        self.rig.tag = "orient"
        self.move(-self.check_length, self.check_speed)
        self.hold(10)
        self.move(self.check_length - 2.0, self.check_speed)
        self.hold(20)
        self.move(-2.0, self.check_speed)
        self.hold(15)
        self.rig.tag = ""

    def stack(self, drop: float, speed: float = 0.02, limit: float = 4.0) -> None:
        """Lower the block until the hook carries `drop` less than the rotating weight [N]."""
        start = self.rig.height
        while self.wob() < drop and start - self.rig.height < limit and self.rig.height > 0.8:
            self.rig.advance(Demand(speed, 0.0, self.pump))
        while self.rig.speed:
            self.rig.advance(Demand(0.0, 0.0, self.pump))

    def slide(self, length: float, plan: list[dict], patience: float = 2400.0) -> None:
        """Slide drill: stack, drill off with the block still, pick part of it up, stack again."""
        rig = self.rig
        rig.tag = "slide"
        goal, end = rig.bottom + length, rig.time + patience
        more = rig.settings["script"].get("drop_shift_kN", 0.0)
        k = 0
        while rig.bottom < goal and rig.time < end and rig.height > 1.5:
            act = plan[k % len(plan)]
            k += 1
            if "pick" in act:
                self.move(-act["pick"], act.get("speed", 0.05))
            elif "feed" in act:
                self.feed((act["feed"] + more) * KN, act["seconds"])
            else:
                self.stack((act["drop"] + more) * KN, act.get("speed", 0.02), act.get("limit", 4.0))
            self.hold(act.get("hold", 30.0))
        rig.tag = ""

    def feed(self, drop: float, seconds: float) -> None:
        """Feed slowly, keeping the weight indicator near `drop` below the rotating weight."""
        gain = self.rig.elements[:, 1].sum() / 60.0
        for _ in range(round(seconds)):
            speed = min(max(0.001 + gain * (drop - self.wob()), 0.0), 0.02)
            self.rig.advance(Demand(speed, 0.0, self.pump))
            if self.rig.height < 1.2:
                return
