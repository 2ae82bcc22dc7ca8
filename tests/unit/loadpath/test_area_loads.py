"""What is taken for granted about a floor is said, with what settles it."""

from __future__ import annotations

from helpers.scene import slab
from shapely import box

from ifcaudit.loadpath.area_loads import layout_assumptions
from ifcaudit.model.framing import Carrier, SlabLayout, Strip
from ifcaudit.provenance import Source

FLOOR = slab("S", box(0, 0, 6, 6))


def layout(*carriers: Carrier, two_way: bool = False) -> SlabLayout:
    """A slab with one strip per carrier."""
    strips = tuple(
        Strip(
            slab_id="S",
            support_id=f"{carrier.value} {number}",
            carrier=carrier,
            polygon=box(0, number, 6, number + 1),
            direction=(0.0, 1.0),
            two_way=two_way,
        )
        for number, carrier in enumerate(carriers)
    )
    return SlabLayout(slab_id="S", area=36.0, strips=strips)


def test_plain_floor_on_beams_takes_nothing_for_granted() -> None:
    """One-way strips on beams, no walls: no assumption."""
    assert layout_assumptions(FLOOR, layout(Carrier.BEAM, Carrier.BEAM), 0) == ()


def test_walls_on_and_under_a_floor_and_two_way_action_are_assumptions() -> None:
    """Each is stated once, marked as assumed, with the change that settles it."""
    found = dict(layout_assumptions(FLOOR, layout(Carrier.WALL, Carrier.WALL, Carrier.BEAM, two_way=True), 3))
    assert {name: item.where for name, item in found.items()} == {
        "walls on the floor": "3 walls stand on S: taken to weigh no more than its area loads allow for",
        "walls under the floor": "part of S rests on walls: 2 walls that reach it are taken as bearing",
        "slab action": "S is cast concrete: panels held on all sides, up to 2 to 1, are taken to span both ways",
    }
    assert all(item.source is Source.ASSUMED and item.remedy for item in found.values())
