"""Flat pieces of slabs: from a solid in world coordinates to plan outline, levels and slope. Pure geometry, in m."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from itertools import pairwise
from math import hypot, sqrt
from typing import TypeAlias

import numpy as np
import shapely
from numpy.typing import NDArray
from shapely import MultiPolygon, Polygon
from shapely.geometry.base import BaseGeometry

from ifcaudit.model.building import PlanArea, Point3
from ifcaudit.model.section import Point2

FloatArray: TypeAlias = NDArray[np.float64]
IntArray: TypeAlias = NDArray[np.int64]
Gradient: TypeAlias = tuple[float, float]

STEEPEST = 0.17
"""Least vertical component of a unit normal that still makes a face a top or an underside (about 80° of slope)."""
SAME_SLOPE = 0.05
"""Difference in gradient up to which faces belong to one plane."""
SAME_LEVEL = 0.03
"""Difference in level up to which faces of one slope are one face [m]."""
LEAST_THICKNESS = 1e-3
"""Depth below which a fitted underside is no underside [m]."""
STEP = 0.3
"""Clear height between two bodies of one slab up to which they are one floor with a step or a cavity [m]."""
SLIVER = 1e-4
"""Plan area below which a piece is drawing noise [m²]."""
LEAST_SHARE = 0.05
"""Part of the plan below which a plane of another slope is taken into the one nearest in slope."""
UNCUT = "it is cut by a plane or solid that is not followed; the uncut outline is used"
"""Finding where a cut was not followed."""
MOST_PLANES = 24
"""More planes than this are a curved surface, for which one mean plane is used."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Plate:
    """A flat piece of a slab.

    Attributes:
        plan: Outline in plan.
        top: Level of the top face at the reference point [m].
        bottom: Level of the underside there [m].
        gradient: Rise per unit plan distance along x and y.
        reference: Plan point of the levels.
        thickness: At right angles to the plate, of a solid plate of the same volume [m].
        findings: Remarks for the engineer.
    """

    plan: PlanArea
    top: float
    bottom: float
    gradient: Gradient = (0.0, 0.0)
    reference: Point2 = (0.0, 0.0)
    thickness: float
    findings: tuple[str, ...] = ()

    @property
    def surface_ratio(self) -> float:
        """Surface area per plan area."""
        return hypot(1.0, *self.gradient)

    def rise_to(self, point: Point2) -> float:
        """Return how much higher the plate is at a plan point than at its reference [m]."""
        return self.gradient[0] * (point[0] - self.reference[0]) + self.gradient[1] * (point[1] - self.reference[1])


def clean_area(area: BaseGeometry) -> PlanArea:
    """Return the valid polygons of a geometry, slivers left out; an empty polygon when nothing remains."""
    if not area.is_valid:
        area = shapely.make_valid(area)
    parts = [part for part in shapely.get_parts(area) if isinstance(part, Polygon) and part.area > SLIVER]
    if area.geom_type == "GeometryCollection":
        inner = [each for part in shapely.get_parts(area) for each in shapely.get_parts(part)]
        parts = [part for part in inner if isinstance(part, Polygon) and part.area > SLIVER]
    if not parts:
        return Polygon()
    return parts[0] if len(parts) == 1 else MultiPolygon(parts)


def centre_of(area: PlanArea) -> Point2:
    """Return the centroid of a plan area."""
    point = area.centroid
    return (float(point.x), float(point.y))


@dataclass(frozen=True, slots=True, kw_only=True)
class Extrusion:
    """A profile polygon swept along a straight line.

    Attributes:
        profile: Outline with holes in its own plane [m].
        origin: World position of the profile's origin.
        x_axis: World direction of the profile's x.
        y_axis: World direction of the profile's y.
        sweep: World vector from the first face to the other [m].
        clips: Half-spaces cut off: (point on the plane, normal that points to what is removed).
    """

    profile: PlanArea
    origin: Point3
    x_axis: Point3
    y_axis: Point3
    sweep: Point3
    clips: tuple[tuple[Point3, Point3], ...] = field(default=())


def plates_of_extrusion(solid: Extrusion) -> tuple[Plate, ...]:
    """Return the plate of an extruded outline; the planes of a section that is extruded sideways.

    The outline of a sloping slab is taken at mid-depth, so that vertical and square edges weigh the same.
    """
    normal = np.cross(solid.x_axis, solid.y_axis)
    normal /= np.linalg.norm(normal)
    sweep = np.asarray(solid.sweep, dtype=np.float64)
    along = abs(float(normal @ sweep))
    if abs(normal[2]) < STEEPEST or along < 1e-6:
        vertices, triangles = _mesh_of_extrusion(solid)
        plates = plates_of_mesh(vertices, triangles)
        return tuple(with_finding(plate, UNCUT) for plate in plates) if solid.clips else plates
    matrix = np.column_stack([solid.x_axis, solid.y_axis])
    middle = np.asarray(solid.origin) + 0.5 * sweep
    plan = clean_area(shapely.transform(solid.profile, lambda points: points @ matrix[:2].T + middle[:2]))
    if plan.is_empty:
        return ()
    gradient = (-float(normal[0] / normal[2]), -float(normal[1] / normal[2]))
    reference = centre_of(plan)
    level = float(middle[2]) + gradient[0] * (reference[0] - middle[0]) + gradient[1] * (reference[1] - middle[1])
    half = 0.5 * along / abs(float(normal[2]))
    plate = Plate(
        plan=plan,
        top=float(level + half),
        bottom=float(level - half),
        gradient=_flat_if_level(gradient),
        reference=reference,
        thickness=along,
    )
    for point, away in solid.clips:
        plate = _clip(plate, point, away)
    return () if plate.plan.is_empty else (plate,)


def _flat_if_level(gradient: Gradient) -> Gradient:
    return (0.0, 0.0) if hypot(*gradient) < 1e-6 else gradient


def _clip(plate: Plate, point: Point3, away: Point3) -> Plate:
    """Cut a plate with a vertical plane in plan; a plane that is not vertical is only reported, if it touches."""
    horizontal = hypot(away[0], away[1])
    if horizontal > 0.999 * hypot(horizontal, away[2]):
        kept = _half_plane(plate.plan, point, (away[0] / horizontal, away[1] / horizontal))
        plan = clean_area(plate.plan.intersection(kept))
        centre = centre_of(plan) if not plan.is_empty else plate.reference
        rise = plate.rise_to(centre)
        return replace(plate, plan=plan, reference=centre, top=plate.top + rise, bottom=plate.bottom + rise)
    if not touches(plate, point, away):
        return plate
    return with_finding(plate, UNCUT)


def _half_plane(area: PlanArea, point: Point3, away: Point2) -> Polygon:
    """Return a rectangle that holds all of an area on the kept side of a line."""
    reach = 2.0 * sum(abs(bound) for bound in area.bounds) + hypot(point[0], point[1]) + 1.0
    (x, y), (u, v) = point[:2], away
    first, second = (x - v * reach, y + u * reach), (x + v * reach, y - u * reach)
    back = (-2.0 * reach * u, -2.0 * reach * v)
    return Polygon(
        [first, second, (second[0] + back[0], second[1] + back[1]), (first[0] + back[0], first[1] + back[1])]
    )


def with_finding(plate: Plate, note: str) -> Plate:
    """Add a remark to a plate, once."""
    return plate if note in plate.findings else replace(plate, findings=(*plate.findings, note))


def touches(plate: Plate, point: Point3, away: Point3) -> bool:
    """Tell whether a half-space, beyond ``point`` towards ``away``, reaches into a plate."""
    corners = shapely.get_coordinates(plate.plan)
    for level in (plate.top, plate.bottom):
        heights = level + (corners - plate.reference) @ np.asarray(plate.gradient)
        beyond = (np.column_stack([corners, heights]) - point) @ np.asarray(away)
        if float(beyond.max()) > 1e-3 * hypot(*away):
            return True
    return False


def _mesh_of_extrusion(solid: Extrusion) -> tuple[FloatArray, IntArray]:
    """Return the side and end faces of an extrusion as triangles."""
    origin, sweep = np.asarray(solid.origin), np.asarray(solid.sweep)
    matrix = np.column_stack([solid.x_axis, solid.y_axis])
    flip = float(np.cross(solid.x_axis, solid.y_axis) @ sweep) < 0.0
    triangles: list[FloatArray] = []
    for polygon in shapely.get_parts(shapely.orient_polygons(solid.profile)):
        for ring in (polygon.exterior, *polygon.interiors):
            base = shapely.get_coordinates(ring) @ matrix.T + origin
            for here, there in pairwise(base):
                triangles.append(np.array([here, there, there + sweep]))
                triangles.append(np.array([here, there + sweep, here + sweep]))
        for piece in shapely.get_parts(shapely.constrained_delaunay_triangles(polygon)):
            base = shapely.get_coordinates(shapely.orient_polygons(piece))[:3] @ matrix.T + origin
            triangles.extend((base[::-1], base + sweep))
    vertices = np.concatenate(triangles)
    faces = np.arange(len(vertices), dtype=np.int64).reshape(-1, 3)
    return vertices, faces[:, ::-1] if flip else faces


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _Faces:
    """Triangles with their area vectors, turned outward."""

    corners: FloatArray
    vectors: FloatArray
    volume: float

    @property
    def centres(self) -> FloatArray:
        return np.asarray(self.corners.mean(axis=1))

    def facing(self, sign: float) -> IntArray:
        """Return the triangles that look up (1) or down (-1)."""
        size = np.linalg.norm(self.vectors, axis=1)
        return np.flatnonzero((size > 1e-12) & (sign * self.vectors[:, 2] > STEEPEST * size))

    def gradients(self) -> FloatArray:
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(-self.vectors[:, :2] / self.vectors[:, 2:])

    def plan(self, chosen: IntArray) -> PlanArea:
        outlines = shapely.polygons(self.corners[chosen][:, :, :2])
        return clean_area(shapely.union_all(outlines, grid_size=1e-6))


def _faces(vertices: FloatArray, triangles: IntArray) -> _Faces:
    corners = vertices[triangles]
    vectors = 0.5 * np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    centre = vertices.mean(axis=0)
    volume = float(np.sum((corners[:, 0] - centre) * vectors) / 3.0)
    return _Faces(corners=corners, vectors=vectors if volume >= 0.0 else -vectors, volume=abs(volume))


def plates_of_mesh(vertices: FloatArray, triangles: IntArray) -> tuple[Plate, ...]:
    """Return the plates under the upward faces of a mesh, one per plane, largest first; none when no face looks up.

    Args:
        vertices: World positions [m], shape (n, 3).
        triangles: Vertex numbers, shape (m, 3); turned outward or all inward.
    """
    faces = _faces(np.asarray(vertices, dtype=np.float64), np.asarray(triangles, dtype=np.int64))
    up, down = faces.facing(1.0), faces.facing(-1.0)
    if not len(up):
        return ()
    if abs(faces.vectors[up, 2].sum() + faces.vectors[down, 2].sum()) > 0.05 * faces.vectors[up, 2].sum():
        return _block(faces, np.concatenate([up, down]))
    planes = _planes(faces, up)
    plates = [_plate_under(faces, plane, outline, down, alone=len(planes) == 1) for plane, outline in planes]
    readable = [plate for plate in plates if not plate.plan.is_empty]
    return tuple(sorted(readable, key=lambda plate: -plate.plan.area))


def plan_of_mesh(vertices: FloatArray, triangles: IntArray) -> PlanArea:
    """Return the plan outline of a mesh, from its faces that are not vertical."""
    faces = _faces(np.asarray(vertices, dtype=np.float64), np.asarray(triangles, dtype=np.int64))
    return faces.plan(np.concatenate([faces.facing(1.0), faces.facing(-1.0)]))


def _block(faces: _Faces, chosen: IntArray) -> tuple[Plate, ...]:
    """Return one level plate around faces whose orientation cannot be trusted."""
    plan = faces.plan(chosen)
    if plan.is_empty:
        return ()
    levels = faces.corners[chosen][:, :, 2]
    top, bottom = float(levels.max()), float(levels.min())
    note = "its faces do not close or are not turned outward; outline and levels are those of the whole body"
    return (
        Plate(plan=plan, top=top, bottom=bottom, reference=centre_of(plan), thickness=top - bottom, findings=(note,)),
    )


def _planes(faces: _Faces, up: IntArray) -> list[tuple[IntArray, IntArray]]:
    """Group the upward triangles by slope.

    Returns:
        Per plane the triangles that define it, and those of its outline, very small planes beside it included.
        Square-cut edges belong to no plane.
    """
    groups = _by_slope(faces, up)
    if groups is None:
        return [(up, up)]
    weight, slopes = faces.vectors[:, 2], [faces.gradients()[group[0]] for group in groups]
    total = float(weight[up].sum())
    shares = [float(weight[group].sum()) / total for group in groups]
    kept: dict[int, list[int]] = {}
    for k in sorted(range(len(groups)), key=lambda number: -shares[number]):
        if kept and _is_edge(slopes[k], [slopes[j] for j in kept], shares[k]):
            continue
        if kept and shares[k] < LEAST_SHARE:
            nearest = min(kept, key=lambda j: float(np.abs(slopes[j] - slopes[k]).max()))
            kept[nearest] += groups[k]
        else:
            kept[k] = list(groups[k])
    return [(np.array(groups[k], dtype=np.int64), np.array(outline, dtype=np.int64)) for k, outline in kept.items()]


def _by_slope(faces: _Faces, up: IntArray) -> list[list[int]] | None:
    """Return the triangles of each slope, the largest first in each; ``None`` for a curved surface."""
    gradients, weight = faces.gradients(), faces.vectors[:, 2]
    groups: list[list[int]] = []
    for index in sorted(up.tolist(), key=lambda number: -weight[number]):
        for group in groups:
            if np.abs(gradients[index] - gradients[group[0]]).max() < SAME_SLOPE:
                group.append(index)
                break
        else:
            groups.append([index])
        if len(groups) > MOST_PLANES:
            return None
    return groups


def _is_edge(slope: FloatArray, main: Sequence[FloatArray], share: float) -> bool:
    """Tell whether a small plane is the square-cut edge of a larger one (its normal lies in that plane)."""
    if share > 0.2:
        return False
    normal = np.append(-slope, 1.0) / sqrt(1.0 + float(slope @ slope))
    return any(abs(float(normal @ np.append(-each, 1.0))) / sqrt(1.0 + float(each @ each)) < 0.1 for each in main)


def _plate_under(faces: _Faces, plane: IntArray, outline: IntArray, down: IntArray, *, alone: bool) -> Plate:
    plan = faces.plan(outline)
    vectors = faces.vectors[plane].sum(axis=0)
    gradient = _flat_if_level((-float(vectors[0] / vectors[2]), -float(vectors[1] / vectors[2])))
    reference = centre_of(plan) if not plan.is_empty else (0.0, 0.0)
    top, stepped = _level(faces, plane, gradient, reference, sign=1.0)
    inside = shapely.contains_xy(plan, faces.centres[down][:, 0], faces.centres[down][:, 1])
    below = down if alone or not inside.any() else down[inside]
    bottom, _ = _level(faces, below, gradient, reference, sign=-1.0)
    ratio = hypot(1.0, *gradient)
    if top - bottom < LEAST_THICKNESS:
        # A stair, a wedge: planes fitted to its top and underside cross, so its mean depth stands for both.
        stepped, bottom = True, top - faces.volume / float(faces.vectors[faces.facing(1.0), 2].sum())
    thickness = max(top - bottom, 0.0) / ratio
    if alone and plan.area > 0.0:
        # Hollow cores, ribs and steps: the weight is that of the volume, not that of the enclosing depth.
        thickness = min(thickness, faces.volume / (plan.area * ratio))
    findings = ("its top face is not one plane; the mean level is used",) if stepped else ()
    return Plate(
        plan=plan,
        top=top,
        bottom=bottom,
        gradient=gradient,
        reference=reference,
        thickness=thickness,
        findings=findings,
    )


def _level(
    faces: _Faces, chosen: IntArray, gradient: Gradient, reference: Point2, *, sign: float
) -> tuple[float, bool]:
    """Return the level at the reference of a plane through triangles, and whether it is only a mean of several levels.

    Recesses, cores and kerbs look up as well; the level that most of the area shares is the face, and of two equal
    ones the outer one (``sign`` 1: the upper).
    """
    centres, weight = faces.centres[chosen], np.abs(faces.vectors[chosen, 2])
    levels = centres[:, 2] - (centres[:, :2] - reference) @ np.asarray(gradient)
    if float(np.ptp(levels)) <= SAME_LEVEL:
        return float(np.average(levels, weights=weight)), False
    candidates = np.unique(np.round(levels, 2))
    shared = np.array([weight[np.abs(levels - level) <= SAME_LEVEL].sum() for level in candidates])
    best = candidates[shared > 0.999 * shared.max()]
    level = best.max() if sign > 0 else best.min()
    if shared.max() < 0.5 * weight.sum():
        return float(np.average(levels, weights=weight)), True
    near = np.abs(levels - level) <= SAME_LEVEL
    return float(np.average(levels[near], weights=weight[near])), False


def group_plates(plates: Sequence[Plate]) -> list[list[int]]:
    """Group plates that make up one slab: of one slope, and touching in level; from the top downwards.

    Returns:
        The numbers of the plates in each group.
    """
    groups: list[list[int]] = []
    for index in sorted(range(len(plates)), key=lambda number: -plates[number].top):
        for group in groups:
            if _same_slope(plates[index], plates[group[0]]) and any(_adjoin(plates[index], plates[k]) for k in group):
                group.append(index)
                break
        else:
            groups.append([index])
    return groups


def _same_slope(plate: Plate, other: Plate) -> bool:
    return all(abs(a - b) < SAME_SLOPE for a, b in zip(plate.gradient, other.gradient, strict=True))


def _adjoin(plate: Plate, other: Plate) -> bool:
    rise = other.rise_to(plate.reference)
    return plate.bottom <= other.top + rise + STEP and other.bottom + rise <= plate.top + STEP


def merge_plates(group: Sequence[Plate]) -> Plate:
    """Join plates of one slab, such as its layers or its parts side by side.

    The thickness of the joined plate is that of a solid plate of the same volume.
    """
    if len(group) == 1:
        return group[0]
    plan = clean_area(shapely.union_all([plate.plan for plate in group], grid_size=1e-6))
    reference = centre_of(plan)
    tops = [plate.top + plate.rise_to(reference) for plate in group]
    bottoms = [plate.bottom + plate.rise_to(reference) for plate in group]
    volume = sum(plate.plan.area * plate.thickness for plate in group)
    depth = (max(tops) - min(bottoms)) / group[0].surface_ratio
    return Plate(
        plan=plan,
        top=max(tops),
        bottom=min(bottoms),
        gradient=group[0].gradient,
        reference=reference,
        thickness=min(volume / plan.area, depth),  # a body drawn twice weighs once
        findings=tuple(dict.fromkeys(note for plate in group for note in plate.findings)),
    )
