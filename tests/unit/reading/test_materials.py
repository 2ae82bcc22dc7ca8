"""Materials as the model writes them, in the three schemas."""

from __future__ import annotations

from pathlib import Path

import pytest
from slab_builders import ModelBuilder

from ifcaudit.reading.ifc_file import open_model
from ifcaudit.reading.materials import unit_scale
from ifcaudit.reading.relations import Relations

POUND = 0.45359237  # kg, exact: NIST SP 811, appendix B
POUND_PER_CUBIC_FOOT = 16.01846  # kg/m³: NIST SP 811, appendix B.8


@pytest.fixture(params=["IFC2X3", "IFC4", "IFC4X3"])
def builder(request: pytest.FixtureRequest) -> ModelBuilder:
    """A model in each schema."""
    return ModelBuilder(request.param)


@pytest.fixture(params=["IFC4", "IFC4X3"])
def newer(request: pytest.FixtureRequest) -> ModelBuilder:
    """A model in each schema that has profile and constituent sets."""
    return ModelBuilder(request.param)


def relations(builder: ModelBuilder, folder: Path) -> Relations:
    """Write, open and relate."""
    return Relations(open_model(builder.write(folder)))


def add_density(builder: ModelBuilder, material: object, value: float) -> None:
    """State a density the way each schema does."""
    if builder.schema == "IFC2X3":
        builder.file.create_entity("IfcGeneralMaterialProperties", Material=material, MassDensity=value)
        return
    single = builder.single("MassDensity", "IfcMassDensityMeasure", value)
    builder.file.create_entity(
        "IfcMaterialProperties", Name="Pset_MaterialCommon", Properties=[single], Material=material
    )


def test_a_single_material_gives_its_name(builder, tmp_path):
    """The plainest association."""
    beam = builder.element("IfcBeam")
    builder.made_of(builder.material("S355J2"), beam)
    found = relations(builder, tmp_path).material_of(beam.id())
    assert (found.names, found.grades, found.density) == (("S355J2",), (), None)


def test_a_list_gives_its_names_in_order_and_no_empty_ones(builder, tmp_path):
    """IfcMaterialList is deprecated but written by many tools."""
    beam = builder.element("IfcBeam")
    materials = [builder.material(name) for name in ("steel", "", "paint")]
    builder.made_of(builder.file.create_entity("IfcMaterialList", Materials=materials), beam)
    assert relations(builder, tmp_path).material_of(beam.id()).names == ("steel", "paint")


def test_the_material_of_the_type_serves_where_the_element_has_none(builder, tmp_path):
    """And the element's own wins where it has one."""
    plain, special = builder.element("IfcBeam"), builder.element("IfcBeam")
    beam_type = builder.rooted("IfcBeamType", Name="B", PredefinedType="BEAM")
    builder.rooted("IfcRelDefinesByType", RelatedObjects=[plain, special], RelatingType=beam_type)
    builder.made_of(builder.material("A992"), beam_type)
    builder.made_of(builder.material("A36"), special)
    found = relations(builder, tmp_path)
    assert found.material_of(plain.id()).names == ("A992",)
    assert found.material_of(special.id()).names == ("A36",)


@pytest.mark.parametrize("unit", ["metre", "millimetre", "foot"])
def test_layers_keep_their_order_and_come_out_in_metres(unit, tmp_path):
    """One unit of thickness each way: 1 m, 1 mm, 1 ft; a layer without thickness is a membrane and left out."""
    metres = {"metre": 1.0, "millimetre": 0.001, "foot": 0.3048}[unit]
    builder = ModelBuilder("IFC4", unit)
    slab = builder.element("IfcSlab")
    layers = builder.layer_set(("screed", 1.0), ("foil", 0.0), ("concrete", 3.0))
    builder.made_of(builder.layer_usage(layers), slab)
    found = relations(builder, tmp_path).layers_of(slab.id())
    assert [(layer.material.names, layer.thickness) for layer in found] == [
        (("screed",), pytest.approx(metres)),
        (("concrete",), pytest.approx(3 * metres)),
    ]


def test_a_ventilated_layer_without_material_is_an_air_gap(builder, tmp_path):
    """IfcMaterialLayer.IsVentilated: air moves through it."""
    slab = builder.element("IfcSlab")
    layers = builder.layer_set(("board", 0.02), (None, 0.05))
    layers.MaterialLayers[1].IsVentilated = True
    builder.made_of(layers, slab)
    found = relations(builder, tmp_path).layers_of(slab.id())
    assert [layer.material.names for layer in found] == [("board",), ("air gap",)]


def test_a_profile_set_gives_material_and_profile(newer, tmp_path):
    """IfcMaterialProfileSetUsage on the occurrence."""
    beam = newer.element("IfcBeam")
    profile = newer.rectangle(0.1, 0.2)
    member = newer.file.create_entity("IfcMaterialProfile", Material=newer.material("S235"), Profile=profile)
    profile_set = newer.file.create_entity("IfcMaterialProfileSet", MaterialProfiles=[member])
    newer.made_of(newer.file.create_entity("IfcMaterialProfileSetUsage", ForProfileSet=profile_set), beam)
    found = relations(newer, tmp_path)
    assert found.material_of(beam.id()).names == ("S235",)
    assert found.profile_of(beam.id()).id() == profile.id()


def test_constituents_give_their_names(newer, tmp_path):
    """IfcMaterialConstituentSet, new in IFC4."""
    beam = newer.element("IfcBeam")
    parts = [newer.file.create_entity("IfcMaterialConstituent", Material=newer.material(name)) for name in "ab"]
    newer.made_of(newer.file.create_entity("IfcMaterialConstituentSet", MaterialConstituents=parts), beam)
    assert relations(newer, tmp_path).material_of(beam.id()).names == ("a", "b")


def test_the_category_follows_the_name(newer, tmp_path):
    """IFC4 materials may state their category, which tells the family where the name is a trade name."""
    beam = newer.element("IfcBeam")
    newer.made_of(newer.material("Q-50", Category="steel"), beam)
    assert relations(newer, tmp_path).material_of(beam.id()).names == ("Q-50", "steel")


def test_grades_of_the_element_come_before_those_of_the_material(builder, tmp_path):
    """Two places that may state a grade."""
    beam, material = builder.element("IfcBeam"), builder.material("staal")
    single = builder.single("StrengthGrade", "IfcLabel", "S275")
    if builder.schema == "IFC2X3":
        builder.file.create_entity(
            "IfcExtendedMaterialProperties", Material=material, ExtendedProperties=[single], Name="Pset"
        )
    else:
        builder.file.create_entity("IfcMaterialProperties", Name="Pset", Properties=[single], Material=material)
    builder.made_of(material, beam)
    builder.describe(beam, "Data", staalkwaliteit="S235JR")
    assert relations(builder, tmp_path).material_of(beam.id()).grades == ("S235JR", "S275")


@pytest.mark.parametrize(("stated", "expected"), [(2400.0, 2400.0), (0.0, None), (-1.0, None)])
def test_a_density_is_taken_when_positive(builder, tmp_path, stated, expected):
    """Exports write 0.0 for unknown."""
    beam, material = builder.element("IfcBeam"), builder.material("concrete")
    add_density(builder, material, stated)
    builder.made_of(material, beam)
    assert relations(builder, tmp_path).material_of(beam.id()).density == expected


def test_a_density_in_the_projects_unit_comes_out_in_si(builder, tmp_path):
    """150 lb/ft³ with a declared density unit."""
    make = builder.file.create_entity
    kilogram = make("IfcSIUnit", UnitType="MASSUNIT", Prefix="KILO", Name="GRAM")
    metre = make("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")

    def converted(kind: str, name: str, measure: str, factor: float, base: object) -> object:
        value = make("IfcMeasureWithUnit", ValueComponent=make(measure, factor), UnitComponent=base)
        size = make("IfcDimensionalExponents", 0, 0, 0, 0, 0, 0, 0)
        return make("IfcConversionBasedUnit", Dimensions=size, UnitType=kind, Name=name, ConversionFactor=value)

    pound = converted("MASSUNIT", "POUND", "IfcMassMeasure", POUND, kilogram)
    foot = converted("LENGTHUNIT", "FOOT", "IfcLengthMeasure", 0.3048, metre)
    elements = [make("IfcDerivedUnitElement", pound, 1), make("IfcDerivedUnitElement", foot, -3)]
    unit = make("IfcDerivedUnit", Elements=elements, UnitType="MASSDENSITYUNIT")
    assignment = builder.file.by_type("IfcUnitAssignment")[0]
    assignment.Units = [*assignment.Units, unit]
    beam, material = builder.element("IfcBeam"), builder.material("concrete")
    add_density(builder, material, 150.0)
    builder.made_of(material, beam)
    density = relations(builder, tmp_path).material_of(beam.id()).density
    assert density == pytest.approx(150.0 * POUND_PER_CUBIC_FOOT, rel=1e-6)


def test_si_prefixes_belong_to_the_metre_that_is_cubed():
    """A cubic millimetre is 1e-9 m³, not 1e-3 (ISO 80000-1, 6.5)."""
    builder = ModelBuilder("IFC4")
    unit = builder.file.create_entity("IfcSIUnit", UnitType="VOLUMEUNIT", Prefix="MILLI", Name="CUBIC_METRE")
    assert unit_scale(unit) == pytest.approx(1e-9)
    assert unit_scale(builder.file.create_entity("IfcSIUnit", UnitType="MASSUNIT", Name="GRAM")) == 1e-3
