"""The building as read: elements in world coordinates, metres, z up. Nothing here depends on a rule set."""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import StrEnum
from math import hypot
from typing import TypeAlias

from shapely import MultiPolygon, Polygon

from ifcaudit.model.material import MaterialText
from ifcaudit.model.section import Point2, ProfileShape

Point3: TypeAlias = tuple[float, float, float]
PlanArea: TypeAlias = Polygon | MultiPolygon


class BendingAxis(StrEnum):
    """Axis about which gravity bends a member: the profile's own x (upright), own y (laid flat), or neither."""

    UPRIGHT = "upright"
    FLAT = "flat"
    INCLINED = "inclined"


@dataclass(frozen=True, slots=True, kw_only=True)
class Beam:
    """A candidate beam.

    Attributes:
        global_id: IFC GlobalId.
        entity_id: Number of the instance in its file.
        ifc_class: ``IfcBeam``, ``IfcMember`` …
        name: Name in the model; empty when there is none.
        storey: Name of the containing storey; empty when there is none.
        start: Centre of the section's enclosing box at the first end of the solid [m].
        end: The same at the other end.
        height: Extent of the section at right angles to the axis in the vertical plane [m].
        width: Extent of the section in plan across the axis [m].
        bending: How the profile is turned.
        profile: The section drawn; ``None`` where it could not be read.
        designations: Texts that may name the section, most trusted first (profile, type, name, object type).
        material: What the model says about the material.
        set_aside: Why this element is no load-carrying beam; empty when it is one.
        unreadable: What is missing to judge it (no body, mesh only …) and how to supply it; empty when complete.
        cut: True where the end faces were trimmed (booleans, copes) so that the ends carry that uncertainty.
        findings: Remarks for the engineer.
    """

    global_id: str
    entity_id: int
    ifc_class: str
    name: str
    storey: str
    start: Point3
    end: Point3
    height: float
    width: float
    bending: BendingAxis = BendingAxis.UPRIGHT
    profile: ProfileShape | None = None
    designations: tuple[str, ...] = ()
    material: MaterialText = field(default_factory=MaterialText)
    set_aside: str = ""
    unreadable: str = ""
    cut: bool = False
    findings: tuple[str, ...] = ()

    @property
    def plan_length(self) -> float:
        """Length of the axis in plan [m]."""
        return hypot(self.end[0] - self.start[0], self.end[1] - self.start[1])

    @property
    def rise(self) -> float:
        """Height of the end above the start [m]; negative when the axis falls."""
        return self.end[2] - self.start[2]

    @property
    def length(self) -> float:
        """Length of the axis [m]."""
        return hypot(self.plan_length, self.rise)

    @property
    def half_vertical(self) -> float:
        """Half the vertical extent of the section, measured vertically [m]."""
        plan = self.plan_length
        return 0.5 * self.height * (self.length / plan if plan > 1e-9 else 1.0)

    def level_at(self, station: float) -> float:
        """Level of the axis at a plan distance from the start [m]."""
        plan = self.plan_length
        return self.start[2] + (self.rise * station / plan if plan > 1e-9 else 0.0)

    def top_at(self, station: float) -> float:
        """Level of the top face at a plan distance from the start [m]."""
        return self.level_at(station) + self.half_vertical

    def bottom_at(self, station: float) -> float:
        """Level of the underside at a plan distance from the start [m]."""
        return self.level_at(station) - self.half_vertical


@dataclass(frozen=True, slots=True, kw_only=True)
class Layer:
    """One layer of a slab assembly.

    Attributes:
        thickness: At right angles to the slab [m].
        material: What the model says about its material.
        inferred: True where the slab has no layers and this one stands for its solid thickness.
    """

    thickness: float
    material: MaterialText
    inferred: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Slab:
    """A slab, floor unit or roof plane.

    Attributes:
        global_id: IFC GlobalId.
        entity_id: Number of the instance in its file.
        ifc_class: ``IfcSlab``, ``IfcRoof``, ``IfcPlate`` …
        name: Name in the model.
        storey: Name of the containing storey.
        plan: Net outline in plan, openings through the full thickness taken out; empty polygon when unreadable.
        gross_area: Plan area before openings are taken out [m²].
        top: Mean level of the top face [m].
        bottom: Mean level of the underside [m].
        gradient: Rise per unit plan distance along x and y (0, 0 for a level slab).
        reference: Plan point at which top and bottom are the levels given.
        layers: From the model's layer set, else one inferred layer of the solid's thickness.
        roof: It is a roof (predefined type, class, aggregation or name says so).
        on_grade: It bears on the ground (BASESLAB, or a name that says so).
        floor_unit: A precast plank or deck unit whose own long direction is its span.
        unreadable: Why the outline could not be read; empty when it could.
        findings: Remarks for the engineer.
    """

    global_id: str
    entity_id: int
    ifc_class: str
    name: str
    storey: str
    plan: PlanArea
    gross_area: float
    top: float
    bottom: float
    gradient: tuple[float, float] = (0.0, 0.0)
    reference: Point2 = (0.0, 0.0)
    layers: tuple[Layer, ...] = ()
    roof: bool = False
    on_grade: bool = False
    floor_unit: bool = False
    unreadable: str = ""
    findings: tuple[str, ...] = ()

    def _rise_to(self, x: float, y: float) -> float:
        return self.gradient[0] * (x - self.reference[0]) + self.gradient[1] * (y - self.reference[1])

    def top_at(self, x: float, y: float) -> float:
        """Level of the top face above a plan point [m]."""
        return self.top + self._rise_to(x, y)

    def bottom_at(self, x: float, y: float) -> float:
        """Level of the underside at a plan point [m]."""
        return self.bottom + self._rise_to(x, y)

    @property
    def surface_ratio(self) -> float:
        """Surface area per plan area; 1 for a level slab."""
        return hypot(1.0, *self.gradient)


class VerticalKind(StrEnum):
    """Elements that bring load to the ground."""

    COLUMN = "column"
    WALL = "wall"


@dataclass(frozen=True, slots=True, kw_only=True)
class VerticalSupport:
    """A column or a wall: a footprint between two levels.

    Attributes:
        kind: Column or wall.
        global_id: IFC GlobalId.
        name: Name in the model.
        footprint: Plan outline of its solid; of an I-column, the envelope.
        bottom: Lowest level [m].
        top: Highest level [m].
        centreline: For a wall, its axis in plan; for a column, a degenerate line at its centre.
    """

    kind: VerticalKind
    global_id: str
    name: str
    footprint: PlanArea
    bottom: float
    top: float
    centreline: tuple[Point2, Point2]


@dataclass(frozen=True, slots=True, kw_only=True)
class Building:
    """Everything read from one model.

    Attributes:
        file_name: Name of the file, without its folder.
        schema: ``IFC2X3``, ``IFC4`` or ``IFC4X3``.
        length_unit: Text of the length unit (``millimetre``, ``foot``); empty when the model states none.
        beams: Candidates, in the order of their instance numbers, set-aside ones included.
        slabs: Slabs, roofs, floor units.
        supports: Columns and walls.
        findings: Remarks on the whole model.
    """

    file_name: str
    schema: str
    length_unit: str
    beams: tuple[Beam, ...]
    slabs: tuple[Slab, ...]
    supports: tuple[VerticalSupport, ...]
    findings: tuple[str, ...] = ()
