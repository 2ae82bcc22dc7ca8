"""A whole model read in one call."""

from __future__ import annotations

import pytest
from slab_builders import ModelBuilder

from ifcaudit.errors import ModelFileError
from ifcaudit.reading.building import read_building


def test_a_model_becomes_beams_slabs_and_supports_with_progress(tmp_path):
    """One of each, in feet."""
    builder = ModelBuilder("IFC2X3", "foot")
    builder.element("IfcSlab", builder.extrusion(builder.rectangle(20, 10), 0.5), placement=builder.place((0, 0, 11)))
    builder.element("IfcColumn", builder.extrusion(builder.rectangle(1, 1), 10))
    along = builder.axes((0, 0, 0), z=(1, 0, 0), x=(0, 1, 0))
    beam = builder.extrusion(builder.rectangle(0.5, 1.0), 20, position=along)
    builder.element("IfcBeam", beam, placement=builder.place((-10, 0, 10.5)))
    steps: list[str] = []
    building = read_building(builder.write(tmp_path), steps.append)
    assert (building.file_name, building.schema) == ("model.ifc", "IFC2X3")
    assert (len(building.beams), len(building.slabs), len(building.supports)) == (1, 1, 1)
    assert building.beams[0].length == pytest.approx(20 * 0.3048)
    assert building.beams[0].end[2] + building.beams[0].height / 2 == pytest.approx(building.slabs[0].bottom)
    assert steps == ["opening the model", "reading beams", "reading slabs", "reading columns and walls"]
    assert building.findings == ()


def test_an_empty_model_says_what_is_missing(tmp_path):
    """Each missing kind of element in one sentence, with what to do."""
    building = read_building(ModelBuilder("IFC4").write(tmp_path))
    assert building.findings == (
        "the model has no IfcBeam, and no IfcMember that could be a joist, rafter or purlin",
        "the model has no slab or roof: no floor load reaches any beam; read the file that holds the floors",
        "the model has no column or wall; read the file that holds them, or state the supports",
    )


def test_a_missing_length_unit_is_reported(tmp_path):
    """Files without units exist; the audit must not guess in silence."""
    building = read_building(ModelBuilder("IFC4", unit=None).write(tmp_path))
    assert building.length_unit == ""
    assert any("length unit" in finding for finding in building.findings)


def test_unreadable_slabs_are_counted_by_reason(tmp_path):
    """Two slabs without a body are one remark."""
    builder = ModelBuilder("IFC4")
    builder.element("IfcSlab")
    builder.element("IfcSlab")
    (remark,) = [text for text in read_building(builder.write(tmp_path)).findings if "cannot be read" in text]
    assert remark.startswith("2 of 2 slabs cannot be read: ")


def test_a_missing_file_is_one_clear_error(tmp_path):
    """No traceback of the library."""
    with pytest.raises(ModelFileError, match=r"absent\.ifc"):
        read_building(tmp_path / "absent.ifc")
