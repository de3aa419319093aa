"""The replay repeated under other friction, where the outcome is wanted."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.loads import DrawHistory
from forensics.replay.room import blocks, fresh, go, take
from forensics.replay.run import Replay


def replay_draws(run: Replay, rows: NDArray[np.bool_], count: int = 7) -> DrawHistory:
    """Replay the rows asked for, and what leads up to them, at `count` draws of friction and block weight.

    Parameters
    ----------
    run : Replay
        Made ready.
    rows : ndarray of bool, shape (n,)
        Rows whose outcome is wanted.
    count : int
        Draws, spread evenly over the calibration's in order of open-hole friction.
    """
    draws = run.calibration.draws
    order = np.argsort(draws[:, 1] + draws[:, 0], kind="stable")
    picked = ((np.arange(count) + 0.5) * len(order) / count).astype(int) if len(order) else order
    chosen = draws[order[picked]]
    parts = blocks(run.prepared.samples.mode, rows)
    n = len(run.log)
    state = np.zeros((len(chosen), n), dtype=np.int8)
    ratio = np.full((len(chosen), n), np.nan, dtype=np.float32)
    load = np.full((len(chosen), n), np.nan, dtype=np.float32)
    covered = np.zeros(n, dtype=bool)
    for start, stop in parts:
        covered[start:stop] = True
    for k, (cased, open_hole, block) in enumerate(chosen):
        at = run.model.setting(cased, open_hole)
        shift = block - run.calibration.block_weight.value
        for start, stop in parts:
            part = take(run.prepared.samples, slice(start, stop))
            part = part._replace(top=part.top - shift)
            found = go(at, part, run.rules, fresh(run.model))
            state[k, start:stop] = found.state
            ratio[k, start:stop] = found.ratio
            load[k, start:stop] = found.bit_load
    weights = np.full(len(chosen), 1.0 / max(len(chosen), 1))
    return DrawHistory(weights, chosen[:, 0], chosen[:, 1], covered, state, ratio, load)
