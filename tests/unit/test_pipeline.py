"""What the pipeline decides between the stages."""

from __future__ import annotations

import re
from math import cos, radians, sin
from pathlib import Path
from typing import Any

import pytest
from helpers.steel_models import SteelModel

import ifcaudit
from ifcaudit.model.audit import Audit, BeamResult, Status


def roof(folder: Path, slope: float, *, wall_on_top: bool = False) -> Audit:
    """Two W16X26 rafters 3 m apart, 8 m long in plan, on columns, under a slab parallel to them; x is along them."""
    model = SteelModel()
    angle = radians(slope)
    rise = 8000.0 * sin(angle) / cos(angle)
    up, along = (-sin(angle), 0.0, cos(angle)), (cos(angle), 0.0, sin(angle))
    for number, y in enumerate((0.0, 3000.0)):
        beam = model.extrusion(
            model.i_profile(), 8000 / cos(angle), position=model.axes((0, y, 4000), along, (0, 1, 0))
        )
        model.element(beam, Name=f"R{number}")
        for x, top in ((0.0, 4000.0), (8000.0, 4000.0 + rise)):
            post = model.make(
                "IfcRectangleProfileDef", ProfileType="AREA", ProfileName="",
                Position=model.turned((1, 0)), XDim=200.0, YDim=200.0,
            )  # fmt: skip
            model.element(
                model.extrusion(post, top, position=model.axes((x, y, 0))),
                ifc_class="IfcColumn",
                Name=f"C{number}{x:g}",
            )
    half = 199.39
    origin = (half * up[0], 0.0, 4000.0 + half * up[2])
    # Longer than the beams by 0.3 m at either end: a slab at right angles to a slope lies a little downhill of them.
    last = 8000 / cos(angle) + 300
    plan = model.outline([(-300, 0), (last, 0), (last, 3000), (-300, 3000)])
    slab = model.extrusion(plan, 100, position=model.axes(origin, up, along))
    model.element(slab, ifc_class="IfcSlab", Name="S", PredefinedType="FLOOR")
    if wall_on_top:
        block = model.outline([(2000, 1000), (5000, 1000), (5000, 1200), (2000, 1200)])
        model.element(
            model.extrusion(block, 2500, position=model.axes((0, 0, 4000 + half + 100))), ifc_class="IfcWall", Name="W"
        )
    path = folder / "roof.ifc"
    model.file.write(str(path))
    return ifcaudit.audit(path)


def first(audit: Audit) -> BeamResult:
    """The first beam."""
    return audit.beams[0]


def test_sloping_beam_deflects_by_its_own_length_and_says_that_axial_force_is_left_out(tmp_path: Path) -> None:
    """At 15 degrees: moment from live load as in plan, deflection larger by 1/cos² (both over the plan load).

    Live load acts per plan area, so that w is the same; 5 w L⁴ / 384 EI in plan becomes 5 (w c²)(L/c)⁴ / 384 EI.
    """
    level, steep = first(roof(tmp_path, 0.0)), first(roof(tmp_path, 15.0))
    assert level.status in {Status.ADEQUATE, Status.INADEQUATE}, level.reason
    assert level.live_deflection is not None
    assert steep.live_load == pytest.approx(level.live_load)
    assert steep.live_deflection == pytest.approx(level.live_deflection / cos(radians(15)) ** 2, rel=1e-6)
    assert "it slopes: bending at right angles to it is checked, axial force is not" in steep.findings
    assert not any("slopes" in finding for finding in level.findings)


def test_wall_standing_on_the_floor_is_an_assumption_of_its_beams(tmp_path: Path) -> None:
    """The weight of a wall amid the slab is not taken down; every beam of that floor says so, and what settles it."""
    result = roof(tmp_path, 0.0, wall_on_top=True)
    texts: list[Any] = [item for item in result.assumptions if item.text.startswith("walls on the floor")]
    (assumption,) = texts
    assert assumption.beams == 2
    assert (
        assumption.text
        == "walls on the floor: 1 wall stands on S: taken to weigh no more than its area loads allow for"
    )
    assert assumption.remedy == "Raise --superimposed-dead by their weight per floor area if they weigh more."


SAMPLE = Path(__file__).parents[2] / "sample_models" / "harbour-yard-office.ifc"


def test_malformed_instances_cost_their_own_beam_and_no_other(tmp_path: Path) -> None:
    """A joist whose body refers to nothing is not checked; every beam that does not depend on it keeps its verdict."""
    lines = SAMPLE.read_text(encoding="utf-8").splitlines()
    numbers = {line.split("=")[0]: index for index, line in enumerate(lines) if line.startswith("#")}
    joist = next(line for line in lines if "IFCBEAM(" in line and "'L1 joist BC 2.5'" in line)
    shape = re.findall(r"#\d+", joist.split("IFCBEAM(")[1])[-1]
    lines[numbers[shape]] = re.sub(r"\(#[\d,#]+\)", "($)", lines[numbers[shape]])
    path = tmp_path / "broken.ifc"
    path.write_text("\n".join(lines), encoding="utf-8")
    sound = {beam.name: beam for beam in ifcaudit.audit(SAMPLE).beams}
    broken = {beam.name: beam for beam in ifcaudit.audit(path).beams}
    assert broken["L1 joist BC 2.5"].status is Status.NOT_CHECKED
    assert broken["L1 joist BC 2.5"].reason
    assert set(broken) == set(sound)
    for name, beam in sound.items():
        if name.startswith("Roof"):
            assert (broken[name].status, broken[name].utilization) == (beam.status, beam.utilization)


def test_second_beam_with_the_same_global_id_is_not_checked(tmp_path: Path) -> None:
    """Two beams that no output could tell apart: the first is judged, the other says why it is not."""
    text = SAMPLE.read_text(encoding="utf-8")
    first_id, second_id = (
        re.search(rf"IFCBEAM\('([^']+)',[^,]*,'{name}'", text).group(1)  # type: ignore[union-attr]
        for name in ("Roof joist CD 2.5", "Roof joist CD 5.0")
    )
    path = tmp_path / "twice.ifc"
    path.write_text(text.replace(f"IFCBEAM('{second_id}'", f"IFCBEAM('{first_id}'"), encoding="utf-8")
    found = {beam.name: beam for beam in ifcaudit.audit(path).beams}
    assert found["Roof joist CD 2.5"].status is Status.ADEQUATE
    assert found["Roof joist CD 5.0"].status is Status.NOT_CHECKED
    assert found["Roof joist CD 5.0"].reason == f"another beam has its GlobalId {first_id}: give it its own"


def test_elements_that_weigh_but_are_not_taken_down_are_counted(tmp_path: Path) -> None:
    """A covering and a stair in the model weigh on nothing in the audit; the findings say so, and what to do."""
    model = SteelModel()
    model.element(model.extrusion(model.i_profile(), 6000))
    model.element(ifc_class="IfcCovering", Name="Tiles")
    model.element(ifc_class="IfcStair", Name="Stair")
    path = tmp_path / "model.ifc"
    model.file.write(str(path))
    (finding,) = [text for text in ifcaudit.audit(path).findings if text.startswith("the weight")]
    assert finding == (
        "the weight of these is not taken down: 1 coverings, 1 stairs; "
        "add what rests on floors with --superimposed-dead"
    )


def block(folder: Path, name: str, depth: float, width: float) -> BeamResult:
    """A beam of 6 m drawn as a box of triangles."""
    model = SteelModel()
    corners = [(x, y, z) for x in (0.0, 6000.0) for y in (0.0, width) for z in (0.0, depth)]
    quads = [(0, 1, 3, 2), (4, 6, 7, 5), (0, 4, 5, 1), (2, 3, 7, 6), (0, 2, 6, 4), (1, 5, 7, 3)]
    faces = [(a + 1, b + 1, c + 1) for q in quads for a, b, c in ((q[0], q[1], q[2]), (q[0], q[2], q[3]))]
    points = model.make("IfcCartesianPointList3D", CoordList=corners)
    mesh = model.make("IfcTriangulatedFaceSet", Coordinates=points, CoordIndex=faces)
    model.element(mesh, kind="Tessellation", Name=name)
    for x in (0.0, 6000.0):
        post = model.outline([(x - 100, 0), (x + 100, 0), (x + 100, width), (x - 100, width)])
        model.element(
            model.extrusion(post, depth + 2000, position=model.axes((0, 0, -2000))), ifc_class="IfcColumn", Name="C"
        )
    path = folder / "block.ifc"
    model.file.write(str(path))
    return first(ifcaudit.audit(path))


def test_mesh_is_taken_for_its_name_only_where_its_box_agrees(tmp_path: Path) -> None:
    """A W16X26 is 15.7 by 5.50 in (398.8 by 139.7 mm); a mesh of that name and 300 by 300 mm is not judged."""
    assert block(tmp_path, "W16X26", 398.8, 139.7).section == "W16X26"
    wrong = block(tmp_path, "W16X26", 300.0, 300.0)
    assert wrong.status is Status.NOT_CHECKED
    assert wrong.reason == (
        "named W16X26 (399 x 140 mm) but drawn as a mesh of 300 x 300 mm: correct the one that is wrong in the model"
    )


def test_cut_solid_is_said_to_be_checked_whole(tmp_path: Path) -> None:
    """A cope is not followed: the finding says that the full section is checked."""
    model = SteelModel()
    plane = model.make("IfcPlane", Position=model.axes((0, 0, 150), (0, 1, 0), (0, 0, 1)))
    clipped = model.make(
        "IfcBooleanClippingResult",
        Operator="DIFFERENCE",
        FirstOperand=model.extrusion(model.i_profile(), 6000),
        SecondOperand=model.make("IfcHalfSpaceSolid", BaseSurface=plane, AgreementFlag=False),
    )
    model.element(clipped, kind="Clipping")
    path = tmp_path / "cope.ifc"
    model.file.write(str(path))
    assert (
        "its solid is cut (cope, notch or hole): the full section is checked, not what is left of it"
        in first(ifcaudit.audit(path)).findings
    )
