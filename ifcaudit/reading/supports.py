"""Columns and walls: what beams and slabs may stand on."""

from __future__ import annotations

from math import hypot
from typing import Any

import shapely
from shapely import MultiPoint

from ifcaudit.model.building import PlanArea, VerticalKind, VerticalSupport
from ifcaudit.model.section import Point2
from ifcaudit.reading.bodies import Bodies, Mesh, Prism, Unreadable, plan_footprint, z_range
from ifcaudit.reading.ifc_file import Model
from ifcaudit.reading.malformed import MALFORMED
from ifcaudit.reading.plates import centre_of, clean_area, plan_of_mesh
from ifcaudit.reading.relations import Relations

_CLASSES = (("IfcColumn", VerticalKind.COLUMN), ("IfcWall", VerticalKind.WALL))
_PART_CLASSES = ("IfcBuildingElementPart", "IfcWall", "IfcColumn", "IfcMember", "IfcPlate", "IfcBuildingElementProxy")
_FEW = 5


def read_supports(
    model: Model, bodies: Bodies, relations: Relations
) -> tuple[tuple[VerticalSupport, ...], tuple[str, ...]]:
    """Read columns and walls, by instance number.

    Openings in walls are not taken out: a lintel or a beam over one is found by its own bearings.

    Args:
        model: The opened file.
        bodies: Solids in world coordinates.
        relations: What belongs to what.

    Returns:
        The supports, and remarks about those without a readable body.
    """
    supports: list[tuple[int, VerticalSupport]] = []
    unreadable: list[str] = []
    for named, kind in _CLASSES:
        for element in model.file.by_type(named):
            if _part_of_support(relations, element) or _part_of_curtain_wall(relations, element):
                continue
            try:
                support = _support(model, element, kind, _blocks(bodies, relations, element))
            except MALFORMED:
                support = None
            if support is not None:
                supports.append((element.id(), support))
            else:
                name = str(model.get(element, "Name") or "").strip() or "without a name"
                reason = _why(bodies, element)
                unreadable.append(f"{kind} {name} ({model.get(element, 'GlobalId')}): no readable body ({reason})")
    ordered = sorted(supports, key=lambda pair: pair[0])
    return tuple(support for _, support in ordered), _report(unreadable)


def _report(unreadable: list[str]) -> tuple[str, ...]:
    """One remark per unreadable support; the rest of a long list as one."""
    consequence = "a beam end that rests on it is not checked; export it with a solid body"
    named = [f"{each}; {consequence}" for each in unreadable[:_FEW]]
    rest = len(unreadable) - _FEW
    return (*named, f"{rest} more columns and walls have no readable body") if rest > 0 else tuple(named)


def _why(bodies: Bodies, element: Any) -> str:
    reasons = (body.reason for body in bodies.of(element) if isinstance(body, Unreadable))
    return "; ".join(dict.fromkeys(reasons)) or "its solid encloses no area"


def _part_of_support(relations: Relations, element: Any) -> bool:
    """Tell whether the element is a part of a wall or column, whose record it would repeat."""
    whole = relations.parent_of(element.id())
    return whole is not None and whole.id() != element.id() and (whole.is_a("IfcWall") or whole.is_a("IfcColumn"))


def _part_of_curtain_wall(relations: Relations, element: Any) -> bool:
    whole = relations.parent_of(element.id())
    return whole is not None and bool(whole.is_a("IfcCurtainWall"))


def _blocks(bodies: Bodies, relations: Relations, element: Any) -> list[Prism | Mesh]:
    own: list[Prism | Mesh] = [body for body in bodies.of(element) if not isinstance(body, Unreadable)]
    if own:
        return own
    for part in relations.parts_of(element.id()):
        if any(part.is_a(named) for named in _PART_CLASSES):
            own.extend(body for body in bodies.of(part) if not isinstance(body, Unreadable))
    return own


def _support(model: Model, element: Any, kind: VerticalKind, blocks: list[Prism | Mesh]) -> VerticalSupport | None:
    outlines: list[PlanArea] = []
    levels: list[float] = []
    for block in blocks:
        try:
            outline = _outline(block, kind)
            low, high = z_range(block)
        except MALFORMED:
            continue  # a support without any usable body is reported
        if not outline.is_empty and high > low:
            outlines.append(outline)
            levels.extend((low, high))
    if not outlines:
        return None
    footprint = clean_area(shapely.union_all(outlines))
    if kind is VerticalKind.COLUMN:
        # The envelope: beams stop 12 mm from the box around an I-column, 99 mm from its steel.
        footprint = clean_area(footprint.convex_hull)
    if footprint.is_empty:
        return None
    return VerticalSupport(
        kind=kind,
        global_id=str(model.get(element, "GlobalId")),
        name=str(model.get(element, "Name") or "").strip(),
        footprint=footprint,
        bottom=min(levels),
        top=max(levels),
        centreline=centreline(footprint) if kind is VerticalKind.WALL else (centre_of(footprint),) * 2,
    )


def _outline(block: Prism | Mesh, kind: VerticalKind) -> PlanArea:
    if isinstance(block, Prism):
        return clean_area(plan_footprint(block))
    if kind is VerticalKind.COLUMN:
        return clean_area(MultiPoint(block.vertices[:, :2]).convex_hull)
    return plan_of_mesh(block.vertices, block.faces)


def centreline(footprint: PlanArea) -> tuple[Point2, Point2]:
    """Return the long axis of the smallest rectangle around a plan outline.

    Example:
        >>> from shapely import box
        >>> centreline(box(0, 0, 4, 0.5))
        ((0.0, 0.25), (4.0, 0.25))
    """
    corners = shapely.get_coordinates(shapely.oriented_envelope(footprint))[:4]
    if len(corners) < 4:
        return (centre_of(footprint),) * 2
    first, second = corners[1] - corners[0], corners[2] - corners[1]
    if hypot(*first) >= hypot(*second):
        ends = (0.5 * (corners[0] + corners[3]), 0.5 * (corners[1] + corners[2]))
    else:
        ends = (0.5 * (corners[0] + corners[1]), 0.5 * (corners[2] + corners[3]))
    here, there = sorted((float(end[0]), float(end[1])) for end in ends)
    return here, there
