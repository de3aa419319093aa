"""Troubles that stop the bit on its way down: a ledge or shoe, an undergauge hole."""

from __future__ import annotations

from .. import core
from .rig import Obstacle, TroubledRig
from .trouble import Trouble


class Ledge(Trouble):
    """A step in the hole, or the shoe: at one depth, holds nothing going up, lets a turning string by."""

    cause = "ledge or shoe hang-up"

    def __init__(self, *args: object, depth: float = 0.0, offset: float = 0.0, **kwargs: object) -> None:
        super().__init__(*args, **kwargs)
        self.depth, self.offset = depth, offset

    def place(self, rig: TroubledRig) -> None:
        """Set its strength; `offset` is how far above the bit the body is that hangs up."""
        self.top, self.bottom = self.depth - 1.0, self.depth + self.offset + 1.0
        self.strength = (0.1 + 0.45 * self.size) * rig.hookload_at_rest() * self.rng.uniform(0.8, 1.2)
        self.stiffness = self.rng.uniform(5.0e6, 3.0e7)
        self.again = self.rng.uniform(0.4, 1.0)
        self.passed, self.turned, self.over, self.on = False, 0.0, 0.0, True
        self.patience = self.rng.uniform(3.0, 25.0)

    @property
    def stop(self) -> float:
        """Depth of the bit at which it is met."""
        return self.depth + self.offset

    def act(self, rig: TroubledRig) -> None:
        """Stand before the bit, as long as it is above and was not let by."""
        if rig.x[0] < self.stop - 3.0 and self.passed:
            self.passed = self.rng.uniform() > self.again
            self.again = self.again if not self.passed else 0.0
        if not self.passed and rig.x[0] < self.stop + 1.0 < rig.bottom:
            rate = 4.0 / 3600.0 if self.physics.ledge == "creeping" else 0.0
            rig.obstacle = Obstacle(self.stop, self.stiffness, rate)

    def after(self, rig: TroubledRig) -> None:
        """Give way to enough weight or to a turning string."""
        load = rig.obstacle_load
        self.felt = load > 4.0e3
        if load <= 0.0:
            return
        self.turned += rig.dt if rig.rpm > 8.0 else 0.0
        if self.physics.ledge == "creeping":
            self.strength *= 1.0 - 0.004 * rig.dt
            past = rig.obstacle is not None and rig.obstacle.depth > self.stop + 0.5
        else:
            past = False
        self.over = self.over + rig.dt if load > self.strength else 0.0
        if self.over > 4.0 or self.turned > self.patience or past:
            self.passed, self.turned, self.over = True, 0.0, 0.0
            self.patience = self.rng.uniform(2.0, 15.0)


class Undergauge(Trouble):
    """Hole drilled small: the new bit wedges in going down, jams a little, and must ream its way."""

    cause = "undergauge hole"

    def __init__(self, *args: object, depth: float = 0.0, **kwargs: object) -> None:
        super().__init__(*args, **kwargs)
        self.depth = depth

    def place(self, _rig: TroubledRig) -> None:
        """Set how tight and how long."""
        self.top = self.front = self.depth
        self.bottom = self.top + self.rng.uniform(4.0, 45.0)
        self.tight = (1.2e5 + 1.2e6 * self.size**2) * self.rng.uniform(0.8, 1.2)
        self.jam = self.rng.uniform(0.1, 0.55)
        self.rate = self.rng.uniform(25.0, 80.0) / 3600.0
        self.worst, self.on = 0.0, True
        self.rough = 0.0

    def act(self, rig: TroubledRig) -> None:
        """Wedge the bit; pulled back it holds until it is out of the tight part."""
        rig.nodes[core.UP, 0] += self.worst * self.jam if self.worst > 0.0 else 0.0
        if self.front >= self.bottom or rig.bottom <= self.front:
            return
        depth_in = max(0.0, rig.x[0] - self.front)
        stiff = self.tight * (1.0 + (2.5 * depth_in if self.physics.wedge == "progressive" else 0.0))
        turning = rig.rpm > 20.0 and rig.pump > 0.3
        rig.obstacle = Obstacle(self.front, stiff, self.rate if turning else 0.0)
        if turning and rig.obstacle_load > 0.0:
            self.rough = 0.8 * self.rough + 0.6 * self.rng.normal()
            rig.torque_extra += 0.05 * rig.obstacle_load * max(0.2, 1.0 + 0.5 * self.rough)
            rig.torque_rough += 0.15

    def after(self, rig: TroubledRig) -> None:
        """Ream on; feel the wedge."""
        load = rig.obstacle_load
        if rig.obstacle is not None and load > 0.0:
            self.front = max(self.front, rig.obstacle.depth)
            self.worst = max(self.worst, load)
        if rig.x[0] < self.front - 0.2 or rig.rpm > 20.0:
            self.worst = 0.0
        self.felt = load > 4.0e3 or (self.worst > 0.0 and rig.speed < 0.0)
