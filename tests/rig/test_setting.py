"""Setting slips is no slack-off: the hookload falls and the block stands."""

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.rig.setting import widen

LEVEL, WEIGHT = 300e3, 800e3
IN_SLIPS = slice(40, 60)


def setting(hookload, path, interval=2.0):
    hook = np.full(100, LEVEL + WEIGHT)
    hook[IN_SLIPS] = LEVEL
    hook[40 - len(hookload) : 40] = hookload
    signals = SimpleNamespace(
        hookload=hook, path=np.asarray(path, dtype=float), time=interval * np.arange(100.0), interval=interval
    )
    slips = np.zeros(100, dtype=bool)
    slips[IN_SLIPS] = True
    return widen(slips, signals, LEVEL, np.full(100, WEIGHT), 0.4)


@pytest.mark.parametrize("interval", [2.0, 30.0])
def test_the_fall_to_the_plateau_belongs_to_the_slips(interval):
    rows = setting([700e3, 400e3, 350e3], np.full(100, 2000.0), interval)
    assert np.flatnonzero(rows).tolist() == list(range(37, 60))


def test_weight_slacked_off_before_is_left_alone():
    # The string stands on bottom, lowered metre by metre, and then the slips are set.
    path = np.interp(np.arange(100), [0, 25, 35, 100], [1990.0, 1998.0, 2000.0, 2000.0])
    rows = setting(np.linspace(700e3, 450e3, 10), path)
    assert np.flatnonzero(rows).tolist() == list(range(40, 60))


def test_slips_at_either_end_of_the_log():
    signals = SimpleNamespace(
        hookload=np.full(20, LEVEL), path=np.full(20, 2000.0), time=np.arange(20.0), interval=1.0
    )
    assert widen(np.ones(20, dtype=bool), signals, LEVEL, np.full(20, WEIGHT), 0.4).all()
