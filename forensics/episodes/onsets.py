"""How far past the published helical onsets an episode went."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from forensics.case import CriteriaSettings
from forensics.episodes.catalogue import Episode, State
from forensics.mechanics.band import ORDER, band_words, onset_loads, onsets_passed, validity_words
from forensics.mechanics.torque import onset_drop
from forensics.replay.places import PlaceNumbers


def with_onsets(
    episode: Episode, at: PlaceNumbers | None, criteria: CriteriaSettings, system: str = "metric"
) -> Episode:
    """Say of an episode how far past the published helical onsets its compression was.

    Parameters
    ----------
    episode : Episode
        Of a kind that presses the string.
    at : PlaceNumbers or None
        Its peak's place at its compression; None where there is none.
    criteria : CriteriaSettings
        Which onset the replay judged by, and whether torque lowers the onsets.
    system : str
        "metric" or "field": units of its sentences.

    Returns
    -------
    Episode
        With `onsets`, `onsets_beyond` and `onsets_drop`, and the first in its note where it is helical or
        past any onset.

    Notes
    -----
    The ends of the compression's interval are held against the same onsets: what only the high end
    passes was passed "perhaps".
    """
    load = episode.peak_compression
    if at is None or not load.value > 0.0:
        return episode
    place = at.place
    levels = onset_loads(place.stiffness, at.local, at.w_cos)
    drops = onset_drop(levels, place.stiffness, at.torque)
    drop = float(drops[ORDER.index(criteria.helical_onset)])
    if criteria.torque_effect:
        levels = levels - np.nan_to_num(drops)
    ends = [end if np.isfinite(end) else load.value for end in (load.low, load.high)]
    least, most = (int(onsets_passed(end, levels)) for end in ends)
    words = band_words(least, max(most, least))
    note = episode.note
    if episode.state is State.HELICAL or most:
        note = "; ".join(filter(None, (note, f"published helical onsets: {words}")))
    beyond = validity_words(place, system)
    return replace(episode, onsets=words, onsets_beyond=beyond, onsets_drop=drop, note=note)
