"""The replay's march down from the hookload against the march up from the bit load that it found."""

from __future__ import annotations

from pathlib import Path

import numpy as np
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from forensics.case import Case, FluidSettings, LogSettings
from forensics.mechanics.kernels_replay import REACH, SLIDE, Rules, Samples
from forensics.replay.model import build_model
from forensics.replay.room import fresh, go
from tests.marches import tension_from_bit
from tests.wells import build_well

HERE = Path()
CASE = Case(HERE, "w", "w", LogSettings(()), HERE, HERE, HERE, FluidSettings(1200.0))
NEVER = Rules(band=1.0, tolerance=1e3, rate=0.0, exponent=1.0)
BIT = 3300.0


def slides(top: list[float]) -> Samples:
    n = len(top)
    flags, ones = np.zeros(n, dtype=bool), np.ones(n)
    return Samples(
        bit=np.full(n, BIT),
        top=np.array(top),
        mode=np.full(n, SLIDE, dtype=np.int8),
        direction=np.ones(n, dtype=np.int8),
        travel=np.zeros(n),
        drilling=flags,
        free=flags,
        share=np.zeros(n),
        down=ones,
        up=ones,
        scale=ones,
        step=ones,
        witness=np.full(n, np.inf),
        ends=np.zeros((n, 3)),
    )


@settings(max_examples=25, deadline=None)
@given(st.floats(0.05, 0.2), st.floats(5e3, 40e3))
def test_down_from_the_hookload_is_up_from_the_bit_load(factor, weight):
    """Where the string slides down whole and nothing is helical, both are one problem with one solution."""
    model = build_model(build_well(), CASE, 3400.0)
    slack = float(model.string_weight("slack_off", BIT, factor, factor)[0])
    memory, now = fresh(model)
    go(
        model.setting(factor, factor),
        slides([slack, slack - weight / 2, slack - weight]),
        NEVER,
        (memory, now),
    )
    assert now[REACH] == 0
    assume(memory.state.max() < 2)
    _, up = tension_from_bit(model, factor, BIT, 1.0, float(memory.tension[0]))
    # both extrapolate to the middle of an element from the side they come from: hence newtons, not nothing
    np.testing.assert_allclose(up, memory.tension[: len(up)], rtol=0.0, atol=1e-5 * np.abs(up).max())
    assert 0 < -memory.tension[0] < weight
