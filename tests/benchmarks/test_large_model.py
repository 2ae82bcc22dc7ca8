"""The model that the benchmark times is a proper building, so that its timings mean something."""

from __future__ import annotations

import ifcopenshell
import ifcopenshell.util.placement
import ifcopenshell.validate
import pytest
from benchmarks.run import stage_table
from benchmarks.write_large_model import LAYERS, STOREY_HEIGHT, write_large_model


def test_the_large_model_is_valid_and_has_the_beams_it_says(tmp_path):
    """Two storeys of 6 by 7 bays: 6 × 8 girders and 19 × 7 joists each, slabs with openings, no schema errors."""
    path = tmp_path / "large.ifc"
    beams = write_large_model(path, storeys=2, bays_x=6, bays_y=7)
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(path), logger)
    assert logger.statements == []
    model = ifcopenshell.open(str(path))
    assert beams == len(model.by_type("IfcBeam")) == 2 * (6 * 8 + 19 * 7)
    assert len(model.by_type("IfcColumn")) == 2 * 7 * 8
    # slabs of 5 by 6 bays and their remainders; the second shaft does not fit where a slab is one bay wide or deep
    assert len(model.by_type("IfcSlab")) == 2 * 4
    assert len(model.by_type("IfcOpeningElement")) == 2 * (2 + 1 + 1 + 1)


def test_beams_of_the_large_model_lie_under_the_slab(tmp_path):
    """Placements nest per storey; the top of every beam is one floor thickness below its storey's level."""
    path = tmp_path / "large.ifc"
    write_large_model(path, storeys=2, bays_x=2, bays_y=2)
    thickness = sum(thickness for _, thickness, _ in LAYERS)
    tops = set()
    for beam in ifcopenshell.open(str(path)).by_type("IfcBeam"):
        level = ifcopenshell.util.placement.get_local_placement(beam.ObjectPlacement)[2, 3]
        profile = beam.Representation.Representations[1].Items[0].SweptArea
        tops.add(round((level + profile.OverallDepth / 2) / 1000, 4))
    assert len(tops) == 2
    assert sorted(tops) == pytest.approx([STOREY_HEIGHT - thickness, 2 * STOREY_HEIGHT - thickness], abs=1e-3)


def test_a_table_without_the_time_of_opening_is_refused():
    """Multiples of nothing are not printed."""
    with pytest.raises(ValueError, match="the first row must be the time of plain opening, greater than zero"):
        stage_table([("open", 0.0), ("reading", 1.0)])
