"""What a case gives and nothing uses is said."""

from dataclasses import replace
from pathlib import Path

import pytest

from forensics.case import Case, FluidSettings, LimitSettings, LogSettings, RecordSettings, RigSettings
from forensics.case.unused import unused_settings

CASE = Case(
    path=Path("case.toml"),
    id="x",
    title="x",
    logs=LogSettings((Path("log.csv"),)),
    survey=Path("survey.csv"),
    hole=Path("hole.csv"),
    string=Path("string.csv"),
    fluid=FluidSettings(density=1200.0),
)


def test_a_plain_case_leaves_nothing_unused():
    assert unused_settings(CASE) == ()


def test_settings_that_take_effect_are_not_named():
    case = replace(
        CASE,
        rig=RigSettings(block_weight=3e5, lines=12, sheave_efficiency=0.98),
        limits=LimitSettings(hookload=2e6, torque=3e4, pipe_class="premium"),
        records=RecordSettings(weights=Path("w.csv"), slides=Path("s.csv"), verdicts=Path("v.csv")),
    )
    assert unused_settings(case) == ()


@pytest.mark.parametrize(
    ("changes", "named"),
    [
        ({"rig": RigSettings(lines=12)}, "sheave_efficiency"),
        ({"rig": RigSettings(sheave_efficiency=0.98)}, "without lines"),
        ({"rig": RigSettings(block_weight=3e5, hookload_includes_block=False)}, "block_weight"),
    ],
)
def test_a_setting_without_effect_is_named(changes, named):
    (said,) = unused_settings(replace(CASE, **changes))
    assert named in said
