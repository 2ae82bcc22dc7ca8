"""A rule set in SI, as the stages use it. Every number comes from a file under ``rules/`` with its clause."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from ifcaudit.model.loads import LoadCase
from ifcaudit.model.material import Material, MaterialFamily
from ifcaudit.model.section import Section


@dataclass(frozen=True, slots=True, kw_only=True)
class RuleValue:
    """A number in SI with the clause that gives it and the text it was read from.

    Attributes:
        value: In SI.
        text: As written in the rule file, with its unit (``50 psf``).
        clause: Where the number comes from (``ASCE 7-22 Table 4.3-1, offices``).
        key: Dotted key in the rule file (``loads.floor_live``).
        overridden: It was replaced from the command line.
    """

    value: float
    text: str
    clause: str
    key: str
    overridden: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Combination:
    """A load combination: factors by case; cases absent count zero."""

    name: str
    factors: Mapping[LoadCase, float]
    clause: str


@dataclass(frozen=True, slots=True, kw_only=True)
class LoadRules:
    """Area loads [Pa] taken where the model says nothing.

    Attributes:
        floor_live: Uniform live load of floors.
        partitions: Allowance for movable partitions, added to ``floor_live``; not reducible.
        superimposed_dead: Ceilings, services, finishes not modelled; on floors.
        roof_live: Roof live load Lr.
        roof_superimposed_dead: The same as ``superimposed_dead``, on roofs.
        snow: Roof snow load; zero where the rule set takes none, and the summary says so.
        slab_weight_default: Area weight of a slab whose material is not recognised is taken from this density [kg/m³].
    """

    floor_live: RuleValue
    partitions: RuleValue
    superimposed_dead: RuleValue
    roof_live: RuleValue
    roof_superimposed_dead: RuleValue
    snow: RuleValue
    slab_weight_default: RuleValue


@dataclass(frozen=True, slots=True, kw_only=True)
class LiveLoadReduction:
    """ASCE 7 4.7: L = L0 (0.25 + 15 / sqrt(K_LL A_T)), in SI (4.57 for A_T in m²).

    Attributes:
        enabled: Permitted, not compulsory: the rule set decides, the command line overrides.
        element_factor: K_LL of interior beams and edge beams without cantilever slabs.
        constant: 0.25.
        area_coefficient: 4.57 m (15 ft).
        least_influence_area: K_LL A_T below which there is no reduction [m²].
        least_ratio_one_floor: 0.5.
        live_load_limit: Live loads above this are not reduced [Pa].
        clause: Text.
    """

    enabled: bool
    element_factor: RuleValue
    constant: RuleValue
    area_coefficient: RuleValue
    least_influence_area: RuleValue
    least_ratio_one_floor: RuleValue
    live_load_limit: RuleValue
    clause: str


@dataclass(frozen=True, slots=True, kw_only=True)
class DeflectionRules:
    """Limits as span divided by a number, and the service load each is checked under.

    Attributes:
        floor_live_divisor: 360: span/360 under L.
        floor_total_divisor: 240: span/240 under D + L as the clause counts it.
        roof_live_divisor: Under Lr (and snow).
        roof_total_divisor: Under D + Lr.
        steel_dead_share: Part of the dead-load deflection counted in the total check of steel members (IBC: none).
    """

    floor_live_divisor: RuleValue
    floor_total_divisor: RuleValue
    roof_live_divisor: RuleValue
    roof_total_divisor: RuleValue
    steel_dead_share: RuleValue


@dataclass(frozen=True, slots=True, kw_only=True)
class SteelResistance:
    """Resistance factors by their name in the standard (``phi_b``, ``phi_v`` …)."""

    factors: Mapping[str, RuleValue]


@dataclass(frozen=True, slots=True, kw_only=True)
class Catalogue:
    """Section series by name, in the order of their files; each section with its designation."""

    series: Mapping[str, tuple[Section, ...]]


@dataclass(frozen=True, slots=True, kw_only=True)
class MaterialRules:
    """Look-up data for materials.

    Attributes:
        grades: Grade name in upper case without spaces -> material.
        family_words: Lower-case word (several languages) -> family.
        default_grades: Section family (``W``, ``HSS``, ``*`` for any) -> grade assumed when the model names none.
        densities: Lower-case material word -> density as a rule value, for slab layers.
        one_way_words: Lower-case words (several languages) of slabs that span one way: deck, planks, precast units.
    """

    grades: Mapping[str, Material]
    family_words: Mapping[str, MaterialFamily]
    default_grades: Mapping[str, str]
    densities: Mapping[str, RuleValue]
    one_way_words: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class RuleSet:
    """Everything that decides a verdict and is not in the model.

    Attributes:
        name: As given on the command line.
        title: For people.
        editions: Standards with editions.
        steel_method: File name under ``checks/standards/`` that judges steel (``aisc_360``).
        loads: Area loads.
        reduction: Live-load reduction.
        strength_combinations: For moment and shear.
        deflection: Limits.
        steel: Resistance factors.
        materials: Material look-ups.
        catalogue: Section series.
    """

    name: str
    title: str
    editions: tuple[str, ...]
    steel_method: str
    loads: LoadRules
    reduction: LiveLoadReduction
    strength_combinations: tuple[Combination, ...]
    deflection: DeflectionRules
    steel: SteelResistance
    materials: MaterialRules
    catalogue: Catalogue
