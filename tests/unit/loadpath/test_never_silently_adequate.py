"""Whatever was not seen, or is not followed, keeps a beam from being called adequate; it never hides a failure."""

from __future__ import annotations

from dataclasses import replace

import pytest
from helpers.scene import beam, column, slab, wall
from helpers.takedowns import bay, loading, rules, run, verdicts
from shapely import box

from ifcaudit.floor.stacking import stack_slabs
from ifcaudit.loadpath.area_loads import area_load
from ifcaudit.loadpath.reduction import reduction_factor
from ifcaudit.model.audit import Status
from ifcaudit.model.loads import LoadCase
from ifcaudit.provenance import Source, Sourced
from ifcaudit.rulebook.loader import load_rules

LIGHT = load_rules("us-lrfd", live_load=500.0, superimposed_dead=500.0)


def test_plain_bay_is_adequate() -> None:
    """The bay the other tests disturb is adequate throughout, so that each disturbance is what changes a verdict."""
    assert {item.status for item in verdicts(run(*bay(), rule_set=LIGHT), LIGHT).values()} == {Status.ADEQUATE}


def test_beam_under_a_column_is_not_checked() -> None:
    """A transfer's load is not taken down."""
    beams, columns, slabs = bay()
    found = verdicts(run(beams, [*columns, column("T", 3, 3, bottom=4.15, top=7.5)], slabs))["J3"]
    assert found.status is Status.NOT_CHECKED
    assert found.reason == "column T stands on it: its load is not taken down; check this transfer by hand"


def test_beam_along_a_wall_is_not_checked() -> None:
    """A beam in a wall does not span freely."""
    beams, columns, slabs = bay()
    found = verdicts(run(beams, [*columns, wall("W", (3, 1), (3, 5), top=4.5)], slabs))["J3"]
    assert found.status is Status.NOT_CHECKED
    assert found.reason == ("lies along wall W: it does not span freely, and openings below it are not analysed")


def test_doubt_about_a_joist_reaches_the_girders_that_carry_it() -> None:
    """A joist whose loads may be incomplete is not checked, nor are its girders; the next joist is not touched."""
    doubts = {"J3": ("slab X could not be read (no face)",)}
    found = verdicts(run(*bay(), rule_set=LIGHT, doubts=doubts), LIGHT)
    assert found["J3"].status is Status.NOT_CHECKED
    assert found["J3"].reason.startswith(
        "its loads may be incomplete: slab X could not be read (no face); for the loads found, "
    )
    for girder in ("G0", "G6"):
        assert found[girder].status is Status.NOT_CHECKED
        assert "it carries J3, whose loads may be incomplete" in found[girder].findings
    assert found["J6"].status is Status.ADEQUATE


def test_doubt_never_hides_a_failure() -> None:
    """A joist that is too small for the loads that were found stays inadequate."""
    heavy = load_rules("us-lrfd", live_load=30000.0)
    found = verdicts(run(*bay(), rule_set=heavy, doubts={"J3": ("something was not read",)}), heavy)["J3"]
    assert found.status is Status.INADEQUATE
    assert "something was not read" in found.findings


def test_girder_of_a_joist_of_unknown_weight_is_not_checked() -> None:
    """Without a material a joist has no weight that could be passed on."""
    result = run(*bay(), rule_set=LIGHT, unknown=["J3"])
    assert "it carries J3, whose weight is not known" in loading(result, "G0").uncertain
    found = verdicts(result, LIGHT)
    assert found["G0"].status is Status.NOT_CHECKED
    assert found["J3"].reason == "its section or material is not known: name them in the model"


def test_beam_without_floor_load_is_not_checked() -> None:
    """No slab rests on it: it is not adequate for nothing."""
    found = verdicts(run([beam("L", (0, 0), (6, 0))], [column("A", 0, 0), column("B", 6, 0)], []))["L"]
    assert found.status is Status.NOT_CHECKED
    assert found.reason == (
        "no floor load reaches it: no slab rests on it or on beams that it carries; "
        "add the slab to the model, or check it for its own loads by hand"
    )


def test_beams_around_a_slab_part_on_nothing_are_not_called_adequate() -> None:
    """Between two openings 2.4 m² span from free edge to free edge: the joists beside them may have to carry them."""
    plan = box(0, 0, 9, 6).difference(box(3.5, 2, 3.9, 4)).difference(box(5.1, 2, 5.5, 4))
    result = run(*bay(plan), rule_set=LIGHT)
    assert result.balance.unassigned_area == pytest.approx(2.4)
    found = verdicts(result, LIGHT)
    assert found["J3"].status is found["J6"].status is Status.NOT_CHECKED
    assert "2.4 m² of slab S beside it rests on nothing" in found["J3"].findings
    assert found["J0"].status is Status.ADEQUATE


def test_weight_of_a_sloping_slab_acts_per_surface_and_live_load_per_plan() -> None:
    """A slab rising 3 in 4 has 5/4 of the surface: 0.15 x 2400 g x 1.25, and the live load of the plan."""
    steep = replace(slab("S", box(0, 0, 4, 4)), gradient=(0.75, 0.0))

    def density(_: object) -> Sourced[float]:
        return Sourced(value=2400.0, source=Source.MODEL)

    (stack,), _ = stack_slabs([steep], [360.0])
    load = area_load(stack, rules(), density)
    assert load.pressures[LoadCase.DEAD] == pytest.approx(0.15 * 2400.0 * 9.80665 * 1.25 + 500.0)
    assert load.pressures[LoadCase.LIVE] == pytest.approx(3000.0)


@pytest.mark.parametrize(("live", "reduced"), [(4788.0, True), (4900.0, False)])
def test_heavy_live_load_is_not_reduced(live: float, *, reduced: bool) -> None:
    """ASCE 7-22 4.7.3: above 100 psf (4788 Pa) there is no reduction, whatever the area."""
    beams, columns, slabs = bay(box(0, 0, 9, 6))
    allowed = load_rules("us-lrfd", live_load=live, live_load_reduction=True)
    girder = loading(run(beams, columns, slabs, rule_set=allowed), "G0")
    large = replace(girder, tributary_area=100.0)
    assert (reduction_factor(large, allowed) < 1.0) is reduced
