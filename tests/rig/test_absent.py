"""A channel that is lacking, or holds nothing, is told with what it costs."""

from dataclasses import replace

import numpy as np

from forensics.logs.table import TimeLog
from forensics.rig.absent import COST, absent_channels, idle_channels
from forensics.rig.understand import understand_rig
from forensics.rig.view import Activity


def make_log(interval=1.0, **values):
    ones = np.ones(3)
    held = {"bit_depth": ones, "hookload": ones} | values
    return TimeLog(interval * np.arange(3.0), held, ones, ones > 0, np.zeros(3, np.int8), interval)


def test_all_there_says_nothing():
    assert absent_channels(make_log(**{name: np.ones(3) for name in COST})) == ()


def test_lacking_and_empty_are_told():
    told = absent_channels(make_log(torque=np.full(3, np.nan), wob=np.ones(3)))
    assert told == (COST["torque"], COST["standpipe_pressure"])


def test_slow_rows_are_told():
    (told,) = absent_channels(make_log(interval=30.0, **{name: np.ones(3) for name in COST}))
    assert told.startswith("One row every 30 s: what lasts less than 90 s")


def test_channels_that_no_load_rests_on_are_named():
    held = {"downhole_wob": np.ones(3), "rop": np.full(3, np.nan), "torque": np.ones(3)}
    (told,) = idle_channels(make_log(**held))
    assert told.endswith(": downhole_wob.")
    assert idle_channels(make_log(torque=np.ones(3))) == ()


def test_a_log_of_drilling_alone_takes_no_gap_for_slips(tools, drilled, well):
    whole = tools.log(drilled)
    bored = np.isin(drilled.truth(), (Activity.DRILL_ROTATE, Activity.DRILL_SLIDE))
    log = replace(
        whole,
        time=whole.time[bored],
        values={name: values[bored] for name, values in whole.values.items()},
        hookload_logged=whole.hookload_logged[bored],
        used=whole.used[bored],
        reason=whole.reason[bored],
    )
    view = understand_rig(log, well, tools.case())
    assert not view.slips.any()
    assert view.block_weight.low < tools.block < view.block_weight.high
    assert not view.block_weight.determined
    assert any("No reading in slips" in note for note in view.can_not_tell)
