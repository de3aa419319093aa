"""What a run's inputs may be off by, and joint draws of it.

Each draw is one set of inputs that the run's own weight readings allow: friction and block weight from the
calibration's posterior, and beside them a mud, a survey, a hole and a string that are off as much as such
things are in practice. Sizes are common practice and carry no source unless one is named.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.friction.result import Calibration, Reading
from forensics.loads import RateLaw
from forensics.mechanics.departed import Departure
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.model import factors
from forensics.well.model import Well
from forensics.well.string import STEEL_DENSITY
from forensics.well.trajectory import Trajectory, build_trajectory, find_fault, tangent_of

Floats = NDArray[np.float64]

#: Mud density, one sigma [kg/m3]: a balance is read to 10, and the mud in the hole is not the mud in the pit.
MUD_SIGMA = 20.0

#: Sag of the survey tool in the string, one sigma at 90 degrees [rad], and depth: part of it, and offset [m]
#: (Williamson 2000, SPE Drilling & Completion 15(4), from memory; sag half-way between corrected and not).
SAG_SIGMA = np.radians(0.14)
DEPTH_SCALE_SIGMA, DEPTH_SIGMA = 5e-4, 0.35

#: Diameters, one sigma: open hole (gauge and washout) and casing as part of theirs, tool joints (wear) [m].
HOLE_SIGMA, CASING_SIGMA, JOINT_SIGMA = 0.015, 0.004, 0.0015

#: Stiffness, one sigma, as part of it: wall tolerance and wear.
STIFFNESS_SIGMA = 0.02

#: Drag under load against drag weighed off bottom, one sigma, as part of it.
LOADED_SIGMA = 0.02

#: Drilling rate at a bit load, one sigma in log units at least: what rotating taught, applied to sliding.
RATE_SIGMA, RATE_SIGMA_UNTAUGHT = 0.25, 0.5

#: A weight reading is trusted no better than this [N], or this part of its value.
READING_SIGMA = (500.0, 0.0015)

NAMES = ("weight", "sag", "depth scale", "depth", "hole", "casing", "joints", "stiffness", "loaded", "rate")

Z90 = 1.6448536269514722
STRIDE = 3
SEED = 20240229


@dataclass(frozen=True)
class Draw:
    """One set of inputs.

    Parameters
    ----------
    factors : ndarray, shape (S,)
        Friction factors by section.
    block : float
        Block weight [N].
    normal : ndarray, shape (len(NAMES),)
        Standard normal numbers, for what `NAMES` says.
    stations : ndarray, shape (m, 3)
        The same for the directions of the survey's stations.
    readings : ndarray, shape (n,)
        The same for the weight readings.
    """

    factors: Floats
    block: float
    normal: Floats
    stations: Floats
    readings: Floats

    def of(self, name: str) -> float:
        """Give the standard normal number of one of `NAMES`."""
        return float(self.normal[NAMES.index(name)])


def joint_draws(calibration: Calibration, well: Well, count: int) -> tuple[Draw, ...]:
    """Draw sets of inputs, in mirrored pairs; the same for the same run.

    The first third of them is spread over the calibration's friction as evenly as all are.

    Parameters
    ----------
    calibration : Calibration
    well : Well
    count : int
        Even.
    """
    draws = calibration.draws
    if len(draws) == 0 or count < 2:
        return ()
    half, own = count // 2, len(draws) // 2
    # the calibration's own draws are mirrored pairs too: the second half mirrors the first
    order = np.argsort(draws[: max(own, 1), -2], kind="stable")
    picked = order[((np.arange(half) + 0.5) * len(order) / half).astype(int)]
    picked = np.concatenate([picked[first::STRIDE] for first in (1, 0, 2)])[:half]
    rng = np.random.default_rng(SEED)
    normal = _whitened(rng.standard_normal((half, len(NAMES))))
    stations = rng.standard_normal((half, len(well.trajectory.md), 3))
    readings = rng.standard_normal((half, len(calibration.readings)))
    found = []
    for k, row in enumerate(picked):
        for sign, at in ((1.0, row), (-1.0, (row + own) % len(draws))):
            values = sign * normal[k], sign * stations[k], sign * readings[k]
            found.append(Draw(draws[at, :-1], float(draws[at, -1]), *values))
    return tuple(found)


def _whitened(normal: Floats) -> Floats:
    """Give columns unit size: few numbers scatter about it, and mirrored they keep their mean."""
    first = len(normal) // STRIDE
    parts = (normal[:first], normal[first:])
    return np.vstack([part / np.sqrt(np.mean(part**2, axis=0)) for part in parts if len(part)])


def weight_factor(draw: Draw, calibration: Calibration, well: Well) -> float:
    """Factor on all weights: what mud and weight per length leave open after the readings."""
    found = calibration.weight_scale
    fitted = (found.high - found.low) / (2.0 * Z90) if found.determined else 0.0
    mud = MUD_SIGMA / (STEEL_DENSITY - well.fluid.typical)
    return 1.0 + max(fitted, mud) * draw.of("weight")


def rate_factor(draw: Draw, law: RateLaw) -> float:
    """Factor on the drilling rate that a bit load gives."""
    sigma = max(law.spread, RATE_SIGMA) if law.determined else RATE_SIGMA_UNTAUGHT
    return float(np.exp(sigma * draw.of("rate")))


def departure(well: Well, draw: Draw) -> Departure:
    """Say how path, hole and string are off."""
    return Departure(
        path=_path(well, draw),
        cased=1.0 + CASING_SIGMA * draw.of("casing"),
        opened=1.0 + HOLE_SIGMA * draw.of("hole"),
        joints=JOINT_SIGMA * draw.of("joints"),
        stiffness=1.0 + STIFFNESS_SIGMA * draw.of("stiffness"),
    )


def _path(well: Well, draw: Draw) -> Trajectory:
    """Draw the path; the likely one where no hole could go as drawn.

    An error of azimuth that all stations share turns the path about the vertical and loads nothing else.
    """
    mean = well.likely.mean
    tangent = tangent_of(mean.inclination, mean.azimuth) + well.likely.draw(draw.stations)
    sag = SAG_SIGMA * draw.of("sag") * np.sin(mean.inclination)
    tangent += sag[:, None] * tangent_of(mean.inclination + 0.5 * np.pi, mean.azimuth)
    inclination = np.arctan2(np.hypot(tangent[:, 0], tangent[:, 1]), tangent[:, 2])
    azimuth = np.mod(np.arctan2(tangent[:, 1], tangent[:, 0]), 2.0 * np.pi)
    # the rotary is where it is: the offset of depth comes in over the first hundred metres
    offset = DEPTH_SIGMA * draw.of("depth") * np.minimum(mean.md / 100.0, 1.0)
    md = mean.md * (1.0 + DEPTH_SCALE_SIGMA * draw.of("depth scale")) + offset
    possible = find_fault(md, inclination, azimuth) is None
    return build_trajectory(md, inclination, azimuth) if possible else mean


class Refit:
    """Calibrates draws on the run's own readings: friction and block weight follow a model's change.

    Parameters
    ----------
    calibration : Calibration
        As found, with its readings.
    model : OffBottomModel
        What it was found with.
    grid : ndarray, shape (p,)
        Bit depths at which the models are compared, ascending [m]: they differ by little that varies in less.
    """

    def __init__(self, calibration: Calibration, model: OffBottomModel, grid: Floats) -> None:
        self.calibration, self.model, self.grid = calibration, model, grid
        self.kinds = np.array([r.kind for r in calibration.weights])
        self.depth = np.array([r.bit_depth for r in calibration.weights])
        self.sigma = np.array([reading_sigma(r) for r in calibration.readings])
        self.mu = factors(calibration)
        self.weight = self._weigh(model, calibration.weight_scale.value)

    def _weigh(self, model: OffBottomModel, scale: float) -> Floats:
        """Weigh the readings' strings, shape (n,) [N]."""
        result = np.zeros(len(self.depth))
        for kind in set(self.kinds.tolist()):
            rows = self.kinds == kind
            weight = model.string_weight(kind, self.grid, *self.mu, scale=scale)
            result[rows] = np.interp(self.depth[rows], self.grid, weight)
        return result

    def __call__(self, other: OffBottomModel, draw: Draw) -> Calibration:
        """Calibrate a draw.

        Parameters
        ----------
        other : OffBottomModel
            The draw's.
        draw : Draw

        Returns
        -------
        Calibration
            The draw's factors, block weight and weight scale, with readings off by as much as they may be.
        """
        found = self.calibration
        scale = found.weight_scale.value * weight_factor(draw, found, self.model.well)
        change = self._weigh(other, scale) - self.weight
        moved = np.zeros(len(self.mu) + 1)
        if found.gain.shape[1] == len(change):
            moved = -found.gain @ np.where(np.isfinite(change), change, 0.0)
        mu = np.clip(draw.factors + moved[:-1], 0.01, 0.6)
        sections = tuple(
            replace(section, factor=replace(section.factor, value=float(value)))
            for section, value in zip(found.sections, mu, strict=True)
        )
        readings = tuple(
            replace(reading, value=reading.value + float(off))
            for reading, off in zip(found.readings, draw.readings * self.sigma, strict=True)
        )
        block = draw.block + float(moved[-1])
        return replace(
            found,
            sections=sections,
            block_weight=replace(found.block_weight, value=block),
            weight_scale=replace(found.weight_scale, value=scale),
            readings=readings,
        )


def reading_sigma(reading: Reading) -> float:
    """How far a weight reading may be off, one sigma [N]."""
    own = reading.spread / np.sqrt(min(max(reading.samples, 1), 10))
    least = max(READING_SIGMA[0], READING_SIGMA[1] * abs(reading.value))
    return float(np.hypot(own if np.isfinite(own) else 0.0, least))
