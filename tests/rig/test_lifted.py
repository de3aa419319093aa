"""The row that lifts a turning bit off bottom, sampled so coarsely that averages lag behind."""

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.rig import noise
from forensics.rig.activity import Surface, bottom_evidence, on_bottom_from
from forensics.rig.steady import Steady
from forensics.rig.tare import Reference

REST, LOAD = 900e3, 70e3


def lifted(turning: bool, interval: float = 10.0):
    """Drill for ten rows, raise the bit at 10 cm/s for ten: what each row says of the bottom."""
    n, drilled = 20, 10
    up = np.arange(n) >= drilled
    reading = np.where(up, REST, REST - LOAD)
    signals = SimpleNamespace(
        time=interval * np.arange(n),
        interval=interval,
        bit=np.zeros(n),
        weighed=np.ones(n, dtype=bool),
        count=lambda seconds: noise.samples_in(seconds, interval),
        smooth_noise=lambda _: 300.0,
    )
    surface = Surface(
        reading=reading,
        smooth=noise.running_mean(reading, signals.count(9.0)),
        direction=np.where(up, -1, 0).astype(np.int8),
        speed=np.where(up, 0.1, 0.0),
        axial=np.zeros(n),
        turning=np.full(n, turning),
        pumping=np.ones(n, dtype=bool),
        slips=np.zeros(n, dtype=bool),
        differential=np.full(n, np.nan),
        differential_level=np.inf,
    )
    gap = np.where(up, 0.1 * interval * (np.arange(n) - drilled + 1), 0.0)
    depths = SimpleNamespace(gap=gap, near=30.0, run_in=np.zeros(n, dtype=bool), advancing=~up)
    weights = (REST, REST - 2 * LOAD, REST + 2 * LOAD)
    references = tuple(Reference(np.full(n, weight), Steady(), np.zeros(n), 0.0) for weight in weights)
    return up, bottom_evidence(surface, depths, references, signals)


def test_a_turning_bit_is_off_bottom_in_the_row_that_shows_its_weight():
    up, vote = lifted(turning=True)
    assert np.array_equal(on_bottom_from(vote), ~up)


@pytest.mark.parametrize("interval", [1.0, 10.0])
def test_a_string_that_does_not_turn_may_be_raised_with_its_bit_loaded(interval):
    up, vote = lifted(turning=False, interval=interval)
    assert on_bottom_from(vote)[up].all()
