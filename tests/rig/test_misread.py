"""Units that the run itself gives away."""

from dataclasses import replace

import numpy as np
import pytest

from forensics import units
from forensics.logs.table import FileRecord, SourceColumn, TimeLog
from forensics.rig.misread import misread_rate, misread_toolface

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
