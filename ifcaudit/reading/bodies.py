"""Bodies of products, reduced to prisms and meshes in world metres. Nothing is meshed that has a profile."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
import shapely
from numpy.typing import NDArray
from shapely import MultiPoint, Polygon
from shapely.affinity import affine_transform

from ifcaudit.model.building import PlanArea, Point3
from ifcaudit.reading.ifc_file import Model
from ifcaudit.reading.malformed import MALFORMED
from ifcaudit.reading.placements import IDENTITY, Placements, Transform, compose, dot, unit
from ifcaudit.reading.profiles import Profiles

_BODY_IDENTIFIERS = ("Body", "Facetation", "Body-FallBack", None, "")
_SOLID_TYPES = {
    "SweptSolid", "AdvancedSweptSolid", "Clipping", "CSG", "Brep", "AdvancedBrep", "Tessellation", "SurfaceModel",
    "MappedRepresentation", "SolidModel",
}  # fmt: skip
DEEPEST_NESTING = 30
"""Mapped items and booleans nested deeper than this are a loop."""
PARALLEL = 0.9999
"""Cosine above which two directions are one."""


@dataclass(frozen=True, slots=True)
class HalfSpace:
    """Everything on one side of a plane, taken away from a solid.

    Attributes:
        point: On the plane [m].
        normal: Unit normal that points to what is taken away.
        bounded: It reaches only as far as an outline on the plane.
    """

    point: Point3
    normal: Point3
    bounded: bool = False


@dataclass(frozen=True, slots=True)
class Prism:
    """A profile swept along a straight line.

    Attributes:
        profile: The IFC profile definition.
        outline: Its outline with holes in the profile plane, scaled by the transform's scale already [m].
        transform: Profile plane in the world.
        direction: Unit vector of the sweep.
        depth: Length of the sweep [m].
        clips: Half-spaces taken away.
        cut: Something else is taken away or added (another solid, a hollow), which is not followed.
        tapered: Its two end profiles differ.
    """

    profile: Any
    outline: PlanArea
    transform: Transform
    direction: Point3
    depth: float
    clips: tuple[HalfSpace, ...] = ()
    cut: bool = False
    tapered: bool = False


@dataclass(frozen=True, slots=True, eq=False)
class Mesh:
    """A closed surface of triangles.

    Attributes:
        vertices: Shape (n, 3) [m].
        faces: Vertex numbers of the triangles, shape (m, 3).
        cut: Something is taken away from it, which is not followed.
    """

    vertices: NDArray[np.float64]
    faces: NDArray[np.int64]
    cut: bool = False


@dataclass(frozen=True, slots=True)
class Unreadable:
    """A body that is not read, with the reason."""

    reason: str


Body = Prism | Mesh | Unreadable


class Bodies:
    """Bodies of products of one model, cached by what products share."""

    def __init__(self, model: Model, placements: Placements, profiles: Profiles | None = None) -> None:
        self._model = model
        self._placements = placements
        self._profiles = profiles or Profiles(model, placements)
        self._items: dict[int, tuple[Body, ...]] = {}

    def of(self, product: Any) -> tuple[Body, ...]:
        """Bodies of a product in world metres; one ``Unreadable`` when it has none."""
        try:
            return self._of(product)
        except MALFORMED as error:
            return (Unreadable(f"its placement or body is malformed ({error})"),)

    def _of(self, product: Any) -> tuple[Body, ...]:
        placement = self._placements.of(self._model.get(product, "ObjectPlacement"))
        if placement is None:
            return (Unreadable("it is placed along a grid or an alignment, which is not read"),)
        items = list(self._body_items(product))
        if not items:
            return (Unreadable("it has no body in the model"),)
        return tuple(_moved(body, placement) for item in items for body in self._item(item, 0))

    def _body_items(self, product: Any) -> Iterator[Any]:
        """Items of the body representation: the one so named, else the first that holds solids."""
        get = self._model.get
        shape = get(product, "Representation")
        representations = get(shape, "Representations") if shape is not None else ()
        for identifier in _BODY_IDENTIFIERS:
            for representation in representations or ():
                if get(representation, "RepresentationIdentifier") == identifier and (
                    identifier or get(representation, "RepresentationType") in _SOLID_TYPES
                ):
                    yield from get(representation, "Items") or ()
                    return

    def _item(self, item: Any, depth: int) -> tuple[Body, ...]:
        key = item.id()
        if key not in self._items:
            try:
                self._items[key] = self._read(item, depth)
            except MALFORMED as error:
                self._items[key] = (Unreadable(f"its body cannot be read ({item.is_a()}: {error})"),)
        return self._items[key]

    def _read(self, item: Any, depth: int) -> tuple[Body, ...]:
        if depth > DEEPEST_NESTING:
            return (Unreadable("its body refers to itself"),)
        get = self._model.get
        kind = item.is_a()
        if kind == "IfcMappedItem":
            return self._mapped(item, depth)
        if kind in {"IfcExtrudedAreaSolid", "IfcExtrudedAreaSolidTapered"}:
            return (self._extrusion(item, tapered=kind.endswith("Tapered")),)
        if kind in {"IfcBooleanResult", "IfcBooleanClippingResult"}:
            return self._boolean(item, depth)
        if kind == "IfcCsgSolid":
            return self._item(get(item, "TreeRootExpression"), depth + 1)
        if kind in {"IfcFacetedBrep", "IfcFacetedBrepWithVoids", "IfcManifoldSolidBrep"}:
            return (self._faceted([get(item, "Outer")]),)
        if kind == "IfcShellBasedSurfaceModel":
            return (self._faceted(get(item, "SbsmBoundary")),)
        if kind == "IfcFaceBasedSurfaceModel":
            return (self._faceted(get(item, "FbsmFaces")),)
        if kind == "IfcTriangulatedFaceSet":
            return (self._triangulated(item),)
        if kind == "IfcPolygonalFaceSet":
            return (self._polygonal(item),)
        return (Unreadable(f"its body is an {kind}, which is not read"),)

    def _mapped(self, item: Any, depth: int) -> tuple[Body, ...]:
        get = self._model.get
        source = get(item, "MappingSource")
        target = self._placements.of_operator(get(item, "MappingTarget"))
        if target is None:
            return (Unreadable("it is a copy scaled unequally, which is not read"),)
        # The geometry kernels in use apply the mapping origin after the target; nearly always it is the identity.
        placed = compose(target, self._placements.of_item(get(source, "MappingOrigin")))
        representation = get(source, "MappedRepresentation")
        return tuple(
            _moved(body, placed)
            for inner in get(representation, "Items") or ()
            for body in self._item(inner, depth + 1)
        )

    def _extrusion(self, item: Any, *, tapered: bool) -> Body:
        get = self._model.get
        profile = get(item, "SweptArea")
        outline = self._profiles.polygon(profile)
        depth = self._model.metre_per_unit * float(get(item, "Depth"))
        ratios = self._placements.ratios(get(item, "ExtrudedDirection")) or (0.0, 0.0, 1.0)
        position = self._placements.of_item(get(item, "Position"))
        direction = unit(position.vector(ratios))
        if outline is None:
            return Unreadable(f"its profile {self._profiles.name(profile) or profile.is_a()} gives no outline")
        if direction is None or depth <= 0.0:
            return Unreadable("its extrusion has no length or no direction")
        return Prism(profile, outline, position, direction, depth, tapered=tapered)

    def _boolean(self, item: Any, depth: int) -> tuple[Body, ...]:
        """First operand, with a half-space taken away followed exactly and anything else marked."""
        get = self._model.get
        first = self._item(get(item, "FirstOperand"), depth + 1)
        second = get(item, "SecondOperand")
        half_space = None
        if get(item, "Operator") == "DIFFERENCE" and second.is_a("IfcHalfSpaceSolid"):
            half_space = self._half_space(second)
        return tuple(_reduced(body, half_space) for body in first)

    def _half_space(self, item: Any) -> HalfSpace | None:
        get = self._model.get
        surface = get(item, "BaseSurface")
        if surface.is_a() != "IfcPlane":
            return None
        plane = self._placements.of_item(get(surface, "Position"))
        # AgreementFlag true: the surface normal points away from the half-space's own material.
        sign = -1.0 if get(item, "AgreementFlag") else 1.0
        normal = (sign * plane.z[0], sign * plane.z[1], sign * plane.z[2])
        return HalfSpace(plane.origin, normal, bounded=item.is_a() == "IfcPolygonalBoundedHalfSpace")

    # ---- surfaces

    def _faceted(self, shells: Sequence[Any]) -> Body:
        get = self._model.get
        triangles = _Triangles()
        for shell in shells:
            for face in get(shell, "CfsFaces"):
                rings: list[list[Point3]] = []
                for bound in get(face, "Bounds"):
                    loop = get(bound, "Bound")
                    if loop.is_a() != "IfcPolyLoop":
                        return Unreadable(f"a face of its body is bounded by an {loop.is_a()}, which is not read")
                    ring = [self._placements.coordinates(point) for point in get(loop, "Polygon")]
                    rings.insert(0 if bound.is_a() == "IfcFaceOuterBound" else len(rings), ring)
                triangles.add_face(rings)
        return triangles.mesh()

    def _triangulated(self, item: Any) -> Body:
        vertices = self._coordinate_list(item)
        faces = np.array(self._model.get(item, "CoordIndex"), dtype=np.int64) - 1
        indirect = self._model.get(item, "PnIndex")
        if indirect:
            faces = np.array(indirect, dtype=np.int64)[faces] - 1
        return Mesh(vertices, faces)

    def _polygonal(self, item: Any) -> Body:
        get = self._model.get
        vertices = self._coordinate_list(item)
        indirect = get(item, "PnIndex")
        triangles = _Triangles()
        for face in get(item, "Faces"):
            loops = [get(face, "CoordIndex"), *(get(face, "InnerCoordIndices") or ())]
            rings = []
            for loop in loops:
                numbers = [indirect[index - 1] - 1 if indirect else index - 1 for index in loop]
                rings.append([(float(x), float(y), float(z)) for x, y, z in vertices[numbers]])
            triangles.add_face(rings)
        return triangles.mesh()

    def _coordinate_list(self, item: Any) -> NDArray[np.float64]:
        points = self._model.get(self._model.get(item, "Coordinates"), "CoordList")
        return self._model.metre_per_unit * np.array(points, dtype=np.float64)


class _Triangles:
    """Collects triangles of plane faces with holes."""

    def __init__(self) -> None:
        self._vertices: list[Point3] = []
        self._faces: list[tuple[int, int, int]] = []

    def add_face(self, rings: Sequence[Sequence[Point3]]) -> None:
        """Add a plane face: outer ring first."""
        outer = rings[0]
        if len(rings) == 1 and len(outer) <= 4 and _is_convex(outer):
            first = len(self._vertices)
            self._vertices += outer
            self._faces += [(first, first + k, first + k + 1) for k in range(1, len(outer) - 1)]
            return
        normal = unit(_newell(outer))
        if normal is None:
            return
        axis = int(np.argmax(np.abs(normal)))
        keep = [index for index in range(3) if index != axis]
        flat = [[(point[keep[0]], point[keep[1]]) for point in ring] for ring in rings]
        polygon = Polygon(flat[0], flat[1:])
        if not polygon.is_valid:
            polygon = polygon.buffer(0)
        offset = sum(dot(normal, point) for point in outer) / len(outer)
        ahead = normal[axis] * (-1.0 if axis == 1 else 1.0) > 0.0
        for triangle in shapely.get_parts(shapely.constrained_delaunay_triangles(polygon)):
            corners = shapely.get_coordinates(shapely.orient_polygons(triangle))[:3].tolist()
            first = len(self._vertices)
            for u, v in corners if ahead else corners[::-1]:
                point = [0.0, 0.0, 0.0]
                point[keep[0]], point[keep[1]] = u, v
                point[axis] = (offset - normal[keep[0]] * u - normal[keep[1]] * v) / normal[axis]
                self._vertices.append((point[0], point[1], point[2]))
            self._faces.append((first, first + 1, first + 2))

    def mesh(self) -> Body:
        """All triangles as one mesh."""
        if not self._faces:
            return Unreadable("its body has no face")
        return Mesh(np.array(self._vertices, dtype=np.float64), np.array(self._faces, dtype=np.int64))


def _newell(ring: Sequence[Point3]) -> Point3:
    """Normal of a plane ring, twice its area long."""
    points = np.array(ring)
    following = np.roll(points, -1, axis=0)
    x, y, z = np.cross(points, following).sum(axis=0)
    return (float(x), float(y), float(z))


def _is_convex(ring: Sequence[Point3]) -> bool:
    """A triangle, or a quadrilateral without a re-entrant corner."""
    if len(ring) == 3:
        return True
    points = np.array(ring)
    before, after = points - np.roll(points, 1, axis=0), np.roll(points, -1, axis=0) - points
    turns = np.cross(before, after)
    return bool((turns @ turns.sum(axis=0) >= 0.0).all())


def _moved(body: Body, placed: Transform) -> Body:
    """Bring a body into the coordinates around it."""
    if isinstance(body, Unreadable) or placed is IDENTITY:
        return body
    scale = placed.scale
    if isinstance(body, Mesh):
        turn = np.array([placed.x, placed.y, placed.z])
        return replace(body, vertices=scale * (body.vertices @ turn) + np.array(placed.origin))
    outline = body.outline if scale == 1.0 else affine_transform(body.outline, [scale, 0.0, 0.0, scale, 0.0, 0.0])
    clips = tuple(HalfSpace(placed.point(clip.point), placed.vector(clip.normal), clip.bounded) for clip in body.clips)
    return replace(
        body,
        outline=outline,
        transform=compose(placed, body.transform),
        direction=placed.vector(body.direction),
        depth=scale * body.depth,
        clips=clips,
    )


def _reduced(body: Body, half_space: HalfSpace | None) -> Body:
    """A body with a half-space taken away, or marked as cut."""
    if isinstance(body, Prism) and half_space is not None:
        return replace(body, clips=(*body.clips, half_space))
    if isinstance(body, Unreadable):
        return body
    return replace(body, cut=True)


def prism_corners(prism: Prism) -> NDArray[np.float64]:
    """Corners of both end faces, uncut, shape (n, 3) [m]."""
    flat = shapely.get_coordinates(prism.outline)
    t = prism.transform
    near = np.array(t.origin) + flat @ np.array([t.x, t.y])
    return np.concatenate([near, near + prism.depth * np.array(prism.direction)])


def plan_footprint(body: Prism | Mesh) -> PlanArea:
    """Plan outline: exact for an upright prism, the convex hull of its corners for any other body."""
    if isinstance(body, Prism) and abs(body.transform.z[2]) > PARALLEL:
        t = body.transform
        if abs(body.direction[2]) > PARALLEL:
            return affine_transform(body.outline, [t.x[0], t.y[0], t.x[1], t.y[1], t.origin[0], t.origin[1]])
    corners = prism_corners(body) if isinstance(body, Prism) else body.vertices
    hull = MultiPoint(corners[:, :2]).convex_hull
    return hull if isinstance(hull, Polygon) else Polygon()


def z_range(body: Prism | Mesh) -> tuple[float, float]:
    """Lowest and highest level of a body; level cuts are followed [m]."""
    corners = prism_corners(body) if isinstance(body, Prism) else body.vertices
    low, high = float(corners[:, 2].min()), float(corners[:, 2].max())
    for clip in body.clips if isinstance(body, Prism) else ():
        if clip.bounded or abs(clip.normal[2]) < PARALLEL:
            continue
        if clip.normal[2] > 0.0:
            high = min(high, clip.point[2])
        else:
            low = max(low, clip.point[2])
    return low, max(low, high)
