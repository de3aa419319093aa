"""`friction.json`: what the calibration found, and how sure it is."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from forensics.estimate import Estimate
from forensics.exports.stamps import number, stamp
from forensics.exports.text import write_json
from forensics.findings import Findings
from forensics.friction.result import (
    Calibration,
    FrictionSection,
    HeldOut,
    OpenDirection,
    Parameter,
    Reading,
)
from forensics.logs.zone import tzinfo_of

FORMAT = 1
KILO = 1e3

# Of a parameter in SI: what it is divided by, the unit it is then in, and its digits.
PARAMETER_UNITS = {"N": (KILO, "kN", 3), "N.m": (KILO, "kN.m", 3), "-": (1.0, "-", 5)}


def friction_content(findings: Findings) -> dict[str, Any]:
    """Lay out a calibration under the contract's names.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.

    Returns
    -------
    dict
        Content of `friction.json`: forces [kN], moments [kN.m], depths [m]; None where there is no
        number.
    """
    calibration = findings.calibration
    loss = calibration.torque_loss
    return {
        "sections": [_section(section) for section in calibration.sections],
        **_force("block_weight_kN", calibration.block_weight),
        **_force("hookload_bias_kN", calibration.hookload_bias),
        "rotational_friction": _rotational(calibration),
        "residual_rms_kN": number(calibration.residual_rms / KILO, 3),
        "pipe_above_rotary": number(calibration.pipe_above_rotary.value, 3),
        "weight_scale": number(calibration.weight_scale.value, 4),
        "torque_loss_kNm": number(loss.value / KILO, 3) if loss is not None else None,
        "can_not_tell": list(calibration.can_not_tell),
        "held_out": _held_out(calibration.held_out),
        "open_directions": [_direction(direction) for direction in calibration.open_directions],
        "parameters": [_parameter(parameter) for parameter in calibration.parameters],
        "readings": _readings(findings),
        "breakover": _breakover(findings),
    }


def write_friction(findings: Findings, path: Path) -> None:
    """Write `friction.json`.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    path : Path
        The file to write.
    """
    write_json({"format": FORMAT, "case": findings.case.id, **friction_content(findings)}, path)


def _factor(estimate: Estimate) -> dict[str, Any]:
    return {
        "friction_factor": number(estimate.value, 4),
        "low": number(estimate.low, 4),
        "high": number(estimate.high, 4),
        "samples": int(estimate.samples),
        "determined": bool(estimate.determined),
        "source": estimate.source,
    }


def _section(section: FrictionSection) -> dict[str, Any]:
    return {
        "kind": section.kind,
        "top_m": number(section.top, 2),
        "bottom_m": number(section.bottom, 2),
        **_factor(section.factor),
    }


def _rotational(calibration: Calibration) -> dict[str, Any] | None:
    """Give the rotational factor in the form of a section that spans the whole hole."""
    if calibration.rotational is None:
        return None
    tops = [section.top for section in calibration.sections]
    bottoms = [section.bottom for section in calibration.sections]
    whole = FrictionSection(
        "all", min(tops, default=float("nan")), max(bottoms, default=float("nan")), calibration.rotational
    )
    return _section(whole)


def _held_out(proof: HeldOut | None) -> dict[str, Any] | None:
    """Give the errors on stands left out beside those of the fit to all."""
    if proof is None:
        return None
    return {
        "folds": proof.folds,
        "readings": proof.readings,
        "rms_kN": number(proof.rms / KILO, 3),
        "in_sample_rms_kN": number(proof.in_sample / KILO, 3),
        "torque_rms_kNm": number(proof.torque_rms / KILO, 3),
        "torque_in_sample_rms_kNm": number(proof.torque_in_sample / KILO, 3),
    }


def _direction(direction: OpenDirection) -> dict[str, Any]:
    """Give a direction in SI units: moves of one sigma, and what was learned against what was assumed."""
    return {
        "moves": {name: number(move, 6) for name, move in direction.moves.items()},
        "known": number(direction.known, 3),
        "sentence": direction.sentence,
    }


def _parameter(parameter: Parameter) -> dict[str, Any]:
    scale, unit, digits = PARAMETER_UNITS[parameter.unit]
    estimate = parameter.estimate
    return {
        "name": parameter.name,
        "unit": unit,
        "value": number(estimate.value / scale, digits),
        "low": number(estimate.low / scale, digits),
        "high": number(estimate.high / scale, digits),
        "determined": bool(estimate.determined),
        "source": estimate.source,
    }


def _force(name: str, estimate: Estimate) -> dict[str, Any]:
    stem = name.removesuffix("_kN")
    return {
        name: number(estimate.value / KILO, 3),
        f"{name}_low": number(estimate.low / KILO, 3),
        f"{name}_high": number(estimate.high / KILO, 3),
        f"{stem}_determined": bool(estimate.determined),
        f"{stem}_source": estimate.source,
    }


def _readings(findings: Findings) -> list[dict[str, Any]]:
    tz = tzinfo_of(findings.log.timezone)
    calibration = findings.calibration
    rows = []
    for reading, residual in zip(calibration.readings, calibration.residuals, strict=True):
        unit = _reading_unit(reading)
        rows.append(
            {
                "kind": reading.kind,
                "start": stamp(reading.start, tz),
                "end": stamp(reading.end, tz),
                "bit_depth_m": number(reading.bit_depth, 2),
                f"value_{unit}": number(reading.value / KILO, 3),
                f"residual_{unit}": number(residual / KILO, 3),
                "samples": int(reading.samples),
                "pumping": bool(reading.pumping),
                "by_hand": bool(reading.by_hand),
                "near_buckling": bool(reading.buckled),
            }
        )
    return rows


def _breakover(findings: Findings) -> list[dict[str, Any]]:
    """Give each start upward of a string that stood still."""
    found = findings.calibration.breakover
    if found is None:
        return []
    tz = tzinfo_of(findings.log.timezone)
    return [
        {
            "start": stamp(float(findings.log.time[found.row[k]]), tz),
            "bit_depth_m": number(found.bit[k], 2),
            "still_s": number(found.still[k], 1),
            "peak_kN": number(found.peak[k] / KILO, 3),
            "pick_up_kN": number(found.steady[k] / KILO, 3),
            "excess_kN": number((found.peak[k] - found.steady[k]) / KILO, 3),
            "pumping": bool(found.pumping[k]),
        }
        for k in range(len(found))
    ]


def _reading_unit(reading: Reading) -> str:
    return "kNm" if reading.kind == "torque" else "kN"
