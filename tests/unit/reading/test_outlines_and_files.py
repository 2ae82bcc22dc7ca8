"""Outlines, set-aside rules, words and files: what the reading core recognises and refuses."""

from __future__ import annotations

from math import cos, degrees, pi, radians, sin
from pathlib import Path

import pytest
from helpers.steel_models import SteelModel
from shapely import Point, Polygon, box
from shapely.affinity import rotate, translate

from ifcaudit.errors import ModelFileError
from ifcaudit.model.section import SectionKind
from ifcaudit.reading.candidates import set_aside_reason
from ifcaudit.reading.ifc_file import open_model
from ifcaudit.reading.outlines import recognise
from ifcaudit.reading.vocabulary import fitting_word, names_rafter


def i_outline(d: float, b: float, tf: float, tw: float, r: float = 0.0) -> Polygon:
    """An I-shape from its parts, with round fillets drawn as 16-sided arcs."""
    shape = box(-b / 2, d / 2 - tf, b / 2, d / 2).union(box(-b / 2, -d / 2, b / 2, -d / 2 + tf))
    shape = shape.union(box(-tw / 2, -d / 2, tw / 2, d / 2))
    for x in (-1, 1):
        for y in (-1, 1):
            corner = (x * tw / 2, y * (d / 2 - tf))
            square = box(*sorted((corner[0], corner[0] + x * r)), 0, 0) if r == 0 else Polygon(
                [corner, (corner[0] + x * r, corner[1]), (corner[0] + x * r, corner[1] - y * r),
                 (corner[0], corner[1] - y * r)]
            )  # fmt: skip
            if r:
                shape = shape.union(square.difference(Point(corner[0] + x * r, corner[1] - y * r).buffer(r, 16)))
    return shape


@pytest.mark.parametrize("turn", [0, 90, 17, -64])
@pytest.mark.parametrize("fillet", [0.0, 0.018])
def test_i_outline_is_recognised_in_any_turn(turn: float, fillet: float) -> None:
    """HEA200 (EN 10365: 190 x 200 x 10 x 6.5, r 18) from its edges, with and without fillets."""
    drawn = translate(rotate(i_outline(0.190, 0.200, 0.010, 0.0065, fillet), turn, origin=(0, 0)), 3.0, -1.0)
    shape, angle = recognise(drawn, "HEA200")
    assert shape.kind is SectionKind.I_SHAPE
    assert (shape.depth, shape.width) == pytest.approx((0.190, 0.200), rel=1e-6)
    assert (shape.flange_thickness, shape.web_thickness) == pytest.approx((0.010, 0.0065), rel=1e-6)
    if fillet:
        assert shape.fillet_radius == pytest.approx(fillet, rel=0.02)  # sixteen-sided arcs are a little fuller
    else:
        assert shape.fillet_radius is None
    # An I-shape looks the same upside down: its turn is known within half a circle.
    assert abs(sin(angle - radians(turn))) == pytest.approx(0.0, abs=1e-6)


def test_channel_tube_rectangle_and_round_outlines_are_recognised() -> None:
    """Each shape from its edges alone."""
    channel = box(0, 0, 0.09, 0.3).difference(box(0.01, 0.016, 0.09, 0.284))
    shape, _ = recognise(channel)
    assert (shape.kind, shape.flange_thickness, shape.web_thickness) == (
        SectionKind.CHANNEL,
        pytest.approx(0.016),
        pytest.approx(0.010),
    )
    tube = box(0, 0, 0.1, 0.2).difference(box(0.008, 0.008, 0.092, 0.192))
    shape, _ = recognise(tube)
    assert (shape.kind, shape.depth, shape.web_thickness) == (
        SectionKind.RECTANGULAR_HOLLOW,
        pytest.approx(0.2),
        pytest.approx(0.008),
    )
    ring = Point(0, 0).buffer(0.1, 16).difference(Point(0, 0).buffer(0.09, 16))
    shape, _ = recognise(ring)
    assert (shape.kind, shape.depth, shape.web_thickness) == (
        SectionKind.ROUND_HOLLOW,
        pytest.approx(0.2),
        pytest.approx(0.01),
    )
    assert recognise(Point(0, 0).buffer(0.05, 8))[0].kind is SectionKind.ROUND
    assert recognise(box(0, 0, 0.07, 0.17))[0].kind is SectionKind.RECTANGLE


def test_shape_that_is_none_of_these_keeps_its_outline() -> None:
    """A five-sided outline is no known section."""
    shape, _ = recognise(Polygon([(cos(2 * pi * k / 5), sin(2 * pi * k / 5)) for k in range(5)]))
    assert shape.kind is SectionKind.OTHER
    assert len(shape.outline) == 5


@pytest.mark.parametrize(
    ("sizes", "reason"),
    [
        ({"plan_length": 0.3}, "only 0.30 m long: a stub or fitting (beams are 0.8 m or longer)"),
        ({"rise": 6.0}, f"slopes {degrees(pi / 4):.0f} degrees: a leg, brace or column (beams up to 20)"),
        ({"width": 0.02}, "only 20 mm thick: a plate, rod or board (beams from 35)"),
        ({"height": 1.8}, "1.80 m deep: a wall or band (beams up to 1.5 m)"),
        ({"plan_length": 1.0, "height": 0.5}, "1.00 m long and 0.50 m deep: a block (beams are 3 times as long)"),
        ({"height": 0.6, "width": 0.05}, "600 x 50 mm: a plate on edge (beams up to 6 to 1)"),
        ({"texts": ("Handrail 40",)}, 'its name says "Handrail" (Handrail 40): no load-carrying beam'),
        ({}, ""),
        ({"rise": 6.0, "rafter": True}, ""),
    ],
)
def test_what_is_no_beam_is_set_aside_with_its_measure(sizes: dict[str, object], reason: str) -> None:
    """Geometry first, then the name; a plain 6 m beam and a rafter at 45 degrees stay."""
    usual: dict[str, object] = {
        "plan_length": 6.0,
        "rise": 0.0,
        "height": 0.3,
        "width": 0.15,
        "profile": None,
        "rafter": False,
        "texts": ("B",),
    }
    assert set_aside_reason(**{**usual, **sizes}) == reason  # type: ignore[arg-type]


def test_words_are_whole_and_in_several_languages() -> None:
    """A fitting's word counts as a word, not as a part of another."""
    assert fitting_word("PLAAT_10") == "PLAAT"
    assert fitting_word("Geländer EG") == "Geländer"
    assert fitting_word("Platteville girder") == ""
    assert names_rafter("Pfette-4")
    assert not names_rafter("Beam 4")


def sound(folder: Path) -> Path:
    """A small sound model."""
    model = SteelModel()
    model.element(model.extrusion(model.i_profile(), 6000))
    path = folder / "sound.ifc"
    model.file.write(str(path))
    return path


def test_files_that_are_no_whole_model_are_refused_by_name(tmp_path: Path) -> None:
    """Each message says which file, what was found and what to do."""
    path = sound(tmp_path)
    text = path.read_text()
    again = "export the model again, or ask for the whole file"
    cases = {
        tmp_path / "none.ifc": "no such file; check the path",
        tmp_path: "is a folder; name an IFC file",
    }
    for name, content, message in (
        ("empty.ifc", "", f"is empty; {again}"),
        ("letter.ifc", "Dear all,", "is no IFC file (it does not begin with ISO-10303-21); name a .ifc file"),
        ("cut.ifc", text[: len(text) // 2], f"is truncated (END-ISO-10303-21 is missing at its end); {again}"),
        (
            "future.ifc",
            text.replace("IFC4'", "IFC5'"),
            'states the schema "IFC5"; allowed are IFC2X3, IFC4 and IFC4X3_ADD2; export the model in one of these',
        ),
    ):
        (tmp_path / name).write_text(content)
        cases[tmp_path / name] = message
    for file, message in cases.items():
        with pytest.raises(ModelFileError) as error:
            open_model(file)
        assert str(error.value) == f"{file}: {message}"


def test_positions_of_attributes_come_from_the_schema(tmp_path: Path) -> None:
    """Positions differ between schemas; an attribute that a class lacks has none."""
    model = open_model(sound(tmp_path))
    assert model.position("IfcBeam", "Name") == 2
    assert model.position("IfcBeam", "Nonsense") == -1
    (beam,) = model.file.by_type("IfcBeam")
    assert model.get(beam, "Name") == "B1"
    assert model.get(beam, "Nonsense") is None
