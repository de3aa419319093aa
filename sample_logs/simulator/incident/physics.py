"""Two ways for the world to be: what is learned on one set of laws is judged on the other."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Physics:
    """The laws of one set of incidents; ranges are drawn from anew for every incident.

    Parameters
    ----------
    name : str
        What the command line calls it.
    static_grip : tuple of float
        Friction at rest beyond that of sliding, as a share; nil is Coulomb's constant friction.
    grip_speed : float
        Speed at which the difference has faded to a third [m/s].
    ageing : float
        Growth of the grip at rest with the logarithm of the time stood still.
    bed : str
        How cuttings gather and go: "saturating" or "dunes".
    ledge : str
        How a ledge gives: "brittle" (only to a turning string) or "creeping" (wears a little each time).
    wedge : str
        How tight an undergauge hole grips: "linear" or "progressive" in how far the bit was forced in.
    cake : str
        How sticking grows with time: "exponential" or "root".
    unwinding : str
        What happens to torque left in the string: "kept" until the string moves or "creeping" out.
    noise : str
        "white" or "coloured" (with bumps of the rig in it).
    lag : tuple of float
        Delay of the hookload's indicator, first order [s].
    averaging : bool
        Whether a sample is the mean of its interval or the reading at its end.
    flow_power : tuple of float
        Pressure over flow.
    pump_lag : float
        Time constant with which pressure follows the pump [s].
    gel : float
        Peak of the pressure when pumps start, as a share, after a quarter of an hour's rest.
    per_stand : int
        Elements a stand, where the string is short enough for the time that takes.
    slider_stiffness : float
        How much a node gives before it slips [N/m].
    hasty : tuple of float
        Range of a driller's haste, 0 to 1.
    """

    name: str
    static_grip: tuple[float, float]
    grip_speed: float
    ageing: float
    bed: str
    ledge: str
    wedge: str
    cake: str
    unwinding: str
    noise: str
    lag: tuple[float, float]
    averaging: bool
    flow_power: tuple[float, float]
    pump_lag: float
    gel: float
    per_stand: int
    slider_stiffness: float
    hasty: tuple[float, float]


ONE = Physics(
    name="one",
    static_grip=(0.0, 0.0), grip_speed=0.03, ageing=0.0,
    bed="saturating", ledge="brittle", wedge="linear", cake="exponential", unwinding="kept",
    noise="white", lag=(0.0, 1.5), averaging=False,
    flow_power=(1.75, 1.9), pump_lag=3.0, gel=0.0,
    per_stand=1, slider_stiffness=1.5e7, hasty=(0.0, 0.7),
)  # fmt: skip

OTHER = Physics(
    name="other",
    static_grip=(0.05, 0.35), grip_speed=0.03, ageing=0.02,
    bed="dunes", ledge="creeping", wedge="progressive", cake="root", unwinding="creeping",
    noise="coloured", lag=(1.0, 5.0), averaging=True,
    flow_power=(1.5, 1.75), pump_lag=9.0, gel=0.12,
    per_stand=2, slider_stiffness=4.0e6, hasty=(0.3, 1.0),
)  # fmt: skip

SETS = {law.name: law for law in (ONE, OTHER)}
