"""Bit and block against one another."""

import numpy as np
import pytest

from forensics.errors import LogError
from forensics.logs.table import FileRecord, SourceColumn, TimeLog
from forensics.rig.travel import match_travel

ROWS = 900
# Stands of 28 m: down in five minutes with the string, up in one without it.
PHASE = np.arange(ROWS) % 360
CARRIED = PHASE < 300
FALL = np.where(CARRIED, 28.0 / 300.0, 0.0)
BLOCK = np.where(CARRIED, 29.0 - 28.0 * PHASE / 300.0, 1.0 + 28.0 * (PHASE - 300) / 60.0)
BIT = 1000.0 + np.cumsum(FALL)
HOOK = np.where(CARRIED, 900e3, 250e3) + 1e3 * np.sin(np.arange(ROWS))


def make_log(bit=BIT, block=BLOCK):
    columns = (
        SourceColumn("time.csv", "DBTM", "ft", "bit_depth", "known"),
        SourceColumn("time.csv", "BPOS", "m", "block_position", "known"),
    )
    record = FileRecord("time.csv", "0" * 64, "csv", ROWS, 0.0, ROWS, 1.0, columns)
    values = {"bit_depth": bit, "block_position": block, "hookload": HOOK}
    if block is None:
        del values["block_position"]
    return TimeLog(
        np.arange(ROWS, dtype=float), values, HOOK, np.ones(ROWS, bool), np.zeros(ROWS, np.int8), 1.0,
        files=(record,),
    )  # fmt: skip


@pytest.mark.parametrize("ratio", [1.0, 0.9, 1.15])
def test_what_moves_together_is_left_alone(ratio):
    log = make_log(bit=BIT * ratio)
    assert match_travel(log) is log


@pytest.mark.parametrize("ratio", [0.3048, 1 / 0.3048, 0.0254, 1e-3])
def test_a_mistaken_unit_is_refused_with_both_columns(ratio):
    with pytest.raises(LogError, match=r"'DBTM': the bit goes .* 'DBTM' was read as 'ft' and 'BPOS' .* 'm'"):
        match_travel(make_log(bit=BIT * ratio))


def test_a_distance_from_the_crown_is_turned_over():
    turned = match_travel(make_log(block=40.0 - BLOCK))
    assert np.allclose(np.diff(turned.values["block_position"]), np.diff(BLOCK))
    assert turned.values["block_position"].min() >= 0.0
    assert "turned over" in turned.warnings[-1]
    assert turned.history[-1].samples == ROWS


@pytest.mark.parametrize("block", [None, np.full(ROWS, np.nan), np.full(ROWS, 3.0)])
def test_nothing_to_compare(block):
    log = make_log(block=block)
    assert match_travel(log) is log
