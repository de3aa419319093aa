"""A hookload in the wrong unit is refused, a hookload that a rig could show is not."""

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.case import RigSettings
from forensics.errors import CaseError, LogError
from forensics.logs.table import FileRecord, SourceColumn, TimeLog
from forensics.rig.plausible import check_block, check_hookload

WELL = SimpleNamespace(rotating_weight=lambda depth: np.full(np.shape(depth), 600e3))


def make_log(hook):
    hook = np.asarray(hook, dtype=float)
    rows = len(hook)
    column = SourceColumn("time.csv", "HKLD", "N", "hookload", "known")
    record = FileRecord("time.csv", "0" * 64, "csv", rows, 0.0, rows, 1.0, (column,))
    values = {"bit_depth": np.linspace(2990.0, 3000.0, rows), "hookload": hook}
    return TimeLog(
        np.arange(rows, dtype=float), values, hook, np.ones(rows, bool), np.zeros(rows, np.int8), 1.0,
        files=(record,),
    )  # fmt: skip


@pytest.mark.parametrize("hook", [100e3, 600e3, 1.5e6, 5e6])
def test_takes_what_a_rig_could_show(hook):
    check_hookload(make_log(np.full(100, hook)), WELL)


def test_takes_slips_for_most_of_the_time():
    check_hookload(make_log(np.where(np.arange(100) % 10, 20e3, 600e3)), WELL)


@pytest.mark.parametrize("hook", [500.0, 20e3, 600e6])
def test_refuses_orders_of_magnitude(hook):
    with pytest.raises(LogError, match=r"time\.csv, column 'HKLD': hookload is about .* check the unit"):
        check_hookload(make_log(np.full(100, hook)), WELL)


def test_says_what_it_saw():
    with pytest.raises(LogError, match=r"500 N with the bit at .* weighs 600.* kN; .* read as 'N'"):
        check_hookload(make_log(np.full(100, 500.0)), WELL)


@pytest.mark.parametrize("hook", [[], [np.nan] * 5])
def test_nothing_to_judge(hook):
    check_hookload(make_log(hook), WELL)


def case_with(block_weight, included=True):
    return SimpleNamespace(path="case.toml", rig=RigSettings(block_weight, hookload_includes_block=included))


@pytest.mark.parametrize(("block", "included"), [(None, True), (290e3, True), (9290e3, False)])
def test_takes_a_block_the_hook_can_carry(block, included):
    check_block(make_log(np.full(100, 900e3)), case_with(block, included))


def test_refuses_a_block_heavier_than_all_the_hook_carried():
    with pytest.raises(CaseError, match=r"rig\.block_weight.*9290.* kN is more than the hook carries.*900"):
        check_block(make_log(np.full(100, 900e3)), case_with(9290e3))
