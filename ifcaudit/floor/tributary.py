"""Shares a slab out among the lines it rests on: exact polygons, one-way or two-way."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from math import hypot

import numpy as np
import shapely
from shapely import Polygon
from shapely.affinity import translate
from shapely.errors import GEOSException

from ifcaudit.floor.panels import Panel, cut_into_panels
from ifcaudit.floor.two_way import two_way_parts
from ifcaudit.model.building import PlanArea
from ifcaudit.model.framing import SlabBehaviour, SlabLayout, Strip, SupportLine, Vector2
from ifcaudit.model.loads import FloatArray

SHORTEST = 1e-7
"""Stations nearer than this are one; a hundred times what noding and survey coordinates leave uncertain [m]."""
SLIVER = 1e-7
"""Parts smaller than this are rounding [m²]."""
LEAST_HELD_SHARE = 0.5
"""Share of a panel that must span between two supports before a direction counts as a span."""
WIDE_OVERHANG = 0.6
"""Mean width of an overhanging strip above which it is remarked [m]."""


@dataclass(frozen=True, slots=True)
class _Part:
    """A piece of a panel on its way to a strip: corners, support (or -1), direction, one support only."""

    corners: tuple[tuple[float, float], ...]
    holder: int
    direction: Vector2
    overhang: bool


def lay_out_slab(slab_id: str, plan: PlanArea, supports: Sequence[SupportLine], behaviour: SlabBehaviour) -> SlabLayout:
    """Share a slab out among its supports.

    The support lines cut the slab into panels. A one-way panel spans in the stated direction, else across the closest
    pair of supports: each strip gives half its load to the support at either end, and all of it where there is one
    only. A two-way panel gives every point to the nearest support.

    Args:
        slab_id: GlobalId of the slab, for the records.
        plan: Net plan with its openings taken out.
        supports: Lines it may rest on.
        behaviour: Whether it may span two ways, and its span direction when known.

    Returns:
        Strips and unassigned parts, which together cover the plan exactly once.

    Example:
        >>> from shapely import box
        >>> from ifcaudit.model.framing import Carrier
        >>> lines = [
        ...     SupportLine(global_id=name, carrier=Carrier.BEAM, start=(x, 0.0), end=(x, 6.0))
        ...     for name, x in (("A", 0.0), ("B", 3.0), ("C", 6.0))
        ... ]
        >>> layout = lay_out_slab("S", box(0, 0, 6, 6), lines, SlabBehaviour())
        >>> sorted((strip.support_id, round(strip.polygon.area, 6)) for strip in layout.strips)
        [('A', 9.0), ('B', 9.0), ('B', 9.0), ('C', 9.0)]
    """
    if plan.is_empty or not supports:
        findings = () if plan.is_empty else (f"{plan.area:.1f} m² rest on no beam or wall",)
        return SlabLayout(
            slab_id=slab_id,
            area=plan.area,
            strips=(),
            unassigned=() if plan.is_empty else (plan,),
            findings=findings,
        )
    # Survey coordinates are large; differences of them would lose the digits that noding needs.
    centre = plan.envelope.centroid
    local = translate(plan, -centre.x, -centre.y)
    lines = [_moved(line, -centre.x, -centre.y) for line in supports]
    try:
        panels = cut_into_panels(local, lines)
    except (GEOSException, ValueError, ArithmeticError) as error:  # coordinates out of all proportion
        return SlabLayout(
            slab_id=slab_id,
            area=plan.area,
            strips=(),
            unassigned=(plan,),
            findings=(f"its outline could not be cut into panels ({error})",),
        )
    strips, loose = _share_out(slab_id, panels, lines, behaviour)
    loose += _missed(local, panels)
    return SlabLayout(
        slab_id=slab_id,
        area=plan.area,
        strips=tuple(replace(strip, polygon=translate(strip.polygon, centre.x, centre.y)) for strip in strips),
        unassigned=tuple(translate(part, centre.x, centre.y) for part in loose),
        findings=_findings(strips, loose),
    )


def _moved(line: SupportLine, dx: float, dy: float) -> SupportLine:
    return replace(line, start=(line.start[0] + dx, line.start[1] + dy), end=(line.end[0] + dx, line.end[1] + dy))


def _missed(plan: PlanArea, panels: Sequence[Panel]) -> list[Polygon]:
    """Whatever cutting lost; noding rounds far below a square millimetre, so normally nothing."""
    if abs(plan.area - sum(panel.polygon.area for panel in panels)) <= 1e-6 * plan.area:
        return []
    rest = plan.difference(shapely.unary_union([panel.polygon for panel in panels]))
    return [part for part in shapely.get_parts(rest) if part.area > SLIVER]


def _findings(strips: Sequence[Strip], loose: Sequence[Polygon]) -> tuple[str, ...]:
    findings = []
    total = sum(part.area for part in loose)
    if total > 0.05:
        findings.append(f"{total:.1f} m² span between free edges and rest on no beam or wall")
    wide = [strip for strip in strips if strip.overhang and _mean_width(strip) > WIDE_OVERHANG]
    if wide:
        area = sum(strip.polygon.area for strip in wide)
        findings.append(f"{area:.1f} m² overhang: they have one support only, which is given all their load")
    return tuple(findings)


def _mean_width(strip: Strip) -> float:
    """Area over extent at right angles to the direction of travel [m]."""
    coordinates = shapely.get_coordinates(strip.polygon)
    across = coordinates[:, 0] * strip.direction[1] - coordinates[:, 1] * strip.direction[0]
    extent = float(across.max() - across.min())
    return float(strip.polygon.area) / extent if extent > 0.0 else 0.0


def _share_out(
    slab_id: str, panels: Sequence[Panel], lines: Sequence[SupportLine], behaviour: SlabBehaviour
) -> tuple[list[Strip], list[Polygon]]:
    strips: list[Strip] = []
    loose: list[Polygon] = []
    for panel in panels:
        shared = two_way_parts(panel) if behaviour.two_way and behaviour.span_direction is None else None
        if shared is not None:
            strips += [
                Strip(
                    slab_id=slab_id,
                    support_id=lines[holder].global_id,
                    carrier=lines[holder].carrier,
                    polygon=polygon,
                    direction=direction,
                    two_way=True,
                )
                for polygon, holder, direction in shared
            ]
            continue
        parts = one_way_parts(panel, lines, behaviour.span_direction)
        strips += _strips(slab_id, parts, lines)
        loose += _union(part.corners for part in parts if part.holder < 0)
    return strips, loose


def _strips(slab_id: str, parts: Sequence[_Part], lines: Sequence[SupportLine]) -> list[Strip]:
    """Join the pieces of a panel that go to the same support the same way."""
    groups: dict[tuple[int, Vector2, bool], list[_Part]] = defaultdict(list)
    for part in parts:
        if part.holder >= 0:
            groups[part.holder, part.direction, part.overhang].append(part)
    return [
        Strip(
            slab_id=slab_id,
            support_id=lines[holder].global_id,
            carrier=lines[holder].carrier,
            polygon=polygon,
            direction=direction,
            overhang=overhang,
        )
        for (holder, direction, overhang), members in groups.items()
        for polygon in _union(part.corners for part in members)
    ]


def _union(outlines: Iterable[Sequence[tuple[float, float]]]) -> list[Polygon]:
    polygons = [Polygon(outline) for outline in outlines]
    if len(polygons) > 1:
        polygons = list(shapely.get_parts(shapely.unary_union(polygons)))
    return [polygon for polygon in polygons if isinstance(polygon, Polygon) and polygon.area > SLIVER]


def one_way_parts(panel: Panel, lines: Sequence[SupportLine], direction: Vector2 | None = None) -> list[_Part]:
    """Split a panel into strips along its span, each given to the supports at its ends.

    Args:
        panel: The panel.
        lines: Support lines that its holders number.
        direction: Span when known; else the shortest span between two supports is chosen.
    """
    directions = [direction] if direction is not None else _candidate_directions(panel)
    if not directions:
        outline = tuple(map(tuple, shapely.get_coordinates(panel.polygon.exterior)[:-1].tolist()))
        return [_Part(corners=outline, holder=-1, direction=(1.0, 0.0), overhang=False)]
    choices = [_Trapezoids(panel, candidate, lines) for candidate in directions]
    return min(choices, key=lambda choice: choice.preference()).parts()


def _candidate_directions(panel: Panel) -> list[Vector2]:
    """Normals of the held edges, longest edges first; directions within a degree count once."""
    lengths: dict[float, float] = defaultdict(float)
    for (start, end), holder in zip(panel.edges.tolist(), panel.holders, strict=True):
        if holder < 0:
            continue
        dx, dy = end[0] - start[0], end[1] - start[1]
        length = hypot(dx, dy)
        angle = float(np.arctan2(dx, -dy)) % np.pi
        known = next((other for other in lengths if _angle_between(other, angle) < 0.02), angle)
        lengths[known] += length
    ordered = sorted(lengths, key=lambda angle: -lengths[angle])
    return [(float(np.cos(angle)), float(np.sin(angle))) for angle in ordered]


def _angle_between(first: float, second: float) -> float:
    difference = abs(first - second) % np.pi
    return min(difference, np.pi - difference)


class _Trapezoids:
    """A panel cut along one span direction at every vertex: each trapezoid lies between two edges."""

    def __init__(self, panel: Panel, direction: Vector2, lines: Sequence[SupportLine]) -> None:
        self._direction = direction
        dx, dy = direction
        edges = panel.edges
        self._s = edges[:, :, 0] * dy - edges[:, :, 1] * dx
        self._t = edges[:, :, 0] * dx + edges[:, :, 1] * dy
        self._holders = panel.holders
        self._firm = panel.firm
        self._lines = lines
        self._pieces = self._cut(self._stations(panel))

    def _stations(self, panel: Panel) -> FloatArray:
        stations = np.unique(self._s)
        keep = np.concatenate([[True], np.diff(stations) > SHORTEST])
        return np.asarray(stations[keep])

    def _cut(self, stations: FloatArray) -> list[tuple[float, float, tuple[float, ...], int, int]]:
        """Pieces as (from, to, (lower from, lower to, upper from, upper to), lower edge, upper edge)."""
        low, high = self._s.min(axis=1), self._s.max(axis=1)
        pieces: list[tuple[float, float, tuple[float, ...], int, int]] = []
        for first, last in zip(stations[:-1].tolist(), stations[1:].tolist(), strict=True):
            crossing = np.flatnonzero((low <= first + SHORTEST) & (high >= last - SHORTEST) & (high - low > SHORTEST))
            heights = [(self._height(edge, first), self._height(edge, last), int(edge)) for edge in crossing]
            heights.sort(key=lambda item: item[0] + item[1])
            for lower, upper in zip(heights[::2], heights[1::2], strict=False):
                pieces.append((first, last, (lower[0], lower[1], upper[0], upper[1]), lower[2], upper[2]))
        return pieces

    def _height(self, edge: np.intp, station: float) -> float:
        (s0, s1), (t0, t1) = self._s[edge].tolist(), self._t[edge].tolist()
        return float(t0 + (t1 - t0) * (station - s0) / (s1 - s0))

    def preference(self) -> tuple[bool, float, float, list[str]]:
        """Order of choice: spans between two supports first, of those the shortest, else the fewest unheld parts.

        An opening that leaves a part of the panel unheld must not turn the span of all the rest.

        A square panel has no shorter span: there the supports of the lower GlobalIds are taken, which at least does
        not depend on how the building is turned.
        """
        total = both = unheld = moment = 0.0
        holders = sorted({self._lines[holder].global_id for holder in self._holders_in_use()})
        for first, last, (a0, a1, b0, b1), lower, upper in self._pieces:
            chord = 0.5 * (b0 - a0 + b1 - a1)
            area = (last - first) * chord
            total += area
            held = self._firm[lower] + self._firm[upper]
            if held == 2:
                both += area
                moment += area * chord
            elif held == 0:
                unheld += area
        if total <= 0.0:
            return True, 0.0, 0.0, holders
        spans = both >= LEAST_HELD_SHARE * total
        length = moment / both if both > 0.0 else 0.0
        rounded = float(f"{length:.6g}")
        loose = round(unheld / total, 6)
        return not spans, rounded if spans else loose, loose, holders

    def _holders_in_use(self) -> set[int]:
        ends = {self._holders[edge] for *_, lower, upper in self._pieces for edge in (lower, upper)}
        return {holder for holder in ends if holder >= 0}

    def parts(self) -> list[_Part]:
        """Give each trapezoid, or its halves, to the supports at its ends."""
        parts = []
        for first, last, (a0, a1, b0, b1), lower, upper in self._pieces:
            below, above = self._holders[lower], self._holders[upper]
            if below >= 0 and above >= 0:
                m0, m1 = 0.5 * (a0 + b0), 0.5 * (a1 + b1)
                parts.append(self._part(first, last, (a0, a1, m0, m1), below, overhang=False))
                parts.append(self._part(first, last, (m0, m1, b0, b1), above, overhang=False))
            else:
                parts.append(self._part(first, last, (a0, a1, b0, b1), max(below, above), overhang=True))
        return [part for part in parts if len(part.corners) >= 3]

    def _part(self, first: float, last: float, heights: tuple[float, ...], holder: int, *, overhang: bool) -> _Part:
        a0, a1, b0, b1 = heights
        dx, dy = self._direction
        ring = [(first, a0), (last, a1), (last, b1), (first, b0)]
        corners = tuple((s * dy + t * dx, -s * dx + t * dy) for s, t in ring)
        return _Part(
            corners=_without_repeats(corners),
            holder=holder,
            direction=self._travel(holder),
            overhang=overhang and holder >= 0,
        )

    def _travel(self, holder: int) -> Vector2:
        """The span direction; where the support runs nearly along it, the perpendicular of the support instead."""
        if holder < 0:
            return self._direction
        line = self._lines[holder]
        dx, dy = line.end[0] - line.start[0], line.end[1] - line.start[1]
        length = hypot(dx, dy)
        sine = (dx * self._direction[1] - dy * self._direction[0]) / length
        return self._direction if abs(sine) > 0.2 else (-dy / length, dx / length)


def _without_repeats(corners: Sequence[tuple[float, float]]) -> tuple[tuple[float, float], ...]:
    kept = [
        corner
        for index, corner in enumerate(corners)
        if hypot(corner[0] - corners[index - 1][0], corner[1] - corners[index - 1][1]) > SHORTEST
    ]
    return tuple(kept)
