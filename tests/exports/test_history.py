"""`history.parquet` has the contract's columns, in the contract's units."""

import pandas as pd
import pyarrow as pa
import pyarrow.parquet as pq
import pytest

from forensics.exports.history import history_table, write_history

# From the contract, section 3, word for word.
CONTRACT = [
    "time",
    "bit_depth_m",
    "hole_depth_m",
    "activity",
    "hookload_kN",
    "hookload_logged_kN",
    "wob_logged_kN",
    "wob_surface_kN",
    "wob_slack_off_ref_kN",
    "wob_bit_kN",
    "peak_load_ratio",
    "peak_md_m",
    "state",
    "reach_md_m",
    "basis",
    "drag_residual_kN",
    "torque_residual_kNm",
    "used",
    "reason",
]


BANDS = (("wob_bit", "_kN"), ("peak_load_ratio", ""))


@pytest.fixture
def written(findings, tmp_path):
    write_history(findings, tmp_path / "history.parquet")
    return tmp_path / "history.parquet"


def test_columns_are_the_contracts(written):
    assert pq.read_schema(written).names == [
        *CONTRACT,
        "wob_bit_limit_kN",
        *(f"{name}_{end}{unit}" for name, unit in BANDS for end in ("low", "high")),
        "wob_bit_margin_kN",
        "wob_witness_kN",
        "wob_witness_error_kN",
    ]


def test_time_is_utc_and_keeps_fractions(written):
    table = pd.read_parquet(written)
    assert str(table["time"].dt.tz) == "UTC"
    assert table["time"].iloc[0] == pd.Timestamp("2031-05-06T00:00:00Z")
    assert table["time"].iloc[4] == pd.Timestamp("2031-05-06T00:00:04.250Z")


def test_values_are_in_the_units_of_their_names(written):
    row = pd.read_parquet(written).iloc[1]
    assert (row["hookload_kN"], row["wob_surface_kN"], row["wob_bit_kN"]) == (800.0, 50.0, 20.0)
    assert (row["bit_depth_m"], row["peak_load_ratio"], row["drag_residual_kN"]) == (2401.0, 1.5, 3.0)


def test_words_stand_for_codes(written):
    table = pd.read_parquet(written)
    assert list(table["activity"]) == ["connection", *["drill_slide"] * 4, "unknown"]
    assert list(table["state"]) == ["none", "sinusoidal", "helical", "none", "helical", "none"]
    assert list(table["basis"])[:3] == ["hookload", "memory", "rate_law"]
    assert list(table["basis"])[4:] == ["differential", "downhole"]


def test_missing_is_null_not_a_number(findings):
    table = history_table(findings)
    assert table["wob_logged_kN"].null_count == len(table), "a log without the rig's weight on bit"
    assert table["torque_residual_kNm"].null_count == len(table)
    assert table["wob_bit_kN"].null_count == 1
    assert table["basis"].null_count == 1, "no basis where there is no bit load"


def test_rows_set_aside_say_why(written):
    table = pd.read_parquet(written)
    assert list(table["used"]) == [True, True, True, False, True, True]
    assert table["reason"].iloc[3] == "null hookload"
    assert table["reason"].isna().sum() == 5


def test_strings_are_plain_strings(findings):
    assert history_table(findings).schema.field("state").type == pa.string()


def test_same_findings_give_the_same_bytes(findings, written, tmp_path):
    write_history(findings, tmp_path / "again.parquet")
    assert (tmp_path / "again.parquet").read_bytes() == written.read_bytes()


@pytest.mark.parametrize("rows", [1, 3, 4, 5, 6, 7])
def test_lots_of_rows_make_one_table(findings, tmp_path, monkeypatch, rows):
    monkeypatch.setattr("forensics.exports.history.ROWS", rows)
    write_history(findings, tmp_path / "lots.parquet")
    assert pq.read_table(tmp_path / "lots.parquet").equals(history_table(findings))
    assert pq.ParquetFile(tmp_path / "lots.parquet").num_row_groups == -(-6 // rows)
