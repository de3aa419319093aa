"""What can go wrong, as one contract: change what is asked, stand in the way, show itself."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from ..rig import Demand
    from .physics import Physics
    from .rig import TroubledRig


class Trouble:
    """Something that is not as it should be, of a size from barely visible (0) to gross (1).

    Its time starts when the story calls `begin` (some are there all along); `felt` says at every step
    whether it shows.
    """

    cause = ""
    passes = True  # whether it is over after a while, so that the story goes on to what came after
    bridge = 300.0  # s: apart by less, two times it was felt are one

    def __init__(self, size: float, rng: np.random.Generator, physics: Physics) -> None:
        self.size, self.rng, self.physics = size, rng, physics
        self.top = self.bottom = float("nan")
        self.on = False
        self.felt = False
        self.times: list[float] = []
        self.share = self.at = float("inf")

    def place(self, _rig: TroubledRig) -> None:
        """Find where in the hole it is, before the run."""

    def begin(self, _rig: TroubledRig) -> None:
        """Start, at a moment the story chose."""
        self.on = True

    def ask(self, _rig: TroubledRig, demand: Demand) -> Demand:
        """Change what the driller gets out of what he asks for."""
        return demand

    def act(self, _rig: TroubledRig) -> None:
        """Stand in the way during the next step."""

    def after(self, _rig: TroubledRig) -> None:
        """Take notice of what the step did."""

    def ripe(self, rig: TroubledRig) -> bool:
        """Whether the rig does what it takes to start, once its time has come."""
        return not rig.slips

    def note(self, rig: TroubledRig) -> None:
        """Start when its time has come; keep the times at which it was felt."""
        if not self.on and rig.time >= self.at and self.ripe(rig):
            self.begin(rig)
        if self.felt and rig.logging:
            self.times.append(rig.time)

    def spans(self) -> list[tuple[float, float]]:
        """Intervals in which it was felt; close ones are one."""
        found: list[list[float]] = []
        for time in self.times:
            if found and time - found[-1][1] <= self.bridge:
                found[-1][1] = time
            else:
                found.append([time, time])
        return [(a, b) for a, b in found]
