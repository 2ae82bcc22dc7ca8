"""Columns and walls as footprints between levels."""

from __future__ import annotations

from pathlib import Path

import pytest
from slab_builders import ModelBuilder

from ifcaudit.model.building import VerticalKind, VerticalSupport
from ifcaudit.reading.bodies import Bodies
from ifcaudit.reading.ifc_file import open_model
from ifcaudit.reading.placements import Placements
from ifcaudit.reading.relations import Relations
from ifcaudit.reading.supports import read_supports


@pytest.fixture(params=["IFC2X3", "IFC4", "IFC4X3"])
def builder(request: pytest.FixtureRequest) -> ModelBuilder:
    """A model in each schema."""
    return ModelBuilder(request.param)


def read(builder: ModelBuilder, folder: Path) -> tuple[tuple[VerticalSupport, ...], tuple[str, ...]]:
    """Write, open and read the supports."""
    model = open_model(builder.write(folder))
    return read_supports(model, Bodies(model, Placements(model)), Relations(model))


def test_an_i_column_is_its_envelope(builder, tmp_path):
    """300 × 200 mm I-section, 3 m high at (4, 5): the box around it, not its steel."""
    profile = builder.file.create_entity(
        "IfcIShapeProfileDef",
        ProfileType="AREA",
        Position=builder.file.create_entity("IfcAxis2Placement2D", Location=builder.point(0, 0)),
        OverallWidth=0.2,
        OverallDepth=0.3,
        WebThickness=0.01,
        FlangeThickness=0.015,
    )
    builder.element("IfcColumn", builder.extrusion(profile, 3.0), name="C1", placement=builder.place((4, 5, 1)))
    (column,), findings = read(builder, tmp_path)
    assert column.kind is VerticalKind.COLUMN
    assert column.footprint.area == pytest.approx(0.06)
    assert column.footprint.bounds == pytest.approx((3.9, 4.85, 4.1, 5.15))
    assert (column.bottom, column.top) == pytest.approx((1.0, 4.0))
    assert column.centreline[0] == pytest.approx((4.0, 5.0))
    assert column.centreline[0] == column.centreline[1]
    assert findings == ()


def test_a_wall_has_its_outline_and_long_axis_and_openings_do_not_change_them(builder, tmp_path):
    """6 × 0.2 m, turned a quarter about (1, 2), with a door."""
    wall = builder.element(
        "IfcWall", builder.extrusion(builder.rectangle(6, 0.2), 2.7), placement=builder.place((1, 2, 0), x=(0, 1, 0))
    )
    builder.void(wall, builder.extrusion(builder.rectangle(1, 1), 2.1), placement=builder.place((1, 2, 0)))
    (found,), _ = read(builder, tmp_path)
    assert found.kind is VerticalKind.WALL
    assert found.footprint.area == pytest.approx(1.2)
    assert found.centreline[0] == pytest.approx((1.0, -1.0))
    assert found.centreline[1] == pytest.approx((1.0, 5.0))
    assert (found.bottom, found.top) == pytest.approx((0.0, 2.7))


def test_a_wall_made_of_parts_is_one_wall(builder, tmp_path):
    """Two leaves side by side in building element parts."""
    wall = builder.element("IfcWall", name="Cavity wall")
    leaves = [
        builder.element(
            "IfcBuildingElementPart",
            builder.extrusion(builder.rectangle(4, 0.1), 2.5),
            placement=builder.place((0, offset, 0)),
            contained=False,
        )
        for offset in (0.0, 0.15)
    ]
    builder.aggregate(wall, *leaves)
    (found,), findings = read(builder, tmp_path)
    assert (found.global_id, found.name) == (wall.GlobalId, "Cavity wall")
    assert found.footprint.area == pytest.approx(0.8)
    assert findings == ()


def test_curtain_walls_carry_nothing_and_are_left_out(builder, tmp_path):
    """Neither the curtain wall nor a wall that is part of it."""
    curtain = builder.element("IfcCurtainWall")
    panel = builder.element("IfcWall", builder.extrusion(builder.rectangle(4, 0.1), 2.5), contained=False)
    builder.aggregate(curtain, panel)
    assert read(builder, tmp_path) == ((), ())


def test_a_support_without_a_body_is_reported(builder, tmp_path):
    """The beams on it would otherwise look unsupported without a word."""
    column = builder.element("IfcColumn", name="C7")
    supports, findings = read(builder, tmp_path)
    assert supports == ()
    consequence = "a beam end that rests on it is not checked; export it with a solid body"
    assert findings == (
        f"column C7 ({column.GlobalId}): no readable body (it has no body in the model); {consequence}",
    )


def test_many_unreadable_supports_are_counted(builder, tmp_path):
    """Five by name, the rest as a number."""
    for number in range(8):
        builder.element("IfcColumn", name=f"C{number}")
    _, findings = read(builder, tmp_path)
    assert len(findings) == 6
    assert findings[-1] == "3 more columns and walls have no readable body"
