"""Made-up load profiles through a made-up run, for the page to explore it in."""

from dataclasses import replace

import numpy as np

from forensics.findings import Findings
from forensics.replay.course import Course


def with_course(found: Findings, moments: int = 40, places: int = 120) -> Findings:
    """Give findings a course: the load grows from moment to moment, the lower string is sinusoidal."""
    rows = np.unique(np.linspace(0, max(len(found.log) - 1, 0), moments).astype(np.int64))
    shape = (len(rows), places)
    md = np.broadcast_to(np.linspace(3300.0, 0.0, places, dtype=np.float32), shape)
    tension = np.linspace(-80e3, 700e3, places) - 1e3 * np.arange(len(rows))[:, None]
    threshold = np.full(shape, 90e3, dtype=np.float32)
    state = np.zeros(shape, dtype=np.int8)
    state[:, 3:9] = 1
    return replace(
        found, course=Course(rows, md, tension.astype(np.float32), threshold, 1.4 * threshold, state)
    )
