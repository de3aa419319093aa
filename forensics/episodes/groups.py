"""Groups of like episodes: by rule while they are few, by their features where they are many."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.episodes import wording
from forensics.episodes.catalogue import (
    RESIDUAL_QUANTITY,
    Consequence,
    Episode,
    Family,
    Kind,
    State,
    Word,
    standing,
)
from forensics.episodes.material import Material
from forensics.units import display_unit

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

#: Up to this many episodes beyond the routine ones are listed singly, with a label by rule.
SINGLY = 10

#: Groups tried, and the least members one may have.
GROUPS = (2, 8)
FEWEST = 2

#: Weight of how big an episode was, and of what it was: unlike kinds are not to be mixed for like sizes.
SIZE, KIND = 0.7, 4.0

#: Fewer groups are preferred where more stand apart no better than by this.
CLOSE = 0.05

RESAMPLES = 24
SEED = 20240229

ROUTINE = "routine sinusoidal running"

DOING = {
    "drill_slide": "while sliding",
    "drill_rotate": "while drilling with rotation",
    "trip_in": "running in",
    "trip_out": "pulling out",
    "ream_down": "reaming down",
    "ream_up": "reaming up",
    "rotate_off_bottom": "rotating off bottom",
    "circulate": "circulating",
    "static": "standing still",
    "connection": "at a connection",
    "unknown": "with activity unknown",
}


@dataclass(frozen=True)
class Features:
    """Features of episodes, one row each: shape (n, m), robustly scaled, with names and raw values."""

    names: tuple[str, ...]
    raw: Floats
    scaled: Floats


def is_routine(episode: Episode) -> bool:
    """Whether an episode is sinusoidal running that cost nothing, and to which no engineer gave a cause."""
    return (
        episode.word is not Word.RELABEL
        and episode.kind is Kind.BUCKLING
        and episode.state is not State.HELICAL
        and episode.consequence is Consequence.NONE
    )


def are_many(episodes: tuple[Episode, ...]) -> bool:
    """Whether more episodes are beyond routine than are listed singly: then scikit-learn groups them."""
    return sum(not is_routine(e) for e in standing(episodes)) > SINGLY


def load_clustering() -> None:
    """Import scikit-learn, which takes longer than its work here."""
    import sklearn.cluster
    import sklearn.metrics  # noqa: F401


def group(
    material: Material, episodes: tuple[Episode, ...]
) -> tuple[tuple[Episode, ...], tuple[Family, ...]]:
    """Put every episode into a group.

    Parameters
    ----------
    material : Material
    episodes : tuple of Episode

    Returns
    -------
    episodes : tuple of Episode
        With `family` filled in; those the engineer rejected belong to none.
    families : tuple of Family
        Largest first, routine running last.
    """
    kept = standing(episodes)
    telling = [e for e in kept if not is_routine(e)]
    labels = {e.id: ROUTINE for e in kept if is_routine(e)}
    if len(telling) <= SINGLY:
        labels |= {e.id: rule_label(e) for e in telling}
        families = _families_by_rule(labels, episodes, material.system)
    else:
        found, stability = _cluster(_features(material, telling).scaled)
        names = _names(telling, found, material.system)
        labels |= {e.id: names[k] for e, k in zip(telling, found.tolist(), strict=True)}
        families = _families_by_likeness(names, telling, found, stability, material.system)
        routine = {i: n for i, n in labels.items() if n == ROUTINE}
        families += _families_by_rule(routine, episodes, material.system)
    return tuple(replace(e, family=labels.get(e.id, "")) for e in episodes), families


def rule_label(episode: Episode) -> str:
    """Name what an episode is, in a few words.

    Parameters
    ----------
    episode : Episode

    Returns
    -------
    str

    Examples
    --------
    "helical buckling while sliding", "lockup running in", "drag pulling out".
    """
    what = episode.kind.value
    if episode.kind is Kind.BUCKLING:
        what = f"{episode.state.value} buckling"
        if episode.consequence is Consequence.ROTATED_BUCKLED:
            what = "turned while helical"
    return f"{what} {DOING.get(episode.activity, DOING['unknown'])}"


def _families_by_rule(
    labels: dict[str, str], episodes: tuple[Episode, ...], system: str
) -> tuple[Family, ...]:
    """One family a label; stability has no meaning here."""
    members: dict[str, list[Episode]] = {}
    for episode in episodes:
        if episode.id in labels:
            members.setdefault(labels[episode.id], []).append(episode)
    order = sorted(members, key=lambda name: (name == ROUTINE, -len(members[name]), name))
    return tuple(
        Family(
            name, describe_members(members[name], system), tuple(e.id for e in members[name]), float("nan")
        )
        for name in order
    )


def _families_by_likeness(
    names: dict[int, str], episodes: list[Episode], found: Ints, stability: dict[int, float], system: str
) -> tuple[Family, ...]:
    order = sorted(names, key=lambda k: (-int((found == k).sum()), names[k]))
    made = []
    for k in order:
        members = [e for e, label in zip(episodes, found.tolist(), strict=True) if label == k]
        said = describe_members(members, system)
        made.append(Family(names[k], said, tuple(e.id for e in members), float(stability[k])))
    return tuple(made)


def describe_members(members: list[Episode], system: str = "metric") -> str:
    """Say in plain words what a group's members share.

    Parameters
    ----------
    members : list of Episode
    system : str
        "metric" or "field".

    Returns
    -------
    str
    """
    said = [_shared(Counter(rule_label(e) for e in members), len(members))]
    said.append(_range("lasting", [e.duration / 60.0 for e in members], "min", 1))
    said.append(_range("peak at", *_scaled([e.peak_md for e in members], "length", system), 0))
    ratios = [e.peak_load_ratio.value for e in members if e.kind in (Kind.BUCKLING, Kind.LOCKUP)]
    said.append(_range("load ratio", ratios, "", 2))
    lost = _scaled([e.lost_weight.value for e in members], "force", system)
    said.append(_range("lost weight", *lost, _places(lost[0])))
    for kind, quantity in RESIDUAL_QUANTITY.items():
        values = [e.peak_residual.value for e in members if e.kind is kind and e.peak_residual is not None]
        residuals = _scaled(values, quantity, system)
        said.append(_range(f"{kind.value} against the model", *residuals, _places(residuals[0])))
    return "; ".join(part for part in said if part)


def _shared(counts: Counter[str], total: int) -> str:
    """Name what most members are, and the rest."""
    (first, number), *rest = counts.most_common()
    if number == total:
        return f"all {first}" if total > 1 else first
    others = ", ".join(f"{n} {name}" for name, n in rest[:3])
    return f"{number} of {total} {first}; {others}"


def _scaled(values: list[float], quantity: str, system: str) -> tuple[list[float], str]:
    """Values in the unit they are shown in, and its label."""
    label, scale = display_unit(quantity, system)
    return [value / scale for value in values], label


def _places(values: list[float]) -> int:
    return 0 if max((abs(v) for v in values if np.isfinite(v)), default=0.0) >= 10.0 else 1


def _range(name: str, values: list[float], unit: str, places: int) -> str:
    known = [v for v in values if np.isfinite(v)]
    if not known:
        return ""
    low, high = f"{min(known):.{places}f}", f"{max(known):.{places}f}"
    span = low if low == high else f"{low} to {high}"
    return f"{name} {span} {unit}".rstrip()


def _features(material: Material, episodes: list[Episode]) -> Features:
    """Features that say what an episode was like: kind, place, size, length."""
    names = ("duration", "bit depth", "peak above bit", "load ratio", "lost weight", "drag", "torque")
    raw = np.full((len(episodes), len(names)), np.nan)
    for n, e in enumerate(episodes):
        bit = float(material.bit[e.peak])
        residual = e.peak_residual.value if e.peak_residual is not None else 0.0
        lost = e.lost_weight.value
        raw[n] = (
            np.log(max(e.duration, 1.0)), bit, bit - e.peak_md, min(e.peak_load_ratio.value, 10.0),
            lost if np.isfinite(lost) else 0.0,
            residual if e.kind is Kind.DRAG else 0.0, residual if e.kind is Kind.TORQUE else 0.0,
        )  # fmt: skip
    filled = np.where(np.isfinite(raw), raw, np.nanmedian(np.where(np.isfinite(raw), raw, 0.0), axis=0))
    middle = np.median(filled, axis=0)
    spread = np.subtract(*np.percentile(filled, [75.0, 25.0], axis=0))
    spread = np.where(spread > 0.0, spread, np.maximum(filled.std(axis=0), 1e-12))
    scaled = np.clip((filled - middle) / spread, -3.0, 3.0)
    kinds = [rule_label(e) for e in episodes]
    labels = sorted(set(kinds))
    flags = np.array([[kind == label for label in labels] for kind in kinds], dtype=float)
    return Features(names + tuple(labels), np.hstack([raw, flags]), np.hstack([SIZE * scaled, KIND * flags]))


def _cluster(points: Floats) -> tuple[Ints, dict[int, float]]:
    """Cluster with the number of groups that stand apart best; stability of each under resampling."""
    from sklearn.metrics import silhouette_score

    distinct = len(np.unique(points.round(9), axis=0))
    most = min(GROUPS[1], distinct - 1, len(points) // FEWEST)
    if most < GROUPS[0]:
        return np.zeros(len(points), dtype=np.int64), {0: 1.0}
    tried = {k: _merge(points, k) for k in range(GROUPS[0], most + 1)}
    scores = {k: silhouette_score(points, labels) for k, labels in tried.items()}
    best = min(k for k in scores if scores[k] >= max(scores.values()) - CLOSE)
    labels = tried[best]
    rng = np.random.default_rng(SEED)
    agreement: dict[int, list[float]] = {k: [] for k in range(best)}
    for _ in range(RESAMPLES):
        rows = np.unique(rng.integers(0, len(points), len(points)))
        if len(rows) <= best:
            continue
        sampled = _merge(points[rows], best)
        centres = np.array([points[rows][sampled == k].mean(axis=0) for k in range(best)])
        again = np.argmin(((points[:, None, :] - centres[None]) ** 2).sum(axis=2), axis=1)
        for k, value in _agreements(labels, again).items():
            agreement[k].append(value)
    return labels, {k: float(np.mean(v)) if v else float("nan") for k, v in agreement.items()}


def _merge(points: Floats, k: int) -> Ints:
    """Group by merging the nearest, least variance within groups first (Ward 1963)."""
    from sklearn.cluster import AgglomerativeClustering

    return AgglomerativeClustering(n_clusters=k, linkage="ward").fit_predict(points).astype(np.int64)


def _agreements(labels: Ints, again: Ints) -> dict[int, float]:
    """Overlap of each group with its nearest among the new ones, less what chance gives.

    References
    ----------
    Hennig, C. (2007). Computational Statistics & Data Analysis 52(1) (clusterwise Jaccard agreement);
    the correction for chance is as in Hubert and Arabie (1985), J. Classification 2.
    """
    result = {}
    n = len(labels)
    for k in np.unique(labels).tolist():
        mine = labels == k
        best, chance = 0.0, 0.0
        for other in np.unique(again).tolist():
            theirs = again == other
            overlap = float((mine & theirs).sum()) / float((mine | theirs).sum())
            if overlap > best:
                expected = mine.sum() * theirs.sum() / n
                best, chance = overlap, float(expected / (mine.sum() + theirs.sum() - expected))
        result[k] = max((best - chance) / max(1.0 - chance, 1e-9), 0.0) if chance < 1.0 else 1.0
    return result


def _names(episodes: list[Episode], found: Ints, system: str) -> dict[int, str]:
    """Name each group after what most of its members are; alike names are told apart by depth or length."""
    names: dict[int, str] = {}
    for k in np.unique(found).tolist():
        members = [e for e, label in zip(episodes, found.tolist(), strict=True) if label == k]
        names[k] = Counter(rule_label(e) for e in members).most_common(1)[0][0]
    for name in {n for n in names.values() if list(names.values()).count(n) > 1}:
        alike = sorted(
            (k for k in names if names[k] == name),
            key=lambda k: float(np.mean([e.start for e, m in zip(episodes, found, strict=True) if m == k])),
        )
        for number, k in enumerate(alike, 1):
            depth = np.median([e.bottom_md for e, m in zip(episodes, found, strict=True) if m == k])
            names[k] = f"{name} ({number}, near {wording.depth(depth, system)})"
    return names
