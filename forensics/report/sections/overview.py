"""The run in pictures: the strip, the load ratio map, surface weight against bit load."""

from __future__ import annotations

import numpy as np

from forensics.episodes.verdicts import rejected
from forensics.report.elements import Element, Picture, Section, Text
from forensics.report.figures import depths, path, timeline, weights
from forensics.report.scene import Scene
from forensics.report.words import count
from forensics.rig.view import Activity


def describe(scene: Scene) -> Section:
    """Describe the figures of the whole run."""
    return Section(
        "overview", "The run in pictures", (_strip(scene), _path(scene), *_map(scene), _transfer(scene))
    )


def _strip(scene: Scene) -> Picture:
    missing = timeline.missing_tracks(scene)
    lacking = f" Not in this log: {', '.join(missing)}." if missing else ""
    hollow = ", hollow where the engineer rejected it" if rejected(scene.findings.episodes) else ""
    ids = ", ".join(e.id for e in scene.mains) or "none"
    caption = (
        f"The whole run. Top: episodes, one lane a kind{hollow}. Middle: what the rig recorded; the weight "
        "on bit three ways, as the rig logged it, re-zeroed on the rotating off-bottom weight, and as "
        "reconstructed at the bit: where the last falls away from the others, weight is being "
        "lost (what the rig logged in slips may run off the scale). "
        f"Bottom: what the rig was doing. Shaded spans are the episodes shown in detail below ({ids}). "
        "Lines break where the log has a gap; spikes narrower than the line keep their highest and lowest "
        f"sample.{lacking}"
    )
    alt = (
        f"Strip chart over the run with {count(len(scene.findings.episodes), 'episode')}; tracks for "
        "depth, block, hookload, weight on bit, torque, rotation, pressure and flow where logged, and a "
        "band of activities."
    )
    return Picture(lambda: timeline.run_strip(scene), caption, alt, "run-strip")


def _path(scene: Scene) -> Picture:
    caption = (
        "Where in the hole. Left: the path from the side, cased part bold; bars beside it are the buckled "
        "or affected intervals of the episodes shown in detail, at their largest. Right: inclination and "
        "curvature along the hole. Look whether the intervals sit in the curve, below it, or astride the "
        "shoe."
    )
    spans = [
        f"{e.id} {scene.show.depths(e.top_md, e.bottom_md)}" for e in scene.mains if np.isfinite(e.top_md)
    ]
    alt = f"Vertical section of the hole with affected intervals: {'; '.join(spans) or 'none'}."
    return Picture(lambda: path.hole_path(scene), caption, alt, "hole-path")


def _map(scene: Scene) -> list[Element]:
    if not scene.findings.loads.ratio_map.values.size:
        return [Text("There is no load ratio map: no row of the log could be replayed.")]
    caption = (
        "Load ratio along the hole over time: compression over the sinusoidal critical load at the same "
        "place, the largest in each cell. Greys are below the threshold, colours above; white is tension. "
        "The line is the bit. Circles mark the peaks of the episodes shown in detail. Look for where the "
        "colour starts, and whether it comes back at the same depth."
    )
    peak = scene.findings.loads.peak_ratio
    top = float(np.nanmax(peak)) if np.isfinite(peak).any() else 0.0
    alt = f"Map of load ratio over time and measured depth; the largest value is {top:.2f}."
    return [Picture(lambda: depths.ratio_map(scene), caption, alt)]


def _transfer(scene: Scene) -> Element:
    drilled = np.isin(scene.findings.rig.activity, [int(Activity.DRILL_ROTATE), int(Activity.DRILL_SLIDE)])
    if not drilled.any():
        return Text("The bit did not drill in this log: there is no surface weight to hold against bit load.")
    caption = (
        "Reconstructed bit load against re-zeroed surface weight, sample by sample; darker cells hold "
        "more samples. On the line all the surface weight reaches the bit; the drop below it is what the "
        "wall took. A cloud that goes flat to the right means that more weight from surface changed "
        "little at the bit. Positive is compression on the bit."
    )
    alt = "Density of bit load against surface weight, rotating and sliding, with the line of equality."
    return Picture(lambda: weights.transfer_chart(scene), caption, alt)
