"""How fast the march along the string is: `python tests/benchmarks/bench_march.py [samples]`.

One string of some three hundred stations is weighed picking up at many bit depths, each way of doing it in
one run on one core: nanoseconds per station step, what that is in steps of the batch march, and how far the
weights are from those of the plain loop, as a share of the largest. Below: the batch march on two threads,
with slopes, and slacking off with helices; then the first call in a fresh process, imports apart. Nothing
here passes or fails.
"""

from __future__ import annotations

import math
import os
import platform
import subprocess
import sys
import time
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from itertools import pairwise
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[2]))

import numba
import numpy as np
import scipy
from scipy.integrate import solve_ivp

from forensics.mechanics.offbottom import OffBottomModel
from tests.wells import build_well

Floats = np.ndarray
DEPTH, SHALLOW, CASED, OPEN = 3400.0, 1500.0, 0.2, 0.3
BLOCK = 4096  # samples NumPy takes at once: the best of 256 to 8192 here

FIRST = """
import sys, time
sys.path.insert(0, sys.argv[1])
import forensics.mechanics.offbottom, numpy
from tests.wells import build_well
model = forensics.mechanics.offbottom.OffBottomModel(build_well(turn=0.3), 3400.0)
began = time.perf_counter(), time.process_time()
model.weigh_readings(["pick_up", "slack_off"], [2000.0, 3000.0], (0.2, 0.3))
print(time.perf_counter() - began[0], time.process_time() - began[1])
"""


def plain(model: OffBottomModel, bits: Floats) -> Floats:
    """One sample after the other, one station after the other: lists and floats."""
    hole, pipe = model.hole, model.pipe
    columns = (hole.cos_i, hole.sin2, hole.kappa2, hole.kappa_d, model.friction(CASED, OPEN))
    cos_i, sin2, kappa2, kappa_d, mu = (column.tolist() for column in columns)
    x, node, weight = pipe.x.tolist(), pipe.node.tolist(), pipe.weight.tolist()
    found = []
    for bit in bits.tolist():
        first, tension, slope = int(bit / hole.step + 0.5), 0.0, 0.0
        for j, w in enumerate(weight):
            length = min(x[j + 1], bit) - x[j]
            if length <= 0.0:
                break
            i = max(first - ((node[j] + node[j + 1]) >> 1), 0)
            at = tension + 0.5 * length * slope
            square = at * (at * kappa2[i] + 2.0 * w * kappa_d[i]) + w * w * sin2[i]
            slope = w * cos_i[i] + mu[i] * math.sqrt(max(square, 0.0))
            tension += slope * length
        found.append(tension)
    return np.array(found)


def adaptive(model: OffBottomModel, bits: Floats) -> Floats:
    """Give the equation to an adaptive solver at 1e-6, started anew where the string or the hole changes."""
    hole, pipe, step = model.hole, model.pipe, model.hole.step
    columns = (hole.cos_i, hole.sin2, hole.kappa2, hole.kappa_d, model.friction(CASED, OPEN))
    cos_i, sin2, kappa2, kappa_d, mu = (column.tolist() for column in columns)
    ends = pipe.x[:-1][np.diff(pipe.weight, prepend=-1.0) != 0.0].tolist()
    kinks = (900.0, 1500.0, 1830.0)  # of the hole: curve and shoe
    found = []
    for bit in bits.tolist():
        marks = sorted({*(end for end in ends if end < bit), *(bit - k for k in kinks if k < bit), bit})
        tension = 0.0
        for low, high in pairwise(marks):
            w = float(pipe.weight[np.searchsorted(pipe.x, low, side="right") - 1])

            def rate(distance: float, tension: Floats, bit: float = bit, w: float = w) -> float:
                i, at = max(int((bit - distance) / step + 0.5), 0), float(tension[0])
                square = at * (at * kappa2[i] + 2.0 * w * kappa_d[i]) + w * w * sin2[i]
                return w * cos_i[i] + mu[i] * math.sqrt(max(square, 0.0))

            run = solve_ivp(rate, (low, high), [tension], rtol=1e-6, atol=1.0)
            tension = float(run.y[0, -1])
        found.append(tension)
    return np.array(found)


def across(model: OffBottomModel, bits: Floats) -> Floats:
    """NumPy over blocks of samples in order of depth, one station after the other, nothing allocated."""
    hole = model.hole
    table = np.stack([hole.cos_i, hole.sin2, hole.kappa2, hole.kappa_d, model.friction(CASED, OPEN)])
    order = np.argsort(bits)
    found = np.empty(len(bits))
    for start in range(0, len(bits), BLOCK):
        rows = order[start : start + BLOCK]
        found[rows] = _block(table, model, bits[rows], np.empty((9, len(rows))))
    return found


def _block(table: Floats, model: OffBottomModel, bit: Floats, room: Floats) -> Floats:
    """March one block; `room` holds nine rows."""
    pipe = model.pipe
    cos_i, sin2, kappa2, kappa_d, mu, length, at, other, slope = room
    first, row = (bit / model.hole.step + 0.5).astype(np.int64), np.empty(len(bit), dtype=np.int64)
    tension = np.zeros(len(bit))
    slope[:] = 0.0
    for j in range(int(np.searchsorted(pipe.x, bit.max()))):
        low, high, w = float(pipe.x[j]), float(pipe.x[j + 1]), float(pipe.weight[j])
        np.subtract(first, int(pipe.node[j] + pipe.node[j + 1]) >> 1, out=row)
        for column, out in zip(table, (cos_i, sin2, kappa2, kappa_d, mu), strict=True):
            np.take(column, row, out=out, mode="clip")
        whole = high <= bit[0]
        if not whole:
            np.minimum(bit, high, out=length)
            np.subtract(length, low, out=length)
            np.maximum(length, 0.0, out=length)
        run = high - low if whole else length
        np.multiply(slope, run, out=at)
        at *= 0.5
        at += tension
        kappa_d *= 2.0 * w
        np.multiply(at, kappa2, out=other)
        other += kappa_d
        other *= at
        sin2 *= w * w
        other += sin2
        np.maximum(other, 0.0, out=other)
        np.sqrt(other, out=other)
        other *= mu
        np.multiply(cos_i, w, out=slope)
        slope += other
        np.multiply(slope, run, out=other)
        tension += other
    return tension


@numba.njit(error_model="numpy")
def _alone(x: Floats, node: Floats, weight: Floats, table: Floats, bits: Floats) -> Floats:
    """One sample after the other, compiled."""
    found = np.empty(len(bits))
    for k in range(len(bits)):
        bit, tension, slope = bits[k], 0.0, 0.0
        first = int(bit * 2.0 + 0.5)
        for j in range(np.searchsorted(x, bit)):
            length = min(x[j + 1], bit) - x[j]
            i = max(first - ((node[j] + node[j + 1]) >> 1), 0)
            w, at = weight[j], tension + 0.5 * length * slope
            square = at * (at * table[i, 2] + 2.0 * w * table[i, 3]) + w * w * table[i, 1]
            slope = w * table[i, 0] + table[i, 4] * np.sqrt(max(square, 0.0))
            tension += slope * length
        found[k] = tension
    return found


def compiled(model: OffBottomModel, bits: Floats) -> Floats:
    """Compiled, scalar."""
    hole, pipe = model.hole, model.pipe
    table = np.stack([hole.cos_i, hole.sin2, hole.kappa2, hole.kappa_d, model.friction(CASED, OPEN)], axis=1)
    return _alone(pipe.x, pipe.node, pipe.weight, np.ascontiguousarray(table), bits)


def batch(model: OffBottomModel, bits: Floats) -> Floats:
    """As the product weighs: blocks of samples side by side."""
    return model.string_weight("pick_up", bits, CASED, OPEN)


def threads(model: OffBottomModel, bits: Floats) -> Floats:
    """Split the batch march between two threads."""
    with ThreadPoolExecutor(2) as pool:
        halves = pool.map(lambda part: batch(model, part), np.array_split(bits, 2))
        return np.concatenate(list(halves))


def sloped(model: OffBottomModel, bits: Floats) -> Floats:
    """Carry the slopes against two factors and the scale of weights."""
    return model.weigh_readings(["pick_up"] * len(bits), bits, (CASED, OPEN)).weight


def sloped_in_five(model: OffBottomModel, bits: Floats) -> Floats:
    """Carry the slopes against five factors, the open hole in four sections."""
    parts = model.divided((1900.0, 2400.0, 2900.0))
    return parts.weigh_readings(["pick_up"] * len(bits), bits, (CASED, OPEN)).weight


def winding(model: OffBottomModel, bits: Floats) -> Floats:
    """Slack off, every compressed station asked whether it winds up."""
    return model.string_weight("slack_off", bits, CASED, OPEN)


def best(call: Callable, clock: Callable, seconds: float = 1.0) -> tuple[float, Floats]:
    """Shortest time of a call repeated for about so long [s], and what it gave."""
    call()
    shortest, until = math.inf, time.perf_counter() + seconds
    while time.perf_counter() < until:
        start = clock()
        found = call()
        shortest = min(shortest, clock() - start)
    return shortest, found


def first_call() -> tuple[float, float]:
    """Shortest first call of five fresh processes, imports apart: by the wall, of the processor [s]."""
    root = str(Path(__file__).parents[2])
    told = [
        subprocess.run([sys.executable, "-c", FIRST, root], check=True, capture_output=True, text=True).stdout
        for _ in range(5)
    ]
    wall, processor = zip(*(map(float, line.split()) for line in told), strict=True)
    return min(wall), min(processor)


WAYS = {
    "pure Python loop": plain,
    "solve_ivp at 1e-6": adaptive,
    "NumPy across samples": across,
    "compiled, scalar": compiled,
    "batch": batch,
    "batch, 3 slopes": sloped,
    "batch, 6 slopes": sloped_in_five,
    "batch, slacking off": winding,
    "batch, 2 threads": threads,
}
THIN = {"pure Python loop": 256, "solve_ivp at 1e-6": 1024}  # of the samples, one in so many


def main() -> None:
    """Time each way and print."""
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 8192
    model = OffBottomModel(build_well(turn=0.3), DEPTH)
    bits = np.sort(np.random.default_rng(1).uniform(SHALLOW, DEPTH - 10.0, count))
    print(f"{platform.platform()}, {os.cpu_count()} processors")
    print(
        f"python {platform.python_version()}, numpy {np.__version__}, scipy {scipy.__version__}, "
        f"numba {numba.__version__}"
    )
    exact = plain(model, bits)
    timed = {}
    for name, way in WAYS.items():
        some = bits[:: THIN.get(name, 1)]
        # the processor's own time: what others run meanwhile does not count; two threads need the wall's
        clock = time.perf_counter if way is threads else time.process_time
        seconds, found = best(lambda way=way, some=some: way(model, some), clock)
        apart = np.abs(found - exact[:: THIN.get(name, 1)]).max() / exact.max()
        timed[name] = seconds / np.searchsorted(model.pipe.x, some).sum() * 1e9, apart
    print(f"{count} bit depths, {int(np.searchsorted(model.pipe.x, bits).mean())} stations each on average")
    for name, (each, apart) in timed.items():
        off = f"off by {apart:.0e}" if WAYS[name] is not winding else "another load"
        print(f"  {name:<22}{each:10.2f} ns a step {each / timed['batch'][0]:10.1f} x batch   {off}")
    print("wanted: batch at most 2.5 ns, NumPy at least 4 x, solve_ivp at least 4000 x, off by at most 1e-12")
    print("(solve_ivp solves the equation, not the steps: it is off by what stations of ten metres are)")
    wall, processor = first_call()
    print(f"first call in a fresh process, kernels cached: {wall:.2f} s, {processor:.2f} s of the processor "
          "(wanted: at most 0.6 s)")


if __name__ == "__main__":
    main()
