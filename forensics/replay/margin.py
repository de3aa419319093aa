"""How much weight could have reached the bit: the limit that lockup sets, and how far off it was."""

from __future__ import annotations

import math

import numpy as np
from numba import njit
from numpy.typing import NDArray

from forensics.mechanics.kernels_judge import Setting, Stand, stand_at
from forensics.mechanics.kernels_march import Array
from forensics.mechanics.kernels_memory import Memory, march_down
from forensics.mechanics.kernels_replay import SLIDE, Samples
from forensics.mechanics.lockup import SlackOff
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.quick import quick_limit
from forensics.replay.room import fresh

Floats = NDArray[np.float64]

MORE = 50e3  # N; a load that a driller would slack off next (common practice, no source)
THINNED_SECONDS = 30.0  # the limit moves with bit depth and friction only
STEPS = 40  # in which all that hangs is slacked off, to see from where on nothing more arrives
NOTHING = 0.05  # less of an increment than this is as good as nothing
LAST = 0.9  # of what hangs: that the rest of it brings nothing is not worth telling


@njit(cache=True, nogil=True)
def _limits(setting: Setting, memory: Memory, bits: Array, scale: Array, down: Array) -> Array:
    """Bit load of a string sliding down with nothing left on the hook [N]."""
    result = np.empty(len(bits))
    nothing = np.zeros(3)
    for k in range(len(bits)):
        memory.state[:] = 0
        place = stand_at(setting.hole, setting.pipe, bits[k], scale[k], nothing)
        march_down(setting, memory, place, down[k], 0.0, False)
        result[k] = max(-memory.tension[0], 0.0)
    return result


@njit(cache=True, nogil=True)
def _bit_load(setting: Setting, memory: Memory, place: Stand, down: float, top: float) -> float:
    """Bit load of a string that slides down as a whole under a hookload; the memory is spent [N]."""
    march_down(setting, memory, place, down, top, False)
    return -memory.tension[0] - place.push


def slack_off(setting: Setting, memory: Memory, samples: Samples, row: int) -> SlackOff | None:
    """Tell what more slacking off would bring to the lower end.

    Parameters
    ----------
    setting : Setting
        Well, string and friction.
    memory : Memory
        What the string remembers at the row; it is left as it is.
    samples : Samples
        Of the whole run.
    row : int
        Row of the log.

    Returns
    -------
    SlackOff or None
        None while the string turns or is held.

    Notes
    -----
    The string is marched down from the smaller hookload with the helices it has, and those that form. What
    stands on the lower end already stays: a front that does not get there adds nothing.
    """
    if samples.mode[row] != SLIDE:
        return None
    place = stand_at(setting.hole, setting.pipe, samples.bit[row], samples.scale[row], samples.ends[row])
    top, now = float(samples.top[row]), max(-float(memory.tension[0]) - place.push, 0.0)
    more = float(np.clip(top, 0.0, MORE))

    def at_bit(hookload: float) -> float:
        spent = memory._replace(tension=memory.tension.copy(), state=memory.state.copy())
        return max(_bit_load(setting, spent, place, samples.down[row], hookload), now)

    loads = np.array([at_bit(hookload) for hookload in np.linspace(top, min(top, 0.0), STEPS + 1)])
    spent, quick = _spent(loads, max(top, 0.0)), quick_limit(setting, place)
    return SlackOff(more, at_bit(top - more) - now, float(loads[-1]), spent, quick)


def _spent(loads: Floats, top: float) -> float:
    """Weight slacked off from which on next to nothing more arrives [N]; NaN where some does to the last."""
    step = top / STEPS
    if step <= 0.0:
        return math.nan
    arriving = np.flatnonzero(np.diff(loads) > NOTHING * step)
    from_step = int(arriving[-1]) + 1 if len(arriving) else 0
    return from_step * step if from_step <= LAST * STEPS else math.nan


def bit_load_limit(
    model: OffBottomModel, samples: Samples, rows: NDArray[np.bool_], factors: tuple[float, ...]
) -> Floats:
    """Most bit load that any slacking off could give, at the rows asked for [N]; NaN elsewhere, shape (n,).

    Parameters
    ----------
    model : OffBottomModel
        The well as the kernels take it.
    samples : Samples
        Of the whole run.
    rows : ndarray of bool, shape (n,)
        Rows while sliding.
    factors : tuple of float
        Friction factors of the cased hole and of each open section.

    Notes
    -----
    The string slides down as a whole with no weight left on the hook: from there on the block can push no
    further. Helices form on the way wherever the march passes their onset; what the pipe would stand is not
    asked.
    """
    limit = np.full(len(rows), np.nan)
    chosen = np.flatnonzero(rows)
    if len(chosen) == 0:
        return limit
    thin = chosen[:: max(1, round(THINNED_SECONDS / float(np.median(samples.step[1:]))))]
    memory, _ = fresh(model)
    found = _limits(
        model.setting(*factors), memory, samples.bit[thin], samples.scale[thin], samples.down[thin]
    )
    limit[chosen] = np.interp(chosen, thin, found)
    return limit
