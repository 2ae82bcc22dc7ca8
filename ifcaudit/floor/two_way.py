"""Two-way panels: every point goes to the nearest support, the 45-degree pattern on a rectangle."""

from __future__ import annotations

from itertools import pairwise
from math import hypot

import shapely
from shapely import Polygon

from ifcaudit.floor.panels import Panel
from ifcaudit.model.framing import Vector2
from ifcaudit.model.section import Point2

LARGEST_RATIO = 2.0
"""Long side over short side up to which a panel held on all sides spans two ways."""
LEAST_HELD_PERIMETER = 0.98
"""Part of the perimeter that must rest on supports."""
SMALLEST_TURN = 1e-3
"""Sine of the turn between two edges below which they are one straight side."""

HalfPlane = tuple[float, float, float]
"""a, b, c of a x + b y + c, positive inside; the distance to the side where (a, b) is a unit normal."""


def two_way_parts(panel: Panel) -> list[tuple[Polygon, int, Vector2]] | None:
    """Share a panel out two ways.

    Returns:
        Polygons with the index of their support line and the direction of travel, or ``None`` where the panel does
        not act two-way: not convex, with a hole, not held on all sides, or too long.
    """
    polygon = panel.polygon
    if polygon.interiors or polygon.area < (1.0 - 1e-6) * polygon.convex_hull.area or not _is_compact(polygon):
        return None
    held = sum(_length(edge) for edge, firm in zip(panel.edges.tolist(), panel.firm, strict=True) if firm)
    if held < LEAST_HELD_PERIMETER * polygon.length:
        return None
    sides = _sides(panel)
    if any(max(holders) < 0 for _, holders in sides):
        return None
    corners = [tuple(point) for point in shapely.get_coordinates(polygon.exterior)[:-1].tolist()]
    planes = [_inside(edges[0][0], edges[-1][1]) for edges, _ in sides]
    parts = []
    for index, (edges, holders) in enumerate(sides):
        a, b, c = planes[index]
        region: list[Point2] = [(x, y) for x, y in corners]
        for other, (a2, b2, c2) in enumerate(planes):
            if other != index:
                region = clip(region, (a2 - a, b2 - b, c2 - c))
        parts += _by_holder(region, edges, holders, (a, b))
    return parts


def _is_compact(polygon: Polygon) -> bool:
    box = shapely.get_coordinates(polygon.minimum_rotated_rectangle)
    first, second = (hypot(*(box[index + 1] - box[index])) for index in (0, 1))
    return bool(max(first, second) <= LARGEST_RATIO * (1.0 + 1e-6) * min(first, second))


def _length(edge: list[list[float]]) -> float:
    return hypot(edge[1][0] - edge[0][0], edge[1][1] - edge[0][1])


Edge = tuple[Point2, Point2]


def _sides(panel: Panel) -> list[tuple[list[Edge], list[int]]]:
    """Straight sides in order round the panel, each with its edges and their supports."""
    edges: list[Edge] = [((a[0], a[1]), (b[0], b[1])) for a, b in panel.edges.tolist()]
    first = next(
        (index for index in range(len(edges)) if _turns(edges[index - 1], edges[index])),
        0,
    )
    sides: list[tuple[list[Edge], list[int]]] = []
    for step in range(len(edges)):
        index = (first + step) % len(edges)
        if step == 0 or _turns(edges[index - 1], edges[index]):
            sides.append(([], []))
        sides[-1][0].append(edges[index])
        sides[-1][1].append(panel.holders[index])
    return sides


def _turns(before: Edge, after: Edge) -> bool:
    (x0, y0), (x1, y1) = before
    (x2, y2), (x3, y3) = after
    cross = (x1 - x0) * (y3 - y2) - (y1 - y0) * (x3 - x2)
    return abs(cross) > SMALLEST_TURN * hypot(x1 - x0, y1 - y0) * hypot(x3 - x2, y3 - y2)


def _inside(start: Point2, end: Point2) -> HalfPlane:
    """Distance from the line start-end, positive on its left, where the panel lies."""
    length = hypot(end[0] - start[0], end[1] - start[1])
    a, b = -(end[1] - start[1]) / length, (end[0] - start[0]) / length
    return a, b, -(a * start[0] + b * start[1])


def clip(polygon: list[Point2], plane: HalfPlane) -> list[Point2]:
    """Keep the part of a convex polygon where a x + b y + c is not negative.

    Example:
        >>> clip([(0.0, 0.0), (2.0, 0.0), (2.0, 2.0), (0.0, 2.0)], (-1.0, 0.0, 1.0))
        [(0.0, 0.0), (1.0, 0.0), (1.0, 2.0), (0.0, 2.0)]
    """
    if not polygon:
        return []
    a, b, c = plane
    kept: list[Point2] = []
    for (x0, y0), (x1, y1) in pairwise([*polygon, polygon[0]]):
        value0, value1 = a * x0 + b * y0 + c, a * x1 + b * y1 + c
        if value0 >= 0.0:
            kept.append((x0, y0))
        if (value0 > 0.0 > value1) or (value0 < 0.0 < value1):
            part = value0 / (value0 - value1)
            kept.append((x0 + part * (x1 - x0), y0 + part * (y1 - y0)))
    return kept


def _by_holder(
    region: list[Point2], edges: list[Edge], holders: list[int], normal: Vector2
) -> list[tuple[Polygon, int, Vector2]]:
    """Divide one side's region among the supports along it, at right angles where one ends and the next begins."""
    parts = []
    along = (normal[1], -normal[0])
    runs: list[tuple[Point2, Point2, int]] = []
    first_held = next(holder for holder in holders if holder >= 0)
    for (start, end), found in zip(edges, holders, strict=True):
        holder = found if found >= 0 or runs else first_held
        if runs and (runs[-1][2] == holder or holder < 0):
            runs[-1] = (runs[-1][0], end, runs[-1][2])
        else:
            runs.append((start, end, holder))
    for index, (start, end, holder) in enumerate(runs):
        part = region
        if index > 0:
            part = clip(part, (along[0], along[1], -(along[0] * start[0] + along[1] * start[1])))
        if index < len(runs) - 1:
            part = clip(part, (-along[0], -along[1], along[0] * end[0] + along[1] * end[1]))
        if len(part) >= 3:
            polygon = Polygon(part)
            if polygon.area > 1e-9:
                parts.append((polygon, holder, normal))
    return parts
