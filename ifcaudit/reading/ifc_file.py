"""Opens a model, and answers for its schema and units."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from math import inf
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.util.unit

from ifcaudit.errors import ModelFileError
from ifcaudit.reading.malformed import MALFORMED

NO_LENGTH_UNIT = (
    "the model states no length unit that can be read: metres are assumed; "
    "if spans look wrong, export it with its units"
)
_SCHEMA = re.compile(rb"FILE_SCHEMA\s*\(\s*\(\s*'([^']*)'", re.IGNORECASE)
_INSTANCE = re.compile(rb"#(\d+)\s*=")
_TAIL = 1 << 16
"""Bytes at the end of a file within which its last instance stands, unless that one is very long."""
_WHOLE_FILES = "export the model again, or ask for the whole file"


@dataclass(slots=True, kw_only=True)
class Model:
    """An open model.

    Attributes:
        file: The library's file.
        name: Name of the file, without its folder.
        schema: ``IFC2X3``, ``IFC4`` or ``IFC4X3``.
        metre_per_unit: Factor from its length unit to metres.
        radian_per_unit: Factor from its plane-angle unit to radians.
        length_unit: Name of its length unit; empty when it states none.
        findings: Remarks on the file as a whole.
    """

    file: Any
    name: str
    schema: str
    metre_per_unit: float
    radian_per_unit: float
    length_unit: str
    findings: tuple[str, ...] = ()
    _declaration: Any = None
    _positions: dict[tuple[str, str], int] = field(default_factory=dict)

    def position(self, ifc_class: str, attribute: str) -> int:
        """Position of an attribute in a class of this model's schema; -1 where the class has none of the name.

        Positions differ between schemas, and reading by position is three times as fast as by name.
        """
        key = (ifc_class, attribute)
        position = self._positions.get(key)
        if position is None:
            entity = self._declaration.declaration_by_name(ifc_class).as_entity()
            names = [item.name() for item in entity.all_attributes()]
            position = self._positions[key] = names.index(attribute) if attribute in names else -1
        return position

    def get(self, entity: Any, attribute: str) -> Any:
        """Value of an attribute; ``None`` where it is empty, the class has none of the name, or nothing is given."""
        if not isinstance(entity, ifcopenshell.entity_instance):
            return None
        position = self.position(entity.is_a(), attribute)
        return None if position < 0 else entity.get_argument(position)


def open_model(path: Path) -> Model:
    """Open an IFC file.

    Args:
        path: A STEP physical file in IFC2X3, IFC4 or IFC4X3.

    Raises:
        ModelFileError: It is missing, a folder, no IFC file, truncated, of another schema, or malformed.
    """
    content = _content(path)
    schema = _stated_schema(path, content)
    try:
        file = ifcopenshell.open(str(path))
    except Exception as error:  # the library raises several kinds, none of them documented
        raise ModelFileError(f"{path}: cannot be read as IFC ({_one_line(error)}); {_WHOLE_FILES}") from None
    identifiers = _INSTANCE.findall(content[-_TAIL:]) or _INSTANCE.findall(content)
    if identifiers and not _holds(file, int(identifiers[-1])):
        raise ModelFileError(
            f"{path}: was read only in part (instance #{int(identifiers[-1])} at its end is missing); {_WHOLE_FILES}"
        )
    metre_per_unit, length_unit, findings = _length_unit(file)
    return Model(
        file=file,
        name=path.name,
        schema=schema,
        metre_per_unit=metre_per_unit,
        radian_per_unit=_radian_per_unit(file),
        length_unit=length_unit,
        findings=findings,
        _declaration=ifcopenshell.schema_by_name(file.schema_identifier),
    )


def _content(path: Path) -> bytes:
    """Read the file and refuse what is no complete STEP file."""
    if path.is_dir():
        raise ModelFileError(f"{path}: is a folder; name an IFC file")
    try:
        content = path.read_bytes()
    except FileNotFoundError:
        raise ModelFileError(f"{path}: no such file; check the path") from None
    except OSError as error:
        raise ModelFileError(f"{path}: cannot be opened ({error.strerror})") from None
    if not content.strip():
        raise ModelFileError(f"{path}: is empty; {_WHOLE_FILES}")
    if b"ISO-10303-21;" not in content[:4096].replace(b" ", b""):
        raise ModelFileError(f"{path}: is no IFC file (it does not begin with ISO-10303-21); name a .ifc file")
    if b"END-ISO-10303-21" not in content[-4096:]:
        raise ModelFileError(f"{path}: is truncated (END-ISO-10303-21 is missing at its end); {_WHOLE_FILES}")
    return content


def _stated_schema(path: Path, content: bytes) -> str:
    found = _SCHEMA.search(content[: 1 << 16])
    stated = found.group(1).decode("ascii", "replace").upper() if found else ""
    for schema in ("IFC2X3", "IFC4X3", "IFC4"):
        allowed = {"IFC4X3": ("IFC4X3_ADD1", "IFC4X3_ADD2")}.get(schema, (schema,))
        if stated in allowed:
            return schema
    raise ModelFileError(
        f'{path}: states the schema "{stated or "none"}"; allowed are IFC2X3, IFC4 and IFC4X3_ADD2; '
        "export the model in one of these"
    )


def _one_line(error: BaseException) -> str:
    return " ".join(str(error).split())[:200] or type(error).__name__


def _holds(file: Any, identifier: int) -> bool:
    try:
        return file.by_id(identifier) is not None
    except RuntimeError:
        return False


def _length_unit(file: Any) -> tuple[float, str, tuple[str, ...]]:
    try:
        unit = ifcopenshell.util.unit.get_project_unit(file, "LENGTHUNIT") if file.by_type("IfcProject") else None
        scale = float(ifcopenshell.util.unit.calculate_unit_scale(file, "LENGTHUNIT")) if unit is not None else 1.0
    except MALFORMED:
        unit, scale = None, 1.0
    if unit is None or not 0.0 < scale < inf:
        return (
            1.0,
            "",
            (NO_LENGTH_UNIT,),
        )
    name = str(ifcopenshell.util.unit.get_full_unit_name(unit)).lower().replace("_", " ")
    return scale, name, ()


def _radian_per_unit(file: Any) -> float:
    if not file.by_type("IfcProject"):
        return 1.0
    try:
        return float(ifcopenshell.util.unit.calculate_unit_scale(file, "PLANEANGLEUNIT"))
    except MALFORMED:
        return 1.0
