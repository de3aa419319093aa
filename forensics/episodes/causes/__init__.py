"""Causes of an episode, weighed by named evidence for and against each."""

from __future__ import annotations

from forensics.episodes.causes.usual import Usual
from forensics.episodes.causes.weigh import UNTOLD, weigh

__all__ = ["UNTOLD", "Usual", "weigh"]
