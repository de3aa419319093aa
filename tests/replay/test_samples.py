"""What the kernels are told of each row."""

from __future__ import annotations

import numpy as np
import pytest

from forensics.logs.table import TimeLog
from forensics.replay.samples import _shows_pumps


def log_with(**channels) -> TimeLog:
    time = np.arange(5.0)
    values = {"bit_depth": time, "hookload": time, **channels}
    return TimeLog(time, values, time, np.ones(5, dtype=bool), np.zeros(5, dtype=np.int8), 1.0)


@pytest.mark.parametrize(
    ("channels", "shown"),
    [
        ({"flow_in": np.ones(5)}, True),
        ({"standpipe_pressure": np.ones(5)}, True),
        ({"flow_in": np.full(5, np.nan)}, False),
        ({}, False),
    ],
)
def test_pressure_shows_the_pumps_where_flow_is_missing(channels, shown):
    assert _shows_pumps(log_with(**channels)) is shown
