"""What belongs to what: storeys, parts, types, openings and property texts, in the three schemas."""

from __future__ import annotations

from pathlib import Path

import pytest
from slab_builders import ModelBuilder

from ifcaudit.reading.ifc_file import open_model
from ifcaudit.reading.property_texts import PropertyKind, property_kind
from ifcaudit.reading.relations import Relations

SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3")


@pytest.fixture(params=SCHEMAS)
def builder(request: pytest.FixtureRequest) -> ModelBuilder:
    """A model in each schema."""
    return ModelBuilder(request.param)


def relations(builder: ModelBuilder, folder: Path) -> Relations:
    """Write, open and relate."""
    return Relations(open_model(builder.write(folder)))


def test_an_element_has_the_storey_that_contains_it(builder, tmp_path):
    """Containment is direct for most elements."""
    beam = builder.element("IfcBeam")
    assert relations(builder, tmp_path).storey_of(beam.id()) == "Level 2"


def test_a_part_of_an_assembly_has_the_storey_of_the_assembly(builder, tmp_path):
    """Only the outermost whole is contained in a storey; its parts are two aggregations below."""
    beam = builder.element("IfcBeam", contained=False)
    inner = builder.element("IfcElementAssembly", contained=False)
    outer = builder.element("IfcElementAssembly")
    builder.aggregate(inner, beam)
    builder.aggregate(outer, inner)
    found = relations(builder, tmp_path)
    assert found.storey_of(beam.id()) == "Level 2"
    assert found.parent_of(beam.id()).id() == inner.id()
    assert [part.id() for part in found.parts_of(outer.id())] == [inner.id()]


def test_an_element_in_a_space_has_the_storey_of_the_space(builder, tmp_path):
    """Some tools contain elements in rooms; the room is aggregated into the storey."""
    space = builder.rooted("IfcSpace", Name="Kitchen", CompositionType="ELEMENT")
    builder.aggregate(builder.storey, space)
    beam = builder.element("IfcBeam", contained=False)
    builder.rooted("IfcRelContainedInSpatialStructure", RelatedElements=[beam], RelatingStructure=space)
    assert relations(builder, tmp_path).storey_of(beam.id()) == "Level 2"


def test_an_element_in_no_storey_has_an_empty_one_and_a_loop_of_parts_ends(builder, tmp_path):
    """Broken files aggregate two elements into each other."""
    first, second = builder.element("IfcBeam", contained=False), builder.element("IfcBeam", contained=False)
    builder.aggregate(first, second)
    builder.aggregate(second, first)
    found = relations(builder, tmp_path)
    assert found.storey_of(first.id()) == ""
    assert found.material_of(first.id()).names == ()


def test_openings_and_types_are_found_by_element(builder, tmp_path):
    """One opening, one type."""
    slab = builder.element("IfcSlab")
    opening = builder.void(slab)
    more = {"PredefinedType": "FLOOR"}
    slab_type = builder.rooted("IfcSlabType", Name="Floor 200", **more)
    builder.typed(slab, slab_type)
    found = relations(builder, tmp_path)
    assert [each.id() for each in found.openings_of(slab.id())] == [opening.id()]
    assert found.type_of(slab.id()).id() == slab_type.id()
    assert found.type_of(opening.id()) is None


def test_section_texts_come_from_element_and_type_the_most_specific_names_first(builder, tmp_path):
    """A property called Profile says more than one called Type; colours and empty values say nothing."""
    beam = builder.element("IfcBeam")
    builder.describe(beam, "Data", Type="Main beam", Colour="W99X99", Profile="W16X26", Size="")
    described = builder.property_set("More", builder.single("Beam Cross Section", "IfcText", "W410x38.8"))
    beam_type = builder.rooted("IfcBeamType", Name="B", PredefinedType="BEAM", HasPropertySets=[described])
    builder.typed(beam, beam_type)
    assert relations(builder, tmp_path).texts_of(beam.id()) == ("W16X26", "W410x38.8", "Main beam")


def test_numbers_are_not_section_texts(builder, tmp_path):
    """A property called Size that holds a length names no section."""
    beam = builder.element("IfcBeam")
    sized = builder.property_set("Data", builder.single("Size", "IfcLengthMeasure", 0.4))
    builder.rooted("IfcRelDefinesByProperties", RelatedObjects=[beam], RelatingPropertyDefinition=sized)
    assert relations(builder, tmp_path).texts_of(beam.id()) == ()


@pytest.mark.parametrize(
    ("name", "kind"),
    [
        ("Grade", PropertyKind.GRADE),
        ("StrengthGrade", PropertyKind.GRADE),
        ("Staalkwaliteit", PropertyKind.GRADE),
        ("beton kwaliteit", PropertyKind.GRADE),
        ("Stahlgüte", PropertyKind.GRADE),
        ("Nuance d'acier", PropertyKind.GRADE),
        ("Structural Material", PropertyKind.GRADE),
        ("Profielnummer (lastProfile)", PropertyKind.SECTION),
        ("Querschnitt", PropertyKind.SECTION),
        ("ProfileName", PropertyKind.SECTION),
        ("Reference", PropertyKind.TYPE),
        ("MassDensity", PropertyKind.DENSITY),
        ("Electrode strength", PropertyKind.OTHER),
        ("Cross-Section Rotation", PropertyKind.OTHER),
        ("Upgrade", PropertyKind.OTHER),
    ],
)
def test_property_names_are_understood_in_several_languages(name, kind):
    """Names met in the exports under ../shared/models, and their like in neighbouring languages (common practice)."""
    assert property_kind(name) is kind
