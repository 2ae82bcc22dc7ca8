"""Slabs that are left out cast doubt on the beams they may load."""

from __future__ import annotations

from dataclasses import replace
from math import nan

import pytest
from helpers.scene import beam, column, slab
from shapely import Polygon, box

from ifcaudit.floor.framing import frame_beams
from ifcaudit.loadpath.doubts import doubtful_beams
from ifcaudit.model.building import Slab

BEAMS = [
    beam("low", (0, 0), (8, 0), top=4.0, storey="Level 1"),
    beam("high", (0, 0), (8, 0), top=12.0, storey="Level 3"),
]
FRAMED = frame_beams(BEAMS, [column("A", 0, 0), column("B", 8, 0)])


def unread(storey: str, level: float) -> Slab:
    """A slab without outline."""
    return replace(
        slab("X", box(0, 0, 1, 1)), plan=Polygon(), storey=storey, top=level, bottom=level, unreadable="no face"
    )


@pytest.mark.parametrize(
    ("storey", "level", "doubted"),
    [
        pytest.param("Level 1", 4.1, {"low"}, id="its storey and level"),
        pytest.param("Level 9", 12.2, {"high"}, id="another storey's name, but at the beam's level"),
        pytest.param("Level 3", nan, {"high"}, id="level unknown: its storey"),
        pytest.param("", nan, {"low", "high"}, id="neither known: every beam"),
    ],
)
def test_unreadable_slab_casts_doubt_on_the_beams_it_may_rest_on(storey: str, level: float, doubted: set[str]) -> None:
    """By storey or by level; where neither is known, on all."""
    found = doubtful_beams([unread(storey, level)], FRAMED)
    assert set(found) == doubted
    assert all(reasons == ("slab X could not be read (no face)",) for reasons in found.values())


def test_slab_called_on_grade_that_reaches_a_beam_is_doubted() -> None:
    """A name or type alone does not take the load off a beam under the slab."""
    ground = replace(slab("Foundation deck", box(0, -2, 8, 2)), on_grade=True)
    assert doubtful_beams([ground], FRAMED) == {
        "low": ("slab Foundation deck reaches it, but is taken as bearing on the ground",)
    }
