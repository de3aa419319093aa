"""What a log will let the analysis tell."""

import numpy as np
import pytest

from forensics.logs.table import TimeLog
from forensics.rig.prospects import Verdict, prospects

CHANNELS = (
    "bit_depth",
    "hookload",
    "block_position",
    "torque",
    "rpm",
    "standpipe_pressure",
    "flow_in",
    "wob",
)


def log_of(*channels, interval=1.0, travel=500.0):
    n = 50
    values = {name: np.linspace(1.0, 1.0 + travel, n) for name in channels}
    return TimeLog(
        time=np.arange(n) * interval, values=values, hookload_logged=values["hookload"],
        used=np.ones(n, dtype=bool), reason=np.zeros(n, dtype=np.int8), interval=interval,
    )  # fmt: skip


def verdict(log, name, with_well=True):
    return next(p.verdict for p in prospects(log, with_well) if p.name.startswith(name))


def test_a_full_log_answers_all_but_a_second_witness_in_part():
    told = {p.name: p.verdict for p in prospects(log_of(*CHANNELS), True)}
    assert {v for k, v in told.items() if not k.startswith("bit load")} == {Verdict.YES}
    assert verdict(log_of(*CHANNELS), "bit load") is Verdict.PARTLY


@pytest.mark.parametrize(
    ("lacking", "question", "wanted"),
    [
        ("rpm torque", "activity", Verdict.PARTLY),
        ("rpm torque", "axial", Verdict.PARTLY),
        ("block_position", "activity", Verdict.PARTLY),
        ("torque", "torque", Verdict.NO),
        ("standpipe_pressure", "bit load", Verdict.NO),
        ("flow_in", "pack-off", Verdict.NO),
        ("torque", "pack-off", Verdict.PARTLY),
        ("wob", "how the weight", Verdict.NO),
    ],
)
def test_a_missing_channel_costs_its_question(lacking, question, wanted):
    log = log_of(*(c for c in CHANNELS if c not in lacking.split()))
    assert verdict(log, question) is wanted


def test_slow_rows_and_short_travel_cost_the_friction():
    assert verdict(log_of(*CHANNELS, interval=30.0), "friction") is Verdict.PARTLY
    assert verdict(log_of(*CHANNELS, travel=20.0), "friction") is Verdict.PARTLY


def test_without_a_well_nothing_but_the_activity_is_told():
    told = {p.name: p.verdict for p in prospects(log_of(*CHANNELS), False)}
    assert told.pop("activity") is Verdict.YES
    assert set(told.values()) == {Verdict.NO}
