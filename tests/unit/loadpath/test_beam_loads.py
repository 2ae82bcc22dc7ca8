"""Cutting the loads of a beam at its supports."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifcaudit.loadpath.beam_loads import LoadCollector
from ifcaudit.model.loads import CASE_COUNT, LoadCase


def dead(value: float) -> np.ndarray:
    """A dead load per case."""
    cases = np.zeros(CASE_COUNT)
    cases[LoadCase.DEAD] = value
    return cases


def collector(first: float, last: float, left: float, right: float) -> LoadCollector:
    """One linearly varying segment."""
    loads = LoadCollector()
    loads.add_segments(np.array([[first, last]]), np.array([[dead(left), dead(right)]]))
    return loads


def test_load_between_two_supports_is_kept_as_it_is() -> None:
    """Positions count from the first support."""
    (span,) = collector(1.0, 5.0, 2.0, 4.0).between([1.0, 6.0])
    assert span.span == 5.0
    assert span.segment_positions.tolist() == [[0.0, 4.0]]
    assert span.segment_intensities[0, :, LoadCase.DEAD].tolist() == [2.0, 4.0]


def test_load_beyond_a_support_goes_to_that_support() -> None:
    """Half a metre of slab beyond a support loads no span, but reaches the support, so that no load is lost."""
    loads = collector(-0.5, 6.5, 10.0, 10.0)
    (span,) = loads.between([0.0, 6.0])
    assert span.total()[LoadCase.DEAD] == pytest.approx(60.0)
    assert [side[LoadCase.DEAD] for side in loads.beyond(0.0, 6.0)] == pytest.approx([5.0, 5.0])


def test_continuous_beam_is_cut_into_spans_at_its_interior_support() -> None:
    """A triangle over two spans: hand calculation of each part's total.

    w rises from 0 to 12 over 6 m: to 2 m it holds 0.5 x 2 x 4 = 4, the rest is 36 - 4 = 32.
    """
    left, right = collector(0.0, 6.0, 0.0, 12.0).between([0.0, 2.0, 6.0])
    assert left.total()[LoadCase.DEAD] == pytest.approx(4.0)
    assert right.total()[LoadCase.DEAD] == pytest.approx(32.0)


@given(
    start=st.floats(-2, 8),
    length=st.floats(0.01, 6),
    left=st.floats(0, 50),
    right=st.floats(0, 50),
    point=st.floats(-2, 8),
    inner=st.floats(0.5, 5.5),
)
def test_no_load_is_lost_by_cutting(
    start: float, length: float, left: float, right: float, point: float, inner: float
) -> None:
    """Whatever lies inside, across or beyond the supports, the totals of the spans add up to the load."""
    loads = collector(start, start + length, left, right)
    loads.add_point(point, dead(7.0))
    total = sum(span.total()[LoadCase.DEAD] for span in loads.between([0.0, inner, 6.0]))
    total += sum(side[LoadCase.DEAD] for side in loads.beyond(0.0, 6.0))
    assert total == pytest.approx(length * (left + right) / 2 + 7.0, rel=1e-9, abs=1e-6)
