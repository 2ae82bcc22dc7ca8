"""Cuts a slab into panels along its support lines, and says which support holds each panel edge."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from math import hypot

import numpy as np
import shapely
from numpy.typing import NDArray
from shapely import LineString, Point, Polygon, STRtree
from shapely.geometry.base import BaseGeometry

from ifcaudit.model.building import PlanArea
from ifcaudit.model.framing import SupportLine
from ifcaudit.model.loads import FloatArray

OVERSHOOT = 0.35
"""A support line is drawn on by this at both ends: joists stop at flanges, slabs reach beyond axes [m]."""
EDGE_REACH = 0.30
"""A slab edge this far from the face of a support that runs along it rests on it [m]."""
PARALLEL_SINE = 0.17
"""Sine of the angle below which an edge runs along a support line (10 degrees)."""
ON_LINE = 1e-4
"""A cut edge lies this near to the line that cut it [m]."""
WEAK = 10.0
"""Rank from which an edge is held only by what lies a little beyond the end of a line."""
SHORTEST_PIECE = 1e-6
"""An edge is not divided nearer to its end than this [m]."""
NODING_GRID = 1e-9
"""Coordinates, taken from the slab's own middle, are rounded to this where lines cross [m]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Panel:
    """A part of a slab between support lines, in coordinates from the slab's own middle.

    Attributes:
        polygon: Outline.
        edges: Edges of all rings, outer counter-clockwise and holes clockwise: shape (edges, 2, 2) [m].
        holders: For each edge the index of the support line that holds it, or -1.
        firm: For each edge, whether its holder really is there, not only a little beyond the holder's end.
    """

    polygon: Polygon
    edges: FloatArray
    holders: tuple[int, ...]
    firm: tuple[bool, ...]


def cut_into_panels(plan: PlanArea, supports: Sequence[SupportLine]) -> list[Panel]:
    """Cut a slab along its support lines.

    Lines are drawn on by a little at both ends. A line that still ends inside a panel, such as a beam that stops at a
    column amid the slab, is drawn on straight to the next line or edge: the parts on either side then rest on it, and
    what lies beyond its end goes to its end.

    Args:
        plan: Net plan, near the origin.
        supports: Support lines, in the same coordinates.

    Returns:
        Panels that cover the slab once.
    """
    holding = drawn_on(plan, supports)
    # Every line is cut a little further than it holds, so that lines stopping short of one another close panels.
    cuts = [_lengthened(line, OVERSHOOT, OVERSHOOT) for line in holding]
    cutting = [LineString([line.start, line.end]) for line in cuts]
    edges = shapely.unary_union([plan.boundary, *cutting], grid_size=NODING_GRID)
    polygons = [part for part in shapely.get_parts(shapely.polygonize([edges])) if part.area > 0.0]
    shapely.prepare(plan)
    inside = [polygon for polygon in polygons if plan.contains(polygon.representative_point())]
    if not inside:
        return []
    outlines = _split_at_line_ends([_edges(polygon) for polygon in inside], [*supports, *holding, *cuts])
    holders, firm = _holders(np.concatenate(outlines), supports, holding, cuts)
    panels, row = [], 0
    for polygon, outline in zip(inside, outlines, strict=True):
        rows = slice(row, row + len(outline))
        panels.append(
            Panel(
                polygon=polygon, edges=outline, holders=tuple(holders[rows].tolist()), firm=tuple(firm[rows].tolist())
            )
        )
        row += len(outline)
    return panels


def _edges(polygon: Polygon) -> FloatArray:
    oriented = shapely.orient_polygons(polygon)
    rings = [shapely.get_coordinates(ring) for ring in (oriented.exterior, *oriented.interiors)]
    return np.concatenate([np.stack([ring[:-1], ring[1:]], axis=1) for ring in rings])


def _split_at_line_ends(outlines: Sequence[FloatArray], supports: Sequence[SupportLine]) -> list[FloatArray]:
    """Divide edges where a support line along them begins or ends, so that each piece has one holder all along."""
    if not supports:
        return list(outlines)
    edges = np.concatenate(outlines)
    tree = STRtree([LineString([line.start, line.end]) for line in supports])
    edge_index, line_index = tree.query(shapely.linestrings(edges), predicate="dwithin", distance=_reach(supports))
    run = edges[:, 1] - edges[:, 0]
    length = np.hypot(run[:, 0], run[:, 1])
    along = run / length[:, None]
    cuts: dict[int, list[float]] = {}
    for ends in (np.array([line.start for line in supports]), np.array([line.end for line in supports])):
        station = ((ends[line_index] - edges[edge_index, 0]) * along[edge_index]).sum(axis=1)
        inner = (station > SHORTEST_PIECE) & (station < length[edge_index] - SHORTEST_PIECE)
        inner &= _sines(edges[edge_index], line_index, supports) < PARALLEL_SINE
        for edge, where in zip(edge_index[inner].tolist(), station[inner].tolist(), strict=True):
            cuts.setdefault(edge, []).append(where)
    result, first = [], 0
    for outline in outlines:
        pieces = [
            piece
            for number, edge in enumerate(outline, start=first)
            for piece in _pieces(edge, along[number], sorted(cuts.get(number, ())))
        ]
        result.append(np.array(pieces))
        first += len(outline)
    return result


def _pieces(edge: FloatArray, along: FloatArray, stations: Sequence[float]) -> list[FloatArray]:
    if not stations:
        return [edge]
    points = [edge[0], *(edge[0] + station * along for station in stations), edge[1]]
    pieces = [np.stack(pair) for pair in pairwise(points)]
    return [piece for piece in pieces if np.hypot(*(piece[1] - piece[0])) > SHORTEST_PIECE] or [edge]


def _reach(supports: Sequence[SupportLine]) -> float:
    return EDGE_REACH + max(line.half_width for line in supports)


def _sines(edges: FloatArray, line_index: NDArray[np.int64], supports: Sequence[SupportLine]) -> FloatArray:
    """Sine of the angle between each edge and its line."""
    starts = np.array([line.start for line in supports])[line_index]
    run = np.array([line.end for line in supports])[line_index] - starts
    edge = edges[:, 1] - edges[:, 0]
    cross = np.abs(edge[:, 0] * run[:, 1] - edge[:, 1] * run[:, 0])
    return np.asarray(cross / np.maximum(np.hypot(*edge.T) * np.hypot(*run.T), 1e-12))


def drawn_on(plan: BaseGeometry, supports: Sequence[SupportLine]) -> list[SupportLine]:
    """Draw every line that ends in the open, amid a panel, on straight to the next line or edge."""
    lengthened = [_lengthened(line, OVERSHOOT, OVERSHOOT) for line in supports]
    shapes = [LineString([line.start, line.end]) for line in lengthened]
    tree = STRtree(shapes) if shapes else None
    boundary = plan.boundary
    result = []
    for index, line in enumerate(supports):
        more = [
            _open_distance(end, other, index, plan, boundary, shapes, tree)
            for end, other in ((line.start, line.end), (line.end, line.start))
        ]
        result.append(_lengthened(line, more[0], more[1]))
    return result


def _open_distance(
    end: tuple[float, float],
    other: tuple[float, float],
    index: int,
    plan: BaseGeometry,
    boundary: BaseGeometry,
    shapes: Sequence[LineString],
    tree: STRtree | None,
) -> float:
    """How far an end lies from whatever it runs against, when it ends in the open inside the slab; else 0."""
    point = Point(end)
    if tree is None or not plan.contains(point) or boundary.distance(point) <= OVERSHOOT:
        return 0.0
    near = [item for item in tree.query(point, predicate="dwithin", distance=1e-6) if item != index]
    if near:
        return 0.0
    length = hypot(end[0] - other[0], end[1] - other[1])
    ux, uy = (end[0] - other[0]) / length, (end[1] - other[1]) / length
    far = sum(plan.bounds[2:]) - sum(plan.bounds[:2])
    ray = LineString([(end[0] + 1e-6 * ux, end[1] + 1e-6 * uy), (end[0] + far * ux, end[1] + far * uy)])
    hits = [boundary.intersection(ray)]
    hits += [shapes[item].intersection(ray) for item in tree.query(ray, predicate="intersects") if item != index]
    distances = [hit.distance(point) for hit in hits if not hit.is_empty]
    return min(distances, default=0.0) + 1e-6 if distances else 0.0


def _lengthened(line: SupportLine, before: float, after: float) -> SupportLine:
    (x0, y0), (x1, y1) = line.start, line.end
    length = hypot(x1 - x0, y1 - y0)
    ux, uy = (x1 - x0) / length, (y1 - y0) / length
    return replace(line, start=(x0 - before * ux, y0 - before * uy), end=(x1 + after * ux, y1 + after * uy))


def _holders(
    edges: FloatArray,
    supports: Sequence[SupportLine],
    holding: Sequence[SupportLine],
    cuts: Sequence[SupportLine],
) -> tuple[NDArray[np.int64], NDArray[np.bool_]]:
    """Index of the support line that holds each edge, -1 for none, and whether it holds it firmly.

    An edge on a line itself comes first, then one on the part drawn on through the open, then one beside a line that
    runs along it, and last, not firmly, one just beyond the end of a line: a slab that reaches a little past its
    supports still rests on them, but such an edge must not decide how the slab spans. Among equals the nearest line
    counts, then the first.

    Args:
        edges: Shape (edges, 2, 2) [m].
        supports: Lines as they are.
        holding: The same, drawn on through the open.
        cuts: The same, with what they were cut beyond their ends.
    """
    best = np.full(len(edges), np.inf)
    holder = np.full(len(edges), -1, dtype=np.int64)
    if not supports:
        return holder, np.zeros(len(edges), dtype=np.bool_)
    middles = edges.mean(axis=1)
    tree = STRtree([LineString([line.start, line.end]) for line in cuts])
    edge_index, line_index = tree.query(shapely.points(middles), predicate="dwithin", distance=_reach(supports))
    if len(edge_index):
        where = edges[edge_index], middles[edge_index], line_index
        rank = np.fmin(_ranks(*where, supports), 1.0 + _ranks(*where, holding))
        rank = np.fmin(rank, WEAK + _ranks(*where, cuts))
        # Written from worst to best, so that the best of each edge is written last.
        order = np.lexsort((line_index, rank))[::-1]
        best[edge_index[order]] = rank[order]
        holder[edge_index[order]] = np.where(np.isfinite(rank[order]), line_index[order], -1)
    return np.where(np.isfinite(best), holder, -1), best < WEAK


def _ranks(
    edges: FloatArray, middles: FloatArray, line_index: NDArray[np.int64], supports: Sequence[SupportLine]
) -> FloatArray:
    starts = np.array([line.start for line in supports])[line_index]
    ends = np.array([line.end for line in supports])[line_index]
    half_widths = np.array([line.half_width for line in supports])[line_index]
    run = ends - starts
    length = np.hypot(run[:, 0], run[:, 1])
    along = run / length[:, None]
    from_start = middles - starts
    station = (from_start * along).sum(axis=1)
    offset = np.abs(from_start[:, 0] * along[:, 1] - from_start[:, 1] * along[:, 0])
    sine = _sines(edges, line_index, supports)
    beyond = np.maximum(np.maximum(-station, station - length), 0.0)
    runs_along = sine < PARALLEL_SINE
    on_line = runs_along & (offset <= ON_LINE)
    beside = runs_along & (offset <= half_widths + EDGE_REACH) & (beyond <= ON_LINE)
    return np.where(on_line & (beyond <= ON_LINE), offset, np.where(beside, 3.0 + offset, np.inf))
