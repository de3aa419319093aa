"""The same run written in every format reads as the same SI table, whichever reader takes it."""

from pathlib import Path

import numpy as np
import pytest

import log_writers
from forensics.case import Case, FluidSettings, LogSettings
from forensics.errors import LogError
from forensics.logs.read import read_time_logs
from forensics.logs.registry import READERS, read_head, read_raw

KINDS = log_writers.WRITERS


def write(kind, folder):
    name, _, writer = KINDS[kind]
    writer(folder / name)
    return folder / name


def read(*paths, timezone="UTC", **settings):
    none = Path("none")
    logs = LogSettings(time=tuple(paths), timezone=timezone, **settings)
    return read_time_logs(
        Case(path=Path("case.toml"), id="x", title="x", logs=logs, survey=none, hole=none, string=none,
             fluid=FluidSettings(density=1200.0))
    )  # fmt: skip


def test_every_reader_of_the_registry_is_held_to_this():
    assert {reader for _, reader, _ in KINDS.values()} == {reader.name for reader in READERS}


@pytest.mark.parametrize("kind", KINDS)
def test_the_first_reader_that_knows_the_file_is_its_own(kind, tmp_path):
    path = write(kind, tmp_path)
    head = read_head(path)
    assert next(reader.name for reader in READERS if reader.sniff(path, head)) == KINDS[kind][1]


@pytest.mark.parametrize("kind", KINDS)
def test_the_run_reads_as_it_was(kind, tmp_path):
    log = read(write(kind, tmp_path))
    np.testing.assert_allclose(log.time, log_writers.seconds(), atol=1e-3)
    for channel, expected in log_writers.run().items():
        np.testing.assert_allclose(log.values[channel], expected, rtol=2e-7, err_msg=channel)
    assert log.used.all()
    assert log.interval == pytest.approx(log_writers.STEP)
    assert log.warnings == ()


@pytest.mark.parametrize("kind", KINDS)
def test_what_is_missing_is_counted_alike(kind, tmp_path):
    log = read(write(kind, tmp_path))
    missing = dict.fromkeys(("torque", "rpm"), 0)
    for step in log.history:
        if step.name in {"no value", "null code"} and step.channel in missing:
            missing[step.channel] += step.samples
    assert missing == {"torque": 5, "rpm": 10}


@pytest.mark.parametrize("kind", KINDS)
def test_every_column_is_accounted_for_with_a_reason(kind, tmp_path):
    path = write(kind, tmp_path)
    raw = read_raw(path, lambda name: bool(name))
    columns = {c.column for record in read(path).files for c in record.columns}
    names = {name for log in (raw, *raw.others) if log.by != "depth" for name in log.names}
    assert columns == names
    assert all(c.why for record in read(path).files for c in record.columns)


@pytest.mark.parametrize("kind", [k for k in KINDS if k not in {"csv", "csv packed", "csv with semicolons"}])
def test_two_formats_of_one_run_join_without_a_trace(kind, tmp_path):
    log = read(write("csv", tmp_path), write(kind, tmp_path))
    assert len(log) == log_writers.ROWS
    assert not [warning for warning in log.warnings if "different values" in warning]


@pytest.mark.parametrize("kind", ["las 2.0", "las 3.0", "wits metric", "parquet"])
def test_stamps_without_a_zone_take_the_cases(kind, tmp_path):
    log = read(write(kind, tmp_path), timezone="+03:00")
    np.testing.assert_allclose(log.time, log_writers.seconds() - 3 * 3600.0, atol=1e-3)


@pytest.mark.parametrize("kind", ["csv", "witsml 1.3.1.1", "witsml 1.4.1.1", "parquet zoned"])
def test_stamps_with_a_zone_keep_it(kind, tmp_path):
    assert read(write(kind, tmp_path), timezone="+03:00").time[0] == log_writers.seconds()[0]


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("share", [0.1, 0.5, 0.97])
def test_a_file_cut_anywhere_is_read_or_refused_by_its_name(kind, share, tmp_path):
    path = write(kind, tmp_path)
    data = path.read_bytes()
    path.write_bytes(data[: int(share * len(data))])
    assert read_or_refused(path)


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("seed", range(3))
def test_a_file_with_bytes_gone_wrong_is_read_or_refused_by_its_name(kind, seed, tmp_path):
    path = write(kind, tmp_path)
    rng = np.random.default_rng(seed)
    data = bytearray(path.read_bytes())
    for place in rng.integers(0, len(data), 12):
        data[place] = int(rng.integers(0, 256))
    path.write_bytes(bytes(data))
    assert read_or_refused(path)


def read_or_refused(path):
    """Read a damaged file; a refusal must name it, and nothing else may be raised."""
    try:
        return len(read(path)) > 1
    except LogError as error:
        return str(path) in str(error)
