"""Candidate beams from their solids: axis, ends, section, turn; one broken beam never stops the others."""

from __future__ import annotations

from math import cos, radians, sin
from pathlib import Path
from typing import Any

import pytest
from helpers.steel_models import SteelModel

from ifcaudit.model.building import Beam, BendingAxis
from ifcaudit.model.section import SectionKind


def only(beams: tuple[Beam, ...]) -> Beam:
    """Return the one beam."""
    (beam,) = beams
    return beam


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
@pytest.mark.parametrize(("prefix", "unit"), [("MILLI", 1.0), (None, 0.001), ("CENTI", 0.1)])
def test_beam_is_read_in_metres_whatever_schema_and_unit(
    schema: str, prefix: str | None, unit: float, tmp_path: Path
) -> None:
    """A W16X26 of 6 m along x at 3 m: axis through the middle of its box, depth upwards."""
    model = SteelModel(schema, prefix)
    model.element(
        model.extrusion(model.i_profile(scale=unit), 6000 * unit), placement=model.place((1000 * unit, 0, 3000 * unit))
    )
    beam = only(model.read(tmp_path))
    assert beam.start == pytest.approx((1.0, 0.0, 3.0))
    assert beam.end == pytest.approx((7.0, 0.0, 3.0))
    assert (beam.height, beam.width) == pytest.approx((0.39878, 0.1397))
    assert beam.bending is BendingAxis.UPRIGHT
    assert beam.storey == "Level 1"
    assert beam.profile is not None
    assert beam.profile.kind is SectionKind.I_SHAPE
    assert (beam.profile.flange_thickness, beam.profile.web_thickness) == pytest.approx((0.008763, 0.00635))
    assert beam.designations[0] == "W16X26"


def test_missing_length_unit_is_reported_and_metres_are_assumed(tmp_path: Path) -> None:
    """A model without a length unit is read in metres, and says so."""
    from ifcaudit.reading.building import read_building
    from ifcaudit.reading.ifc_file import NO_LENGTH_UNIT

    model = SteelModel(units=False)
    model.element(model.extrusion(model.i_profile(scale=0.001), 6.0))
    assert only(model.read(tmp_path)).length == pytest.approx(6.0)
    findings = read_building(tmp_path / "model.ifc").findings
    assert NO_LENGTH_UNIT in findings


def test_nested_and_turned_placements_end_in_world_coordinates(tmp_path: Path) -> None:
    """Placed 2 m along the x of a parent that is turned by 30 degrees about z at (5, 1, 3)."""
    model = SteelModel()
    angle = radians(30)
    parent = model.place((5000, 1000, 3000), (0, 0, 1), (cos(angle), sin(angle), 0))
    model.element(model.extrusion(model.i_profile(), 4000), placement=model.place((2000, 0, 0), parent=parent))
    beam = only(model.read(tmp_path))
    assert beam.start == pytest.approx((5 + 2 * cos(angle), 1 + 2 * sin(angle), 3.0))
    assert beam.end == pytest.approx((5 + 6 * cos(angle), 1 + 6 * sin(angle), 3.0))


def test_profile_off_its_insertion_line_moves_the_axis(tmp_path: Path) -> None:
    """Drawn with its top on the line (cardinal point 8): the box's centre lies half the depth lower."""
    model = SteelModel()
    model.element(model.extrusion(model.i_profile(position=model.turned((1, 0), (0, -199.39))), 6000))
    beam = only(model.read(tmp_path))
    assert beam.start[2] == pytest.approx(-0.19939)
    assert beam.top_at(3.0) == pytest.approx(0.0, abs=1e-9)


@pytest.mark.parametrize(
    ("ratios", "bending", "height"),
    [
        pytest.param((1, 0), BendingAxis.UPRIGHT, 0.39878, id="upright"),
        pytest.param((0, 1), BendingAxis.FLAT, 0.1397, id="laid flat"),
        pytest.param((-1, 0), BendingAxis.UPRIGHT, 0.39878, id="upside down"),
        pytest.param((1, 1), BendingAxis.INCLINED, 0.39878 * 0.5**0.5 + 0.1397 * 0.5**0.5, id="turned by 45 degrees"),
    ],
)
def test_turn_of_the_profile_decides_the_bending_axis(
    ratios: tuple[float, float], bending: BendingAxis, height: float, tmp_path: Path
) -> None:
    """The position of a profile in its plane turns the section about the beam's axis."""
    model = SteelModel()
    model.element(model.extrusion(model.i_profile(position=model.turned(ratios)), 6000))
    beam = only(model.read(tmp_path))
    assert beam.bending is bending
    assert beam.height == pytest.approx(height)


@pytest.mark.parametrize("mirrored", [False, True])
def test_mapped_item_is_placed_scaled_and_mirrored(mirrored: bool, tmp_path: Path) -> None:
    """A shared body, drawn at half size and mapped with scale 2 to 1 m along x."""
    model = SteelModel()
    inner = model.make(
        "IfcShapeRepresentation",
        ContextOfItems=model.context,
        RepresentationIdentifier="Body",
        RepresentationType="SweptSolid",
        Items=[model.extrusion(model.i_profile(scale=0.5), 3000)],
    )
    source = model.make("IfcRepresentationMap", MappingOrigin=model.axes(), MappedRepresentation=inner)
    target = model.make(
        "IfcCartesianTransformationOperator3D",
        Axis1=model.direction((1, 0, 0)),
        Axis2=model.direction((0, -1 if mirrored else 1, 0)),
        Axis3=model.direction((0, 0, 1)),
        LocalOrigin=model.point((1000, 0, 0)),
        Scale=2.0,
    )
    item = model.make("IfcMappedItem", MappingSource=source, MappingTarget=target)
    model.element(item, kind="MappedRepresentation")
    beam = only(model.read(tmp_path))
    assert (beam.start[0], beam.end[0]) == pytest.approx((1.0, 7.0))
    assert beam.height == pytest.approx(0.39878)
    assert beam.profile is not None
    assert beam.profile.depth == pytest.approx(0.39878)


def half_space(model: SteelModel, origin: Any, normal: Any, *, agreement: bool) -> Any:
    """A half-space; with agreement its material lies against the normal."""
    plane = model.make("IfcPlane", Position=model.axes(origin, normal, (0, 0, 1)))
    return model.make("IfcHalfSpaceSolid", BaseSurface=plane, AgreementFlag=agreement)


@pytest.mark.parametrize(
    ("normal", "agreement"), [pytest.param((1, 0, 0), False, id="normal out"), pytest.param((-1, 0, 0), True, id="in")]
)
def test_clipped_end_shortens_the_axis(normal: tuple[int, int, int], agreement: bool, tmp_path: Path) -> None:
    """Everything beyond x = 5.5 m is taken away: the solid, not the drawn depth, gives the end."""
    model = SteelModel()
    clipped = model.make(
        "IfcBooleanClippingResult",
        Operator="DIFFERENCE",
        FirstOperand=model.extrusion(model.i_profile(), 6000),
        SecondOperand=half_space(model, (5500, 0, 0), normal, agreement=agreement),
    )
    model.element(clipped, kind="Clipping")
    beam = only(model.read(tmp_path))
    assert (beam.start[0], beam.end[0]) == pytest.approx((0.0, 5.5))
    assert beam.cut


def test_cope_along_the_side_leaves_the_length(tmp_path: Path) -> None:
    """A cut whose plane runs along the beam takes off its side, not its end."""
    model = SteelModel()
    clipped = model.make(
        "IfcBooleanClippingResult",
        Operator="DIFFERENCE",
        FirstOperand=model.extrusion(model.i_profile(), 6000),
        SecondOperand=half_space(model, (0, 0, 150), (0, 1, 0), agreement=False),
    )
    model.element(clipped, kind="Clipping")
    beam = only(model.read(tmp_path))
    assert beam.length == pytest.approx(6.0)
    assert beam.cut


def test_mesh_gives_axis_and_box_but_no_section(tmp_path: Path) -> None:
    """A 6 m box of 0.2 by 0.3 m as triangles: the axis runs along it, and the section is said not to be measured."""
    model = SteelModel()
    corners = [(x, y, z) for x in (0, 6000) for y in (0, 200) for z in (0, 300)]
    quads = [(0, 1, 3, 2), (4, 6, 7, 5), (0, 4, 5, 1), (2, 3, 7, 6), (0, 2, 6, 4), (1, 5, 7, 3)]
    faces = [(a + 1, b + 1, c + 1) for q in quads for a, b, c in ((q[0], q[1], q[2]), (q[0], q[2], q[3]))]
    points = model.make("IfcCartesianPointList3D", CoordList=[tuple(map(float, corner)) for corner in corners])
    mesh = model.make("IfcTriangulatedFaceSet", Coordinates=points, CoordIndex=faces)
    model.element(mesh, kind="Tessellation")
    beam = only(model.read(tmp_path))
    assert sorted((beam.start[0], beam.end[0])) == pytest.approx([0.0, 6.0])
    assert (beam.width, beam.height) == pytest.approx((0.2, 0.3))
    assert beam.profile is None
    assert beam.findings[0].startswith("its section is drawn as a mesh")


def test_beam_without_body_and_broken_beam_do_not_stop_the_others(tmp_path: Path) -> None:
    """No body, a curved body and an extrusion of depth zero each get their reason; the sound beam is read."""
    model = SteelModel()
    model.element(Name="no body")
    model.element(model.extrusion(model.i_profile(), 6000), Name="sound")
    axis = model.make("IfcAxis1Placement", Location=model.point((0, -9000, 0)), Axis=model.direction((0, 0, 1)))
    model.element(
        model.make("IfcRevolvedAreaSolid", SweptArea=model.i_profile(), Position=model.axes(), Axis=axis, Angle=0.5),
        Name="curved",
    )
    model.element(model.extrusion(model.outline([(0, 0), (0, 0), (0, 0)]), 6000), Name="empty profile")
    reasons = {beam.name: beam.unreadable for beam in model.read(tmp_path)}
    assert reasons == {
        "no body": "it has no body in the model; export it with a swept profile as its body",
        "sound": "",
        "curved": (
            "its body is an IfcRevolvedAreaSolid, which is not read; export it with a swept profile as its body"
        ),
        "empty profile": (
            "its profile IfcArbitraryClosedProfileDef gives no outline; export it with a swept profile as its body"
        ),
    }


def test_members_are_candidates_when_they_are_joists_rafters_or_purlins(tmp_path: Path) -> None:
    """By predefined type, or by name in several languages; other members are not beams."""
    model = SteelModel()
    for name in ("Sparren-3", "Gording 2", "Mullion", "Strut"):
        model.element(model.extrusion(model.i_profile(), 6000), ifc_class="IfcMember", Name=name)
    model.element(model.extrusion(model.i_profile(), 6000), ifc_class="IfcMember", Name="M5", PredefinedType="PURLIN")
    assert [beam.name for beam in model.read(tmp_path)] == ["Sparren-3", "Gording 2", "M5"]


def test_member_drawn_with_its_profile_along_it_gets_its_axis_from_the_longest_side(tmp_path: Path) -> None:
    """A lintel drawn as its 4 m by 0.2 m plan outline and extruded 0.3 m upwards runs along the 4 m."""
    model = SteelModel()
    plan = model.outline([(0, 0), (4000, 0), (4000, 200), (0, 200)])
    model.element(model.extrusion(plan, 300, position=model.axes((0, 0, 2000))))
    beam = only(model.read(tmp_path))
    assert sorted((beam.start[0], beam.end[0])) == pytest.approx([0.0, 4.0])
    assert (beam.height, beam.width) == pytest.approx((0.3, 0.2))
    assert beam.profile is None
    assert beam.findings == ("drawn with its profile along its length",)
