"""Lags between channels: found where there are some, silent where there are none."""

import numpy as np
import pytest

from forensics.logs.lag import find_lags, tell_lags

ROWS = 16_000


def run(interval=2.0, seed=1):
    """Make a rig that turns, pumps, drills and works the string on and off, with noise."""
    rng = np.random.default_rng(seed)
    time = interval * np.arange(ROWS)

    def switched(least, most):
        edges = np.cumsum(rng.integers(least, most, ROWS // least))
        return (np.searchsorted(edges, np.arange(ROWS)) % 2).astype(float)

    turning, pumping, weight = switched(80, 400), switched(150, 600), switched(60, 300)
    rpm, flow = 90.0 * turning, 0.03 * pumping
    speed = 0.2 * (switched(40, 200) - 0.5)
    return time, {
        "rpm": rpm + turning * rng.normal(0, 0.5, ROWS),
        "torque": 1e4 * turning + rng.normal(0, 3e2, ROWS),
        "flow_in": flow + pumping * rng.normal(0, 1e-4, ROWS),
        "standpipe_pressure": 2e7 * pumping + rng.normal(0, 1e5, ROWS),
        "bit_depth": 2000.0 + np.cumsum(speed) * interval,
        "hookload": 1e6 - 6e4 * weight - 5e4 * np.sign(speed) + rng.normal(0, 1e3, ROWS),
        "wob": 6e4 * weight + 5e4 * np.sign(speed) + rng.normal(0, 1e3, ROWS),
        "downhole_wob": 6e4 * weight + 5e4 * np.sign(speed) + rng.normal(0, 5e3, ROWS),
    }


def test_channels_that_go_together_have_no_lag():
    time, values = run()
    assert find_lags(time, values, 2.0) == []


@pytest.mark.parametrize(
    ("channel", "leads", "follows"),
    [
        ("torque", "rpm", "torque"),
        ("standpipe_pressure", "flow_in", "standpipe_pressure"),
        ("wob", "hookload", "wob"),
        ("downhole_wob", "wob", "downhole_wob"),
    ],
)
@pytest.mark.parametrize("rows", [3, 20, -6])
def test_a_lag_is_found_and_signed(channel, leads, follows, rows):
    time, values = run()
    values[channel] = np.roll(values[channel], rows)
    found = {(lag.pair.leads, lag.pair.follows): lag.seconds for lag in find_lags(time, values, 2.0)}
    assert found[leads, follows] == pytest.approx(2.0 * rows)


def test_a_hookload_far_behind_the_bit_is_found():
    time, values = run()
    values["hookload"] = np.roll(values["hookload"], 20)
    found = {lag.pair.leads: lag.seconds for lag in find_lags(time, values, 2.0)}
    assert found["hoisting"] == pytest.approx(40.0, abs=4.0)
    assert found["hookload"] == pytest.approx(-40.0)


def test_noise_gaps_and_short_logs_tell_no_lag():
    rng = np.random.default_rng(2)
    time, values = run()
    noise = {name: rng.normal(1e6, 1e4, ROWS) for name in values}
    assert find_lags(time, noise, 2.0) == []
    assert find_lags(time[:900], {n: v[:900] for n, v in values.items()}, 2.0) == []
    broken = time + 1e4 * np.floor(np.arange(ROWS) / 500)
    assert find_lags(broken, values, 2.0) == []
    missing = {n: np.full(ROWS, np.nan) if n == "torque" else v for n, v in values.items()}
    assert find_lags(time, missing, 2.0) == []


def test_a_lag_is_put_in_words_and_counted():
    time, values = run()
    values["torque"] = np.roll(values["torque"], 5)
    steps, said = tell_lags(find_lags(time, values, 2.0))
    assert said[0].startswith("torque comes 10 s after rpm")
    assert "nothing was shifted" in said[0]
    assert (steps[0].name, steps[0].channel) == ("lag between channels", "torque")
    assert steps[0].samples > 4000
