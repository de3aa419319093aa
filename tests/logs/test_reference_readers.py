"""Valid files read as the reference readers read them: lasio for LAS, pandas for CSV and Parquet."""

from pathlib import Path

import lasio
import numpy as np
import pandas as pd
import pytest

from forensics.logs.nulls import to_numbers
from forensics.logs.registry import read_raw

DATA = Path(__file__).parents[1] / "data" / "logs"
# Files of numbers that lasio reads without help.
LAS = ("elapsed_seconds.las", "elapsed_minutes.las", "elapsed_days.las", "start_with_offset.las",
       "disclaimer_as_parameter.las")  # fmt: skip
CSV = ("clean.csv", "epoch_seconds.csv", "serial_days.csv", "elapsed_seconds.csv", "unit_glued_to_name.csv",
       "packed.csv.gz", "optional_without_unit.csv")  # fmt: skip
RNG = np.random.default_rng(11)
N = 400


def every(name):
    return bool(name)


def numbers(raw):
    return {name: to_numbers(raw.table[place])[0] for place, name in enumerate(raw.names)}


@pytest.mark.parametrize("name", LAS)
def test_las_values_names_and_units_are_lasios(name):
    raw, las = read_raw(DATA / name, every), lasio.read(DATA / name, null_policy="none")
    assert [curve.mnemonic for curve in las.curves] == list(raw.names)
    assert [curve.unit or None for curve in las.curves] == [unit or None for unit in raw.units]
    for curve in las.curves:
        np.testing.assert_array_equal(numbers(raw)[curve.mnemonic], curve.data)


@pytest.mark.parametrize("name", CSV)
def test_csv_values_are_those_of_pandas(name):
    raw, frame = read_raw(DATA / name, every), pd.read_csv(DATA / name)
    assert list(frame.columns) == list(raw.names) or len(frame.columns) == len(raw.names)
    for place, column in enumerate(frame.columns):
        if pd.api.types.is_numeric_dtype(frame[column]):
            own = to_numbers(raw.table[place])[0]
            np.testing.assert_array_equal(own, frame[column].to_numpy(dtype=float))


def table():
    """Give a log as a rig might keep it: numbers of many sizes, some missing."""
    frame = pd.DataFrame(
        {
            "TIME": np.arange(N) * 5.0,
            "BDEP": 2000.0 + 0.013 * np.arange(N),
            "HKLD": np.round(900.0 + 30.0 * RNG.standard_normal(N), 2),
            "TQA": 1e-3 * RNG.standard_normal(N),
            "WOB": 1e6 * RNG.standard_normal(N),
        }
    )
    frame.loc[RNG.integers(0, N, 20), "TQA"] = np.nan
    return frame


def test_a_table_pandas_writes_comes_back_to_the_last_digit(tmp_path):
    frame = table()
    for name, write in (("a.csv", frame.to_csv), ("a.csv.gz", frame.to_csv), ("a.parquet", frame.to_parquet)):
        write(tmp_path / name, index=False)
        found = numbers(read_raw(tmp_path / name, every))
        for column in frame:
            # the fast parsers of pandas are right to a unit in the last place
            np.testing.assert_allclose(found[column], frame[column], rtol=1e-15, err_msg=f"{name} {column}")


@pytest.mark.parametrize("version", [1.2, 2.0])
@pytest.mark.parametrize("wrap", [False, True])
def test_a_log_lasio_writes_comes_back(tmp_path, version, wrap):
    frame = table()
    las = lasio.LASFile()
    for column, unit in zip(frame, ("S", "M", "KN", "KN.M", "N"), strict=True):
        las.append_curve(column, frame[column].to_numpy(), unit=unit)
    with (tmp_path / "a.las").open("w") as file:
        las.write(file, version=version, wrap=wrap, fmt="%.6f")
    raw = read_raw(tmp_path / "a.las", every)
    again = lasio.read(tmp_path / "a.las", engine="normal", null_policy="none")
    for column in frame:
        np.testing.assert_array_equal(numbers(raw)[column], again[column])
        known = frame[column].notna().to_numpy()
        np.testing.assert_allclose(numbers(raw)[column][known], frame[column][known], atol=1e-6)
