"""`friction.json` and `summary.json`: the contract's names, the package's schema, no NaN."""

import dataclasses
import json

import jsonschema
import pytest

from forensics.episodes.pipe import PartToll, PipeToll, Turned
from forensics.exports.friction import write_friction
from forensics.exports.summary import summary_schema, write_summary
from forensics.well.string import Component


@pytest.fixture
def friction(findings, tmp_path):
    write_friction(findings, tmp_path / "friction.json")
    return json.loads((tmp_path / "friction.json").read_text())


@pytest.fixture
def summary(findings, tmp_path):
    write_summary(findings, tmp_path / "summary.json")
    return json.loads((tmp_path / "summary.json").read_text())


def validator():
    schema = summary_schema()
    jsonschema.Draft202012Validator.check_schema(schema)
    return jsonschema.Draft202012Validator(schema)


def test_friction_has_the_contracts_names(friction):
    assert {
        "sections",
        "block_weight_kN",
        "hookload_bias_kN",
        "rotational_friction",
        "residual_rms_kN",
    } <= set(friction)
    names = {"kind", "top_m", "bottom_m", "friction_factor", "low", "high", "samples", "determined"}
    for section in [*friction["sections"], friction["rotational_friction"]]:
        assert names <= set(section)


def test_friction_is_in_the_units_of_its_names(friction):
    assert friction["block_weight_kN"] == 300.0
    assert friction["block_weight_kN_low"] == 270.0
    assert friction["residual_rms_kN"] == 1.0
    assert friction["sections"][1]["friction_factor"] == 0.25
    assert friction["readings"][0]["value_kN"] == 900.0
    assert friction["readings"][1]["residual_kNm"] == -0.05


def test_assumed_friction_is_marked_and_its_interval_null(friction):
    cased = friction["sections"][0]
    assert cased["determined"] is False
    assert cased["low"] is None


def test_rotational_friction_may_be_absent(findings, tmp_path):
    calibration = dataclasses.replace(findings.calibration, rotational=None)
    write_friction(dataclasses.replace(findings, calibration=calibration), tmp_path / "friction.json")
    assert json.loads((tmp_path / "friction.json").read_text())["rotational_friction"] is None


def test_summary_keeps_to_its_schema(summary):
    validator().validate(summary)


@pytest.mark.parametrize(
    "name", ["format", "inputs", "versions", "quality", "friction", "episodes", "families"]
)
def test_schema_asks_for_what_the_contract_promises(summary, name):
    del summary[name]
    with pytest.raises(jsonschema.ValidationError, match=f"'{name}' is a required property"):
        validator().validate(summary)


def test_schema_holds_the_enums(summary):
    summary["episodes"][0]["kind"] = "wobble"
    with pytest.raises(jsonschema.ValidationError, match="'wobble' is not one of"):
        validator().validate(summary)


def test_summary_accounts_for_rows_and_inputs(summary):
    assert summary["quality"]["rows"] == 6
    assert summary["quality"]["rows_used"] == 5
    assert summary["quality"]["rows_set_aside"] == {"null hookload": 1}
    assert [entry["file"] for entry in summary["inputs"]] == ["case.toml", "time.csv"]
    assert summary["episodes_dropped"] == {"short": 3}


def test_summary_has_the_rate_law_in_drillers_units(summary):
    # 1e-9 m/s per N**1.5 at 10 kN: 1e-9 * 1e4**1.5 m/s = 1e-3 m/s = 3.6 m/h
    law = summary["rate_law"]
    assert law["rate_m_per_h_per_kN"] * 10**1.5 == pytest.approx(3.6)


def test_unstable_group_has_null_stability(summary):
    assert summary["families"][0]["stability"] is None


def test_same_findings_give_the_same_bytes(findings, tmp_path):
    for name in ("a", "b"):
        write_summary(findings, tmp_path / name)
    assert (tmp_path / "a").read_bytes() == (tmp_path / "b").read_bytes()


def test_empty_run_keeps_to_the_schema(findings, tmp_path):
    bare = dataclasses.replace(findings, episodes=(), families=(), dropped={}, warnings=())
    write_summary(bare, tmp_path / "summary.json")
    validator().validate(json.loads((tmp_path / "summary.json").read_text()))


def test_what_an_episode_did_to_the_pipe_stands_under_it(findings, tmp_path):
    pipe = Component("dp 5 in", "drillpipe", 3e3, 0.127, 0.1086, 310.0, 0.168, yield_strength=931e6)
    nan = float("nan")
    part = PartToll(pipe, True, 1800.04, 2, 80e6, 310e6, 0.333, 0.2, 9e5, nan)
    toll = PipeToll((part,), "surface torque", "standpipe", Turned(400.0, 1e-5, 1, 1.0))
    write_summary(dataclasses.replace(findings, tolls={"B1": toll}), tmp_path / "summary.json")
    summary = json.loads((tmp_path / "summary.json").read_text())
    validator().validate(summary)
    first, second = summary["episodes"]
    assert second["pipe"] is None
    (told,) = first["pipe"]["parts"]
    assert (told["state"], told["stress_MPa"], told["yield_MPa"]) == ("helical", 310.0, 931.0)
    assert (told["tension_margin_kN"], told["torque_margin_kNm"]) == (900.0, None)
    assert first["pipe"]["turned_while_buckled"] == {
        "revolutions": 400.0, "fatigue_rank": 1, "fatigue_share_of_greatest": 1.0,
    }  # fmt: skip
