"""What the trade's rules say of one cause."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from forensics.episodes.causes.names import Cause


@dataclass(frozen=True)
class Account:
    """A cause and the trade's rules for it, from memory.

    Parameters
    ----------
    cause : Cause
    rules : mapping of str to tuple of float
        By measurement: how many times as often a value in each of its bins is met with this cause as with
        causes at large. One number a bin, in the measurement's order; what is not named says nothing.
    """

    cause: Cause
    rules: Mapping[str, tuple[float, ...]]
