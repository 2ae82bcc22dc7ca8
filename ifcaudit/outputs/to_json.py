"""Writes the whole record as ``audit.json``.

Conventions:

- SI throughout. A key whose value is a quantity ends with its unit: ``_m``, ``_m2``, ``_N``, ``_N_m``; a key without a
  unit is text or a plain ratio. Only ``load_balance`` is in ``_kN``, for people.
- In ``checks``, ``demand`` and ``capacity`` have the unit given beside them as ``unit``, and each of ``details`` has
  its own. Values of ``inputs`` are SI.
- ``null`` means not known for this beam (and stands for a number that is not finite).
- Numbers are rounded to 12 significant digits, keys come in a fixed order, one beam stands on one line: the same audit
  gives the same bytes, and two audits can be compared line by line.
"""

from __future__ import annotations

import json
import math
from collections.abc import Mapping
from dataclasses import fields, is_dataclass
from enum import Enum
from pathlib import Path
from typing import Any, TypeAlias

from ifcaudit.model.audit import Audit, BeamResult, Check, CheckName, LoadBalance
from ifcaudit.outputs import FileWriter
from ifcaudit.provenance import Sourced
from ifcaudit.units import convert

Json: TypeAlias = "dict[str, Json] | list[Json] | str | float | int | bool | None"

_UNIT_SUFFIXES = {
    "span": "_m",
    "tributary_width": "_m",
    "tributary_area": "_m2",
    "dead_load": "_N",
    "live_load": "_N",
    "moment": "_N_m",
    "moment_capacity": "_N_m",
    "shear": "_N",
    "shear_capacity": "_N",
    "live_deflection": "_m",
    "live_deflection_limit": "_m",
}
_CHECK_UNITS = {
    CheckName.FLEXURE: "N m",
    CheckName.SHEAR: "N",
    CheckName.LIVE_DEFLECTION: "m",
    CheckName.TOTAL_DEFLECTION: "m",
}


def plain(value: Any) -> Json:
    """Turn a record, a sequence, an enumeration or a number into what JSON can hold.

    Example:
        >>> plain((0.1 + 0.2, float("nan"), -0.0, "W16X26"))
        [0.3, None, 0.0, 'W16X26']
    """
    if value is None or (isinstance(value, (bool, str)) and not isinstance(value, Enum)):
        return value
    if isinstance(value, Enum):
        return value.name.lower() if isinstance(value, int) else plain(value.value)
    if isinstance(value, int):
        return value
    if isinstance(value, float):
        return float(f"{value:.12g}") + 0.0 if math.isfinite(value) else None
    return _plain_container(value)


def _plain_container(value: Any) -> Json:
    if is_dataclass(value) and not isinstance(value, type):
        return {field.name: plain(getattr(value, field.name)) for field in fields(value)}
    if isinstance(value, Mapping):
        return {str(plain(key)): plain(item) for key, item in value.items()}
    if isinstance(value, (tuple, list)):
        return [plain(item) for item in value]
    if hasattr(value, "tolist"):  # numpy scalars and arrays
        return plain(value.tolist())
    return str(value)


def _check(check: Check) -> Json:
    return {
        "name": check.name.value,
        "demand": plain(check.demand),
        "capacity": plain(check.capacity),
        "unit": _CHECK_UNITS[check.name],
        "utilization": plain(check.utilization),
        "combination": check.combination,
        "clause": check.clause,
        "limit_state": check.limit_state,
        "position_m": plain(check.position),
        "details": [{"name": name, "value": plain(value), "unit": unit} for name, value, unit in check.details],
    }


def _input(name: str, sourced: Sourced[object]) -> Json:
    return {
        "name": name,
        "value": plain(sourced.value),
        "source": sourced.source.label,
        "where": sourced.where,
        "remedy": sourced.remedy,
    }


def _beam(beam: BeamResult) -> Json:
    record: dict[str, Json] = {}
    for field in fields(beam):
        name = field.name
        if name == "checks":
            record[name] = [_check(check) for check in beam.checks]
        elif name == "inputs":
            record[name] = [_input(*item) for item in beam.inputs]
        else:
            record[name + _UNIT_SUFFIXES.get(name, "")] = plain(getattr(beam, name))
    return record


def _residual(applied: float, reaching: float) -> tuple[float, float | None]:
    residual = applied - reaching
    return residual, (100.0 * residual / applied if applied else None)


def load_balance(balance: LoadBalance) -> dict[str, Json]:
    """Return both invariants: loads in kN, areas in m², what is lost on the way also in per cent of what is applied."""
    to_kilonewton = convert(1.0, "N", "kN")
    record: dict[str, Json] = {}
    for case in ("dead", "live"):
        applied: float = getattr(balance, f"{case}_applied")
        reaching: float = getattr(balance, f"{case}_reaching_supports")
        residual, per_cent = _residual(applied, reaching)
        record[f"{case}_applied_kN"] = plain(applied * to_kilonewton)
        record[f"{case}_reaching_supports_kN"] = plain(reaching * to_kilonewton)
        record[f"{case}_unsupported_kN"] = plain(getattr(balance, f"{case}_unsupported") * to_kilonewton)
        record[f"{case}_residual_kN"] = plain(residual * to_kilonewton)
        record[f"{case}_residual_percent"] = plain(per_cent)
    record["slab_area_m2"] = plain(balance.slab_area)
    record["assigned_area_m2"] = plain(balance.assigned_area)
    record["unassigned_area_m2"] = plain(balance.unassigned_area)
    return record


def _heading(audit: Audit) -> dict[str, Json]:
    rules = audit.rules
    return {
        "model_file": audit.model_file,
        "schema": audit.schema,
        "version": audit.version,
        "cautions": list(audit.cautions),
        "rules": {
            "name": rules.name,
            "title": rules.title,
            "editions": list(rules.editions),
            "values": [{"name": name, "value": value, "where": where} for name, value, where in rules.values],
        },
        "load_balance": load_balance(audit.load_balance),
        "assumptions": [plain(assumption) for assumption in audit.assumptions],
        "findings": list(audit.findings),
    }


def write(audit: Audit, path: Path) -> None:
    """Write the whole record to a file, in UTF-8.

    Args:
        audit: What to write.
        path: File to write.
    """
    heading = json.dumps(_heading(audit), indent=2, ensure_ascii=False, allow_nan=False)
    encode = json.JSONEncoder(ensure_ascii=False, allow_nan=False).encode
    beams = ",\n    ".join(encode(_beam(beam)) for beam in sorted(audit.beams, key=lambda beam: beam.entity_id))
    listed = f"[\n    {beams}\n  ]" if beams else "[]"
    text = f'{heading.removesuffix("}").rstrip()},\n  "beams": {listed}\n}}\n'
    # A lone surrogate, left by a wrongly decoded name, becomes its JSON escape.
    path.write_text(text, encoding="utf-8", errors="backslashreplace", newline="\n")


def _write_json(audit: Audit, source: Path, target: Path, units: str) -> None:
    write(audit, target)


FILES: Mapping[str, FileWriter] = {"audit.json": _write_json}
