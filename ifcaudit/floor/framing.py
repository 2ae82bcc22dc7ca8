"""What carries each end of a beam: a column, a wall, or another beam that continues past the contact.

No IFC file relates beams to their supports, so geometry decides. Two questions are asked at each end: does something
lie below the underside within the last part of the beam (bearing), and does the end face, moved on a little, meet a
member that continues past the contact (framing). The same is asked along the whole beam for supports inside its ends.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import shapely
from shapely import LineString, Point, Polygon, STRtree

from ifcaudit.floor.walls import may_bear
from ifcaudit.model.building import Beam, PlanArea, VerticalKind, VerticalSupport
from ifcaudit.model.framing import Carrier, EndSupport, FramedBeam
from ifcaudit.model.loads import FloatArray

END_ZONE = 0.30
"""Part of the beam, measured from its end, in which a support counts as the end's own [m]."""
SURE_GAP = 0.03
"""Gap up to which contact is taken without remark [m]; 88 of 100 ends of real exports lie within it."""
LARGEST_GAP = 0.12
"""Gap beyond which nothing is called a support [m]."""
BEARING_TOLERANCE = 0.05
"""Level difference between an underside and what carries it that plates, grout and drawing tolerance explain [m]."""
LEAST_ANGLE_SINE = 0.17
"""Sine of the angle under which two beams count as parallel: neither carries the other (10 degrees)."""
LEAST_OVERLAP = 0.25
"""Part of a beam's depth that must lie within the depth of the member it frames into."""
FLOOR_ABOVE = 0.45
"""A column or wall whose foot is this far above a beam's top may stand on it through the floor [m]."""
SEARCH_RADIUS = 3.0
"""How far to look for the candidate named in a message about an unsupported end [m]."""


@dataclass(frozen=True, slots=True)
class _Contact:
    """One possible support of one beam, before it is decided which counts."""

    support: EndSupport
    rank: int
    """Columns before walls that are entered, those before beams, those before walls that only abut."""
    first: float
    """Station at which the contact begins; negative where it lies before the start [m]."""
    last: float
    """Station at which the contact ends [m]."""


class _Axis:
    """Plan geometry of one beam, prepared once."""

    __slots__ = ("beam", "box", "direction", "length", "normal", "start")

    def __init__(self, beam: Beam) -> None:
        self.beam = beam
        self.length = beam.plan_length
        self.start = (beam.start[0], beam.start[1])
        self.direction = (
            (beam.end[0] - beam.start[0]) / self.length,
            (beam.end[1] - beam.start[1]) / self.length,
        )
        self.normal = (-self.direction[1], self.direction[0])
        self.box = self.strip(0.0, self.length, max(beam.width, 0.02) / 2)

    def point(self, station: float, offset: float = 0.0) -> tuple[float, float]:
        return (
            self.start[0] + station * self.direction[0] + offset * self.normal[0],
            self.start[1] + station * self.direction[1] + offset * self.normal[1],
        )

    def station(self, x: float, y: float) -> float:
        return (x - self.start[0]) * self.direction[0] + (y - self.start[1]) * self.direction[1]

    def strip(self, first: float, last: float, half_width: float) -> Polygon:
        return Polygon(
            [
                self.point(first, -half_width),
                self.point(last, -half_width),
                self.point(last, half_width),
                self.point(first, half_width),
            ]
        )


def frame_beams(beams: Sequence[Beam], supports: Sequence[VerticalSupport]) -> tuple[FramedBeam, ...]:
    """Find what carries each beam.

    Args:
        beams: Load-carrying candidates with a plan length; set-aside ones must be left out.
        supports: Columns and walls.

    Returns:
        One record per beam, in the same order.
    """
    axes = [_Axis(beam) for beam in beams]
    if not axes:
        return ()
    reach = np.array(
        [axis.strip(-LARGEST_GAP, axis.length + LARGEST_GAP, max(axis.beam.width, 0.02) / 2) for axis in axes]
    )
    lows, highs = _levels([axis.beam for axis in axes])
    vertical: dict[int, list[VerticalSupport]] = defaultdict(list)
    if supports:
        tree = STRtree([support.footprint for support in supports])
        beam_index, support_index = tree.query(reach, predicate="intersects")
        bottoms = np.array([support.bottom for support in supports])[support_index]
        tops = np.array([support.top for support in supports])[support_index]
        near = (bottoms <= highs[beam_index] + FLOOR_ABOVE) & (tops >= lows[beam_index] - BEARING_TOLERANCE)
        for index, other in zip(beam_index[near].tolist(), support_index[near].tolist(), strict=True):
            vertical[index].append(supports[other])
    boxes = STRtree([axis.box for axis in axes])
    crossing: dict[int, list[int]] = defaultdict(list)
    beam_index, other_index = boxes.query(reach, predicate="intersects")
    near = (
        (beam_index != other_index)
        & (lows[other_index] <= highs[beam_index])
        & (highs[other_index] >= lows[beam_index] - BEARING_TOLERANCE)
    )
    for index, other in zip(beam_index[near].tolist(), other_index[near].tolist(), strict=True):
        crossing[index].append(other)
    neighbours = _Neighbours(axes, supports)
    return tuple(
        _frame(axis, vertical[index], [axes[other] for other in crossing[index]], neighbours)
        for index, axis in enumerate(axes)
    )


def _levels(beams: Sequence[Beam]) -> tuple[FloatArray, FloatArray]:
    """Lowest and highest level of each beam [m]: elements of other storeys are left out by them early."""
    axis = np.array([[beam.start[2], beam.end[2]] for beam in beams])
    half = np.array([beam.half_vertical for beam in beams])
    return axis.min(axis=1) - half, axis.max(axis=1) + half


def _frame(
    axis: _Axis, vertical: Sequence[VerticalSupport], crossing: Sequence[_Axis], neighbours: _Neighbours
) -> FramedBeam:
    contacts: list[_Contact] = []
    standing: list[VerticalSupport] = []
    findings: list[str] = []
    for support in vertical:
        contact = _vertical_contact(axis, support)
        if contact is not None:
            contacts.append(contact)
        elif _stands_on(axis, support):
            standing.append(support)
    bedded = [contact for contact in contacts if _lies_along(contact, axis)]
    contacts = [contact for contact in contacts if contact not in bedded]
    contacts.extend(contact for other in crossing if (contact := _beam_contact(axis, other)) is not None)
    start = _best(contacts, axis, at_start=True)
    end = _best([contact for contact in contacts if contact is not start], axis, at_start=False)
    interior = _interior(contacts, start, end, axis)
    for label, chosen in (("start", start), ("end", end)):
        if chosen is not None and chosen.support.gap > SURE_GAP:
            findings.append(
                f"{label} stops {chosen.support.gap * 1000:.0f} mm from {_named(chosen.support)}, taken as its support"
            )
    return FramedBeam(
        beam=axis.beam,
        start=start.support if start else None,
        end=end.support if end else None,
        interior=interior,
        bedded=", ".join(_named(contact.support) for contact in bedded),
        start_gap="" if start else neighbours.describe(axis, 0.0),
        end_gap="" if end else neighbours.describe(axis, axis.length),
        standing=tuple(
            f"{support.kind.value} {support.name or support.global_id}"
            for support in standing
            if not _carried_below(axis, support, contacts)
        ),
        findings=tuple(findings),
    )


def _lies_along(contact: _Contact, axis: _Axis) -> bool:
    """A wall under more than half the beam, or under at least a metre of it, carries it along its length."""
    covered = min(contact.last, axis.length) - max(contact.first, 0.0)
    return contact.support.carrier is Carrier.WALL and covered > min(0.5 * axis.length, 1.0)


def _named(support: EndSupport) -> str:
    return f"{support.carrier.value} {support.name or support.global_id}"


def _best(contacts: Sequence[_Contact], axis: _Axis, *, at_start: bool) -> _Contact | None:
    """Choose the support of one end: the highest rank within reach of it, then the smallest gap."""
    half = axis.length / 2
    near = [
        contact
        for contact in contacts
        if (contact.support.station < half) == at_start and _within_end_zone(contact, axis, at_start=at_start)
    ]
    return min(near, key=lambda contact: (contact.rank, contact.support.gap, contact.support.global_id), default=None)


def _within_end_zone(contact: _Contact, axis: _Axis, *, at_start: bool) -> bool:
    """The contact begins within the end zone, seen from that end."""
    return contact.first <= END_ZONE if at_start else contact.last >= axis.length - END_ZONE


def _interior(
    contacts: Sequence[_Contact], start: _Contact | None, end: _Contact | None, axis: _Axis
) -> tuple[EndSupport, ...]:
    """Supports between the two ends: columns, walls, and beams that pass below."""
    first = start.support.station if start else 0.0
    last = end.support.station if end else axis.length
    inside = [
        contact.support
        for contact in contacts
        if contact is not start
        and contact is not end
        and contact.rank < _ABUTTING
        and (first + END_ZONE < contact.support.station or start is None)
        and (contact.support.station < last - END_ZONE or end is None)
    ]
    return tuple(sorted(inside, key=lambda support: (support.station, support.global_id)))


_COLUMN, _WALL, _BEAM, _ABUTTING = range(4)


def _vertical_contact(axis: _Axis, support: VerticalSupport) -> _Contact | None:
    """Column or wall as a support: it starts below the underside and reaches it, and is no thin partition."""
    if support.kind is VerticalKind.WALL and not may_bear(support):
        return None
    crossing = _crossing(axis, support)
    if crossing is None:
        return None
    first, last = crossing
    station = _support_station(axis, support, first, last)
    underside = axis.beam.bottom_at(min(max(station, 0.0), axis.length))
    if support.bottom > underside - BEARING_TOLERANCE or support.top < underside - BEARING_TOLERANCE:
        return None
    gap = max(0.0, first - axis.length, -last)
    if gap > LARGEST_GAP:
        return None
    is_column = support.kind is VerticalKind.COLUMN
    abuts = not is_column and gap > 0.0
    return _Contact(
        support=EndSupport(
            carrier=Carrier.COLUMN if is_column else Carrier.WALL,
            global_id=support.global_id,
            name=support.name,
            gap=gap,
            station=station,
        ),
        rank=_COLUMN if is_column else _ABUTTING if abuts else _WALL,
        first=first,
        last=last,
    )


def _crossing(axis: _Axis, support: VerticalSupport) -> tuple[float, float] | None:
    """Stations at which the beam, moved on at its ends, enters and leaves a footprint.

    A column may stand beside the axis, anywhere within the beam's width; a wall that only touches the side of a beam
    does not carry it, so that for walls the middle half of the width must be over it.
    """
    half_width = max(axis.beam.width, 0.02) / (2 if support.kind is VerticalKind.COLUMN else 4)
    common = axis.strip(-LARGEST_GAP, axis.length + LARGEST_GAP, half_width).intersection(support.footprint)
    if common.is_empty:
        return None
    coordinates = shapely.get_coordinates(common)
    stations = (coordinates - np.array(axis.start)) @ np.array(axis.direction)
    return float(stations.min()), float(stations.max())


def _support_station(axis: _Axis, support: VerticalSupport, first: float, last: float) -> float:
    """Station of the centre of a support: of a column its own centre, of a wall the middle of its thickness.

    Where a beam lies along a wall the crossing is long; the reaction is then taken 0.15 m inside the near face.
    """
    if support.kind is VerticalKind.COLUMN:
        centre = support.footprint.centroid
        return axis.station(centre.x, centre.y)
    line = LineString([axis.point(-2.0), axis.point(axis.length + 2.0)]).intersection(support.footprint)
    if not line.is_empty:
        stations = (shapely.get_coordinates(line) - np.array(axis.start)) @ np.array(axis.direction)
        pieces = np.clip(stations, first - 2.0, last + 2.0)
        first, last = float(pieces.min()), float(pieces.max())
    if last - first <= 0.8:
        return 0.5 * (first + last)
    return first + 0.15 if first > axis.length / 2 else last - 0.15


def _stands_on(axis: _Axis, support: VerticalSupport) -> bool:
    """A column or wall whose foot is on the beam, or on the floor just above it."""
    crossing = _crossing(axis, support)
    if crossing is None:
        return False
    first, last = max(crossing[0], 0.0), min(crossing[1], axis.length)
    if last - first < (0.05 if support.kind is VerticalKind.COLUMN else 0.30):
        return False
    station = 0.5 * (first + last)
    top = axis.beam.top_at(station)
    return top - BEARING_TOLERANCE <= support.bottom <= top + FLOOR_ABOVE


def _carried_below(axis: _Axis, standing: VerticalSupport, contacts: Sequence[_Contact]) -> bool:
    """A column above that stands over a column or wall below brings its load there, not on the beam."""
    centre = standing.footprint.centroid
    station = axis.station(centre.x, centre.y)
    return any(
        abs(contact.support.station - station) <= END_ZONE and contact.support.carrier is not Carrier.BEAM
        for contact in contacts
    )


def _beam_contact(axis: _Axis, other: _Axis) -> _Contact | None:
    """Another beam as a support: not parallel, continuing past the contact, at the depth to carry."""
    sine = axis.direction[0] * other.direction[1] - axis.direction[1] * other.direction[0]
    if abs(sine) < LEAST_ANGLE_SINE:
        return None
    dx, dy = other.start[0] - axis.start[0], other.start[1] - axis.start[1]
    station = (dx * other.direction[1] - dy * other.direction[0]) / sine
    on_other = (dx * axis.direction[1] - dy * axis.direction[0]) / sine
    half_contact = other.beam.width / 2 / abs(sine)
    gap = max(0.0, station - half_contact - axis.length, -station - half_contact)
    if gap > LARGEST_GAP:
        return None
    inside = END_ZONE < station < axis.length - END_ZONE
    if not _continues_past(axis, other, station, on_other, abs(sine)):
        return None
    if not _carries_at(axis.beam, other.beam, min(max(station, 0.0), axis.length), on_other, crossing=inside):
        return None
    return _Contact(
        support=EndSupport(
            carrier=Carrier.BEAM,
            global_id=other.beam.global_id,
            name=other.beam.name,
            gap=gap,
            station=station,
            station_on_carrier=min(max(on_other, 0.0), other.length),
        ),
        rank=_BEAM,
        first=station - half_contact,
        last=station + half_contact,
    )


def _continues_past(axis: _Axis, other: _Axis, station: float, on_other: float, sine: float) -> bool:
    """The carrying beam runs on, on both sides, further than the carried one overruns it."""
    overrun = max(0.0, min(station, axis.length - station))
    margin = 0.5 * axis.beam.width / sine + 0.01 + (overrun if overrun < END_ZONE else 0.0)
    return margin < on_other < other.length - margin


def _carries_at(beam: Beam, other: Beam, station: float, on_other: float, *, crossing: bool) -> bool:
    """Levels at the contact: the other beam lies under the underside, or the beam frames into its depth."""
    bottom, top = beam.bottom_at(station), beam.top_at(station)
    other_bottom, other_top = other.bottom_at(on_other), other.top_at(on_other)
    bears = abs(other_top - bottom) <= BEARING_TOLERANCE
    if crossing:
        # Where both run on, the upper one rests on the lower one; at equal depth neither is known to carry.
        return bears and other_bottom < bottom
    overlap = min(top, other_top) - max(bottom, other_bottom)
    return bears or overlap >= LEAST_OVERLAP * (top - bottom)


class _Neighbours:
    """Names the nearest possible support of an end that nothing carries."""

    def __init__(self, axes: Sequence[_Axis], supports: Sequence[VerticalSupport]) -> None:
        self._axes = axes
        self._supports = supports
        self._shapes: list[PlanArea] = [axis.box for axis in axes]
        self._shapes += [support.footprint for support in supports]
        self._tree = STRtree(self._shapes)

    def describe(self, axis: _Axis, station: float) -> str:
        """Return ``nearest: column C3 at 0.45 m``, or that nothing lies within the search radius."""
        end = Point(axis.point(station))
        level = axis.beam.level_at(station)
        best: tuple[float, str] | None = None
        for index in self._tree.query(end.buffer(SEARCH_RADIUS)):
            name = self._candidate(int(index), axis, level)
            if name:
                distance = float(self._shapes[int(index)].distance(end))
                if distance <= SEARCH_RADIUS and (best is None or (distance, name) < best):
                    best = (distance, name)
        if best is None:
            return f"no column, wall or beam within {SEARCH_RADIUS:.0f} m at its level"
        return f"nearest is {best[1]} at {best[0]:.2f} m"

    def _candidate(self, index: int, axis: _Axis, level: float) -> str:
        if index < len(self._axes):
            other = self._axes[index]
            if other is axis or abs(other.beam.level_at(other.length / 2) - level) > 0.5 * (
                other.beam.height + axis.beam.height
            ):
                return ""
            return f"beam {other.beam.name or other.beam.global_id}"
        support = self._supports[index - len(self._axes)]
        if support.bottom > level or support.top < level - axis.beam.height - BEARING_TOLERANCE:
            return ""
        return f"{support.kind.value} {support.name or support.global_id}"
