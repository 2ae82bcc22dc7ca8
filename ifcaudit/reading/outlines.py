"""Recognises the section shape that an outline polygon draws."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise
from math import atan2, hypot, pi, sqrt

import numpy as np
import shapely
from shapely import LineString, Polygon
from shapely.affinity import rotate, translate

from ifcaudit.model.section import ProfileShape, SectionKind

ROUND_COMPACTNESS = 0.98
"""4 pi A / P² above which an outline is a circle; a square has 0.785, a 16-gon 0.987."""
FULL = 0.999
"""Area over enclosing box above which an outline is a rectangle."""
CENTRED = 0.02
"""Offset of a web from the middle of its flange, over the width, up to which the shape is symmetric."""
SAME_SIZE = 0.02
"""Relative difference up to which two flanges are equal."""


def recognise(outline: Polygon, name: str = "") -> tuple[ProfileShape, float]:
    """Return the shape an outline draws, and how its axes are turned in the plane [radians, counter-clockwise].

    Args:
        outline: Outline with holes [m].
        name: Profile name, kept with the shape.

    Example:
        >>> from shapely import box
        >>> shape, angle = recognise(box(0, 0, 0.1, 0.3))
        >>> shape.kind.value, round(shape.depth, 3), round(shape.width, 3), angle
        ('rectangle', 0.3, 0.1, 0.0)
    """
    angle = _turn(outline)
    centre = outline.centroid
    upright = rotate(outline, -angle, origin=centre, use_radians=True)
    x0, y0, x1, y1 = upright.bounds
    upright = translate(upright, -(x0 + x1) / 2.0, -(y0 + y1) / 2.0)
    width, depth = x1 - x0, y1 - y0
    shape = _solid_or_hollow(upright, width, depth)
    if shape is None:
        for quarter in (0.0, pi / 2.0):
            turned = rotate(upright, -quarter, origin=(0.0, 0.0), use_radians=True)
            shape = _open_section(turned)
            if shape is not None:
                angle += quarter
                break
    if shape is None:
        ring = tuple((float(x), float(y)) for x, y in shapely.get_coordinates(upright.exterior)[:-1])
        shape = ProfileShape(kind=SectionKind.OTHER, depth=depth, width=width, outline=ring)
    return replace(shape, name=name), angle


def _turn(outline: Polygon) -> float:
    """Turn of the smallest enclosing rectangle against the axes, within 45 degrees either way."""
    x0, y0, x1, y1 = outline.bounds
    box = outline.minimum_rotated_rectangle
    if (x1 - x0) * (y1 - y0) <= box.area * 1.001:
        return 0.0
    corners = shapely.get_coordinates(box)
    dx, dy = corners[1] - corners[0]
    angle = atan2(dy, dx) % (pi / 2.0)
    return float(angle if angle <= pi / 4.0 else angle - pi / 2.0)


def _solid_or_hollow(outline: Polygon, width: float, depth: float) -> ProfileShape | None:
    """Rectangles, circles, and tubes of one thickness."""
    outer = Polygon(outline.exterior)
    if len(outline.interiors) > 1:
        return None
    inner = Polygon(outline.interiors[0]) if outline.interiors else None
    if 4.0 * pi * outer.area / outer.length**2 > ROUND_COMPACTNESS:
        diameter = _diameter(outer)
        if inner is None:
            return ProfileShape(kind=SectionKind.ROUND, depth=diameter, width=diameter)
        wall = (diameter - _diameter(inner)) / 2.0
        return ProfileShape(kind=SectionKind.ROUND_HOLLOW, depth=diameter, width=diameter, web_thickness=wall)
    corner = sqrt(max(width * depth - outer.area, 0.0) / (4.0 - pi))
    if inner is not None and outer.area > 0.9 * width * depth:
        hole_width, hole_depth = np.ptp(shapely.get_coordinates(inner), axis=0)
        thickness = ((width - hole_width) / 2.0, (depth - hole_depth) / 2.0)
        if abs(thickness[0] - thickness[1]) > SAME_SIZE * max(thickness):
            return None
        return ProfileShape(
            kind=SectionKind.RECTANGULAR_HOLLOW,
            depth=depth,
            width=width,
            web_thickness=float(sum(thickness) / 2.0),
            fillet_radius=corner if corner > 1e-4 else None,
        )
    if inner is None and outer.area > FULL * width * depth:
        return ProfileShape(kind=SectionKind.RECTANGLE, depth=depth, width=width)
    return None


def _diameter(circle: Polygon) -> float:
    """Diameter of a circle drawn as a polygon: its corners lie on the circle, its sides do not."""
    corners = shapely.get_coordinates(circle.exterior)[:-1] - shapely.get_coordinates(circle.centroid)
    return float(2.0 * np.hypot(corners[:, 0], corners[:, 1]).mean())


def _open_section(outline: Polygon) -> ProfileShape | None:
    """I-shapes, channels and tees with upright webs and parallel flanges, centred on the origin."""
    if outline.interiors:
        return None
    x0, y0, x1, y1 = outline.bounds
    width, depth = x1 - x0, y1 - y0
    web = _chord(outline, 0.0, width)
    if web is None or web[1] - web[0] > 0.5 * width:
        return None
    web_thickness, web_middle = web[1] - web[0], 0.5 * (web[0] + web[1])
    top, bottom = (_flange(outline, side, width, depth) for side in (1.0, -1.0))
    if top is None and bottom is None:
        return None
    if top is None or bottom is None:
        flange = top or bottom
        if flange is None or abs(web_middle) > CENTRED * width:
            return None
        return ProfileShape(
            kind=SectionKind.TEE, depth=depth, width=width, flange_thickness=flange[1], web_thickness=web_thickness
        )
    if abs(top[0] - bottom[0]) > SAME_SIZE * width or abs(top[1] - bottom[1]) > SAME_SIZE * max(top[1], bottom[1]):
        return None
    flange_thickness = 0.5 * (top[1] + bottom[1])
    centred = abs(web_middle) <= CENTRED * width
    at_edge = min(abs(web[0] - x0), abs(x1 - web[1])) <= CENTRED * width
    if not centred and not at_edge:
        return None
    plain = 2.0 * width * flange_thickness + (depth - 2.0 * flange_thickness) * web_thickness
    # Each of the four (two) root fillets adds r² (1 - pi/4) to the plain area.
    fillets = 4 if centred else 2
    excess = (outline.area - plain) / (fillets * (1.0 - pi / 4.0))
    return ProfileShape(
        kind=SectionKind.I_SHAPE if centred else SectionKind.CHANNEL,
        depth=depth,
        width=width,
        flange_thickness=flange_thickness,
        web_thickness=web_thickness,
        fillet_radius=sqrt(excess) if excess > 1e-6 else None,
    )


def _chord(outline: Polygon, y: float, width: float) -> tuple[float, float] | None:
    """The one horizontal chord at a level; ``None`` where there are several."""
    cut = outline.intersection(LineString([(-width, y), (width, y)]))
    if cut.is_empty or len(shapely.get_parts(cut)) != 1:
        return None
    return float(cut.bounds[0]), float(cut.bounds[2])


def _flange(outline: Polygon, side: float, width: float, depth: float) -> tuple[float, float] | None:
    """Width and thickness of the flange at the top (1) or bottom (-1), from the upright edges at its tips."""
    face = _chord(outline, side * (depth / 2.0 - 1e-3 * depth), width)
    if face is None or face[1] - face[0] < 0.8 * width:
        return None
    ring = shapely.get_coordinates(outline.exterior)
    thicknesses = []
    for (ax, ay), (bx, by) in pairwise(ring):
        upright = abs(bx - ax) < 0.05 * abs(by - ay)
        near_tip = abs(abs(0.5 * (ax + bx)) - width / 2.0) < 0.02 * width
        reaches = max(side * ay, side * by) > 0.45 * depth
        short = hypot(bx - ax, by - ay) < 0.4 * depth
        if upright and near_tip and reaches and short:
            thicknesses.append(abs(by - ay))
    return (face[1] - face[0], float(np.mean(thicknesses))) if thicknesses else None
