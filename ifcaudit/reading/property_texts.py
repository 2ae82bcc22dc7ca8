"""Property texts that may name a section or a grade, recognised by the property's name in several languages."""

from __future__ import annotations

import re
from collections.abc import Iterable
from enum import StrEnum
from functools import cache
from typing import Any


class PropertyKind(StrEnum):
    """What a property's name promises, as far as the audit can use it."""

    GRADE = "grade"
    SECTION = "section"
    TYPE = "type"
    DENSITY = "density"
    OTHER = "other"


_GRADE = re.compile(
    r"""^(?:
        (?:steel|material|strength|concrete|timber|structural|stress)?(?:grade|strengthclass|gradeclass)
      | (?:structural)?material(?:quality)? | strengthclass | concreteclass | timberclass
      | (?:staal|beton|hout|materiaal)?(?:kwaliteit|sterkteklasse)
      | (?:stahl|beton|holz|material)?(?:gute|guete|sorte|festigkeitsklasse|qualitat|qualitaet|gutetext)
      | nuance(?:d?acier)? | qualite(?:d?acier|materiau)? | classe(?:de)?resistance | classedebeton
      | calidad(?:de(?:l)?(?:acero|material))? | claseresistente | tipodeacero
      | qualita | classediresistenza | hallfasthetsklass | stalkvalitet | betongkvalitet
    )$""",
    re.VERBOSE,
)
_SECTION = re.compile(
    r"""^(?:
        (?:steel|beam|member|cross)?sections?(?:name|size|type|shape|designation)?
      | (?:beam)?crosssection(?:name|type|designation)?
      | (?:steel|beam|last)?profiles?(?:name|type|size|designation)?
      | shape(?:name|designation)? | designation | nominalsize | sizename
      | profiel(?:nummer|naam|type)?(?:profile|lastprofile)? | doorsnede | sectie
      | profil(?:e)?(?:name|nom|bezeichnung|typ|text)? | querschnitt(?:sname|stype)?
      | perfil | seccion(?:transversal)? | profilo | sezione | poikkileikkaus | profiili | tvarsnitt
    )$""",
    re.VERBOSE,
)
_TYPE = re.compile(r"^(?:size|type|typename|typ|typename|tipo|tyyppi|maat|grosse|taille|reference|familyandtype)$")
_FOLD = str.maketrans("äöüéèêëáàâíìóòôúùñåõç", "aoueeeeaaaiiooouunaoc")


@cache
def property_kind(name: str) -> PropertyKind:
    """Tell what a property with this name may hold.

    Example:
        >>> property_kind("staalkwaliteit").value, property_kind("Beam Cross Section").value
        ('grade', 'section')
        >>> property_kind("Electrode strength").value
        'other'
    """
    folded = re.sub(r"[^a-z0-9]", "", str(name).lower().translate(_FOLD).replace("ß", "ss"))
    if _GRADE.match(folded):
        return PropertyKind.GRADE
    if _SECTION.match(folded):
        return PropertyKind.SECTION
    if _TYPE.match(folded):
        return PropertyKind.TYPE
    if folded in {"massdensity", "density", "dichtheid", "dichte", "rohdichte", "densite", "densidad"}:
        return PropertyKind.DENSITY
    return PropertyKind.OTHER


def text_of(value: Any) -> str:
    """Return a property value as stripped text; empty for numbers, which name neither grade nor section."""
    if value is None:
        return ""
    inner = value[0] if hasattr(value, "is_a") else value
    if isinstance(inner, tuple):
        return text_of(inner[0]) if inner else ""
    return inner.strip() if isinstance(inner, str) else ""


class PropertyReader:
    """Reads the useful properties of property sets; each property entity is looked at once."""

    def __init__(self, model: Any) -> None:
        self._model = model
        self._properties: dict[int, tuple[PropertyKind, str]] = {}
        self._sets: dict[int, tuple[tuple[PropertyKind, str], ...]] = {}

    def texts(self, property_set: Any) -> tuple[tuple[PropertyKind, str], ...]:
        """Return the (kind, text) pairs of a property set that name a grade, a section or a type."""
        key = property_set.id()
        found = self._sets.get(key)
        if found is None:
            found = self._sets[key] = self.texts_among(self._model.get(property_set, "HasProperties") or ())
        return found

    def texts_among(self, properties: Iterable[Any]) -> tuple[tuple[PropertyKind, str], ...]:
        """Return the useful (kind, text) pairs among property entities."""
        known = self._properties
        found = []
        for entity in properties:
            key = entity.id()
            pair = known.get(key)
            if pair is None:
                pair = known[key] = self._read(entity)
            if pair[1]:
                found.append(pair)
        return tuple(found)

    def _read(self, entity: Any) -> tuple[PropertyKind, str]:
        name = entity.get_argument(0)  # Name is the first attribute of every IfcProperty in every schema
        kind = property_kind(name) if name else PropertyKind.OTHER
        if kind in {PropertyKind.OTHER, PropertyKind.DENSITY}:
            return kind, ""
        for attribute in ("NominalValue", "EnumerationValues", "ListValues"):
            text = text_of(self._model.get(entity, attribute))
            if text:
                return kind, text
        return kind, ""
