"""Troubles of the instruments: nothing is wrong with the string."""

from __future__ import annotations

import numpy as np
import pandas as pd

from .rig import TroubledRig
from .trouble import Trouble

MODES = ("step", "step", "drift", "frozen", "block weight", "scale")


class HookloadFault(Trouble):
    """The hookload is wrong: a step, drift or scale, frozen for a while, or the block weight told wrong."""

    cause = "sensor or tare fault"
    passes = False

    def place(self, rig: TroubledRig) -> None:
        """Choose how it reads wrong."""
        rng = self.rng
        self.mode = str(rng.choice(MODES))
        sign = float(rng.choice([-1.0, 1.0]))
        self.shift = sign * (8.0 + 140.0 * self.size**1.5) * 1e3
        self.scale = sign * (0.01 + 0.09 * self.size)
        self.lasting = rng.uniform(240.0, 900.0 + 2400.0 * self.size)
        self.since, self.until = float("inf"), float("inf")
        self.top, self.bottom = 0.0, float(rig.x[0])
        if self.mode == "block weight":
            rig.settings["case"]["tell_block_weight"] = True
            rig.settings["case"]["block_weight_error_kN"] = round(self.shift / 1e3, 0)
            self.since = 0.0

    def begin(self, rig: TroubledRig) -> None:
        """Fail now; some come right again."""
        super().begin(rig)
        self.since = min(self.since, rig.time)
        if self.mode == "frozen":
            self.until = rig.time + self.lasting
        elif self.mode == "step" and self.rng.uniform() < 0.3:
            self.until = rig.time + self.lasting + 1800.0

    def after(self, rig: TroubledRig) -> None:
        """Be wrong in every state."""
        self.felt = self.since <= rig.time <= self.until
        self.bottom = max(self.bottom, float(rig.x[0]))

    def corrupt(self, frame: pd.DataFrame, rng: np.random.Generator) -> None:
        """Put the fault on the measured hookload, and on the weight reckoned from it."""
        time, hook = frame["time"].to_numpy(), frame["hookload"].to_numpy().copy()
        inside = (time >= self.since) & (time <= self.until)
        wrong = hook.copy()
        if self.mode == "step":
            wrong[inside] += self.shift
        elif self.mode == "drift":
            wrong[inside] += self.shift * np.clip((time[inside] - self.since) / 5400.0, 0.0, 1.5)
        elif self.mode == "scale":
            wrong[inside] *= 1.0 + self.scale
        elif self.mode == "frozen" and inside.any():
            wrong[inside] = hook[np.argmax(inside)] + rng.choice([0.0, 150.0]) * rng.normal(size=inside.sum())
        frame["hookload"] = wrong
        if "wob" in frame:
            frame["wob"] = frame["wob"] - (wrong - hook)
