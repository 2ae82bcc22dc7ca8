"""Floors built of several slabs: the structural one spans, what lies on it or hangs under it only weighs."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass

from shapely import STRtree
from shapely.geometry.base import BaseGeometry

from ifcaudit.model.building import Slab

TOUCHING = 0.03
"""Level difference up to which two slabs touch [m]."""
LEAST_OVERLAP = 0.5
"""Part of the resting slab's plan that must lie over others, before it is taken as resting on them."""
LIGHT = 50.0
"""Mass per area below which a slab is insulation or a lining, never the structure under a heavier one [kg/m²]."""
THIN = 0.03
"""Thickness below which a slab is a finish, never the structure under a thicker one [m]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Stack:
    """One structural slab with the slabs that only weigh on it.

    Attributes:
        slab: The slab that spans.
        resting: Slabs carried by it, with the part of each one's plan that lies over it.
        top: Level of the highest top face of the stack [m].
        bottom: Level of the lowest underside [m].
    """

    slab: Slab
    resting: tuple[tuple[Slab, BaseGeometry], ...]
    top: float
    bottom: float


def stack_slabs(slabs: Sequence[Slab], mass_per_area: Sequence[float]) -> tuple[tuple[Stack, ...], tuple[str, ...]]:
    """Group slabs that lie on one another.

    Args:
        slabs: Readable suspended slabs.
        mass_per_area: Mass of each one's layers per surface area [kg/m²]; tells insulation from structure.

    Returns:
        The stacks, in the order of their structural slabs, and findings about parts that rest on nothing.
    """
    if not slabs:
        return (), ()
    below = _carrying_pairs(slabs, mass_per_area)
    resting_on: dict[int, list[tuple[int, BaseGeometry]]] = {}
    for index, pairs in below.items():
        covered = sum(part.area for _, part in pairs)
        if covered >= LEAST_OVERLAP * slabs[index].plan.area:
            resting_on[index] = pairs
    parts: dict[int, list[tuple[int, BaseGeometry]]] = defaultdict(list)
    findings: list[str] = []
    for index in sorted(resting_on):
        loose: BaseGeometry = slabs[index].plan
        for base, part in _down_to_structure(index, resting_on):
            parts[base].append((index, part))
            loose = loose.difference(part)
        if loose.area > 0.05 * slabs[index].plan.area and loose.area > 0.5:
            findings.append(
                f"slab {slabs[index].name or slabs[index].global_id}: {loose.area:.1f} m² lies beyond the slab "
                "it rests on; the weight of that part is not carried to any beam"
            )
    stacks = [_stack(slabs, index, parts[index]) for index in range(len(slabs)) if index not in resting_on]
    return tuple(stacks), tuple(findings)


def _stack(slabs: Sequence[Slab], index: int, parts: Sequence[tuple[int, BaseGeometry]]) -> Stack:
    members = [slabs[index], *(slabs[other] for other, _ in parts)]
    return Stack(
        slab=slabs[index],
        resting=tuple((slabs[other], part) for other, part in parts),
        top=max(slab.top for slab in members),
        bottom=min(slab.bottom for slab in members),
    )


def _carrying_pairs(slabs: Sequence[Slab], mass_per_area: Sequence[float]) -> dict[int, list[tuple[int, BaseGeometry]]]:
    """For each slab, the slabs it rests on (or hangs under) and the plan area in common."""
    pairs: dict[int, list[tuple[int, BaseGeometry]]] = defaultdict(list)
    tree = STRtree([slab.plan for slab in slabs])
    for first, second in zip(*tree.query([slab.plan for slab in slabs], predicate="intersects"), strict=True):
        upper, lower = int(first), int(second)
        if upper == lower or not _touches(slabs[upper], slabs[lower]):
            continue
        common = slabs[upper].plan.intersection(slabs[lower].plan)
        if common.area < 1e-3:
            continue
        if _is_lining(lower, upper, slabs, mass_per_area):
            pairs[lower].append((upper, common))
        else:
            pairs[upper].append((lower, common))
    return pairs


def _touches(upper: Slab, lower: Slab) -> bool:
    x, y = upper.plan.representative_point().coords[0]
    return abs(upper.bottom_at(x, y) - lower.top_at(x, y)) <= TOUCHING and upper.top_at(x, y) > lower.top_at(x, y)


def _is_lining(lower: int, upper: int, slabs: Sequence[Slab], mass_per_area: Sequence[float]) -> bool:
    """The lower of two touching slabs is too light or too thin to carry the heavier one above it."""
    light = mass_per_area[lower] < LIGHT and mass_per_area[upper] >= 2.0 * LIGHT
    thickness = slabs[lower].top - slabs[lower].bottom
    thin = thickness < THIN and slabs[upper].top - slabs[upper].bottom > 2.0 * thickness
    return light or thin


def _down_to_structure(
    index: int, resting_on: dict[int, list[tuple[int, BaseGeometry]]]
) -> list[tuple[int, BaseGeometry]]:
    """Follow a slab down to the structural ones: a finish on a screed on a slab is carried by the slab."""
    found: list[tuple[int, BaseGeometry]] = []
    pending = list(resting_on[index])
    seen = {index}
    while pending:
        base, part = pending.pop()
        if base not in resting_on:
            found.append((base, part))
        elif base not in seen:
            seen.add(base)
            pending.extend((lower, part.intersection(below)) for lower, below in resting_on[base])
    return [(base, part) for base, part in found if part.area > 1e-6]
