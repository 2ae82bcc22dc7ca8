"""The line load that a slab part brings to a support line: exact, piecewise linear.

Every point of the part travels along one direction to the line. In oblique coordinates (s along the line, t along the
direction of travel) the width of load per unit length at s is the chord of the part at that s, times the sine between
the two. The chord of a polygon is a sum over its edges, linear between the stations of its vertices, so that holes and
re-entrant corners need no special case.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot

import numpy as np
import shapely
from shapely import Polygon
from shapely.geometry.base import BaseGeometry

from ifcaudit.model.framing import SupportLine, Vector2
from ifcaudit.model.loads import FloatArray

LEAST_SINE = 0.05
"""Load cannot travel along the line it is meant to reach."""
SHORTEST = 1e-7
"""Stations nearer than this are one; a hundred times what survey coordinates leave uncertain [m]."""


@dataclass(frozen=True, slots=True, eq=False)
class LineLoad:
    """Load width along a line.

    Attributes:
        positions: Start and end of each piece, shape (pieces, 2), distances from the line's start [m].
        widths: Load width (area per unit length of line) at both, shape (pieces, 2) [m].
    """

    positions: FloatArray
    widths: FloatArray

    @property
    def area(self) -> float:
        """Area that the pieces stand for [m²]."""
        return float(((self.positions[:, 1] - self.positions[:, 0]) * self.widths.mean(axis=1)).sum())


def line_load(area: BaseGeometry, direction: Vector2, line: SupportLine) -> LineLoad:
    """Bring a plan area to a support line.

    Args:
        area: Polygon or multipolygon in plan.
        direction: Unit vector along which its load travels; either sign.
        line: The line that receives it. Stations outside it are returned as they are.

    Returns:
        Pieces by rising station.

    Raises:
        ValueError: The direction runs along the line.

    Example:
        >>> from shapely import box
        >>> from ifcaudit.model.framing import Carrier
        >>> line = SupportLine(global_id="B", carrier=Carrier.BEAM, start=(0.0, 0.0), end=(8.0, 0.0))
        >>> load = line_load(box(1, 0, 7, 1.5), (0.0, 1.0), line)
        >>> load.positions.tolist(), load.widths.tolist()
        ([[1.0, 7.0]], [[1.5, 1.5]])
    """
    (x0, y0), (x1, y1) = line.start, line.end
    length = hypot(x1 - x0, y1 - y0)
    ux, uy = (x1 - x0) / length, (y1 - y0) / length
    dx, dy = direction
    sine = ux * dy - uy * dx
    if abs(sine) < LEAST_SINE:
        raise ValueError(f"load cannot travel to line {line.global_id} along it (sine {sine:.3f})")
    starts, ends = _edges(area)
    s = np.stack([_oblique(points, (x0, y0), (dx, dy), sine) for points in (starts, ends)])
    t = np.stack([_across(points, (x0, y0), (ux, uy), sine) for points in (starts, ends)])
    stations = np.unique(s)
    if not len(stations):
        return LineLoad(np.zeros((0, 2)), np.zeros((0, 2)))
    stations = stations[np.concatenate([[True], np.diff(stations) > SHORTEST])]
    if len(stations) < 2:
        return LineLoad(np.zeros((0, 2)), np.zeros((0, 2)))
    first, last = stations[:-1], stations[1:]
    widths = np.stack([_chords(s, t, first, last, at) for at in (first, last)], axis=1) * abs(sine)
    loaded = widths.max(axis=1) > SHORTEST
    return LineLoad(np.stack([first, last], axis=1)[loaded], np.maximum(widths[loaded], 0.0))


def _edges(area: BaseGeometry) -> tuple[FloatArray, FloatArray]:
    """All edges, outer rings counter-clockwise and holes clockwise; lines and points have none."""
    rings: list[FloatArray] = []
    for part in shapely.get_parts(shapely.orient_polygons(area)):
        if not isinstance(part, Polygon):
            continue
        rings += [shapely.get_coordinates(ring) for ring in (part.exterior, *part.interiors)]
    if not rings:
        return np.zeros((0, 2)), np.zeros((0, 2))
    return np.concatenate([ring[:-1] for ring in rings]), np.concatenate([ring[1:] for ring in rings])


def _oblique(points: FloatArray, origin: Vector2, direction: Vector2, sine: float) -> FloatArray:
    """Station on the line that each point reaches."""
    x, y = points[:, 0] - origin[0], points[:, 1] - origin[1]
    return np.asarray((x * direction[1] - y * direction[0]) / sine)


def _across(points: FloatArray, origin: Vector2, along: Vector2, sine: float) -> FloatArray:
    """Distance each point travels, signed."""
    x, y = points[:, 0] - origin[0], points[:, 1] - origin[1]
    return np.asarray((along[0] * y - along[1] * x) / sine)


def _chords(s: FloatArray, t: FloatArray, first: FloatArray, last: FloatArray, at: FloatArray) -> FloatArray:
    """Chord length at stations ``at`` of the slices first..last, from the edges that cross each whole slice."""
    low, high = s.min(axis=0)[:, None], s.max(axis=0)[:, None]
    spans = (low <= first[None, :] + SHORTEST) & (high >= last[None, :] - SHORTEST) & (high - low > SHORTEST)
    run = np.where(np.abs(s[1] - s[0]) > SHORTEST, s[1] - s[0], np.inf)[:, None]
    height = t[0][:, None] + (t[1] - t[0])[:, None] * (at[None, :] - s[0][:, None]) / run
    # Running back along the line an edge is the upper side of the part, running forward the lower one; a line that
    # sees the travel direction on its other side turns both around, which the absolute value settles.
    sign = np.sign(s[0] - s[1])[:, None]
    return np.asarray(np.abs((np.where(spans, sign * height, 0.0)).sum(axis=0)))
