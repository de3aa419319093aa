"""The incident job from end to end, on a small invented run."""

import json
import shutil
from dataclasses import replace

import jsonschema
import numpy as np
import pandas as pd
import pytest
from pypdf import PdfReader

import cases
from forensics.errors import InputError
from forensics.exports.summary import summary_schema
from pipelines import cli, incident, results
from pipelines.output import RESULTS

JOB = cases.Job(duration=3700.0)
STAGES = {
    "imports", "reading", "well", "rig", "calibration", "replay", "draws", "episodes", "profiles", "flips",
    "figures", "pdf", "exports",
}  # fmt: skip


@pytest.fixture(scope="module")
def case(tmp_path_factory):
    return cases.make_case(tmp_path_factory.mktemp("job"), JOB)


@pytest.fixture(scope="module")
def result(case):
    return incident.run(case, case.parent / "out", quiet=True)


def test_writes_every_result(result):
    asked_for = {"history.las", "figures"}
    assert {path.name for path in result.folder.iterdir()} == RESULTS - asked_for


def test_summary_keeps_to_the_schema(result):
    summary = json.loads((result.folder / "summary.json").read_text())
    jsonschema.Draft202012Validator(summary_schema()).validate(summary)
    assert {entry["file"] for entry in summary["inputs"]} == {
        "case.toml", "time.csv", "survey.csv", "hole.csv", "string.csv",
    }  # fmt: skip


def test_history_has_a_row_a_stamp(result, case):
    history = pd.read_parquet(result.folder / "history.parquet")
    log = pd.read_csv(case.parent / "time.csv")
    assert len(history) == len(log)
    np.testing.assert_allclose(history["hookload_logged_kN"], log["Hookload (kN)"], atol=1e-9)
    np.testing.assert_allclose(history["bit_depth_m"], log["Bit Depth (m)"], atol=1e-9)


def test_friction_of_the_invented_run_is_recovered(result):
    friction = json.loads((result.folder / "friction.json").read_text())
    found = {section["kind"]: section for section in friction["sections"]}
    assert found["cased"]["friction_factor"] == pytest.approx(JOB.cased, abs=0.02)
    assert found["open"]["friction_factor"] == pytest.approx(JOB.open, abs=0.02)
    assert friction["block_weight_kN"] == pytest.approx(cases.BLOCK / 1e3, abs=2.0)


def test_quiet_run_buckles_nowhere(result):
    history = pd.read_parquet(result.folder / "history.parquet")
    assert set(history["state"]) == {"none"}
    assert not any(e.kind == "buckling" for e in result.findings.episodes)


def test_weight_of_the_invented_run_reaches_the_bit(result):
    history = pd.read_parquet(result.folder / "history.parquet")
    turned = history.loc[history["activity"] == "drill_rotate", "wob_bit_kN"]
    slid = history.loc[history["activity"] == "drill_slide", "wob_bit_kN"]
    # 5 kN: the weight readings of an hour leave the weight of the pipe above the rotary uncertain.
    assert turned.median() == pytest.approx(JOB.weight / 1e3, abs=5.0)
    assert slid.median() == pytest.approx(JOB.slide_weight / 1e3, abs=5.0)


def test_result_is_told_in_ten_lines_at_most(result):
    assert 8 <= len(result.lines) <= 10
    assert result.lines[0].startswith("heron-1-run-2: ")
    assert result.lines[-1] == f"Report: {result.folder / 'report.html'}"
    assert all("\n" not in line for line in result.lines)


def test_result_is_told_in_signs_any_terminal_has(result):
    weight = replace(result.findings.calibration.block_weight, value=-12e3, low=-20e3, high=-4e3)
    changed = replace(result.findings, calibration=replace(result.findings.calibration, block_weight=weight))
    told = "\n".join(results.lines(changed, result.folder))
    assert "Block weight: -12" in told
    assert told.isascii()


def test_every_stage_is_timed(result):
    assert set(result.timings) == STAGES
    assert min(result.timings.values()) >= 0.0


def test_same_input_gives_the_same_bytes(result, case, tmp_path):
    again = incident.run(case, tmp_path / "again", quiet=True)
    for path in result.folder.iterdir():
        assert path.read_bytes() == (again.folder / path.name).read_bytes(), path.name


def test_results_go_to_reports_by_default(case, tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    assert cli.main(["incident", str(case), "--units", "field"]) == 0
    captured = capsys.readouterr()
    assert (tmp_path / "reports" / "heron-1-run-2" / "report.html").is_file()
    pdf = PdfReader(tmp_path / "reports" / "heron-1-run-2" / "report.pdf")
    assert pdf.pages[0].mediabox.width == 792, "letter, on its side"
    assert "klbf" in captured.out
    assert captured.err == "", "no progress where nobody watches"


def test_unknown_units_are_refused(case):
    with pytest.raises(InputError, match="units are 'cubits'; expected 'metric' or 'field'"):
        incident.run(case, units="cubits")


def test_unknown_paper_is_refused(case):
    with pytest.raises(InputError, match="paper is 'a3'; expected 'a4' or 'letter'"):
        incident.run(case, paper="a3")


def test_fault_in_the_report_leaves_earlier_results(case, tmp_path, monkeypatch):
    out = tmp_path / "out"
    out.mkdir()
    (out / "summary.json").write_text("earlier")

    def fail(*_):
        raise RuntimeError("no ink")

    monkeypatch.setattr("pipelines.results.EXPORTS", {"friction.json": fail})
    with pytest.raises(RuntimeError, match="no ink"):
        incident.run(case, out, quiet=True)
    assert [(p.name, p.read_text()) for p in out.iterdir()] == [("summary.json", "earlier")]
    assert [p.name for p in tmp_path.iterdir()] == ["out"]


def test_inputs_of_one_name_are_told_apart_and_idle_settings_are_said(case, tmp_path, capsys):
    folder = tmp_path / "twins"
    shutil.copytree(case.parent, folder, ignore=shutil.ignore_patterns("out*"))
    (folder / "kept").mkdir()
    (folder / "kept" / "survey.csv").write_text("depth [m],pick_up [kN]\n2500,1000\n")
    with (folder / "case.toml").open("a") as file:
        file.write('[records]\nweights = "kept/survey.csv"\n[rig]\nlines = 12\n')
    assert cli.main(["incident", str(folder / "case.toml"), "--out", str(folder / "out")]) == 0
    assert "lines changes nothing" in capsys.readouterr().err
    summary = json.loads((folder / "out" / "summary.json").read_text())
    assert {"survey.csv", "kept/survey.csv"} <= {entry["file"] for entry in summary["inputs"]}
    assert any("lines changes nothing" in remark for remark in summary["warnings"])
    assert "Weights written down by hand" in (folder / "out" / "report.html").read_text(encoding="utf-8")


def test_verdicts_beside_the_case_are_read_and_never_written(case, tmp_path, capsys):
    folder = tmp_path / "judged"
    shutil.copytree(case.parent, folder, ignore=shutil.ignore_patterns("out*"))
    text = "start,end,verdict\n2001-01-01T00:00:00Z,2001-01-01T00:10:00Z,reject\n"
    (folder / "verdicts.csv").write_text(text)
    asked = ["incident", str(folder / "case.toml"), "--out", str(folder / "out"), "--also", "verdicts"]
    assert cli.main(asked) == 0
    said = capsys.readouterr().err
    assert "verdicts.csv beside the case file was read" in said
    assert "line 2: the verdict matches no episode" in said
    assert (folder / "verdicts.csv").read_text() == text
    summary = json.loads((folder / "out" / "summary.json").read_text())
    assert "verdicts.csv" in {entry["file"] for entry in summary["inputs"]}
    assert any("matches no episode" in remark for remark in summary["warnings"])
    draft = (folder / "out" / "verdicts_draft.csv").read_text()
    assert "2001-01-01T00:00:00+00:00" in draft
    (folder / "out" / "verdicts_draft.csv").write_text(draft.replace(",reject,", ",accept,"))
    assert cli.main(asked) == 2
    assert "is filled in" in capsys.readouterr().err
