"""Which beams and walls a slab rests on."""

from __future__ import annotations

import pytest
from helpers.scene import beam, column, slab, wall
from shapely import box

from ifcaudit.floor.bearing import BearingLine, bearing_lines, standing_walls
from ifcaudit.floor.framing import frame_beams
from ifcaudit.floor.stacking import stack_slabs

COLUMNS = [column("A", 0, 0), column("B", 8, 0)]


def lines(top: float, *, y: float = 0.0, height: float = 0.4, bottom: float = 4.0) -> tuple[BearingLine, ...]:
    """Bearing lines of a slab over 0..8 x -3..3 on one beam along y, its top at the level given."""
    framed = frame_beams([beam("G", (0, y), (8, y), top=top, height=height)], COLUMNS)
    stacks, _ = stack_slabs([slab("S", box(0, -3, 8, 3), bottom=bottom)], [360.0])
    return bearing_lines(stacks, framed, [])[0]


@pytest.mark.parametrize(
    ("top", "carries"),
    [
        pytest.param(4.0, True, id="slab on the flange"),
        pytest.param(3.99, True, id="10 mm of grout"),
        pytest.param(4.12, True, id="flange cast into the slab"),
        pytest.param(4.15, True, id="top flush with the slab"),
        pytest.param(3.85, False, id="150 mm below the slab"),
        pytest.param(4.60, False, id="wholly above the slab"),
    ],
)
def test_levels_decide_whether_a_beam_carries_the_slab(top: float, *, carries: bool) -> None:
    """A beam carries a slab that lies on its flange or around it, not one that it stays clear of."""
    assert bool(lines(top)) is carries


def test_gap_under_the_slab_is_remarked() -> None:
    """A contact across 80 mm is taken, and said."""
    (line,) = lines(3.92)
    assert line.finding == "its top lies 80 mm below the underside of slab S; taken as carrying it"
    assert not line.on_flange  # load passes through packs, but nothing holds the flange sideways
    assert line.covered == ()


def test_slab_on_the_bottom_flange_loads_the_beam_but_does_not_hold_its_top() -> None:
    """Units between the flanges leave the compression flange free."""
    (line,) = lines(4.30, height=0.35, bottom=3.96)
    assert not line.on_flange
    assert line.covered == ()


def test_edge_beam_just_outside_the_slab_carries_its_edge() -> None:
    """A beam whose flange stops 0.2 m beside the slab edge is a support line."""
    (line,) = lines(4.0, y=3.25)
    assert line.line.global_id == "G"


def test_covered_stretch_stops_at_an_opening() -> None:
    """Where the slab is cut out over a beam, the flange is not held."""
    framed = frame_beams([beam("G", (0, 0), (8, 0))], COLUMNS)
    plan = box(0, -3, 8, 3).difference(box(5, -1, 7, 1))
    stacks, _ = stack_slabs([slab("S", plan)], [360.0])
    ((line,),) = bearing_lines(stacks, framed, [])
    # The opening runs from 5 to 7 m; half the flange (0.075) and 0.03 m of tolerance are taken off either side.
    assert line.covered == (pytest.approx((0.0, 5.105)), pytest.approx((6.895, 8.0)))


def test_wall_below_carries_a_slab_and_a_thin_partition_does_not() -> None:
    """Walls of 200 mm and of exactly 100 mm up to the underside are support lines, an 80 mm partition is none."""
    stacks, _ = stack_slabs([slab("S", box(0, -3, 8, 3))], [360.0])
    walls = [
        wall("W", (0, 0), (8, 0), top=4.0),
        wall("T", (0, 2.3), (8, 2.3), top=4.0, thickness=0.1),
        wall("P", (0, 1), (8, 1), top=4.0, thickness=0.08),
    ]
    assert [line.line.global_id for line in bearing_lines(stacks, [], walls)[0]] == ["T", "W"]


def test_walls_standing_on_the_floor_are_counted_and_those_below_or_above_are_not() -> None:
    """Only a wall whose foot is at the floor's top stands on it."""
    stacks, _ = stack_slabs([slab("S", box(0, -3, 8, 3))], [360.0])
    walls = [
        wall("on it", (1, 1), (4, 1), bottom=4.15, top=7.0),
        wall("below", (1, -1), (4, -1), bottom=0.0, top=4.0),
        wall("next storey", (1, -2), (4, -2), bottom=7.5, top=10.0),
    ]
    assert standing_walls(stacks, walls) == (1,)
