"""Building, cutting and adding the loads of single beams."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from ifcaudit.model.loads import CASE_COUNT, BeamLoads, FloatArray

SHORTEST_SEGMENT = 1e-9
"""A segment shorter than this is no segment [m]."""


class LoadCollector:
    """Collects segments and points in stations along one beam, then cuts them at its supports.

    Stations are plan distances from the beam's start. Loads beyond the first or last support go to that support and
    load no span.
    """

    __slots__ = ("_intensities", "_magnitudes", "_positions", "_stations")

    def __init__(self) -> None:
        self._positions: list[FloatArray] = []
        self._intensities: list[FloatArray] = []
        self._stations: list[float] = []
        self._magnitudes: list[FloatArray] = []

    def add_segments(self, positions: FloatArray, intensities: FloatArray) -> None:
        """Add line loads: positions (n, 2) [m], intensities (n, 2, CASE_COUNT) [N/m]."""
        self._positions.append(positions)
        self._intensities.append(intensities)

    def add_point(self, station: float, magnitude: FloatArray) -> None:
        """Add a point load [N] per case."""
        self._stations.append(station)
        self._magnitudes.append(magnitude)

    @property
    def empty(self) -> bool:
        """Nothing has been added."""
        return not self._positions and not self._stations

    def _collected(self) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
        positions = np.concatenate(self._positions) if self._positions else np.zeros((0, 2))
        intensities = np.concatenate(self._intensities) if self._intensities else np.zeros((0, 2, CASE_COUNT))
        stations = np.array(self._stations, dtype=np.float64)
        magnitudes = np.array(self._magnitudes, dtype=np.float64).reshape(-1, CASE_COUNT)
        return positions, intensities, stations, magnitudes

    def between(self, supports: Sequence[float]) -> list[BeamLoads]:
        """Cut everything at the supports, one simple span per neighbouring pair.

        Args:
            supports: At least two rising stations [m].
        """
        collected = self._collected()
        return [_span(*collected, first, last) for first, last in pairwise(supports)]

    def beyond(self, first: float, last: float) -> tuple[FloatArray, FloatArray]:
        """Loads before the first and after the last support, which go straight to them: two totals per case [N]."""
        positions, intensities, stations, magnitudes = self._collected()
        before = segment_totals(*clip_segments(positions, intensities, -np.inf, first)).sum(axis=0)
        after = segment_totals(*clip_segments(positions, intensities, last, np.inf)).sum(axis=0)
        before = before + magnitudes[stations < first].sum(axis=0)
        after = after + magnitudes[stations >= last].sum(axis=0)
        return np.asarray(before), np.asarray(after)


def _span(
    positions: FloatArray,
    intensities: FloatArray,
    stations: FloatArray,
    magnitudes: FloatArray,
    first: float,
    last: float,
) -> BeamLoads:
    inside_positions, inside_intensities = clip_segments(positions, intensities, first, last)
    points = (stations >= first) & (stations < last)
    return BeamLoads(
        span=last - first,
        segment_positions=inside_positions - first,
        segment_intensities=inside_intensities,
        point_positions=stations[points] - first,
        point_magnitudes=magnitudes[points],
    )


def clip_segments(
    positions: FloatArray, intensities: FloatArray, low: float, high: float
) -> tuple[FloatArray, FloatArray]:
    """Keep the parts of segments between two stations.

    Example:
        >>> import numpy as np
        >>> where, what = clip_segments(np.array([[0.0, 4.0]]), np.array([[[0.0], [8.0]]]), 1.0, 3.0)
        >>> where.tolist(), what[:, :, 0].tolist()
        ([[1.0, 3.0]], [[2.0, 6.0]])
    """
    if not len(positions):
        return positions, intensities
    cut = np.clip(positions, low, high)
    kept = cut[:, 1] - cut[:, 0] > SHORTEST_SEGMENT
    if kept.all() and (cut == positions).all():
        return positions, intensities
    cut, positions, intensities = cut[kept], positions[kept], intensities[kept]
    part = (cut - positions[:, :1]) / (positions[:, 1:] - positions[:, :1])
    rise = intensities[:, 1] - intensities[:, 0]
    return cut, intensities[:, :1] + part[:, :, None] * rise[:, None, :]


def segment_totals(positions: FloatArray, intensities: FloatArray) -> FloatArray:
    """Total of each segment per case, shape (n, CASE_COUNT) [N]."""
    lengths = positions[:, 1] - positions[:, 0]
    return np.asarray(lengths[:, None] * intensities.mean(axis=1))


def uniform(span: float, intensity: FloatArray) -> tuple[FloatArray, FloatArray]:
    """A line load over a whole span: positions (1, 2) and intensities (1, 2, CASE_COUNT)."""
    return np.array([[0.0, span]]), np.broadcast_to(intensity, (1, 2, len(intensity))).copy()


def with_uniform(loads: BeamLoads, intensity: FloatArray) -> BeamLoads:
    """Return the same loads with a line load added over the whole span."""
    positions, intensities = uniform(loads.span, intensity)
    return BeamLoads(
        span=loads.span,
        segment_positions=np.concatenate([loads.segment_positions, positions]),
        segment_intensities=np.concatenate([loads.segment_intensities, intensities]),
        point_positions=loads.point_positions,
        point_magnitudes=loads.point_magnitudes,
    )


def on_slope(loads: BeamLoads, ratio: float) -> BeamLoads:
    """The loads of a sloping beam at right angles to it, along its own length.

    A vertical load w per plan length on a beam of slope length L/c, c the cosine of its slope, presses w c² per slope
    length at right angles: the moment stays w L²/8, the deflection grows by 1/c².

    Args:
        loads: Vertical, in plan.
        ratio: Slope length over plan length, 1/c.

    Example:
        >>> import numpy as np
        >>> flat = BeamLoads(
        ...     span=4.0,
        ...     segment_positions=np.array([[0.0, 4.0]]),
        ...     segment_intensities=np.ones((1, 2, CASE_COUNT)),
        ...     point_positions=np.zeros(0),
        ...     point_magnitudes=np.zeros((0, CASE_COUNT)),
        ... )
        >>> steep = on_slope(flat, 2.0)
        >>> steep.span, float(steep.segment_intensities[0, 0, 0])
        (8.0, 0.25)
    """
    return BeamLoads(
        span=loads.span * ratio,
        segment_positions=loads.segment_positions * ratio,
        segment_intensities=loads.segment_intensities / ratio**2,
        point_positions=loads.point_positions * ratio,
        point_magnitudes=loads.point_magnitudes / ratio,
    )
