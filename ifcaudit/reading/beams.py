"""Candidate beams: axis, ends and section from the solid, in world metres."""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot, sqrt
from typing import Any

import numpy as np
import shapely

from ifcaudit.model.building import Beam, BendingAxis, Point3
from ifcaudit.model.material import MaterialText
from ifcaudit.model.section import ProfileShape
from ifcaudit.reading.bodies import Bodies, Body, HalfSpace, Mesh, Prism, Unreadable, prism_corners
from ifcaudit.reading.candidates import set_aside_reason
from ifcaudit.reading.ifc_file import Model
from ifcaudit.reading.malformed import MALFORMED
from ifcaudit.reading.placements import cross, dot, unit
from ifcaudit.reading.profiles import Profiles
from ifcaudit.reading.relations import Relations
from ifcaudit.reading.vocabulary import names_rafter

_BEAM_CLASSES = ("IfcBeam", "IfcBeamStandardCase")
_MEMBER_CLASSES = ("IfcMember", "IfcMemberStandardCase")
_MEMBER_TYPES = {"PURLIN", "RAFTER"}
_RAFTER_TYPES = {"PURLIN", "RAFTER", "JOIST"}
_MESH_SECTION = (
    "its section is drawn as a mesh and was taken from its name, not measured; export it as a swept profile to have it"
    " measured"
)
UPRIGHT = 0.996
"""Cosine between section depth and the vertical plane above which a member stands upright (5 degrees)."""
ACROSS = 0.2
"""Cosine between a cut and the axis above which the cut shortens the member; less only copes its side."""
LARGEST_TRIM = 0.25
"""Part of a member that a bounded cut may take off its end."""


@dataclass(frozen=True, slots=True)
class _Solid:
    """A member's solid reduced to an axis."""

    start: Point3
    end: Point3
    height: float
    width: float
    bending: BendingAxis = BendingAxis.UPRIGHT
    profile: ProfileShape | None = None
    cut: bool = False
    findings: tuple[str, ...] = ()


def read_beams(model: Model, bodies: Bodies, profiles: Profiles, relations: Relations) -> tuple[Beam, ...]:
    """Read every candidate beam, by rising instance number.

    Args:
        model: The open model.
        bodies: Bodies of products.
        profiles: Profile definitions.
        relations: Storeys, types and materials.

    Returns:
        One record per candidate, those set aside and those that cannot be read included.
    """
    reader = _Reader(model, bodies, profiles, relations)
    return tuple(reader.read(element) for element in sorted(_candidates(model, relations), key=lambda item: item.id()))


def _candidates(model: Model, relations: Relations) -> list[Any]:
    beams = [element for name in _BEAM_CLASSES for element in _of_class(model, name)]
    members = [
        element
        for name in _MEMBER_CLASSES
        for element in _of_class(model, name)
        if _is_rafter(model, relations, element, _MEMBER_TYPES)
    ]
    return beams + members


def _of_class(model: Model, name: str) -> list[Any]:
    try:
        return list(model.file.by_type(name, include_subtypes=False))
    except RuntimeError:  # the schema has no such class
        return []


def _is_rafter(model: Model, relations: Relations, element: Any, types: set[str]) -> bool:
    type_object = relations.type_of(element.id())
    stated = [model.get(item, "PredefinedType") for item in (element, type_object) if item is not None]
    if any(item in types for item in stated):
        return True
    return any(names_rafter(text) for text in _texts(model, element, type_object))


def _texts(model: Model, element: Any, type_object: Any) -> list[str]:
    values = [
        model.get(type_object, "Name") if type_object is not None else None,
        model.get(element, "Name"),
        model.get(element, "ObjectType"),
    ]
    return [str(value).strip() for value in values if value]


class _Reader:
    def __init__(self, model: Model, bodies: Bodies, profiles: Profiles, relations: Relations) -> None:
        self._model = model
        self._bodies = bodies
        self._profiles = profiles
        self._relations = relations

    def read(self, element: Any) -> Beam:
        """Read one candidate; whatever is wrong with it stays its own."""
        try:
            solid, problem = self._solid(element)
        except MALFORMED as error:
            solid, problem = None, f"its geometry cannot be read ({error}); export it again as a swept profile"
        try:
            return self._record(element, solid, problem)
        except MALFORMED as error:
            return self._malformed(element, error)

    def _malformed(self, element: Any, error: BaseException) -> Beam:
        """A candidate whose relations or texts are broken: nothing of it is trusted."""
        zero = (0.0, 0.0, 0.0)
        return Beam(
            global_id=str(self._model.get(element, "GlobalId")),
            entity_id=element.id(),
            ifc_class=element.is_a(),
            name=str(self._model.get(element, "Name") or "").strip(),
            storey="",
            start=zero,
            end=zero,
            height=0.0,
            width=0.0,
            unreadable=f"its type, material or storey is malformed ({error}); repair or export the model again",
        )

    def _record(self, element: Any, solid: _Solid | None, problem: str) -> Beam:
        model, relations = self._model, self._relations
        key = element.id()
        type_object = relations.type_of(key)
        stated = relations.profile_of(key)
        names = [solid.profile.name] if solid and solid.profile else []
        names += [self._profiles.name(stated)] if stated is not None else []
        texts = _texts(model, element, type_object)
        rafter = _is_rafter(model, relations, element, _RAFTER_TYPES)
        set_aside = self._floor_unit(element, type_object)
        if solid and not set_aside:
            set_aside = set_aside_reason(
                plan_length=hypot(solid.end[0] - solid.start[0], solid.end[1] - solid.start[1]),
                rise=solid.end[2] - solid.start[2],
                height=solid.height,
                width=solid.width,
                profile=solid.profile,
                rafter=rafter,
                texts=(*names, *texts),
            )
        zero = (0.0, 0.0, 0.0)
        return Beam(
            global_id=str(model.get(element, "GlobalId")),
            entity_id=key,
            ifc_class=element.is_a(),
            name=str(model.get(element, "Name") or "").strip(),
            storey=relations.storey_of(key),
            start=solid.start if solid else zero,
            end=solid.end if solid else zero,
            height=solid.height if solid else 0.0,
            width=solid.width if solid else 0.0,
            bending=solid.bending if solid else BendingAxis.UPRIGHT,
            profile=solid.profile if solid else None,
            designations=tuple(dict.fromkeys(name for name in (*names, *texts, *relations.texts_of(key)) if name)),
            material=MaterialText() if set_aside else relations.material_of(key),
            set_aside=set_aside,
            unreadable="" if set_aside else problem,
            cut=bool(solid and solid.cut),
            findings=solid.findings if solid else (),
        )

    def _floor_unit(self, element: Any, type_object: Any) -> str:
        stated = {self._model.get(item, "PredefinedType") for item in (element, type_object) if item is not None}
        return "a precast floor unit (HOLLOWCORE): part of the floor, no beam" if "HOLLOWCORE" in stated else ""

    def _solid(self, element: Any) -> tuple[_Solid | None, str]:
        found = self._bodies.of(element)
        solids = [solid for body in found if (solid := self._reduce(body)) is not None]
        if not solids:
            reasons = [body.reason for body in found if isinstance(body, Unreadable)]
            reason = reasons[0] if reasons else "its body has no length"
            return None, f"{reason}; export it with a swept profile as its body"
        longest = max(solids, key=_length)
        if len(found) > 1:
            longest = _with_finding(longest, f"has {len(found)} bodies; the longest gives its axis and section")
        return longest, ""

    def _reduce(self, body: Body) -> _Solid | None:
        if isinstance(body, Prism):
            return self._from_prism(body)
        return _from_mesh(body) if isinstance(body, Mesh) else None

    def _from_prism(self, prism: Prism) -> _Solid | None:
        x0, y0, x1, y1 = prism.outline.bounds
        if prism.depth < max(x1 - x0, y1 - y0):
            return _across(prism)
        placed = self._profiles.shape(prism.profile)
        direction, up, side = _frame(prism.direction)
        corners = prism_corners(prism)[: len(shapely.get_coordinates(prism.outline))]
        along = corners @ np.array(direction)
        over, aside = corners @ np.array(up), corners @ np.array(side)
        middle = _combine(
            (direction, float(along.min() + along.max()) / 2.0),
            (up, float(over.min() + over.max()) / 2.0),
            (side, float(aside.min() + aside.max()) / 2.0),
        )
        first, last, cut = _trimmed(prism, middle)
        if last - first <= 0.0:
            return None
        return _Solid(
            start=_combine((middle, 1.0), (direction, first)),
            end=_combine((middle, 1.0), (direction, last)),
            height=float(np.ptp(over)),
            width=float(np.ptp(aside)),
            bending=_bending(prism, placed.angle if placed else 0.0, up),
            profile=_scaled(placed.shape, prism.transform.scale) if placed else None,
            cut=cut or prism.cut,
            findings=("its section changes along its length; that at its start is used",) if prism.tapered else (),
        )


def _scaled(shape: ProfileShape, scale: float) -> ProfileShape:
    """A shape brought to the size of a scaled copy."""
    if scale == 1.0:
        return shape

    def by(value: float | None) -> float | None:
        return None if value is None else scale * value

    return ProfileShape(
        kind=shape.kind,
        depth=scale * shape.depth,
        width=scale * shape.width,
        flange_thickness=by(shape.flange_thickness),
        web_thickness=by(shape.web_thickness),
        fillet_radius=by(shape.fillet_radius),
        outline=tuple((scale * x, scale * y) for x, y in shape.outline),
        name=shape.name,
        tapered=shape.tapered,
    )


def _length(solid: _Solid) -> float:
    return sqrt(sum((b - a) ** 2 for a, b in zip(solid.start, solid.end, strict=True)))


def _with_finding(solid: _Solid, finding: str) -> _Solid:
    return _Solid(
        solid.start,
        solid.end,
        solid.height,
        solid.width,
        solid.bending,
        solid.profile,
        solid.cut,
        (*solid.findings, finding),
    )


def _frame(direction: Point3) -> tuple[Point3, Point3, Point3]:
    """Axis direction, the upward normal in its vertical plane, and the level normal."""
    side = unit(cross((0.0, 0.0, 1.0), direction)) or (0.0, 1.0, 0.0)
    up = cross(direction, side)
    return direction, up, side


def _combine(*terms: tuple[Point3, float]) -> Point3:
    """Sum of vectors times factors."""
    return (
        sum(vector[0] * factor for vector, factor in terms),
        sum(vector[1] * factor for vector, factor in terms),
        sum(vector[2] * factor for vector, factor in terms),
    )


def _bending(prism: Prism, angle: float, up: Point3) -> BendingAxis:
    """How the section's depth lies to the vertical plane through the axis."""
    t = prism.transform
    depth_axis = _combine((t.x, -float(np.sin(angle))), (t.y, float(np.cos(angle))))
    cosine = abs(dot(depth_axis, up))
    if cosine > UPRIGHT:
        return BendingAxis.UPRIGHT
    return BendingAxis.FLAT if cosine < sqrt(1.0 - UPRIGHT**2) else BendingAxis.INCLINED


def _trimmed(prism: Prism, middle: Point3) -> tuple[float, float, bool]:
    """Stretch of the axis that the cuts leave, from the middle of the first face [m], and whether any cut it."""
    first, last, cut = 0.0, prism.depth, False
    for clip in prism.clips:
        cut = True
        slope = dot(prism.direction, clip.normal)
        if abs(slope) < ACROSS:
            continue
        station = dot(_combine((clip.point, 1.0), (middle, -1.0)), clip.normal) / slope
        if _too_much(clip, station, prism.depth, from_end=slope > 0.0):
            continue
        if slope > 0.0:
            last = min(last, station)
        else:
            first = max(first, station)
    return first, last, cut


def _too_much(clip: HalfSpace, station: float, depth: float, *, from_end: bool) -> bool:
    """A bounded cut that would take off more than an end is a notch somewhere along the member."""
    taken = depth - station if from_end else station
    return clip.bounded and taken > LARGEST_TRIM * depth


def _across(prism: Prism) -> _Solid | None:
    """A member whose profile lies along it, such as a lintel drawn upwards: its axis is the longest side of its box."""
    corners = prism_corners(prism)
    rectangle = shapely.get_coordinates(prism.outline.minimum_rotated_rectangle)[:3]
    sides = rectangle[1] - rectangle[0], rectangle[2] - rectangle[1]
    longest = max(sides, key=lambda side: float(np.hypot(*side)))
    t = prism.transform
    axis = unit(_combine((t.x, float(longest[0])), (t.y, float(longest[1]))))
    return None if axis is None else _from_points(corners, axis, "drawn with its profile along its length", cut=True)


def _from_mesh(mesh: Mesh) -> _Solid | None:
    """Axis of a mesh: the direction most of its edge length runs in, within ten degrees of its longest extent.

    Diagonals of triangles are longer than the edges beside them, but fewer of them are parallel.
    """
    points = np.unique(np.round(mesh.vertices, 6), axis=0)
    principal = np.linalg.svd(points - points.mean(axis=0), full_matrices=False)[2][0]
    triangles = mesh.vertices[mesh.faces]
    edges = (triangles - np.roll(triangles, 1, axis=1)).reshape(-1, 3)
    edges = edges * np.where(edges @ principal < 0.0, -1.0, 1.0)[:, None]
    lengths = np.linalg.norm(edges, axis=1)
    aligned = (edges @ principal) > 0.985 * np.maximum(lengths, 1e-12)
    if aligned.any():
        directions = edges[aligned] / lengths[aligned, None]
        _, group = np.unique(np.round(directions, 3), axis=0, return_inverse=True)
        totals = np.bincount(group.ravel(), weights=lengths[aligned])
        chosen = group.ravel() == totals.argmax()
        principal = (directions[chosen] * lengths[aligned][chosen, None]).sum(axis=0)
        principal = principal / np.linalg.norm(principal)
    axis = (float(principal[0]), float(principal[1]), float(principal[2]))
    return _from_points(points, axis, _MESH_SECTION, cut=mesh.cut)


def _from_points(points: np.ndarray, axis: Point3, finding: str, *, cut: bool) -> _Solid | None:
    direction, up, side = _frame(axis)
    extents = [points @ np.array(vector) for vector in (direction, up, side)]
    if np.ptp(extents[0]) <= 0.0:
        return None
    (first, last), (low, high), (left, right) = ((float(e.min()), float(e.max())) for e in extents)
    middle = _combine((up, (low + high) / 2.0), (side, (left + right) / 2.0))
    return _Solid(
        start=_combine((middle, 1.0), (direction, first)),
        end=_combine((middle, 1.0), (direction, last)),
        height=high - low,
        width=right - left,
        cut=cut,
        findings=(finding,),
    )
