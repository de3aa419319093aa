"""Room for the replay's kernels to work in: memory, results, and where to start so that memory is right."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.kernels_judge import Setting
from forensics.mechanics.kernels_memory import Memory
from forensics.mechanics.kernels_replay import TURN, Found, Rules, Run, Samples, replay_rows
from forensics.mechanics.offbottom import OffBottomModel

Floats = NDArray[np.float64]

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
    return Memory(*arrays, np.zeros(nodes, dtype=np.int8)), np.array([0.0, 0.0, 0.0, 0.0, -1.0, -1.0, 0.0])


def room(count: int, times: int, depths: int) -> Found:
    """Room for the replay's results."""
    return Found(
        bit_load=np.zeros(count), ratio=np.zeros(count), ratio_md=np.full(count, np.nan),
        compression=np.zeros(count), state=np.zeros(count, dtype=np.int8), span=np.full((count, 4), np.nan),
        reach=np.zeros(count), basis=np.zeros(count, dtype=np.int8), full=np.zeros(count, dtype=np.int8),
        stretch=np.zeros(count), chart=np.zeros((times, depths)), chart_row=np.zeros(count, dtype=np.int64),
    )


def take(samples: Samples, part: slice) -> Samples:
    """Take some of the rows."""
    return Samples(*(column[part] for column in samples))


def restart(mode: NDArray[np.int8], row: int) -> int:
    """Row to start from so that the memory is right at `row`: where the string last turned for a while."""
    turned = np.flatnonzero(mode[: max(row - LEAD, 0)] == TURN)
    return max(int(turned[-1]) - LEAD, 0) if len(turned) else 0


def blocks(mode: NDArray[np.int8], rows: NDArray[np.bool_]) -> list[tuple[int, int]]:
    """Stretches of rows to replay so that every row asked for has its lead-up, merged where they meet."""
    edges = np.flatnonzero(np.diff(np.concatenate([[0], rows.astype(np.int8), [0]]))).reshape(-1, 2)
    merged: list[tuple[int, int]] = []
    for start, stop in edges:
        lead = restart(mode, int(start))
        if merged and lead <= merged[-1][1]:
            merged[-1] = (merged[-1][0], int(stop))
        else:
            merged.append((lead, int(stop)))
    return merged
