"""Line loads from slab parts, by hand calculation."""

from __future__ import annotations

import numpy as np
import pytest
from shapely import GeometryCollection, LineString, MultiPolygon, Polygon, box

from ifcaudit.floor.line_load import line_load
from ifcaudit.model.framing import Carrier, SupportLine

LINE = SupportLine(global_id="B", carrier=Carrier.BEAM, start=(0.0, 0.0), end=(8.0, 0.0))
UP = (0.0, 1.0)


def test_triangle_gives_a_triangular_load() -> None:
    """A triangle with its base on the line rises to its height at the apex."""
    load = line_load(Polygon([(0, 0), (6, 0), (3, 3)]), UP, LINE)
    assert load.positions.tolist() == [[0.0, 3.0], [3.0, 6.0]]
    assert load.widths == pytest.approx(np.array([[0.0, 3.0], [3.0, 0.0]]))


def test_opening_steps_the_load() -> None:
    """A 1 m by 1 m hole in a 2 m wide strip lowers the load from 2 to 1 over its length."""
    load = line_load(box(0, 0, 8, 2).difference(box(3, 0.5, 4, 1.5)), UP, LINE)
    assert load.positions.tolist() == [[0.0, 3.0], [3.0, 4.0], [4.0, 8.0]]
    assert load.widths == pytest.approx(np.array([[2.0, 2.0], [1.0, 1.0], [2.0, 2.0]]))


def test_strips_on_both_sides_add_up() -> None:
    """Two parts of one multipolygon overlap along the line."""
    both = MultiPolygon([box(0, 0, 6, 1), box(2, -3, 8, 0)])
    load = line_load(both, UP, LINE)
    assert load.positions.tolist() == [[0.0, 2.0], [2.0, 6.0], [6.0, 8.0]]
    assert load.widths == pytest.approx(np.array([[1.0, 1.0], [4.0, 4.0], [3.0, 3.0]]))


def test_oblique_travel_shifts_the_load_and_keeps_its_total() -> None:
    """Load of a square 2 to 3 m above the line, travelling at 45 degrees, lands 2 to 3 m further along.

    Its width is a tent: from 2 + ... the square's corners reach stations 2, 3, 3 and 4 (travel along (1, -1)).
    """
    load = line_load(box(0, 2, 1, 3), (2**-0.5, -(2**-0.5)), LINE)
    assert load.positions.ravel().tolist() == pytest.approx([2.0, 3.0, 3.0, 4.0])
    assert load.widths.ravel().tolist() == pytest.approx([0.0, 1.0, 1.0, 0.0])
    assert load.area == pytest.approx(1.0)


def test_lines_left_over_by_a_cut_carry_nothing() -> None:
    """Two parts that also touch along an edge intersect in a polygon and a line: the line has no area."""
    cut = GeometryCollection([box(1, 0, 3, 2), LineString([(4, 0), (6, 0)])])
    load = line_load(cut, UP, LINE)
    assert load.positions.tolist() == [[1.0, 3.0]]
    assert load.area == pytest.approx(4.0)
    assert line_load(LineString([(0, 0), (2, 1)]), UP, LINE).area == 0.0


def test_reversing_the_line_mirrors_the_stations() -> None:
    """Stations count from the line's own start."""
    back = SupportLine(global_id="B", carrier=Carrier.BEAM, start=(8.0, 0.0), end=(0.0, 0.0))
    load = line_load(Polygon([(0, 0), (2, 0), (2, 1)]), UP, back)
    assert load.positions.tolist() == [[6.0, 8.0]]
    assert load.widths == pytest.approx(np.array([[1.0, 0.0]]))


def test_load_cannot_travel_along_its_line() -> None:
    """A direction along the line never reaches it."""
    with pytest.raises(ValueError, match=r"^load cannot travel to line B along it \(sine 0\.000\)$"):
        line_load(box(0, 0, 1, 1), (1.0, 0.0), LINE)
