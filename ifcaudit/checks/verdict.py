"""Demand against capacity of simple-span beams: flexure, shear, live-load and total deflection."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from ifcaudit.analysis.simple_beam import Forces, deflection, envelope, moment_at
from ifcaudit.checks.interface import CheckInput, CheckOutcome, Standard, load_standard
from ifcaudit.checks.standards.aisc_360 import Strength, details_at
from ifcaudit.loadpath.beam_loads import with_uniform
from ifcaudit.model.audit import Check, CheckName
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.loads import CASE_COUNT, BeamLoads, FloatArray, LoadCase
from ifcaudit.model.material import Material
from ifcaudit.model.section import Section
from ifcaudit.rulebook.records import RuleSet, RuleValue
from ifcaudit.units import standard_gravity

LIVE_SERVICE = (
    ("L + Lr", (LoadCase.LIVE, LoadCase.LIVE_UNREDUCED, LoadCase.ROOF_LIVE)),
    ("L + S", (LoadCase.LIVE, LoadCase.LIVE_UNREDUCED, LoadCase.SNOW)),
)
"""Service loads for live-load deflection; roof live load and snow do not act together."""
QUARTERS = np.array([0.25, 0.5, 0.75])


def self_weight(item: CheckInput) -> FloatArray:
    """Weight of the section as an intensity per case [N/m]."""
    intensity = np.zeros(CASE_COUNT)
    intensity[LoadCase.DEAD] = item.section.mass_per_length * standard_gravity()
    return intensity


def strength_factors(items: Sequence[CheckInput], rules: RuleSet) -> FloatArray:
    """Load factors, shape (beams, combinations, CASE_COUNT); reducible live load with each beam's share."""
    base = np.zeros((len(rules.strength_combinations), CASE_COUNT))
    for row, combination in enumerate(rules.strength_combinations):
        for case, factor in combination.factors.items():
            base[row, case] = factor
    return _reduced(base, items)


def _reduced(base: FloatArray, items: Sequence[CheckInput]) -> FloatArray:
    factors = np.repeat(base[None], len(items), axis=0)
    factors[:, :, LoadCase.LIVE] *= np.array([item.live_load_factor for item in items])[:, None]
    return factors


def service_factors(items: Sequence[CheckInput], dead_share: float) -> FloatArray:
    """Factors for deflection under live load, with a share of the dead load added; shape (beams, 2, CASE_COUNT)."""
    base = np.zeros((len(LIVE_SERVICE), CASE_COUNT))
    for row, (_, cases) in enumerate(LIVE_SERVICE):
        base[row, list(cases)] = 1.0
    base[:, LoadCase.DEAD] = dead_share
    return _reduced(base, items)


def check_beams(items: Sequence[CheckInput], rules: RuleSet) -> list[CheckOutcome]:
    """Check beams together.

    Args:
        items: Beams with their loads.
        rules: Combinations, limits and resistance factors.

    Returns:
        One outcome per beam, in order.
    """
    standard = load_standard(rules.steel_method)
    problems = [_problem(item, standard) for item in items]
    ready = [index for index, problem in enumerate(problems) if not problem]
    outcomes = dict(zip(ready, _check_ready([items[index] for index in ready], rules, standard), strict=True))
    return [outcomes.get(index, CheckOutcome(problem=problem)) for index, problem in enumerate(problems)]


def _problem(item: CheckInput, standard: Standard) -> str:
    family = item.material.family
    if family is not standard.MATERIAL:
        return (
            f"it is of {family.value}, for which the rule set has no method: check it by hand, "
            "or use a rule set that covers it"
        )
    return standard.not_covered(item.section, item.axis)


def _check_ready(items: Sequence[CheckInput], rules: RuleSet, standard: Standard) -> list[CheckOutcome]:
    if not items:
        return []
    loads = [with_uniform(item.loads, self_weight(item)) for item in items]
    factors = strength_factors(items, rules)
    forces = envelope(loads, factors)
    live = deflection(loads, service_factors(items, 0.0))
    total = deflection(loads, service_factors(items, rules.deflection.steel_dead_share.value))
    outcomes = []
    for row, item in enumerate(items):
        flexure = _flexure(item, loads[row], factors[row], _row(forces, row), rules, standard)
        shear = _shear(item, _row(forces, row), rules, standard)
        if flexure is None or shear is None:
            outcomes.append(CheckOutcome(problem=_slender(item)))
            continue
        deflections = _deflections(
            item,
            (live[0][row], live[1][row]),
            (total[0][row], total[1][row]),
            rules,
        )
        outcomes.append(CheckOutcome(checks=(flexure, shear, *deflections)))
    return outcomes


def _slender(item: CheckInput) -> str:
    return (
        f"{item.section.designation} has an element more slender than the clauses implemented cover: check it by hand"
    )


@dataclass(frozen=True, slots=True, eq=False)
class _BeamForces:
    """Extremes of one beam, per combination."""

    moment: FloatArray
    moment_position: FloatArray
    shear: FloatArray
    shear_position: FloatArray


def _row(forces: Forces, row: int) -> _BeamForces:
    return _BeamForces(forces.moment[row], forces.moment_position[row], forces.shear[row], forces.shear_position[row])


@dataclass(frozen=True, slots=True, eq=False)
class Segments:
    """Unbraced segments of one beam: lengths (segments,), and per segment and combination C_b and the largest moment.

    Attributes:
        lengths: Shape (segments, 1) [m].
        gradients: C_b, shape (segments, combinations).
        moments: Largest moment within each, shape (segments, combinations) [N·m].
        positions: Where it occurs, of the same shape [m].
    """

    lengths: FloatArray
    gradients: FloatArray
    moments: FloatArray
    positions: FloatArray


def unbraced_segments(
    item: CheckInput, loads: BeamLoads, factors: FloatArray, peak_positions: FloatArray, standard: Standard
) -> Segments:
    """Divide a beam at its braces. On a simple span under downward loads the moment rises to one peak and falls."""
    ends = np.array([0.0, *item.braced_positions, loads.span])
    starts, lengths = ends[:-1], np.diff(ends)
    inner = starts[:, None] + lengths[:, None] * QUARTERS
    peaks = np.clip(peak_positions[None, :], starts[:, None], ends[1:, None])
    places = np.concatenate([inner.ravel(), peaks.ravel()])
    moments = moment_at([loads], factors, places[None, :])[0]
    at_quarters = moments[:, : inner.size].reshape(len(factors), *inner.shape)
    at_peaks = moments[:, inner.size :].reshape(len(factors), *peaks.shape)
    largest = np.maximum(np.diagonal(at_peaks, axis1=0, axis2=2), 0.0)
    gradients = standard.moment_gradient_factor(
        largest, at_quarters[:, :, 0].T, at_quarters[:, :, 1].T, at_quarters[:, :, 2].T
    )
    return Segments(lengths[:, None], np.asarray(gradients), largest, peaks)


def _flexure(
    item: CheckInput,
    loads: BeamLoads,
    factors: FloatArray,
    forces: _BeamForces,
    rules: RuleSet,
    standard: Standard,
) -> Check | None:
    """Largest utilization over combinations and unbraced segments."""
    if item.continuously_braced or item.axis is BendingAxis.FLAT:
        strength = _braced_strength(item, rules)
        demands, positions = forces.moment[None, :], forces.moment_position[None, :]
    else:
        segments = unbraced_segments(item, loads, factors, forces.moment_position, standard)
        strength = standard.flexural_strength(
            item.section, item.material, segments.lengths, segments.gradients, rules.steel.factors, item.axis
        )
        demands, positions = segments.moments, segments.positions
    design = np.broadcast_to(strength.design, demands.shape)
    if np.isnan(design).any():
        return None
    utilization = demands / design
    place = np.unravel_index(int(utilization.argmax()), utilization.shape)
    segment, combination = int(place[0]), int(place[1])
    inside = (segment, combination) if strength.nominal.shape == demands.shape else ()
    return Check(
        name=CheckName.FLEXURE,
        demand=float(demands[segment, combination]),
        capacity=float(design[segment, combination]),
        utilization=float(utilization[segment, combination]),
        combination=rules.strength_combinations[combination].name,
        clause=f"{standard.TITLE} {strength.clause}",
        limit_state=str(np.broadcast_to(strength.limit_state, demands.shape)[segment, combination]),
        position=float(positions[segment, combination]),
        details=(
            ("M_n", float(np.broadcast_to(strength.nominal, demands.shape)[segment, combination]), "N·m"),
            *details_at(strength, inside),
        ),
    )


def _braced_strength(item: CheckInput, rules: RuleSet) -> Strength:
    """Strength of a held compression flange: the same for every beam of one section and material."""
    factors = tuple(sorted(rules.steel.factors.items()))
    return _cached_strength(rules.steel_method, item.section, item.material, item.axis, factors)


@lru_cache(maxsize=4096)
def _cached_strength(
    method: str, section: Section, material: Material, axis: BendingAxis, factors: tuple[tuple[str, RuleValue], ...]
) -> Strength:
    return load_standard(method).flexural_strength(section, material, 0.0, 1.0, dict(factors), axis)


def _shear(item: CheckInput, forces: _BeamForces, rules: RuleSet, standard: Standard) -> Check | None:
    strength = standard.shear_strength(
        item.section, item.material, item.loads.span / 2.0, rules.steel.factors, item.axis
    )
    design = float(strength.design)
    if np.isnan(design):
        return None
    row = int(forces.shear.argmax())
    demand = float(forces.shear[row])
    return Check(
        name=CheckName.SHEAR,
        demand=demand,
        capacity=design,
        utilization=demand / design,
        combination=rules.strength_combinations[row].name,
        clause=f"{standard.TITLE} {strength.clause}",
        limit_state=str(strength.limit_state),
        position=float(forces.shear_position[row]),
        details=(("V_n", float(strength.nominal), "N"), *details_at(strength, ())),
    )


def flexural_rigidity(item: CheckInput) -> float:
    """E I about the axis that gravity bends it [N·m²]."""
    section = item.section
    inertia = section.second_moment_minor if item.axis is BendingAxis.FLAT else section.second_moment_major
    return item.material.modulus_of_elasticity * inertia


def deflection_divisors(item: CheckInput, rules: RuleSet) -> tuple[RuleValue, RuleValue]:
    """Divisors of the span for live load and for total load."""
    limits = rules.deflection
    if item.is_roof:
        return limits.roof_live_divisor, limits.roof_total_divisor
    return limits.floor_live_divisor, limits.floor_total_divisor


def _deflections(
    item: CheckInput,
    live: tuple[FloatArray, FloatArray],
    total: tuple[FloatArray, FloatArray],
    rules: RuleSet,
) -> tuple[Check, Check]:
    """Live-load and total deflection against the span over a divisor."""
    rigidity, span = flexural_rigidity(item), item.loads.span
    divisors = deflection_divisors(item, rules)
    share = rules.deflection.steel_dead_share.value
    dead = f"{share:g} D + " if share else ""
    checks = []
    for name, (values, positions), divisor, prefix in (
        (CheckName.LIVE_DEFLECTION, live, divisors[0], ""),
        (CheckName.TOTAL_DEFLECTION, total, divisors[1], dead),
    ):
        row = int(values.argmax())
        demand, limit = float(values[row]) / rigidity, span / divisor.value
        checks.append(
            Check(
                name=name,
                demand=demand,
                capacity=limit,
                utilization=demand / limit,
                combination=prefix + LIVE_SERVICE[row][0],
                clause=f"span/{divisor.value:g}, {divisor.clause}",
                position=float(positions[row]),
                details=(
                    ("E", item.material.modulus_of_elasticity, "Pa"),
                    ("I", rigidity / item.material.modulus_of_elasticity, "m⁴"),
                    ("span", span, "m"),
                ),
            )
        )
    return checks[0], checks[1]
