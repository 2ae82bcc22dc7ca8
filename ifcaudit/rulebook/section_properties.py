"""Section properties from dimensions, fillets included. SI; "major" is across the depth as drawn.

Corner radii: a rolled shape's ``fillet_radius`` is its root radius, a hollow section's its outer corner radius. Where
an I-shape or channel has none, none is counted; where a rectangular hollow section has none, the outer radius is taken
as twice the wall, which reproduces the tabulated properties of HSS; its slenderness then follows AISC 360-22 B4.1b(d).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import nan, pi, sqrt

from ifcaudit.model.section import Point2, ProfileShape, Section, SectionKind

NOMINAL_STEEL_DENSITY = 7850.0
"""What a catalogue's nominal mass stands for [kg/m³] (EN 1993-1-1 3.2.6 from memory); other materials use their own."""

_FILLET_AREA = 1.0 - pi / 4.0
_FILLET_CENTROID = (10.0 - 3.0 * pi) / (12.0 - 3.0 * pi)
_FILLET_INERTIA = 1.0 / 3.0 - pi / 16.0 - 1.0 / (9.0 * (4.0 - pi))
_QUARTER_CENTROID = 4.0 / (3.0 * pi)
_QUARTER_INERTIA = pi / 16.0 - 4.0 / (9.0 * pi)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Part:
    """A piece of a section: area, centroid, second moments about its own centroid; a hole counts negative."""

    area: float
    x: float
    y: float
    i_x: float
    i_y: float


def section_from_dimensions(profile: ProfileShape) -> Section | None:
    """Compute the properties of a drawn profile.

    Returns:
        The section, with an empty family; values that do not apply or are not known are ``nan``. For tees, angles and
        general outlines only area, second moments about the axes as drawn and radii of gyration. ``None`` where a
        thickness or the outline is missing.

    Example:
        >>> profile = ProfileShape(kind=SectionKind.I_SHAPE, depth=0.3, width=0.15, flange_thickness=0.0107,
        ...     web_thickness=0.0071, fillet_radius=0.015)
        >>> section = section_from_dimensions(profile)
        >>> section.designation, round(section.plastic_modulus_major * 1e6, 1)
        ('I 300x150x7.1x10.7 mm', 628.4)
    """
    maker = _MAKERS.get(profile.kind)
    return maker(profile) if maker else _general(profile)


def i_shape_section(profile: ProfileShape) -> Section | None:
    """I-shape of two equal flanges.

    J: El Darwish and Johnston (1965), which counts fillets and junctions; C_w = t_f b³ (d - t_f)² / 24;
    r_ts: AISC 360-22 eq. F2-7.
    """
    d, b, t_f, t_w = profile.depth, profile.width, profile.flange_thickness, profile.web_thickness
    if not t_f or not t_w or 2.0 * t_f >= d or t_w >= b:
        return None
    r = profile.fillet_radius or 0.0
    h = d - 2.0 * t_f
    a, e = _FILLET_AREA * r**2, _FILLET_CENTROID * r
    parts = [
        _rectangle(b, t_f, 0.0, (d - t_f) / 2.0),
        _rectangle(b, t_f, 0.0, -(d - t_f) / 2.0),
        _rectangle(t_w, h, 0.0, 0.0),
        *_four(_Part(area=a, x=t_w / 2.0 + e, y=h / 2.0 - e, i_x=_FILLET_INERTIA * r**4, i_y=_FILLET_INERTIA * r**4)),
    ]
    area, i_x, i_y = _sums(parts)
    warping = t_f * b**3 * (d - t_f) ** 2 / 24.0
    return Section(
        kind=profile.kind,
        designation=f"I {_mm(d)}x{_mm(b)}x{_mm(t_w)}x{_mm(t_f)} mm",
        family="",
        depth=d,
        width=b,
        flange_thickness=t_f,
        web_thickness=t_w,
        flange_slenderness=b / (2.0 * t_f),
        web_slenderness=(h - 2.0 * r) / t_w,
        area=area,
        mass_per_length=area * NOMINAL_STEEL_DENSITY,
        second_moment_major=i_x,
        elastic_modulus_major=2.0 * i_x / d,
        plastic_modulus_major=b * t_f * (d - t_f) + t_w * h**2 / 4.0 + 4.0 * a * (h / 2.0 - e),
        radius_of_gyration_major=sqrt(i_x / area),
        second_moment_minor=i_y,
        elastic_modulus_minor=2.0 * i_y / b,
        plastic_modulus_minor=t_f * b**2 / 2.0 + h * t_w**2 / 4.0 + 4.0 * a * (t_w / 2.0 + e),
        radius_of_gyration_minor=sqrt(i_y / area),
        torsion_constant=_i_shape_torsion(d, b, t_f, t_w, r),
        warping_constant=warping,
        effective_radius_of_gyration=sqrt(sqrt(i_y * warping) / (2.0 * i_x / d)),
        flange_centroid_distance=d - t_f,
    )


def _i_shape_torsion(d: float, b: float, t_f: float, t_w: float, r: float) -> float:
    """St. Venant constant of an I-shape with fillets (El Darwish and Johnston, 1965)."""
    alpha = -0.042 + 0.2204 * t_w / t_f + 0.1355 * r / t_f - 0.0865 * r * t_w / t_f**2 - 0.0725 * t_w**2 / t_f**2
    inscribed = ((t_f + r) ** 2 + t_w * (r + t_w / 4.0)) / (2.0 * r + t_f)
    plates = 2.0 * b * t_f**3 / 3.0 + (d - 2.0 * t_f) * t_w**3 / 3.0
    return plates + 2.0 * alpha * inscribed**4 - 0.420 * t_f**4


def channel_section(profile: ProfileShape) -> Section | None:
    """Channel with parallel flanges; a sloping flange counts with its mean thickness.

    J is the sum of b t³/3 and C_w that of the thin-walled middle line, both without fillets.
    """
    d, b, t_f, t_w = profile.depth, profile.width, profile.flange_thickness, profile.web_thickness
    if not t_f or not t_w or 2.0 * t_f >= d or t_w >= b:
        return None
    r = profile.fillet_radius or 0.0
    h, overhang = d - 2.0 * t_f, b - t_w
    a, e, own = _FILLET_AREA * r**2, _FILLET_CENTROID * r, _FILLET_INERTIA * r**4
    fillet = {"area": a, "x": t_w + e, "i_x": own, "i_y": own}
    parts = [
        _rectangle(b, t_f, b / 2.0, (d - t_f) / 2.0),
        _rectangle(b, t_f, b / 2.0, -(d - t_f) / 2.0),
        _rectangle(t_w, h, t_w / 2.0, 0.0),
        _Part(y=h / 2.0 - e, **fillet),
        _Part(y=e - h / 2.0, **fillet),
    ]
    area, i_x, i_y = _sums(parts)
    centroid = sum(part.area * part.x for part in parts) / area
    b_mid, h_mid = b - t_w / 2.0, d - t_f
    warping = (
        t_f * b_mid**3 * h_mid**2 / 12.0 * (3.0 * b_mid * t_f + 2.0 * h_mid * t_w) / (6.0 * b_mid * t_f + h_mid * t_w)
    )
    return Section(
        kind=profile.kind,
        designation=f"channel {_mm(d)}x{_mm(b)}x{_mm(t_w)}x{_mm(t_f)} mm",
        family="",
        depth=d,
        width=b,
        flange_thickness=t_f,
        web_thickness=t_w,
        flange_slenderness=b / t_f,
        web_slenderness=(h - 2.0 * r) / t_w,
        area=area,
        mass_per_length=area * NOMINAL_STEEL_DENSITY,
        second_moment_major=i_x,
        elastic_modulus_major=2.0 * i_x / d,
        plastic_modulus_major=b * t_f * (d - t_f) + t_w * h**2 / 4.0 + 2.0 * a * (h / 2.0 - e),
        radius_of_gyration_major=sqrt(i_x / area),
        second_moment_minor=i_y,
        elastic_modulus_minor=i_y / max(centroid, b - centroid),
        plastic_modulus_minor=_channel_minor_plastic(d, t_f, t_w, overhang, (area, a, e)),
        radius_of_gyration_minor=sqrt(i_y / area),
        torsion_constant=(2.0 * b * t_f**3 + h * t_w**3) / 3.0,
        warping_constant=warping,
        effective_radius_of_gyration=sqrt(sqrt(i_y * warping) / (2.0 * i_x / d)),
        flange_centroid_distance=d - t_f,
    )


def _channel_minor_plastic(
    d: float, t_f: float, t_w: float, overhang: float, fillets: tuple[float, float, float]
) -> float:
    """Plastic modulus of a channel about the axis along its web; the fillets as points at their centroids."""
    area, a, e = fillets
    in_web = area / (2.0 * d)
    if in_web <= t_w:  # the neutral axis lies in the web
        web = d * (in_web**2 + (t_w - in_web) ** 2) / 2.0
        return web + 2.0 * overhang * t_f * (t_w + overhang / 2.0 - in_web) + 2.0 * a * (t_w + e - in_web)
    axis = (t_w + overhang) - area / (4.0 * t_f)  # half the area lies in the flanges beyond it
    outer, inner = t_w + overhang - axis, axis - t_w
    flanges = t_f * (outer**2 + inner**2)
    return flanges + d * t_w * (axis - t_w / 2.0) + 2.0 * a * abs(axis - t_w - e)


def rectangular_hollow_section(profile: ProfileShape, inner_radius: float | None = None) -> Section | None:
    """Rectangular tube with rounded corners.

    The inner corner radius is the outer one less the wall, unless given: EN 10210-2 tabulates 1.5 t outside and
    1.0 t inside, corners thicker than the wall, which adds up to one per cent.

    J = t³ h / 3 + 2 K A_h (Bredt with the wall's own part; EN 10210-2 annex, from memory). Width-to-thickness
    ratios: clear width between the corners, AISC 360-22 B4.1b(d).
    """
    d, b, t = profile.depth, profile.width, profile.web_thickness or profile.flange_thickness
    if not t or 2.0 * t >= min(d, b):
        return None
    drawn = profile.fillet_radius
    outer = min(drawn if drawn is not None else 2.0 * t, d / 2.0, b / 2.0)
    inner = max(outer - t, 0.0) if inner_radius is None else inner_radius
    solid, hole = _rounded(d, b, outer), _rounded(d - 2.0 * t, b - 2.0 * t, inner)
    area = solid.area - hole.area
    i_x, i_y = solid.i_x - hole.i_x, solid.i_y - hole.i_y
    middle = (outer + inner) / 2.0
    enclosed = (d - t) * (b - t) - middle**2 * (4.0 - pi)
    perimeter = 2.0 * (d - t + b - t) - 2.0 * middle * (4.0 - pi)
    corners = 2.0 * inner if drawn is not None else t  # corner radius unknown: outside dimension less 3 t
    plastic = [
        _rounded_plastic(d, b, outer) - _rounded_plastic(d - 2.0 * t, b - 2.0 * t, inner) for d, b in ((d, b), (b, d))
    ]
    name = "SHS" if abs(d - b) < 1e-6 else "RHS"
    size = f"{_mm(d)}x{_mm(t)}" if name == "SHS" else f"{_mm(d)}x{_mm(b)}x{_mm(t)}"
    return Section(
        kind=profile.kind,
        designation=f"{name} {size} mm",
        family="",
        depth=d,
        width=b,
        flange_thickness=t,
        web_thickness=t,
        flange_slenderness=(b - 2.0 * t - corners) / t,
        web_slenderness=(d - 2.0 * t - corners) / t,
        area=area,
        mass_per_length=area * NOMINAL_STEEL_DENSITY,
        second_moment_major=i_x,
        elastic_modulus_major=2.0 * i_x / d,
        plastic_modulus_major=plastic[0],
        radius_of_gyration_major=sqrt(i_x / area),
        second_moment_minor=i_y,
        elastic_modulus_minor=2.0 * i_y / b,
        plastic_modulus_minor=plastic[1],
        radius_of_gyration_minor=sqrt(i_y / area),
        torsion_constant=t**3 * perimeter / 3.0 + 4.0 * enclosed**2 * t / perimeter,
    )


def round_hollow_section(profile: ProfileShape) -> Section | None:
    """Round tube."""
    d, t = profile.depth, profile.web_thickness or profile.flange_thickness
    if not t or 2.0 * t >= d:
        return None
    return _circular(profile, f"CHS {_mm(d)}x{_mm(t)} mm", hole=d - 2.0 * t, wall=t)


def round_section(profile: ProfileShape) -> Section:
    """Solid round bar."""
    return _circular(profile, f"round {_mm(profile.depth)} mm", hole=0.0, wall=nan)


def _circular(profile: ProfileShape, designation: str, *, hole: float, wall: float) -> Section:
    d = profile.depth
    area = pi * (d**2 - hole**2) / 4.0
    inertia = pi * (d**4 - hole**4) / 64.0
    elastic, plastic, gyration = 2.0 * inertia / d, (d**3 - hole**3) / 6.0, sqrt(inertia / area)
    return Section(
        kind=profile.kind,
        designation=designation,
        family="",
        depth=d,
        width=d,
        flange_thickness=wall,
        web_thickness=wall,
        flange_slenderness=d / wall,
        area=area,
        mass_per_length=area * NOMINAL_STEEL_DENSITY,
        second_moment_major=inertia,
        elastic_modulus_major=elastic,
        plastic_modulus_major=plastic,
        radius_of_gyration_major=gyration,
        second_moment_minor=inertia,
        elastic_modulus_minor=elastic,
        plastic_modulus_minor=plastic,
        radius_of_gyration_minor=gyration,
        torsion_constant=2.0 * inertia,
    )


def rectangle_section(profile: ProfileShape) -> Section:
    """Solid rectangle; J after Roark's approximation for a solid rectangle."""
    d, b = profile.depth, profile.width
    area, i_x, i_y = d * b, b * d**3 / 12.0, d * b**3 / 12.0
    long, short = max(d, b), min(d, b)
    return Section(
        kind=profile.kind,
        designation=f"rectangle {_mm(b)}x{_mm(d)} mm",
        family="",
        depth=d,
        width=b,
        area=area,
        mass_per_length=area * NOMINAL_STEEL_DENSITY,
        second_moment_major=i_x,
        elastic_modulus_major=b * d**2 / 6.0,
        plastic_modulus_major=b * d**2 / 4.0,
        radius_of_gyration_major=sqrt(i_x / area),
        second_moment_minor=i_y,
        elastic_modulus_minor=d * b**2 / 6.0,
        plastic_modulus_minor=d * b**2 / 4.0,
        radius_of_gyration_minor=sqrt(i_y / area),
        torsion_constant=long * short**3 * (1.0 / 3.0 - 0.21 * short / long * (1.0 - (short / long) ** 4 / 12.0)),
    )


def outline_moments(outline: Sequence[Point2]) -> tuple[float, float, float]:
    """Area and second moments about the centroid's own axes x and y of a polygon, by Green's theorem.

    Args:
        outline: Corners in order, unclosed [m].

    Example:
        >>> [round(value, 6) for value in outline_moments([(0, 0), (2, 0), (2, 3), (0, 3)])]
        [6.0, 4.5, 2.0]
    """
    x0, y0 = outline[0]
    local = [(x - x0, y - y0) for x, y in outline]
    area = first_x = first_y = i_x = i_y = 0.0
    for (xa, ya), (xb, yb) in zip(local, [*local[1:], local[0]], strict=True):
        cross = xa * yb - xb * ya
        area += cross / 2.0
        first_x += (xa + xb) * cross / 6.0
        first_y += (ya + yb) * cross / 6.0
        i_x += (ya**2 + ya * yb + yb**2) * cross / 12.0
        i_y += (xa**2 + xa * xb + xb**2) * cross / 12.0
    if area == 0.0:
        return 0.0, 0.0, 0.0
    return abs(area), abs(i_x - first_y**2 / area), abs(i_y - first_x**2 / area)


def _general(profile: ProfileShape) -> Section | None:
    """Tees, angles and general outlines."""
    outline = profile.outline or _outline(profile)
    if len(outline) < 3:
        return None
    area, i_x, i_y = outline_moments(outline)
    if area <= 0.0:
        return None
    name = "outline" if profile.kind is SectionKind.OTHER else profile.kind.value
    return Section(
        kind=profile.kind,
        designation=f"{name} {_mm(profile.depth)}x{_mm(profile.width)} mm",
        family="",
        depth=profile.depth,
        width=profile.width,
        flange_thickness=profile.flange_thickness or nan,
        web_thickness=profile.web_thickness or nan,
        area=area,
        mass_per_length=area * NOMINAL_STEEL_DENSITY,
        second_moment_major=i_x,
        elastic_modulus_major=nan,
        plastic_modulus_major=nan,
        radius_of_gyration_major=sqrt(i_x / area),
        second_moment_minor=i_y,
        elastic_modulus_minor=nan,
        plastic_modulus_minor=nan,
        radius_of_gyration_minor=sqrt(i_y / area),
    )


def _outline(profile: ProfileShape) -> tuple[Point2, ...]:
    """Outline of a parametric tee or angle, without fillets; empty where a thickness is missing."""
    d, b = profile.depth, profile.width
    t_f, t_w = profile.flange_thickness, profile.web_thickness
    if profile.kind is SectionKind.ANGLE and (t_f or t_w):
        t = t_f or t_w or 0.0
        return ((0.0, 0.0), (b, 0.0), (b, t), (t, t), (t, d), (0.0, d))
    if profile.kind is SectionKind.TEE and t_f and t_w:
        left, right, under = (b - t_w) / 2.0, (b + t_w) / 2.0, d - t_f
        return ((left, 0.0), (right, 0.0), (right, under), (b, under), (b, d), (0.0, d), (0.0, under), (left, under))
    return ()


def _rectangle(b: float, h: float, x: float, y: float) -> _Part:
    return _Part(area=b * h, x=x, y=y, i_x=b * h**3 / 12.0, i_y=h * b**3 / 12.0)


def _four(part: _Part) -> list[_Part]:
    """A part with its mirror images about both axes."""
    return [
        _Part(area=part.area, x=part.x * along, y=part.y * across, i_x=part.i_x, i_y=part.i_y)
        for along in (1.0, -1.0)
        for across in (1.0, -1.0)
    ]


def _sums(parts: Sequence[_Part]) -> tuple[float, float, float]:
    """Area and second moments about the common centroid."""
    area = sum(part.area for part in parts)
    x = sum(part.area * part.x for part in parts) / area
    y = sum(part.area * part.y for part in parts) / area
    i_x = sum(part.i_x + part.area * (part.y - y) ** 2 for part in parts)
    i_y = sum(part.i_y + part.area * (part.x - x) ** 2 for part in parts)
    return area, i_x, i_y


def _rounded(d: float, b: float, r: float) -> _Part:
    """A rectangle with rounded corners about its centre."""
    own = _QUARTER_INERTIA * r**4
    quarter = _Part(
        area=pi * r**2 / 4.0,
        x=b / 2.0 - r + _QUARTER_CENTROID * r,
        y=d / 2.0 - r + _QUARTER_CENTROID * r,
        i_x=own,
        i_y=own,
    )
    square = _Part(area=-(r**2), x=b / 2.0 - r / 2.0, y=d / 2.0 - r / 2.0, i_x=-(r**4) / 12.0, i_y=-(r**4) / 12.0)
    area, i_x, i_y = _sums([_rectangle(b, d, 0.0, 0.0), *_four(square), *_four(quarter)])
    return _Part(area=area, x=0.0, y=0.0, i_x=i_x, i_y=i_y)


def _rounded_plastic(d: float, b: float, r: float) -> float:
    """Plastic modulus across the depth of a rectangle with rounded corners."""
    missing = r**2 * (d / 2.0 - r / 2.0) - pi * r**2 / 4.0 * (d / 2.0 - r + _QUARTER_CENTROID * r)
    return b * d**2 / 4.0 - 4.0 * missing


def _mm(length: float) -> str:
    """A length in millimetres as a designation writes it."""
    return f"{round(length * 1000.0, 1):g}"


_MAKERS = {
    SectionKind.I_SHAPE: i_shape_section,
    SectionKind.CHANNEL: channel_section,
    SectionKind.RECTANGULAR_HOLLOW: rectangular_hollow_section,
    SectionKind.ROUND_HOLLOW: round_hollow_section,
    SectionKind.RECTANGLE: rectangle_section,
    SectionKind.ROUND: round_section,
}
