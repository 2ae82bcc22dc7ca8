"""Writes bays of a steel floor for property tests: joists between girders on columns, a slab on top.

The same bay can be turned, moved, mirrored, written in another unit or schema, or have its beams spread over storeys;
its GlobalIds stay the same, because they come from the roles ``joist 0-3`` and ``girder 1``.
"""

from __future__ import annotations

import sys
from collections.abc import Sequence
from importlib import import_module
from itertools import pairwise
from pathlib import Path
from typing import Any

_SAMPLES = Path(__file__).parents[2] / "sample_models"
if str(_SAMPLES) not in sys.path:
    sys.path.append(str(_SAMPLES))
_ifc = import_module("ifc_building")
_shapes = import_module("shapes")

FOOT: float = _ifc.FOOT
DECK = (("Concrete on metal deck", 0.120, 2350.0),)
COLUMN = "HSS8X8X3/8"
GAP = 0.012


def write_bay(
    path: Path,
    *,
    joist_spacing: float,
    joist_span: float,
    girder_span: float,
    joist_section: str = "W16X26",
    girder_section: str = "W21X50",
    joist_bays: int = 1,
    layers: Sequence[tuple[str, float, float]] = DECK,
    roof: bool = False,
    schema: str = "IFC4",
    length_unit: str = "METRE",
    rotation: float = 0.0,
    offset: tuple[float, float] = (0.0, 0.0),
    mirrored: bool = False,
    storeys: int = 1,
    storey_height: float = 4.0,
    material: str = "ASTM A992",
    split_storey: bool = False,
    split_slab: bool = False,
    reversed_axes: bool = False,
) -> Path:
    """Write one bay, or several in a row along the joists, and return the path.

    Grid x runs along the girders, grid y along the joists. Girder ``k`` lies at ``y = k * joist_span``; joist ``k-i``
    spans from girder ``k`` to the next at ``x = i * joist_spacing``, the first and last ones on the columns. Names and
    roles of upper floors carry the floor: ``girder 1 floor 2``.

    Args:
        path: File to write.
        joist_spacing: [m].
        joist_span: Between centres of girders [m].
        girder_span: Between centres of columns, a multiple of the spacing [m].
        joist_section: Designation, one of those in ``sample_models/shapes.py``.
        girder_section: The same.
        joist_bays: Number of bays in a row; from 2 on there are interior girders.
        layers: Material, thickness [m], density [kg/m³], from the top down.
        roof: The top slab is a roof.
        schema: ``IFC2X3``, ``IFC4`` or ``IFC4X3``.
        length_unit: ``MILLIMETRE``, ``METRE``, ``FOOT`` or ``INCH``.
        rotation: Of the whole bay in plan [degrees].
        offset: Of its origin in plan [m].
        mirrored: Mirror the plan about the girders' direction.
        storeys: Number of equal floors above each other.
        storey_height: [m].
        material: Of the beams.
        split_storey: Contain every second joist in another storey, with another elevation.
        split_slab: Draw each slab as two, meeting over the middle joist (an even number of spaces only).
        reversed_axes: Draw every beam from its other end.

    Raises:
        ValueError: The girder span is no multiple of the spacing, or the slab cannot be split over a joist.
    """
    spaces = round(girder_span / joist_spacing)
    if abs(spaces * joist_spacing - girder_span) > 1e-6 or spaces < 1:
        raise ValueError(f"girder span {girder_span} m is no multiple of the joist spacing {joist_spacing} m")
    if split_slab and spaces % 2:
        raise ValueError(f"a slab over {spaces} joist spaces cannot be split over the middle joist")
    model = _ifc.IfcBuilding("Test bay", schema, length_unit, pounds=length_unit in {"FOOT", "INCH"})
    grid = _ifc.Grid(origin=offset, angle=rotation, mirrored=mirrored)
    build_up = [_ifc.Layer(*layer) for layer in layers]
    thickness = sum(layer.thickness for layer in build_up)
    ground = model.storey("Level 0", 0.0)
    steel_top = storeys * storey_height - thickness
    lines = [k * joist_span for k in range(joist_bays + 1)]
    for k, y in enumerate(lines):
        for side, x in (("a", 0.0), ("b", girder_span)):
            # A square tube looks the same from all sides, so that mirroring leaves it as it is.
            model.column(f"column {k}{side}", COLUMN, grid.at(x, y), (0.0, steel_top), ground, angle=rotation)

    def draw(role: str, section: str, start: Any, end: Any, clears: tuple[float, float], top: float, home: Any) -> None:
        ends = grid.between(start, end, *clears)
        model.beam(role, section, ends[::-1] if reversed_axes else ends, top, home, material=material)

    at_column = _shapes.SHAPES[COLUMN].width / 2 + GAP
    at_girder = _shapes.SHAPES[girder_section].width / 2 + GAP
    for floor in range(1, storeys + 1):
        level = floor * storey_height
        home = model.storey(f"Level {floor}", level)
        other = model.storey(f"Level {floor} intermediate", level - 0.6) if split_storey else home
        suffix = "" if floor == 1 else f" floor {floor}"
        top = level - thickness
        for k, y in enumerate(lines):
            draw(f"girder {k}{suffix}", girder_section, (0.0, y), (girder_span, y), (at_column, at_column), top, home)
        for k, (y, next_y) in enumerate(pairwise(lines)):
            for i in range(spaces + 1):
                x, clear = i * joist_spacing, at_column if i in {0, spaces} else at_girder
                storey = other if i % 2 else home
                draw(f"joist {k}-{i}{suffix}", joist_section, (x, y), (x, next_y), (clear, clear), top, storey)
        kind = "ROOF" if roof and floor == storeys else "FLOOR"
        edges = [0.0, girder_span / 2, girder_span] if split_slab else [0.0, girder_span]
        for part, (first, last) in enumerate(pairwise(edges)):
            corners = [(first, 0.0), (last, 0.0), (last, lines[-1]), (first, lines[-1])]
            outline = [grid.at(*corner) for corner in corners]
            model.slab(f"slab {part}{suffix}", outline, level, build_up, home, kind=kind)
    model.write(path)
    return path
