"""Sharing a slab out among the lines it rests on, by hand calculation and by invariants."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from math import cos, hypot, pi, radians, sin

import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st
from shapely import MultiPolygon, Polygon, box
from shapely.affinity import rotate, scale, translate

from ifcaudit.floor.line_load import line_load
from ifcaudit.floor.tributary import lay_out_slab
from ifcaudit.model.framing import Carrier, SlabBehaviour, SlabLayout, SupportLine

ONE_WAY, TWO_WAY = SlabBehaviour(), SlabBehaviour(two_way=True)


def line(name: str, x0: float, y0: float, x1: float, y1: float, half_width: float = 0.0) -> SupportLine:
    """A support line of a beam."""
    return SupportLine(global_id=name, carrier=Carrier.BEAM, start=(x0, y0), end=(x1, y1), half_width=half_width)


def areas(layout: SlabLayout) -> dict[str, float]:
    """Area given to each support."""
    found: dict[str, float] = defaultdict(float)
    for strip in layout.strips:
        found[strip.support_id] += strip.polygon.area
    return dict(found)


def lay_out(
    plan: Polygon | MultiPolygon, lines: Sequence[SupportLine], behaviour: SlabBehaviour = ONE_WAY
) -> SlabLayout:
    """Lay out and check the invariant: strips and unassigned parts cover the plan once."""
    layout = lay_out_slab("S", plan, lines, behaviour)
    parts = [strip.polygon for strip in layout.strips] + list(layout.unassigned)
    assert sum(part.area for part in parts) == pytest.approx(plan.area, abs=1e-6)
    assert shapely.unary_union(parts).area == pytest.approx(plan.area, rel=1e-6)
    return layout


def frame(width: float, depth: float, joists: Sequence[float]) -> list[SupportLine]:
    """Girders G0 and G1 along x, joists along y at the stations given."""
    girders = [line("G0", 0, 0, width, 0), line("G1", 0, depth, width, depth)]
    return girders + [line(f"J{x:g}", x, 0, x, depth) for x in joists]


def test_joists_take_half_the_spacing_on_either_side_and_girders_nothing_directly() -> None:
    """9 m by 6 m, joists at 0, 3, 6, 9: the slab spans 3 m; edge joists 1.5 x 6, inner ones 3 x 6."""
    assert areas(lay_out(box(0, 0, 9, 6), frame(9, 6, (0, 3, 6, 9)))) == pytest.approx(
        {"J0": 9.0, "J3": 18.0, "J6": 18.0, "J9": 9.0}
    )


def test_without_joists_the_slab_spans_between_the_girders() -> None:
    """With two lines only, each takes half."""
    assert areas(lay_out(box(0, 0, 9, 6), frame(9, 6, ()))) == pytest.approx({"G0": 27.0, "G1": 27.0})


def test_stated_span_direction_is_followed() -> None:
    """A deck that runs along the joists loads the girders."""
    behaviour = SlabBehaviour(span_direction=(0.0, 1.0))
    assert areas(lay_out(box(0, 0, 9, 6), frame(9, 6, (0, 9)), behaviour)) == pytest.approx({"G0": 27.0, "G1": 27.0})


def test_slab_beyond_its_edge_beam_overhangs_and_loads_it_alone() -> None:
    """0.8 m beyond the last joist go to it: 0.8 x 6, flagged, and remarked because it is wide."""
    layout = lay_out(box(0, 0, 9.8, 6), frame(9, 6, (0, 3, 6, 9)))
    assert areas(layout)["J9"] == pytest.approx(9.0 + 4.8)
    assert sum(strip.polygon.area for strip in layout.strips if strip.overhang) == pytest.approx(4.8)
    assert layout.findings == ("4.8 m² overhang: they have one support only, which is given all their load",)


def test_slab_a_little_past_the_ends_of_its_beams_still_rests_on_them() -> None:
    """Two beams 8 m long under a slab of 8.6 m: each takes half of all of it."""
    lines = [line("A", 0.3, 0, 8.3, 0), line("B", 0.3, 3, 8.3, 3)]
    assert areas(lay_out(box(0, 0, 8.6, 3), lines)) == pytest.approx({"A": 12.9, "B": 12.9})


def test_narrow_overhang_loads_the_joist_along_it_not_the_girders_across() -> None:
    """0.3 m of slab beyond the last joist rest on that joist, although the girders' lines reach nearly as far."""
    assert areas(lay_out(box(0, 0, 9.3, 6), frame(9, 6, (0, 3, 6, 9))))["J9"] == pytest.approx(9.0 + 1.8)


def test_edge_beam_beside_the_slab_still_carries_its_edge() -> None:
    """A beam 0.2 m outside the edge holds it."""
    lines = [line("A", -0.2, 0, -0.2, 6, 0.1), line("B", 4, 0, 4, 6, 0.1)]
    assert areas(lay_out(box(0, 0, 4, 6), lines)) == pytest.approx({"A": 12.0, "B": 12.0})


def test_framed_opening_passes_the_strips_to_its_trimmers() -> None:
    """An opening 2 to 4 m by 1 to 3 m between beams at x = 0 and 6, with headers at y = 1 and 3 and a tail beam.

    In the band beside the opening the slab spans from A to the trimmer at x = 2 and from the one at x = 4 to B.
    """
    plan = box(0, 0, 6, 4).difference(box(2, 1, 4, 3))
    lines = [line("A", 0, 0, 0, 4), line("B", 6, 0, 6, 4), line("T2", 2, 0, 2, 4), line("T4", 4, 0, 4, 4)]
    found = areas(lay_out(plan, lines))
    # A: half of 2 m over 4 m = 4. T2: the same, and half of the 2 m between the trimmers beside the opening (2 x 1 m).
    assert found == pytest.approx({"A": 4.0, "B": 4.0, "T2": 4.0 + 2.0, "T4": 4.0 + 2.0})


def test_unframed_opening_leaves_overhangs_from_the_supports() -> None:
    """Without trimmers the strips that end at the opening have one support, which takes all of them."""
    plan = box(0, 0, 6, 4).difference(box(2, 1, 4, 3))
    layout = lay_out(plan, [line("A", 0, 0, 0, 4), line("B", 6, 0, 6, 4)])
    # Above and below: 6 m by 2 m shared. Beside: 2 m by 2 m to each.
    assert areas(layout) == pytest.approx({"A": 6.0 + 4.0, "B": 6.0 + 4.0})
    assert sum(strip.polygon.area for strip in layout.strips if strip.overhang) == pytest.approx(8.0)


def test_strips_that_end_at_a_skewed_free_edge_go_to_their_one_support() -> None:
    """Between beams at x = 0 (3 m long) and x = 4 (5 m long) under a free edge rising from 3 to 5 m.

    Up to y = 3 strips of 4 m are shared, 6 m² each; the triangle above, 4 x 2 / 2, rests on the longer beam alone.
    """
    plan = Polygon([(0, 0), (4, 0), (4, 5), (0, 3)])
    assert areas(lay_out(plan, [line("A", 0, 0, 0, 3), line("B", 4, 0, 4, 5)])) == pytest.approx({"A": 6.0, "B": 10.0})


def test_beams_that_are_not_parallel_share_by_the_mid_line() -> None:
    """Between a beam on x = 0 and one from (3, 0) to (5, 4), strips of 3 to 5 m are halved: 4 m x 4 m / 2."""
    plan = Polygon([(0, 0), (3, 0), (5, 4), (0, 4)])
    found = areas(lay_out(plan, [line("A", 0, 0, 0, 4), line("B", 3, 0, 5, 4)], SlabBehaviour(span_direction=(1, 0))))
    assert found == pytest.approx({"A": 8.0, "B": 8.0})


def test_openings_do_not_turn_the_span_of_a_panel() -> None:
    """Two openings in a 3 m by 6 m panel leave an island between them: all the rest still spans the 3 m.

    Of 16.4 m² the island of 1.2 x 2 rests on nothing; the joists share the rest, the girders get none.
    """
    plan = box(3, 0, 6, 6).difference(box(3.5, 2, 3.9, 4)).difference(box(5.1, 2, 5.5, 4))
    layout = lay_out(plan, frame(9, 6, (0, 3, 6, 9)))
    assert areas(layout) == pytest.approx({"J3": 7.0, "J6": 7.0})
    assert layout.findings[0] == "2.4 m² span between free edges and rest on no beam or wall"


def test_slab_on_nothing_is_unassigned_with_a_finding() -> None:
    """No support, no strip."""
    layout = lay_out(box(0, 0, 4, 5), [])
    assert sum(part.area for part in layout.unassigned) == pytest.approx(20.0)
    assert layout.findings == ("20.0 m² rest on no beam or wall",)


def test_outline_out_of_all_proportion_is_unassigned_with_a_finding() -> None:
    """Lines whose two ends fall together beside coordinates of 1e30 m cut nothing; the audit goes on."""
    layout = lay_out_slab("S", box(0, 0, 1e30, 6), [line("A", 0, 0, 0, 6), line("B", 4, 0, 4, 6)], ONE_WAY)
    assert layout.strips == ()
    assert sum(part.area for part in layout.unassigned) == pytest.approx(6e30)
    assert layout.findings


def test_two_way_square_gives_each_side_a_quarter() -> None:
    """The 45-degree pattern on a square: four triangles of s²/4."""
    lines = [*frame(6, 6, (0, 6))]
    layout = lay_out(box(0, 0, 6, 6), lines, TWO_WAY)
    assert areas(layout) == pytest.approx(dict.fromkeys(("G0", "G1", "J0", "J6"), 9.0))
    assert all(strip.two_way for strip in layout.strips)


def test_two_way_rectangle_gives_triangles_and_trapezoids() -> None:
    """Short side a = 4, long side b = 6: triangles a²/4 = 4, trapezoids a(2b - a)/4 = 8."""
    found = areas(lay_out(box(0, 0, 6, 4), frame(6, 4, (0, 6)), TWO_WAY))
    assert found == pytest.approx({"J0": 4.0, "J6": 4.0, "G0": 8.0, "G1": 8.0})


def test_long_panel_spans_one_way_although_it_may_span_two() -> None:
    """Long over short 2.25: one-way across the short span."""
    assert areas(lay_out(box(0, 0, 9, 4), frame(9, 4, (0, 9)), TWO_WAY)) == pytest.approx({"G0": 18.0, "G1": 18.0})


def test_panel_with_a_free_side_spans_one_way() -> None:
    """Three held sides make no two-way panel."""
    found = areas(lay_out(box(0, 0, 6, 5), [*frame(6, 5, (0,))], TWO_WAY))
    assert found == pytest.approx({"G0": 15.0, "G1": 15.0})


def test_panel_held_along_part_of_a_side_spans_one_way() -> None:
    """A beam under half of the upper edge leaves the perimeter 86 % held: no two-way action."""
    lines = [line("G0", 0, 0, 6, 0), line("G1", 0, 5, 3, 5), line("J0", 0, 0, 0, 5), line("J6", 6, 0, 6, 5)]
    layout = lay_out(box(0, 0, 6, 5), lines, TWO_WAY)
    assert not any(strip.two_way for strip in layout.strips)


def test_beam_that_stops_at_a_column_amid_the_slab_still_divides_it() -> None:
    """A middle beam reaching half-way takes the slab beside it; what lies beyond its end goes to its end."""
    lines = [line("A", 0, 0, 0, 6), line("B", 6, 0, 6, 6), line("M", 3, 0, 3, 3)]
    found = areas(lay_out(box(0, 0, 6, 6), lines))
    assert found == pytest.approx({"A": 9.0, "B": 9.0, "M": 18.0})


def test_two_beams_in_one_line_take_the_slab_along_their_own_length() -> None:
    """A joint at y = 2 divides the line's 2 x 6 m."""
    lines = [line("A", 0, 0, 0, 6), line("M1", 4, 0, 4, 2), line("M2", 4, 2, 4, 6)]
    assert areas(lay_out(box(0, 0, 4, 6), lines)) == pytest.approx({"A": 12.0, "M1": 4.0, "M2": 8.0})


PLANS = st.tuples(st.floats(4, 15), st.floats(4, 12), st.lists(st.floats(0.15, 0.85), min_size=0, max_size=3))


def _floor(width: float, depth: float, parts: Sequence[float]) -> tuple[Polygon, list[SupportLine]]:
    stations = [0.0]
    for part in sorted(parts):
        if part * width - stations[-1] > 0.8:
            stations.append(part * width)
    plan = box(0, 0, width, depth).difference(box(0.3 * width, 0.4 * depth, 0.4 * width, 0.6 * depth))
    return plan, frame(width, depth, (*stations, width))


def _turned(plan: Polygon, lines: Sequence[SupportLine], angle: float, dx: float, dy: float, *, mirror: bool) -> tuple[
    Polygon, list[SupportLine]
]:  # fmt: skip
    sign = -1.0 if mirror else 1.0

    def move(x: float, y: float) -> tuple[float, float]:
        x = sign * x
        return x * cos(angle) - y * sin(angle) + dx, x * sin(angle) + y * cos(angle) + dy

    turned = translate(rotate(scale(plan, sign, 1.0, origin=(0, 0)), angle, origin=(0, 0), use_radians=True), dx, dy)
    moved = [
        SupportLine(
            global_id=item.global_id,
            carrier=item.carrier,
            start=move(*item.start),
            end=move(*item.end),
            half_width=item.half_width,
        )
        for item in lines
    ]
    return turned, moved


@settings(max_examples=40, deadline=None)
@given(floor=PLANS, angle=st.floats(0.05, 2 * pi), offset=st.tuples(st.floats(-9e5, 9e5), st.floats(-6e6, 6e6)),
       mirror=st.booleans())  # fmt: skip
def test_shares_do_not_depend_on_orientation_or_place(
    floor: tuple[float, float, list[float]], angle: float, offset: tuple[float, float], *, mirror: bool
) -> None:
    """Turning, moving to survey coordinates and mirroring leave every support its area."""
    plan, lines = _floor(*floor)
    before = areas(lay_out(plan, lines))
    after = areas(lay_out_slab("S", *_turned(plan, lines, angle, *offset, mirror=mirror), ONE_WAY))
    # 6e6 m leaves 1e-9 m of a double; over 15 m lines that is far below 1e-5 m².
    assert after == pytest.approx(before, abs=1e-5, rel=1e-6)


@settings(max_examples=40, deadline=None)
@given(floor=PLANS)
def test_splitting_a_slab_along_a_support_changes_no_share(floor: tuple[float, float, list[float]]) -> None:
    """Two pieces meeting over a joist load the same supports as one slab."""
    width, depth, parts = floor
    plan, lines = _floor(width, depth, parts)
    joints = [item.start[0] for item in lines if item.global_id.startswith("J")][1:-1]
    whole = areas(lay_out(plan, lines))
    pieces: dict[str, float] = defaultdict(float)
    for first, last in zip([0.0, *joints], [*joints, width], strict=True):
        common = plan.intersection(box(first, 0, last, depth))
        # A cut along an edge of the opening also returns that edge, which is no part of a slab.
        piece = shapely.union_all([part for part in shapely.get_parts(common) if isinstance(part, Polygon)])
        for name, area in areas(lay_out(piece, lines)).items():
            pieces[name] += area
    assert dict(pieces) == pytest.approx(whole, rel=1e-6, abs=1e-6)


@settings(max_examples=40, deadline=None)
@given(floor=PLANS, tilt=st.floats(-40, 40))
def test_line_load_of_a_strip_stands_for_its_area(floor: tuple[float, float, list[float]], tilt: float) -> None:
    """Whatever direction a strip's load travels in, the line load adds up to its area."""
    plan, lines = _floor(*floor)
    by_name = {item.global_id: item for item in lines}
    for strip in lay_out(plan, lines).strips:
        angle = radians(tilt)
        dx, dy = strip.direction
        direction = (dx * cos(angle) - dy * sin(angle), dx * sin(angle) + dy * cos(angle))
        assert hypot(*direction) == pytest.approx(1.0)
        spread = line_load(strip.polygon, direction, by_name[strip.support_id])
        assert spread.area == pytest.approx(strip.polygon.area, rel=1e-6)
        assert (spread.widths >= 0.0).all()
