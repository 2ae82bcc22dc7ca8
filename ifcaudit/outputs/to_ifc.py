"""Writes the results into a copy of the model: one property set ``IfcAudit_BeamCheck`` on every candidate beam.

The new instances are appended as text before the last ``ENDSEC;``; every byte of the original stays. Sets of an earlier
audit are cut out first, so that auditing an audited model gives the same file again. A file that is not written in the
usual form is written anew by the library, then appended to.

Choices:

- A utilization is an ``IfcRatioMeasure``: the ratio of two quantities of the same kind. It may exceed 1, which
  ``IfcNormalisedRatioMeasure`` forbids, and may be 0, which ``IfcPositiveRatioMeasure`` forbids.
- Values are in the units of the project. Where the project declares none of the kind, the value carries its own unit:
  m, m², kN, kN·m.
- A value that is not known, or not finite, is left out of the set instead of written empty.
- Beams share the property instances that are equal. GlobalIds follow from the GlobalId of the beam.
"""

from __future__ import annotations

import hashlib
import math
from base64 import b64encode
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from operator import attrgetter
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

from ifcaudit.errors import ModelFileError, UsageError
from ifcaudit.model.audit import Audit, BeamResult
from ifcaudit.outputs import FileWriter
from ifcaudit.outputs.step_sets import clear_sets
from ifcaudit.outputs.step_text import NotAppendableError, StepText, real

SET_NAME = "IfcAudit_BeamCheck"
_TO_IFC_DIGITS = bytes.maketrans(
    b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/",
    b"0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_$",
)
_LONGEST_LABEL = 255  # IfcLabel is STRING(255)


@dataclass(frozen=True, slots=True)
class _Property:
    name: str
    attribute: str
    measure: str
    unit_type: str = ""
    positive: bool = False


_LABEL, _TEXT, _RATIO = "IFCLABEL", "IFCTEXT", "IFCRATIOMEASURE"
PROPERTIES = (
    _Property("Status", "status", _LABEL),
    _Property("Reason", "reason", _TEXT),
    _Property("Governing", "governing", _LABEL),
    _Property("Utilization", "utilization", _RATIO),
    _Property("FlexureUtilization", "flexure_utilization", _RATIO),
    _Property("ShearUtilization", "shear_utilization", _RATIO),
    _Property("DeflectionUtilization", "deflection_utilization", _RATIO),
    _Property("Span", "span", "IFCPOSITIVELENGTHMEASURE", "LENGTHUNIT", positive=True),
    _Property("TributaryWidth", "tributary_width", "IFCLENGTHMEASURE", "LENGTHUNIT"),
    _Property("TributaryArea", "tributary_area", "IFCAREAMEASURE", "AREAUNIT"),
    _Property("DeadLoad", "dead_load", "IFCFORCEMEASURE", "FORCEUNIT"),
    _Property("LiveLoad", "live_load", "IFCFORCEMEASURE", "FORCEUNIT"),
    _Property("BendingMoment", "moment", "IFCTORQUEMEASURE", "TORQUEUNIT"),
    _Property("MomentCapacity", "moment_capacity", "IFCTORQUEMEASURE", "TORQUEUNIT"),
    _Property("LiveDeflection", "live_deflection", "IFCLENGTHMEASURE", "LENGTHUNIT"),
    _Property("LiveDeflectionLimit", "live_deflection_limit", "IFCLENGTHMEASURE", "LENGTHUNIT"),
    _Property("SectionForStrength", "sized_for_strength", _LABEL),
    _Property("SectionForStiffness", "sized_for_stiffness", _LABEL),
    _Property("SectionProposed", "sized", _LABEL),
    _Property("RuleSet", "", _LABEL),
    _Property("Assumptions", "assumptions", _TEXT),
)
# Scale to SI and the instances that say so, for a project that declares no unit of the kind; {0} … are their numbers.
_OWN_UNITS: Mapping[str, tuple[float, tuple[str, ...]]] = {
    "LENGTHUNIT": (1.0, ("IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.)",)),
    "AREAUNIT": (1.0, ("IFCSIUNIT(*,.AREAUNIT.,$,.SQUARE_METRE.)",)),
    "FORCEUNIT": (1e3, ("IFCSIUNIT(*,.FORCEUNIT.,.KILO.,.NEWTON.)",)),
    "TORQUEUNIT": (
        1e3,
        (
            "IFCSIUNIT(*,.FORCEUNIT.,.KILO.,.NEWTON.)",
            "IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.)",
            "IFCDERIVEDUNITELEMENT(#{0},1)",
            "IFCDERIVEDUNITELEMENT(#{1},1)",
            "IFCDERIVEDUNIT((#{2},#{3}),.TORQUEUNIT.,${name})",
        ),
    ),
}
_FALLBACK_OWNER = (
    "IFCPERSON($,'ifcaudit',$,$,$,$,$,$)",
    "IFCORGANIZATION($,'ifcaudit',$,$,$)",
    "IFCPERSONANDORGANIZATION(#{0},#{1},$)",
    "IFCAPPLICATION(#{1},'{version}','ifcaudit','ifcaudit')",
    "IFCOWNERHISTORY(#{2},#{3},$,.NOCHANGE.,$,$,$,0)",  # date 0: the same input gives the same bytes
)


def write(audit: Audit, source: Path, target: Path, opened: Any = None) -> None:
    """Write a copy of the model with the results in it.

    Args:
        audit: The results; every beam has to be an instance of the model.
        source: The model audited; it is only read.
        target: File to write; another than ``source``.
        opened: The model as ifcopenshell opened it, if it is at hand: saves looking for its units.

    Raises:
        UsageError: ``target`` is ``source``.
        ModelFileError: The source is no STEP file, cannot be read, or is not the model the results belong to.
    """
    if target.exists() and target.samefile(source):
        raise UsageError(f"{target}: the audited model would overwrite its own input; choose another folder with --out")
    text, added = _without_earlier_sets(_read(source), source)
    _require_same_model(audit, text, source)
    block = _block(audit, text, added, opened).encode("ascii") if audit.beams else b""
    with target.open("wb") as file:
        file.write(memoryview(text.data)[: text.end])
        file.write(block)
        file.write(memoryview(text.data)[text.end :])


def _read(source: Path) -> bytes:
    try:
        data = source.read_bytes()
    except OSError as error:
        raise ModelFileError(f"{source}: cannot be read ({error.strerror})") from error
    if b"ISO-10303-21" not in data[:256]:
        raise ModelFileError(
            f"{source}: results can be written into STEP files (.ifc, starting with ISO-10303-21) only; "
            "save a compressed or XML model as .ifc and audit that"
        )
    return data


def _without_earlier_sets(data: bytes, source: Path) -> tuple[StepText, Mapping[int, tuple[int, ...]]]:
    name = SET_NAME.encode()
    try:
        try:
            text = StepText(data)
            text.numbers  # noqa: B018 - finds out whether the text can be split
        except NotAppendableError:
            text = StepText(_written_anew(source))
        if name not in text.data:
            return text, {}
        own_names = frozenset(b"'%s'" % item.name.encode() for item in PROPERTIES)
        cleared = clear_sets(text, b"'%s'" % name, own_names)
    except (NotAppendableError, ModelFileError) as error:
        raise ModelFileError(f"{source}: {error}") from error
    return cleared.text, cleared.added


def _written_anew(source: Path) -> bytes:
    """Return the file as the library writes it: numbers may look different, the model is the same."""
    import ifcopenshell

    try:
        model = ifcopenshell.open(str(source))
    except (OSError, RuntimeError, ifcopenshell.Error) as error:
        raise ModelFileError(f"cannot be opened ({error})") from error
    with TemporaryDirectory() as folder:
        path = Path(folder) / "model.ifc"
        model.write(str(path))
        return path.read_bytes()


def _require_same_model(audit: Audit, text: StepText, source: Path) -> None:
    """Results on the wrong instance would be worse than none: the model may have been exported again meanwhile."""
    text.rewind()
    for beam in sorted(audit.beams, key=lambda beam: beam.entity_id):
        statement = text.statement(beam.entity_id)
        if b"'%s'" % beam.global_id.encode("utf-8", "replace") not in statement:
            raise ModelFileError(
                f"{source}: #{beam.entity_id} is not the beam {beam.global_id} of the results; "
                "the file has changed since it was read: run the audit again"
            )


def _project_scales(text: StepText, opened: Any) -> dict[str, float]:
    """Return the size in SI of each unit the project declares, by type."""
    from ifcopenshell.util.unit import get_unit_scale

    model = _units_alone(text) if opened is None else opened  # held on to: instances do not outlive their model
    projects = model.by_type("IfcProject") if model else ()
    assignment = projects[0].UnitsInContext if projects else None
    scales: dict[str, float] = {}
    for unit in getattr(assignment, "Units", None) or ():
        if not (unit.is_a("IfcNamedUnit") or unit.is_a("IfcDerivedUnit")) or unit.UnitType in scales:
            continue
        try:
            scales[unit.UnitType] = float(get_unit_scale(unit))
        except (AttributeError, TypeError, ValueError, KeyError):
            continue  # a unit without its factor is as good as none
    return {unit_type: scale for unit_type, scale in scales.items() if math.isfinite(scale) and scale > 0.0}


def _units_alone(text: StepText) -> Any:
    """Open nothing but the project and its units, a few instances instead of the whole model; ``None`` without any."""
    import ifcopenshell

    project = text.first(b"IFCPROJECT")
    text.rewind()
    assignment = text.argument(project, 8) if project is not None else b""
    if project is None or not assignment.startswith(b"#"):
        return None
    schema = text.schema
    known = "IFC2X3" if schema.startswith("IFC2X") else "IFC4X3_ADD2" if schema.startswith("IFC4X") else "IFC4"
    own = b"#%d=IFCPROJECT('0000000000000000000000',$,$,$,$,$,$,$,%s);" % (project, assignment)
    statements = b"\n".join((own, *text.closure([int(assignment[1:])]))).decode("latin-1")
    header = (
        f"FILE_DESCRIPTION((''),'2;1');FILE_NAME('','1970-01-01T00:00:00',(''),(''),'','','');FILE_SCHEMA(('{known}'));"
    )
    return ifcopenshell.file.from_string(
        f"ISO-10303-21;\nHEADER;\n{header}\nENDSEC;\nDATA;\n{statements}\nENDSEC;\nEND-ISO-10303-21;\n"
    )


@dataclass(slots=True)
class _Block:
    """Instances to append, numbered on from the highest in the file."""

    number: int
    lines: list[str] = field(default_factory=list)
    own_units: dict[str, str] = field(default_factory=dict)

    def add(self, instances: Iterable[str]) -> range:
        """Add instances that do not refer to each other; return their numbers."""
        first = self.number + 1
        lines = [f"#{number}={instance};" for number, instance in enumerate(instances, first)]
        self.lines += lines
        self.number += len(lines)
        return range(first, first + len(lines))

    def add_chain(self, templates: tuple[str, ...], **values: str) -> int:
        """Add instances that refer to each other by position; return the number of the last."""
        numbers: list[int] = []
        for template in templates:
            numbers += self.add([template.format(*numbers, **values)])
        return numbers[-1]

    def own_unit(self, unit_type: str, schema: str) -> str:
        """Return the reference to a unit the project does not declare, added when first asked for."""
        if unit_type not in self.own_units:
            name = ",$" if schema.startswith("IFC4X3") else ""  # IFC4X3 gave IfcDerivedUnit a name
            self.own_units[unit_type] = f"#{self.add_chain(_OWN_UNITS[unit_type][1], name=name)}"
        return self.own_units[unit_type]


def _block(audit: Audit, text: StepText, added: Mapping[int, tuple[int, ...]], opened: Any) -> str:
    """Return the text to append: the distinct properties, column by column, then a set and a relation per beam."""
    block = _Block(text.highest)
    owner = _owner(audit, text, block)
    beams = sorted(audit.beams, key=lambda beam: beam.entity_id)
    columns = _columns(audit, beams, _project_scales(text, opened))
    members = [
        _property_references(block, item, column, text.schema) for item, column in zip(PROPERTIES, columns, strict=True)
    ]
    members.append(["".join(f"#{number}," for number in added.get(beam.entity_id, ())) for beam in beams])
    rows = ["".join(row)[:-1] for row in zip(*members, strict=True)]
    ids = list(_global_ids(beams))
    sets = block.add(
        f"IFCPROPERTYSET('{set_id}',{owner},'{SET_NAME}',$,({row}))" for (set_id, _), row in zip(ids, rows, strict=True)
    )
    block.add(
        f"IFCRELDEFINESBYPROPERTIES('{relation_id}',{owner},$,$,(#{beam.entity_id}),#{number})"
        for (_, relation_id), beam, number in zip(ids, beams, sets, strict=True)
    )
    newline = text.newline.decode()
    return newline.join((*block.lines, ""))


def _property_references(block: _Block, item: _Property, column: _Column, schema: str) -> list[str]:
    """Add the distinct values of one property; return per beam the reference with a comma, empty where not known."""
    values = dict.fromkeys(column.values)
    values.pop("", None)
    unit = block.own_unit(column.own_unit, schema) if values and column.own_unit else "$"
    head, tail = f"IFCPROPERTYSINGLEVALUE('{item.name}',$,{item.measure}(", f"),{unit})"
    numbers = block.add(f"{head}{value}{tail}" for value in values)
    references = dict(zip(values, (f"#{number}," for number in numbers), strict=True))
    references[""] = ""
    return [references[value] for value in column.values]


def _owner(audit: Audit, text: StepText, block: _Block) -> str:
    """Return the owner history to refer to: one of the file; in IFC2X3, which demands one, a new one if need be."""
    existing = text.first(b"IFCOWNERHISTORY")
    if existing is not None:
        return f"#{existing}"
    if not text.schema.startswith("IFC2X"):
        return "$"
    return f"#{block.add_chain(_FALLBACK_OWNER, version=audit.version or '0')}"


@dataclass(frozen=True, slots=True)
class _Column:
    """Values of one property as STEP text, empty where not known; the kind of own unit they need, empty for none."""

    values: list[str]
    own_unit: str = ""


def _columns(audit: Audit, beams: list[BeamResult], scales: Mapping[str, float]) -> Iterator[_Column]:
    for item in PROPERTIES:
        if item.measure in {_LABEL, _TEXT}:
            longest = _LONGEST_LABEL if item.measure == _LABEL else None
            yield _Column(_texts(audit, beams, item.attribute, longest))
            continue
        scale, own_unit = _scale(item.unit_type, scales)
        numbers = map(attrgetter(item.attribute), beams)
        yield _Column([_number(value, scale, positive=item.positive) for value in numbers], own_unit)


def _scale(unit_type: str, scales: Mapping[str, float]) -> tuple[float, str]:
    """Return the size of the unit in SI, and the kind of own unit the value needs, empty for none."""
    if not unit_type:
        return 1.0, ""
    return (scales[unit_type], "") if unit_type in scales else (_OWN_UNITS[unit_type][0], unit_type)


def _number(value: float | None, scale: float, *, positive: bool) -> str:
    if value is None or not math.isfinite(value) or (positive and value <= 0.0):
        return ""
    return real(value / scale)


def _texts(audit: Audit, beams: list[BeamResult], attribute: str, longest: int | None) -> list[str]:
    import ifcopenshell

    encoded: dict[str, str] = {"": ""}
    column: list[str] = []
    for beam in beams:
        value = getattr(beam, attribute) if attribute else _rule_set(audit)
        words = "; ".join(value) if isinstance(value, tuple) else str(value)
        if words not in encoded:
            encoded[words] = ifcopenshell.encode_spf_string(_shortened(words, longest))
        column.append(encoded[words])
    return column


def _shortened(text: str, longest: int | None) -> str:
    # A lone surrogate, left by a wrongly decoded name, has no place in a STEP string.
    text = text.encode("utf-8", "replace").decode("utf-8")
    return text if longest is None or len(text) <= longest else text[: longest - 3] + "..."


def _rule_set(audit: Audit) -> str:
    editions = ", ".join(audit.rules.editions)
    return f"{audit.rules.name}: {editions}" if editions else audit.rules.name


def _global_ids(beams: list[BeamResult]) -> Iterator[tuple[str, str]]:
    """Yield the GlobalIds of each beam's set and relation: a hash of the beam's own.

    Exports exist in which two beams share a GlobalId; the second takes its place in the file into the hash.
    """
    seen: dict[str, int] = {}
    for beam in beams:
        occurrence = seen[beam.global_id] = seen.get(beam.global_id, 0) + 1
        key = beam.global_id if occurrence == 1 else f"{beam.global_id} {occurrence}"
        digest = hashlib.blake2b(f"{SET_NAME} {key}".encode("utf-8", "replace"), digest_size=32).digest()
        yield compressed(digest[:16]), compressed(digest[16:])


def compressed(number: bytes) -> str:
    r"""Write 128 bits as the 22 characters of an IfcGloballyUniqueId: base 64 with digits, A-Z, a-z, ``_`` and ``$``.

    The library's own function takes hexadecimal text and is four times as slow.

    Example:
        >>> compressed(bytes(15) + b"\x41")
        '0000000000000000000011'
    """
    return b64encode(bytes(2) + number).translate(_TO_IFC_DIGITS)[2:].decode("ascii")


def _write_model(audit: Audit, source: Path, target: Path, units: str) -> None:
    write(audit, source, target)


FILES: Mapping[str, FileWriter] = {"{model}.audited.ifc": _write_model}
