"""Which walls may carry anything."""

from __future__ import annotations

from math import dist

from ifcaudit.model.building import VerticalSupport

LEAST_THICKNESS = 0.10
"""Thinner walls are partitions: they carry neither a slab nor a beam [m]."""
DRAWING_TOLERANCE = 1e-4
"""A wall drawn 100 mm thick may measure a little less [m]."""


def wall_thickness(wall: VerticalSupport) -> float:
    """Mean thickness of a wall, its plan area over the length of its axis [m]; 0 where it has no length."""
    length = dist(*wall.centreline)
    return float(wall.footprint.area) / length if length > 0.0 else 0.0


def may_bear(wall: VerticalSupport) -> bool:
    """The wall is thick enough to carry something; ``LoadBearing`` of real exports says nothing reliable."""
    return wall_thickness(wall) >= LEAST_THICKNESS - DRAWING_TOLERANCE
