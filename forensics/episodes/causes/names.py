"""The causes an episode can be put down to, and how likely each is before any evidence."""

from __future__ import annotations

import enum

from forensics.episodes.catalogue import Kind


class Cause(enum.StrEnum):
    """A cause, as outputs name it."""

    BUCKLING = "buckling"
    FRICTION = "friction higher than assumed"
    CLEANING = "poor hole cleaning"
    TORTUOSITY = "tortuosity or ledges"
    HANG_UP = "ledge or shoe hang-up"
    STICKING = "differential sticking"
    PACK_OFF = "pack-off"
    SENSOR = "sensor or tare fault"
    NO_DATA = "not enough data"


C = Cause

_STUCK = (C.STICKING, C.PACK_OFF)

#: Log odds before evidence, by kind of episode (trade judgement, from memory).
PRIOR: dict[Kind, dict[Cause, float]] = {
    Kind.BUCKLING: {
        C.BUCKLING: 1.0, C.FRICTION: 0.3, C.CLEANING: -1.0, C.TORTUOSITY: -1.0, C.HANG_UP: -1.0,
        C.SENSOR: -1.5, C.NO_DATA: -0.5, **dict.fromkeys(_STUCK, -3.0),
    },
    Kind.LOCKUP: {
        C.BUCKLING: 0.5, C.FRICTION: 0.5, C.CLEANING: -0.5, C.TORTUOSITY: -0.7, C.HANG_UP: 0.0,
        C.SENSOR: -2.0, C.NO_DATA: 0.0, **dict.fromkeys(_STUCK, -1.5),
    },
    Kind.DRAG: {
        C.BUCKLING: -2.0, C.FRICTION: 0.0, C.CLEANING: 0.3, C.TORTUOSITY: 0.0, C.HANG_UP: -0.3,
        C.SENSOR: -0.5, C.NO_DATA: 0.5, **dict.fromkeys(_STUCK, -1.0),
    },
    Kind.TORQUE: {
        C.BUCKLING: -2.5, C.FRICTION: 0.0, C.CLEANING: 0.2, C.TORTUOSITY: 0.0, C.HANG_UP: -2.0,
        C.SENSOR: -0.5, C.NO_DATA: 0.5, **dict.fromkeys(_STUCK, -1.5),
    },
}  # fmt: skip
