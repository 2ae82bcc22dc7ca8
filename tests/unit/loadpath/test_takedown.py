"""Taking loads down, on scenes small enough to add up by hand."""

from __future__ import annotations

from dataclasses import replace

import pytest
from helpers.scene import beam, column, slab, wall
from helpers.takedowns import GRAVITY, bay, loading, run
from shapely import box

from ifcaudit.model.loads import LoadCase


def test_joist_carries_its_spacing_and_girder_half_of_each_joist() -> None:
    """Hand calculation on one bay.

    Inner joist: 3 m x 6 m = 18 m² of slab; live 18 x 3 = 54 kN; dead 18 x (0.15 x 2400 g + 500 Pa) + own weight.
    Edge girder: two joists bring half of 18 m² each; tributary width is half of 6 m.
    """
    result = run(*bay())
    inner = loading(result, "J3")
    assert inner.tributary_area == pytest.approx(18.0)
    assert inner.tributary_width == pytest.approx(3.0)
    assert inner.totals[LoadCase.LIVE] == pytest.approx(54e3)
    own = 26 * 0.45359237 / 0.3048 * GRAVITY * 6.0  # 26 lb/ft over 6 m
    assert inner.totals[LoadCase.DEAD] == pytest.approx(18.0 * (0.15 * 2400 * GRAVITY + 500.0) + own, rel=1e-3)
    girder = loading(result, "G0")
    assert girder.tributary_width == pytest.approx(3.0)
    assert girder.tributary_area == pytest.approx(18.0)
    assert girder.totals[LoadCase.LIVE] == pytest.approx(54e3)
    assert girder.loads is not None
    assert sorted(girder.loads.point_positions.tolist()) == pytest.approx([3.0, 6.0])


def test_edge_joist_on_a_column_line_has_half_the_width() -> None:
    """An edge joist carries half a spacing."""
    assert loading(run(*bay()), "J0").tributary_width == pytest.approx(1.5)


def test_all_load_applied_reaches_the_supports() -> None:
    """Slab, allowance, live load and self-weight arrive at the four columns, and all of the area is shared out."""
    balance = run(*bay()).balance
    assert balance.live_applied == pytest.approx(54.0 * 3e3)
    assert balance.live_reaching_supports == pytest.approx(balance.live_applied)
    assert balance.dead_reaching_supports == pytest.approx(balance.dead_applied)
    assert balance.unassigned_area == pytest.approx(0.0, abs=1e-9)
    assert balance.slab_area == pytest.approx(54.0)


def test_load_on_an_end_that_nothing_carries_is_stranded_and_the_carrier_is_doubtful() -> None:
    """A joist with a free end is not analysed; the girder that carries it cannot be called adequate."""
    beams, columns, slabs = bay()
    beams = [
        replace(item, start=(3.0, 0.02, 3.8), end=(3.0, 4.0, 3.8)) if item.name == "J3" else item for item in beams
    ]
    result = run(beams, columns, slabs)
    joist, girder = loading(result, "J3"), loading(result, "G0")
    assert joist.loads is None
    assert joist.problem.startswith("nothing carries its end (nearest is")
    assert any("J3" in reason for reason in girder.uncertain)
    balance = result.balance
    assert balance.live_unsupported > 0.0
    assert balance.live_applied == pytest.approx(balance.live_reaching_supports + balance.live_unsupported)


def test_wall_carrying_a_slab_edge_takes_its_share_to_the_ground() -> None:
    """Replacing the edge joist by a wall leaves the balance closed."""
    beams, columns, slabs = bay()
    beams = [item for item in beams if item.name != "J0"]
    result = run(beams, [*columns, wall("W", (0, 0.3), (0, 5.7), top=4.0)], slabs)
    assert result.balance.live_reaching_supports == pytest.approx(result.balance.live_applied)
    assert loading(result, "J3").tributary_width == pytest.approx(3.0, rel=0.06)


def test_topping_on_part_of_the_slab_weighs_on_the_beams_below_it_only() -> None:
    """A 50 mm topping over the first bay weighs 0.05 x 2400 g on the joists of that bay.

    It covers x from 0 to 3: J0 and J3 get 1.5 m x 6 m each, J6 none.
    """
    beams, columns, slabs = bay()
    plain = run(beams, columns, slabs)
    topped = run(beams, columns, [*slabs, slab("T", box(0, 0, 3, 6), bottom=4.15, thickness=0.05)])
    extra = {
        name: loading(topped, name).totals[LoadCase.DEAD] - loading(plain, name).totals[LoadCase.DEAD]
        for name in ("J3", "J6")
    }
    assert extra["J3"] == pytest.approx(9.0 * 0.05 * 2400 * GRAVITY)
    assert extra["J6"] == pytest.approx(0.0, abs=1e-6)
    assert topped.balance.dead_reaching_supports == pytest.approx(topped.balance.dead_applied)


def test_slab_on_the_flange_braces_all_along_and_a_bare_girder_is_braced_where_joists_frame_in() -> None:
    """Bracing follows the slab; without one, the framing points."""
    assert loading(run(*bay()), "G0").continuously_braced
    beams, columns, slabs = bay(box(0, 0.6, 9, 5.4))
    girder = loading(run(beams, columns, slabs), "G0")
    assert not girder.continuously_braced
    assert girder.braced == pytest.approx((3.0, 6.0))


def test_beams_that_carry_each_other_in_a_ring_are_named() -> None:
    """Four beams, each resting on the next, have no beginning: a finding, not an endless loop."""
    ring = [
        beam("N", (0.58, 4.0), (6.0, 4.0)),
        beam("E", (4.0, 3.92), (4.0, -2.0)),
        beam("S", (3.92, 1.0), (-2.0, 1.0)),
        beam("W", (0.5, 1.08), (0.5, 6.0)),
    ]
    supports = [column("a", 6, 4), column("b", 4, -2), column("c", -2, 1), column("d", 0.5, 6)]
    result = run(ring, supports, [slab("S1", box(0.5, 1.0, 4.0, 4.0))])
    assert all("loop" in item.problem for item in result.beams)
    balance = result.balance
    assert balance.live_applied == pytest.approx(balance.live_reaching_supports + balance.live_unsupported)
