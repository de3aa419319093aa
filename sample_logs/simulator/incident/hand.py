"""The driller of an incident: he sees weights and pressures, not causes, and reacts to what he sees."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from .. import elements as el
from ..driller import KN, Driller
from ..rig import Demand
from .rig import COLUMNS, TroubledRig

RATIO = COLUMNS.index("ratio")


@dataclass
class Hand(Driller):
    """A driller with limits to what he pulls and sets down, and with ways of getting on."""

    haste: float = 0.5
    overpull: float = 200.0e3
    set_down: float = 80.0e3
    drift_up: float = 0.0  # how the weights he sees differ from those planned [N]
    drift_down: float = 0.0
    most: float = 0.8  # share of the sinusoidal load up to which he loads the string
    deadline: float = math.inf
    rig: TroubledRig

    @property
    def late(self) -> bool:
        """Whether the part of the log to be told is over: not in the middle of trouble."""
        time = self.rig.time
        felt = max((t.times[-1] for t in self.rig.troubles if t.times and t.passes), default=-math.inf)
        return time > self.deadline + 2400.0 or (time > self.deadline and time > felt + 600.0)

    def hold(self, seconds: float, rpm: float = 0.0, pump: float | None = None) -> None:
        """Keep the block still."""
        rig, pump = self.rig, self.pump if pump is None else pump
        end = rig.time + max(1.0, round(seconds))
        while rig.time < end - 0.1:
            rig.longest = end - rig.time
            rig.advance(Demand(0.0, rpm, pump))
        rig.longest = 4.0

    def move(self, distance: float, speed: float, rpm: float = 0.0, pump: float | None = None) -> bool:
        """Move the block; stops early where the hook carries far too much or too little. True if it went."""
        rig, pump = self.rig, self.pump if pump is None else pump
        start, sign = rig.height, math.copysign(1.0, distance)
        high, low = self._limits() if not rig.slips else (math.inf, -math.inf)
        weights, went, on_bottom = [], True, False
        while True:
            left = abs(distance) - abs(start - rig.height)
            if left <= max(0.005, rig.speed**2 / 0.11) or self._at_its_end(sign):
                break
            wanted = min(speed, 0.02 + 0.25 * left) * (1.0 + 0.02 * self.rng.normal())
            rig.advance(Demand(sign * wanted, rpm, pump))
            weights.append(rig.string_weight)
            on_bottom = sign > 0 and rig.bit_load > 40.0 * KN
            if (sign < 0 and weights[-1] > high) or (sign > 0 and weights[-1] < low) or on_bottom:
                rig.speed, went = 0.0, False
                break
        while rig.speed:
            rig.advance(Demand(0.0, rpm, pump))
        if not went and not on_bottom:  # hold it there and see
            self.hold(self.rng.uniform(12, 55) * (1.2 - 0.5 * self.haste), rpm, pump)
        felt = abs(start - rig.height) > 4.0 and rig.reach >= rig.x[0] - 0.5
        if went and felt and not rig.slips and rpm <= 5.0 and len(weights) > 12:
            self._learn(sign, float(np.median(weights[len(weights) // 2 :])))
        return went

    def _at_its_end(self, sign: float) -> bool:
        """Whether the block can go no further, or bottom is near."""
        rig = self.rig
        if sign > 0:
            return rig.height < 0.5 or (rig.bottom - rig.x[0] < 0.6 and not rig.slips)
        return rig.height > rig.settings["rig"]["stand"] + 6.0

    def _planned(self, sign: float) -> float:
        """Weight of the string as planned, moving down (1) or up (-1), with the hole as it should be."""
        rig = self.rig
        return float(el.steady(rig.x, rig.elements, rig.hole.table, rig.control(), sign))

    def _learn(self, sign: float, weight: float) -> None:
        """Get used to the weights seen."""
        if sign < 0:
            self.drift_up += 0.4 * (weight - self._planned(-1.0) - self.drift_up)
        else:
            self.drift_down += 0.4 * (weight - self._planned(1.0) - self.drift_down)

    def _limits(self) -> tuple[float, float]:
        """Weights at which he stops pulling and lowering."""
        up, down = self._planned(-1.0) + self.drift_up, self._planned(1.0) + self.drift_down
        return up + self.overpull, down - self.set_down

    def turn(self, seconds: float, rpm: float | None = None, pump: float | None = None) -> bool:
        """Turn the string, block still; gives up where it will not turn. True if it turned."""
        rpm = self.rpm if rpm is None else rpm
        self.hold(min(seconds, 15), rpm=rpm, pump=pump)
        if rpm > 5.0 and self.rig.rpm <= 5.0:
            self.hold(5, pump=pump)
            return False
        self.hold(max(0.0, seconds - 15), rpm=rpm, pump=pump)
        return True

    def ramp_pumps(self, share: float = 1.0) -> None:
        """Bring the pumps up."""
        for part in np.linspace(0.15, share, 12):
            self.hold(1, pump=float(part))

    def weight_check(self, rotate: float = 45.0, set_zero: bool = True) -> None:
        """Pick-up, slack-off and rotating weights, off bottom, as well as haste lets him."""
        rig, length = self.rig, self.check_length
        if self.room_up < length + 1.5:
            lower = min(length + 1.0, rig.bottom - rig.x[0] - 1.5)
            if lower < 3.0:
                return
            self.move(lower, self.check_speed)
        rig.tag, begin = "check", rig.time
        self.move(-min(length + 1.0, self.room_up), self.check_speed)
        self.hold(6 + 8 * (1.0 - self.haste))
        self.move(length, self.check_speed)
        self.hold(6 + 8 * (1.0 - self.haste))
        if rotate and self.rpm > 0.0 and self.turn(rotate * (1.3 - 0.7 * self.haste)):
            self.zero = rig.string_weight
            if set_zero:
                self.mind_zero()
            self.hold(6)
        self.checks.append({"start": begin, "end": rig.time, "depth": rig.x[0]})
        rig.tag = ""

    def ream_down(self, distance: float, rpm: float | None = None, speed: float = 0.07) -> float:
        """Go down turning and pumping, easing off where weight is taken; returns how far it went."""
        rig, rpm = self.rig, self.rpm if rpm is None else rpm
        self.hold(12, rpm=rpm)
        rest, start = rig.string_weight, rig.height
        end = rig.time + 60.0 + distance / 0.01
        while start - rig.height < distance and rig.time < end and rig.height > 1.0:
            taken = max(0.0, rest - rig.string_weight)
            wanted = speed * max(0.0, 1.0 - taken / (0.6 * self.set_down))
            rig.advance(Demand(wanted, rpm, self.pump))
            if rig.rpm <= 5.0 and rpm > 5.0 and not rig.slips:
                break
        self.hold(5, rpm=rpm)
        return start - rig.height

    def work_down(self, distance: float) -> bool:
        """Get on down past what stopped him; true if he did."""
        rig = self.rig
        goal = rig.height - distance
        for k in range(int(self.rng.integers(1, 4))):
            if self.late:
                return False
            self.hold(self.rng.uniform(5, 60))
            self.move(-self.rng.uniform(1.5, 6.0), self.check_speed, pump=0.0)
            self.hold(self.rng.uniform(3, 20), pump=0.0)
            slower = self.trip_speed * self.rng.uniform(0.3, 0.7)
            if self.move(rig.height - goal, slower, pump=0.0):
                return True
            if k == 0 and self.rng.uniform() < self.haste:
                self.set_down *= 1.2
        self.hold(self.rng.uniform(10, 120), pump=0.0)
        self.ramp_pumps()
        self.move(-self.rng.uniform(1.5, 5.0), self.check_speed)
        self.hold(self.rng.uniform(30, 200))
        if self.rng.uniform() < 0.4 and self.move(rig.height - goal, 0.1):
            return True
        rpm = self.rpm * self.rng.uniform(0.4, 1.0)
        for _ in range(4):
            if rig.height - goal < 0.3 or self.late:
                break
            self.ream_down(rig.height - goal, rpm, self.rng.uniform(0.03, 0.09))
        self.hold(15)
        if self.rng.uniform() < 0.6:  # proof that it is open now
            self.move(-min(8.0, self.room_up), self.check_speed)
            self.hold(8)
            self.move(min(7.5, rig.height - 1.0), self.check_speed)
        return rig.height - goal < 1.0

    @property
    def room_up(self) -> float:
        """How far the block can still go up [m]."""
        return max(0.0, self.rig.settings["rig"]["stand"] + 4.0 - self.rig.height)

    def work_up(self, distance: float) -> bool:
        """Get on up against an overpull; true if he did."""
        rig = self.rig
        goal = rig.height + distance
        for _ in range(int(self.rng.integers(1, 4))):
            if self.late:
                return False
            self.hold(self.rng.uniform(2, 20), pump=0.0)
            if not self.move(min(self.rng.uniform(2.0, 8.0), rig.height - 1.0), self.check_speed, pump=0.0):
                return self.work_free(goal)
            self.hold(self.rng.uniform(5, 40), pump=0.0)
            slower = self.trip_speed * self.rng.uniform(0.4, 0.8)
            if self.move(-(goal - rig.height), slower, pump=0.0):
                return True
        self.ramp_pumps(self.rng.uniform(0.5, 1.0))
        minutes = self.rng.uniform(2.0, 14.0)
        if not self.turn(minutes * 60.0):
            return self.work_free(goal)
        self.hold(15)
        if self.move(-(goal - rig.height), self.check_speed):
            return True
        for _ in range(4):
            if goal - rig.height < 0.3 or self.late:
                break
            if not self.move(-(goal - rig.height), self.rng.uniform(0.04, 0.09), rpm=self.rpm):
                self.move(min(4.0, rig.height - 1.0), 0.1, rpm=self.rpm)
                self.turn(60)
        self.hold(10)
        return goal - rig.height < 1.0

    def work_free(self, goal: float) -> bool:
        """Held both ways: pull, set down, turn, wait, in the order that comes to mind."""
        rig = self.rig
        held = self.overpull, self.set_down
        for k in range(int(self.rng.integers(4, 12))):
            if self.late:
                break
            low = self.pump * self.rng.uniform(0.25, 1.0)
            self.hold(self.rng.uniform(5, 60), pump=low)
            if k % 2 == 0:
                if self.move(-min(3.0, max(0.3, self.room_up)), 0.08, pump=low):
                    break
            elif self.move(min(3.0, rig.height - 1.0), 0.08, pump=low):
                break
            if self.rng.uniform() < 0.5 and self.turn(self.rng.uniform(15, 60), self.rpm * 0.6, low):
                break
            self.overpull = min(self.overpull * 1.3, max(self.overpull, 0.8 * rig.hookload_at_rest()))
            self.set_down = min(self.set_down * 1.2, 0.5 * rig.hookload_at_rest())
        self.overpull, self.set_down = held
        return abs(goal - rig.height) < 1.0

    def go(self, distance: float, speed: float, pump: float = 0.0) -> bool:
        """Move as planned, and deal with what comes in the way; true if it went in the end."""
        goal = self.rig.height - distance
        if self.move(distance, speed, pump=pump):
            return True
        left = self.rig.height - goal
        if abs(left) < 0.5:
            return True
        return self.work_down(left) if distance > 0 else self.work_up(-left)

    def ease_stall(self, turning: float) -> None:
        """Pressure stands flat: he sees it in time, picks the weight off, waits, goes back with less."""
        rig = self.rig
        sees = rig.time + self.rng.uniform(25, 170 - 70 * self.haste)
        while rig.time < sees and rig.stalled and rig.height > 1.0:
            rig.advance(Demand(0.0 if turning else 0.004, turning, self.pump))
        for _ in range(6):
            self.move(-min(self.rng.uniform(0.8, 2.5), max(0.1, self.room_up)), 0.08, rpm=turning)
            if not rig.stalled:
                break
        self.hold(self.rng.uniform(8, 40), rpm=turning)

    def rotary(self, length: float, target: float, floor: float = 1.5) -> None:
        """Drill with rotation, holding weight; a stall is picked up from, and less weight used after."""
        rig = self.rig
        rig.tag = "rotary"
        goal, end = rig.bottom + length, rig.time + length / 0.0012
        while rig.bottom < goal and rig.height > floor and not self.late and rig.time < end:
            self.tag_bottom(self.rpm, 3 * KN)
            if not self._hold_weight(goal, end, target, floor):
                break
            if rig.stalled:
                self.ease_stall(self.rpm)
                target *= self.rng.uniform(0.75, 0.97)
        self.hold(self.rng.uniform(10, 40), rpm=self.rpm)
        rig.tag = ""

    def _hold_weight(self, goal: float, end: float, target: float, floor: float) -> bool:
        """Feed off so that the weight stays, to the end of the length or a stall; false if it won't turn."""
        rig = self.rig
        gain = rig.elements[:, 1].sum() / 25.0
        base, drift, swing = 0.004, 0.0, 0.0
        while rig.bottom < goal and rig.height > floor and not rig.stalled and rig.time < end:
            drift += -0.02 * drift + 0.01 * self.rng.normal()
            swing = 0.9 * swing + 0.1 * self.rng.normal()
            error = target * (1.0 + drift) - self.wob()
            base = min(max(base + 0.01 * gain * error, 0.0), 0.05)
            wanted = min(max(base + gain * error, -0.01), 0.05)
            if rig.rows and rig.rows[-1][RATIO] > self.most:
                wanted = min(wanted, 0.0)
            rig.advance(Demand(wanted, self.rpm + swing, self.pump))
            if rig.rpm <= 5.0:
                return False
        return True

    def tag_bottom(self, rpm: float, load: float, speed: float = 0.1) -> None:
        """Go down until a little weight is taken; gives up after a while."""
        end = self.rig.time + 400.0
        while self.rig.time < end and self.rig.height > 0.6:
            gap = self.rig.bottom - self.rig.x[0]
            wanted = min(speed, 0.015 + 0.06 * max(gap - 0.3, 0.0))
            self.rig.advance(Demand(wanted, rpm, self.pump))
            stacked = self.wob() > 8.0 * load + 250 * KN or self.rig.rows[-1][RATIO] > self.most
            if self.rig.found[0] > load or stacked:
                return

    def slide_on(self, length: float, drop: float, most: float, patience: float = 900.0) -> None:
        """Slide drill a length at a weight set down at surface; a stall is picked up from.

        He feeds no more while the string would be loaded beyond `most` of its sinusoidal load.
        """
        rig = self.rig
        rig.tag = "slide"
        goal, end = rig.bottom + length, rig.time + patience
        gain = rig.elements[:, 1].sum() / 60.0
        while rig.bottom < goal and rig.time < end and rig.height > 1.2 and not self.late:
            wanted = min(max(0.001 + gain * (drop - self.wob()), 0.0), 0.02)
            if rig.rows and rig.rows[-1][RATIO] > most:
                wanted = 0.0
            pause = self.rng.uniform() < 0.02
            rig.advance(Demand(wanted, 0.0, self.pump))
            if pause:
                self.hold(self.rng.uniform(5, 40))
            if rig.stalled:
                self.ease_stall(0.0)
                drop *= self.rng.uniform(0.75, 0.97)
                self.tag_bottom(0.0, 1.5 * KN)
        rig.tag = ""
