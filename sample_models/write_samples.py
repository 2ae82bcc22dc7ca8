"""Writes the sample models beside this file: ``python sample_models/write_samples.py``.

The buildings, their names and their uses are invented. Each holds a few beams that are too small on purpose, and a few
elements that cannot or need not be checked; ``tests/models/sample_facts.py`` says which, with the calculation.
"""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from ifc_building import FOOT, POUND_PER_CUBIC_FOOT, Grid, IfcBuilding, Layer, Point, Storey
from shapes import INCH, SHAPES

HERE = Path(__file__).parent
OFFICE = "harbour-yard-office.ifc"
WORKSHOP = "millrace-workshop.ifc"
GAP = 0.012
"""Clearance between the end of a beam and the face it is bolted to [m]."""


def half_flange(section: str) -> float:
    """Half the width of a section [m]."""
    return SHAPES[section].width / 2


def half_depth(section: str) -> float:
    """Half the depth of a section [m]."""
    return SHAPES[section].depth / 2


# ---------------------------------------------------------------- Harbour Yard: a two-storey office, millimetres, IFC4

# Grid lines A to D along x and 1 to 3 along y [m]. Joists run along x, girders along y. Line D is a masonry wall.
X = {"A": 0.0, "B": 8.4, "C": 16.8, "D": 24.0}
Y = {"1": 0.0, "2": 7.5, "3": 13.5}
EDGE = 0.30  # the slabs run this far beyond line 1
COLUMN = "W10X33"
WALL_THICKNESS = 0.20
BEARING = 0.15
FLOOR_TOP, ROOF_TOP = 4.2, 8.1
FLOOR_LAYERS = (
    Layer("Carpet tile", 0.010, 600.0),
    Layer("Cement screed", 0.040, 2000.0),
    Layer("Concrete on metal deck", 0.120, 2350.0),
)
ROOF_LAYERS = (
    Layer("Bituminous membrane", 0.005, 1200.0),
    Layer("Rigid insulation", 0.150, 40.0),
    Layer("Steel roof deck", 0.045, 240.0),
)
FLOOR_STEEL = FLOOR_TOP - sum(layer.thickness for layer in FLOOR_LAYERS)
ROOF_STEEL = ROOF_TOP - sum(layer.thickness for layer in ROOF_LAYERS)
HEADER_AT = 2.8  # the stair opening reaches from this header to girder B, between y = 2.5 and line 2

# y of the line [m] -> sections in bays AB, BC and CD. Marks: see below. Empty: no beam on that line in that bay.
FLOOR_JOISTS = {
    0.0: ("W14X22", "W14X22", "W12X19"),
    2.5: ("W16X31", "W16X26", "W14X22"),
    5.0: ("", "W16X26", "W14X22"),
    7.5: ("W16X31", "W16X26", "W14X22"),
    9.5: ("W14X26", "W10X33", "W12X22"),
    11.5: ("W16X31", "W14X26", "W12X22"),
    13.5: ("W12X19", "W12X19", "W12X16"),
}
FLOOR_MATERIALS = {"L1 joist CD 5.0": "ASTM A36", "L1 joist BC 5.0": "Steel"}
FLOOR_DRAWN = {"L1 joist AB 11.5": "W16X26"}
ROOF_JOISTS = {
    0.0: ("W12X14", "W12X14", "W10X12"),
    2.5: ("W12X14", "W12X14", "W10X12"),
    5.0: ("W12X14", "W8X13", "W10X12"),
    7.5: ("W12X14", "W12X14", "W10X12"),
    9.5: ("W12X14", "W12X14", "W10X12"),
    11.5: ("W12X14", "W12X14", "W10X12"),
    13.5: ("W12X14", "W12X14", "W10X12"),
}
# girder line -> sections between lines 1-2 and 2-3
FLOOR_GIRDERS = {"A": ("W16X31", "W16X26"), "B": ("W21X44", "W21X44"), "C": ("W18X35", "W18X35")}
ROOF_GIRDERS = {"A": ("W12X16", "W12X14"), "B": ("W14X22", "W12X19"), "C": ("W14X22", "W12X19")}


def write_office(folder: Path) -> Path:
    """Write the office and return its path."""
    model = IfcBuilding("Harbour Yard office", "IFC4", "MILLIMETRE")
    ground = model.storey("Ground floor", 0.0)
    first = model.storey("First floor", FLOOR_TOP)
    roof = model.storey("Roof", ROOF_TOP)
    _office_supports(model, ground, first)
    model.slab(
        "Ground slab", _office_outline(), 0.0, (Layer("Concrete C30/37", 0.15, 2400.0),), ground, kind="BASESLAB"
    )
    stair = ((HEADER_AT, 2.5), (X["B"], 2.5), (X["B"], Y["2"]), (HEADER_AT, Y["2"]))
    model.slab(
        "First floor slab", _office_outline(), FLOOR_TOP, FLOOR_LAYERS, first, openings=(("Stair opening", stair),)
    )
    model.slab("Roof slab", _office_outline(), ROOF_TOP, ROOF_LAYERS, roof, kind="ROOF")
    _office_girders(model, "L1", FLOOR_GIRDERS, FLOOR_STEEL, first)
    _office_girders(model, "Roof", ROOF_GIRDERS, ROOF_STEEL, roof)
    _office_joists(model, "L1", FLOOR_JOISTS, FLOOR_GIRDERS, FLOOR_STEEL, first)
    _office_joists(model, "Roof", ROOF_JOISTS, ROOF_GIRDERS, ROOF_STEEL, roof)
    _office_stair(model, first)
    _office_odds_and_ends(model, ground, first)
    path = folder / OFFICE
    model.write(path)
    return path


def _office_outline() -> tuple[Point, ...]:
    return ((X["A"], -EDGE), (X["D"], -EDGE), (X["D"], Y["3"]), (X["A"], Y["3"]))


def _office_supports(model: IfcBuilding, ground: Storey, first: Storey) -> None:
    for letter in "ABC":
        for number, y in Y.items():
            model.column(f"Column {letter}{number}", COLUMN, (X[letter], y), (0.0, ROOF_STEEL), ground)
    line = ((X["D"], -EDGE), (X["D"], Y["3"] + 0.1))
    for name, storey, levels in (
        ("Wall D ground floor", ground, (0.0, FLOOR_STEEL)),
        ("Wall D first floor", first, (FLOOR_TOP, ROOF_STEEL)),
    ):
        model.wall(name, line, WALL_THICKNESS, levels, storey, material="Concrete masonry", density=2000.0)


def _office_girders(
    model: IfcBuilding, prefix: str, girders: dict[str, tuple[str, str]], top: float, storey: Storey
) -> None:
    clear = half_depth(COLUMN) + GAP
    for letter, sections in girders.items():
        for (first, last), section in zip((("1", "2"), ("2", "3")), sections, strict=True):
            ends = Grid().between((X[letter], Y[first]), (X[letter], Y[last]), clear, clear)
            model.beam(f"{prefix} girder {letter} {first}-{last}", section, ends, top, storey)


def _office_joists(
    model: IfcBuilding,
    prefix: str,
    joists: dict[float, tuple[str, str, str]],
    girders: dict[str, tuple[str, str]],
    top: float,
    storey: Storey,
) -> None:
    for y, sections in joists.items():
        for bay, section in zip(("AB", "BC", "CD"), sections, strict=True):
            if not section:
                continue
            clear_start, clear_end = (_office_clearance(letter, y, girders) for letter in bay)
            ends = Grid().between((X[bay[0]], y), (X[bay[1]], y), clear_start, clear_end)
            name = f"{prefix} joist {bay} {y:.1f}"
            model.beam(
                name,
                section,
                ends,
                top,
                storey,
                material=FLOOR_MATERIALS.get(name, "ASTM A992"),
                drawn=FLOOR_DRAWN.get(name, ""),
                mapped=prefix == "Roof",
            )


def _office_clearance(letter: str, y: float, girders: dict[str, tuple[str, str]]) -> float:
    """Where a joist stops, measured from the grid line: at the column, at the girder's flange, or inside the wall."""
    if letter == "D":
        return WALL_THICKNESS / 2 - BEARING
    if y in Y.values():
        return half_flange(COLUMN) + GAP
    return half_flange(girders[letter][0 if y < Y["2"] else 1]) + GAP


def _office_stair(model: IfcBuilding, first: Storey) -> None:
    """The header beside the stair opening, between the joists at y = 2.5 and on line 2, and the tail joist."""
    trimmer, header = FLOOR_JOISTS[2.5][0], "W12X16"
    clear = half_flange(trimmer) + GAP
    ends = Grid().between((HEADER_AT, 2.5), (HEADER_AT, Y["2"]), clear, clear)
    model.beam("L1 stair header", header, ends, FLOOR_STEEL, first)
    clear_start = half_flange(FLOOR_GIRDERS["A"][0]) + GAP
    ends = Grid().between((X["A"], 5.0), (HEADER_AT, 5.0), clear_start, half_flange(header) + GAP)
    model.beam("L1 tail joist A 5.0", "W10X12", ends, FLOOR_STEEL, first)


def _office_odds_and_ends(model: IfcBuilding, ground: Storey, first: Storey) -> None:
    """What an export holds besides: a beam end on nothing, a beam without a body, and things that are no beams."""
    reach = half_flange(COLUMN) + GAP
    model.beam("Canopy arm A2", "W8X18", ((-reach, Y["2"]), (-1.9, Y["2"])), 3.4, ground)
    model.bar(
        "Entrance lintel", None, ((-0.2, 3.0), (-0.2, 4.8)), 2.6, material="ASTM A992", storey=ground, type_name="W8X18"
    )
    flat = model.file.create_entity
    position = flat("IfcAxis2Placement2D", flat("IfcCartesianPoint", (0.0, 0.0)))
    bolt = flat("IfcCircleProfileDef", "AREA", "M20", position, 10.0)
    plate = flat("IfcRectangleProfileDef", "AREA", "PL12x200", position, 12.0, 200.0)
    tube = flat("IfcCircleHollowProfileDef", "AREA", "CHS42.4x3.2", position, 21.2, 3.2)
    level = FLOOR_STEEL - 0.10
    ends = ((X["B"] - 0.03, 0.125), (X["B"] - 0.03, 0.200))
    model.bar("Bolt M20x75", bolt, ends, level, material="ASTM F3125", storey=first, type_name="Bolt")
    ends = ((X["B"] - 0.15, 0.130), (X["B"] + 0.15, 0.130))
    model.bar("End plate PL12x200x300", plate, ends, level, material="ASTM A36", storey=first, type_name="Plate")
    ends = ((HEADER_AT - 0.10, 2.6), (HEADER_AT - 0.10, 7.4))
    model.bar("Stair railing", tube, ends, FLOOR_TOP + 1.1, material="Steel", storey=first, type_name="Handrail")


# ---------------------------------------------------- Millrace: a single-storey workshop, feet and inches, IFC2X3

JOISTS_AT = tuple(7.0 * number for number in range(9))  # x of the joists [ft]
HALL_Y = (0.0, 20.0, 38.0)  # masonry wall, interior girder line, edge girder line [ft]
HALL_X = (0.0, 28.0, 56.0)
HALL_COLUMN, STORE_COLUMN = "HSS8X8X3/8", "HSS6X6X1/4"
ROOF_FT = 17.0
LOFT_FT = 9.0
STORE_FT = 13.0
CLEAR_FT = 0.5 / 12


def _pcf_layer(material: str, inches: float, pounds: float) -> Layer:
    return Layer(material, inches * INCH, pounds * POUND_PER_CUBIC_FOOT)


SHED_ROOF = (  # 72/24 + 1.5/3 + 20/8 = 3.0 + 0.5 + 2.5 = 6.0 psf
    _pcf_layer("Built-up roofing", 0.5, 72.0),
    _pcf_layer("Rigid insulation", 4.0, 1.5),
    _pcf_layer("Steel roof deck", 1.5, 20.0),
)
LOFT_FLOOR = (_pcf_layer("Concrete on metal deck", 4.5, 144.0),)  # 54 psf


def write_workshop(folder: Path) -> Path:
    """Write the workshop and return its path."""
    model = IfcBuilding("Millrace workshop", "IFC2X3", "FOOT", pounds=True)
    floor = model.storey("Workshop floor", 0.0)
    loft = model.storey("Loft", LOFT_FT * FOOT)
    roof = model.storey("Roof", ROOF_FT * FOOT)
    hall = Grid()
    grade = (_pcf_layer("Concrete", 5.0, 150.0),)
    model.slab("Workshop slab on grade", _rectangle(hall, (0, 56), (0, 38)), 0.0, grade, floor, kind="BASESLAB")
    for name, x, y in ((f"Column {a}{b}", x, y) for a, x in zip("PQR", HALL_X, strict=True) for b, y in _hall_lines()):
        model.column(
            name, HALL_COLUMN, _feet(hall, x, y), (0.0, (ROOF_FT - 0.5) * FOOT), floor, material="ASTM A500 Gr. C"
        )
    line = (_feet(hall, -1.0, 0.0), _feet(hall, 57.0, 0.0))
    levels = (0.0, (ROOF_FT - 0.5) * FOOT)
    model.wall(
        "South wall", line, 8 * INCH, levels, floor, material="Concrete masonry", density=125 * POUND_PER_CUBIC_FOOT
    )
    model.slab("Hall roof", _rectangle(hall, (0, 56), (0, 38)), ROOF_FT * FOOT, SHED_ROOF, roof, kind="ROOF")
    model.slab("Loft floor", _rectangle(hall, (0, 28), (20, 38)), LOFT_FT * FOOT, LOFT_FLOOR, loft)
    _hall_roof(model, hall, roof)
    _loft(model, hall, loft)
    _paint_store(model, floor, roof)
    path = folder / WORKSHOP
    model.write(path)
    return path


def _hall_lines() -> tuple[tuple[str, float], ...]:
    return (("2", HALL_Y[1]), ("3", HALL_Y[2]))


def _feet(grid: Grid, x: float, y: float) -> Point:
    return grid.at(x * FOOT, y * FOOT)


def _rectangle(grid: Grid, x: tuple[float, float], y: tuple[float, float]) -> tuple[Point, ...]:
    return tuple(_feet(grid, *corner) for corner in ((x[0], y[0]), (x[1], y[0]), (x[1], y[1]), (x[0], y[1])))


def _line_ft(grid: Grid, start: Point, end: Point, clear_start: float, clear_end: float) -> tuple[Point, Point]:
    """Ends in world coordinates of a beam between grid points in feet, with clearances in metres."""
    first, last = ((x * FOOT, y * FOOT) for x, y in (start, end))
    return grid.between(first, last, clear_start, clear_end)


def _girder_row(
    model: IfcBuilding, grid: Grid, names: Sequence[str], sections: Sequence[str], y: float, top: float, storey: Storey
) -> None:
    clear = half_flange(HALL_COLUMN) + CLEAR_FT * FOOT
    for name, section, first, last in zip(names, sections, HALL_X, HALL_X[1:], strict=False):
        model.beam(name, section, _line_ft(grid, (first, y), (last, y), clear, clear), top, storey)


ROOF_ROWS = {20.0: ("W14X22", "W12X16"), 38.0: ("W12X16", "W12X14")}


def _hall_roof(model: IfcBuilding, hall: Grid, roof: Storey) -> None:
    top = (ROOF_FT - 0.5) * FOOT
    for y, sections in ROOF_ROWS.items():
        _girder_row(model, hall, [f"Roof girder {bay} {y:.0f}" for bay in ("PQ", "QR")], sections, y, top, roof)
    in_wall = 4 * INCH - 6 * INCH  # 6 in of bearing on an 8 in wall, from its centreline
    for x in JOISTS_AT:
        at_column = x in HALL_X
        rows = {y: half_flange(HALL_COLUMN if at_column else ROOF_ROWS[y][0 if x < 28 else 1]) for y in ROOF_ROWS}
        clear = {y: half + CLEAR_FT * FOOT for y, half in rows.items()}
        section = "C6X8.2" if x == 35.0 else "W8X10"
        ends = _line_ft(hall, (x, 0.0), (x, 20.0), in_wall, clear[20.0])
        model.beam(f"Roof joist S{x:.0f}", section, ends, top, roof, mapped=section == "W8X10")
        ends = _line_ft(hall, (x, 20.0), (x, 38.0), clear[20.0], clear[38.0])
        model.beam(f"Roof joist N{x:.0f}", "W8X10", ends, top, roof, mapped=True)


LOFT_ROWS = {20.0: ("W14X22",), 38.0: ("W16X26",)}


def _loft(model: IfcBuilding, hall: Grid, loft: Storey) -> None:
    top = LOFT_FT * FOOT - 4.5 * INCH
    for y, sections in LOFT_ROWS.items():
        _girder_row(model, hall, [f"Loft girder {y:.0f}"], sections, y, top, loft)
    for x in JOISTS_AT[:5]:
        edge = x in HALL_X
        halves = [half_flange(HALL_COLUMN if edge else LOFT_ROWS[y][0]) for y in LOFT_ROWS]
        ends = _line_ft(hall, (x, 20.0), (x, 38.0), *(half + CLEAR_FT * FOOT for half in halves))
        material = "ASTM A36" if x == 14.0 else "ASTM A992"
        model.beam(f"Loft joist {x:.0f}", "C10X15.3" if edge else "W12X14", ends, top, loft, material=material)


def _paint_store(model: IfcBuilding, floor: Storey, roof: Storey) -> None:
    """A small store beside the hall, turned by 30 degrees in plan."""
    store = Grid(origin=(70.0 * FOOT, 5.0 * FOOT), angle=30.0)
    top = (STORE_FT - 0.5) * FOOT
    for name, x, y in (("S1", 0, 0), ("S2", 22, 0), ("S3", 22, 15), ("S4", 0, 15)):
        at = _feet(store, x, y)
        model.column(f"Column {name}", STORE_COLUMN, at, (0.0, top), floor, material="ASTM A500 Gr. C", angle=30.0)
    model.slab("Paint store roof", _rectangle(store, (0, 22), (0, 15)), STORE_FT * FOOT, SHED_ROOF, roof, kind="ROOF")
    at_column = half_flange(STORE_COLUMN) + CLEAR_FT * FOOT
    for y in (0.0, 15.0):
        ends = _line_ft(store, (0.0, y), (22.0, y), at_column, at_column)
        model.beam(f"Store girder {y:.0f}", "W10X12", ends, top, roof)
    for x in (0.0, 5.5, 11.0, 16.5, 22.0):
        clear = at_column if x in {0.0, 22.0} else half_flange("W10X12") + CLEAR_FT * FOOT
        ends = _line_ft(store, (x, 0.0), (x, 15.0), clear, clear)
        model.beam(f"Store joist {x:.1f}", "W6X15" if x == 11.0 else "W8X10", ends, top, roof)


if __name__ == "__main__":
    for written in (write_office(HERE), write_workshop(HERE)):
        print(f"{written.name}: {written.stat().st_size / 1024:.0f} KB")
