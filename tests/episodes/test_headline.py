"""The finding in words."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np
import pytest

from forensics.episodes.catalogue import Kind
from forensics.episodes.confidence import confidence
from forensics.episodes.describe import describe
from forensics.episodes.wording import period
from forensics.loads import BitWitness
from forensics.rig.view import Activity


def stacked(make_run):
    run = make_run().buckle(slice(1000, 1300), ratio=2.0, helical=slice(1020, 1280))
    run.rig["wob_surface"][1000:1300] = 150.0e3
    run.loads["bit_load"][1000:1300] = 40.0e3
    run.loads["straight_drag"][1000:1300] = 50.0e3
    run.rig["turning"][1300:1400] = True
    return run.buckle(slice(2000, 2500)).with_draws()


def test_quiet_run(make_run):
    found = describe(make_run().material())
    assert found.headline.sentence.startswith("Nothing passed a threshold that matters")
    assert found.headline.confidence.startswith("high")
    assert found.episodes == ()
    assert found.families == ()


def test_buckling_is_told_with_when_where_how_much_and_why(make_run):
    found = describe(stacked(make_run).material())
    text = found.headline.sentence
    assert text.startswith("While sliding with the bit at 4000 m, on 2023-11-14 from 22:30:00 to 22:35:00")
    assert "buckled into a helix from 2350 to 2550 m" in text
    assert "110 kN" in text
    assert "60.0 kN" in text
    assert "beyond ordinary sliding drag" in text
    assert re.search(r"(cause: |The causes )buckling \(\d+ %\)", text)
    assert found.headline.confidence.startswith("high")
    assert any("1 episode of routine sinusoidal running" in line for line in found.headline.details)
    assert "E002" not in text


def test_weight_lost_to_plain_friction_is_told(make_run):
    """No buckling, but most of what was set down stayed on the wall."""
    run = make_run()
    run.rig["wob_surface"][:] = 200.0e3
    run.loads["bit_load"][:] = 50.0e3
    text = describe(run.material()).headline.sentence
    assert text.startswith("Nothing passed")
    assert "up to 150 kN" in text
    assert "open-hole factor at 0.30 (0.28 to 0.32; assumed before calibration: 0.28)" in text


def test_a_near_miss_lowers_the_confidence(make_run):
    run = make_run()
    run.loads["peak_ratio"][100:200] = 0.95
    told = describe(run.material()).headline.confidence
    assert told.startswith("moderate")
    assert "0.95" in told


def test_field_units(make_run):
    found = describe(replace(stacked(make_run).material(), system="field"))
    text = found.headline.sentence
    assert "klbf" in text
    assert "ft" in text
    assert "kN" not in text
    metric = re.compile(r"[\d ](m|kN|kN\.m)\b")
    told = [e.note for e in found.episodes] + [f.description for f in found.families]
    told += [item.text for e in found.episodes for view in e.causes for item in view.evidence]
    assert any(" ft" in words for words in told)
    assert not any(metric.search(words) for words in (text, *told))


def test_drag_without_buckling(make_run):
    run = make_run().trip("out", slice(500, 900), extra=60.0e3)
    text = describe(run.material()).headline.sentence
    assert "1 drag episode" in text
    assert "pulling out" in text
    assert "60.0 kN" in text
    assert "more than the model says" in text


def test_assumed_friction_lowers_the_confidence(make_run):
    run = stacked(make_run)
    sections = tuple(replace(s, factor=replace(s.factor, determined=False)) for s in run.calibration.sections)
    run.calibration = replace(run.calibration, sections=sections)
    told = describe(run.material()).headline.confidence
    assert told.startswith("moderate")
    assert "assumed" in told


@pytest.mark.parametrize("odd", [0.06, 0.62])
def test_a_factor_no_mud_gives_lowers_the_confidence(make_run, odd):
    run = stacked(make_run)
    sections = tuple(replace(s, factor=replace(s.factor, value=odd)) for s in run.calibration.sections)
    run.calibration = replace(run.calibration, sections=sections)
    told = describe(run.material()).headline.confidence
    assert told.startswith("low")
    assert f"{odd:.2f}" in told


def test_a_log_that_contradicts_its_case_is_never_sure(make_run):
    material = replace(stacked(make_run).material(), doubts=("the string does not fit",))
    told = describe(material).headline.confidence
    assert told.startswith("low")
    assert "contradicts" in told


@pytest.mark.parametrize(("apart", "word", "grade"), [(0.0, "agrees", "high"), (60e3, "another", "moderate")])
def test_the_bits_own_witness_supports_or_weakens(make_run, apart, word, grade):
    material = stacked(make_run).material()
    n = len(material.log)
    own, sigma = np.full(n, 40e3), np.full(n, 4e3)
    none = np.zeros(n)
    witness = BitWitness(own + apart, sigma, none.astype(np.int8), own, sigma, none, none)
    told = describe(replace(material, loads=replace(material.loads, witness=witness))).headline.confidence
    assert told.startswith(grade)
    assert word in told


def test_without_draws_the_spread_is_said_to_be_unknown(make_run):
    run = stacked(make_run)
    run.draws = None
    assert "not reckoned" in describe(run.material()).headline.confidence


def test_missing_reference_and_trapped_torque_are_said(make_run):
    run = stacked(make_run)
    run.rig["wob_surface"][:] = np.nan
    run.values["torque"][:] = 9.0e3
    run.rig["activity"][1300:1400] = Activity.ROTATE_OFF_BOTTOM
    unknown = " ".join(describe(run.material()).headline.can_not_tell)
    assert "no reference weight" in unknown
    assert "did not turn" in unknown


def test_periods_are_on_the_readers_clock():
    assert period(1.7e9, 1.7e9 + 60, "+02:00") == "on 2023-11-15 from 00:13:20 to 00:14:20"
    assert period(1.7e9, 1.7e9 + 7200, "UTC") == "from 2023-11-14 22:13:20 to 2023-11-15 00:13:20"


@pytest.mark.parametrize("n", [1, 2, 5])
def test_tiny_logs_are_survived(make_run, n):
    assert describe(make_run(n=n).buckle(slice(0, n)).material()).dropped


def test_nothing_read_off_the_log_is_low_confidence(make_run):
    material = stacked(make_run).material()
    bare = replace(
        material.calibration,
        readings=(),
        block_weight=replace(material.calibration.block_weight, determined=False),
    )
    told = describe(replace(material, calibration=bare)).headline.confidence
    assert told.startswith("low: the log shows neither")


def test_a_lockup_is_not_sure_where_rotation_was_not_logged(make_run):
    material = stacked(make_run).material()
    found = replace(describe(material).episodes[0], probability=0.99)
    kept = {name: values for name, values in material.log.values.items() if name not in ("rpm", "torque")}
    blind = replace(material, log=replace(material.log, values=kept))
    assert confidence(blind, [replace(found, kind=Kind.LOCKUP)]).startswith("low")
    assert confidence(blind, [found]).startswith("moderate")
