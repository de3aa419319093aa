"""The inspection, of a case and of bare logs, and the case file it drafts."""

import shutil
from pathlib import Path

import numpy as np
import pytest

import cases
from forensics.case import load_case
from forensics.errors import InputError
from pipelines import cli, drafting, inspection

SMALL = Path(__file__).parents[1] / "data" / "logs"
JOB = cases.Job(duration=3700.0)


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    return cases.make_case(tmp_path_factory.mktemp("bare"), JOB).parent


@pytest.fixture
def copy(folder, tmp_path):
    return shutil.copytree(folder, tmp_path / "case")


def test_a_case_is_shown_with_every_channel_it_has(folder, tmp_path):
    result = inspection.run([folder / "case.toml"], tmp_path / "out", quiet=True)
    assert result.found.refusals == ()
    for name in ("Hookload (kN)", "Bit Depth (m)", "string.csv", "What these data will show"):
        assert name in result.text
    page = result.page.read_text(encoding="utf-8")
    assert page.count("<figure") >= 1
    assert "http" not in page.split("</style>")[1]


def test_no_figure_of_the_inspection_outlives_its_drawing(folder, tmp_path):
    plt = pytest.importorskip("matplotlib.pyplot")
    inspection.run([folder / "case.toml"], tmp_path / "out", quiet=True)
    assert plt.get_fignums() == []


def test_the_same_case_gives_the_same_page(folder, tmp_path):
    pages = [
        inspection.run([folder / "case.toml"], tmp_path / name, quiet=True).page.read_bytes()
        for name in ("one", "two")
    ]
    assert pages[0] == pages[1]


def test_a_string_too_wide_is_told_and_the_log_still_shown(copy, capsys):
    tally = (copy / "string.csv").read_text().replace("Motor,motor,8.7,171.5", "Motor,motor,8.7,471.5")
    (copy / "string.csv").write_text(tally)
    assert cli.main(["inspect", str(copy / "case.toml"), "--out", str(copy / "out")]) == cli.BAD_INPUT
    said = capsys.readouterr()
    assert "Hookload (kN)" in said.out
    assert "string.csv, line 3" in said.err
    assert (copy / "out" / "inspect.html").is_file()


def test_the_page_stays_beside_results_and_results_beside_the_page(folder, tmp_path):
    from pipelines.output import whole_folder

    target = tmp_path / "run"
    inspection.run([folder / "case.toml"], target, quiet=True)
    with whole_folder(target) as fresh:
        (fresh / "summary.json").write_text("{}")
    assert (target / "inspect.html").is_file()
    inspection.run([folder / "case.toml"], target, quiet=True)
    assert (target / "summary.json").read_text() == "{}"


def test_a_draft_of_logs_and_tables_is_a_case_but_for_the_mud(copy):
    files = [copy / name for name in ("time.csv", "hole.csv", "survey.csv", "string.csv")]
    draft = copy / "drafted.toml"
    inspection.run(files, copy / "out", quiet=True, draft=draft)
    with pytest.raises(InputError, match="density"):
        load_case(draft)
    draft.write_text(draft.read_text().replace("# density = ", "density = "))
    case = load_case(draft)
    assert [path.name for path in case.logs.time] == ["time.csv"]
    assert (case.survey.name, case.hole.name, case.string.name) == ("survey.csv", "hole.csv", "string.csv")


def test_a_draft_of_a_log_alone_names_the_tables_that_lack(copy):
    draft = copy / "drafted.toml"
    (copy / "survey.csv").unlink()
    inspection.run([copy / "time.csv"], copy / "out", quiet=True, draft=draft)
    assert draft.read_text().count("FILL IN") >= 4
    with pytest.raises(InputError, match=r"survey\.csv"):
        load_case(draft)


def test_a_missing_unit_is_guessed_for_the_draft_and_marked(copy):
    log = (copy / "time.csv").read_text()
    (copy / "time.csv").write_text(log.replace("Hookload (kN)", "HKLD", 1))
    draft = copy / "drafted.toml"
    result = inspection.run([copy / "time.csv"], copy / "out", quiet=True, draft=draft)
    line = next(line for line in draft.read_text().splitlines() if line.startswith("hookload"))
    assert '"HKLD", unit = "kN"' in line
    assert "CHECK" in line
    assert any("HKLD" in remark for remark in result.found.remarks)
    hook = result.found.log.values["hookload"]
    assert 1e5 < np.nanmedian(hook) < 5e6


def test_a_draft_replaces_nothing(copy):
    with pytest.raises(InputError, match="exists already"):
        inspection.run([copy / "time.csv"], copy / "out", quiet=True, draft=copy / "case.toml")
    assert not (copy / "out").exists()


@pytest.mark.parametrize(
    ("names", "words"),
    [
        (["case.toml", "time.csv"], "one case file alone"),
        (["hole.csv", "survey.csv"], "is a log"),
        (["time.csv", "hole.csv", "again.csv"], "give one"),
        (["nowhere.las"], "is missing"),
    ],
)
def test_wrong_files_are_refused(copy, names, words):
    shutil.copy(copy / "hole.csv", copy / "again.csv")
    with pytest.raises(InputError, match=words):
        inspection.run([copy / name for name in names], copy / "out", quiet=True)


def test_the_well_of_a_las_log_is_in_the_draft(tmp_path):
    from forensics.case.skeleton import Known, write_skeleton
    from pipelines.drafting import _well_name

    las = tmp_path / "run.las"
    las.write_text("~Version\nVERS. 2.0 :\n~Well\nSTRT.S 0 :\nWELL.   Plover 4 : well\n~A\n")
    assert _well_name(las) == "Plover 4"
    assert 'well = "Plover 4"' in write_skeleton(Known("plover", ("run.las",), well="Plover 4"))


DEPTH_LOGS = {
    "mud.csv": "DEPT,HKLA,TQA\nM,KKGF,KN.M\n" + "".join(f"{d},90,{9 + d % 3}\n" for d in range(40)),
    "mud.las": "~V\n VERS. 2.0 :\n WRAP. NO :\n~C\n DEPT.M :\n HKLD.KKGF :\n TQA.KN.M :\n~A\n"
    + "".join(f"{d} 90 {9 + d % 3}\n" for d in range(40)),
    "mud.xml": "<logs><log><indexType>measured depth</indexType><logCurveInfo><mnemonic>DEPT</mnemonic>"
    "<unit>m</unit></logCurveInfo><logCurveInfo><mnemonic>TQA</mnemonic><unit>kN.m</unit></logCurveInfo><logData>"
    "<mnemonicList>DEPT,TQA</mnemonicList><unitList>m,kN.m</unitList>"
    + "".join(f"<data>{d},{9 + d % 3}</data>" for d in range(40))
    + "</logData></log></logs>",
}
OBJECTS = {
    "path.xml": "<trajectorys><trajectory><nameWell>W</nameWell>{}</trajectory></trajectorys>",
    "pipe.xml": "<tubulars><tubular><nameWell>W</nameWell></tubular></tubulars>",
    "hole.xml": "<wbGeometrys><wbGeometry><nameWell>W</nameWell></wbGeometry></wbGeometrys>",
}


@pytest.mark.parametrize("name", DEPTH_LOGS)
def test_a_log_by_depth_goes_where_those_belong(copy, name):
    (copy / name).write_text(DEPTH_LOGS[name])
    target = copy / "draft.toml"
    inspection.run([copy / "time.csv", copy / name], copy / "out", quiet=True, draft=target)
    assert f'depth = ["{name}"]' in target.read_text()
    with pytest.raises(InputError, match="is a log by time"):
        inspection.run([copy / name], copy / "out", quiet=True)


def test_well_objects_are_told_from_logs(copy):
    for name, text in OBJECTS.items():
        (copy / name).write_text(text)
    made = drafting.gather([copy / "time.csv", *(copy / name for name in OBJECTS)])
    assert made.tables == {
        "survey": copy / "path.xml", "string": copy / "pipe.xml", "hole": copy / "hole.xml"
    }  # fmt: skip
    assert made.logs == (copy / "time.csv",)


def told(path, folder):
    """Give what inspecting a file says, or the words of its refusal."""
    try:
        return inspection.run([path], folder, quiet=True).text
    except InputError as refusal:
        return refusal.text


def test_every_small_file_gives_a_text_or_one_refusal(tmp_path, monkeypatch):
    monkeypatch.setattr("forensics.report.render.render_report", lambda report: report.title)
    for path in sorted(SMALL.iterdir()):
        words = told(path, tmp_path / path.name)
        assert path.name in words
        assert "What was read" in words or "\n" not in words, path.name
