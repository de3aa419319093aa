"""The replay repeated under other friction, where the outcome is wanted."""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor

import numpy as np
from numpy.typing import NDArray

from forensics.loads import DrawHistory
from forensics.mechanics.kernels_replay import Found
from forensics.replay.room import excerpt, fresh, go
from forensics.replay.run import Replay

Floats = NDArray[np.float64]


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
    part = excerpt(run.prepared.samples, run.log.time, rows)

    def one(draw: Floats) -> Found:
        cased, open_hole, block = draw
        moved = part.samples.top - (block - run.calibration.block_weight.value)
        at = run.model.setting(float(cased), float(open_hole))
        return go(at, part.samples._replace(top=moved), run.rules, fresh(run.model))

    with ThreadPoolExecutor() as pool:  # the kernel holds no lock
        found = list(pool.map(one, chosen))
    shape = (len(chosen), len(run.log))
    state = np.zeros(shape, dtype=np.int8)
    ratio, load = np.full(shape, np.nan, dtype=np.float32), np.full(shape, np.nan, dtype=np.float32)
    for k, one_found in enumerate(found):
        state[k, part.covered] = part.spread(one_found.state)
        ratio[k, part.covered] = part.spread(one_found.ratio)
        load[k, part.covered] = part.spread(one_found.bit_load)
    weights = np.full(len(chosen), 1.0 / max(len(chosen), 1))
    return DrawHistory(weights, chosen[:, 0], chosen[:, 1], part.covered, state, ratio, load)
