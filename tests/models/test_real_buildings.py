"""Real exports are read to the end, and what is read agrees with what was checked by hand in them.

The files are public sample data (Schependomlaan data set, CC BY 4.0; KIT sample house; buildingSMART samples), looked
for beside the repository and never committed. Facts come from the notes that accompany them, or were read off the
entities in the file, as said at each test.
"""

from __future__ import annotations

from functools import cache
from math import cos, radians, tan
from pathlib import Path

import pytest

from ifcaudit.model.building import Building, Slab, VerticalKind
from ifcaudit.reading.building import read_building

MODELS = Path(__file__).parents[3] / "shared" / "models"
FILES = sorted(path.name for path in MODELS.glob("*.ifc")) if MODELS.is_dir() else []

pytestmark = [
    pytest.mark.real_models,
    pytest.mark.skipif(not FILES, reason="the real exports are not at ../shared/models beside the repository"),
]


@cache
def building(name: str) -> Building:
    """Each file is read once."""
    return read_building(MODELS / name)


def slabs_named(name: str, part: str) -> list[Slab]:
    """The readable slabs of a file whose name holds a text."""
    return [slab for slab in building(name).slabs if part in slab.name and not slab.unreadable]


@pytest.mark.parametrize("name", FILES)
def test_every_export_is_read_to_the_end(name):
    """Nothing raises, every slab has an outline or a reason, every outline is valid and every support has height."""
    read = building(name)
    for slab in read.slabs:
        assert bool(slab.unreadable) == slab.plan.is_empty
        assert slab.plan.is_valid
        assert slab.top >= slab.bottom
        assert slab.plan.area <= slab.gross_area + 1e-6
        assert slab.unreadable or (slab.layers and all(layer.thickness > 0.0 for layer in slab.layers))
    for support in read.supports:
        assert support.footprint.is_valid
        assert support.footprint.area > 0.0
        assert support.top > support.bottom
    ids = [slab.global_id for slab in read.slabs]
    assert len(set(ids)) == len(ids)


def test_the_structure_file_has_its_slabs_roofs_columns_and_walls():
    """Counted in the file: 29 IfcSlab, 20 IfcRoof with a body (2 more are their slabs), 32 columns, 296 walls."""
    read = building("housing-structure.ifc")
    elements = {slab.entity_id for slab in read.slabs}
    assert len(elements) == 29 + 20
    assert sum(support.kind is VerticalKind.COLUMN for support in read.supports) == 32
    assert sum(support.kind is VerticalKind.WALL for support in read.supports) == 296


def test_the_layered_floors_have_the_layers_of_the_notes():
    """Screed 70, insulation 20, concrete 240, precast 50 mm; others 170 + 50 mm; they fill the solid they are in."""
    floors = slabs_named("housing-structure.ifc", "breedplaat_290mm")
    assert len(floors) == 3
    for floor in floors:
        assert [layer.material.names[0] for layer in floor.layers] == [
            "cementdekvloer",
            "isolatie_vloer",
            "beton_C20/25",
            "prefabbeton",
        ]
        assert [layer.thickness for layer in floor.layers] == pytest.approx([0.07, 0.02, 0.24, 0.05])
        assert floor.top - floor.bottom == pytest.approx(0.38)
        assert not [text for text in floor.findings if "layers" in text]
    thinner = slabs_named("housing-structure.ifc", "breedplaat_220mm")
    assert [layer.thickness for layer in thinner[0].layers] == pytest.approx([0.17, 0.05])


def test_a_floor_contains_the_beam_that_the_notes_place_inside_its_depth():
    """HE280B 1y4joQfA90gvGHq50nfpjH runs along x from -2.71 to 0.26 at y = 2.12 in a floor from z 2.62 to 3.00."""
    from shapely import Point

    holding = [
        slab
        for slab in building("housing-structure.ifc").slabs
        if not slab.unreadable and slab.plan.buffer(0.35).contains(Point(-1.2, 2.12)) and 2.0 < slab.bottom < 3.0
    ]
    assert [(slab.bottom, slab.top) for slab in holding] == [
        (pytest.approx(2.62, abs=0.005), pytest.approx(3.0, abs=0.005))
    ]


def test_foundation_slabs_bear_on_the_ground_and_floors_do_not():
    """14 slabs are called foundation slab in the file."""
    read = building("housing-structure.ifc")
    assert sum(slab.on_grade for slab in read.slabs) == sum("Foundation" in slab.name for slab in read.slabs) == 14


def test_the_roofs_of_the_house_have_the_slope_and_depths_of_the_notes():
    """Dach-1 and Dach-2: layer 0.200 m, vertical depth 0.231 m, rafters below at 30°."""
    roofs = slabs_named("house-ifc4.ifc", "Dach-")
    assert len(roofs) == 2
    for roof in roofs:
        assert [layer.thickness for layer in roof.layers] == pytest.approx([0.2])
        assert roof.top - roof.bottom == pytest.approx(0.231, abs=0.0005)
        assert max(abs(part) for part in roof.gradient) == pytest.approx(tan(radians(30.0)), rel=1e-3)
        assert roof.roof
        # 6.44 m of rafter along the slope lies under it: the roof is as long or longer, in plan 6.44 cos 30°.
        extents = roof.plan.bounds
        assert max(extents[2] - extents[0], extents[3] - extents[1]) > 6.44 * cos(radians(30.0))
        assert not roof.findings


def test_the_base_slab_of_the_house_is_on_grade_and_its_density_of_zero_is_missing():
    """Bodenplatte is a BASESLAB; all densities in the file are 0.0."""
    (base,) = slabs_named("house-ifc4.ifc", "Bodenplatte")
    assert base.on_grade
    assert all(layer.material.density is None for slab in building("house-ifc4.ifc").slabs for layer in slab.layers)


def test_the_house_floor_has_its_stair_opening():
    """One IfcOpeningElement voids the upper floor; it goes through."""
    (floor,) = slabs_named("house-ifc4.ifc", "Slab-033")
    assert floor.plan.area < floor.gross_area
    assert not floor.findings


def test_the_conformance_slab_loses_its_opening_and_keeps_its_recess():
    """ifc4x3-slab-openings: one opening goes through, the other is called Recess and does not."""
    (slab,) = building("ifc4x3-slab-openings.ifc").slabs
    assert slab.plan.area < slab.gross_area
    (remark,) = slab.findings
    assert remark.startswith("opening Recess (0w93HZ19H2D99zbAVNb4o2) does not go through")


def test_walls_made_of_parts_are_read_as_walls():
    """37 walls whose bodies are in 749 building element parts."""
    read = building("block-walls.ifc")
    assert len(read.supports) == 37
    assert all(support.kind is VerticalKind.WALL for support in read.supports)


@pytest.mark.parametrize("level", [2.68, 5.68, 8.68])
def test_the_topping_of_each_storey_covers_the_planks_it_is_cast_on(level):
    """Shells of 60 mm with a topping on them: two separate drawings of the same floor, so their areas agree."""
    slabs = [slab for slab in building("housing-floor-planks.ifc").slabs if not slab.unreadable]
    assert len({slab.entity_id for slab in slabs}) == 58
    planks = sum(slab.plan.area for slab in slabs if abs(slab.top - level) < 0.005)
    topping = sum(slab.plan.area for slab in slabs if abs(slab.bottom - level) < 0.005)
    assert topping > 200.0
    assert topping == pytest.approx(planks, rel=0.03)


def test_two_files_draw_the_same_floor_the_same_size():
    """The engineer's three layered floors against the toppings of the supplier, within 2 % net of openings."""
    engineer = sorted(slab.plan.area for slab in slabs_named("housing-structure.ifc", "breedplaat_290mm"))
    planks = building("housing-floor-planks.ifc").slabs
    supplier = sorted(slab.plan.area for slab in planks if slab.plan.area > 200.0)
    assert engineer == pytest.approx(supplier, rel=0.02)
