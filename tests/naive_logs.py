"""Slow, obvious versions of what the log reader does fast."""

import math
import statistics


def median_of_five(values):
    """Give the running median of five with the ends repeated."""
    padded = [values[0], values[0], *values, values[-1], values[-1]]
    return [statistics.median(padded[i : i + 5]) for i in range(len(values))]


def runs_of(values, shortest):
    """Stretches of one finite value, as (first, one past last)."""
    found = []
    start = 0
    for i in range(1, len(values) + 1):
        if i == len(values) or values[i] != values[start]:
            if i - start >= shortest and math.isfinite(values[start]):
                found.append((start, i))
            start = i
    return found


def merge(time, columns):
    """Rows sorted by time, one a stamp, the first finite value of each column kept."""
    rows = {}
    for i, stamp in sorted(enumerate(time), key=lambda pair: (pair[1], pair[0])):
        row = rows.setdefault(stamp, {name: math.nan for name in columns})
        for name, values in columns.items():
            if math.isnan(row[name]):
                row[name] = values[i]
    return sorted(rows), [rows[stamp] for stamp in sorted(rows)]


def wrap_midnight(seconds):
    """Clock readings with a day added each time they fall by more than half of one."""
    days, out = 0, []
    for i, value in enumerate(seconds):
        if i and value - seconds[i - 1] < -43200:
            days += 1
        out.append(value + 86400 * days)
    return out
