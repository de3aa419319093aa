"""The channels as LAS 2.0, read again by lasio and by the program itself."""

import lasio
import numpy as np
import pytest

from forensics.case import Case, FluidSettings, LogSettings
from forensics.exports.las import CURVES, LONGEST_LINE, NULL, write_las
from forensics.logs.read import read_time_logs


@pytest.fixture
def path(findings, tmp_path):
    write_las(findings, tmp_path / "history.las")
    return tmp_path / "history.las"


def test_lasio_reads_every_curve_with_its_unit(path, findings):
    las = lasio.read(path, null_policy="strict")
    assert [c.mnemonic for c in las.curves] == ["ETIM", *(c.mnemonic for c in CURVES)]
    assert [c.unit for c in las.curves][1:] == [c.unit for c in CURVES]
    assert float(las.version.VERS.value) == 2.0
    assert las.version.WRAP.value == "NO"
    np.testing.assert_allclose(las["ETIM"], findings.log.time - findings.log.time[0], atol=1e-3)
    wanted = findings.loads.bit_load / 1e3
    np.testing.assert_allclose(las["BWOB"], wanted, atol=0.051)
    np.testing.assert_allclose(las["BDEP"], findings.log.values["bit_depth"], atol=0.0051)


def test_what_is_missing_is_the_null_value_and_nothing_else_is(path, findings):
    las = lasio.read(path, null_policy="none")
    missing = ~np.isfinite(findings.loads.drag_residual)
    np.testing.assert_array_equal(las["DRES"] == NULL, missing)


def test_no_line_is_longer_than_the_standard_allows_and_all_are_ascii(path):
    data = path.read_bytes()
    assert data.isascii()
    assert max(len(line) for line in data.split(b"\n")) <= LONGEST_LINE


def test_the_program_reads_its_own_export(path, findings):
    nowhere = path.parent
    case = Case(nowhere, "x", "x", LogSettings((path,)), nowhere, nowhere, nowhere, FluidSettings(1250.0))
    log = read_time_logs(case)
    np.testing.assert_allclose(log.time, findings.log.time, atol=1.0)
    again = log.values["bit_depth"]
    known = np.isfinite(again)
    np.testing.assert_allclose(again[known], findings.log.values["bit_depth"][known], atol=0.006)


def test_the_same_findings_give_the_same_bytes(path, findings, tmp_path):
    write_las(findings, tmp_path / "again.las")
    assert path.read_bytes() == (tmp_path / "again.las").read_bytes()
