"""What the model relates to what, as dictionaries by entity id.

Each class of relation is walked once, forward, and only when somebody asks for it: inverse attributes inside a loop
over elements are what makes reading large models slow.
"""

from __future__ import annotations

from collections.abc import Iterator
from functools import cached_property
from typing import Any

from ifcaudit.model.material import MaterialText
from ifcaudit.reading.ifc_file import Model
from ifcaudit.reading.materials import MaterialLayer, Materials
from ifcaudit.reading.property_texts import PropertyKind, PropertyReader

_NESTING_LIMIT = 50  # aggregation deeper than this is a loop in a broken file


class Relations:
    """Relations between elements, storeys, types, materials, openings and property sets.

    Args:
        model: The opened file.
    """

    def __init__(self, model: Model) -> None:
        self._model = model
        self._properties = PropertyReader(model)
        self.materials = Materials(model, self._properties)
        self._storey_names: dict[int, str] = {}
        self._element_materials: dict[int, MaterialText] = {}

    # ---- where it belongs

    def storey_of(self, entity_id: int) -> str:
        """Return the name of the storey that holds an element, directly or through its assembly; empty if none does."""
        for ancestor in self._line_of_parents(entity_id):
            structure = self._container.get(ancestor)
            if structure is not None:
                return self._storey_name(structure)
        return ""

    def parent_of(self, entity_id: int) -> Any | None:
        """Return the whole that an element is aggregated into; ``None`` when it is no part."""
        return self._parent.get(entity_id)

    def parts_of(self, entity_id: int) -> tuple[Any, ...]:
        """Return the parts an element is aggregated from."""
        return self._parts.get(entity_id, ())

    def type_of(self, entity_id: int) -> Any | None:
        """Return the type object of an element."""
        return self._type.get(entity_id)

    def openings_of(self, entity_id: int) -> tuple[Any, ...]:
        """Return the opening elements that void an element."""
        return self._openings.get(entity_id, ())

    # ---- what it is made of, what it is called

    def material_of(self, entity_id: int) -> MaterialText:
        """Return what the model says about an element's material: its own, else its type's, else its parts'."""
        found = self._element_materials.get(entity_id)
        if found is None:
            found = self._element_materials[entity_id] = self._read_material(entity_id)
        return found

    def layers_of(self, entity_id: int) -> tuple[MaterialLayer, ...]:
        """Return the material layers of an element, or of its type; empty when neither has a layer set."""
        for definition in self._definitions(entity_id):
            layers = self.materials.layers(definition)
            if layers:
                return layers
        return ()

    def profile_of(self, entity_id: int) -> Any | None:
        """Return the profile of an element's material profile set, or of its type's; ``None`` when there is none."""
        for definition in self._definitions(entity_id):
            profile = self.materials.profile(definition)
            if profile is not None:
                return profile
        return None

    def texts_of(self, entity_id: int) -> tuple[str, ...]:
        """Return property texts that may name the section, the most specific names first, without repetition."""
        pairs = self._property_pairs(entity_id)
        ordered = [
            text for wanted in (PropertyKind.SECTION, PropertyKind.TYPE) for kind, text in pairs if kind is wanted
        ]
        return tuple(dict.fromkeys(ordered))

    def grades_of(self, entity_id: int) -> tuple[str, ...]:
        """Return the grade texts in the property sets of an element and of its type."""
        pairs = self._property_pairs(entity_id)
        return tuple(dict.fromkeys(text for kind, text in pairs if kind is PropertyKind.GRADE))

    # ---- how it is put together

    def _line_of_parents(self, entity_id: int) -> Iterator[int]:
        for _ in range(_NESTING_LIMIT):
            yield entity_id
            parent = self._parent.get(entity_id)
            if parent is None:
                return
            entity_id = parent.id()

    def _storey_name(self, structure: Any) -> str:
        key = structure.id()
        if key not in self._storey_names:
            self._storey_names[key] = self._name_of_storey_at_or_above(structure)
        return self._storey_names[key]

    def _name_of_storey_at_or_above(self, structure: Any) -> str:
        # An element may be contained in a space or a zone of the storey rather than in the storey itself.
        for _ in range(_NESTING_LIMIT):
            if structure.is_a("IfcBuildingStorey"):
                return str(self._model.get(structure, "Name") or self._model.get(structure, "LongName") or "")
            above = self._parent.get(structure.id())
            if above is None:
                return ""
            structure = above
        return ""

    def _definitions(self, entity_id: int) -> Iterator[Any]:
        own = self._material.get(entity_id)
        if own is not None:
            yield own
        type_object = self._type.get(entity_id)
        if type_object is not None:
            typed = self._material.get(type_object.id())
            if typed is not None:
                yield typed

    def _read_material(self, entity_id: int) -> MaterialText:
        owners = [entity_id, *(part.id() for part in self.parts_of(entity_id))]
        definitions = (next(self._definitions(owner), None) for owner in owners)
        texts = (self.materials.text(definition) for definition in definitions if definition is not None)
        text = next((text for text in texts if text.names), MaterialText())
        grades = self.grades_of(entity_id)
        if not grades:
            return text
        merged = tuple(dict.fromkeys((*grades, *text.grades)))
        return MaterialText(names=text.names, grades=merged, density=text.density)

    def _property_pairs(self, entity_id: int) -> tuple[tuple[PropertyKind, str], ...]:
        sets = list(self._property_sets.get(entity_id, ()))
        type_object = self._type.get(entity_id)
        if type_object is not None:
            sets.extend(self._sets_of_type(type_object))
        return tuple(pair for each in sets for pair in self._properties.texts(each))

    def _sets_of_type(self, type_object: Any) -> list[Any]:
        sets = self._model.get(type_object, "HasPropertySets") or ()
        return [each for each in sets if each.is_a("IfcPropertySet")]

    def _walk(self, relation_class: str, one: str, many: str) -> Iterator[tuple[Any, Any]]:
        """Yield (one side, other side) of each relation of a class; an entity or a tuple of them, never ``None``."""
        first = self._model.position(relation_class, one)
        second = self._model.position(relation_class, many)
        for relation in self._model.file.by_type(relation_class):
            left, right = relation.get_argument(first), relation.get_argument(second)
            if left is not None and right is not None:
                yield left, right

    @cached_property
    def _container(self) -> dict[int, Any]:
        walked = self._walk("IfcRelContainedInSpatialStructure", "RelatingStructure", "RelatedElements")
        return {element.id(): structure for structure, elements in walked for element in elements}

    @cached_property
    def _parts(self) -> dict[int, tuple[Any, ...]]:
        parts: dict[int, tuple[Any, ...]] = {}
        for whole, members in self._walk("IfcRelAggregates", "RelatingObject", "RelatedObjects"):
            parts[whole.id()] = parts.get(whole.id(), ()) + tuple(members)
        return parts

    @cached_property
    def _parent(self) -> dict[int, Any]:
        walked = self._walk("IfcRelAggregates", "RelatingObject", "RelatedObjects")
        return {member.id(): whole for whole, members in walked for member in members}

    @cached_property
    def _type(self) -> dict[int, Any]:
        walked = self._walk("IfcRelDefinesByType", "RelatingType", "RelatedObjects")
        return {element.id(): type_object for type_object, elements in walked for element in elements}

    @cached_property
    def _material(self) -> dict[int, Any]:
        walked = self._walk("IfcRelAssociatesMaterial", "RelatingMaterial", "RelatedObjects")
        found: dict[int, Any] = {}
        for definition, elements in walked:
            for element in elements:
                # Two associations on one element occur in real files; the one with more to say is kept.
                present = found.get(element.id())
                if present is None or (present.is_a("IfcMaterial") and not definition.is_a("IfcMaterial")):
                    found[element.id()] = definition
        return found

    @cached_property
    def _openings(self) -> dict[int, tuple[Any, ...]]:
        openings: dict[int, tuple[Any, ...]] = {}
        walked = self._walk("IfcRelVoidsElement", "RelatingBuildingElement", "RelatedOpeningElement")
        for element, opening in walked:
            openings[element.id()] = (*openings.get(element.id(), ()), opening)
        return openings

    @cached_property
    def _property_sets(self) -> dict[int, list[Any]]:
        # Only the sets are noted here; their properties are read when an element is asked about.
        sets: dict[int, list[Any]] = {}
        walked = self._walk("IfcRelDefinesByProperties", "RelatingPropertyDefinition", "RelatedObjects")
        for definition, elements in walked:
            members = definition[0] if definition.is_a() == "IfcPropertySetDefinitionSet" else (definition,)
            kept = [each for each in members if each.is_a("IfcPropertySet")]
            if not kept:
                continue
            for element in elements:
                sets.setdefault(element.id(), []).extend(kept)
        return sets
