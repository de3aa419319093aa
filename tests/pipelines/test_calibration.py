"""The joint calibration from end to end, on small invented runs."""

import csv
import json
import shutil

import pytest

import cases
from forensics.errors import InputError
from pipelines import calibration, cli

JOB = cases.Job(duration=3700.0)


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    place = tmp_path_factory.mktemp("pool")
    first = cases.make_case(place / "a", JOB)
    shutil.copytree(place / "a", place / "b")
    text = first.read_text()
    (place / "b" / "case.toml").write_text(text.replace("heron-1-run-2", "heron-2-run-1"))
    (place / "bad").mkdir()
    (place / "bad" / "case.toml").write_text(text)
    return place


def rows(path):
    with path.open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


@pytest.fixture(scope="module")
def result(folder):
    paths = [folder / name / "case.toml" for name in ("a", "b", "bad")]
    return calibration.run(paths, folder / "out", quiet=True)


def test_each_runs_own_factor_and_the_pooled_one_hold_the_truth(result):
    by_kind = {(r["case"], r["kind"]): r for r in rows(result.folder / "factors.csv")}
    assert float(by_kind["heron-1-run-2", "open"]["friction_factor"]) == pytest.approx(JOB.open, abs=0.02)
    plan = {r["kind"]: r for r in rows(result.folder / "plan.csv") if r["group"] != "any other"}
    for kind, true in (("cased", JOB.cased), ("open", JOB.open)):
        assert float(plan[kind]["low"]) <= true <= float(plan[kind]["high"])
        assert float(plan[kind]["p10"]) < true < float(plan[kind]["p90"])
        assert plan[kind]["runs"] == "2"


def test_a_bad_case_is_named_and_the_rest_go_on(result, folder):
    assert list(result.failures) == [str(folder / "bad" / "case.toml")]
    told = json.loads((result.folder / "calibration.json").read_text())
    assert "time.csv" in next(iter(told["failures"].values()))
    assert "Cases that could not be used" in (result.folder / "calibration.html").read_text(encoding="utf-8")


def test_a_batch_with_a_bad_case_leaves_with_status_3(folder, capsys):
    argv = ["calibrate", str(folder / "a" / "case.toml"), str(folder / "bad" / "case.toml")]
    assert cli.main([*argv, "--out", str(folder / "out3"), "--quiet"]) == cli.SOME_FAILED
    assert "Failed" in capsys.readouterr().out


def test_one_bad_case_alone_is_bad_input_and_leaves_nothing(folder, capsys):
    argv = ["calibrate", str(folder / "bad" / "case.toml"), "--out", str(folder / "none")]
    assert cli.main(argv) == cli.BAD_INPUT
    assert "time.csv" in capsys.readouterr().err
    assert not (folder / "none").exists()


def test_two_cases_of_one_id_are_refused(folder):
    path = folder / "a" / "case.toml"
    with pytest.raises(InputError, match="heron-1-run-2"):
        calibration.run([path, path], folder / "twice", quiet=True)
