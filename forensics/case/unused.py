"""What a case file gives that this version reads and does not use: said, so that nobody counts on it."""

from __future__ import annotations

from forensics.case.settings import Case


def unused_settings(case: Case) -> tuple[str, ...]:
    """Name the settings of a case that change nothing.

    Parameters
    ----------
    case : Case

    Returns
    -------
    tuple of str
        One sentence a setting.
    """
    rig, said = case.rig, []
    if rig.lines is not None and rig.sheave_efficiency is None:
        said.append("[rig] lines changes nothing without sheave_efficiency: the hookload is taken as logged.")
    if rig.sheave_efficiency is not None and rig.lines is None:
        said.append("[rig] sheave_efficiency changes nothing without lines: the hookload is taken as logged.")
    if rig.block_weight is not None and not rig.hookload_includes_block:
        said.append(
            "[rig] block_weight changes nothing where hookload_includes_block is false: the block is not in "
            "the hookload."
        )
    return tuple(said)
