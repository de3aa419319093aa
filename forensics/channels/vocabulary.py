"""The channels, as data: names, quantities, aliases, believable ranges.

Within a channel the aliases stand in order of preference: an average before an instantaneous value
before a maximum, so that where a file has several candidates the first alias wins.
"""

from __future__ import annotations

import enum
import math
from dataclasses import dataclass


class Need(enum.Enum):
    """How much the analysis depends on a channel."""

    NEEDED = "needed"
    WANTED = "wanted"
    HELPS = "helps"


@dataclass(frozen=True)
class Channel:
    """One canonical channel.

    Parameters
    ----------
    name : str
        Canonical name.
    quantity : str
        Quantity of `forensics.units`; rotation is kept in rev/min.
    meaning : str
        What it is, in a phrase.
    aliases : tuple of str
        Mnemonics and names met, best first.
    plausible : tuple of float
        Lowest and highest believable value [SI; rpm in rev/min]; wide enough for any rig.
    need : Need
        Whether the analysis needs, wants or is helped by it.
    """

    name: str
    quantity: str
    meaning: str
    aliases: tuple[str, ...]
    plausible: tuple[float, float]
    need: Need = Need.HELPS


def _names(text: str) -> tuple[str, ...]:
    return tuple(name.strip() for name in text.split(",") if name.strip())


_HOOKLOAD = (-4.0e5, 1.2e7)
CHANNELS: tuple[Channel, ...] = (
    Channel(
        "time",
        "time",
        "date and time of the sample",
        _names(
            "time, datetime, date time, timestamp, time stamp, rigtime, rig time, dtim, tim, time "
            "index, utc, utc time, local time, time utc, datetime utc, time local, ts, epoch, unix "
            "time, etim, elapsed, elapsed time, time elapsed, time 1900, excel time"
        ),
        (-math.inf, math.inf),
        Need.NEEDED,
    ),
    Channel(
        "bit_depth",
        "length",
        "measured depth of the bit",
        _names(
            "bit depth, bdep, bitdep, dbtm, deptbitm, deptbit, btdep, bit depth md, bit measured depth, "
            "bitd, bit position, measured bit depth, dept bit, bdepth, bit md, depth bit, depbit, bit "
            "dep, bit depth measured, dbit, deptbit md, bpmd, average bit depth, bit depth avg, tbit, "
            "bdtm"
        ),
        (-200.0, 15000.0),
        Need.NEEDED,
    ),
    Channel(
        "hole_depth",
        "length",
        "measured depth of the hole",
        _names(
            "hole depth, hdep, holedepth, dmea, deptmeas, hole depth md, tdepth, total depth, hole "
            "measured depth, depth hole, bottom hole depth, bhd, hole md, holedep, hdepth, hole dep, "
            "well depth, dhol, depth tot, hole depth measured, total hole depth, md hole, hkdep, dept, "
            "depth, md, mdepth, measured depth, depth md, deptm, depth measured"
        ),
        (-5.0, 15000.0),
    ),
    Channel(
        "block_position",
        "length",
        "height of the travelling block",
        _names(
            "block position, bpos, blkpos, block pos, block height, blockcomp, blkp, tdpos, hookpos, "
            "hkht, trav block, block, hook height, hook position, travelling block, traveling block, "
            "top drive position, block position compensated, blk pos, blkht, block hgt, travelling "
            "block position, bpos avg, traveling block position, block height avg, hkpos, block pos "
            "avg, blockucomp, blk"
        ),
        (-40.0, 80.0),
        Need.WANTED,
    ),
    Channel(
        "hookload",
        "force",
        "hookload, average",
        _names(
            "hookload, hkla, hkld avg, average hookload, hookload avg, avg hookload, hook load avg, "
            "hkld, hl, hkl, hook load, hookld, hklda, thkd, total hookload, corrected hookload, "
            "corrected total hookload, hookload average, hload, hkload, hook ld, weight on hook, woh, "
            "hook weight, hookload mean, hkldav, string weight, stwt, strgwt"
        ),
        _HOOKLOAD,
        Need.NEEDED,
    ),
    Channel(
        "hookload_max",
        "force",
        "hookload, largest since the last sample",
        _names(
            "hookload max, hklx, hkld max, max hookload, hook load max, maximum hookload, hkldmx, hkldx, hkmx"
        ),
        _HOOKLOAD,
    ),
    Channel(
        "wob",
        "force",
        "weight on bit as the rig computed it",
        _names(
            "wob, woba, wob avg, swob, wobavg, average wob, averaged wob, avg wob, bitweight, bit "
            "weight, weight on bit, weight on bit avg, average weight on bit, surface wob, surface "
            "weight on bit, wob surface, wob mean, wob5, wobav, wob rig, wob a, swobav, bit wt, bitwt"
        ),
        (-3.0e6, 3.0e6),
        Need.WANTED,
    ),
    Channel(
        "torque",
        "moment",
        "surface torque, average",
        _names(
            "torque, tqa, torqa, torque avg, stor, tq, trq, tor, rotary torque, average surface torque, "
            "surface torque, torqueav, avg torque, average torque, top drive torque, td torque, tdtq, "
            "tqav, stq, trqa, torq, tq5, torque average, torque surface, string torque, drilling "
            "torque, tq avg, storque, tdtorque, rotary torque avg, surf torque, tors"
        ),
        (-6.0e4, 1.5e5),
        Need.WANTED,
    ),
    Channel(
        "rpm",
        "rotation",
        "surface rotation",
        _names(
            "rpm, rpma, surf rpm, rotary rpm, tdrpm, rspm, rotary speed, average rotary speed, surfrpm, "
            "surface rpm, rpm avg, top drive rpm, td rpm, srpm, string rpm, avg rpm, average rpm, rpm "
            "surface, rpm rotary, rotrpm, rotary, drill string rpm, top drive speed, rpm surf, rotary "
            "rpm avg, average surface rpm, string speed, crpm, rpmb"
        ),
        (-60.0, 500.0),
        Need.WANTED,
    ),
    Channel(
        "standpipe_pressure",
        "pressure",
        "standpipe pressure",
        _names(
            "standpipe pressure, spp, sppa, spp avg, pprs, standpipe, average standpipe pressure, pump "
            "press, pump pressure, stand pipe pressure, sppr, press, sp pressure, standpipe press, stp "
            "press, standpipe pressure avg, avg standpipe pressure, stppr, spm press, pump, pp, "
            "pumppressure, mudpress, ppa"
        ),
        (-3.0e6, 1.0e8),
        Need.WANTED,
    ),
    Channel(
        "flow_in",
        "flow",
        "mud flow in",
        _names(
            "flow in, mfia, flowin, flin, flwin, flow in avg, mud flow in, tflo, flow rate, flowrate, "
            "gpm, flow, mud flow, tpo, total pump output, pump rate, flow in rate, mud flow in avg, "
            "average flow in, pump output, flow rate in, mfi, flow pumps, flwi, mudflowin, total flow, "
            "total flow in, flowinav, flo in, mud flow rate, pump flow"
        ),
        (-5.0e-3, 0.25),
        Need.WANTED,
    ),
    Channel(
        "flow_out",
        "flow",
        "mud flow out",
        _names(
            "flow out, mfoa, flowout, flow out avg, mud flow out, mud flow out avg, flout, flwout, flow "
            "rate out"
        ),
        (-5.0e-3, 0.35),
    ),
    Channel(
        "mud_density",
        "density",
        "density of the mud going in",
        _names(
            "mud density, mdia, mwin, mwti, mud density in, mud weight in, mud weight, mw, mud wt, mw "
            "in, mud wt in, density in, mud density in avg, mud density average, mdi, mud dens in, "
            "mudweight, mwi, mwt in"
        ),
        (500.0, 3000.0),
    ),
    Channel(
        "pit_volume",
        "volume",
        "active pit volume",
        _names(
            "pit volume, tvolact, tva, active pit volume, pit vol, active volume, pit volume active, "
            "total pit volume, active tank volume, active pits, pvt, tank volume active, tvol, total "
            "mud volume, pit total"
        ),
        (-10.0, 2000.0),
    ),
    Channel(
        "rop",
        "speed",
        "rate of penetration",
        _names(
            "rop, ropa, rop avg, rate of penetration, average rop, rop average, avg rop, ropi, rop "
            "instantaneous, rop5, drill rate, penetration rate, ropav, ropih, time dist, rate of "
            "penetration avg"
        ),
        (-0.01, 0.2),
    ),
    Channel(
        "differential_pressure",
        "pressure",
        "pressure across the motor above its off-bottom value",
        _names(
            "differential pressure, difp, diffp, dp, dpres, motor diff, diff press, sppdiff, pressure "
            "difference, pressure diff, diff pressure, motor differential, delta p, dpress, diffpress, "
            "differential press, motor differential pressure, mud motor diff, dpm, difpress"
        ),
        (-3.0e7, 5.0e7),
    ),
    Channel(
        "toolface",
        "angle",
        "toolface",
        _names(
            "toolface, gtf, tool face, tf, tfo, tface, tf angle, grav toolface, gravity toolface, sgtf, "
            "toolface gravity, mtf, smtf, magnetic toolface"
        ),
        (-6.3, 12.6),
    ),
    Channel(
        "downhole_wob",
        "force",
        "weight on bit measured downhole",
        _names(
            "downhole wob, dwob, dhwob, mwob, mwba, dwob rt, mwd downhole wob, wob downhole, dh wob, "
            "dwob avg, dwoba, downhole weight on bit"
        ),
        (-1.0e6, 1.0e6),
    ),
    Channel(
        "downhole_torque",
        "moment",
        "torque measured downhole",
        _names(
            "downhole torque, dtor, dhtq, mtqa, dtor rt, mwd downhole torque, torque downhole, dh "
            "torque, dtq, dtqa, dhtor, dtor avg, dtorque"
        ),
        (-6.0e4, 1.5e5),
    ),
    Channel(
        "inclination",
        "angle",
        "inclination measured while drilling",
        _names(
            "inclination, inc, incl, continuous inclination, cont inc, inc cont, mwd inclination, mwd inc, "
            "sinc, svy inclination, inc rt, incl rt, dni inc, near bit inclination"
        ),
        (-0.02, 2.6),
    ),
    Channel(
        "bit_tvd",
        "length",
        "true vertical depth of the bit, as the rig worked it out",
        _names("bit tvd, dbtv, tvd bit, bit depth tvd, vbitdep, deptbitv, depth bit vertical"),
        (-300.0, 12000.0),
    ),
    Channel(
        "slips",
        "dimensionless",
        "1 while the string hangs in slips",
        _names(
            "slips, inslips status, stis, in slips, slip status, slips status, inslips, slips set, "
            "slip, slipstat"
        ),
        (0.0, 1.0),
    ),
)
BY_NAME = {channel.name: channel for channel in CHANNELS}
# Depth names that say neither bit nor hole: alone in a time log they are the bit's.
GENERIC_DEPTH = frozenset(
    {"dept", "depth", "md", "mdepth", "measureddepth", "depthmd", "deptm", "depthmeasured"}
)
# Look-alikes: names that would pass for a channel but are something else, and why they are left alone.
LOOKALIKES: dict[str, str] = {
    **dict.fromkeys(
        _names(
            "vdepth, dver, deptvert, tvd, holedepthtvd, tvdhole"
        ),
        "a true vertical depth",
    ),
    **dict.fromkeys(
        _names("bitrpm, motorrpm, rpmbit, totalrpm, mrpm, drpm, dhrpm"), "not the surface rotation"
    ),
    **dict.fromkeys(
        _names("hkldmin, hkln, hookloadmin, minhookload"), "a minimum; the average is what is used"
    ),
    **dict.fromkeys(_names("tqinamps, tqinampsav, tqinampsmx"), "a motor current, not a torque"),
    **dict.fromkeys(_names("flowoutpc, mfop, flowoutpercent, flowoutpct"), "a flow in percent of a paddle"),
    **dict.fromkeys(_names("drtm, deptretm, lagdepth, depthofreturns"), "the depth the returns come from"),
    **dict.fromkeys(_names("chkp, chokepressure, whp, casingpressure"), "the choke's pressure"),
}
