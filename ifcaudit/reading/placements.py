"""Placements as plain tuples in world metres, cached by instance: models share a few per storey among thousands."""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt
from typing import Any

from ifcaudit.model.building import Point3
from ifcaudit.reading.ifc_file import Model

DEEPEST_NESTING = 200
"""A chain of placements longer than this is a loop."""


@dataclass(frozen=True, slots=True)
class Transform:
    """A rigid placement with one scale: a point p lies at origin + scale (p.x x + p.y y + p.z z).

    Attributes:
        origin: World position of its origin [m].
        x: Unit vector of its x axis.
        y: Unit vector of its y axis.
        z: Unit vector of its z axis.
        scale: Uniform scale; 1 except through mapped items.
    """

    origin: Point3 = (0.0, 0.0, 0.0)
    x: Point3 = (1.0, 0.0, 0.0)
    y: Point3 = (0.0, 1.0, 0.0)
    z: Point3 = (0.0, 0.0, 1.0)
    scale: float = 1.0

    def vector(self, v: Point3) -> Point3:
        """Turn a vector into the world, without scale."""
        x, y, z = self.x, self.y, self.z
        return (
            v[0] * x[0] + v[1] * y[0] + v[2] * z[0],
            v[0] * x[1] + v[1] * y[1] + v[2] * z[1],
            v[0] * x[2] + v[1] * y[2] + v[2] * z[2],
        )

    def point(self, p: Point3) -> Point3:
        """Bring a point into the world."""
        turned = self.vector(p)
        return (
            self.origin[0] + self.scale * turned[0],
            self.origin[1] + self.scale * turned[1],
            self.origin[2] + self.scale * turned[2],
        )


IDENTITY = Transform()


def compose(outer: Transform, inner: Transform) -> Transform:
    """Return the transform that applies ``inner`` first.

    Example:
        >>> lifted = Transform(origin=(0.0, 0.0, 3.0))
        >>> compose(lifted, Transform(origin=(1.0, 0.0, 0.0))).point((0.0, 2.0, 0.0))
        (1.0, 2.0, 3.0)
    """
    return Transform(
        outer.point(inner.origin),
        outer.vector(inner.x),
        outer.vector(inner.y),
        outer.vector(inner.z),
        outer.scale * inner.scale,
    )


def cross(a: Point3, b: Point3) -> Point3:
    """Vector product."""
    return (a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0])


def dot(a: Point3, b: Point3) -> float:
    """Scalar product."""
    return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]


def unit(v: Point3) -> Point3 | None:
    """Unit vector, or ``None`` for a vector without length."""
    length = sqrt(dot(v, v))
    return (v[0] / length, v[1] / length, v[2] / length) if length > 1e-12 else None


def axes(z: Point3 | None, x: Point3 | None) -> tuple[Point3, Point3, Point3]:
    """Axes from a stated z and an approximate x, as ``IfcBuildAxes`` defines them.

    Example:
        >>> axes(None, (0.0, 2.0, 5.0))
        ((0.0, 1.0, 0.0), (-1.0, 0.0, 0.0), (0.0, 0.0, 1.0))
    """
    z = (unit(z) if z else None) or (0.0, 0.0, 1.0)
    x = x or ((1.0, 0.0, 0.0) if abs(z[0]) < 0.999999 else (0.0, 1.0, 0.0))
    along = dot(x, z)
    x = unit((x[0] - along * z[0], x[1] - along * z[1], x[2] - along * z[2]))
    if x is None:  # stated x parallel to z: any direction across z
        helper = (1.0, 0.0, 0.0) if abs(z[0]) < 0.9 else (0.0, 1.0, 0.0)
        x = unit(cross(cross(z, helper), z)) or (1.0, 0.0, 0.0)
    return x, cross(z, x), z


class Placements:
    """World transforms of object placements, and of the placements inside representations."""

    def __init__(self, model: Model) -> None:
        self._model = model
        self._scale = model.metre_per_unit
        self._objects: dict[int, Transform | None] = {}
        self._items: dict[int, Transform] = {}

    def of(self, placement: Any) -> Transform | None:
        """World transform of an ``IfcLocalPlacement``; ``None`` for one along a grid or an alignment.

        An element without placement stands at the origin.
        """
        return self._nested(placement, 0)

    def _nested(self, placement: Any, depth: int) -> Transform | None:
        if placement is None:
            return IDENTITY
        key = placement.id()
        if key in self._objects:
            return self._objects[key]
        result: Transform | None = None
        if placement.is_a() == "IfcLocalPlacement" and depth < DEEPEST_NESTING:
            parent = self._nested(self._model.get(placement, "PlacementRelTo"), depth + 1)
            relative = self.of_item(self._model.get(placement, "RelativePlacement"))
            result = None if parent is None else compose(parent, relative)
        self._objects[key] = result
        return result

    def of_item(self, placement: Any) -> Transform:
        """Transform of an ``IfcAxis2Placement2D`` or ``3D``; identity where there is none."""
        if placement is None:
            return IDENTITY
        key = placement.id()
        if key not in self._items:
            get = self._model.get
            origin = self.coordinates(get(placement, "Location"))
            if placement.is_a() == "IfcAxis2Placement2D":
                z, x = None, self.ratios(get(placement, "RefDirection"))
            else:
                z, x = self.ratios(get(placement, "Axis")), self.ratios(get(placement, "RefDirection"))
            self._items[key] = Transform(origin, *axes(z, x))
        return self._items[key]

    def of_operator(self, operator: Any) -> Transform | None:
        """Transform of an ``IfcCartesianTransformationOperator3D``; ``None`` where it scales its axes unequally."""
        get = self._model.get
        scale = get(operator, "Scale")
        scale = 1.0 if scale is None else float(scale)
        for name in ("Scale2", "Scale3"):
            other = get(operator, name)
            if other is not None and abs(float(other) - scale) > 1e-9 * max(1.0, abs(scale)):
                return None
        origin = self.coordinates(get(operator, "LocalOrigin"))
        first, third = self.ratios(get(operator, "Axis1")), self.ratios(get(operator, "Axis3"))
        second = self.ratios(get(operator, "Axis2"))
        x, y, z = axes(third, first)
        if second is not None and dot(second, y) < 0.0:
            y = (-y[0], -y[1], -y[2])  # a mirrored copy
        return Transform(origin, x, y, z, scale)

    def coordinates(self, point: Any) -> Point3:
        """Coordinates of an ``IfcCartesianPoint`` [m]; a two-dimensional one lies at z = 0."""
        values = point.get_argument(0) if point is not None else (0.0, 0.0, 0.0)
        scale = self._scale
        return (
            scale * values[0],
            scale * values[1] if len(values) > 1 else 0.0,
            scale * values[2] if len(values) > 2 else 0.0,
        )

    @staticmethod
    def ratios(direction: Any) -> Point3 | None:
        """Ratios of an ``IfcDirection``; ``None`` where there is none."""
        if direction is None:
            return None
        values = direction.get_argument(0)
        return (float(values[0]), float(values[1]), float(values[2]) if len(values) > 2 else 0.0)
