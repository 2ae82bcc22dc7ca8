"""Area loads of slabs, per load case and plan area, with what they rest on."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from shapely.geometry.base import BaseGeometry

from ifcaudit.floor.stacking import Stack
from ifcaudit.model.building import Slab
from ifcaudit.model.framing import Carrier, SlabLayout
from ifcaudit.model.loads import CASE_COUNT, FloatArray, LoadCase
from ifcaudit.model.material import MaterialText
from ifcaudit.provenance import Source, Sourced
from ifcaudit.rulebook.records import RuleSet, RuleValue
from ifcaudit.units import standard_gravity

_REMEDIES = defaultdict(
    lambda: "Set it in a rule file.",
    {
        "loads.floor_live": "Settle it with --live-load.",
        "loads.partitions": "Settle it with --live-load, which is the whole load.",
        "loads.superimposed_dead": "Settle it with --superimposed-dead.",
    },
)
DensityOf = Callable[[MaterialText], Sourced[float]]


@dataclass(frozen=True, slots=True, kw_only=True)
class Patch:
    """The weight of a slab lying on another: dead load on part of its plan [Pa]."""

    plan: BaseGeometry
    dead: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AreaLoad:
    """Load on one structural slab.

    Attributes:
        slab: The slab.
        pressures: Per load case and plan area, shape (CASE_COUNT,) [Pa].
        patches: Dead load of what lies on it.
        inputs: Every input with its source, by name.
    """

    slab: Slab
    pressures: FloatArray
    patches: tuple[Patch, ...]
    inputs: tuple[tuple[str, Sourced[object]], ...]


def mass_per_area(slab: Slab, density_of: DensityOf) -> float:
    """Mass of a slab's layers per surface area [kg/m²]."""
    return sum(layer.thickness * density_of(layer.material).value for layer in slab.layers)


def area_load(stack: Stack, rules: RuleSet, density_of: DensityOf) -> AreaLoad:
    """Add up the loads on one stack of slabs.

    Weight acts per surface area, live load and the superimposed allowance per plan area. A roof takes roof live load
    and snow, not floor live load.

    Args:
        stack: The structural slab and what lies on it.
        rules: Loads where the model says nothing.
        density_of: Density of a layer's material, with its source.
    """
    slab, loads = stack.slab, rules.loads
    pressures = np.zeros(CASE_COUNT)
    superimposed = loads.roof_superimposed_dead if slab.roof else loads.superimposed_dead
    pressures[LoadCase.DEAD] = _weight(slab, density_of) + superimposed.value
    pressures[LoadCase.AREA] = 1.0
    live: tuple[tuple[str, RuleValue, LoadCase], ...] = (
        (("roof live load", loads.roof_live, LoadCase.ROOF_LIVE), ("snow load", loads.snow, LoadCase.SNOW))
        if slab.roof
        else (
            ("live load", loads.floor_live, LoadCase.LIVE),
            ("partition allowance", loads.partitions, LoadCase.LIVE_UNREDUCED),
        )
    )
    inputs: list[tuple[str, Sourced[object]]] = [
        ("superimposed dead load of roofs" if slab.roof else "superimposed dead load", _from_rules(superimposed))
    ]
    for name, value, case in live:
        pressures[case] += value.value
        inputs.append((name, _from_rules(value)))
    for owner in (slab, *(other for other, _ in stack.resting)):
        inputs.extend(_layer_inputs(owner, density_of))
    return AreaLoad(
        slab=slab,
        pressures=pressures,
        patches=tuple(Patch(plan=part, dead=_weight(other, density_of)) for other, part in stack.resting),
        inputs=tuple(inputs),
    )


def layout_assumptions(slab: Slab, layout: SlabLayout, standing_walls: int) -> tuple[tuple[str, Sourced[object]], ...]:
    """State what is taken for granted about how a slab carries its load, and what stands on it.

    Args:
        slab: The structural slab.
        layout: How it was shared out.
        standing_walls: Number of walls that stand on the floor; their weight is not taken down.

    Returns:
        Inputs of every beam that it loads, all of them assumed, each with what settles it.
    """
    name = slab.name or slab.global_id
    bearing = len({strip.support_id for strip in layout.strips if strip.carrier is Carrier.WALL})
    stand = "wall stands" if standing_walls == 1 else "walls stand"
    reach = "1 wall that reaches it is" if bearing == 1 else f"{bearing} walls that reach it are"
    statements = (
        (
            standing_walls > 0,
            "walls on the floor",
            f"{standing_walls} {stand} on {name}: taken to weigh no more than its area loads allow for",
            "Raise --superimposed-dead by their weight per floor area if they weigh more.",
        ),
        (
            bearing > 0,
            "walls under the floor",
            f"part of {name} rests on walls: {reach} taken as bearing",
            "Leave walls that do not bear out of the model, so that the beams beside them take their share.",
        ),
        (
            any(strip.two_way for strip in layout.strips),
            "slab action",
            f"{name} is cast concrete: panels held on all sides, up to 2 to 1, are taken to span both ways",
            "Name a layer deck, planks or precast where it spans one way.",
        ),
    )
    return tuple(
        (title, Sourced(value=where, source=Source.ASSUMED, where=where, remedy=remedy))
        for applies, title, where, remedy in statements
        if applies
    )


def _weight(slab: Slab, density_of: DensityOf) -> float:
    """Weight of a slab per plan area [Pa]."""
    return mass_per_area(slab, density_of) * standard_gravity() * slab.surface_ratio


def _from_rules(value: RuleValue) -> Sourced[object]:
    """A rule value as an input; without an override it is an assumption about the use of the floor."""
    if value.overridden:
        return Sourced(value=value.value, source=Source.RULES, where=f"{value.text} (command line)")
    return Sourced(
        value=value.value, source=Source.ASSUMED, where=f"{value.text} ({value.clause})", remedy=_REMEDIES[value.key]
    )


def _layer_inputs(slab: Slab, density_of: DensityOf) -> list[tuple[str, Sourced[object]]]:
    name = slab.name or slab.global_id
    inputs: list[tuple[str, Sourced[object]]] = []
    for layer in slab.layers:
        material = "/".join(layer.material.names) or "unnamed material"
        density = density_of(layer.material)
        inputs.append((f"density of {material}", density))
        if layer.inferred:
            inputs.append(
                (
                    f"layers of {name}",
                    Sourced(
                        value=layer.thickness,
                        source=Source.DERIVED,
                        where="the whole thickness of its solid, because the model gives no layers",
                    ),
                )
            )
    return inputs
