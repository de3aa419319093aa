"""Episodes planted by hand in a quiet run must come back by the contract's rules."""

from __future__ import annotations

import numpy as np
import pytest

from forensics.case import CriteriaSettings
from forensics.episodes.catalogue import Consequence, Kind, State
from forensics.episodes.find import find_episodes
from forensics.rig.view import Activity


def only(material, kind):
    episodes, dropped = find_episodes(material)
    return [e for e in episodes if e.kind is kind], dropped


def test_a_quiet_run_has_no_episodes(make_run):
    assert find_episodes(make_run().material()) == ((), {})


def test_one_sinusoidal_and_helical_stretch_is_one_episode(make_run):
    run = make_run().buckle(slice(1000, 1300), helical=slice(1100, 1200))
    (episode,), _ = only(run.material(), Kind.BUCKLING)
    assert episode.id == "E001"
    assert episode.state is State.HELICAL
    assert (episode.first, episode.last) == (1000, 1299)
    assert episode.duration == pytest.approx(300.0)
    assert (episode.top_md, episode.bottom_md) == (2300.0, 2600.0)
    assert "helical from 2350 to 2550 m, 100 s" in episode.note
    assert 1100 <= episode.peak < 1200
    assert episode.activity == "drill_slide"


def test_gaps_are_bridged_before_short_spans_are_dropped(make_run):
    run = make_run()
    run.buckle(slice(100, 110)).buckle(slice(160, 172))  # 10 s and 12 s, 50 s apart: one of 72 s
    run.buckle(slice(400, 410))  # alone and short
    run.buckle(slice(700, 730)).buckle(slice(790, 820))  # 60 s apart: two
    episodes, dropped = only(run.material(), Kind.BUCKLING)
    assert [(e.first, e.last) for e in episodes] == [(100, 171), (700, 729), (790, 819)]
    assert dropped == {"buckling: shorter than 20 s": 1}


def test_least_duration_is_three_samples_of_a_slow_log(make_run):
    run = make_run(n=400, interval=15.0).buckle(slice(100, 102)).buckle(slice(200, 204))
    episodes, dropped = only(run.material(), Kind.BUCKLING)
    assert [(e.first, e.last) for e in episodes] == [(200, 203)]
    assert dropped == {"buckling: shorter than 45 s": 1}


def test_criteria_of_the_case_are_used(make_run):
    run = make_run().buckle(slice(100, 110)).buckle(slice(160, 172))
    run.case = type(run.case)(
        **(vars(run.case) | {"criteria": CriteriaSettings(bridge_gap=30, minimum_duration=5)})
    )
    episodes, _ = only(run.material(), Kind.BUCKLING)
    assert len(episodes) == 2


def test_states_in_slips_stay_in_the_episode(make_run):
    run = make_run().buckle(slice(100, 500))
    run.rig["slips"][200:400] = True
    run.rig["activity"][200:400] = Activity.CONNECTION
    run.used[250:300] = False
    episodes, _ = only(run.material(), Kind.BUCKLING)
    assert [(e.first, e.last) for e in episodes] == [(100, 499)]
    assert episodes[0].activity == "drill_slide"


def test_a_state_does_not_outlast_a_log_gone_silent(make_run):
    run = make_run().buckle(slice(100, 3600))
    run.used[400:] = False
    (episode,), _ = only(run.material(), Kind.BUCKLING)
    assert (episode.first, episode.last) == (100, 399 + 300)


def test_long_sinusoidal_running_without_loss_has_no_consequence(make_run):
    (episode,), _ = only(make_run().buckle(slice(100, 3000)).with_draws().material(), Kind.BUCKLING)
    assert episode.consequence is Consequence.NONE
    assert episode.lost_to_buckling.value == 0.0


def test_lost_weight_is_surface_less_bit_and_beyond_straight_drag(make_run):
    run = make_run().buckle(slice(1000, 1300), helical=slice(1100, 1200))
    run.rig["wob_surface"][1000:1300] = 150.0e3
    run.loads["bit_load"][1000:1300] = 40.0e3
    run.loads["straight_drag"][1000:1300] = 50.0e3
    (episode,), _ = only(run.with_draws().material(), Kind.BUCKLING)
    assert episode.lost_weight.value == pytest.approx(110.0e3)
    assert episode.lost_to_buckling.value == pytest.approx(60.0e3)
    assert episode.lost_weight.low < 110.0e3 < episode.lost_weight.high
    assert episode.consequence is Consequence.WEIGHT_LOST


def test_probability_is_the_share_of_draws_that_pass(make_run):
    run = make_run().buckle(slice(1000, 1300), ratio=1.05).with_draws((0.8, 0.9, 1.0, 1.1, 1.2))
    (episode,), _ = only(run.material(), Kind.BUCKLING)
    assert episode.probability == pytest.approx(0.6)
    assert episode.peak_load_ratio.low < 1.05 < episode.peak_load_ratio.high
    assert episode.peak_compression.low < episode.peak_compression.value < episode.peak_compression.high


def test_turning_while_helical_is_said(make_run):
    run = make_run().buckle(slice(1000, 1300), helical=slice(1100, 1200))
    run.rig["turning"][1100:1200] = True
    run.values["rpm"][1100:1200] = 60.0
    (episode,), _ = only(run.material(), Kind.BUCKLING)
    assert episode.consequence is Consequence.ROTATED_BUCKLED
    assert "100 revolutions" in episode.note


def stack(run, rows, drop=120.0e3, to_bit=0.0):
    """Lower the block over rows; the hookload falls by `drop`, of which `to_bit` arrives [N]."""
    ramp = np.linspace(0.0, 1.0, rows.stop - rows.start)
    run.rig["block"][rows] -= 1.5 * ramp
    run.rig["block"][rows.stop :] -= 1.5
    run.rig["hookload"][rows] -= drop * ramp
    run.rig["hookload"][rows.stop :] -= drop
    run.loads["bit_load"][rows] += to_bit * ramp
    run.loads["bit_load"][rows.stop :] += to_bit
    return run


def test_lockup_on_bottom(make_run):
    run = stack(make_run(), slice(1000, 1120), to_bit=6.0e3).buckle(
        slice(900, 1300), helical=slice(950, 1200)
    )
    episodes, _ = find_episodes(run.material())
    kinds = {e.kind: e for e in episodes}
    lockup = kinds[Kind.LOCKUP]
    assert 1000 <= lockup.first <= 1030
    assert 1119 <= lockup.last <= 1150
    assert lockup.consequence is Consequence.LOCKED_UP
    assert lockup.state is State.HELICAL
    assert kinds[Kind.BUCKLING].consequence is Consequence.LOCKED_UP


def test_weight_that_arrives_is_no_lockup(make_run):
    assert only(stack(make_run(), slice(1000, 1120), to_bit=60.0e3).material(), Kind.LOCKUP)[0] == []


def test_turning_is_no_lockup(make_run):
    run = stack(make_run(), slice(1000, 1120))
    run.rig["turning"][:] = True
    assert only(run.material(), Kind.LOCKUP)[0] == []


def test_a_drop_without_block_motion_is_no_lockup(make_run):
    run = stack(make_run(), slice(1000, 1120))
    run.rig["block"][:] = 20.0
    assert only(run.material(), Kind.LOCKUP)[0] == []


def test_the_way_down_to_the_slack_off_weight_is_no_lockup(make_run):
    """Until ordinary drag is paid nothing can have arrived at the bit."""
    run = stack(make_run(), slice(1000, 1120))
    run.rig["wob_slack_off"][:] = -20.0e3
    assert only(run.material(), Kind.LOCKUP)[0] == []


def test_lockup_off_bottom_needs_more_travel_than_stretch(make_run):
    run = stack(make_run(), slice(1000, 1120))
    run.rig["on_bottom"][:] = False
    run.rig["activity"][:] = Activity.TRIP_IN
    run.loads["reach"][:] = 3000.0
    run.loads["stretch"][:] = 2.0
    assert only(run.material(), Kind.LOCKUP)[0] == []
    run.loads["stretch"][:] = 0.5
    (episode,), _ = only(run.material(), Kind.LOCKUP)
    assert (episode.top_md, episode.bottom_md) == (3000.0, 4000.0)


@pytest.mark.parametrize("direction", ["in", "out"])
def test_drag_beyond_a_tenth_of_the_rotating_weight(make_run, direction):
    run = make_run().trip(direction, slice(500, 900), extra=60.0e3).with_draws()
    (episode,), _ = only(run.material(), Kind.DRAG)
    assert (episode.first, episode.last) == (500, 899)
    assert episode.activity == f"trip_{direction}"
    assert episode.peak_residual.value == pytest.approx(60.0e3 if direction == "out" else -60.0e3)
    assert "kN against the model" in episode.note
    assert episode.consequence is Consequence.NONE
    assert 0.5 < episode.probability <= 0.99


def test_drag_within_a_tenth_is_ordinary(make_run):
    assert only(make_run().trip("out", slice(500, 900), extra=35.0e3).material(), Kind.DRAG)[0] == []


def test_less_drag_than_modelled_is_no_drag_episode(make_run):
    assert only(make_run().trip("out", slice(500, 900), extra=-80.0e3).material(), Kind.DRAG)[0] == []


def test_two_spikes_of_drag_do_not_make_an_episode(make_run):
    run = make_run().trip("out", slice(500, 503))
    run.loads["drag_residual"][540:543] = 60.0e3
    episodes, dropped = only(run.material(), Kind.DRAG)
    assert episodes == []
    assert dropped == {"drag: shorter than 20 s": 1}


def test_noise_lifts_the_threshold(make_run):
    run = make_run().trip("out", slice(500, 900), extra=60.0e3)
    run.noise["hookload"] = 12.0e3
    assert only(run.material(), Kind.DRAG)[0] == []


def test_torque_beyond_the_model(make_run):
    run = make_run()
    run.rig["turning"][:] = True
    run.values["torque"][:] = 10.0e3
    run.loads["torque_residual"][:] = 0.0
    run.values["torque"][500:700] = 13.0e3
    run.loads["torque_residual"][500:700] = 3.0e3
    (episode,), _ = only(run.material(), Kind.TORQUE)
    assert (episode.first, episode.last) == (500, 699)
    assert episode.peak_residual.value == pytest.approx(3.0e3)
    assert episode.probability > 0.9


def test_rows_set_aside_raise_no_drag(make_run):
    run = make_run().trip("out", slice(500, 900))
    run.used[500:900] = False
    assert only(run.material(), Kind.DRAG)[0] == []


def test_ids_run_in_time_order(make_run):
    run = make_run().trip("out", slice(2000, 2200)).buckle(slice(3000, 3200)).buckle(slice(500, 700))
    episodes, _ = find_episodes(run.material())
    assert [e.id for e in episodes] == ["E001", "E002", "E003"]
    assert [e.kind for e in episodes] == [Kind.BUCKLING, Kind.DRAG, Kind.BUCKLING]


def going_down(make_run, rate):
    """Run in at 1 cm/s; over 60 s the hookload falls by `rate` a metre [N/m]."""
    run = make_run()
    run.rig["block"][:] = 40.0 - 0.01 * np.arange(run.n)
    run.rig["on_bottom"][:] = False
    run.rig["activity"][:] = Activity.TRIP_IN
    fall = rate * 0.01 * np.clip(np.arange(run.n) - 1000.0, 0.0, 60.0)
    run.rig["hookload"][:] -= fall
    return run


def test_a_string_stopped_off_bottom_falls_like_a_spring(make_run):
    (episode,), _ = only(going_down(make_run, 100.0e3).material(), Kind.LOCKUP)
    assert 1010 <= episode.first <= 1030
    assert 1058 <= episode.last <= 1092


def test_friction_that_grows_off_bottom_is_no_lockup(make_run):
    assert only(going_down(make_run, 20.0e3).material(), Kind.LOCKUP)[0] == []
