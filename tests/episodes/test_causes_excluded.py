"""Causes the string and the hole leave no room for have no chance, and their share goes to the others."""

from types import SimpleNamespace

import pytest

from forensics.episodes.catalogue import CauseView
from forensics.episodes.causes.excluded import excluded
from forensics.episodes.causes.names import Cause
from forensics.episodes.causes.weigh import without
from forensics.episodes.describe import describe

SHOE = 2000.0


@pytest.mark.parametrize(("kind", "told"), [("collar", True), ("motor", False)])
def test_a_string_without_a_motor_has_no_stall(make_run, kind, told):
    material = make_run().buckle(slice(1300, 1400)).material()
    (episode,) = describe(material).episodes[:1]
    material.well.string.components = (SimpleNamespace(kind=kind),)
    assert (Cause.STALL in excluded(material, episode)) is told


def test_a_string_in_casing_neither_sticks_by_pressure_nor_meets_a_tight_hole(make_run):
    material = make_run().buckle(slice(1300, 1400)).material()
    (episode,) = describe(material).episodes[:1]
    assert Cause.STICKING not in excluded(material, episode)
    material.bit[:] = SHOE - 100.0
    assert {Cause.STICKING, Cause.UNDERGAUGE} <= excluded(material, episode).keys()


def test_the_share_of_a_cause_ruled_out_goes_to_the_others():
    views = tuple(CauseView(cause.value, 1.0 / len(Cause), ()) for cause in Cause)
    told = without(views, {Cause.STALL: "the string has no motor"})
    by_name = {view.cause: view for view in told}
    assert by_name[Cause.STALL].probability == 0.0
    assert by_name[Cause.STALL].evidence[0].text == "the string has no motor"
    assert sum(view.probability for view in told) == pytest.approx(1.0)
    assert told[-1].cause == Cause.STALL
