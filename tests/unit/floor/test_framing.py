"""What carries the end of a beam."""

from __future__ import annotations

from dataclasses import replace

import pytest
from helpers.scene import beam, column, wall

from ifcaudit.floor.framing import frame_beams
from ifcaudit.model.building import Beam, VerticalSupport
from ifcaudit.model.framing import Carrier, FramedBeam


def framed(beams: list[Beam], supports: list[VerticalSupport], name: str) -> FramedBeam:
    """Frame everything and return one beam."""
    return next(item for item in frame_beams(beams, supports) if item.beam.name == name)


def test_span_runs_between_column_centres_although_the_steel_stops_at_their_faces() -> None:
    """A beam that stops 12 mm short of two columns 8 m apart spans 8 m."""
    girder = beam("G", (0.137, 0.0), (7.863, 0.0))
    found = framed([girder], [column("A", 0, 0), column("B", 8, 0)], "G")
    assert found.start is not None
    assert found.end is not None
    assert (found.start.carrier, found.start.name) == (Carrier.COLUMN, "A")
    assert found.last_station - found.first_station == pytest.approx(8.0)
    assert found.start.gap == pytest.approx(0.012)


def test_joist_is_carried_by_the_girder_that_runs_on() -> None:
    """A joist stopping at a girder's web hangs on it; the girder is not carried by the joist."""
    girder = beam("G", (0.0, 0.0), (8.0, 0.0), height=0.5)
    other = beam("H", (0.0, 6.0), (8.0, 6.0), height=0.5)
    joist = beam("J", (3.0, 0.02), (3.0, 5.98), height=0.3)
    supports = [column(name, x, y) for name, x, y in (("A", 0, 0), ("B", 8, 0), ("C", 0, 6), ("D", 8, 6))]
    found = framed([girder, other, joist], supports, "J")
    assert found.start is not None
    assert found.end is not None
    assert (found.start.carrier, found.start.name, found.end.name) == (Carrier.BEAM, "G", "H")
    assert found.start.station_on_carrier == pytest.approx(3.0)
    assert found.last_station - found.first_station == pytest.approx(6.0)
    assert framed([girder, other, joist], supports, "G").interior == ()


def test_column_comes_before_beam_when_both_are_at_the_end() -> None:
    """At a column where two beams cross, each is carried by the column."""
    first = beam("X", (0.0, 0.0), (6.0, 0.0))
    second = beam("Y", (6.0, -4.0), (6.0, 4.0))
    supports = [column("A", 0, 0), column("B", 6, 0), column("C", 6, -4), column("D", 6, 4)]
    found = framed([first, second], supports, "X")
    assert found.end is not None
    assert found.end.carrier is Carrier.COLUMN


def test_beam_ends_meeting_at_a_corner_do_not_carry_each_other() -> None:
    """Neither of two beams that end at the same corner runs on, so that corner has no support."""
    first = beam("X", (0.0, 0.0), (6.0, 0.0))
    second = beam("Y", (6.0, 0.0), (6.0, 5.0))
    supports = [column("A", 0, 0), column("D", 6, 5)]
    assert framed([first, second], supports, "X").end is None
    assert framed([first, second], supports, "Y").start is None


def test_end_on_nothing_names_the_nearest_candidate_with_its_distance() -> None:
    """The message about a free end says what lies nearest, and how far."""
    found = framed([beam("J", (0.0, 0.0), (5.0, 0.0))], [column("A", 0, 0), column("B", 5.6, 0)], "J")
    assert found.end is None
    # 5.6 m less half of the 0.25 m column leaves 0.475 m to its face.
    assert found.end_gap == "nearest is column B at 0.47 m"


def test_wall_below_carries_the_end_at_the_middle_of_its_thickness() -> None:
    """A beam bearing 0.18 m into a 0.30 m wall spans from the middle of the wall."""
    found = framed(
        [beam("J", (-0.03, 0.0), (5.0, 0.0))],
        [wall("W", (0.0, -3.0), (0.0, 3.0), thickness=0.30), column("B", 5, 0)],
        "J",
    )
    assert found.start is not None
    assert found.start.carrier is Carrier.WALL
    assert found.first_station == pytest.approx(0.03)


def test_wall_that_only_touches_the_side_carries_nothing() -> None:
    """A facade wall along the flange of an edge beam is no support of it."""
    edge = beam("E", (0.0, 0.0), (6.0, 0.0), width=0.2)
    facade = wall("W", (0.0, 0.2), (6.0, 0.2), thickness=0.2, top=8.0)
    found = framed([edge], [facade, column("A", 0, 0), column("B", 6, 0)], "E")
    assert found.bedded == ""
    assert found.start is not None
    assert found.start.carrier is Carrier.COLUMN


@pytest.mark.parametrize(("thickness", "carrier"), [(0.1, Carrier.WALL), (0.08, None)])
def test_partition_carries_no_beam_end(thickness: float, carrier: Carrier | None) -> None:
    """A wall of 100 mm is a support, a thinner one is not: the end is then reported as carried by nothing."""
    found = framed(
        [beam("J", (0.0, 0.0), (5.0, 0.0))],
        [wall("W", (0.0, -3.0), (0.0, 3.0), thickness=thickness), column("B", 5, 0)],
        "J",
    )
    assert (found.start.carrier if found.start else None) is carrier


def test_beam_lying_along_a_wall_does_not_span_freely() -> None:
    """A lintel drawn inside a wall over its openings is marked as bedded in it."""
    lintel = beam("L", (1.0, 0.0), (4.0, 0.0))
    found = framed([lintel], [wall("W", (0.0, 0.0), (6.0, 0.0), top=5.0)], "L")
    assert found.bedded == "wall W"


def test_column_under_midspan_is_an_interior_support() -> None:
    """A column below the middle of a beam makes it continuous."""
    found = framed(
        [beam("G", (0.0, 0.0), (10.0, 0.0))],
        [column("A", 0, 0), column("M", 5, 0, top=3.6), column("B", 10, 0)],
        "G",
    )
    assert [support.name for support in found.interior] == ["M"]


def test_column_a_metre_inside_the_end_is_no_end_support() -> None:
    """A beam that runs 1 m beyond its column overhangs: the column is inside, the end is free."""
    found = framed([beam("G", (0.0, 0.0), (8.0, 0.0))], [column("A", 1, 0, top=3.6), column("B", 8, 0)], "G")
    assert found.start is None
    assert [support.name for support in found.interior] == ["A"]


def test_column_on_top_of_midspan_stands_on_the_beam() -> None:
    """A column that starts at the floor above a beam is a transfer, not a support."""
    found = framed(
        [beam("G", (0.0, 0.0), (10.0, 0.0))],
        [column("A", 0, 0), column("B", 10, 0), column("T", 4, 0, bottom=4.15, top=8.0)],
        "G",
    )
    assert found.interior == ()
    assert found.standing == ("column T",)


def test_column_of_the_next_storey_over_one_below_does_not_stand_on_the_beam() -> None:
    """A column line continuing upwards passes its load to the column below."""
    found = framed(
        [beam("G", (0.0, 0.0), (10.0, 0.0))],
        [column("A", 0, 0), column("B", 10, 0), column("A2", 0, 0, bottom=4.15, top=8.0)],
        "G",
    )
    assert found.standing == ()


def test_purlin_on_top_of_a_rafter_is_carried_by_it_and_not_the_reverse() -> None:
    """A crossing beam whose underside lies on another's top rests on it."""
    low = beam("R", (0.0, 0.0), (6.0, 0.0), top=4.0)
    high = beam("P", (3.0, -4.0), (3.0, 4.0), top=4.2, height=0.2)
    supports = [column("A", 0, 0), column("B", 6, 0), column("C", 3, -4, top=4.0), column("D", 3, 4, top=4.0)]
    assert [support.name for support in framed([low, high], supports, "P").interior] == ["R"]
    assert framed([low, high], supports, "R").interior == ()


@pytest.mark.parametrize("lift", [3.0, -3.0])
def test_beams_on_another_storey_carry_nothing(lift: float) -> None:
    """A girder in the same plan position one storey up or down is no support."""
    joist = beam("J", (3.0, 0.02), (3.0, 5.98), height=0.3)
    girder = beam("G", (0.0, 0.0), (8.0, 0.0), top=4.0 + lift)
    assert framed([joist, girder], [], "J").start is None


@pytest.mark.parametrize("shift", [(1000.0, -2000.0, 50.0), (4.5e5, 5.6e6, 0.0)])
def test_framing_does_not_depend_on_where_the_origin_lies(shift: tuple[float, float, float]) -> None:
    """Moving a building, also to survey coordinates, moves nothing in how it is carried."""
    girder = beam("G", (0.0, 0.0), (8.0, 0.0), height=0.5)
    joist = beam("J", (3.0, 0.02), (3.0, 5.98), height=0.3)
    moved = [
        replace(
            item,
            start=tuple(a + b for a, b in zip(item.start, shift, strict=True)),
            end=tuple(a + b for a, b in zip(item.end, shift, strict=True)),
        )
        for item in (girder, joist)
    ]
    at_home, away = framed([girder, joist], [], "J"), framed(moved, [], "J")
    assert at_home.start is not None
    assert away.start is not None
    assert away.start.name == at_home.start.name
    assert away.start.station_on_carrier == pytest.approx(at_home.start.station_on_carrier, abs=1e-6)
