"""Beams, loads and steel for tests of the mechanics, the checks and the sizing."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ifcaudit.model.loads import CASE_COUNT, BeamLoads, FloatArray, LoadCase
from ifcaudit.model.material import Material, MaterialFamily

INCH, FOOT, KIP = 0.0254, 0.3048, 4448.2216152605
KSI, KIP_FOOT, KIP_PER_FOOT = KIP / INCH**2, KIP * FOOT, KIP / FOOT

Line = tuple[float, float, float, float]
"""Start, end, intensity at the start, intensity at the end."""
Point = tuple[float, float]
"""Position, magnitude."""


def loads(
    span: float,
    lines: Sequence[Line] = (),
    points: Sequence[Point] = (),
    *,
    case: LoadCase = LoadCase.DEAD,
) -> BeamLoads:
    """Loads of one case on one beam."""
    positions = np.array([line[:2] for line in lines], dtype=np.float64).reshape(-1, 2)
    intensities = np.zeros((len(lines), 2, CASE_COUNT))
    intensities[:, :, case] = np.array([line[2:] for line in lines], dtype=np.float64).reshape(-1, 2)
    magnitudes = np.zeros((len(points), CASE_COUNT))
    magnitudes[:, case] = [point[1] for point in points]
    return BeamLoads(
        span=span,
        segment_positions=positions,
        segment_intensities=intensities,
        point_positions=np.array([point[0] for point in points], dtype=np.float64),
        point_magnitudes=magnitudes,
    )


def together(*parts: BeamLoads) -> BeamLoads:
    """All loads of several beams of one span on one beam."""
    return BeamLoads(
        span=parts[0].span,
        segment_positions=np.concatenate([part.segment_positions for part in parts]),
        segment_intensities=np.concatenate([part.segment_intensities for part in parts]),
        point_positions=np.concatenate([part.point_positions for part in parts]),
        point_magnitudes=np.concatenate([part.point_magnitudes for part in parts]),
    )


def once(case: LoadCase = LoadCase.DEAD, factor: float = 1.0) -> FloatArray:
    """One combination of one case."""
    factors = np.zeros((1, CASE_COUNT))
    factors[0, case] = factor
    return factors


def steel(yield_ksi: float = 50.0) -> Material:
    """Structural steel, E = 29 000 ksi (AISC 360-22 symbols) and G = 11 200 ksi."""
    return Material(
        family=MaterialFamily.STEEL,
        grade=f"{yield_ksi:g} ksi",
        density=7850.0,
        modulus_of_elasticity=29_000 * KSI,
        shear_modulus=11_200 * KSI,
        yield_strength=yield_ksi * KSI,
        ultimate_strength=65 * KSI,
    )
