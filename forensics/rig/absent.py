"""What a run can't tell for want of a channel that nothing else stands in for, or of rows."""

from __future__ import annotations

from collections.abc import Mapping

from forensics.logs.table import TimeLog

# Channels that the reading of activity already speaks of (rpm, block, flow) are not named again here.
COST: Mapping[str, str] = {
    "torque": "No torque in the log: rotational friction, and episodes of high torque, can't be told.",
    "standpipe_pressure": "No standpipe pressure in the log: what the bit felt can't be checked against it.",
    "wob": "No weight on bit (WOB) by the rig in the log: how it was zeroed can't be told.",
}
# Channels that are read and cleaned, and that no later stage takes loads from.
IDLE = ("flow_out", "pit_volume", "rop", "toolface", "downhole_wob", "downhole_torque")
# From this interval on, three rows outlast what a driller does for a weight check [s].
SLOW = 10.0


def absent_channels(log: TimeLog) -> tuple[str, ...]:
    """Say what is lost with each channel that the log lacks, and with rows too far apart.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run; a channel without any value counts as lacking.

    Returns
    -------
    tuple of str
        One sentence a channel, and one on slow rows.
    """
    lacking = [words for channel, words in COST.items() if log.get(channel) is None]
    if log.interval >= SLOW:
        lacking.append(
            f"One row every {log.interval:.0f} s: what lasts less than {3 * log.interval:.0f} s, as weight "
            "checks, tags and partial pick-ups do, can't be told."
        )
    return tuple(lacking)


def idle_channels(log: TimeLog) -> tuple[str, ...]:
    """Say which channels of a log are read and change no result.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.

    Returns
    -------
    tuple of str
        One sentence, or none.
    """
    there = [channel for channel in IDLE if log.get(channel) is not None]
    if not there:
        return ()
    return (
        f"Read and checked, but no reconstructed load rests on them in this version: {', '.join(there)}.",
    )
