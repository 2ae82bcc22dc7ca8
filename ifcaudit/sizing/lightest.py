"""The lightest catalogue section that passes the same checks: for strength, for stiffness, for both.

A catalogue is compared as arrays first, with bounds that are safe on either side: a section whose upper bound of the
demand passes is adequate, one whose lower bound fails is not. Only what lies between is checked, lightest first, by the
very functions of the audit. The loads that carried beams bring stay as modelled; the section's own weight follows it.

Arrays end with the axes (beams, sections); unbraced segments and load combinations come before them.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from ifcaudit.analysis.simple_beam import deflection, envelope, reactions
from ifcaudit.checks.interface import CheckInput, Standard, distinct, load_standard
from ifcaudit.checks.verdict import (
    QUARTERS,
    check_beams,
    deflection_divisors,
    service_factors,
    strength_factors,
    unbraced_segments,
    unfit_forces,
)
from ifcaudit.model.audit import CheckName
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.loads import BeamLoads, FloatArray, LoadCase
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
BOUND_SLACK = 1e-6
"""Part by which a bound may miss, so that rounding never excludes a section that passes."""
LENGTH_STEP = 0.01
"""Unbraced lengths are rounded down to this in the comparison of the whole catalogue [m]."""
MOST_VALUES = 60_000
"""Largest array of the comparison."""

BoolArray = NDArray[np.bool_]


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
    series = [_series(item, name, rules) for item, name in zip(items, series_of, strict=True)]
    problems = [_not_sized(item, name, standard) for item, name in zip(items, series, strict=True)]
    groups: dict[tuple[str, SectionKind, Material, BendingAxis, bool], list[int]] = {}
    for index, item in enumerate(items):
        if not problems[index]:
            key = (series[index], item.section.kind, item.material, item.axis, item.continuously_braced)
            groups.setdefault(key, []).append(index)
    sized = {index: Sizing(findings=(problem,)) for index, problem in enumerate(problems) if problem}
    for (name, kind, material, axis, _), rows in groups.items():
        candidates = _ordered(name, kind, material, axis, _ByIdentity(rules))
        if candidates is None:
            missing = Sizing(findings=(f"not sized: the {name} series holds no {kind.value} sections",))
            sized.update(dict.fromkeys(rows, missing))
            continue
        different, places = distinct([items[row] for row in rows])
        found = _Group(different, candidates, rules, standard).sizings(name)
        sized.update({row: found[place] for row, place in zip(rows, places, strict=True)})
    return [sized[index] for index in range(len(items))]


def _series(item: CheckInput, name: str, rules: RuleSet) -> str:
    if name in rules.catalogue.series:
        return name
    default = DEFAULT_SERIES.get(item.section.kind, "")
    return default if default in rules.catalogue.series else ""


def _not_sized(item: CheckInput, series: str, standard: Standard) -> str:
    if item.material.family is not standard.MATERIAL:
        return f"not sized: the rule set has no method for {item.material.family.value}"
    reason = standard.not_covered(item.section, item.axis)
    if reason:
        return f"not sized: {reason}"
    return "" if series else "not sized: its section belongs to no catalogue series"


class _ByIdentity:
    """A rule set as a cache key: rule sets are compared by identity, not by their thousands of values."""

    def __init__(self, rules: RuleSet) -> None:
        self.rules = rules

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _ByIdentity) and self.rules is other.rules

    def __hash__(self) -> int:
        return id(self.rules)


@dataclass(frozen=True, slots=True, eq=False)
class _Candidates:
    """One series of one kind, lightest first and of equal weights the stronger first, with braced strengths."""

    table: SectionTable
    moment: FloatArray


@lru_cache(maxsize=64)
def _ordered(
    series: str, kind: SectionKind, material: Material, axis: BendingAxis, key: _ByIdentity
) -> _Candidates | None:
    rules = key.rules
    sections = tuple(section for section in rules.catalogue.series[series] if section.kind is kind)
    if not sections:
        return None
    standard = load_standard(rules.steel_method)
    table = section_table(sections)
    # A section that the standard does not cover has no strength here, and is never proposed.
    strength = np.nan_to_num(standard.flexural_strength(table, material, 0.0, 1.0, rules.steel.factors, axis).design)
    order = np.lexsort((-strength, table.mass_per_length))
    return _Candidates(section_table(tuple(sections[index] for index in order)), strength[order])


class _Group:
    """Beams that share candidates, material, axis and way of bracing; arrays (beams, sections) narrow the choice."""

    def __init__(
        self, items: Sequence[CheckInput], candidates: _Candidates, rules: RuleSet, standard: Standard
    ) -> None:
        self.items, self.candidates, self.rules, self.standard = items, candidates, rules, standard
        self.material, self.axis = items[0].material, items[0].axis
        self.loads = [item.loads for item in items]
        self.spans = np.array([item.loads.span for item in items])
        self.weights = candidates.table.mass_per_length * standard_gravity()
        self.factors = _distinct(strength_factors(items, rules), self.loads)
        self.forces = envelope(self.loads, self.factors)
        self.surely_strong, self.maybe_strong = self._strong()
        self.surely_stiff, self.maybe_stiff = self._stiff()
        self.unfit = unfit_forces(self.forces)
        for passes in (self.surely_strong, self.maybe_strong, self.surely_stiff, self.maybe_stiff):
            passes[[bool(reason) for reason in self.unfit]] = False

    def _chunks(self, values_per_beam: int) -> Iterator[slice]:
        step = max(1, MOST_VALUES // values_per_beam)
        for first in range(0, len(self.items), step):
            yield slice(first, first + step)

    def _strong(self) -> tuple[BoolArray, BoolArray]:
        """Sections that surely pass flexure and shear, and those that may."""
        combinations = self.factors.shape[1]
        surely, maybe = [], []
        for rows in self._chunks(combinations * len(self.weights)):
            sure, may = self._strong_chunk(rows)
            surely.append(sure)
            maybe.append(may)
        sure, may = np.concatenate(surely), np.concatenate(maybe)
        if not self.items[0].continuously_braced:
            sure, may = np.zeros_like(sure), may & self._may_buckle()
        return sure, may

    def _strong_chunk(self, rows: slice) -> tuple[BoolArray, BoolArray]:
        span = self.spans[rows, None, None]
        own = self.factors[rows, :, LoadCase.DEAD, None] * self.weights
        moment, place = self.forces.moment[rows, :, None], self.forces.moment_position[rows, :, None]
        # The peaks of the loads and of the weight seldom coincide: their sum is an upper bound, the sum at the peak
        # of the loads a lower one. The largest shear is at a support, where both add exactly.
        upper = moment + own * span**2 / 8.0
        lower = moment + own * place * (span - place) / 2.0
        shear = self.forces.shear[rows, :, None] + own * span / 2.0
        capacity = self.candidates.moment
        strength = self.standard.shear_strength(
            self.candidates.table, self.material, self.spans[rows, None] / 2.0, self.rules.steel.factors, self.axis
        )
        sheared = np.broadcast_to(np.nan_to_num(strength.design), (len(span), len(self.weights)))[:, None, :]
        holds = (shear <= sheared * (1.0 + SLACK)).all(axis=1)
        surely = (upper <= capacity * (1.0 + SLACK)).all(axis=1) & holds
        maybe = (lower <= capacity * (1.0 + BOUND_SLACK)).all(axis=1) & holds
        return surely, maybe

    def _may_buckle(self) -> BoolArray:
        """Sections that may carry the moments between the braces.

        The strength of a segment is at most C_b times that under uniform moment. The moment at the peak of the loads,
        or at a quarter point, is a lower bound of the largest; with it M / C_b is one too.
        """
        segments = unbraced_segments(self.items, self.loads, self.factors, self.forces.moment_position)
        count, combinations, beams = segments.largest.shape
        places = segments.starts + segments.lengths * QUARTERS[:, None, None]
        at_quarters = places * (self.spans - places) / 2.0
        at_peaks = segments.peaks * (self.spans - segments.peaks) / 2.0
        uniform, index = self._uniform_strengths(segments.lengths)
        result = np.empty((beams, len(self.weights)), dtype=np.bool_)
        for rows in self._chunks(count * combinations * len(self.weights)):
            own = self.factors[rows, :, LoadCase.DEAD].T[:, :, None] * self.weights
            quarters = segments.quarters[..., rows, None] + own * at_quarters[:, :, None, rows, None]
            largest = segments.largest[..., rows, None] + own * at_peaks[..., rows, None]
            largest = np.maximum(largest, quarters.max(axis=0))
            gradients = np.asarray(self.standard.moment_gradient_factor(largest, *quarters))
            strength = gradients * uniform[index[:, rows]][:, None] * (1.0 + BOUND_SLACK)
            result[rows] = (largest <= strength).all(axis=(0, 1))
        return result

    def _uniform_strengths(self, lengths: FloatArray) -> tuple[FloatArray, NDArray[np.intp]]:
        """Strengths under uniform moment, shape (lengths, sections), and the row of each segment in them."""
        steps, index = np.unique(np.floor(lengths / LENGTH_STEP), return_inverse=True)
        strength = self.standard.flexural_strength(
            self.candidates.table,
            self.material,
            steps[:, None] * LENGTH_STEP,
            1.0,
            self.rules.steel.factors,
            self.axis,
        )
        return np.nan_to_num(strength.design), index.reshape(lengths.shape)

    def _stiff(self) -> tuple[BoolArray, BoolArray]:
        """Sections that surely pass live and total deflection, and those that may."""
        share = self.rules.deflection.steel_dead_share.value
        live = deflection(self.loads, service_factors(self.items, 0.0))[0].max(axis=1)[:, None]
        total = deflection(self.loads, service_factors(self.items, share))[0].max(axis=1)[:, None]
        table = self.candidates.table
        inertia = table.second_moment_minor if self.axis is BendingAxis.FLAT else table.second_moment_major
        divisors = [[divisor.value for divisor in deflection_divisors(item, self.rules)] for item in self.items]
        limits = self.spans[:, None] / np.array(divisors)
        rigidity = self.material.modulus_of_elasticity * inertia
        own = share * self.weights * 5.0 * self.spans[:, None] ** 4 / 384.0

        def within(upper: FloatArray, slack: float) -> BoolArray:
            allowed = rigidity * (1.0 + slack)
            return np.asarray((live <= limits[:, :1] * allowed) & (upper <= limits[:, 1:] * allowed))

        return within(total + own, SLACK), within(total, BOUND_SLACK)

    def sizings(self, series: str) -> list[Sizing]:
        """Settle what the bounds leave open, and name the lightest."""
        while self._check_open():
            pass
        strong, stiff, both = (_first(maybe) for _, maybe in self._targets())
        return [
            Sizing(findings=(f"not sized: {reason}",)) if reason else self._sizing(series, *chosen)
            for reason, *chosen in zip(self.unfit, strong, stiff, both, strict=True)
        ]

    def _targets(self) -> tuple[tuple[BoolArray, BoolArray], ...]:
        """What surely passes and what may, for strength, for stiffness and for both."""
        strong, stiff = (self.surely_strong, self.maybe_strong), (self.surely_stiff, self.maybe_stiff)
        return strong, stiff, (strong[0] & stiff[0], strong[1] & stiff[1])

    def _check_open(self) -> bool:
        """Check the lightest sections that may pass and are not sure to; say whether there were any."""
        beams = np.arange(len(self.items))
        pairs: set[tuple[int, int]] = set()
        for surely, maybe in self._targets():
            first = maybe.argmax(axis=1)
            is_open = maybe[beams, first] & ~surely[beams, first]
            pairs.update(zip(beams[is_open].tolist(), first[is_open].tolist(), strict=True))
        trials = sorted(pairs)
        sections = self.candidates.table.sections
        outcomes = check_beams(
            [replace(self.items[beam], section=sections[index]) for beam, index in trials], self.rules
        )
        for (beam, index), outcome in zip(trials, outcomes, strict=True):
            passed = {check.name for check in outcome.checks if check.utilization <= 1.0 + SLACK}
            self.surely_strong[beam, index] = self.maybe_strong[beam, index] = passed.issuperset(STRENGTH)
            self.surely_stiff[beam, index] = self.maybe_stiff[beam, index] = passed.issuperset(STIFFNESS)
        return bool(trials)

    def _sizing(self, series: str, strength: int | None, stiffness: int | None, both: int | None) -> Sizing:
        sections = self.candidates.table.sections
        missing = [
            f"no {series} section of the catalogue is {word} enough"
            for word, index in (("strong", strength), ("stiff", stiffness))
            if index is None
        ]
        if both is None and not missing:
            missing.append(f"no {series} section of the catalogue is both strong and stiff enough")
        return Sizing(
            for_strength=None if strength is None else sections[strength],
            for_stiffness=None if stiffness is None else sections[stiffness],
            for_both=None if both is None else sections[both],
            findings=tuple(missing),
        )


def _distinct(factors: FloatArray, loads: Sequence[BeamLoads]) -> FloatArray:
    """Leave out load combinations that differ from another only in loads which act on none of the beams.

    Args:
        factors: Shape (beams, combinations, CASE_COUNT).
        loads: Of each beam.
    """
    acting = (reactions(loads) != 0.0).any(axis=(0, 1))
    acting[LoadCase.DEAD] = True  # self-weight
    rows = factors[:, :, acting].transpose(1, 0, 2).reshape(factors.shape[1], -1)
    _, kept = np.unique(rows, axis=0, return_index=True)
    return factors[:, np.sort(kept)]


def _first(passes: BoolArray) -> list[int | None]:
    """Index of the first section that passes, per beam."""
    found = np.asarray(passes.any(axis=1)).tolist()
    return [index if known else None for index, known in zip(passes.argmax(axis=1).tolist(), found, strict=True)]
