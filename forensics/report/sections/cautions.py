"""What has to be heeded: for one episode, and for the report as a whole."""

from __future__ import annotations

from forensics.episodes.catalogue import Consequence, Episode, Kind, State

GENERAL = (
    (
        "This is a reconstruction from imperfect surface data, made after the run. It is not for steering a "
        "live operation."
    ),
    (
        "It does not replace manufacturers' ratings, company rules, national regulation or the judgement "
        "of a licensed engineer; where they differ from this report, they hold."
    ),
    (
        "Overpull: the allowable pull is set by the weakest part of string, connections, hook, derrick and "
        "wire line at its present wear class, less the string's own weight, and company rules usually keep a "
        "share of it back. Drag, shock and a second sticking point can use that margin up unseen."
    ),
    (
        "Pull, torque and pressure act together: the allowable pull falls while torque is held, and a tool "
        "joint may govern before the pipe body does. Margins above take one quantity at a time."
    ),
    (
        "Turning a buckled or sharply bent string spends fatigue life with each turn; tension and corrosion "
        "lower the limit. Load records of the joints belong to the inspection decision."
    ),
    (
        "Stuck or nearly stuck pipe: the direction of the last motion and whether circulation was free tell "
        "mechanisms apart. This report gives no instruction to jar, pull, turn or pump."
    ),
    "Torque left in the string after a stall can back off a connection when the string is moved.",
    (
        "Well control comes first: a change of hookload may also be a change of mud density, an influx or "
        "losses."
    ),
    (
        "Casing and liner: overpull, burst, collapse with floats empty, surge and swab have limits of their "
        "own that are not checked here."
    ),
    "The report speaks of loads, places and times. It judges no person and names no crew.",
)

METHOD_LIMITS = (
    (
        "The string is treated as soft between its contact points: it bends with the hole and carries no "
        "bending of its own, so stiff assemblies in sharp curvature press harder than shown."
    ),
    (
        "The hole is as smooth as its survey: bends shorter than about two stations are unseen and end up "
        "in the friction factor."
    ),
    (
        "Friction factors soak up everything that resists motion: cuttings, ledges, tortuosity. They hold "
        "for this run and this model."
    ),
    (
        "Torque trapped in the string when rotation stops spends part of the friction on torsion; until the "
        "string has slid some way the bit load is then higher than reconstructed."
    ),
    (
        "Bit load while the string drills off with the block still rests on the rate law or pressure where "
        "there is one; without either its uncertainty is larger than shown."
    ),
    (
        "Thresholds are published ones with their own scatter; the helical one marks an onset, and a full "
        "helix forms over a range of load above it."
    ),
    (
        "Tool-joint and body clearance give different thresholds; the choice is stated above, its effect "
        "with each episode."
    ),
)


def for_episode(episode: Episode) -> tuple[str, ...]:
    """Cautions that one episode calls for."""
    said: list[str] = []
    if episode.consequence is Consequence.ROTATED_BUCKLED:
        said.append(
            "Turned while buckled: bending fatigue was spent in the buckled interval. Inspection is for the "
            "owner of the pipe to decide, on ratings and records this report does not have."
        )
    if episode.kind is Kind.LOCKUP or episode.consequence is Consequence.LOCKED_UP:
        said.append(
            "Locked up: more weight at surface adds compression and wall force above, not load at the "
            "bit. Stored weight may come free at once when friction breaks."
        )
    if episode.kind is Kind.DRAG:
        said.append(
            "Excess drag may be early sticking or packing-off. More pull is limited by the weakest part "
            "and may set a pack-off harder; which holds here is for those on site to judge."
        )
    if episode.kind is Kind.TORQUE:
        said.append(
            "Excess torque lowers the allowable pull; connections may govern. Check against their ratings."
        )
    if episode.state is State.HELICAL and episode.consequence is not Consequence.ROTATED_BUCKLED:
        said.append(
            "Helical: turning the string in this state bends it in every turn; ratings and company rules "
            "hold."
        )
    return tuple(said)
