"""The replay repeated under other inputs that the run's own weight readings allow."""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from dataclasses import replace
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from forensics.friction.result import Calibration
from forensics.loads import DrawHistory
from forensics.mechanics.departed import departed
from forensics.mechanics.kernels_replay import Found, Samples
from forensics.replay.doubt import LOADED_SIGMA, Draw, Refit, departure, joint_draws, rate_factor
from forensics.replay.local import LocalMatch, match_locally
from forensics.replay.model import factors
from forensics.replay.room import Excerpt, excerpt, fresh, go
from forensics.replay.run import Replay
from forensics.replay.tabulated import KINDS, tabulated

Floats = NDArray[np.float64]

FIRST, ALL = 12, 36  # draws of everything in question, and of what they leave in doubt: 0.08 at a half
DENSE, SPARSE = 8.0, 16.0  # s between rows replayed: of a short stretch, of a long one
MANY = 4000  # rows at the dense spacing from which a stretch counts as long

LINE_POINTS = 48


class Outcome(NamedTuple):
    """What one draw came to: its calibration, the replay over the rows taken, drag there, and its lines."""

    calibration: Calibration
    found: Found
    multiple: Floats
    lines: Floats


def replay_draws(run: Replay, rows: NDArray[np.bool_]) -> DrawHistory:
    """Replay the rows asked for, and what leads up to them, at a dozen draws of everything uncertain.

    Parameters
    ----------
    run : Replay
        Made ready.
    rows : ndarray of bool, shape (n,)
        Rows whose outcome is wanted.

    Returns
    -------
    DrawHistory
    """
    return _replayed(run, rows, joint_draws(run.calibration, run.well, ALL)[:FIRST])


def more_draws(run: Replay, before: DrawHistory, rows: NDArray[np.bool_]) -> DrawHistory:
    """Replay some of the rows at more draws.

    Parameters
    ----------
    run : Replay
        Made ready.
    before : DrawHistory
        What `replay_draws` came to.
    rows : ndarray of bool, shape (n,)
        Rows whose outcome the draws before leave in doubt.

    Returns
    -------
    DrawHistory
        All draws; those added hold only what leads up to the rows and these, and state -1 elsewhere.
    """
    if not rows.any() or len(before.weights) < FIRST:
        return before
    after = _replayed(run, rows, joint_draws(run.calibration, run.well, ALL)[FIRST:])
    there = after.covered[before.taken]
    columns = after.columns(before.taken[there])

    def both(name: str) -> NDArray[np.generic]:
        old, new = getattr(before, name), getattr(after, name)
        spread = np.full((len(new), old.shape[1]), -1 if old.dtype == np.int8 else np.nan, old.dtype)
        spread[:, there] = new[:, columns]
        return np.vstack([old, spread])

    count = len(before.weights) + len(after.weights)
    return replace(
        before,
        weights=np.full(count, 1.0 / count),
        factors=np.vstack([before.factors, after.factors]),
        block=np.append(before.block, after.block),
        lines=np.concatenate([before.lines, after.lines]),
        **{name: both(name) for name in DrawHistory.BY_ROW},
    )


def _replayed(run: Replay, rows: NDArray[np.bool_], draws: tuple[Draw, ...]) -> DrawHistory:
    """Replay rows, and what leads up to them, at the given draws."""
    part = _taken(run, rows)
    depth = np.linspace(*_reach(run), LINE_POINTS)
    time = run.log.time[part.rows]
    lines = tabulated(run.model, run.calibration, depth)
    base = match_locally(time, run.calibration, lines)
    refit = Refit(run.calibration, run.model, depth)

    def one(draw: Draw) -> Outcome:
        model = departed(run.model, departure(run.well, draw))
        calibration = refit(model, draw)
        own = tabulated(model, calibration, depth)
        local = match_locally(time, calibration, own)
        samples = _as_drawn(run, part.samples, draw, (base, local), calibration)
        rules = run.rules._replace(rate=run.rules.rate * rate_factor(draw, run.rate_law))
        found = go(model.setting(*factors(calibration)), samples, rules, fresh(model))
        block = calibration.block_weight.value - run.calibration.block_weight.value
        share = own.drag_over(lines, part.samples.bit) * samples.down / part.samples.down
        return Outcome(calibration, found, share, block + own.weights - lines.weights)

    with ThreadPoolExecutor() as pool:  # the kernel holds no lock
        outcomes = list(pool.map(one, draws))
    return _gathered(run, part, outcomes, depth)


def _taken(run: Replay, rows: NDArray[np.bool_]) -> Excerpt:
    """Rows to replay, further apart where they are many."""
    part = excerpt(run.prepared.samples, run.log.time, rows, DENSE)
    return part if len(part.rows) <= MANY else excerpt(run.prepared.samples, run.log.time, rows, SPARSE)


def _reach(run: Replay) -> tuple[float, float]:
    """Range of bit depths of the run [m]."""
    bit = run.prepared.samples.bit
    return float(np.min(bit)), float(np.max(bit)) + 1.0


def _as_drawn(
    run: Replay, samples: Samples, draw: Draw, local: tuple[LocalMatch, LocalMatch], calibration: Calibration
) -> Samples:
    """Give the samples as a draw sees them: what hangs, each stand's own readings, drag under load."""
    before, after = local
    block = calibration.block_weight.value - run.calibration.block_weight.value
    loaded = 1.0 + LOADED_SIGMA * draw.of("loaded")
    return samples._replace(
        top=samples.top - block - (after.shift - before.shift),
        down=samples.down * after.down / before.down * loaded,
        up=samples.up * after.up / before.up * loaded,
        scale=samples.scale * calibration.weight_scale.value / run.calibration.weight_scale.value,
    )


def _gathered(run: Replay, part: Excerpt, outcomes: list[Outcome], depth: Floats) -> DrawHistory:
    """Lay the draws' outcomes side by side."""
    count = len(outcomes)
    sections = len(factors(run.calibration))

    def stack(take: Callable[[Outcome], Floats], dtype: type = np.float32) -> NDArray[np.generic]:
        rows = [take(outcome) for outcome in outcomes]
        return np.array(rows, dtype=dtype).reshape(count, len(part.rows))

    return DrawHistory(
        weights=np.full(count, 1.0 / max(count, 1)),
        factors=np.array([factors(o.calibration) for o in outcomes]).reshape(count, sections),
        block=np.array([o.calibration.block_weight.value for o in outcomes]),
        covered=part.covered,
        taken=part.rows,
        state=stack(lambda o: o.found.state, np.int8),
        peak_ratio=stack(lambda o: o.found.ratio),
        compression=stack(lambda o: o.found.compression),
        bit_load=stack(lambda o: o.found.bit_load),
        top=stack(lambda o: o.found.span[:, 0]),
        bottom=stack(lambda o: o.found.span[:, 1]),
        multiple=stack(lambda o: o.multiple),
        depth=depth,
        lines=np.array([o.lines for o in outcomes]).reshape(count, len(KINDS), len(depth)),
    )
