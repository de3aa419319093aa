"""What was being done when it happened: drilling, pulling, running in, a wiper trip, a liner."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from .. import elements as el
from ..driller import KN
from .hand import Hand
from .holds import Sticking
from .rig import TroubledRig


@dataclass
class Plan:
    """The numbers of one story."""

    begin: float  # bit depth at which the main part begins [m]
    stands: int
    length: float  # of the main part [s]
    wob: float = 80.0e3
    most: float = 0.8  # of the sinusoidal load, while sliding
    drop: float = 150.0e3  # set down at surface while sliding [N]
    rest_at: float = 0.4  # share of the main part at which the string stands still for long
    rest: float = 0.0  # for how long [s]
    turned_softly: bool = True  # whether he keeps a turning string from buckling


@dataclass
class Story:
    """A driller, a plan, and how far it has come."""

    hand: Hand
    plan: Plan
    rng: np.random.Generator
    rested: bool = False

    @property
    def rig(self) -> TroubledRig:
        """The rig."""
        return self.hand.rig

    def open(self, stands: int = 2) -> None:
        """Run a few stands in the cased hole, with weights taken: what a log starts with."""
        hand, rig = self.hand, self.rig
        hand.hold(40, pump=0.0)
        for _ in range(stands):
            hand.connection(pump_after=0.0, minutes=1.6)
            hand.move_to(9.5, hand.trip_speed, pump=0.0)
            hand.ramp_pumps()
            hand.hold(15)
            hand.weight_check(30)
            hand.hold(4, pump=0.0)
            hand.move_to(1.3, hand.trip_speed, pump=0.0)
        rig.relocate(self.plan.begin, self.rng.uniform(1.0, 9.0))
        self._learn_torque()
        hand.deadline = rig.time + self.plan.length
        hand.most = min(self.plan.most, 0.8) if self.plan.turned_softly else self.plan.most
        for trouble in rig.troubles:
            trouble.at = rig.time + trouble.share * self.plan.length

    def _learn_torque(self) -> None:
        """Set the top drive's limit above what drilling takes."""
        rig = self.rig
        rig.advance_first()
        usual = el.turning_torque(rig.x, rig.tension, rig.elements, rig.hole.table, rig.control())
        bit = self.plan.wob * rig.settings["planted"]["bit_torque_m"]
        rig.top_drive = 1.35 * (usual + bit) + self.rng.uniform(3.0e3, 13.0e3)

    def check(self) -> None:
        """Take the weights, pumps on."""
        self.hand.weight_check(self.rng.uniform(25, 60))

    def pause(self) -> None:
        """Stand still for long where the plan says so."""
        begun = self.hand.deadline - self.plan.length
        early = self.rig.time < begun + self.plan.rest_at * self.plan.length
        if self.rested or self.plan.rest <= 0.0 or early:
            return
        self.rested = True
        for trouble in self.rig.troubles:
            if isinstance(trouble, Sticking):
                trouble.settle(self.rig)
        pump = float(self.rng.choice([0.0, 1.0]))
        self.hand.hold(self.plan.rest, pump=pump)
        self.leave(pump)

    def leave(self, pump: float = 1.0) -> None:
        """Pick up gently after standing still, with what that takes."""
        hand, usual = self.hand, self.hand.overpull
        hand.overpull = 0.5 * usual
        speed = self.rng.uniform(0.04, 0.09)
        if not hand.move(-min(3.5, hand.room_up), speed, pump=pump):
            hand.overpull = usual
            hand.work_free(self.rig.height + 1.0)
        hand.overpull = usual
        hand.move(min(3.0, self.rig.height - 1.0), hand.check_speed, pump=pump)


def drill(story: Story) -> None:
    """Drill on: turning and sliding, weights at connections."""
    hand, rig, rng, plan = story.hand, story.rig, story.rng, story.plan
    hand.ramp_pumps()
    hand.hold(20)
    while not hand.late:
        if rig.height < 8.0:
            hand.move(-min(6.0, hand.room_up), hand.check_speed)
            hand.hold(rng.uniform(10, 80), rpm=hand.rpm)
            hand.connection(minutes=rng.uniform(2.0, 4.0))
            story.leave()
        story.check()
        hand.rotary(rng.uniform(3.0, 9.0), plan.wob * rng.uniform(0.85, 1.1))
        slides = plan.most > 1.0 or rng.uniform() < 0.6
        if slides and rig.height > 4.0 and not hand.late:
            hand.orient()
            hand.tag_bottom(0.0, 1.5 * KN)
            length = rng.uniform(1.5, 5.0) * (1.6 if plan.most > 1.0 else 1.0)
            hand.slide_on(length, plan.drop, plan.most, rng.uniform(400, 1100))
            hand.move(-min(4.0, hand.room_up), hand.check_speed)
            hand.hold(rng.uniform(5, 40))
        if rng.uniform() < 0.3:
            hand.move(-min(8.0, hand.room_up), 0.15, rpm=hand.rpm)
            hand.move(min(7.0, rig.height - 1.0), 0.15, rpm=hand.rpm)
        if not story.rested and plan.rest > 0.0:
            hand.move(-min(2.0, hand.room_up), hand.check_speed)
            story.pause()


def _pull(story: Story, stands: int) -> None:
    hand, rig, rng = story.hand, story.rig, story.rng
    top = rig.settings["rig"]["stand"] + 1.3
    for k in range(stands):
        if hand.late:
            return
        share = rng.uniform(0.3, 0.8)
        hand.go(-(top - rig.height) * share, hand.trip_speed)
        story.pause()
        hand.go(-(top - rig.height), hand.trip_speed)
        if top - rig.height > 2.0:
            return
        if k % 4 == 3 and rng.uniform() < 0.6:
            hand.move(5.0, hand.check_speed, pump=0.0)
            hand.hold(6, pump=0.0)
            hand.move(-5.0, hand.check_speed, pump=0.0)
        hand.move_to(top + 0.3, 0.06, pump=0.0)
        hand.break_stand(rng.uniform(1.6, 3.0))


def pull(story: Story) -> None:
    """Circulate, take weights, pull out stand by stand."""
    hand, rng = story.hand, story.rng
    hand.ramp_pumps()
    hand.hold(20)
    story.check()
    hand.hold(rng.uniform(60, 500), rpm=hand.rpm)
    hand.hold(10)
    _pull(story, story.plan.stands)
    if not hand.late:
        hand.ramp_pumps()
        hand.hold(rng.uniform(60, 600), rpm=hand.rpm)
        hand.hold(15)
        story.check()


def _run(story: Story, stands: int) -> None:
    hand, rig, rng = story.hand, story.rig, story.rng
    for k in range(stands):
        if hand.late or rig.bottom - rig.x[0] < rig.settings["rig"]["stand"] + 3.0:
            return
        hand.connection(pump_after=0.0, minutes=rng.uniform(1.5, 2.4))
        way = rig.height - 1.3
        done = hand.go(way * rng.uniform(0.3, 0.8), hand.trip_speed)
        if done:
            story.pause()
            done = hand.go(rig.height - 1.3, hand.trip_speed)
        if not done and rig.height > 3.0:
            hand.move(-min(5.0, hand.room_up), hand.check_speed)
            return
        if k % 4 == 2:
            hand.ramp_pumps()
            hand.hold(10)
            hand.move(-7.0, hand.check_speed)
            story.check()
            hand.move_to(1.3, hand.check_speed)


def run(story: Story) -> None:
    """Run in stand by stand, weights now and then."""
    story.hand.hold(20, pump=0.0)
    _run(story, story.plan.stands)
    story.hand.ramp_pumps()
    story.hand.hold(60)
    story.hand.move(-min(8.0, story.hand.room_up), story.hand.check_speed)
    story.check()


def wipe(story: Story) -> None:
    """Pull some stands and run them back: each depth is passed twice, circulation between."""
    hand, rng = story.hand, story.rng
    hand.ramp_pumps()
    hand.hold(20)
    story.check()
    half = max(3, int(0.4 * story.plan.stands))
    _pull(story, half)
    if rng.uniform() < 0.7:
        hand.ramp_pumps()
        hand.hold(rng.uniform(120, 800), rpm=hand.rpm * 0.7)
        hand.hold(10, pump=0.0)
    _run(story, half)
    hand.ramp_pumps()
    hand.hold(rng.uniform(60, 400), rpm=hand.rpm)
    hand.hold(10)
    story.check()


def line(story: Story) -> None:
    """Run a liner: pick-up and slack-off each stand, circulation now and then, no rotation."""
    hand, rig, rng = story.hand, story.rig, story.rng
    hand.hold(20, pump=0.0)
    tries = 0
    for k in range(story.plan.stands):
        if hand.late or rig.bottom - rig.x[0] < rig.settings["rig"]["stand"] + 3.0 or tries > 3:
            break
        hand.connection(pump_after=0.0, minutes=rng.uniform(1.6, 2.4))
        hand.move(-4.0, hand.check_speed, pump=0.0)
        hand.hold(6, pump=0.0)
        if k % 6 == 5:
            hand.ramp_pumps(0.6)
            hand.hold(rng.uniform(60, 240), pump=0.6)
        story.pause()
        while not hand.move(rig.height - 1.3, hand.trip_speed, pump=0.0):
            tries += 1
            hand.hold(rng.uniform(20, 120), pump=0.0)
            hand.move(-min(rng.uniform(2, 9), hand.room_up), hand.check_speed, pump=0.0)
            hand.hold(rng.uniform(10, 60), pump=float(rng.choice([0.0, 0.6])))
            if rng.uniform() < 0.3:
                hand.hold(20, rpm=15.0, pump=0.0)
            if hand.late or tries > 8:
                break


STORIES: dict[str, Callable[[Story], None]] = {
    "drill": drill, "pull": pull, "run": run, "wipe": wipe, "line": line,
}  # fmt: skip
