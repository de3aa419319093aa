"""Weight of pipe whose tally gives none: body and, where pipe has them, tool joints."""

from __future__ import annotations

from dataclasses import dataclass

from forensics.well.string import PIPE, STEEL_DENSITY, plain_weight


@dataclass(frozen=True)
class Joints:
    """Tool joints of a kind of pipe.

    `steel` is the length at the joint's diameter in a joint of pipe, upsets and tapers included, in body
    diameters; `pipe` the length of a joint [m]; `bore` the joint's bore as a share of the body's; `factor`
    the weight over a plain tube's where the joint's diameter is not known.
    """

    steel: float
    pipe: float
    bore: float
    factor: float


# Lengths and bores of range 2 pipe: common practice, no source. The factors, from memory of published
# weights: drill pipe from 3 1/2 to 5 7/8 in weighs 1.12 to 1.3 times its plain body.
JOINTS = {
    "drillpipe": Joints(steel=4.8, pipe=9.45, bore=0.76, factor=1.2),
    "hwdp": Joints(steel=9.6, pipe=9.3, bore=1.0, factor=1.17),
}
# How far a derived weight may be off, with and without the joints' diameter.
UNSURE_KNOWN, UNSURE_GUESSED = 0.06, 0.08
# Couplings add this to a plain tube at most.
UNSURE_COUPLINGS = 0.04


@dataclass(frozen=True)
class Derived:
    """A weight worked out [N/m], with how in words and the part it may be off by (0: the shape tells all)."""

    weight: float
    how: str
    unsure: float


def derive_weight(
    kind: str, od: float, id: float, joint_od: float | None, density: float = STEEL_DENSITY
) -> Derived:
    """Work out a component's weight in air from its diameters.

    Parameters
    ----------
    kind : str
        One of `string.KINDS`.
    od, id : float
        Body diameters [m].
    joint_od : float or None
        Diameter of the tool joints where known [m].
    density : float
        Of the wall [kg/m3].

    Returns
    -------
    Derived

    Notes
    -----
    The body of drill pipe alone is a sixth too light, which would pass for friction or block weight all the
    way: its joints are put on, by their diameter where it is known, else by a usual factor.

    Examples
    --------
    >>> round(derive_weight("collar", 0.2032, 0.0381, None).weight / 9.80665, 1)
    245.6
    """
    body = plain_weight(od, id, density)
    tube = "plain tube of its OD and ID"
    joints = JOINTS.get(kind)
    if joints is None:
        couplings = kind in PIPE
        how = f"{tube}, couplings left out" if couplings else tube
        return Derived(body, how, UNSURE_COUPLINGS if couplings else 0.0)
    # Joints are steel whatever the body is.
    if joint_od is None:
        extra = (joints.factor - 1.0) * plain_weight(od, id)
        how = f"{tube} with {joints.factor - 1.0:.0%} added for tool joints, whose OD is not given"
        return Derived(body + extra, how, UNSURE_GUESSED)
    share = joints.steel * od / joints.pipe
    weight = (1.0 - share) * body + share * plain_weight(joint_od, joints.bore * id)
    how = f"{tube} with {joints.steel * od:.2f} m of its tool joint's OD on {joints.pipe:g} m"
    return Derived(weight, how, UNSURE_KNOWN)
