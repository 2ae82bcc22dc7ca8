"""Small pieces of buildings for tests of the floor and load-path stages; metres."""

from __future__ import annotations

from shapely import Polygon, box

from ifcaudit.model.building import Beam, Layer, Slab, VerticalKind, VerticalSupport
from ifcaudit.model.material import MaterialText


def beam(
    name: str,
    start: tuple[float, float],
    end: tuple[float, float],
    *,
    top: float = 4.0,
    height: float = 0.4,
    width: float = 0.15,
    storey: str = "Level 1",
) -> Beam:
    """Make a level beam whose top face lies at ``top``."""
    level = top - height / 2
    return Beam(
        global_id=name,
        entity_id=abs(hash(name)) % 10**6,
        ifc_class="IfcBeam",
        name=name,
        storey=storey,
        start=(*start, level),
        end=(*end, level),
        height=height,
        width=width,
    )


def column(
    name: str, x: float, y: float, *, bottom: float = 0.0, top: float = 4.0, size: float = 0.25
) -> VerticalSupport:
    """Make a square column."""
    half = size / 2
    return VerticalSupport(
        kind=VerticalKind.COLUMN,
        global_id=name,
        name=name,
        footprint=box(x - half, y - half, x + half, y + half),
        bottom=bottom,
        top=top,
        centreline=((x, y), (x, y)),
    )


def wall(
    name: str,
    start: tuple[float, float],
    end: tuple[float, float],
    *,
    bottom: float = 0.0,
    top: float = 3.6,
    thickness: float = 0.2,
) -> VerticalSupport:
    """Make a straight wall along an axis parallel to x or y."""
    half = thickness / 2
    (x0, y0), (x1, y1) = start, end
    along_x = abs(x1 - x0) > abs(y1 - y0)
    footprint = (
        box(min(x0, x1), y0 - half, max(x0, x1), y0 + half)
        if along_x
        else box(x0 - half, min(y0, y1), x0 + half, max(y0, y1))
    )
    return VerticalSupport(
        kind=VerticalKind.WALL,
        global_id=name,
        name=name,
        footprint=footprint,
        bottom=bottom,
        top=top,
        centreline=(start, end),
    )


def slab(
    name: str,
    plan: Polygon,
    *,
    bottom: float = 4.0,
    thickness: float = 0.15,
    material: str = "concrete",
    density: float | None = 2400.0,
    roof: bool = False,
) -> Slab:
    """Make a level slab of one layer."""
    return Slab(
        global_id=name,
        entity_id=abs(hash(name)) % 10**6,
        ifc_class="IfcSlab",
        name=name,
        storey="Level 1",
        plan=plan,
        gross_area=plan.area,
        top=bottom + thickness,
        bottom=bottom,
        layers=(Layer(thickness=thickness, material=MaterialText(names=(material,), density=density)),),
        roof=roof,
    )
