"""Flat pieces of solids: outlines, levels, slopes and thickness against hand calculation."""

from __future__ import annotations

from math import cos, radians, sin, sqrt, tan

import numpy as np
import pytest
from shapely import Polygon, box

from ifcaudit.reading.plates import Extrusion, Plate, group_plates, merge_plates, plates_of_extrusion, plates_of_mesh

FLAT = {"origin": (0.0, 0.0, 3.0), "x_axis": (1.0, 0.0, 0.0), "y_axis": (0.0, 1.0, 0.0)}
PITCH = radians(30.0)


def only(plates: tuple[Plate, ...]) -> Plate:
    """The single record expected."""
    assert len(plates) == 1
    return plates[0]


def prism_mesh(outline: list[tuple[float, float]], bottom: float, top: float) -> tuple[np.ndarray, np.ndarray]:
    """A convex vertical prism as outward triangles, written out so that the code under test is not its own judge."""
    count = len(outline)
    vertices = np.array([(x, y, bottom) for x, y in outline] + [(x, y, top) for x, y in outline])
    triangles = []
    for k in range(1, count - 1):
        triangles += [(0, k + 1, k), (count, count + k, count + k + 1)]
    for k in range(count):
        j = (k + 1) % count
        triangles += [(k, j, count + j), (k, count + j, count + k)]
    return vertices, np.array(triangles)


@pytest.mark.parametrize(("rise", "top", "bottom"), [(0.25, 3.25, 3.0), (-0.25, 3.0, 2.75)])
def test_a_level_outline_keeps_its_area_holes_and_levels_whichever_way_it_is_extruded(rise, top, bottom):
    """6 × 4 m less a hole of 1 × 2 m is 22 m²; the levels are the two faces."""
    profile = box(0, 0, 6, 4).difference(box(1, 1, 2, 3))
    plate = only(plates_of_extrusion(Extrusion(profile=profile, sweep=(0.0, 0.0, rise), **FLAT)))
    assert plate.plan.area == pytest.approx(22.0)
    assert (plate.top, plate.bottom, plate.thickness) == pytest.approx((top, bottom, 0.25))
    assert plate.gradient == (0.0, 0.0)


def test_a_roof_drawn_in_its_slope_and_extruded_vertically_has_the_plan_of_its_profile_times_the_cosine():
    """A 6 × 5 m profile at 30° covers 6 × 5 cos 30° in plan; 0.231 m vertical is 0.231 cos 30° thick."""
    roof = Extrusion(
        profile=box(0, 0, 6, 5),
        origin=(10.0, 0.0, 3.0),
        x_axis=(1.0, 0.0, 0.0),
        y_axis=(0.0, cos(PITCH), sin(PITCH)),
        sweep=(0.0, 0.0, 0.231),
    )
    plate = only(plates_of_extrusion(roof))
    assert plate.plan.area == pytest.approx(30.0 * cos(PITCH))
    assert plate.gradient == pytest.approx((0.0, tan(PITCH)))
    assert plate.thickness == pytest.approx(0.231 * cos(PITCH))
    # Its eaves line is the profile's first edge: underside at 3.0 above y = 0, and 2.5 m higher at the ridge.
    at_eaves, at_ridge = plate.rise_to((12.0, 0.0)), plate.rise_to((12.0, 5 * cos(PITCH)))
    assert plate.bottom + at_eaves == pytest.approx(3.0)
    assert plate.bottom + at_ridge == pytest.approx(3.0 + 5.0 * 0.5)
    assert plate.top - plate.bottom == pytest.approx(0.231)


def test_a_roof_extruded_square_to_its_slope_has_the_same_plan_area_and_its_depth_as_thickness():
    """Square edges: outline at mid-depth, so area × thickness ÷ cos 30° is the volume 6 × 5 × 0.2."""
    normal = (0.0, -sin(PITCH), cos(PITCH))
    roof = Extrusion(
        profile=box(0, 0, 6, 5),
        origin=(0.0, 0.0, 0.0),
        x_axis=(1.0, 0.0, 0.0),
        y_axis=(0.0, cos(PITCH), sin(PITCH)),
        sweep=tuple(0.2 * part for part in normal),
    )
    plate = only(plates_of_extrusion(roof))
    assert plate.thickness == pytest.approx(0.2)
    assert plate.plan.area * plate.surface_ratio * plate.thickness == pytest.approx(6.0)
    assert plate.top - plate.bottom == pytest.approx(0.2 / cos(PITCH))


def test_a_gable_section_extruded_sideways_gives_both_of_its_planes():
    """Section with planes at 45° over 2 × 3 m, 8 m long: two plates of 24 m² with opposite slopes."""
    section = Polygon([(0, 0), (3, 3), (6, 0), (6, 0.3), (3, 3.3), (0, 0.3)])
    solid = Extrusion(
        profile=section,
        origin=(0.0, 8.0, 5.0),
        x_axis=(1.0, 0.0, 0.0),
        y_axis=(0.0, 0.0, 1.0),
        sweep=(0.0, -8.0, 0.0),
    )
    plates = sorted(plates_of_extrusion(solid), key=lambda plate: plate.gradient[0])
    assert [plate.plan.area for plate in plates] == pytest.approx([24.0, 24.0])
    assert [plate.gradient for plate in plates] == [pytest.approx((-1.0, 0.0)), pytest.approx((1.0, 0.0))]
    assert [plate.thickness for plate in plates] == pytest.approx([0.3 / sqrt(2.0)] * 2)
    assert plates[1].top == pytest.approx(5.0 + 1.5 + 0.3)


def test_a_hollow_section_extruded_sideways_weighs_what_its_volume_weighs():
    """1.2 × 0.2 m plank with three 0.2 × 0.1 m cores: 0.18 m² over 1.2 m is 0.15 m of solid slab."""
    section = box(0, 0, 1.2, 0.2)
    for k in range(3):
        section = section.difference(box(0.1 + 0.4 * k, 0.05, 0.3 + 0.4 * k, 0.15))
    plank = Extrusion(
        profile=section,
        origin=(0.0, 0.0, 0.0),
        x_axis=(0.0, 1.0, 0.0),
        y_axis=(0.0, 0.0, 1.0),
        sweep=(6.0, 0.0, 0.0),
    )
    plate = only(plates_of_extrusion(plank))
    assert plate.plan.area == pytest.approx(7.2)
    assert plate.top == pytest.approx(0.2)
    assert plate.thickness == pytest.approx((1.2 * 0.2 - 3 * 0.2 * 0.1) / 1.2)


@pytest.mark.parametrize("inward", [False, True])
def test_a_mesh_gives_the_same_plate_as_the_solid_it_stands_for_even_turned_inside_out(inward):
    """A right triangle of 3 × 4 m: 6 m²; levels 1.0 and 1.2."""
    vertices, triangles = prism_mesh([(0, 0), (3, 0), (0, 4)], 1.0, 1.2)
    plate = only(plates_of_mesh(vertices, triangles[:, ::-1] if inward else triangles))
    assert plate.plan.area == pytest.approx(6.0)
    assert (plate.top, plate.bottom, plate.thickness) == pytest.approx((1.2, 1.0, 0.2))


def test_a_square_cut_sloping_mesh_is_one_plate_without_its_edges():
    """The eaves edge of a 0.2 m roof at 30° looks up too, but is no roof plane."""
    y_axis, normal = np.array([0.0, cos(PITCH), sin(PITCH)]), np.array([0.0, -sin(PITCH), cos(PITCH)])
    vertices, triangles = prism_mesh([(0, 0), (6, 0), (6, 5), (0, 5)], 0.0, 0.2)
    turned = vertices[:, :1] * [1.0, 0.0, 0.0] + vertices[:, 1:2] * y_axis + vertices[:, 2:] * normal
    plate = only(plates_of_mesh(turned, triangles))
    assert plate.plan.area == pytest.approx(30.0 * cos(PITCH))
    assert plate.gradient == pytest.approx((0.0, tan(PITCH)))
    assert plate.thickness == pytest.approx(0.2)


def test_an_open_surface_is_taken_whole_and_reported():
    """Without an underside nothing tells inside from outside: the outline is right, the thickness is not known."""
    vertices = np.array([(0.0, 0.0, 2.0), (2.0, 0.0, 2.0), (2.0, 2.0, 2.0), (0.0, 2.0, 2.0)])
    plate = only(plates_of_mesh(vertices, np.array([(0, 1, 2), (0, 2, 3)])))
    assert plate.plan.area == pytest.approx(4.0)
    assert plate.findings == (
        "its faces do not close or are not turned outward; outline and levels are those of the whole body",
    )


def test_a_vertical_clip_is_cut_in_plan_and_a_clear_one_changes_nothing():
    """6 × 4 m cut at x = 5 leaves 20 m²; cutting at x = 7 leaves all 24."""
    solid = {"profile": box(0, 0, 6, 4), "sweep": (0.0, 0.0, 0.2), **FLAT}
    cut = only(plates_of_extrusion(Extrusion(clips=(((5.0, 1.0, 0.0), (2.0, 0.0, 0.0)),), **solid)))
    assert cut.plan.area == pytest.approx(20.0)
    assert cut.plan.bounds == pytest.approx((0.0, 0.0, 5.0, 4.0))
    clear = only(plates_of_extrusion(Extrusion(clips=(((7.0, 1.0, 0.0), (1.0, 0.0, 0.0)),), **solid)))
    assert (clear.plan.area, clear.findings) == (pytest.approx(24.0), ())


def test_an_inclined_clip_that_touches_is_reported_and_one_that_is_clear_is_not():
    """What a sloping cut leaves is not followed; the outline is kept whole, and the engineer is told."""
    solid = {"profile": box(0, 0, 6, 4), "sweep": (0.0, 0.0, 0.2), **FLAT}
    touching = only(plates_of_extrusion(Extrusion(clips=(((5.0, 0.0, 3.1), (1.0, 0.0, 1.0)),), **solid)))
    assert touching.findings == ("it is cut by a plane or solid that is not followed; the uncut outline is used",)
    assert touching.plan.area == pytest.approx(24.0)
    clear = only(plates_of_extrusion(Extrusion(clips=(((5.0, 0.0, 9.1), (0.0, 0.1, 1.0)),), **solid)))
    assert clear.findings == ()


def level_plate(bottom: float, depth: float) -> Plate:
    """6 × 4 m."""
    placed = FLAT | {"origin": (0.0, 0.0, bottom)}
    return only(plates_of_extrusion(Extrusion(profile=box(0, 0, 6, 4), sweep=(0.0, 0.0, depth), **placed)))


def test_layers_drawn_as_bodies_add_up_and_a_body_drawn_twice_counts_once():
    """0.05 m on 0.20 m is 0.25 m; the same body twice is still 0.20 m."""
    lower, upper = level_plate(3.0, 0.2), level_plate(3.2, 0.05)
    assert group_plates([lower, upper]) == [[1, 0]]
    both = merge_plates([lower, upper])
    assert (both.plan.area, both.thickness, both.top, both.bottom) == pytest.approx((24.0, 0.25, 3.25, 3.0))
    assert merge_plates([lower, lower]).thickness == pytest.approx(0.2)


def test_bodies_a_storey_apart_stay_two_plates():
    """One element that holds the floors at 3 and at 6 m is not one floor 3.2 m thick."""
    assert group_plates([level_plate(3.0, 0.2), level_plate(6.0, 0.2)]) == [[1], [0]]
