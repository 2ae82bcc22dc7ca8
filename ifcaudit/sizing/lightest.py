"""The lightest catalogue section that passes the same checks: for strength, for stiffness, for both.

A catalogue is compared as arrays first, with bounds that are safe on either side: a section whose upper bound of the
demand passes is adequate, one whose lower bound fails is not. Only what lies between is checked one by one, by the very
functions of the audit. The loads that carried beams bring stay as modelled; the section's own weight follows it.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from ifcaudit.analysis.simple_beam import deflection, envelope
from ifcaudit.checks.interface import CheckInput, CheckOutcome, load_standard
from ifcaudit.checks.verdict import (
    check_beams,
    deflection_divisors,
    service_factors,
    strength_factors,
    unbraced_segments,
)
from ifcaudit.model.audit import CheckName
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.loads import FloatArray, LoadCase
from ifcaudit.model.material import Material
from ifcaudit.model.section import Section, SectionKind, SectionTable, section_table
from ifcaudit.rulebook.records import RuleSet
from ifcaudit.units import standard_gravity

STRENGTH = (CheckName.FLEXURE, CheckName.SHEAR)
STIFFNESS = (CheckName.LIVE_DEFLECTION, CheckName.TOTAL_DEFLECTION)
DEFAULT_SERIES = {SectionKind.I_SHAPE: "W", SectionKind.CHANNEL: "C"}
"""Series to size from where the section is in none."""
SLACK = 1e-9
"""Utilization above one that is rounding."""
GRADIENT_SLACK = 0.05
"""Part by which the moment gradient factor may shift when the section's own weight changes."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Sizing:
    """Lightest sections of one series; ``None`` where none of it is adequate.

    Attributes:
        for_strength: Lightest for flexure and shear.
        for_stiffness: Lightest for deflection.
        for_both: Lightest for both.
        findings: Why there is none.
    """

    for_strength: Section | None = None
    for_stiffness: Section | None = None
    for_both: Section | None = None
    findings: tuple[str, ...] = ()


def size_beams(items: Sequence[CheckInput], rules: RuleSet, series_of: Sequence[str]) -> list[Sizing]:
    """Size beams over the catalogue.

    Args:
        items: Beams with their loads, without self-weight.
        rules: The rules they are checked by, and the catalogue.
        series_of: Series of each beam's section; empty where it is in none.

    Returns:
        One sizing per beam.
    """
    standard = load_standard(rules.steel_method)
    families = [_series(item, name, rules) for item, name in zip(items, series_of, strict=True)]
    ready = [
        index
        for index, item in enumerate(items)
        if families[index] and item.material.family is standard.MATERIAL and item.axis is not BendingAxis.INCLINED
    ]
    chosen = [items[index] for index in ready]
    demands = _Demands(chosen, rules) if chosen else None
    sized = {}
    for row, index in enumerate(ready):
        assert demands is not None  # noqa: S101 — there is one when anything is ready
        table = _candidates(families[index], items[index].section.kind, items[index].material, items[index].axis, rules)
        sized[index] = _size(items[index], row, demands, table, rules, families[index]) if table else Sizing()
    return [
        sized.get(index, Sizing(findings=("not sized: its section belongs to no catalogue series",)))
        for index in range(len(items))
    ]


def _series(item: CheckInput, name: str, rules: RuleSet) -> str:
    if name in rules.catalogue.series:
        return name
    default = DEFAULT_SERIES.get(item.section.kind, "")
    return default if default in rules.catalogue.series else ""


class _Demands:
    """Demands of all beams without self-weight, from one run of the analysis."""

    def __init__(self, items: Sequence[CheckInput], rules: RuleSet) -> None:
        loads = [item.loads for item in items]
        self.factors = strength_factors(items, rules)
        self.forces = envelope(loads, self.factors)
        self.live = deflection(loads, service_factors(items, 0.0))[0].max(axis=1)
        self.dead_share = rules.deflection.steel_dead_share.value
        self.total = deflection(loads, service_factors(items, self.dead_share))[0].max(axis=1)


@dataclass(frozen=True, slots=True, eq=False)
class _Candidates:
    """One series of one kind, lightest first and of equal weights the stronger first, with braced strengths."""

    table: SectionTable
    moment: FloatArray
    shear: FloatArray


def _candidates(
    series: str, kind: SectionKind, material: Material, axis: BendingAxis, rules: RuleSet
) -> _Candidates | None:
    return _ordered(series, kind, material, axis, _ByIdentity(rules))


class _ByIdentity:
    """A rule set as a cache key: rule sets are compared by identity, not by their thousands of values."""

    def __init__(self, rules: RuleSet) -> None:
        self.rules = rules

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _ByIdentity) and self.rules is other.rules

    def __hash__(self) -> int:
        return id(self.rules)


@lru_cache(maxsize=256)
def _ordered(
    series: str, kind: SectionKind, material: Material, axis: BendingAxis, key: _ByIdentity
) -> _Candidates | None:
    rules = key.rules
    sections = tuple(section for section in rules.catalogue.series[series] if section.kind is kind)
    if not sections:
        return None
    standard = load_standard(rules.steel_method)
    table = section_table(sections)
    strength = standard.flexural_strength(table, material, 0.0, 1.0, rules.steel.factors, axis).design
    order = np.lexsort((-np.nan_to_num(strength), table.mass_per_length))
    table = section_table(tuple(sections[index] for index in order))
    shear = standard.shear_strength(table, material, 0.0, rules.steel.factors, axis).design
    return _Candidates(table, strength[order], shear)


def _size(
    item: CheckInput, row: int, demands: _Demands, candidates: _Candidates, rules: RuleSet, series: str
) -> Sizing:
    surely_strong, maybe_strong = _strong(item, row, demands, candidates, rules)
    surely_stiff, maybe_stiff = _stiff(item, row, demands, candidates, rules)
    trial = _Trial(item, candidates.table.sections, rules)
    strength = _first(surely_strong, maybe_strong, lambda index: trial.passes(index, STRENGTH))
    stiffness = _first(surely_stiff, maybe_stiff, lambda index: trial.passes(index, STIFFNESS))
    both = _first(
        surely_strong & surely_stiff,
        maybe_strong & maybe_stiff,
        lambda index: trial.passes(index, STRENGTH + STIFFNESS),
    )
    sections = candidates.table.sections
    missing = [
        f"no {series} section of the catalogue is {word} enough"
        for word, index in (("strong", strength), ("stiff", stiffness))
        if index is None
    ]
    return Sizing(
        for_strength=None if strength is None else sections[strength],
        for_stiffness=None if stiffness is None else sections[stiffness],
        for_both=None if both is None else sections[both],
        findings=tuple(missing),
    )


def _first(surely: NDArray[np.bool_], maybe: NDArray[np.bool_], passes: Callable[[int], bool]) -> int | None:
    """Lightest that surely passes, or a lighter one that may and does."""
    for index in np.flatnonzero(maybe).tolist():
        if surely[index] or passes(index):
            return int(index)
    return None


def _strong(
    item: CheckInput, row: int, demands: _Demands, candidates: _Candidates, rules: RuleSet
) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Sections that surely pass flexure and shear, and those that may."""
    span = item.loads.span
    weight = candidates.table.mass_per_length * standard_gravity()
    dead = demands.factors[row, :, LoadCase.DEAD]
    moment, place = demands.forces.moment[row], demands.forces.moment_position[row]
    own = dead[None, :] * weight[:, None]
    # The peaks of the loads and of the weight seldom coincide: their sum is an upper bound, the sum at the peak of the
    # loads a lower one. The largest shear is at a support, where both add exactly.
    upper = moment + own * span**2 / 8.0
    lower = moment + own * place * (span - place) / 2.0
    shear = demands.forces.shear[row] + own * span / 2.0
    capacity = np.nan_to_num(candidates.moment)[:, None]
    sheared = np.nan_to_num(_shear_capacity(item, candidates, rules))[:, None]
    holds = (shear <= sheared * (1.0 + SLACK)).all(axis=1)
    if item.continuously_braced or item.axis is BendingAxis.FLAT:
        surely = (upper <= capacity * (1.0 + SLACK)).all(axis=1)
        maybe = (lower <= capacity * (1.0 + 1e-6)).all(axis=1)
        return surely & holds, maybe & holds
    return np.zeros(len(holds), dtype=np.bool_), _may_buckle(item, row, demands, candidates, rules) & holds


def _shear_capacity(item: CheckInput, candidates: _Candidates, rules: RuleSet) -> FloatArray:
    """Shear strength of each section; of a round one it depends on the span."""
    if item.section.kind is not SectionKind.ROUND_HOLLOW:
        return candidates.shear
    standard = load_standard(rules.steel_method)
    return standard.shear_strength(
        candidates.table, item.material, item.loads.span / 2.0, rules.steel.factors, item.axis
    ).design


def _may_buckle(
    item: CheckInput, row: int, demands: _Demands, candidates: _Candidates, rules: RuleSet
) -> NDArray[np.bool_]:
    """Sections that may carry the loads alone between their braces, before their own weight is added."""
    standard = load_standard(rules.steel_method)
    segments = unbraced_segments(item, item.loads, demands.factors[row], demands.forces.moment_position[row], standard)
    passes = np.ones(len(candidates.table.sections), dtype=np.bool_)
    for length, gradients, moments in zip(segments.lengths, segments.gradients, segments.moments, strict=True):
        for gradient, moment in zip(gradients, moments, strict=True):
            strength = standard.flexural_strength(
                candidates.table,
                item.material,
                float(length[0]),
                float(gradient) * (1.0 + GRADIENT_SLACK),
                rules.steel.factors,
                item.axis,
            )
            passes &= np.nan_to_num(strength.design) >= moment * (1.0 - SLACK)
    return passes


def _stiff(
    item: CheckInput, row: int, demands: _Demands, candidates: _Candidates, rules: RuleSet
) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Sections that surely pass live and total deflection, and those that may."""
    span = item.loads.span
    table = candidates.table
    inertia = table.second_moment_minor if item.axis is BendingAxis.FLAT else table.second_moment_major
    rigidity = item.material.modulus_of_elasticity * inertia
    live, total = (span / divisor.value for divisor in deflection_divisors(item, rules))
    own = demands.dead_share * table.mass_per_length * standard_gravity() * 5.0 * span**4 / 384.0
    surely = (demands.live[row] <= live * rigidity * (1.0 + SLACK)) & (
        demands.total[row] + own <= total * rigidity * (1.0 + SLACK)
    )
    maybe = (demands.live[row] <= live * rigidity * (1.0 + 1e-6)) & (
        demands.total[row] <= total * rigidity * (1.0 + 1e-6)
    )
    return surely, maybe


class _Trial:
    """Checks candidates as the audit would, each once."""

    def __init__(self, item: CheckInput, sections: Sequence[Section], rules: RuleSet) -> None:
        self._item, self._sections, self._rules = item, sections, rules
        self._outcomes: dict[int, CheckOutcome] = {}

    def passes(self, index: int, names: Sequence[CheckName]) -> bool:
        if index not in self._outcomes:
            trial = replace(self._item, section=self._sections[index])
            self._outcomes[index] = check_beams([trial], self._rules)[0]
        outcome = self._outcomes[index]
        relevant = [check for check in outcome.checks if check.name in names]
        return bool(relevant) and all(check.utilization <= 1.0 + SLACK for check in relevant)
