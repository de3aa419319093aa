"""The motor stalls: it stops turning the bit, pressure stands at its top, nothing is drilled."""

from __future__ import annotations

from .rig import TroubledRig
from .trouble import Trouble


class Stall(Trouble):
    """Too much weight for the motor in this rock, again and again."""

    cause = "motor stall"
    bridge = 90.0

    def place(self, _rig: TroubledRig) -> None:
        """Set at what weight it stalls and what that looks like."""
        rng = self.rng
        self.share = rng.uniform(0.75, 1.05) - 0.25 * self.size
        self.limit = float("inf")
        self.over = rng.uniform(1.3, 1.6) + 0.9 * self.size  # of the differential while drilling
        self.twist = (1.0 + 9.0 * self.size) * 1e3
        self.target = 80.0e3
        self.wound = self.peak = 0.0
        self.stalled = False

    def ripe(self, rig: TroubledRig) -> bool:
        """While drilling."""
        return rig.bit_load > 5.0e3

    def begin(self, rig: TroubledRig) -> None:
        """From now on the rock is too hard for the weight in use."""
        super().begin(rig)
        self._renew()
        self.top, self.bottom = rig.bottom - 2.0, rig.bottom + 12.0

    def _renew(self) -> None:
        self.limit = self.target * self.share * self.rng.uniform(0.85, 1.25)
        self.target *= self.rng.uniform(0.9, 1.15)

    def act(self, rig: TroubledRig) -> None:
        """Stop drilling; the pressure stands flat."""
        rig.stalled = self.stalled
        if self.stalled:
            self.peak += (1.0 - self.peak) * 0.35
            usual = self.limit * rig.settings["instrument"]["pressure_per_load"]
            rig.pressure_extra += usual * self.over * rig.pump * (1.0 + 0.25 * (1.0 - self.peak))
            self.wound = min(self.twist, self.wound + 0.06 * self.twist * rig.dt)
            rig.torque_extra += self.wound * (1.0 if rig.rpm > 5.0 else 0.5)
        else:
            self.wound = self.peak = 0.0

    def after(self, rig: TroubledRig) -> None:
        """Stall above the limit, start again once the weight is taken off."""
        load = rig.bit_load
        if self.on and not self.stalled and load > self.limit and rig.pump > 0.5:
            self.stalled = True
        elif self.stalled and (load < 0.25 * self.limit or rig.pump < 0.2):
            self.stalled = False
            self._renew()
        self.felt = self.stalled
