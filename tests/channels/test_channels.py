"""The vocabulary: names met on rigs find their channel, look-alikes don't."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics import channels, units

NAMES = {
    "hookload": [
        "HKLD",
        "HKLA",
        "THKD",
        "HKLD_AVG",
        "Average Hookload",
        "Hook Load",
        "hookload",
        "STWT",
        "Hookload (klbf)",
    ],
    "hookload_max": ["HKLX", "HKLD_MAX", "Hook Load Max"],
    "block_position": ["BPOS", "BLKP", "BLOCKCOMP", "Block Height", "TDPOS", "Travelling Block Position"],
    "wob": ["SWOB", "WOBA", "WOB5", "WOBAVG", "WOB", "WOB_AVG", "Weight on Bit", "AVERAGED WOB"],
    "downhole_wob": ["DWOB_RT", "MWBA", "MWD Downhole WOB"],
    "downhole_torque": ["DTOR_RT", "MTQA", "MWD DOWNHOLE TORQUE"],
    "torque": ["TQA", "STOR", "TQ5", "TORQUEAV", "Torque", "ROTARY TORQUE", "Average Surface Torque"],
    "rpm": ["RPM", "RPMA", "SURFRPM", "SURF_RPM", "CRPM", "Average Rotary Speed"],
    "standpipe_pressure": ["SPP", "SPPA", "PUMP", "Standpipe Pressure", "PUMP PRESS"],
    "flow_in": ["MFIA", "FLOWIN", "TFLO", "GPM", "Mud Flow In", "Flow In"],
    "mud_density": ["MDIA", "MWIN", "Mud Density In"],
    "differential_pressure": ["DIFP", "DIFF_PRESS", "Differential Pressure"],
    "bit_depth": ["BDEP", "BITDEP", "DBTM", "DEPTBITM", "Bit Depth", "BIT DEPTH (MD)"],
    "hole_depth": ["HDEP", "DMEA", "DEPTMEAS", "Hole Depth", "DEPT", "MD", "Depth(ft)"],
    "inclination": ["INC", "SINC", "Continuous Inclination"],
    "bit_tvd": ["VBITDEP", "DBTV", "Bit TVD"],
    "toolface": ["GTF", "Toolface", "TF_ANGLE"],
    "slips": ["INSLIPS_STATUS", "STIS", "slips"],
    "rop": ["ROP", "ROPA", "ROP_AVG", "Rate of Penetration"],
    "time": ["TIME", "Time", "DATETIME", "RIGTIME", "ETIM"],
}
OTHERS = [
    "DVER",
    "TVD",
    "BIT_RPM",
    "MOTOR_RPM",
    "HKLD_MIN",
    "TQ_IN_AMPS",
    "FLOWOUTPC",
    "ECD",
    "SPM1",
    "Torque Limit",
    "WOB Setpoint",
    "Gas",
    "SRPM Std",
    "STICK_SLIP",
    "BVEL",
    "Bit Size",
    "UNKNOWN:1",
    "",
]


@pytest.mark.parametrize(("channel", "name"), [(c, n) for c, names in NAMES.items() for n in names])
def test_names_met_find_their_channel(channel, name):
    assert channels.match(name)[0] == channel


@pytest.mark.parametrize("name", OTHERS)
def test_look_alikes_are_left_alone(name):
    assert channels.match(name, "m")[0] is None


def test_a_name_that_only_looks_right_needs_the_right_unit():
    assert channels.match("HDTH", "ft")[0] == "hole_depth"
    assert channels.match("HDTH", "psi")[0] is None
    assert "looks like" in channels.match("HDTH", "ft")[1]


def test_wrong_unit_of_a_listed_name_is_told():
    assert "no unit of moment" in channels.match("TQA", "psi")[1]


def test_averages_go_before_maxima_and_specials():
    order = ["HKLA", "HKLD", "THKD", "STWT"]
    assert sorted(order, key=channels.rank) == order
    assert channels.rank("WOBA") < channels.rank("WOBX")


def test_aliases_belong_to_one_channel_and_quantities_exist():
    seen = {}
    for channel in channels.CHANNELS:
        assert channel.quantity in units.QUANTITIES
        assert channel.plausible[0] < channel.plausible[1]
        for alias in channel.aliases:
            key = channels.normalise(alias)
            assert seen.setdefault(key, channel.name) == channel.name, alias
            assert key not in channels.LOOKALIKES, alias


@given(st.text(max_size=30), st.none() | st.text(max_size=8))
def test_no_name_breaks_the_look_up(name, unit):
    found, why = channels.match(name, unit)
    assert found is None or found in channels.BY_NAME
    assert why
