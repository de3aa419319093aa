"""Room for the replay's kernels to work in: memory, results, and where to start so that memory is right."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.kernels_judge import Setting
from forensics.mechanics.kernels_memory import Memory
from forensics.mechanics.kernels_replay import TURN, Found, Rules, Run, Samples, replay_rows
from forensics.mechanics.offbottom import OffBottomModel

Floats = NDArray[np.float64]

COARSE_SECONDS = 8.0  # a load changes little in less
LEAD = 30  # rows of turning replayed before the memory counts as right


def go(at: Setting, samples: Samples, rules: Rules, carried: tuple[Memory, Floats]) -> Found:
    """Replay rows without a chart, going on from what is carried."""
    found = room(len(samples.bit), 1, 1)
    replay_rows(at, Run(samples, rules, found, *carried, 1e9))
    return found


def fresh(model: OffBottomModel) -> tuple[Memory, Floats]:
    """Start with a string that remembers nothing."""
    nodes = len(model.pipe.x)
    arrays = [np.zeros(nodes + 1) for _ in range(4)]
    state, visits = np.zeros(nodes, dtype=np.int8), np.zeros(1, dtype=np.int64)
    return Memory(*arrays, state, visits), np.array([0.0, 0.0, 0.0, 0.0, -1.0, -1.0, 0.0, 0.0, 0.0, 0.0])


def room(count: int, times: int, depths: int) -> Found:
    """Room for the replay's results."""
    return Found(
        bit_load=np.zeros(count), ratio=np.zeros(count), ratio_md=np.full(count, np.nan),
        compression=np.zeros(count), state=np.zeros(count, dtype=np.int8), span=np.full((count, 4), np.nan),
        reach=np.zeros(count), basis=np.zeros(count, dtype=np.int8), full=np.zeros(count, dtype=np.int8),
        stretch=np.zeros(count), chart=np.zeros((times, depths)), chart_row=np.zeros(count, dtype=np.int64),
    )


def take(samples: Samples, part: slice | NDArray[np.int64]) -> Samples:
    """Take some of the rows."""
    return Samples(*(column[part] for column in samples))


@dataclass(frozen=True)
class Excerpt:
    """Some stretches of a run, thinned, as one run of samples.

    `rows` are the log's rows taken, shape (m,); `covered` marks all rows between them, shape (n,).
    """

    rows: NDArray[np.int64]
    samples: Samples
    covered: NDArray[np.bool_]

    def spread(self, values: NDArray[np.generic]) -> NDArray[np.generic]:
        """Give each covered row the value of the row taken at or before it; shape (covered.sum(),)."""
        return values[np.searchsorted(self.rows, np.flatnonzero(self.covered), side="right") - 1]


def excerpt(
    samples: Samples, time: Floats, wanted: NDArray[np.bool_], seconds: float = COARSE_SECONDS
) -> Excerpt:
    """Take the wanted rows and what leads up to them, a few seconds apart.

    Each stretch begins with the string turning, which starts its memory anew, so that stretches may be
    replayed one after the other.
    """
    stride = max(1, round(seconds / float(np.median(np.diff(time)))))
    parts = blocks(samples.mode, wanted)
    covered = np.zeros(len(time), dtype=bool)
    for start, stop in parts:
        covered[start:stop] = True
    rows = np.concatenate([np.arange(start, stop, stride) for start, stop in parts] or [np.empty(0, int)])
    taken = take(samples, rows)
    apart = np.diff(time[rows], prepend=time[rows[:1]])
    return Excerpt(rows, taken._replace(step=np.minimum(apart, 4.0 * stride * samples.step.max())), covered)


def restarts(mode: NDArray[np.int8], rows: NDArray[np.int64]) -> NDArray[np.int64]:
    """Rows to start from so that the memory is right at `rows`: where the string last turned for a while."""
    turned = np.flatnonzero(mode == TURN)
    last = np.searchsorted(turned, np.maximum(rows - LEAD, 0)) - 1
    known = turned[np.maximum(last, 0)] if len(turned) else np.zeros(len(rows), dtype=np.int64)
    return np.where(last >= 0, np.maximum(known - LEAD, 0), 0)


def blocks(mode: NDArray[np.int8], rows: NDArray[np.bool_]) -> list[tuple[int, int]]:
    """Stretches of rows to replay so that every row asked for has its lead-up, merged where they meet."""
    edges = np.flatnonzero(np.diff(np.concatenate([[0], rows.astype(np.int8), [0]]))).reshape(-1, 2)
    merged: list[tuple[int, int]] = []
    for (_, stop), lead in zip(edges, restarts(mode, edges[:, 0]).tolist(), strict=True):
        if merged and lead <= merged[-1][1]:
            merged[-1] = (merged[-1][0], int(stop))
        else:
            merged.append((lead, int(stop)))
    return merged
