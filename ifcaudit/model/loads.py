"""Load cases and the loads on one beam."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import NDArray


class LoadCase(IntEnum):
    """Load cases, in the order of the case axis of every load array.

    ``AREA`` is no load: it is a pressure of 1 Pa on every floor, carried through the same path, so that the reaction
    of a joist is the floor area whose load it brings. It enters no combination.
    """

    DEAD = 0
    LIVE = 1
    LIVE_UNREDUCED = 2
    ROOF_LIVE = 3
    SNOW = 4
    AREA = 5


CASE_COUNT = len(LoadCase)
FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BeamLoads:
    """Everything that loads one simply supported beam, per load case, downwards positive.

    Positions are distances along the beam from its first support [m]. A load outside 0..span is not allowed.

    Attributes:
        span: Distance between supports [m].
        segment_positions: Start and end of each piecewise-linear line load, shape (segments, 2) [m].
        segment_intensities: Intensity at its start and end, shape (segments, 2, CASE_COUNT) [N/m].
        point_positions: Shape (points,) [m].
        point_magnitudes: Shape (points, CASE_COUNT) [N].
    """

    span: float
    segment_positions: FloatArray
    segment_intensities: FloatArray
    point_positions: FloatArray
    point_magnitudes: FloatArray

    def total(self) -> FloatArray:
        """Sum of all loads per case, shape (CASE_COUNT,) [N]."""
        lengths = self.segment_positions[:, 1] - self.segment_positions[:, 0]
        spread = (lengths[:, None] * self.segment_intensities.mean(axis=1)).sum(axis=0)
        return np.asarray(spread + self.point_magnitudes.sum(axis=0), dtype=np.float64)
