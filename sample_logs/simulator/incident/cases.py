"""Which cause goes with which well and work, and how its trouble is set up."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .drags import Cuttings, HigherFriction, Tortuous
from .holds import PackOff, Sticking
from .motor import Stall
from .physics import Physics
from .sensors import HookloadFault
from .stops import Ledge, Undergauge
from .trouble import Trouble

NOTHING = "nothing wrong"
POOR = "not enough data"
BUCKLING = "buckling"

ANY = ("drill", "pull", "run", "wipe")


@dataclass(frozen=True)
class Kind:
    """One cause: the work and the wells it happens in."""

    cause: str
    make: type[Trouble] | None
    works: tuple[str, ...]
    paths: tuple[str, ...] = ("vertical", "s_shape", "tangent", "lateral")


KINDS: dict[str, Kind] = {
    row.cause: row
    for row in (
        Kind(BUCKLING, None, ("drill", "drill", "line"), ("lateral", "lateral", "vertical")),
        Kind(HigherFriction.cause, HigherFriction, (*ANY, "line"), ("s_shape", "tangent", "lateral")),
        Kind(Cuttings.cause, Cuttings, ("drill", "pull", "pull", "wipe"),
             ("s_shape", "tangent", "tangent", "lateral")),
        Kind(Tortuous.cause, Tortuous, ("pull", "run", "wipe", "wipe"), ("s_shape", "tangent", "lateral")),
        Kind(Ledge.cause, Ledge, ("run", "run", "wipe", "line")),
        Kind(Undergauge.cause, Undergauge, ("run",)),
        Kind(Sticking.cause, Sticking, ANY),
        Kind(PackOff.cause, PackOff, ("drill", "pull", "wipe"), ("s_shape", "tangent", "lateral")),
        Kind(Stall.cause, Stall, ("drill",)),
        Kind(HookloadFault.cause, HookloadFault, (*ANY, "line")),
        Kind(NOTHING, None, (*ANY, "line")),
        Kind(POOR, None, ANY),
    )
}  # fmt: skip
#: What may come along with a main cause, and be named beside it.
COMPANIONS = {
    BUCKLING: (HigherFriction.cause, HookloadFault.cause),
    HigherFriction.cause: (HookloadFault.cause,),
    Cuttings.cause: (PackOff.cause, HookloadFault.cause),
    Tortuous.cause: (HigherFriction.cause,),
    PackOff.cause: (Cuttings.cause,),
    Sticking.cause: (Tortuous.cause,),
    Stall.cause: (HigherFriction.cause,),
}


def make_trouble(cause: str, size: float, rng: np.random.Generator, physics: Physics, span: dict) -> Trouble:
    """Make a trouble of a cause, somewhere in the depths the work will pass.

    `span` has the shallowest and deepest bit depth of the main part, the shoe, and whether it is a liner.
    """
    low, high, shoe = span["low"], span["high"], span["shoe"]
    maker = KINDS[cause].make
    if maker is Tortuous:
        depth = rng.uniform(0.8 * low + 0.2 * high, 0.45 * low + 0.55 * high)
        return Tortuous(size, rng, physics, depth=max(depth, shoe + 10.0))
    if maker is Ledge:
        offset = float(rng.choice([0.0, 0.0, rng.uniform(8.0, 32.0)]))
        at_shoe = low < shoe < high
        depth = shoe if at_shoe else rng.uniform(0.75 * low + 0.25 * high, 0.35 * low + 0.65 * high)
        return Ledge(size, rng, physics, depth=depth, offset=offset)
    if maker is Undergauge:
        depth = rng.uniform(0.75 * low + 0.25 * high, 0.4 * low + 0.6 * high)
        return Undergauge(size, rng, physics, depth=depth)
    return maker(size, rng, physics)
