"""A log that lacks what helps still runs, and says what it could not tell."""

import json

import numpy as np
import pytest

import cases
from pipelines import cli

JOB = cases.Job(duration=3700.0)


def run(tmp_path, columns):
    """Run the job on a log of these columns; give its summary."""
    path = cases.make_case(tmp_path / "case", JOB)
    cases.write_log(columns, path.parent / "time.csv")
    assert cli.main(["incident", str(path), "--out", str(tmp_path / "out"), "--quiet"]) == 0
    return json.loads((tmp_path / "out" / "summary.json").read_text())


def said(summary):
    """Give all that a summary says it could not tell, in one text."""
    told = [
        *summary["run"]["can_not_tell"],
        *summary["friction"]["can_not_tell"],
        *summary["finding"]["can_not_tell"],
        *summary["quality"]["warnings"],
        *summary["warnings"],
    ]
    return " ".join(told).lower()


@pytest.mark.parametrize(
    ("missing", "word"),
    [
        ("RPM (rpm)", "rotary speed"),
        ("Torque (kN.m)", "torque"),
        ("Block Position (m)", "block"),
        ("Standpipe Pressure (bar)", "pressure"),
        ("Flow In (L/min)", "flow"),
        ("WOB (kN)", "wob"),
    ],
)
def test_runs_without_a_channel(tmp_path, missing, word):
    columns = cases.log_columns(JOB)
    del columns[missing]
    assert word in said(run(tmp_path, columns))


def test_runs_on_what_is_needed_alone(tmp_path):
    columns = cases.log_columns(JOB)
    needed = {name: columns[name] for name in ("Time", "Bit Depth (m)", "Hookload (kN)")}
    text = said(run(tmp_path, needed))
    for word in ("rotary speed", "torque", "block"):
        assert word in text


def test_runs_without_off_bottom_readings(tmp_path):
    columns = cases.log_columns(JOB)
    drilling = (columns["Hole Depth (m)"] - columns["Bit Depth (m)"] < 0.01) & (columns["RPM (rpm)"] > 5)
    summary = run(tmp_path, {name: values[drilling] for name, values in columns.items()})
    assert not any(section["determined"] for section in summary["friction"]["sections"])
    assert summary["friction"]["can_not_tell"]
    assert "off-bottom" in said(summary) or "off bottom" in said(summary)


def test_constant_channel_counts_as_missing(tmp_path):
    columns = cases.log_columns(JOB)
    columns["Torque (kN.m)"] = np.full(len(columns["Time"]), -999.25)
    assert "torque" in said(run(tmp_path, columns))


def test_zero_torque_beside_empty_rotary_speed(tmp_path):
    columns = cases.log_columns(JOB)
    columns["Torque (kN.m)"] = np.zeros(len(columns["Time"]))
    columns["RPM (rpm)"] = np.full(len(columns["Time"]), -999.25)
    assert "rotary speed" in said(run(tmp_path, columns))
