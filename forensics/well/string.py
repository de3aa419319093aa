"""The string: components from the bit up, their sections and weights."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from math import pi

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.units import G

Floats = NDArray[np.float64]

STEEL_DENSITY = 7850.0
STEEL_MODULUS = 206.8e9
KINDS = (
    "bit", "motor", "stabiliser", "reamer", "jar", "sub", "float", "collar", "hwdp", "drillpipe", "casing",
    "liner", "tubing", "other",
)  # fmt: skip
PIPE = frozenset({"hwdp", "drillpipe", "casing", "liner", "tubing"})


@dataclass(frozen=True)
class Component:
    """One row of the tally: like pieces that stand together.

    Parameters
    ----------
    name, kind : str
        `kind` is one of `KINDS`.
    length : float
        Of the whole row [m].
    od, id : float
        Body diameters [m].
    weight : float
        In air, tool joints or couplings included [N/m].
    tool_joint_od : float, optional
        Largest diameter of the joints [m].
    tensile_rating, torque_rating : float, optional
        [N], [N.m]
    yield_strength : float, optional
        Minimum yield stress [Pa].
    youngs_modulus, density : float
        [Pa], [kg/m3]
    line : int, optional
        Line of the tally it stands on, for refusals.
    """

    name: str
    kind: str
    length: float
    od: float
    id: float
    weight: float
    tool_joint_od: float | None = None
    tensile_rating: float | None = None
    torque_rating: float | None = None
    yield_strength: float | None = None
    youngs_modulus: float = STEEL_MODULUS
    density: float = STEEL_DENSITY
    line: int | None = None

    @property
    def area(self) -> float:
        """Cross-section of the wall [m2]."""
        return pi / 4.0 * (self.od**2 - self.id**2)

    @property
    def inner_area(self) -> float:
        """Cross-section of the bore [m2]."""
        return pi / 4.0 * self.id**2

    @property
    def outer_area(self) -> float:
        """Cross-section within the outer diameter [m2]."""
        return pi / 4.0 * self.od**2

    @property
    def inertia(self) -> float:
        """Second moment of area about a diameter [m4]."""
        return pi / 64.0 * (self.od**4 - self.id**4)

    @property
    def polar(self) -> float:
        """Polar second moment of area [m4]."""
        return 2.0 * self.inertia

    @property
    def stiffness(self) -> float:
        """Bending stiffness E I of the body [N.m2]."""
        return self.youngs_modulus * self.inertia

    @property
    def axial(self) -> float:
        """Axial stiffness E A of the body [N]."""
        return self.youngs_modulus * self.area

    def contact_diameter(self, clearance: str = "tool_joint") -> float:
        """Return the diameter that touches the wall [m]: the tool joint's where known, or the body's."""
        if clearance == "body" or self.tool_joint_od is None:
            return self.od
        return self.tool_joint_od


def plain_weight(od: float, id: float, density: float = STEEL_DENSITY) -> float:
    """Weigh a plain tube in air.

    Parameters
    ----------
    od, id : float
        Diameters [m].
    density : float
        Of the wall [kg/m3].

    Returns
    -------
    float
        Weight per length [N/m]; joints and upsets are not in it.

    Examples
    --------
    >>> round(plain_weight(0.2032, 0.0381) / 9.80665, 1)
    245.6
    """
    return density * G * pi / 4.0 * (od**2 - id**2)


def buoyed_weight(
    component: Component, density_out: ArrayLike, density_in: ArrayLike | None = None
) -> Floats:
    """Weigh a component in mud.

    Parameters
    ----------
    component : Component
        Its air weight has the joints in it, so the steel it displaces is taken from that weight.
    density_out : array_like, any shape
        Mud outside [kg/m3].
    density_in : array_like, optional
        Mud inside where it differs [kg/m3].

    Returns
    -------
    ndarray
        Weight per length in the effective-tension sense [N/m]; negative where it floats.

    Notes
    -----
    w = w_air (1 - rho_out / rho_steel) + g (rho_in - rho_out) A_in.

    Examples
    --------
    >>> pipe = Component("pipe", "drillpipe", 1000.0, 0.127, 0.1086, 300.0)
    >>> float(buoyed_weight(pipe, 0.0))
    300.0
    """
    outside = np.asarray(density_out, dtype=np.float64)
    weight = component.weight * (1.0 - outside / component.density)
    if density_in is None:
        return weight
    return weight + G * (np.asarray(density_in, dtype=np.float64) - outside) * component.inner_area


@dataclass(frozen=True)
class String:
    """Components, bit first, going up; the last one goes on to surface where the string is short."""

    components: tuple[Component, ...]

    @cached_property
    def ends(self) -> Floats:
        """Distance above the bit of each component's upper end, shape (n,) [m]."""
        return np.cumsum([component.length for component in self.components])

    @property
    def length(self) -> float:
        """Length of the tally [m]."""
        return float(self.ends[-1])

    @property
    def can_extend(self) -> bool:
        """True where the last row is pipe, which goes on to surface."""
        return self.components[-1].kind in PIPE

    def needs_extension(self, bit_depth: float) -> bool:
        """Tell whether the tally is shorter than the bit's depth [m]."""
        return self.length < bit_depth

    def index_at(self, distance: ArrayLike) -> NDArray[np.intp]:
        """Find the component at distances above the bit, shape (k,) [m]; the last one has no upper end."""
        above = np.atleast_1d(np.asarray(distance, dtype=np.float64))
        return np.clip(np.searchsorted(self.ends, above, side="right"), 0, len(self.components) - 1)

    def values(self, name: str) -> Floats:
        """Collect one number of every component, such as "stiffness", shape (n,)."""
        return np.array([getattr(component, name) for component in self.components], dtype=np.float64)

    def buoyed(self, density_out: float, density_in: float | None = None) -> Floats:
        """Weigh every component in mud, shape (n,) [N/m]."""
        return np.array([float(buoyed_weight(c, density_out, density_in)) for c in self.components])
