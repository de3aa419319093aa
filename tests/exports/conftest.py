"""Findings made by hand, with every kind of gap that a run can have."""

from pathlib import Path

import numpy as np
import pytest

from forensics.case import Case, FluidSettings, LogSettings
from forensics.episodes.catalogue import Consequence, Episode, Family, Kind, State
from forensics.estimate import Estimate
from forensics.findings import Findings, Headline
from forensics.friction.result import Calibration, FrictionSection, Reading
from forensics.loads import Fan, LoadHistory, RateLaw, RatioMap
from forensics.logs.table import FileRecord, Reason, SourceColumn, Step, TimeLog
from forensics.rig.view import Activity, RigView

NAN = float("nan")
START = 1_935_792_000.0  # 2031-05-06 00:00 UTC
ROWS = 6


def near(value, spread=0.1):
    return Estimate(value, value - spread * abs(value), value + spread * abs(value), "made by hand")


def make_log():
    hook = np.array([300e3, 800e3, 790e3, NAN, 760e3, 750e3])
    reason = np.array([0, 0, 0, Reason.NULL_HOOKLOAD, 0, 0], dtype=np.int8)
    values = {"bit_depth": np.array([2400.0, 2401, 2402, 2402, 2403, NAN]), "hookload": hook}
    record = FileRecord(
        "time.csv",
        "ab" * 32,
        "csv",
        ROWS,
        START,
        START + 5,
        1.0,
        (
            SourceColumn("time.csv", "HKLD", "kN", "hookload", "known"),
            SourceColumn("time.csv", "GAS", None, None, "none"),
        ),
    )
    return TimeLog(
        START + np.array([0, 1, 2, 3, 4.25, 5]),
        values,
        np.nan_to_num(hook, nan=-999.25e3),
        reason == 0,
        reason,
        1.0,
        "Europe/Oslo",
        (Step("null codes", 1, "hookload", "-999.25"),),
        (record,),
        ("GAS was not used",),
    )


def make_rig(log):
    zeros = np.zeros(ROWS, dtype=bool)
    activity = np.array([Activity.CONNECTION, *[Activity.DRILL_SLIDE] * 4, Activity.UNKNOWN], dtype=np.int8)
    return RigView(
        near(300e3),
        log.values["hookload"],
        zeros,
        zeros,
        zeros,
        zeros,
        np.zeros(ROWS, np.int8),
        np.full(ROWS, 20.0),
        np.full(ROWS, 2403.0),
        activity,
        np.full(ROWS, 50e3),
        np.full(ROWS, NAN),
        {"hookload": 1e3},
        NAN,
        (),
        ("There is no torque channel.",),
    )


def make_loads():
    full = np.full(ROWS, 1500.0)
    state = np.array([0, 1, 2, 0, 2, 0], dtype=np.int8)
    basis = np.array([0, 1, 2, 0, 3, 4], dtype=np.int8)
    bit = np.array([0.0, 20e3, 25e3, NAN, 30e3, 31e3])
    return LoadHistory(
        bit,
        full / 1e3,
        full,
        full * 100,
        state,
        full,
        full,
        full,
        full,
        full,
        basis,
        full * 2,
        full * NAN,
        full,
        full,
        full,
        RatioMap(np.array([START, START + 6]), np.array([0.0, 3000.0]), np.zeros((1, 1))),
        RateLaw(1e-9, 1.5, True, 40, 0.1),
        100,
    )


def make_calibration():
    assumed = Estimate(0.2, NAN, NAN, "assumed", False)
    readings = (
        Reading("pick_up", START, START + 30, 2400.0, 20.0, 900e3, 1e3, 30, True),
        Reading("torque", START + 40, START + 60, 2400.0, 20.0, 7e3, 1e2, 20, True, 0.0, 80.0),
    )
    return Calibration(
        (FrictionSection("cased", 0.0, 1500.0, assumed), FrictionSection("open", 1500.0, 2403.0, near(0.25))),
        near(300e3),
        Estimate(0.0, 0.0, 0.0, "none given"),
        Estimate(1.0, 0.5, 1.0, "readings"),
        near(0.2),
        readings,
        np.array([1e3, -50.0]),
        1e3,
        np.array([[0.2, 0.25, 300e3]]),
        ("Cased friction could not be told.",),
    )


def make_episodes():
    nothing = Estimate(NAN, NAN, NAN, "not applicable", False)
    return (
        Episode(
            "B1",
            Kind.BUCKLING,
            State.HELICAL,
            START + 1,
            START + 4.25,
            1,
            4,
            2,
            "drill_slide",
            1500.0,
            2300.0,
            1800.0,
            near(1.6),
            near(120e3),
            near(40e3),
            near(15e3),
            0.93,
            Consequence.WEIGHT_LOST,
            "slid, deep",
            "buckling",
            'helical 1600 to "1900" m, at the heel',
        ),
        Episode(
            "D1",
            Kind.DRAG,
            State.NONE,
            START,
            START + 1,
            0,
            1,
            0,
            "trip_out",
            NAN,
            NAN,
            NAN,
            nothing,
            nothing,
            nothing,
            nothing,
            NAN,
            Consequence.NONE,
        ),
    )


def make_findings():
    log = make_log()
    case = Case(
        Path("case.toml"),
        "heron-1-run-2",
        "A quiet run",
        LogSettings((Path("time.csv"),)),
        Path("survey.csv"),
        Path("hole.csv"),
        Path("string.csv"),
        FluidSettings(1250.0),
        well="Heron 1",
    )
    line = np.array([1.0])
    return Findings(
        case,
        log,
        None,
        make_rig(log),
        make_calibration(),
        make_loads(),
        Fan(*[line] * 8),
        make_episodes(),
        (Family("slid, deep", "long slides past the shoe", ("B1",), NAN),),
        {},
        Headline("It buckled.", "likely"),
        {"short": 3},
        {"time.csv": "ab" * 32, "case.toml": "cd" * 32},
        ("The survey is coarse.",),
    )


@pytest.fixture
def findings():
    return make_findings()
