"""The causes an episode can be put down to."""

from __future__ import annotations

import enum


class Cause(enum.StrEnum):
    """A cause, as outputs name it."""

    BUCKLING = "buckling"
    FRICTION = "friction higher than assumed"
    CLEANING = "poor hole cleaning"
    TORTUOSITY = "tortuosity or ledges"
    HANG_UP = "ledge or shoe hang-up"
    STICKING = "differential sticking"
    PACK_OFF = "pack-off"
    UNDERGAUGE = "undergauge hole"
    STALL = "motor stall"
    SENSOR = "sensor or tare fault"
    NO_DATA = "not enough data"
