"""Demand against capacity of simple-span beams: flexure, shear, live-load and total deflection.

Beams of one kind of section, one material and one way of bracing are checked together: the last axis of every array
below counts beams, the one before it load combinations, the first one unbraced segments.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ifcaudit.analysis.simple_beam import Forces, deflection, envelope, moment_at, reactions
from ifcaudit.checks.interface import CheckInput, CheckOutcome, Standard, distinct, load_standard
from ifcaudit.checks.strength import Strength
from ifcaudit.loadpath.beam_loads import with_uniform
from ifcaudit.model.audit import Check, CheckName
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.loads import CASE_COUNT, BeamLoads, FloatArray, LoadCase
from ifcaudit.model.section import section_table
from ifcaudit.rulebook.records import RuleSet, RuleValue
from ifcaudit.units import standard_gravity

FLOOR_LIVE = (LoadCase.LIVE, LoadCase.LIVE_UNREDUCED)
LIVE_SERVICE = (("Lr", (*FLOOR_LIVE, LoadCase.ROOF_LIVE)), ("S", (*FLOOR_LIVE, LoadCase.SNOW)))
"""Service loads for deflection: floor live load with roof live load or with snow, which do not act together."""
TOGETHER = 1024
"""Most beams checked in one array, which bounds the memory."""
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
    different, places = distinct([items[index] for index in ready])
    checked = _check_ready(different, rules, standard)
    outcomes = {index: checked[place] for index, place in zip(ready, places, strict=True)}
    return [outcomes.get(index, CheckOutcome(problem=problem)) for index, problem in enumerate(problems)]


def _problem(item: CheckInput, standard: Standard) -> str:
    family = item.material.family
    if family is not standard.MATERIAL:
        return (
            f"it is of {family.value}, for which the rule set has no method: check it by hand, "
            "or use a rule set that covers it"
        )
    material = item.material
    if not np.isfinite([material.yield_strength, material.modulus_of_elasticity]).all():
        return (
            f"grade {material.grade} has no yield strength or modulus of elasticity: "
            "add both to the grade in the rule set's materials file"
        )
    return standard.not_covered(item.section, item.axis)


def _check_ready(items: Sequence[CheckInput], rules: RuleSet, standard: Standard) -> list[CheckOutcome]:
    if not items:
        return []
    loads = [with_uniform(item.loads, self_weight(item)) for item in items]
    factors = strength_factors(items, rules)
    forces = envelope(loads, factors)
    unfit = unfit_forces(forces)
    deflections = _deflections(items, loads, rules)
    outcomes: dict[int, CheckOutcome] = {}
    for rows in _alike(items):
        group = [items[row] for row in rows]
        segments = (
            braced_throughout(forces, rows)
            if group[0].continuously_braced
            else unbraced_segments(group, [loads[row] for row in rows], factors[rows], forces.moment_position[rows])
        )
        flexures = _flexures(group, segments, rules, standard)
        shears = _shears(group, forces.shear[rows], forces.shear_position[rows], rules, standard)
        for row, flexure, shear in zip(rows.tolist(), flexures, shears, strict=True):
            if unfit[row]:
                outcomes[row] = CheckOutcome(problem=unfit[row])
            elif flexure is None or shear is None:
                outcomes[row] = CheckOutcome(problem=_slender(items[row]))
            else:
                outcomes[row] = CheckOutcome(checks=(flexure, shear, *deflections[row]))
    return [outcomes[row] for row in range(len(items))]


def _alike(items: Sequence[CheckInput]) -> Iterator[NDArray[np.int64]]:
    """Rows of beams that one array can hold: of one kind of section, material, axis and way of bracing."""
    groups: dict[object, list[int]] = {}
    for row, item in enumerate(items):
        key = (item.section.kind, item.material, item.axis, item.continuously_braced)
        groups.setdefault(key, []).append(row)
    for rows in groups.values():
        for first in range(0, len(rows), TOGETHER):
            yield np.array(rows[first : first + TOGETHER], dtype=np.int64)


def unfit_forces(forces: Forces) -> list[str]:
    """Say of each beam why its forces are outside what is checked; empty when they are inside."""
    finite = np.asarray((np.isfinite(forces.moment) & np.isfinite(forces.shear)).all(axis=1))
    # Hogging below this is rounding.
    hogs = np.asarray((forces.hogging > 1e-6 * (forces.moment + forces.shear) + 1e-6).any(axis=1))
    return [
        ""
        if known and not upwards
        else "loads act upwards on it, so that its bottom flange is compressed: check it by hand"
        if known
        else "its loads are not finite numbers: check the geometry and the weights of the slabs that it carries"
        for known, upwards in zip(finite.tolist(), hogs.tolist(), strict=True)
    ]


def _slender(item: CheckInput) -> str:
    return (
        f"{item.section.designation} has an element more slender than the clauses implemented cover: check it by hand"
    )


@dataclass(frozen=True, slots=True, eq=False)
class Segments:
    """Unbraced segments of several beams, padded with segments that have neither length nor moment.

    Attributes:
        starts: From the first support, shape (segments, beams) [m].
        lengths: Shape (segments, beams) [m].
        peaks: Where the moment is largest within each, shape (segments, combinations, beams) [m].
        largest: Moment there, of the same shape [N·m].
        quarters: Moments at the quarter points, shape (3, segments, combinations, beams) [N·m].
    """

    starts: FloatArray
    lengths: FloatArray
    peaks: FloatArray
    largest: FloatArray
    quarters: FloatArray


def braced_throughout(forces: Forces, rows: NDArray[np.int64]) -> Segments:
    """One segment of no length, which carries the largest moment of the beam all along."""
    largest = forces.moment[rows].T[None]
    none = np.zeros((1, len(rows)))
    return Segments(none, none, forces.moment_position[rows].T[None], largest, np.stack([largest] * 3))


def unbraced_segments(
    items: Sequence[CheckInput], loads: Sequence[BeamLoads], factors: FloatArray, peaks: FloatArray
) -> Segments:
    """Divide beams at their braces.

    Args:
        items: Beams.
        loads: Their loads.
        factors: Shape (beams, combinations, CASE_COUNT).
        peaks: Where each beam's moment is largest, shape (beams, combinations) [m]. On a simple span under downward
            loads the moment rises to it and falls after it, so that within a segment the nearest place is the worst.
    """
    inside = [sorted({at for at in item.braced_positions if 0.0 < at < item.loads.span}) for item in items]
    count = max(len(braces) for braces in inside) + 1
    ends = np.array(
        [[0.0, *at, *[item.loads.span] * (count - len(at))] for at, item in zip(inside, items, strict=True)]
    )
    starts, lengths = ends[:, :-1], np.diff(ends, axis=1)
    within = (starts[:, :, None] + lengths[:, :, None] * QUARTERS).reshape(len(items), 1, -1)
    nearest = np.clip(peaks[:, :, None], starts[:, None, :], ends[:, None, 1:])
    within = np.broadcast_to(within, (*peaks.shape, within.shape[2]))
    moments = np.maximum(moment_at(loads, factors, np.concatenate([within, nearest], axis=2)), 0.0)
    quarters = moments[:, :, : 3 * count].reshape(*peaks.shape, count, 3)
    return Segments(
        starts.T, lengths.T, nearest.transpose(2, 1, 0), moments[:, :, 3 * count :].transpose(2, 1, 0), quarters.T
    )


def _flexures(
    items: Sequence[CheckInput], segments: Segments, rules: RuleSet, standard: Standard
) -> list[Check | None]:
    """Flexure of beams that are alike: the largest utilization over combinations and unbraced segments."""
    gradients = standard.moment_gradient_factor(segments.largest, *segments.quarters)
    table = section_table(tuple(item.section for item in items))
    strength = standard.flexural_strength(
        table, items[0].material, segments.lengths[:, None, :], gradients, rules.steel.factors, items[0].axis
    )
    return _governing_checks(CheckName.FLEXURE, segments.largest, segments.peaks, strength, rules, standard)


def _shears(
    items: Sequence[CheckInput], shear: FloatArray, positions: FloatArray, rules: RuleSet, standard: Standard
) -> list[Check | None]:
    """Shear of beams that are alike; arrays are of shape (beams, combinations)."""
    table = section_table(tuple(item.section for item in items))
    half_spans = np.array([item.loads.span for item in items]) / 2.0
    strength = standard.shear_strength(table, items[0].material, half_spans, rules.steel.factors, items[0].axis)
    return _governing_checks(CheckName.SHEAR, shear.T[None], positions.T[None], strength, rules, standard)


_SYMBOLS = {CheckName.FLEXURE: ("M_n", "N·m"), CheckName.SHEAR: ("V_n", "N")}


def _governing_checks(
    name: CheckName, demands: FloatArray, positions: FloatArray, strength: Strength, rules: RuleSet, standard: Standard
) -> list[Check | None]:
    """The worst segment and combination of each beam; ``None`` where the strength is not covered.

    Args:
        name: Flexure or shear.
        demands: Shape (segments, combinations, beams).
        positions: Of the same shape [m].
        strength: Of a shape that broadcasts with it.
        rules: For the names of the combinations.
        standard: For its title.
    """
    shape = demands.shape
    design = np.broadcast_to(strength.design, shape)
    covered = np.asarray(~np.isnan(design).any(axis=(0, 1)))
    utilization = demands / design
    worst = np.where(covered, utilization, 0.0).reshape(-1, shape[2]).argmax(axis=0)
    at = (*np.unravel_index(worst, shape[:2]), np.arange(shape[2]))
    columns = [
        np.broadcast_to(np.asarray(values), shape)[at].tolist()
        for values in (demands, design, utilization, strength.clause, strength.limit_state, positions)
    ]
    symbol, unit = _SYMBOLS[name]
    details = _details_at({symbol: (strength.nominal, unit), **strength.details}, shape, at)
    return [
        Check(
            name=name,
            demand=demand,
            capacity=capacity,
            utilization=ratio,
            combination=rules.strength_combinations[combination].name,
            clause=f"{standard.TITLE} {clause}",
            limit_state=limit_state,
            position=position,
            details=detail,
        )
        if known
        else None
        for demand, capacity, ratio, clause, limit_state, position, combination, detail, known in zip(
            *columns, at[1].tolist(), details, covered.tolist(), strict=True
        )
    ]


def _details_at(
    details: Mapping[str, tuple[ArrayLike, str]], shape: tuple[int, ...], at: tuple[NDArray[np.intp], ...]
) -> list[tuple[tuple[str, float, str], ...]]:
    """Intermediate values of each beam, for the record."""
    columns = [
        [(name, value, unit) for value in np.broadcast_to(np.asarray(values, dtype=np.float64), shape)[at].tolist()]
        for name, (values, unit) in details.items()
    ]
    return list(zip(*columns, strict=True))


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


def _deflections(items: Sequence[CheckInput], loads: Sequence[BeamLoads], rules: RuleSet) -> list[tuple[Check, Check]]:
    """Live-load and total deflection of each beam against its span over a divisor."""
    share = rules.deflection.steel_dead_share.value
    live = deflection(loads, service_factors(items, 0.0))
    total = deflection(loads, service_factors(items, share)) if share else live
    acting = reactions(loads).sum(axis=1) > 0.0
    live_rows, total_rows = live[0].argmax(axis=1).tolist(), total[0].argmax(axis=1).tolist()
    checks = []
    for row, item in enumerate(items):
        divisors = deflection_divisors(item, rules)
        live_name = _service_name(acting[row], live_rows[row], 0.0)
        total_name = _service_name(acting[row], total_rows[row], share)
        at_live, at_total = (row, live_rows[row]), (row, total_rows[row])
        checks.append(
            (
                _deflection(
                    CheckName.LIVE_DEFLECTION, item, live[0][at_live], live[1][at_live], divisors[0], live_name
                ),
                _deflection(
                    CheckName.TOTAL_DEFLECTION, item, total[0][at_total], total[1][at_total], divisors[1], total_name
                ),
            )
        )
    return checks


def _service_name(acting: NDArray[np.bool_], row: int, dead_share: float) -> str:
    """Name the service loads of one row of :data:`LIVE_SERVICE`, without those that do not act on the beam."""
    roof, cases = LIVE_SERVICE[row]
    parts = [f"{dead_share:g} D"] if dead_share else []
    parts += ["L"] if acting[list(FLOOR_LIVE)].any() else []
    parts += [roof] if acting[cases[-1]] else []
    return " + ".join(parts) or "no live load"


def _deflection(
    name: CheckName, item: CheckInput, value: float, position: float, divisor: RuleValue, combination: str
) -> Check:
    """One deflection; ``value`` is the deflection times E I [N·m³]."""
    rigidity, span = flexural_rigidity(item), item.loads.span
    demand, limit = float(value) / rigidity, span / divisor.value
    modulus = item.material.modulus_of_elasticity
    return Check(
        name=name,
        demand=demand,
        capacity=limit,
        utilization=demand / limit,
        combination=combination,
        clause=f"span/{divisor.value:g}, {divisor.clause}",
        position=float(position),
        details=(("E", modulus, "Pa"), ("I", rigidity / modulus, "m⁴"), ("span", span, "m")),
    )
