"""What the episode rules look at, gathered once."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from forensics.rig.view import Activity

if TYPE_CHECKING:
    from forensics.case import Case
    from forensics.episodes.find import Flagged
    from forensics.friction.result import Calibration
    from forensics.loads import DrawHistory, LoadHistory
    from forensics.logs.table import TimeLog
    from forensics.rig.view import RigView
    from forensics.well.model import Well

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

#: A window or a duration is never shorter than this many samples (contract).
LEAST_SAMPLES = 3

#: Thresholds are at least this many times the noise found in the log (contract).
NOISE_MULTIPLE = 6.0

#: Part of the rotating value that a residual must pass (contract).
RESIDUAL_SHARE = 0.10


@dataclass(frozen=True)
class Material:
    """One run's log, loads and calibration, as the episode rules need them.

    `draws` is None where the replay was not repeated; `flagged` is what the rules flag on these loads, where
    somebody has worked it out before (see `find.flag_rows`); `system`, "metric" or "field", is what
    sentences about it are worded in; `doubts` say where the log contradicts survey, string or mud.
    """

    log: TimeLog
    rig: RigView
    loads: LoadHistory
    draws: DrawHistory | None
    calibration: Calibration
    well: Well
    case: Case
    flagged: Flagged | None = None
    system: str = "metric"
    doubts: tuple[str, ...] = ()

    @property
    def time(self) -> Floats:
        """Seconds since 1970 UTC, shape (n,) [s]."""
        return self.log.time

    @property
    def bit(self) -> Floats:
        """Bit depth, shape (n,) [m]."""
        return self.log.values["bit_depth"]

    def window(self, seconds: float) -> float:
        """Lengthen a time window to at least three samples [s]."""
        return max(seconds, LEAST_SAMPLES * self.log.interval)

    def rows_between(self, start: float, end: float) -> slice:
        """Rows from one time to another [s since 1970 UTC], at least one row."""
        first, stop = np.searchsorted(self.time, [start, end]).tolist()
        first = min(first, len(self.time) - 1)
        return slice(first, max(stop, first + 1))

    def noise(self, channel: str) -> float:
        """Short-term noise of a channel, zero where none was found [SI]."""
        value = float(self.rig.noise.get(channel, 0.0))
        return value if np.isfinite(value) else 0.0

    @cached_property
    def rotating_weight(self) -> Floats:
        """Weight of the string as it hangs without friction, shape (n,) [N]."""
        bit = self.bit
        known = np.isfinite(bit)
        if not known.any():
            return np.full(len(bit), np.nan)
        grid = np.linspace(float(bit[known].min()), float(bit[known].max()) + 1.0, 64)
        weight = np.asarray(self.well.rotating_weight(grid)) * self.calibration.weight_scale.value
        return np.where(known, np.interp(bit, grid, weight), np.nan)

    @cached_property
    def spring_rate(self) -> Floats:
        """Pull that stretches the whole string by a metre, EA over length, shape (n,) [N/m]."""
        string, bit = self.well.string, np.nan_to_num(self.bit)
        give = 1.0 / np.asarray(string.values("axial"), dtype=float)
        ends = np.asarray(string.ends, dtype=float)
        along = np.concatenate([[0.0], np.cumsum(give * np.diff(ends, prepend=0.0))])
        beyond = np.maximum(bit - ends[-1], 0.0) * give[-1]
        total = np.interp(bit, np.concatenate([[0.0], ends]), along) + beyond
        return 1.0 / np.maximum(total, 1e-12)

    @cached_property
    def friction_sign(self) -> NDArray[np.int8]:
        """Which way more friction moves the hookload, shape (n,): +1 going up, -1 going down, 0 else.

        A string that is held while the block stands still is pulled, or set down, as its residual says.
        """
        held = np.nan_to_num(np.sign(self.loads.drag_residual)).astype(np.int8)
        way = np.where(self.rig.direction == 0, held, -self.rig.direction)
        return (way * ~self.rig.turning).astype(np.int8)

    @cached_property
    def drag(self) -> Floats:
        """Drag beyond the model, positive for more of it, shape (n,) [N].

        Going up it is the hookload's residual, going down its negative; while turning, where drag has no
        direction, its size.
        """
        residual = self.loads.drag_residual
        return np.where(self.friction_sign == 0, np.abs(residual), self.friction_sign * residual)

    @cached_property
    def drag_threshold(self) -> Floats:
        """Drag that counts as an episode, shape (n,) [N]."""
        return np.maximum(RESIDUAL_SHARE * self.rotating_weight, NOISE_MULTIPLE * self.noise("hookload"))

    @cached_property
    def usual_torque(self) -> float:
        """Median torque while the string turns [N.m]; NaN where there is none."""
        torque = self.log.get("torque")
        turned = torque[self.rig.turning] if torque is not None else np.zeros(0)
        known = turned[np.isfinite(turned)]
        return float(np.median(known)) if len(known) else float("nan")

    @cached_property
    def model_torque(self) -> Floats:
        """Torque the model expects, shape (n,) [N.m]; NaN where none applies."""
        torque = self.log.get("torque")
        if torque is None:
            return np.full(len(self.time), np.nan)
        return torque - self.loads.torque_residual

    @cached_property
    def torque_threshold(self) -> Floats:
        """Torque beyond the model that counts as an episode, shape (n,) [N.m]."""
        return np.maximum(RESIDUAL_SHARE * self.model_torque, NOISE_MULTIPLE * self.noise("torque"))

    def usual_activity(self, rows: Floats) -> str:
        """Name the activity most of the rows are in, idle ones aside where there are others."""
        codes = self.rig.activity[rows]
        idle = (Activity.UNKNOWN, Activity.CONNECTION, Activity.STATIC)
        busy = codes[~np.isin(codes, idle)]
        counts = np.bincount(busy if len(busy) else codes, minlength=1)
        return Activity(int(np.argmax(counts))).word

    def friction_multiple(self, rows: Floats, factors: Floats) -> Floats:
        """Drag at other factors over drag at the calibrated ones, to first order.

        Parameters
        ----------
        rows : ndarray of int, shape (m,)
        factors : ndarray, shape (k, sections)
            Friction factors of the draws, a column for each section of the calibration.

        Returns
        -------
        ndarray, shape (k, m)

        Notes
        -----
        Sections are weighed by the inclined length of string in each, which is what contact follows where
        tension is moderate.
        """
        mu = np.array([section.factor.value for section in self.calibration.sections])
        return factors / np.maximum(mu, 1e-3) @ self.drag_shares[:, rows]

    @cached_property
    def drag_shares(self) -> Floats:
        """Part of the drag that comes from each section of the calibration, shape (sections, n), 0 to 1."""
        bit = np.nan_to_num(self.bit)
        grid = np.linspace(0.0, max(float(bit.max()), 1.0), 400)
        side = np.sin(np.asarray(self.well.trajectory.at(grid).inclination)) + 0.01
        is_open = np.asarray(self.well.hole.is_open(grid), dtype=bool)
        sections = self.calibration.sections
        opened = np.searchsorted(self.calibration.edges, grid)
        which = np.where(is_open, np.minimum(1 + opened, len(sections) - 1), 0)
        felt = side * np.array([section.factor.value for section in sections])[which]
        total = np.maximum(np.cumsum(felt), 1e-12)
        parts = [np.cumsum(felt * (which == k)) / total for k in range(len(sections))]
        return np.array([np.interp(bit, grid, part) for part in parts])

    @cached_property
    def open_share(self) -> Floats:
        """Part of the drag that comes from open hole, shape (n,), 0 to 1."""
        kinds = np.array([section.kind == "open" for section in self.calibration.sections])
        return self.drag_shares[kinds].sum(axis=0)
