"""`episodes.csv` has the contract's columns, in the contract's units."""

import csv
import datetime as dt
from dataclasses import replace

import pytest

from forensics.episodes.catalogue import Kind
from forensics.estimate import Estimate
from forensics.exports.episodes import TRAVEL, episode_row, write_episodes

# From the contract, section 3, word for word.
CONTRACT = [
    "id",
    "start",
    "end",
    "duration_s",
    "kind",
    "state",
    "activity",
    "top_md_m",
    "bottom_md_m",
    "peak_md_m",
    "peak_load_ratio",
    "peak_compression_kN",
    "lost_weight_kN",
    "lost_to_buckling_kN",
    "probability",
    "consequence",
    "family",
    "cause",
    "note",
]
RESIDUALS = ("peak_drag_residual_kN", "peak_torque_residual_kNm")


@pytest.fixture
def rows(findings, tmp_path):
    write_episodes(findings, tmp_path / "episodes.csv")
    with (tmp_path / "episodes.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def test_columns_begin_with_the_contracts(rows):
    names = list(rows[0])
    assert names[: len(CONTRACT)] == CONTRACT
    assert set(names[len(CONTRACT) :]) == {
        *(f"{name}_{end}" for name in CONTRACT[10:14] for end in ("low", "high")),
        *(f"{name}_{end}" for name in ("top_md_m", "bottom_md_m", "probability") for end in ("low", "high")),
        *(f"bit_load_kN{end}" for end in ("", "_low", "_high")),
        "critical_load_kN",
        "onsets",
        "onsets_beyond",
        *(f"free_length_m{end}" for end in ("", "_low", "_high")),
        *TRAVEL,
        *(f"{name}{end}" for name in RESIDUALS for end in ("", "_low", "_high")),
        "verdict",
        "verdict_note",
        "program_cause",
    }


def test_values_are_in_the_units_of_their_names(rows):
    first = rows[0]
    assert float(first["peak_compression_kN"]) == 120.0
    assert float(first["lost_weight_kN_low"]) == 36.0
    assert float(first["lost_weight_kN_high"]) == 44.0
    assert float(first["duration_s"]) == 3.25
    assert (first["kind"], first["state"], first["consequence"]) == ("buckling", "helical", "weight_lost")


def test_times_are_iso_with_the_offset_of_the_log(rows):
    assert rows[0]["start"] == "2031-05-06T02:00:01+02:00"
    assert rows[0]["end"] == "2031-05-06T02:00:04.250+02:00"
    assert dt.datetime.fromisoformat(rows[1]["start"]).timestamp() == 1_935_792_000.0


def test_missing_numbers_are_empty(rows):
    assert rows[1]["top_md_m"] == ""
    assert rows[1]["probability"] == ""


def test_a_residual_stands_in_the_column_of_its_kind(findings):
    drag = replace(
        findings.episodes[0], kind=Kind.DRAG, peak_residual=Estimate(40e3, 35e3, 46e3, "readings of the run")
    )
    row = episode_row(drag, dt.UTC)
    assert [row[f"{RESIDUALS[0]}{end}"] for end in ("", "_low", "_high")] == [40.0, 35.0, 46.0]
    assert row[RESIDUALS[1]] is None
    assert episode_row(replace(drag, kind=Kind.TORQUE), dt.UTC)[f"{RESIDUALS[1]}_high"] == 46.0


def test_notes_survive_commas_and_quotes(rows):
    assert rows[0]["note"] == 'helical 1600 to "1900" m, at the heel'


def test_no_episodes_leaves_the_header(findings, tmp_path):
    object.__setattr__(findings, "episodes", ())
    write_episodes(findings, tmp_path / "episodes.csv")
    assert (tmp_path / "episodes.csv").read_text().count("\n") == 1
