"""Profile definitions: outlines in metres, and the section shape they draw. Cached by instance."""

from __future__ import annotations

from collections.abc import Sequence
from math import atan2, cos, hypot, pi, sin
from typing import Any

import numpy as np
import shapely
from shapely import Polygon
from shapely.affinity import affine_transform

from ifcaudit.model.section import Point2, ProfileShape, SectionKind
from ifcaudit.reading.ifc_file import Model
from ifcaudit.reading.malformed import MALFORMED
from ifcaudit.reading.outlines import recognise
from ifcaudit.reading.placements import Placements

ARC_SEGMENTS = 16
"""Straight pieces per quarter of a drawn circle."""


class PlacedShape:
    """A section shape and how it is turned in its profile plane."""

    __slots__ = ("angle", "shape")

    def __init__(self, shape: ProfileShape, angle: float) -> None:
        self.shape = shape
        """The shape in its own axes, depth along y."""
        self.angle = angle
        """Turn of its axes against the profile plane's, counter-clockwise [radians]."""


class Profiles:
    """Reads profile definitions of one model."""

    def __init__(self, model: Model, placements: Placements | None = None) -> None:
        self._model = model
        self._scale = model.metre_per_unit
        self._placements = placements or Placements(model)
        self._polygons: dict[int, Polygon | None] = {}
        self._shapes: dict[int, PlacedShape | None] = {}

    def polygon(self, profile: Any) -> Polygon | None:
        """Outline with holes in the profile plane [m]; ``None`` where the profile gives none. Fillets are left out."""
        if profile is None:
            return None
        key = profile.id()
        if key not in self._polygons:
            try:
                polygon = self._outline(profile)
            except MALFORMED:
                polygon = None
            self._polygons[key] = polygon if polygon is not None and polygon.area > 0.0 else None
        return self._polygons[key]

    def shape(self, profile: Any) -> PlacedShape | None:
        """Section shape with its turn; ``None`` where the profile has no geometry."""
        key = profile.id()
        if key not in self._shapes:
            self._shapes[key] = self._parametric(profile) or self._recognised(profile)
        return self._shapes[key]

    def name(self, profile: Any) -> str:
        """Profile name; empty where there is none."""
        return str(self._model.get(profile, "ProfileName") or "").strip()

    # ---- shapes

    def _length(self, profile: Any, attribute: str) -> float | None:
        value = self._model.get(profile, attribute)
        return None if value is None else self._scale * float(value)

    def _sizes(self, profile: Any, *attributes: str) -> tuple[float, ...] | None:
        values = tuple(self._length(profile, attribute) for attribute in attributes)
        if any(value is None or value <= 0.0 for value in values):
            return None
        return tuple(value for value in values if value is not None)

    def _parametric(self, profile: Any) -> PlacedShape | None:
        reader = _PARAMETRIC.get(profile.is_a())
        if reader is None:
            return None
        kind, names = reader
        sizes = self._sizes(profile, *names)
        if sizes is None:
            return None
        shape = _SHAPES[kind](sizes, self._length(profile, "FilletRadius"), self._length(profile, "OuterFilletRadius"))
        slope = self._model.get(profile, "FlangeSlope")
        shape = ProfileShape(
            kind=shape.kind,
            depth=shape.depth,
            width=shape.width,
            flange_thickness=shape.flange_thickness,
            web_thickness=shape.web_thickness,
            fillet_radius=shape.fillet_radius,
            name=self.name(profile),
            tapered=bool(slope and abs(float(slope)) > 0.0),
        )
        position = self._placements.of_item(self._model.get(profile, "Position"))
        return PlacedShape(shape, atan2(position.x[1], position.x[0]))

    def _recognised(self, profile: Any) -> PlacedShape | None:
        polygon = self.polygon(profile)
        if polygon is None:
            return None
        shape, angle = recognise(polygon, self.name(profile))
        return PlacedShape(shape, angle)

    # ---- outlines

    def _outline(self, profile: Any) -> Polygon | None:
        get = self._model.get
        kind = profile.is_a()
        if kind in _PARAMETRIC:
            own = self._parametric_outline(profile)
            return None if own is None else self._positioned(own, get(profile, "Position"))
        if kind in {"IfcArbitraryClosedProfileDef", "IfcArbitraryProfileDefWithVoids"}:
            holes = [self.curve(curve) for curve in get(profile, "InnerCurves") or ()]
            outline = Polygon(self.curve(get(profile, "OuterCurve")), holes)
            return outline if outline.is_valid else _largest(shapely.make_valid(outline))
        if kind in {"IfcDerivedProfileDef", "IfcMirroredProfileDef"}:
            return self._derived(profile)
        if kind == "IfcCompositeProfileDef":
            parts = [self.polygon(part) for part in get(profile, "Profiles") or ()]
            return _largest(shapely.unary_union([part for part in parts if part is not None]))
        return None

    def _parametric_outline(self, profile: Any) -> Polygon | None:
        kind, names = _PARAMETRIC[profile.is_a()]
        sizes = self._sizes(profile, *names)
        return None if sizes is None else _OUTLINES[kind](sizes)

    def _positioned(self, outline: Polygon, position: Any) -> Polygon:
        if position is None:
            return outline
        t = self._placements.of_item(position)
        return affine_transform(outline, [t.x[0], t.y[0], t.x[1], t.y[1], t.origin[0], t.origin[1]])

    def _derived(self, profile: Any) -> Polygon | None:
        parent = self.polygon(self._model.get(profile, "ParentProfile"))
        operator = self._model.get(profile, "Operator")
        if parent is None:
            return None
        if operator is None:  # IfcMirroredProfileDef mirrors about its y axis
            return affine_transform(parent, [-1.0, 0.0, 0.0, 1.0, 0.0, 0.0])
        get, ratios = self._model.get, self._placements.ratios
        scale = float(get(operator, "Scale") or 1.0)
        second = float(get(operator, "Scale2") or scale)
        x = ratios(get(operator, "Axis1")) or (1.0, 0.0, 0.0)
        y = ratios(get(operator, "Axis2")) or (-x[1], x[0], 0.0)
        lx, ly = hypot(x[0], x[1]), hypot(y[0], y[1])
        origin = self._placements.coordinates(get(operator, "LocalOrigin"))
        matrix = [scale * x[0] / lx, second * y[0] / ly, scale * x[1] / lx, second * y[1] / ly, origin[0], origin[1]]
        return affine_transform(parent, matrix)

    # ---- curves

    def curve(self, curve: Any) -> list[Point2]:
        """Points along a curve [m], arcs cut into straight pieces.

        Raises:
            ValueError: A kind of curve that is not read.
        """
        get = self._model.get
        kind = curve.is_a()
        if kind == "IfcPolyline":
            return [self._point(point.get_argument(0)) for point in get(curve, "Points")]
        if kind == "IfcIndexedPolyCurve":
            return self._indexed(curve)
        if kind in {"IfcCompositeCurve", "IfcCompositeCurveOnSurface", "IfcOuterBoundaryCurve", "IfcBoundaryCurve"}:
            points: list[Point2] = []
            for segment in get(curve, "Segments"):
                piece = self.curve(get(segment, "ParentCurve"))
                points += piece if get(segment, "SameSense") is not False else piece[::-1]
            return points
        if kind in {"IfcCircle", "IfcEllipse"}:
            return self._conic(curve, 0.0, 2.0 * pi)
        if kind == "IfcTrimmedCurve":
            return self._trimmed(curve)
        raise ValueError(f"curve {kind} is not read")

    def _point(self, values: Sequence[float]) -> Point2:
        return (self._scale * values[0], self._scale * values[1])

    def _indexed(self, curve: Any) -> list[Point2]:
        points = [self._point(values) for values in self._model.get(curve, "Points").get_argument(0)]
        segments = self._model.get(curve, "Segments")
        if not segments:
            return points
        result: list[Point2] = []
        for segment in segments:
            indices = segment.get_argument(0)
            corners = [points[index - 1] for index in indices]
            result += _arc(*corners) if segment.is_a() == "IfcArcIndex" else corners
        return result

    def _conic(self, curve: Any, start: float, end: float) -> list[Point2]:
        get = self._model.get
        if curve.is_a() == "IfcCircle":
            first = second = self._scale * float(get(curve, "Radius"))
        else:
            first, second = self._scale * float(get(curve, "SemiAxis1")), self._scale * float(get(curve, "SemiAxis2"))
        t = self._placements.of_item(get(curve, "Position"))
        count = max(2, int(abs(end - start) / (pi / 2.0) * ARC_SEGMENTS) + 1)
        points = []
        for angle in np.linspace(start, end, count).tolist():
            world = t.point((first * cos(angle), second * sin(angle), 0.0))
            points.append((world[0], world[1]))
        return points

    def _trimmed(self, curve: Any) -> list[Point2]:
        get = self._model.get
        basis = get(curve, "BasisCurve")
        sense = get(curve, "SenseAgreement") is not False
        ends = [self._trim(basis, get(curve, name)) for name in ("Trim1", "Trim2")]
        if basis.is_a() == "IfcLine":
            return [self._on_line(basis, end) for end in ends]
        start, end = (self._parameter(basis, item) for item in ends)
        if sense and end <= start:
            end += 2.0 * pi
        if not sense and end >= start:
            end -= 2.0 * pi
        return self._conic(basis, start, end)

    @staticmethod
    def _trim(basis: Any, trim: Sequence[Any]) -> Any:
        points = [item for item in trim if item.is_a() == "IfcCartesianPoint"]
        return points[0] if points else trim[0]

    def _on_line(self, line: Any, trim: Any) -> Point2:
        if trim.is_a() == "IfcCartesianPoint":
            return self._point(trim.get_argument(0))
        origin = self._placements.coordinates(self._model.get(line, "Pnt"))
        vector = self._model.get(line, "Dir")
        ratios = self._placements.ratios(self._model.get(vector, "Orientation")) or (1.0, 0.0, 0.0)
        reach = self._scale * float(trim.get_argument(0)) * float(self._model.get(vector, "Magnitude"))
        length = hypot(ratios[0], ratios[1])
        return (origin[0] + reach * ratios[0] / length, origin[1] + reach * ratios[1] / length)

    def _parameter(self, conic: Any, trim: Any) -> float:
        """Angle of a trim on a circle or ellipse [radians]."""
        if trim.is_a() != "IfcCartesianPoint":
            return float(trim.get_argument(0)) * self._model.radian_per_unit
        t = self._placements.of_item(self._model.get(conic, "Position"))
        point = self._placements.coordinates(trim)
        dx, dy = point[0] - t.origin[0], point[1] - t.origin[1]
        first = second = 1.0
        if conic.is_a() == "IfcEllipse":
            first, second = float(self._model.get(conic, "SemiAxis1")), float(self._model.get(conic, "SemiAxis2"))
        return atan2((dx * t.y[0] + dy * t.y[1]) / second, (dx * t.x[0] + dy * t.x[1]) / first)


def _largest(geometry: Any) -> Polygon | None:
    parts = [part for part in shapely.get_parts(geometry) if isinstance(part, Polygon)]
    return max(parts, key=lambda part: part.area, default=None)


def _arc(start: Point2, middle: Point2, end: Point2) -> list[Point2]:
    """Points along the arc through three points; the three points themselves where they lie on a line."""
    (ax, ay), (bx, by), (cx, cy) = start, middle, end
    d = 2.0 * (ax * (by - cy) + bx * (cy - ay) + cx * (ay - by))
    if abs(d) < 1e-15:
        return [start, middle, end]
    a2, b2, c2 = ax * ax + ay * ay, bx * bx + by * by, cx * cx + cy * cy
    ux = (a2 * (by - cy) + b2 * (cy - ay) + c2 * (ay - by)) / d
    uy = (a2 * (cx - bx) + b2 * (ax - cx) + c2 * (bx - ax)) / d
    radius = hypot(ax - ux, ay - uy)
    first, last = atan2(ay - uy, ax - ux), atan2(cy - uy, cx - ux)
    turn = (last - first) % (2.0 * pi)
    if (atan2(by - uy, bx - ux) - first) % (2.0 * pi) > turn:
        turn -= 2.0 * pi
    count = max(2, int(abs(turn) / (pi / 2.0) * ARC_SEGMENTS) + 1)
    inner = [
        (ux + radius * cos(first + turn * k / count), uy + radius * sin(first + turn * k / count))
        for k in range(1, count)
    ]
    return [start, *inner, end]


# ---- parametric profiles: attributes in the order their shape and outline take them

_PARAMETRIC: dict[str, tuple[str, tuple[str, ...]]] = {
    "IfcIShapeProfileDef": ("I", ("OverallDepth", "OverallWidth", "FlangeThickness", "WebThickness")),
    "IfcUShapeProfileDef": ("U", ("Depth", "FlangeWidth", "FlangeThickness", "WebThickness")),
    "IfcTShapeProfileDef": ("T", ("Depth", "FlangeWidth", "FlangeThickness", "WebThickness")),
    "IfcRectangleProfileDef": ("R", ("YDim", "XDim")),
    "IfcRoundedRectangleProfileDef": ("R", ("YDim", "XDim")),
    "IfcRectangleHollowProfileDef": ("RH", ("YDim", "XDim", "WallThickness")),
    "IfcCircleProfileDef": ("O", ("Radius",)),
    "IfcCircleHollowProfileDef": ("OH", ("Radius", "WallThickness")),
}


def _flanged(kind: SectionKind) -> Any:
    def make(sizes: Sequence[float], fillet: float | None, outer: float | None) -> ProfileShape:
        depth, width, flange, web = sizes
        return ProfileShape(
            kind=kind, depth=depth, width=width, flange_thickness=flange, web_thickness=web, fillet_radius=fillet
        )

    return make


_SHAPES: dict[str, Any] = {
    "I": _flanged(SectionKind.I_SHAPE),
    "U": _flanged(SectionKind.CHANNEL),
    "T": _flanged(SectionKind.TEE),
    "R": lambda sizes, fillet, outer: ProfileShape(kind=SectionKind.RECTANGLE, depth=sizes[0], width=sizes[1]),
    "RH": lambda sizes, fillet, outer: ProfileShape(
        kind=SectionKind.RECTANGULAR_HOLLOW, depth=sizes[0], width=sizes[1], web_thickness=sizes[2], fillet_radius=outer
    ),
    "O": lambda sizes, fillet, outer: ProfileShape(kind=SectionKind.ROUND, depth=2.0 * sizes[0], width=2.0 * sizes[0]),
    "OH": lambda sizes, fillet, outer: ProfileShape(
        kind=SectionKind.ROUND_HOLLOW, depth=2.0 * sizes[0], width=2.0 * sizes[0], web_thickness=sizes[1]
    ),
}


def _i_outline(sizes: Sequence[float]) -> Polygon:
    d, b, tf, tw = (value / 2.0 for value in sizes)
    inner = d - 2.0 * tf
    right = [(b, -d), (b, -inner), (tw, -inner), (tw, inner), (b, inner), (b, d)]
    return Polygon(right + [(-x, -y) for x, y in right])


def _u_outline(sizes: Sequence[float]) -> Polygon:
    """A channel with its web to the left, centred on its enclosing box as the schema places it."""
    d, b, tf, tw = sizes[0] / 2.0, sizes[1] / 2.0, sizes[2], sizes[3]
    return Polygon(
        [(-b, -d), (b, -d), (b, -d + tf), (-b + tw, -d + tf), (-b + tw, d - tf), (b, d - tf), (b, d), (-b, d)]
    )


def _t_outline(sizes: Sequence[float]) -> Polygon:
    d, b, tf, tw = sizes[0] / 2.0, sizes[1] / 2.0, sizes[2], sizes[3] / 2.0
    return Polygon([(-tw, -d), (tw, -d), (tw, d - tf), (b, d - tf), (b, d), (-b, d), (-b, d - tf), (-tw, d - tf)])


def _box(depth: float, width: float) -> list[Point2]:
    x, y = width / 2.0, depth / 2.0
    return [(-x, -y), (x, -y), (x, y), (-x, y)]


def _circle(radius: float) -> list[Point2]:
    count = 4 * ARC_SEGMENTS
    return [(radius * cos(2.0 * pi * k / count), radius * sin(2.0 * pi * k / count)) for k in range(count)]


_OUTLINES: dict[str, Any] = {
    "I": _i_outline,
    "U": _u_outline,
    "T": _t_outline,
    "R": lambda sizes: Polygon(_box(sizes[0], sizes[1])),
    "RH": lambda sizes: Polygon(_box(sizes[0], sizes[1]), [_box(sizes[0] - 2.0 * sizes[2], sizes[1] - 2.0 * sizes[2])]),
    "O": lambda sizes: Polygon(_circle(sizes[0])),
    "OH": lambda sizes: Polygon(_circle(sizes[0]), [_circle(sizes[0] - sizes[1])]),
}
