"""Units that the run itself gives away."""

from dataclasses import replace

import numpy as np
import pytest

from forensics import units
from forensics.logs.table import FileRecord, SourceColumn, TimeLog
from forensics.rig.misread import misread_hookload, misread_rate, misread_toolface, misread_wob

N = 6000
RNG = np.random.default_rng(5)


def drilled(**channels):
    """Give a run that makes hole at 10 to 30 m/h for most of its time."""
    rate = (20.0 + 10.0 * np.sin(np.arange(N) / 700.0)) / 3600.0
    hole = 2000.0 + np.cumsum(rate)
    values = {"bit_depth": hole, "hole_depth": hole, "hookload": np.full(N, 9e5)} | channels
    log = TimeLog(
        time=np.arange(float(N)), values=values, hookload_logged=values["hookload"],
        used=np.ones(N, dtype=bool), reason=np.zeros(N, dtype=np.int8), interval=1.0,
    )  # fmt: skip
    return log, rate * (1.0 + 0.1 * RNG.standard_normal(N))


def with_rate(said, true):
    """Log the rate in the unit `true` under a header that says `said`."""
    log, rate = drilled()
    unit = units.factor(true, "speed")
    number = unit.scale / rate if unit.inverse else rate / unit.scale
    column = SourceColumn("a.csv", "ROP", said, "rop", "")
    file = FileRecord("a.csv", "", "CSV", N, 0.0, N - 1.0, 1.0, (column,))
    values = {**log.values, "rop": units.to_si(number, said, "speed")}
    return replace(log, values=values, files=(file,))


@pytest.mark.parametrize(
    ("said", "true"),
    [("m/h", "ft/h"), ("m/h", "s/m"), ("m/h", "min/m"), ("ft/h", "min/ft"), ("m/h", "m/s"), ("s/m", "m/h")],
)
def test_a_rate_in_another_unit_is_told(said, true):
    assert f"likely in {true}." in misread_rate(with_rate(said, true))


@pytest.mark.parametrize("unit", ["m/h", "ft/h", "s/m", "min/ft"])
def test_a_rate_in_its_own_unit_is_left_alone(unit):
    assert misread_rate(with_rate(unit, unit)) == ""


def test_a_rate_no_unit_explains_is_left_alone():
    log, rate = drilled()
    assert misread_rate(replace(log, values={**log.values, "rop": 6.3 * rate})) == ""
    assert misread_rate(replace(log, values={**log.values, "rop": np.full(N, 1e-9)})) == ""
    assert misread_rate(log) == ""


def test_a_toolface_in_radians_is_told():
    face = RNG.uniform(0.0, 2.0 * np.pi, N)
    assert "radians" in misread_toolface(drilled(toolface=np.radians(face))[0])
    assert misread_toolface(drilled(toolface=face)[0]) == ""
    assert misread_toolface(drilled(toolface=np.full(N, 0.05))[0]) == ""
    assert misread_toolface(drilled()[0]) == ""


def forces(well, hook_in="kN", wob_in="kN", said="kN"):
    """Log a run whose hookload and WOB are in one unit under a header that says another."""
    wob = 60e3 + 40e3 * np.sin(np.arange(N) / 10.0) + 300.0 * RNG.standard_normal(N)
    hook = float(well.rotating_weight([2400.0])[0]) + 250e3 - wob
    scale = {name: units.factor(said, "force").scale / units.factor(u, "force").scale
             for name, u in (("hookload", hook_in), ("wob", wob_in))}  # fmt: skip
    log, _ = drilled(hookload=hook * scale["hookload"], wob=wob * scale["wob"], bit_depth=np.full(N, 2400.0))
    columns = tuple(SourceColumn("a.csv", name, said, name, "") for name in scale)
    return replace(log, files=(FileRecord("a.csv", "", "CSV", N, 0.0, N - 1.0, 1.0, columns),))


@pytest.mark.parametrize(
    ("true", "said"),
    [("klbf", "kN"), ("kN", "klbf"), ("tonnef", "kN"), ("kN", "tonnef"), ("kdaN", "kN"), ("tonnef", "kdaN")],
)
def test_forces_in_another_unit_are_told(well, true, said):
    hook, wob = forces(well, hook_in=true, said=said), forces(well, hook_in=said, wob_in=true, said=said)
    if true == "tonnef" and said == "kdaN":
        assert misread_hookload(hook, well) == misread_wob(wob) == ""  # 2 % apart: no matter
        return
    assert f" {true} (" in misread_hookload(hook, well).split("likely in")[1]
    likely = misread_wob(wob).split("likely in ")[1].split(",")[0].split(" or ")
    assert set(likely) == ({"tonnef", "kdaN"} if true in {"tonnef", "kdaN"} else {true})


def test_forces_in_their_own_unit_are_left_alone(well):
    log = forces(well)
    assert misread_hookload(log, well) == ""
    assert misread_wob(log) == ""
    loose = replace(log, values={**log.values, "wob": 5e4 * RNG.random(N)})
    assert misread_wob(loose) == ""
    assert misread_wob(replace(log, values={"hookload": log.values["hookload"]})) == ""
