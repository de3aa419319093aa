"""Every profile the replay can leave in the string is one that gravity and Coulomb friction can hold."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from forensics.case import Case, FluidSettings, LogSettings
from forensics.mechanics.kernels_judge import GIVE
from forensics.mechanics.kernels_memory import Memory
from forensics.mechanics.kernels_replay import SLIDE, Rules, Samples
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.model import build_model
from forensics.replay.room import fresh, go
from tests.naive_string import lateral_load
from tests.wells import build_well

HERE = Path()
CASE = Case(HERE, "w", "w", LogSettings(()), HERE, HERE, HERE, FluidSettings(1200.0))
BIT, FACTOR, BAND = 3300.0, 0.2, 1.0
MOVES = st.lists(st.floats(-90e3, 90e3), min_size=1, max_size=8)


@lru_cache(maxsize=1)
def model() -> OffBottomModel:
    return build_model(build_well(turn=0.3), CASE, 3400.0)


def moved(changes: list[float], drilling: bool) -> Memory:
    """Lower or raise the block so that the hookload changes by these amounts, one after the other."""
    one = model()
    start = float(one.string_weight("rotating", BIT, 0.0, 0.0)[0])
    top = start + np.concatenate([[0.0], np.cumsum(changes)])
    n = len(top)
    way = np.concatenate([[1], np.where(np.array(changes) > 0.0, -1, 1)])
    ones, no = np.ones(n), np.zeros(n, dtype=bool)
    samples = Samples(
        bit=np.full(n, BIT), top=np.maximum(top, 0.3 * start), mode=np.full(n, SLIDE, dtype=np.int8),
        direction=way.astype(np.int8), travel=np.zeros(n), drilling=no | drilling, free=no,
        share=np.zeros(n), down=ones, up=ones, scale=ones, step=ones, witness=np.full(n, np.inf),
        ends=np.zeros((n, 3)),
    )  # fmt: skip
    rules = Rules(band=BAND, tolerance=1e3, rate=1e-6 if drilling else 0.0, exponent=1.0)
    memory, now = fresh(one)
    go(one.setting(FACTOR, FACTOR), samples, rules, (memory, now))
    return memory


@settings(max_examples=60, deadline=None)
@given(MOVES, st.booleans())
def test_no_element_rubs_more_than_it_is_pressed(changes, drilling):
    """Of each element: tension gained, less the weight along the hole, is at most friction can give."""
    one, memory = model(), moved(changes, drilling)
    tension, state = memory.tension, memory.state
    count = int(np.searchsorted(one.pipe.x, BIT))
    edges = np.minimum(one.pipe.x[: count + 1], BIT)
    length = np.diff(edges)
    way = one.well.trajectory.at(BIT - 0.5 * (edges[:-1] + edges[1:]))
    for j in range(count):
        weight, half = float(one.pipe.weight[j]), 0.5 * (tension[j] + tension[j + 1])
        pressed = lateral_load(half, weight, way.tangent[j], way.curvature[j])
        # over an end of the curve, straight and curved are both a fair reading
        pressed = max(pressed, lateral_load(half, weight, way.tangent[j], 0.0 * way.curvature[j]))
        row = round((BIT - 0.5 * (edges[j] + edges[j + 1])) / one.hole.step)
        if state[j] == 2 and half < 0.0:
            pressed += half**2 * float(one.criteria.at[one.criteria.kind[j], row, GIVE])
        rubs = abs(tension[j + 1] - tension[j] - weight * way.tangent[j, 2] * length[j])
        # a hookload may change by the dead band and not be followed, once for each move made
        assert rubs <= 1.03 * FACTOR * pressed * length[j] + 10.0 * BAND, (j, rubs, pressed * length[j])
