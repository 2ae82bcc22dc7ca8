"""Materials as the model writes them: names, grades, densities, layers, profiles. Nothing is interpreted here."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from math import isfinite
from typing import Any

from ifcaudit.model.material import MaterialText
from ifcaudit.reading.ifc_file import Model
from ifcaudit.reading.property_texts import PropertyKind, PropertyReader, property_kind

_SI_PREFIXES = {
    "EXA": 1e18, "PETA": 1e15, "TERA": 1e12, "GIGA": 1e9, "MEGA": 1e6, "KILO": 1e3, "HECTO": 1e2, "DECA": 1e1,
    "DECI": 1e-1, "CENTI": 1e-2, "MILLI": 1e-3, "MICRO": 1e-6, "NANO": 1e-9, "PICO": 1e-12,
}  # fmt: skip
_PREFIX_POWER = {"SQUARE_METRE": 2, "CUBIC_METRE": 3}  # a prefix belongs to the metre that is squared or cubed


@dataclass(frozen=True, slots=True, kw_only=True)
class MaterialLayer:
    """One layer of a material layer set.

    Attributes:
        thickness: Positive [m].
        material: What the model says about its material; the name ``air gap`` for a ventilated layer without one.
    """

    thickness: float
    material: MaterialText


class Materials:
    """Reads material definitions, each once.

    Args:
        model: The opened file.
        properties: Reader of property sets, shared with the relations.
    """

    def __init__(self, model: Model, properties: PropertyReader) -> None:
        self._model = model
        self._properties = properties
        self._texts: dict[int, MaterialText] = {}
        self._layers: dict[int, tuple[MaterialLayer, ...]] = {}

    def text(self, definition: Any) -> MaterialText:
        """Return names, grades and density of any material definition; a single density only when all agree."""
        key = definition.id()
        found = self._texts.get(key)
        if found is None:
            found = self._texts[key] = self._read_text(definition)
        return found

    def layers(self, definition: Any) -> tuple[MaterialLayer, ...]:
        """Return the layers of a layer set or its usage in their order, without empty ones; else nothing."""
        key = definition.id()
        if key not in self._layers:
            self._layers[key] = self._read_layers(definition)
        return self._layers[key]

    def profile(self, definition: Any) -> Any | None:
        """Return the profile of a profile set or its usage: the composite one, else that of the only member."""
        profile_set = self._profile_set(definition)
        if profile_set is None:
            return None
        composite = self._model.get(profile_set, "CompositeProfile")
        members: tuple[Any, ...] = self._model.get(profile_set, "MaterialProfiles") or ()
        if composite is not None or len(members) != 1:
            return composite
        return self._model.get(members[0], "Profile")

    def _profile_set(self, definition: Any) -> Any | None:
        named = definition.is_a()
        if named.startswith("IfcMaterialProfileSetUsage"):
            return self._model.get(definition, "ForProfileSet")
        return definition if named == "IfcMaterialProfileSet" else None

    def _read_text(self, definition: Any) -> MaterialText:
        materials = self._materials_in(definition)
        names: dict[str, None] = {}
        grades: dict[str, None] = {}
        densities = set()
        for material in materials:
            for attribute in ("Name", "Category"):
                name = str(self._model.get(material, attribute) or "").strip()
                if name:
                    names.setdefault(name)
            grades.update(dict.fromkeys(self._grades(material)))
            densities.add(self._density.get(material.id()))
        grades.update(dict.fromkeys(self._grades(definition)))
        density = densities.pop() if len(densities) == 1 else None
        return MaterialText(names=tuple(names), grades=tuple(grades), density=density)

    def _materials_in(self, definition: Any) -> list[Any]:
        """Return the single materials of a definition, in order, missing ones left out."""
        named = definition.is_a()
        if named == "IfcMaterial":
            return [definition]
        if named == "IfcMaterialList":
            found = list(self._model.get(definition, "Materials") or ())
        else:
            found = [self._model.get(member, "Material") for member in self._members(definition, named)]
        return [material for material in found if material is not None]

    def _members(self, definition: Any, named: str) -> tuple[Any, ...]:
        if named.startswith("IfcMaterialLayerSet"):
            return self._layer_entities(definition)
        if named.startswith("IfcMaterialProfileSet"):
            profile_set = self._profile_set(definition)
            return () if profile_set is None else self._model.get(profile_set, "MaterialProfiles") or ()
        if named == "IfcMaterialConstituentSet":
            # A set without order: by instance number, so that the same file gives the same answer.
            members = self._model.get(definition, "MaterialConstituents") or ()
            return tuple(sorted(members, key=lambda member: member.id()))
        if named.startswith(("IfcMaterialLayer", "IfcMaterialProfile", "IfcMaterialConstituent")):
            return (definition,)
        return ()

    def _layer_entities(self, definition: Any) -> tuple[Any, ...]:
        if definition.is_a("IfcMaterialLayerSetUsage"):
            definition = self._model.get(definition, "ForLayerSet")
        if definition is None or not definition.is_a("IfcMaterialLayerSet"):
            return ()
        return tuple(self._model.get(definition, "MaterialLayers") or ())

    def _read_layers(self, definition: Any) -> tuple[MaterialLayer, ...]:
        layers = []
        for entity in self._layer_entities(definition):
            thickness = float(self._model.get(entity, "LayerThickness") or 0.0) * self._model.metre_per_unit
            if not isfinite(thickness) or thickness <= 0.0:
                continue  # membranes are drawn without thickness, and weigh next to nothing
            layers.append(MaterialLayer(thickness=thickness, material=self._layer_material(entity)))
        return tuple(layers)

    def _layer_material(self, layer: Any) -> MaterialText:
        material = self._model.get(layer, "Material")
        if material is not None:
            return self.text(material)
        # IFC: a layer without material is a gap; IsVentilated says that air moves through it.
        ventilated = self._model.get(layer, "IsVentilated")
        gap = ventilated is True or ventilated == "TRUE"
        name = str(self._model.get(layer, "Name") or "").strip()
        return MaterialText(names=("air gap",) if gap else (name,) if name else ())

    # ---- properties of materials

    def _grades(self, definition: Any) -> list[str]:
        pairs = self._properties.texts_among(self._material_properties.get(definition.id(), ()))
        return [text for kind, text in pairs if kind is PropertyKind.GRADE]

    @cached_property
    def _material_properties(self) -> dict[int, list[Any]]:
        """Single properties by the id of the material they describe."""
        found: dict[int, list[Any]] = {}
        for entity in self._model.file.by_type("IfcMaterialProperties"):
            material = self._model.get(entity, "Material")
            if material is None:
                continue
            attribute = "Properties" if self._model.get(entity, "Properties") else "ExtendedProperties"
            found.setdefault(material.id(), []).extend(self._model.get(entity, attribute) or ())
        return found

    @cached_property
    def _density(self) -> dict[int, float]:
        """Stated density by material id [kg/m³]; zero means missing in every export seen, and is left out."""
        found: dict[int, float] = {}
        for entity in self._model.file.by_type("IfcMaterialProperties"):
            if entity.is_a("IfcGeneralMaterialProperties"):
                self._note_density(found, self._model.get(entity, "Material"), self._model.get(entity, "MassDensity"))
        for material_id, properties in self._material_properties.items():
            for single in properties:
                if single[0] and property_kind(single[0]) is PropertyKind.DENSITY:
                    value, unit = self._model.get(single, "NominalValue"), self._model.get(single, "Unit")
                    scale = self._density_scale if unit is None else unit_scale(unit)
                    if value is not None:
                        _keep_density(found, material_id, value[0], scale)
        return found

    def _note_density(self, found: dict[int, float], material: Any, value: Any) -> None:
        if material is not None and value is not None:
            _keep_density(found, material.id(), value, self._density_scale)

    @cached_property
    def _density_scale(self) -> float:
        """Factor of the project's density unit to kg/m³; 1 where the project declares none."""
        for assignment in self._model.file.by_type("IfcUnitAssignment"):
            for unit in self._model.get(assignment, "Units") or ():
                if unit.is_a("IfcDerivedUnit") and self._model.get(unit, "UnitType") == "MASSDENSITYUNIT":
                    return unit_scale(unit)
        return 1.0


def _keep_density(found: dict[int, float], material_id: int, value: Any, scale: float) -> None:
    if isinstance(value, (int, float)) and isfinite(value * scale) and value > 0.0:
        found.setdefault(material_id, value * scale)


def unit_scale(unit: Any) -> float:
    """Return the factor from an IFC unit to the SI base unit of its dimension (kilogram for mass).

    Args:
        unit: ``IfcSIUnit``, ``IfcConversionBasedUnit`` or ``IfcDerivedUnit``; 1 for anything else.
    """
    if unit is None:
        return 1.0
    if unit.is_a("IfcSIUnit"):
        power = _PREFIX_POWER.get(unit.Name, 1)
        prefix = _SI_PREFIXES.get(unit.Prefix or "", 1.0) ** power
        return prefix * (1e-3 if unit.Name == "GRAM" else 1.0)
    if unit.is_a("IfcConversionBasedUnit"):
        measure = unit.ConversionFactor
        if measure is None:
            return 1.0
        return float(measure.ValueComponent[0]) * unit_scale(measure.UnitComponent)
    if unit.is_a("IfcDerivedUnit"):
        scale = 1.0
        for element in unit.Elements:
            scale *= float(unit_scale(element.Unit) ** element.Exponent)
        return scale
    return 1.0
