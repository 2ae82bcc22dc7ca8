"""Slabs that may load a beam without being taken down: reasons that keep it from being called adequate."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from math import isfinite

from ifcaudit.floor.bearing import bearing_lines
from ifcaudit.floor.stacking import Stack
from ifcaudit.model.building import Beam, Slab
from ifcaudit.model.framing import FramedBeam

SAME_FLOOR = 2.0
"""Difference between a beam's top and the level of an unreadable slab within which the slab may rest on it [m]."""


def doubtful_beams(slabs: Sequence[Slab], framed: Sequence[FramedBeam]) -> dict[str, tuple[str, ...]]:
    """Find the beams whose loads may be incomplete because of a slab that is left out.

    A slab whose outline could not be read may rest on any beam of its storey or near its level, and on any beam at all
    where neither is known. A slab taken as bearing on the ground, by its type or name alone, may yet rest on the beams
    that reach it.

    Args:
        slabs: All slabs of the building.
        framed: Load-carrying candidates.

    Returns:
        Reasons by GlobalId of the beam.
    """
    found: dict[str, list[str]] = defaultdict(list)
    for slab in slabs:
        if slab.unreadable and not slab.on_grade:
            reason = f"slab {slab.name or slab.global_id} could not be read ({slab.unreadable})"
            for item in framed:
                if _may_carry(item.beam, slab):
                    found[item.beam.global_id].append(reason)
    on_grade = [slab for slab in slabs if slab.on_grade and not slab.unreadable]
    stacks = [Stack(slab=slab, resting=(), top=slab.top, bottom=slab.bottom) for slab in on_grade]
    for stack, lines in zip(stacks, bearing_lines(stacks, framed, ()), strict=True):
        for line in lines:
            name = stack.slab.name or stack.slab.global_id
            found[line.line.global_id].append(f"slab {name} reaches it, but is taken as bearing on the ground")
    return {key: tuple(reasons) for key, reasons in found.items()}


def _may_carry(beam: Beam, slab: Slab) -> bool:
    if slab.storey and slab.storey == beam.storey:
        return True
    if isfinite(slab.top):
        return abs(beam.top_at(beam.plan_length / 2.0) - slab.top) <= SAME_FLOOR
    return not slab.storey
