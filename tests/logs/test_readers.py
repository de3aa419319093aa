"""One contract for all readers: what they promise whatever the format."""

import hashlib
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from forensics.errors import LogError
from forensics.logs.registry import READERS, digest, read_head, read_raw, require

DATA = Path(__file__).parents[1] / "data" / "logs"
FILES = {
    "CSV": ["clean.csv", "packed.csv.gz", "semicolon_decimal_comma.csv", "utf16.csv", "line_too_long.csv"],
    "LAS": ["elapsed_seconds.las", "wrapped.las", "version_3.las", "run_on_and_broken_lines.las"],
    "WITSML": ["columns_by_number.xml", "columns_by_list.xml", "two_parts.xml"],
    "WITS": ["frames.wits"],
}
CASES = [(kind, name) for kind, names in FILES.items() for name in names]


def every(name):
    del name
    return True


@pytest.mark.parametrize(("kind", "name"), CASES)
def test_the_first_reader_that_knows_a_file_is_its_own(kind, name):
    head = read_head(DATA / name)
    assert next(reader.name for reader in READERS if reader.sniff(DATA / name, head)) == kind


@pytest.mark.parametrize(("kind", "name"), CASES)
def test_names_units_and_columns_agree(kind, name):
    raw = read_raw(DATA / name, every)
    assert raw.format.startswith(kind)
    assert len(raw.names) == len(raw.units) == len(raw.table.columns)
    assert list(raw.table.columns) == list(range(len(raw.names)))
    assert len(raw.table) >= 23
    assert raw.first_line >= 1
    assert raw.path == DATA / name


@pytest.mark.parametrize(("kind", "name"), CASES)
def test_columns_not_wanted_are_not_loaded(kind, name):
    raw = read_raw(DATA / name, lambda column: "HK" not in column.upper() and "HOOK" not in column.upper())
    assert len(raw.table.columns) == len(raw.names) - 1, kind


@pytest.mark.parametrize(("kind", "name"), CASES)
def test_reading_twice_gives_the_same(kind, name):
    one, two = read_raw(DATA / name, every), read_raw(DATA / name, every)
    pd.testing.assert_frame_equal(one.table, two.table)
    assert kind


def read_or_refuse(path):
    """Read a damaged file; a refusal must name it, and nothing else may be raised."""
    try:
        raw = read_raw(path, every)
    except LogError as error:
        return str(path) in str(error)
    return len(raw.names) > 0 and len(raw.table) > 0


@pytest.mark.parametrize(("kind", "name"), CASES)
@pytest.mark.parametrize("share", [0.02, 0.3, 0.6, 0.9, 0.999])
def test_a_file_cut_anywhere_is_read_or_refused_in_words(kind, name, share, tmp_path):
    data = (DATA / name).read_bytes()
    (tmp_path / name).write_bytes(data[: max(1, int(share * len(data)))])
    assert read_or_refuse(tmp_path / name), kind


@pytest.mark.parametrize(("kind", "name"), CASES)
@pytest.mark.parametrize("seed", range(4))
def test_a_file_with_bytes_gone_wrong_is_read_or_refused_in_words(kind, name, seed, tmp_path):
    rng = np.random.default_rng(seed)
    data = bytearray((DATA / name).read_bytes())
    for place in rng.integers(0, len(data), 12):
        data[place] = int(rng.integers(0, 256))
    (tmp_path / name).write_bytes(bytes(data))
    assert read_or_refuse(tmp_path / name), kind


def test_missing_file_folder_and_empty_file_are_refused(tmp_path):
    with pytest.raises(LogError, match="is missing"):
        require(tmp_path / "none.csv")
    with pytest.raises(LogError, match="folder"):
        require(tmp_path)
    empty = tmp_path / "empty.las"
    empty.write_text(" \n")
    with pytest.raises(LogError, match="empty"):
        read_raw(empty, every)


def test_digest_is_sha256():
    data = (DATA / "clean.csv").read_bytes()
    assert digest(DATA / "clean.csv") == hashlib.sha256(data).hexdigest()
