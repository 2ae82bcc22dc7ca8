"""The sample models are valid IFC, are what their script writes, and hold the geometry the hand calculations rely on.

Geometry is judged through IfcOpenShell's kernel (Open Cascade), not through this project's reading.
"""

from __future__ import annotations

import csv
import subprocess
import sys
from functools import cache
from importlib import import_module
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.geom
import ifcopenshell.validate
import numpy as np
import pytest
from models import sample_facts
from models.bay_builder import write_bay
from models.sample_facts import OFFICE, OFFICE_FACTS, WORKSHOP, WORKSHOP_FACTS
from shapely import MultiPoint, Polygon

ROOT = Path(__file__).parents[2]
SAMPLES = ROOT / "sample_models"
FACTS = {OFFICE: OFFICE_FACTS, WORKSHOP: WORKSHOP_FACTS}
CANDIDATES = {OFFICE: sample_facts.OFFICE_CANDIDATES, WORKSHOP: sample_facts.WORKSHOP_CANDIDATES}
LOOSE = sample_facts.OFFICE_NOT_CHECKED | sample_facts.OFFICE_SET_ASIDE
FOOT = 0.3048
SLABS = {  # name -> (storey steel it lies on, finished top [m], thickness [m], net plan area [m²])
    OFFICE: {
        "First floor slab": ("First floor", 4.2, 0.170, 24.0 * 13.8 - 5.6 * 5.0),
        "Roof slab": ("Roof", 8.1, 0.200, 24.0 * 13.8),
    },
    WORKSHOP: {
        "Loft floor": ("Loft", 9 * FOOT, 4.5 / 12 * FOOT, 28 * 18 * FOOT**2),
        "Hall roof": ("Roof", 17 * FOOT, 0.5 * FOOT, 56 * 38 * FOOT**2),
        "Paint store roof": ("Roof", 13 * FOOT, 0.5 * FOOT, 22 * 15 * FOOT**2),
    },
}


@cache
def opened(name: str) -> Any:
    """Each file is opened once."""
    return ifcopenshell.open(str(SAMPLES / name))


@cache
def vertices(name: str) -> dict[str, np.ndarray]:
    """World coordinates of the corners of every element with a body, by element name [m]."""
    settings = ifcopenshell.geom.settings()
    settings.set("use-world-coords", True)
    found = {}
    for element in opened(name).by_type("IfcElement"):
        if element.Representation and not element.is_a("IfcOpeningElement"):
            shape = ifcopenshell.geom.create_shape(settings, element)
            found[element.Name] = np.array(shape.geometry.verts).reshape(-1, 3)
    return found


def problems(path: Path, *, rules: bool = False) -> list[str]:
    """What IfcOpenShell's validator reports."""
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(path), logger, express_rules=rules)
    return [str(statement) for statement in logger.statements]


@pytest.mark.parametrize("name", FACTS)
def test_a_sample_model_obeys_its_schema_and_the_rules_in_it(name):
    """``ifcopenshell.validate`` finds nothing, the schema's own WHERE rules included."""
    assert problems(SAMPLES / name, rules=True) == []


def test_the_script_writes_the_committed_files_byte_for_byte(tmp_path):
    """A change of the script cannot be forgotten in the models, and no clock or random number gets into them."""
    code = (
        "import pathlib, sys, write_samples as w; p = pathlib.Path(sys.argv[1]); w.write_office(p); w.write_workshop(p)"
    )
    subprocess.run([sys.executable, "-c", code, str(tmp_path)], cwd=SAMPLES, check=True)  # noqa: S603 - own script
    for name in FACTS:
        assert (tmp_path / name).read_bytes() == (SAMPLES / name).read_bytes(), name


def test_shapes_drawn_have_the_dimensions_of_the_catalogue():
    """Depth, width and thicknesses agree with the AISC tables in ``rules/sections`` (W and C; tubes by size)."""
    catalogue = {}
    for series in ("w", "c", "hss_rectangular"):
        lines = (ROOT / "rules" / "sections" / f"aisc_{series}.csv").read_text(encoding="utf-8").splitlines()
        rows = csv.DictReader(line for line in lines if not line.startswith("#"))
        catalogue.update({row["designation"]: row for row in rows})
    for shape in import_module("shapes").SHAPES.values():
        row = catalogue[shape.designation]
        drawn = {
            "depth": shape.depth,
            "width": shape.width,
            "flange_thickness": shape.flange,
            "web_thickness": shape.web,
        }
        for quantity, value in drawn.items():
            assert value / 0.0254 == pytest.approx(float(row[f"{quantity}_in"]), abs=1e-9), (shape, quantity)


@pytest.mark.parametrize(("name", "slab"), [(name, slab) for name, slabs in SLABS.items() for slab in slabs])
def test_slabs_have_their_level_thickness_and_net_area(name, slab):
    """Volume over thickness is the net area: the stair opening goes through."""
    _, top, thickness, area = SLABS[name][slab]
    corners = vertices(name)[slab]
    assert corners[:, 2].max() == pytest.approx(top, abs=1e-6)
    assert corners[:, 2].min() == pytest.approx(top - thickness, abs=1e-6)
    settings = ifcopenshell.geom.settings()
    element = next(each for each in opened(name).by_type("IfcSlab") if each.Name == slab)
    geometry = ifcopenshell.geom.create_shape(settings, element).geometry
    faces = np.array(geometry.faces).reshape(-1, 3)
    triangles = np.array(geometry.verts).reshape(-1, 3)[faces]
    volume = np.einsum("ij,ij->i", triangles[:, 0], np.cross(triangles[:, 1], triangles[:, 2])).sum() / 6
    assert volume / thickness == pytest.approx(area, rel=1e-6)


@pytest.mark.parametrize("name", FACTS)
def test_beam_tops_touch_the_underside_of_the_slab_above_them(name):
    """Every load-carrying beam lies flush under one of the slabs."""
    undersides = [top - thickness for _, top, thickness, _ in SLABS[name].values()]
    for beam in opened(name).by_type("IfcBeam"):
        if beam.Name not in LOOSE:
            top = vertices(name)[beam.Name][:, 2].max()
            assert min(abs(top - level) for level in undersides) < 1e-6, beam.Name


def hull(corners: np.ndarray) -> Polygon:
    """Plan outline of an element whose plan is convex."""
    return MultiPoint(corners[:, :2]).convex_hull


def carriers_of(name: str) -> dict[str, tuple[Polygon, np.ndarray]]:
    """Plan outline and levels of every column, wall and load-carrying beam."""
    corners = vertices(name)
    return {
        element.Name: (hull(corners[element.Name]), corners[element.Name][:, 2])
        for kind in ("IfcColumn", "IfcWall", "IfcBeam")
        for element in opened(name).by_type(kind)
        if element.Name not in LOOSE
    }


@pytest.mark.parametrize("name", FACTS)
def test_both_ends_of_every_beam_reach_something_that_carries_them(name):
    """Within 20 mm of the beam, at its own level and in the last 0.3 m, there is a column, a wall or another beam."""
    carriers = carriers_of(name)
    for beam, (own, levels) in carriers.items():
        if not any(each.Name == beam for each in opened(name).by_type("IfcBeam")):
            continue
        corners = np.array(own.minimum_rotated_rectangle.exterior.coords)
        long_side = max(corners[1:3] - corners[0:2], key=lambda side: float(np.hypot(*side)))
        half = float(np.hypot(*long_side)) / 2
        along = long_side / (2 * half)
        reached = []
        for other, (plan, heights) in carriers.items():
            level = heights.max() > levels.min() and heights.min() < levels.max()
            contact = plan.intersection(own.buffer(0.02))
            if other != beam and level and not contact.is_empty:
                reached.append(float((np.array(contact.centroid.coords[0]) - own.centroid.coords[0]) @ along))
        assert min(reached) < -half + 0.3, f"{beam}: nothing at its first end"
        assert max(reached) > half - 0.3, f"{beam}: nothing at its other end"


def test_the_canopy_arm_ends_on_nothing_and_the_lintel_has_no_body():
    """The two beams that cannot be checked are what they are meant to be."""
    corners = vertices(OFFICE)
    assert "Entrance lintel" not in corners
    tip = corners["Canopy arm A2"][:, 0].min()
    others = [value[:, 0].min() for name, value in corners.items() if name != "Canopy arm A2"]
    assert tip < min(others) - 1.5


@pytest.mark.parametrize("name", FACTS)
def test_every_hand_calculation_is_of_a_beam_in_the_model(name):
    """Names exist once, and the check said to govern and the status follow from the ratios worked out."""
    names = [beam.Name for beam in opened(name).by_type("IfcBeam")]
    assert len(set(names)) == len(names) == CANDIDATES[name]
    for fact in FACTS[name]:
        assert fact.name in names
        assert max(fact.utilizations, key=lambda check: fact.utilizations[check]) == fact.governing, fact.name
        assert (fact.utilization > 1.0) == (fact.status == "inadequate"), fact.name


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
@pytest.mark.parametrize("length_unit", ["MILLIMETRE", "FOOT"])
def test_bays_are_valid_and_keep_their_ids(tmp_path, schema, length_unit):
    """Any schema, unit, rotation and mirror gives a valid file with the same GlobalIds of beams."""
    size = {"joist_spacing": 2.2, "joist_span": 6.4, "girder_span": 8.8, "joist_bays": 2, "storeys": 2}
    plain = write_bay(tmp_path / "plain.ifc", **size)
    turned = write_bay(
        tmp_path / "turned.ifc",
        **size,
        schema=schema,
        length_unit=length_unit,
        rotation=33.0,
        offset=(120.0, -45.0),
        mirrored=True,
        reversed_axes=True,
        split_storey=True,
        split_slab=True,
    )
    assert problems(turned) == []
    ids = [
        {beam.Name: beam.GlobalId for beam in ifcopenshell.open(str(path)).by_type("IfcBeam")}
        for path in (plain, turned)
    ]
    assert ids[0] == ids[1]
    assert len(ids[0]) == 2 * (3 + 2 * 5)


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"girder_span": 9.0}, "girder span 9.0 m is no multiple of the joist spacing 2.0 m"),
        ({"girder_span": 6.0, "split_slab": True}, "a slab over 3 joist spaces cannot be split over the middle joist"),
    ],
)
def test_a_bay_that_does_not_fit_is_refused(tmp_path, change, message):
    """The builder says what does not fit, so that a property test cannot run on another bay than it thinks."""
    with pytest.raises(ValueError, match=message):
        write_bay(tmp_path / "bay.ifc", **{"joist_spacing": 2.0, "joist_span": 6.0, "girder_span": 8.0} | change)
