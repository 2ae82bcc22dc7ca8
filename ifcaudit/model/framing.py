"""How members and slabs are carried: the records that the floor stage produces."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import TypeAlias

from shapely import Polygon

from ifcaudit.model.building import Beam, PlanArea
from ifcaudit.model.section import Point2

Vector2: TypeAlias = tuple[float, float]


class Carrier(StrEnum):
    """What carries a beam end or a slab edge."""

    COLUMN = "column"
    WALL = "wall"
    BEAM = "beam"


@dataclass(frozen=True, slots=True, kw_only=True)
class EndSupport:
    """What carries one end (or an interior point) of a beam.

    Attributes:
        carrier: Column, wall or beam.
        global_id: GlobalId of the carrying element.
        name: Its name, for people.
        gap: Distance between the beam's end and the carrier [m].
        station: Plan distance from the carried beam's own start to the centre of the support [m]; may lie outside it.
        station_on_carrier: Where the reaction lands on a carrying beam, plan distance from its start [m]; 0 otherwise.
    """

    carrier: Carrier
    global_id: str
    name: str
    gap: float
    station: float
    station_on_carrier: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class FramedBeam:
    """A beam with its supports.

    Attributes:
        beam: The beam.
        start: What carries its first end; ``None`` when nothing does.
        end: What carries its other end.
        interior: Supports between the ends, by rising station.
        start_gap: Text naming the nearest candidate and its distance, when ``start`` is ``None``.
        end_gap: The same for ``end``.
        bedded: Names of walls that the beam lies along, so that it does not span freely; empty otherwise.
        standing: Names of columns or walls standing on this beam.
        findings: Remarks for the engineer.
    """

    beam: Beam
    start: EndSupport | None
    end: EndSupport | None
    interior: tuple[EndSupport, ...] = ()
    start_gap: str = ""
    end_gap: str = ""
    bedded: str = ""
    standing: tuple[str, ...] = ()
    findings: tuple[str, ...] = ()

    @property
    def first_station(self) -> float:
        """Plan distance from the axis start to the first support; 0 where there is none [m]."""
        return self.start.station if self.start else 0.0

    @property
    def last_station(self) -> float:
        """Plan distance from the axis start to the last support; the axis length where there is none [m]."""
        return self.end.station if self.end else self.beam.plan_length


@dataclass(frozen=True, slots=True, kw_only=True)
class SupportLine:
    """A straight line in plan along which a slab can rest.

    Attributes:
        global_id: Element it belongs to (beam or wall).
        carrier: Beam or wall.
        start: First end in plan; stations along the line count from here [m].
        end: Other end in plan.
        half_width: Half the plan width of the element [m].
    """

    global_id: str
    carrier: Carrier
    start: Point2
    end: Point2
    half_width: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class SlabBehaviour:
    """How a slab may carry its load to its supports.

    Attributes:
        two_way: It may act two-way where held on all sides with long/short <= 2 (cast concrete).
        span_direction: Unit vector of the span in plan when stated or known; ``None`` lets the supports decide.
    """

    two_way: bool = False
    span_direction: Vector2 | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Strip:
    """A part of a slab whose load goes to one support.

    Attributes:
        slab_id: GlobalId of the slab.
        support_id: GlobalId of the beam or wall that receives it.
        carrier: Beam or wall.
        polygon: Exact plan outline.
        direction: Unit vector along which load travels to the support line.
        two_way: It belongs to a two-way panel.
        overhang: The slab strip has this one support only.
    """

    slab_id: str
    support_id: str
    carrier: Carrier
    polygon: Polygon
    direction: Vector2
    two_way: bool = False
    overhang: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class SlabLayout:
    """How one slab is shared out.

    Attributes:
        slab_id: GlobalId of the slab.
        area: Net plan area [m²].
        strips: Its parts; together with ``unassigned`` they cover the slab exactly once.
        unassigned: Parts that no support receives.
        findings: Remarks for the engineer.
    """

    slab_id: str
    area: float
    strips: tuple[Strip, ...]
    unassigned: tuple[PlanArea, ...] = ()
    findings: tuple[str, ...] = ()
