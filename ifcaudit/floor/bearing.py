"""Which beams and walls a slab rests on, from the levels of their tops."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import dist

import numpy as np
import shapely
from numpy.typing import NDArray
from shapely import LineString, STRtree
from shapely.geometry.base import BaseGeometry

from ifcaudit.floor.stacking import Stack
from ifcaudit.floor.walls import may_bear, wall_thickness
from ifcaudit.model.building import VerticalKind, VerticalSupport
from ifcaudit.model.framing import Carrier, FramedBeam, SupportLine

SIDE_REACH = 0.30
"""A slab may stop beside a beam, this far from its flange, and still rest on it [m]."""
SURE_GAP = 0.03
"""Gap between a top flange and the slab's underside taken without remark [m]."""
LARGEST_GAP = 0.10
"""Gap beyond which a beam does not carry the slab above it [m]."""
LEAST_CONTACT = 0.20
"""Length of common plan line below which a crossing is no support [m]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class BearingLine:
    """A support line of one slab, with how the slab meets it.

    Attributes:
        line: For the layout kernel.
        origin: Plan distance from the beam's start to the line's start [m]; zero for walls.
        on_flange: The slab lies on or around the top flange and holds it sideways.
        covered: Stretches of the beam, plan distances from its start, over which the slab lies on it [m].
        finding: Remark for the engineer; empty when the contact is plain.
    """

    line: SupportLine
    origin: float = 0.0
    on_flange: bool = True
    covered: tuple[tuple[float, float], ...] = ()
    finding: str = ""


def bearing_lines(
    stacks: Sequence[Stack], framed: Sequence[FramedBeam], walls: Sequence[VerticalSupport]
) -> tuple[tuple[BearingLine, ...], ...]:
    """Find the lines each stack rests on, one tuple per stack."""
    if not stacks:
        return ()
    plans = [stack.slab.plan for stack in stacks]
    shapely.prepare(plans)
    outlines = [_Outline(stack) for stack in stacks]
    result: list[list[BearingLine]] = [[] for _ in stacks]
    if framed:
        lines = [_beam_line(item) for item in framed]
        tree = STRtree([LineString([line.start, line.end]) for line in lines])
        reach = max(line.half_width for line in lines) + SIDE_REACH
        stack_indices, beam_indices = tree.query(plans, predicate="dwithin", distance=reach)
        near = _near_in_level(stacks, framed, stack_indices, beam_indices)
        for stack_index, beam_index in zip(stack_indices[near].tolist(), beam_indices[near].tolist(), strict=True):
            found = _beam_bearing(outlines[stack_index], framed[beam_index], lines[beam_index])
            if found is not None:
                result[stack_index].append(found)
    bearing_walls = [
        wall
        for wall in walls
        if wall.kind is VerticalKind.WALL and dist(*wall.centreline) > LEAST_CONTACT and may_bear(wall)
    ]
    if bearing_walls:
        tree = STRtree([wall.footprint for wall in bearing_walls])
        for stack_index, wall_index in zip(*tree.query(plans, predicate="intersects"), strict=True):
            wall = bearing_walls[wall_index]
            if _wall_carries(stacks[stack_index], wall):
                result[stack_index].append(_wall_line(wall))
    return tuple(tuple(sorted(lines, key=lambda item: item.line.global_id)) for lines in result)


def standing_walls(stacks: Sequence[Stack], supports: Sequence[VerticalSupport]) -> tuple[int, ...]:
    """Count the walls that stand on each stack: foot at its top, and most of the footprint over it."""
    walls = [support for support in supports if support.kind is VerticalKind.WALL]
    counts = [0] * len(stacks)
    if not stacks or not walls:
        return tuple(counts)
    tree = STRtree([wall.footprint for wall in walls])
    for index, number in zip(*tree.query([stack.slab.plan for stack in stacks], predicate="intersects"), strict=True):
        stack, wall = stacks[index], walls[number]
        x, y = wall.footprint.representative_point().coords[0]
        top = stack.slab.top_at(x, y) + stack.top - stack.slab.top
        on_top = stack.slab.top_at(x, y) - SURE_GAP <= wall.bottom <= top + SURE_GAP
        if on_top and stack.slab.plan.intersection(wall.footprint).area > 0.5 * wall.footprint.area:
            counts[index] += 1
    return tuple(counts)


def _near_in_level(
    stacks: Sequence[Stack],
    framed: Sequence[FramedBeam],
    stack_index: NDArray[np.int64],
    beam_index: NDArray[np.int64],
) -> NDArray[np.bool_]:
    """Leave out beams of other storeys before anything is cut."""
    low, high = np.array([_level_range(stack) for stack in stacks]).T
    ends = np.array([[item.beam.start[2], item.beam.end[2]] for item in framed])
    half = np.array([item.beam.half_vertical for item in framed])
    tops, bottoms = ends.max(axis=1) + half, ends.min(axis=1) - half
    return np.asarray(
        (tops[beam_index] >= low[stack_index] - LARGEST_GAP) & (bottoms[beam_index] <= high[stack_index] + SURE_GAP)
    )


def _level_range(stack: Stack) -> tuple[float, float]:
    """Lowest underside and highest top of a stack anywhere in its plan [m]."""
    slab = stack.slab
    x0, y0, x1, y1 = slab.plan.bounds
    corners = [(x, y) for x in (x0, x1) for y in (y0, y1)]
    low = min(slab.bottom_at(x, y) for x, y in corners) + min(0.0, stack.bottom - slab.bottom)
    high = max(slab.top_at(x, y) for x, y in corners) + max(0.0, stack.top - slab.top)
    return low, high


def _beam_line(item: FramedBeam) -> SupportLine:
    """The beam's axis, drawn on to the centres of its supports."""
    beam = item.beam
    first = min(0.0, item.first_station)
    last = max(beam.plan_length, item.last_station)
    return SupportLine(
        global_id=beam.global_id,
        carrier=Carrier.BEAM,
        start=_plan_point(item, first),
        end=_plan_point(item, last),
        half_width=beam.width / 2,
    )


def _plan_point(item: FramedBeam, station: float) -> tuple[float, float]:
    beam = item.beam
    part = station / beam.plan_length
    return (
        beam.start[0] + part * (beam.end[0] - beam.start[0]),
        beam.start[1] + part * (beam.end[1] - beam.start[1]),
    )


class _Outline:
    """A stack with its plan grown by what a beam's width and reach ask for, each growth made once."""

    def __init__(self, stack: Stack) -> None:
        self.stack = stack
        self._grown: dict[float, BaseGeometry] = {}

    def grown(self, distance: float) -> BaseGeometry:
        distance = round(distance, 3)
        if distance not in self._grown:
            plan = self.stack.slab.plan.buffer(distance, join_style="mitre")
            shapely.prepare(plan)
            self._grown[distance] = plan
        return self._grown[distance]


def _beam_bearing(outline: _Outline, item: FramedBeam, line: SupportLine) -> BearingLine | None:
    """Compare levels at three points of the stretch that the slab covers."""
    axis = LineString([line.start, line.end])
    common = axis.intersection(outline.grown(line.half_width + SIDE_REACH))
    if common.length < min(LEAST_CONTACT, 0.5 * axis.length):
        return None
    relation = _levels(outline.stack, item, common)
    if relation is None:
        return None
    on_flange, gap = relation
    finding = ""
    if gap > SURE_GAP:
        name = _name(outline.stack)
        finding = f"its top lies {gap * 1000:.0f} mm below the underside of slab {name}; taken as carrying it"
    # A slab that stays clear of the flange loads the beam through packs or bearers, but does not hold the flange.
    holds = on_flange and gap <= SURE_GAP
    over = axis.intersection(outline.grown(line.half_width + SURE_GAP)) if holds else None
    return BearingLine(
        line=line,
        origin=min(0.0, item.first_station),
        on_flange=holds,
        covered=_stretches(item, over) if over is not None else (),
        finding=finding,
    )


def _stretches(item: FramedBeam, over: BaseGeometry) -> tuple[tuple[float, float], ...]:
    parts = shapely.get_parts(over)
    stretches = [_stations(item, shapely.get_coordinates(part)) for part in parts if part.length > 0.0]
    return tuple(sorted((float(stations.min()), float(stations.max())) for stations in stretches))


def _levels(stack: Stack, item: FramedBeam, common: BaseGeometry) -> tuple[bool, float] | None:
    """Return (slab holds the top flange, gap under the slab), or ``None`` where the beam does not carry it."""
    beam, slab = item.beam, stack.slab
    coordinates = shapely.get_coordinates(common)
    stations = _stations(item, coordinates)
    relations = []
    for station in np.linspace(stations.min(), stations.max(), 3):
        x, y = _plan_point(item, float(station))
        relations.append(
            _relation(
                beam.top_at(float(station)),
                beam.bottom_at(float(station)),
                slab.top_at(x, y) + stack.top - slab.top,
                slab.bottom_at(x, y),
                slab.bottom_at(x, y) + stack.bottom - slab.bottom,
            )
        )
    if any(relation is None for relation in relations):
        return None
    sure = [relation for relation in relations if relation is not None]
    return all(on_flange for on_flange, _ in sure), max(gap for _, gap in sure)


def _relation(
    beam_top: float, beam_bottom: float, stack_top: float, slab_bottom: float, stack_bottom: float
) -> tuple[bool, float] | None:
    """Relation of a beam to a slab at one point: under it, within its depth, or around it.

    The beam's top may lie under the lowest lining of the stack, anywhere within the depth of the floor, or above a
    slab that rests on its bottom flange.
    """
    if beam_top < stack_bottom - LARGEST_GAP:
        return None
    if beam_top <= stack_top + SURE_GAP:
        return (True, max(0.0, stack_bottom - beam_top)) if beam_bottom < slab_bottom + SURE_GAP else None
    on_bottom_flange = beam_bottom - SURE_GAP <= stack_bottom and slab_bottom < beam_top
    return (False, 0.0) if on_bottom_flange and stack_bottom <= beam_bottom + 0.1 else None


def _stations(item: FramedBeam, coordinates: NDArray[np.float64]) -> NDArray[np.float64]:
    beam = item.beam
    direction = np.array([beam.end[0] - beam.start[0], beam.end[1] - beam.start[1]]) / beam.plan_length
    return np.asarray((coordinates - np.array(beam.start[:2])) @ direction)


def _name(stack: Stack) -> str:
    return stack.slab.name or stack.slab.global_id


def _wall_carries(stack: Stack, wall: VerticalSupport) -> bool:
    """A bearing wall stands below the slab and reaches it."""
    x, y = wall.footprint.representative_point().coords[0]
    underside = stack.slab.bottom_at(x, y) + stack.bottom - stack.slab.bottom
    top = stack.slab.top_at(x, y)
    return (
        underside - LARGEST_GAP <= wall.top
        and wall.bottom < underside - 0.5
        and (wall.top <= top + 0.5 or wall.bottom < underside - 1.0)
    )


def _wall_line(wall: VerticalSupport) -> BearingLine:
    start, end = wall.centreline
    return BearingLine(
        line=SupportLine(
            global_id=wall.global_id, carrier=Carrier.WALL, start=start, end=end, half_width=wall_thickness(wall) / 2
        )
    )
