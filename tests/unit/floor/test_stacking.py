"""Slabs lying on one another."""

from __future__ import annotations

import pytest
from helpers.scene import slab
from shapely import box

from ifcaudit.floor.stacking import stack_slabs


def test_finish_on_screed_on_concrete_is_one_floor() -> None:
    """Three touching slabs over the same area make one stack, whose lowest one spans."""
    plan = box(0, 0, 8, 6)
    slabs = [
        slab("finish", plan, bottom=4.22, thickness=0.02),
        slab("concrete", plan, bottom=4.0, thickness=0.15),
        slab("screed", plan, bottom=4.15, thickness=0.07),
    ]
    stacks, findings = stack_slabs(slabs, [40.0, 360.0, 140.0])
    assert [stack.slab.name for stack in stacks] == ["concrete"]
    assert sorted(resting.name for resting, _ in stacks[0].resting) == ["finish", "screed"]
    assert stacks[0].top == pytest.approx(4.24)
    assert findings == ()


def test_insulation_under_a_slab_hangs_from_it() -> None:
    """A light layer below a heavy slab is no structure."""
    plan = box(0, 0, 8, 6)
    slabs = [slab("insulation", plan, bottom=3.9, thickness=0.1), slab("concrete", plan, bottom=4.0)]
    stacks, _ = stack_slabs(slabs, [4.0, 360.0])
    assert [stack.slab.name for stack in stacks] == ["concrete"]
    assert stacks[0].bottom == pytest.approx(3.9)


def test_topping_over_two_planks_weighs_on_each_by_its_area() -> None:
    """A topping across several planks is shared out by plan area."""
    slabs = [
        slab("plank 1", box(0, 0, 6, 1.2)),
        slab("plank 2", box(0, 1.2, 6, 2.4)),
        slab("topping", box(0, 0, 6, 2.0), bottom=4.15, thickness=0.05),
    ]
    stacks, _ = stack_slabs(slabs, [360.0, 360.0, 120.0])
    parts = {stack.slab.name: sum(part.area for _, part in stack.resting) for stack in stacks}
    assert parts == {"plank 1": pytest.approx(7.2), "plank 2": pytest.approx(4.8)}


def test_neighbours_at_one_level_and_floors_apart_are_not_stacked() -> None:
    """Slabs side by side, or a storey apart, each span for themselves."""
    slabs = [slab("a", box(0, 0, 4, 4)), slab("b", box(4, 0, 8, 4)), slab("c", box(0, 0, 4, 4), bottom=7.0)]
    stacks, _ = stack_slabs(slabs, [360.0] * 3)
    assert [stack.slab.name for stack in stacks] == ["a", "b", "c"]
    assert all(not stack.resting for stack in stacks)


def test_part_that_overhangs_what_it_rests_on_is_reported() -> None:
    """The weight of a topping beyond the slab below it is not lost in silence."""
    slabs = [slab("slab", box(0, 0, 6, 4)), slab("topping", box(0, 0, 8, 4), bottom=4.15, thickness=0.05)]
    _, findings = stack_slabs(slabs, [360.0, 120.0])
    assert findings == (
        "slab topping: 8.0 m² lies beyond the slab it rests on; the weight of that part is not carried to any beam",
    )
