"""Logs by depth as a second witness of the time log."""

import re
from pathlib import Path

import numpy as np
import pytest

from forensics.case import Case, ChannelChoice, FluidSettings, LogSettings
from forensics.errors import LogError
from forensics.logs.depth_log import read_depth_logs
from forensics.logs.read import read_time_logs

ROWS = 3000
DEPTH = 2000.0 + 0.05 * np.arange(ROWS)
# Torque and weight vary along the hole, each on its own.
TORQUE = 15.0 + 4.0 * np.sin(DEPTH / 9.0)
WOB = 80.0 + 30.0 * np.sin(DEPTH / 7.0)


@pytest.fixture
def time_log(tmp_path):
    """Write a run that drills from 2000 to 2150 m and trips in before."""
    stamps = np.datetime64("2031-05-14T00:00:00") + 5 * np.arange(ROWS + 400).astype("timedelta64[s]")
    bit = np.concatenate([np.linspace(1000.0, 1999.0, 400), DEPTH])
    rpm = np.where(np.arange(ROWS + 400) % 50 < 40, 100.0, 0.0)
    torque = np.where(rpm > 0, np.concatenate([np.full(400, 40.0), TORQUE]), 0.0)
    wob = np.concatenate([np.full(400, -20.0), WOB])
    lines = ["time,bit depth [m],hookload [kN],torque [kN.m],rpm,wob [kN],mud density [g/cm3]"]
    lines += [
        f"{t}Z,{b:.2f},{1200 + 5 * (i % 7)},{q:.3f},{r:.0f},{w:.2f},1.25"
        for i, (t, b, q, r, w) in enumerate(zip(stamps, bit, torque, rpm, wob, strict=True))
    ]
    path = tmp_path / "time.csv"
    path.write_text("\n".join(lines) + "\n")
    return path


@pytest.fixture
def held(time_log):
    """Read the time log beside a log by depth; give steps by channel, and warnings."""

    def make(text, name="depth.csv", **channels):
        path = time_log.with_name(name)
        path.write_text(text)
        none = Path("none")
        logs = LogSettings(time=(time_log,), depth=(path,), channels=channels)
        log = read_time_logs(
            Case(path=Path("case.toml"), id="x", title="x", logs=logs, survey=none, hole=none, string=none,
                 fluid=FluidSettings(density=1200.0))
        )  # fmt: skip
        steps = {s.channel: s for s in log.history if s.name == "held against a log by depth"}
        return steps, [w for w in log.warnings if name in w]

    return make


def by_depth(torque=1.0, wob=1.0, mud=1.25, tare=0.0, units=("m", "kN.m", "kN", "g/cm3"), scale=1.0):
    md = np.arange(1990.0, 2160.0, 0.5)
    rows = [
        f"{m * scale:.3f},{(15.0 + 4.0 * np.sin(m / 9.0)) * torque:.4f},"
        f"{(80.0 + 30.0 * np.sin(m / 7.0)) * wob + tare:.3f},{mud}"
        for m in md
    ]
    return "DEPT,TQA,WOB,MDIA\n" + ",".join(units) + "\n" + "\n".join(rows) + "\n"


def test_logs_that_agree_are_counted_and_nothing_is_said(held):
    steps, said = held(by_depth())
    assert said == []
    assert set(steps) == {"torque", "wob", "mud_density"}
    for channel, step in steps.items():
        assert step.samples == pytest.approx(149, abs=3), channel
        assert "1 times" in step.detail or "0.99" in step.detail or "1.0" in step.detail


def test_other_units_of_the_same_readings_agree(held):
    units = ("ft", "kft.lbf", "klbf", "ppg")
    assert held(by_depth(1 / 1.35582, 1 / 4.44822, 10.432, units=units, scale=1 / 0.3048))[1] == []


def test_depths_in_tenths_of_an_inch_are_read(held):
    steps, said = held(by_depth(units=("0.1 in", "kN.m", "kN", "g/cm3"), scale=1 / 0.00254))
    assert said == []
    assert steps["torque"].samples > 140


def test_a_label_that_is_wrong_by_the_factor_of_two_units_is_named_from_both_sides(held):
    said = held(by_depth(torque=1 / 1.35582))[1]
    assert len(said) == 1
    assert "shows torque 0.738 times the time log's at the same depths" in said[0]
    assert "likely depth.csv is in kft.lbf, not kN.m" in said[0]
    other = held(by_depth(torque=1.35582))[1][0]
    assert "likely the time log is in kft.lbf, not kN.m" in other
    assert "[logs.channels]" in other


def test_the_unit_of_the_case_settles_it(held):
    choice = ChannelChoice("torque [kN.m]", "kft.lbf")
    assert held(by_depth(torque=1.35582), torque=choice)[1] == []


def test_mud_in_pounds_under_a_label_of_grams_is_named(held):
    said = held(by_depth(mud=10.432))[1]
    assert len(said) == 1
    assert "mud density 8.35 times" in said[0]
    assert "depth.csv is in ppg, not g/cm3" in said[0]


def test_a_weight_zeroed_elsewhere_is_told_from_a_wrong_unit(held):
    said = held(by_depth(tare=45.0))[1]
    assert len(said) == 1
    assert re.search(r"4[45]\.\d kN apart throughout: likely zeroed", said[0])


def test_a_ratio_of_no_units_blames_nothing_in_particular(held):
    assert "another sensor's, another run's" in held(by_depth(torque=1.6))[1][0]


def test_a_ratio_of_units_that_neither_claims_is_said_to_be_one(held):
    choice = ChannelChoice("torque [kN.m]", "kdaN.m")
    said = held(by_depth(torque=13.5582), torque=choice)[1][0]
    assert "the ratio is that of ft.lbf and N.m; one of them may have been converted wrongly" in said


def test_a_log_of_other_depths_is_too_little_to_tell(held):
    steps, said = held(by_depth(scale=0.7))
    assert said == []
    assert "too few to tell" in steps["torque"].detail


def test_steps_of_nulls_and_rows_out_of_order_do_no_harm(held):
    lines = by_depth().splitlines()
    lines[10:40] = [f"{line.split(',')[0]},-999.25,-999.25,-999.25" for line in lines[10:40]]
    text = "\n".join([*lines[:2], *reversed(lines[2:])]) + "\n"
    assert held(text)[1] == []


def test_a_step_filled_log_by_depth_is_told_with_its_share(held):
    head, rows = by_depth().splitlines()[:2], by_depth().splitlines()[2:]
    filled = [f"{row.split(',')[0]},{rows[i // 4 * 4].split(',', 1)[1]}" for i, row in enumerate(rows)]
    _, said = held("\n".join([*head, *filled]) + "\n")
    assert any("75 % of" in words and "one reading every 4 rows" in words for words in said)


def test_a_log_without_a_channel_to_compare_is_said(held):
    said = held("DEPT,GR\nm,gAPI\n" + "".join(f"{2000 + i},{50 + i % 9}\n" for i in range(60)))[1]
    assert "no channel to hold the time log against" in said[0]


def test_las_and_witsml_logs_by_depth_are_read(tmp_path):
    rows = [(2000.0 + 0.1 * i, 15.0 + 0.01 * i) for i in range(50)]
    las = tmp_path / "d.las"
    las.write_text("~V\n VERS. 2.0 :\n WRAP. NO :\n~W\n NULL. -999.25 :\n~C\n DEPT.M : d\n TQA.KNM : t\n~A\n"
                   + "".join(f"{d:.1f} {t:.2f}\n" for d, t in rows))  # fmt: skip
    xml = tmp_path / "d.xml"
    xml.write_text(
        "<logs><log><indexType>measured depth</indexType><indexCurve>DEPT</indexCurve><logData>"
        "<mnemonicList>DEPT,TQA</mnemonicList><unitList>m,kN.m</unitList>"
        + "".join(f"<data>{d:.1f},{t:.2f}</data>" for d, t in rows) + "</logData></log></logs>"
    )  # fmt: skip
    one, other = read_depth_logs((las, xml))
    np.testing.assert_allclose(one.depth, [d for d, _ in rows])
    np.testing.assert_allclose(one.values["torque"], other.values["torque"])
    assert one.values["torque"][0] == pytest.approx(15e3)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("GR,TQA\ngAPI,kN.m\n1,2\n2,3\n3,4\n", "no column of depth among 'GR', 'TQA'"),
        ("DEPT,TQA\n,kN.m\n1,2\n2,3\n3,4\n", "column 'DEPT': no unit is given"),
        ("DEPT,TQA\nm,kN.m\n-999.25,2\n-999.25,3\n-999.25,4\n", "holds no value"),
    ],
)
def test_a_log_without_usable_depths_is_refused(tmp_path, text, words):
    path = tmp_path / "depth.csv"
    path.write_text(text)
    with pytest.raises(LogError, match=words):
        read_depth_logs((path,))


def test_a_log_by_time_is_refused_here(tmp_path):
    path = tmp_path / "t.xml"
    path.write_text(
        "<logs><log><indexType>date time</indexType><indexCurve>T</indexCurve><logData><mnemonicList>T,TQA"
        "</mnemonicList><data>2031-05-14T00:00:00Z,2</data></logData></log></logs>"
    )
    with pytest.raises(LogError, match=r"by time only; a log by time goes to \[logs\] time"):
        read_depth_logs((path,))
