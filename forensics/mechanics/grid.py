"""The well and the string as plain arrays: what the compiled marches read.

Two tables. `HoleGrid` runs along measured depth at a fixed step and holds what the hole does to any
pipe that lies there. `PipeGrid` runs along the string from the bit up and holds what a piece of pipe
carries wherever it is. A station of the string at distance x above the bit lies at depth bit - x, so
the march looks its direction up by index, without interpolation: node distances are whole multiples
of the depth step.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.runs import run_lengths
from forensics.units import G
from forensics.well.model import Well
from forensics.well.string import Component, buoyed_weight
from forensics.well.trajectory import Trajectory

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

DEPTH_STEP = 0.5  # m; a quarter of a metre of placement error is far below survey error
STATION_STEP = 10.0  # m
MIN_CLEARANCE = 0.002  # m; less than this and the place is a support


@dataclass(frozen=True)
class HoleGrid:
    """The hole at depths `i * step`; arrays of shape (n,).

    Parameters
    ----------
    step : float
        [m]
    cos_i, sin2, kappa2, kappa_d : ndarray
        cos I; sin² I; squared curvature [1/m²]; downward component of curvature [1/m].
        The lateral load per length at tension T is sqrt(T² kappa2 + 2 T w kappa_d + w² sin2).
    tvd : ndarray
        True vertical depth [m].
    open_hole : ndarray of bool
        False in casing.
    diameter : ndarray
        [m]
    curvature, across : ndarray, shape (looks, 3)
        Vectors of the curvature [1/m] and of what of the weight lies across the hole.
    coarse : int
        Steps that share one look at the path: looks = n / coarse, rounded up.
    """

    step: float
    cos_i: Floats
    sin2: Floats
    kappa2: Floats
    kappa_d: Floats
    tvd: Floats
    open_hole: NDArray[np.bool_]
    diameter: Floats
    curvature: Floats
    across: Floats
    coarse: int = 1


@dataclass(frozen=True)
class PipeGrid:
    """The string from the bit up; nodes at `x`, elements between them.

    Parameters
    ----------
    x : ndarray, shape (m + 1,)
        Distance of nodes above the bit [m].
    node : ndarray of int, shape (m + 1,)
        The same in depth steps.
    component : ndarray of int, shape (m,)
        Row in the string table of each element.
    weight, ei, ea, clearance_od, radius, stiff_run : ndarray, shape (m,)
        Buoyed weight per length [N/m]; bending and axial stiffness [N.m², N]; contact diameter [m];
        contact radius for torque [m]; length of the run of like stiffness the element is in [m].
    ends, hanging : ndarray, shape (components,)
        Distance of the components' upper ends above the bit [m], the last one without end; their weight per
        length in air, full of mud [N/m].
    """

    x: Floats
    node: Ints
    component: Ints
    weight: Floats
    ei: Floats
    ea: Floats
    clearance_od: Floats
    radius: Floats
    stiff_run: Floats
    ends: Floats
    hanging: Floats


def hole_grid(well: Well, depth: float) -> HoleGrid:
    """Tabulate the hole down to `depth` [m] and one station further.

    Notes
    -----
    Values stand for the middle of the step that ends at `i * step`, so that sums over steps are exact
    to second order. Directions and bends are those of the likely path, depths those of the survey.
    """
    count = int(np.ceil((depth + STATION_STEP) / DEPTH_STEP)) + 2
    md = np.arange(count) * DEPTH_STEP
    middle = np.maximum(md - 0.5 * DEPTH_STEP, 0.0)
    return HoleGrid(
        step=DEPTH_STEP,
        tvd=np.asarray(well.trajectory.at(md).tvd, dtype=float),
        open_hole=np.asarray(well.hole.is_open(middle), dtype=bool),
        diameter=np.asarray(well.hole.diameter_at(middle), dtype=float),
        **directions(well.likely.mean, count),
    )


def directions(path: Trajectory, count: int, coarse: int = 1) -> dict[str, Any]:
    """Directions and bends of a path as `HoleGrid` holds them.

    Parameters
    ----------
    path : Trajectory
    count : int
        Steps.
    coarse : int
        Steps that share one look at the path.
    """
    looks = -(-count // coarse)
    middle = (np.arange(looks) * coarse + 0.5 * (coarse - 1) - 0.5) * DEPTH_STEP
    tangent, curvature = path.bends(np.maximum(middle, 0.0))
    cos_i = tangent[:, 2]
    rows = np.column_stack(
        [cos_i, np.maximum(1.0 - cos_i**2, 0.0), np.einsum("ij,ij->i", curvature, curvature), curvature[:, 2]]
    )
    fine = np.repeat(rows, coarse, axis=0)[:count].T.copy()
    across = np.array([0.0, 0.0, 1.0]) - cos_i[:, None] * tangent
    names = ("cos_i", "sin2", "kappa2", "kappa_d")
    return dict(zip(names, fine, strict=True)) | {"curvature": curvature, "across": across, "coarse": coarse}


def pipe_grid(well: Well, depth: float, clearance: str = "tool_joint") -> PipeGrid:
    """Cut the string into elements of at most ten metres, down to a bit at `depth` [m].

    Component ends are moved to the nearest depth step with their weight kept; a component shorter than
    half a step hands its weight to the one above.
    """
    outside = well.fluid.typical
    inside = well.fluid.inside
    parts = well.string.components
    edges, rows, weights = _cut(parts, depth, outside, inside)
    chosen = [parts[row] for row in rows]
    ei = np.array([part.stiffness for part in chosen])
    lengths = np.diff(edges) * DEPTH_STEP
    fill = outside if inside is None else inside
    return PipeGrid(
        x=edges * DEPTH_STEP,
        node=edges,
        component=np.array(rows, dtype=np.int64),
        weight=np.array(weights),
        ei=ei,
        ea=np.array([part.axial for part in chosen]),
        clearance_od=np.array([part.contact_diameter(clearance) for part in chosen]),
        radius=np.array([0.5 * part.contact_diameter("tool_joint") for part in chosen]),
        stiff_run=run_lengths(ei, lengths),
        ends=np.append(well.string.ends[:-1], np.inf),
        hanging=np.array([part.weight + fill * G * part.inner_area for part in parts]),
    )


def _cut(
    parts: tuple[Component, ...], depth: float, outside: float, inside: float | None
) -> tuple[Ints, list[int], list[float]]:
    """Element edges in depth steps, and component row and buoyed weight of each element."""
    edges = [0]
    rows: list[int] = []
    weights: list[float] = []
    carried = 0.0
    end = 0.0
    for row, part in enumerate(parts):
        last = row == len(parts) - 1
        length = max(part.length, depth + 2 * STATION_STEP - end) if last else part.length
        weight = buoyed_weight(part, outside, inside)
        end += length
        stop = round(end / DEPTH_STEP)
        steps = stop - edges[-1]
        if steps <= 0:
            carried += weight * length
            continue
        per_length = weight if last else (weight * length + carried) / (steps * DEPTH_STEP)
        carried = 0.0
        pieces = max(1, int(np.ceil(steps * DEPTH_STEP / STATION_STEP)))
        marks = edges[-1] + np.round(np.arange(1, pieces + 1) * steps / pieces).astype(int)
        edges.extend(int(mark) for mark in marks)
        rows.extend([row] * pieces)
        weights.extend([per_length] * pieces)
    return np.array(edges, dtype=np.int64), rows, weights


def weight_in_air(pipe: PipeGrid, bit_depth: Floats, height: Floats) -> Floats:
    """Weight of the string's pipe between the rotary and a height above it [N], shape (k,).

    Parameters
    ----------
    pipe : PipeGrid
    bit_depth, height : ndarray, shape (k,)
        [m]

    Notes
    -----
    The string is longer than the hole by what stands above the rotary: that piece is the one from
    `bit_depth` to `bit_depth + height` above the bit, liner first while a liner is being picked up.
    """
    starts = np.append(0.0, pipe.ends[:-1])
    below = np.append(0.0, np.cumsum(pipe.hanging[:-1] * np.diff(starts)))

    def up_to(distance: Floats) -> Floats:
        row = np.searchsorted(starts, distance, side="right") - 1
        return below[row] + pipe.hanging[row] * (distance - starts[row])

    return up_to(bit_depth + height) - up_to(bit_depth)


def wave_length(ei: Floats, clearance: Floats, weight: Floats) -> Floats:
    """Length of one sine wave of the buckled pipe [m], over which contact is averaged.

    Notes
    -----
    2π (EI r / w)^¼, the wave at the Dawson-Paslay load in a horizontal hole.
    """
    return 2.0 * np.pi * (ei * np.maximum(clearance, MIN_CLEARANCE) / weight) ** 0.25


def averaged(hole: HoleGrid, window: float) -> tuple[Floats, Floats, Floats]:
    """Coefficients of the lateral load averaged as a vector over `window` [m].

    Returns
    -------
    tuple of three ndarrays, shape (looks,)
        a, b, c so that the size of the averaged load at tension T is sqrt(T² a + 2 T w b + w² c).
    """
    half = max(1, round(0.5 * window / (hole.step * hole.coarse)))
    kappa, across = _smooth(hole.curvature, half), _smooth(hole.across, half)
    return (
        np.einsum("ij,ij->i", kappa, kappa),
        np.einsum("ij,ij->i", kappa, across),
        np.einsum("ij,ij->i", across, across),
    )


def _smooth(values: Floats, half: int) -> Floats:
    """Take the moving mean of each column over 2 half + 1 rows, shorter at the ends."""
    total = np.vstack([np.zeros((1, values.shape[1])), np.cumsum(values, axis=0)])
    rows = np.arange(len(values))
    low = np.maximum(rows - half, 0)
    high = np.minimum(rows + half + 1, len(values))
    return (total[high] - total[low]) / (high - low)[:, None]
