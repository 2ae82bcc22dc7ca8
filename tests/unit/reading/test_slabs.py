"""Slabs and roofs: outlines, openings, levels, slopes, layers and kind, against areas worked out by hand."""

from __future__ import annotations

from math import cos, radians, sin, tan
from pathlib import Path
from typing import Any

import pytest
from slab_builders import ModelBuilder

from ifcaudit.model.building import Slab
from ifcaudit.reading.bodies import Bodies
from ifcaudit.reading.ifc_file import open_model
from ifcaudit.reading.placements import Placements
from ifcaudit.reading.relations import Relations
from ifcaudit.reading.slabs import read_slabs

L_SHAPE = [(0, 0), (8, 0), (8, 3), (5, 3), (5, 6), (0, 6)]
"""8 × 6 m less a corner of 3 × 3 m: 39 m²."""
PITCH = radians(30.0)


@pytest.fixture(params=["IFC2X3", "IFC4", "IFC4X3"])
def builder(request: pytest.FixtureRequest) -> ModelBuilder:
    """A model in each schema."""
    return ModelBuilder(request.param)


def slabs_of(builder: ModelBuilder, folder: Path) -> tuple[Slab, ...]:
    """Write, open and read the slabs."""
    model = open_model(builder.write(folder))
    placements = Placements(model)
    return read_slabs(model, placements, Bodies(model, placements), Relations(model))


def only(slabs: tuple[Slab, ...]) -> Slab:
    """The single record expected."""
    assert len(slabs) == 1
    return slabs[0]


def l_slab(builder: ModelBuilder, **more: Any) -> Any:
    """An L-shaped slab 0.25 m thick with its underside at 3 m."""
    solid = builder.extrusion(builder.outline(L_SHAPE), 0.25)
    return builder.element("IfcSlab", solid, placement=builder.place((0, 0, 3)), **more)


def test_a_level_slab_has_its_outline_levels_and_storey(builder, tmp_path):
    """39 m², underside at 3.00, top at 3.25."""
    l_slab(builder, name="Floor A")
    slab = only(slabs_of(builder, tmp_path))
    assert slab.plan.area == pytest.approx(39.0)
    assert slab.gross_area == pytest.approx(39.0)
    assert (slab.bottom, slab.top) == pytest.approx((3.0, 3.25))
    assert (slab.name, slab.storey, slab.ifc_class) == ("Floor A", "Level 2", "IfcSlab")
    assert (slab.roof, slab.on_grade, slab.floor_unit, slab.unreadable, slab.findings) == (False, False, False, "", ())


def test_a_slab_extruded_downwards_lies_below_its_outline(builder, tmp_path):
    """Drawn at 3.00 and extruded 0.25 down: 2.75 to 3.00."""
    solid = builder.extrusion(builder.outline(L_SHAPE), 0.25, direction=(0, 0, -1))
    builder.element("IfcSlab", solid, placement=builder.place((0, 0, 3)))
    slab = only(slabs_of(builder, tmp_path))
    assert (slab.bottom, slab.top, slab.plan.area) == pytest.approx((2.75, 3.0, 39.0))


def test_a_turned_and_nested_placement_turns_the_outline(builder, tmp_path):
    """A quarter turn about (10, 20): a point (8, 3) of the outline goes to (10 - 3, 20 + 8)."""
    storey = builder.place((10, 20, 3))
    solid = builder.extrusion(builder.outline(L_SHAPE), 0.25)
    builder.element("IfcSlab", solid, placement=builder.place((0, 0, 1), x=(0, 1, 0), inside=storey))
    slab = only(slabs_of(builder, tmp_path))
    assert slab.plan.area == pytest.approx(39.0)
    assert slab.plan.bounds == pytest.approx((4.0, 20.0, 10.0, 28.0))
    assert slab.bottom == pytest.approx(4.0)


def test_feet_come_out_in_metres(tmp_path):
    """20 × 10 ft, 6 in thick at 12 ft: 200 ft² is 18.58 m² (NIST SP 811: 1 ft = 0.3048 m)."""
    builder = ModelBuilder("IFC2X3", "foot")
    solid = builder.extrusion(builder.rectangle(20, 10), 0.5)
    builder.element("IfcSlab", solid, placement=builder.place((0, 0, 12)))
    slab = only(slabs_of(builder, tmp_path))
    assert slab.plan.area == pytest.approx(200 * 0.3048**2)
    assert (slab.bottom, slab.top) == pytest.approx((12 * 0.3048, 12.5 * 0.3048))


def test_an_opening_through_the_slab_is_taken_out_and_a_recess_is_reported(builder, tmp_path):
    """2 × 1 m through leaves 37 m²; 1 × 1 m to half the depth stays and is named."""
    slab = l_slab(builder)
    hole = builder.extrusion(builder.rectangle(2, 1), 1.0)
    builder.void(slab, hole, placement=builder.place((2, 2, 2.5)), name="Shaft")
    pocket = builder.extrusion(builder.rectangle(1, 1), 1.0)
    recess = builder.void(slab, pocket, placement=builder.place((4, 4, 3.125)), name="Pocket")
    found = only(slabs_of(builder, tmp_path))
    assert found.plan.area == pytest.approx(37.0)
    assert found.gross_area == pytest.approx(39.0)
    assert len(found.plan.interiors) == 1
    assert found.findings == (f"opening Pocket ({recess.GlobalId}) does not go through; its 1.00 m² is still loaded",)


def test_an_opening_that_ends_a_few_millimetres_short_goes_through(builder, tmp_path):
    """4 mm short of the top of 0.25 m; and 30 mm short is a recess."""
    slab = l_slab(builder)
    builder.void(slab, builder.extrusion(builder.rectangle(2, 1), 0.746), placement=builder.place((2, 2, 2.5)))
    builder.void(slab, builder.extrusion(builder.rectangle(1, 1), 0.72), placement=builder.place((4, 4, 2.5)))
    found = only(slabs_of(builder, tmp_path))
    assert found.plan.area == pytest.approx(37.0)
    assert len(found.findings) == 1


def test_an_opening_at_the_edge_is_a_notch(builder, tmp_path):
    """2 × 1 m centred on the edge x = 0 takes 1 m² away."""
    builder.void(l_slab(builder), builder.extrusion(builder.rectangle(2, 1), 1.0), placement=builder.place((0, 2, 2.5)))
    assert only(slabs_of(builder, tmp_path)).plan.area == pytest.approx(38.0)


def test_an_opening_without_a_body_is_reported(builder, tmp_path):
    """Nothing says how large it is, so its area stays loaded."""
    opening = builder.void(l_slab(builder), name="Hatch")
    found = only(slabs_of(builder, tmp_path))
    assert found.plan.area == pytest.approx(39.0)
    assert found.findings == (f"opening Hatch ({opening.GlobalId}) has no readable body; its area is still loaded",)


def test_an_opening_as_large_as_the_slab_leaves_an_unreadable_slab(builder, tmp_path):
    """A slab with nothing left is not silently dropped."""
    builder.void(
        l_slab(builder), builder.extrusion(builder.rectangle(40, 40), 1.0), placement=builder.place((0, 0, 2.5))
    )
    found = only(slabs_of(builder, tmp_path))
    assert found.plan.is_empty
    assert found.unreadable == "its openings leave nothing of its outline; export it with a closed solid body"


@pytest.mark.parametrize(("agreement", "area"), [(True, 4.0), (False, 20.0)])
def test_a_slab_clipped_by_a_vertical_half_space_is_cut_in_plan(builder, tmp_path, agreement, area):
    """6 × 4 m cut at x = 2 of -3 to 3: 1 × 4 or 5 × 4 m stay; with agreement the half-space lies behind its normal."""
    surface = builder.file.create_entity("IfcPlane", Position=builder.axes((2, 0, 0), z=(1, 0, 0), x=(0, 1, 0)))
    half = builder.file.create_entity("IfcHalfSpaceSolid", BaseSurface=surface, AgreementFlag=agreement)
    solid = builder.extrusion(builder.rectangle(6, 4), 0.2)
    clipped = builder.file.create_entity(
        "IfcBooleanClippingResult", Operator="DIFFERENCE", FirstOperand=solid, SecondOperand=half
    )
    builder.element("IfcSlab", clipped)
    slab = only(slabs_of(builder, tmp_path))
    assert slab.plan.area == pytest.approx(area)
    assert slab.findings == ()


def test_a_slab_from_which_a_solid_is_taken_is_kept_whole_and_reported(builder, tmp_path):
    """What a boolean with another solid leaves is not followed."""
    solid = builder.extrusion(builder.rectangle(6, 4), 0.2)
    tool = builder.extrusion(builder.rectangle(1, 1), 1.0)
    left = builder.file.create_entity("IfcBooleanResult", Operator="DIFFERENCE", FirstOperand=solid, SecondOperand=tool)
    builder.element("IfcSlab", left)
    slab = only(slabs_of(builder, tmp_path))
    assert slab.plan.area == pytest.approx(24.0)
    assert slab.findings == ("it is cut by a plane or solid that is not followed; the uncut outline is used",)


def test_a_roof_extruded_vertically_from_its_slope_has_plan_area_gradient_and_true_thickness(builder, tmp_path):
    """6 × 5 m at 30°, vertical depth 0.231: plan 6 × 5 cos 30°, slope tan 30°, thickness 0.231 cos 30° = 0.200."""
    position = builder.axes((3, 2.5 * cos(PITCH), 2.5 * sin(PITCH)), z=(0, -sin(PITCH), cos(PITCH)), x=(1, 0, 0))
    # World up, written in the axes of the sloping position: across the slope sin 30°, square to it cos 30°.
    solid = builder.extrusion(builder.rectangle(6, 5), 0.231, direction=(0, sin(PITCH), cos(PITCH)), position=position)
    roof = builder.element("IfcSlab", solid, placement=builder.place((0, 0, 3)), PredefinedType="ROOF")
    builder.made_of(builder.layer_set(("tiles", 0.06), ("timber", 0.14)), roof)
    slab = only(slabs_of(builder, tmp_path))
    assert slab.plan.area == pytest.approx(30.0 * cos(PITCH))
    assert slab.gradient == pytest.approx((0.0, tan(PITCH)))
    assert slab.bottom_at(1.0, 0.0) == pytest.approx(3.0)
    assert slab.top_at(1.0, 0.0) == pytest.approx(3.231)
    assert slab.bottom_at(1.0, 5.0 * cos(PITCH)) == pytest.approx(5.5)
    assert slab.surface_ratio == pytest.approx(1.0 / cos(PITCH))
    assert (slab.roof, slab.findings) == (True, ())


def test_a_gable_roof_drawn_as_one_brep_is_one_slab_per_plane(builder, tmp_path):
    """8 m long, 2 × 3 m in plan, 45°: two slabs of 24 m² whose ids stay distinct."""
    section = [(0, 0), (3, 3), (6, 0), (6, 0.3), (3, 3.3), (0, 0.3)]
    corners = [(x, y, z) for y in (0, 8) for x, z in section]
    ends = [[0, 1, 2, 3, 4, 5], [11, 10, 9, 8, 7, 6]]
    sides = [[k, k + 6, (k + 1) % 6 + 6, (k + 1) % 6] for k in range(6)]
    roof = builder.element("IfcRoof", builder.faceted(corners, ends + sides))
    slabs = slabs_of(builder, tmp_path)
    assert [slab.plan.area for slab in slabs] == pytest.approx([24.0, 24.0])
    assert sorted(slab.gradient[0] for slab in slabs) == pytest.approx([-1.0, 1.0])
    assert [slab.global_id for slab in slabs] == [roof.GlobalId, f"{roof.GlobalId}:2"]
    assert all(slab.roof for slab in slabs)


def test_a_roof_made_of_slabs_is_its_slabs_with_the_layers_of_the_roof(builder, tmp_path):
    """The roof has no body and the slab no layers; each has what the other lacks."""
    part = l_slab(builder, name="Plane 1", contained=False)
    roof = builder.element("IfcRoof", name="Main roof")
    builder.aggregate(roof, part)
    builder.made_of(builder.layer_set(("gravel", 0.05), ("concrete", 0.20)), roof)
    slab = only(slabs_of(builder, tmp_path))
    assert (slab.global_id, slab.roof, slab.storey) == (part.GlobalId, True, "Level 2")
    assert [layer.thickness for layer in slab.layers] == pytest.approx([0.05, 0.20])


def test_a_slab_made_of_parts_has_their_bodies_and_one_layer_per_part(builder, tmp_path):
    """A screed of 0.05 m on 0.20 m of concrete, drawn as building element parts."""
    slab = builder.element("IfcSlab", name="Floor")
    made = []
    for name, level, depth in (("concrete", 3.0, 0.20), ("screed", 3.2, 0.05)):
        solid = builder.extrusion(builder.outline(L_SHAPE), depth)
        part = builder.element("IfcBuildingElementPart", solid, placement=builder.place((0, 0, level)), contained=False)
        builder.made_of(builder.material(name), part)
        made.append(part)
    builder.aggregate(slab, *made)
    found = only(slabs_of(builder, tmp_path))
    assert found.global_id == slab.GlobalId
    assert found.plan.area == pytest.approx(39.0)
    assert (found.bottom, found.top) == pytest.approx((3.0, 3.25))
    assert [(layer.material.names, layer.inferred) for layer in found.layers] == [
        (("screed",), True),
        (("concrete",), True),
    ]
    assert [layer.thickness for layer in found.layers] == pytest.approx([0.05, 0.20])


def test_a_slab_made_of_slabs_side_by_side_is_one_slab(builder, tmp_path):
    """Two strips of 6 × 1.5 m make 18 m², counted once."""
    whole = builder.element("IfcSlab")
    strips = [
        builder.element(
            "IfcSlab",
            builder.extrusion(builder.rectangle(6, 1.5), 0.2),
            placement=builder.place((0, 1.5 * k, 3)),
            contained=False,
        )
        for k in range(2)
    ]
    builder.aggregate(whole, *strips)
    found = only(slabs_of(builder, tmp_path))
    assert found.global_id == whole.GlobalId
    assert found.plan.area == pytest.approx(18.0)
    assert [layer.thickness for layer in found.layers] == pytest.approx([0.2])


def test_a_slab_without_layers_is_one_layer_of_its_solid(builder, tmp_path):
    """0.25 m of what its material says."""
    slab = l_slab(builder)
    builder.made_of(builder.material("C25/30"), slab)
    layer = only(slabs_of(builder, tmp_path)).layers[0]
    assert (layer.thickness, layer.material.names, layer.inferred) == (pytest.approx(0.25), ("C25/30",), True)


def test_layers_that_do_not_add_up_to_the_solid_are_used_and_reported(builder, tmp_path):
    """0.30 m of layers on a solid of 0.25 m."""
    slab = l_slab(builder)
    builder.made_of(builder.layer_set(("screed", 0.1), ("concrete", 0.2)), slab)
    found = only(slabs_of(builder, tmp_path))
    assert sum(layer.thickness for layer in found.layers) == pytest.approx(0.3)
    assert found.findings == ("its layers add up to 0.300 m, its solid is 0.250 m thick; the layers are used",)


def test_layers_on_the_type_serve_its_slabs(builder, tmp_path):
    """IfcSlabType with the layer set."""
    slab = l_slab(builder)
    slab_type = builder.rooted("IfcSlabType", Name="T", PredefinedType="FLOOR")
    builder.typed(slab, slab_type)
    builder.made_of(builder.layer_set(("screed", 0.05), ("concrete", 0.2)), slab_type)
    assert [layer.thickness for layer in only(slabs_of(builder, tmp_path)).layers] == pytest.approx([0.05, 0.2])


def test_a_slab_without_a_body_is_listed_with_its_reason_and_level(builder, tmp_path):
    """It is not dropped: the floor it stands for is missing from the loads."""
    builder.element("IfcSlab", name="Ghost", placement=builder.place((0, 0, 6)))
    found = only(slabs_of(builder, tmp_path))
    assert found.plan.is_empty
    assert found.top == pytest.approx(6.0)
    assert found.unreadable.endswith("export it with a closed solid body")


@pytest.mark.parametrize(
    ("name", "predefined", "roof", "on_grade"),
    [
        ("Slab", "BASESLAB", False, True),
        ("Foundation Slab:250mm", "FLOOR", False, True),
        ("4in slab on grade", "FLOOR", False, True),
        ("CL_16_funderingsplaat", None, False, True),
        ("dakvloer", "FLOOR", True, False),
        ("Toiture terrasse", None, True, False),
        ("Decke Dachgeschoss", "FLOOR", False, False),
        ("waterproof deck", "FLOOR", False, False),
        ("Slab", "ROOF", True, False),
    ],
)
def test_kind_comes_from_the_predefined_type_else_from_the_name(builder, tmp_path, name, predefined, roof, on_grade):
    """And an answer found only in a name is reported, because it takes load away from beams."""
    l_slab(builder, name=name, **({"PredefinedType": predefined} if predefined else {}))
    found = only(slabs_of(builder, tmp_path))
    assert (found.roof, found.on_grade) == (roof, on_grade)
    named_only = (roof and predefined != "ROOF") or (on_grade and predefined != "BASESLAB")
    assert bool(found.findings) == named_only


@pytest.mark.parametrize(("name", "width", "unit"), [("Hollowcore 200", 1.2, True), ("Hollowcore 200", 9.0, False)])
def test_a_floor_unit_is_named_so_and_narrow_enough_to_be_one(builder, tmp_path, name, width, unit):
    """A whole floor called hollow-core does not span along its own longer side."""
    builder.element("IfcSlab", builder.extrusion(builder.rectangle(9.6, width), 0.2), name=name)
    assert only(slabs_of(builder, tmp_path)).floor_unit is unit
