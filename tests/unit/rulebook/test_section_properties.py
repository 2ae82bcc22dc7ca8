"""Section properties from dimensions, against an outline with drawn fillets that is cut into thin strips."""

from __future__ import annotations

from math import isnan, pi, sqrt

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely import Point, Polygon, box, union_all
from shapely.affinity import rotate, translate

from ifcaudit.model.section import ProfileShape, SectionKind
from ifcaudit.rulebook.section_properties import (
    channel_section,
    i_shape_section,
    outline_moments,
    rectangular_hollow_section,
    section_from_dimensions,
)

STRIPS = 4000


def cut_into_strips(shape: Polygon) -> tuple[float, float, float]:
    """Second moment about the horizontal centroidal axis, the larger fibre distance, and the plastic modulus.

    The oracle: area by level from the overlap with thin strips, the plastic axis where half the area lies below.
    """
    low, high = shape.bounds[1], shape.bounds[3]
    edges = np.linspace(low, high, STRIPS + 1)
    levels, height = (edges[:-1] + edges[1:]) / 2, edges[1] - edges[0]
    west, east = shape.bounds[0] - 1, shape.bounds[2] + 1
    areas = np.array(
        [shape.intersection(box(west, level - height / 2, east, level + height / 2)).area for level in levels]
    )
    centroid = float((areas * levels).sum() / areas.sum())
    inertia = float((areas * ((levels - centroid) ** 2 + height**2 / 12)).sum())
    below = np.concatenate([[0.0], np.cumsum(areas)])
    axis = float(np.interp(below[-1] / 2, below, edges))
    plastic = float((areas * np.abs(levels - axis)).sum())
    return inertia, max(high - centroid, centroid - low), plastic


def fillet(x: float, y: float, r: float, along: int, up: int) -> Polygon:
    """The piece between an inner corner at (x, y) and a circle of radius r that touches both its legs."""
    square = box(min(x, x + along * r), min(y, y + up * r), max(x, x + along * r), max(y, y + up * r))
    return square.difference(Point(x + along * r, y + up * r).buffer(r, quad_segs=64))


def channel_outline(d: float, b: float, t_w: float, t_f: float, r: float) -> Polygon:
    """A channel with fillets, its web at the left."""
    return union_all(
        [
            box(0, 0, t_w, d),
            box(0, 0, b, t_f),
            box(0, d - t_f, b, d),
            fillet(t_w, t_f, r, 1, 1),
            fillet(t_w, d - t_f, r, 1, -1),
        ]
    )


@pytest.mark.parametrize(
    ("d", "b", "t_w", "t_f", "r"),
    [(200, 80, 6, 11, 13), (300, 100, 9.5, 15, 15), (100, 120, 5, 9, 6), (380, 60, 14, 12, 10)],
)
def test_channel_against_strips(d: float, b: float, t_w: float, t_f: float, r: float) -> None:
    """Area, I, S and Z about both axes agree with the strips, with the plastic axis in the web or in the flanges."""
    shape = channel_outline(d, b, t_w, t_f, r)
    section = channel_section(
        ProfileShape(
            kind=SectionKind.CHANNEL, depth=d, width=b, web_thickness=t_w, flange_thickness=t_f, fillet_radius=r
        )
    )
    assert section is not None
    inertia, fibre, plastic = cut_into_strips(shape)
    assert section.area == pytest.approx(shape.area, rel=1e-4)
    assert section.second_moment_major == pytest.approx(inertia, rel=1e-4)
    assert section.elastic_modulus_major == pytest.approx(inertia / fibre, rel=1e-4)
    assert section.plastic_modulus_major == pytest.approx(plastic, rel=1e-4)
    inertia, fibre, plastic = cut_into_strips(rotate(shape, 90, origin=(0, 0)))
    assert section.second_moment_minor == pytest.approx(inertia, rel=1e-4)
    assert section.elastic_modulus_minor == pytest.approx(inertia / fibre, rel=1e-4)
    assert section.plastic_modulus_minor == pytest.approx(plastic, rel=2e-3)  # fillets count as points there


def test_parallel_flange_channel_of_the_tables() -> None:
    """UPE200, h 200 b 80 t_w 6 t_f 11 r 13: A 29.0 cm², I_y 1910 cm⁴, W_pl,y 220 cm³, I_z 187 cm⁴ (from memory)."""
    section = channel_section(
        ProfileShape(
            kind=SectionKind.CHANNEL,
            depth=0.2,
            width=0.08,
            web_thickness=0.006,
            flange_thickness=0.011,
            fillet_radius=0.013,
        )
    )
    assert section is not None
    assert section.area * 1e4 == pytest.approx(29.0, rel=0.003)
    assert section.second_moment_major * 1e8 == pytest.approx(1910, rel=0.003)
    assert section.plastic_modulus_major * 1e6 == pytest.approx(220, rel=0.003)
    assert section.second_moment_minor * 1e8 == pytest.approx(187, rel=0.005)


def test_i_shape_against_strips() -> None:
    """HEA200 with its fillets agrees with the strips about both axes."""
    d, b, t_w, t_f, r = 190.0, 200.0, 6.5, 10.0, 18.0
    left, right = (b - t_w) / 2, (b + t_w) / 2
    corners = [(right, t_f, 1, 1), (right, d - t_f, 1, -1), (left, t_f, -1, 1), (left, d - t_f, -1, -1)]
    plates = [box(0, 0, b, t_f), box(0, d - t_f, b, d), box(left, 0, right, d)]
    shape = union_all([*plates, *(fillet(x, y, r, along, up) for x, y, along, up in corners)])
    section = i_shape_section(
        ProfileShape(
            kind=SectionKind.I_SHAPE, depth=d, width=b, web_thickness=t_w, flange_thickness=t_f, fillet_radius=r
        )
    )
    assert section is not None
    inertia, _, plastic = cut_into_strips(shape)
    assert section.second_moment_major == pytest.approx(inertia, rel=1e-4)
    assert section.plastic_modulus_major == pytest.approx(plastic, rel=1e-4)
    inertia, _, plastic = cut_into_strips(rotate(shape, 90, origin=(0, 0)))
    assert section.second_moment_minor == pytest.approx(inertia, rel=1e-4)
    assert section.plastic_modulus_minor == pytest.approx(plastic, rel=1e-4)


def test_rectangular_tube_against_strips() -> None:
    """A tube with round corners agrees with the strips about both axes."""
    d, b, t, r = 200.0, 100.0, 8.0, 16.0
    core = box(r, r, b - r, d - r)
    shape = core.buffer(r, quad_segs=128).difference(core.buffer(r - t, quad_segs=128))
    section = rectangular_hollow_section(
        ProfileShape(kind=SectionKind.RECTANGULAR_HOLLOW, depth=d, width=b, web_thickness=t, fillet_radius=r)
    )
    assert section is not None
    for outline, inertia_of, plastic_of in (
        (shape, section.second_moment_major, section.plastic_modulus_major),
        (rotate(shape, 90), section.second_moment_minor, section.plastic_modulus_minor),
    ):
        inertia, _, plastic = cut_into_strips(outline)
        assert inertia_of == pytest.approx(inertia, rel=1e-4)
        assert plastic_of == pytest.approx(plastic, rel=1e-4)


def test_round_tube_by_closed_form() -> None:
    """Tube of 200 with a wall of 10: A = pi (100² - 90²), I = pi/4 (100⁴ - 90⁴), Z = 4/3 (100³ - 90³), J = 2 I."""
    section = section_from_dimensions(
        ProfileShape(kind=SectionKind.ROUND_HOLLOW, depth=200, width=200, web_thickness=10)
    )
    assert section is not None
    assert section.area == pytest.approx(pi * (100**2 - 90**2))
    assert section.second_moment_major == pytest.approx(pi / 4 * (100**4 - 90**4))
    assert section.plastic_modulus_major == pytest.approx(4 / 3 * (100**3 - 90**3))
    assert section.torsion_constant == pytest.approx(2 * section.second_moment_minor)
    assert section.flange_slenderness == 20


def test_rectangle_by_closed_form() -> None:
    """70 × 170: S = b d²/6, Z = b d²/4; a square's J is 0.1406 a⁴ (Roark's Formulas, from memory)."""
    section = section_from_dimensions(ProfileShape(kind=SectionKind.RECTANGLE, depth=170, width=70))
    assert section is not None
    assert section.elastic_modulus_major == pytest.approx(70 * 170**2 / 6)
    assert section.plastic_modulus_minor == pytest.approx(170 * 70**2 / 4)
    square = section_from_dimensions(ProfileShape(kind=SectionKind.RECTANGLE, depth=2, width=2))
    assert square is not None
    assert square.torsion_constant == pytest.approx(0.1406 * 2**4, rel=0.002)


def test_solid_round_by_closed_form() -> None:
    """A round bar of diameter 2: I = pi/4, Z = 4/3."""
    section = section_from_dimensions(ProfileShape(kind=SectionKind.ROUND, depth=2, width=2))
    assert section is not None
    assert section.second_moment_major == pytest.approx(pi / 4)
    assert section.plastic_modulus_major == pytest.approx(4 / 3)


def test_tee_and_angle_by_parts() -> None:
    """A tee 100 × 100 × 10: centroid 28.684 under its top; an equal angle of legs 100 × 10 has equal second moments.

    Tee by hand: A = 1000 + 900; y = (1000 · 5 + 900 · 55) / 1900 = 28.684;
    I = 100 · 10³/12 + 1000 · 23.684² + 10 · 90³/12 + 900 · 26.316² = 1 800 044.
    """
    tee = section_from_dimensions(
        ProfileShape(kind=SectionKind.TEE, depth=100, width=100, web_thickness=10, flange_thickness=10)
    )
    assert tee is not None
    assert tee.area == pytest.approx(1900)
    assert tee.second_moment_major == pytest.approx(1_800_044, rel=1e-5)
    assert isnan(tee.plastic_modulus_major)
    angle = section_from_dimensions(ProfileShape(kind=SectionKind.ANGLE, depth=100, width=100, web_thickness=10))
    assert angle is not None
    assert angle.area == pytest.approx(1900)
    assert angle.second_moment_major == pytest.approx(angle.second_moment_minor)


@given(x=st.floats(-50, 50), y=st.floats(-50, 50), backwards=st.booleans())
def test_outline_moments_do_not_depend_on_place_or_direction(x: float, y: float, *, backwards: bool) -> None:
    """Moving an outline or walking it the other way round changes nothing; a quarter turn swaps the axes."""
    shape = Polygon([(0, 0), (4, 0), (4, 1), (1, 1), (1, 3), (0, 3)])
    corners = list(translate(shape, x, y).exterior.coords)[:-1]
    here = outline_moments(list(shape.exterior.coords)[:-1])
    there = outline_moments(corners[::-1] if backwards else corners)
    assert there == pytest.approx(here, rel=1e-9)
    area, i_x, i_y = outline_moments(list(rotate(shape, 90).exterior.coords)[:-1])
    assert (area, i_y, i_x) == pytest.approx(here, rel=1e-9)


@pytest.mark.parametrize(
    "profile",
    [
        ProfileShape(kind=SectionKind.I_SHAPE, depth=0.3, width=0.15),
        ProfileShape(kind=SectionKind.I_SHAPE, depth=0.3, width=0.15, flange_thickness=0.2, web_thickness=0.01),
        ProfileShape(kind=SectionKind.CHANNEL, depth=0.3, width=0.1, flange_thickness=0.01, web_thickness=0.1),
        ProfileShape(kind=SectionKind.RECTANGULAR_HOLLOW, depth=0.1, width=0.1, web_thickness=0.05),
        ProfileShape(kind=SectionKind.ROUND_HOLLOW, depth=0.1, width=0.1),
        ProfileShape(kind=SectionKind.TEE, depth=0.1, width=0.1),
        ProfileShape(kind=SectionKind.OTHER, depth=0.1, width=0.1, outline=((0.0, 0.0), (1.0, 1.0), (2.0, 2.0))),
    ],
)
def test_dimensions_that_make_no_section(profile: ProfileShape) -> None:
    """Missing or impossible thicknesses give no section instead of wrong numbers."""
    assert section_from_dimensions(profile) is None


def test_effective_radius_of_gyration() -> None:
    """r_ts² = sqrt(I_y C_w) / S_x (AISC 360-22 eq. F2-7); with parallel flanges about h_o I_y / (2 S_x) (user note)."""
    section = i_shape_section(
        ProfileShape(kind=SectionKind.I_SHAPE, depth=0.4, width=0.2, web_thickness=0.008, flange_thickness=0.014)
    )
    assert section is not None
    note = sqrt(section.second_moment_minor * section.flange_centroid_distance / (2 * section.elastic_modulus_major))
    assert section.effective_radius_of_gyration == pytest.approx(note, rel=0.002)
