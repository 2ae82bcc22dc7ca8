"""Puts a verdict together from what each stage found; the one place that decides a status."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass

from ifcaudit.checks.interface import CheckOutcome
from ifcaudit.loadpath.takedown import LIVE_CASES, BeamLoading
from ifcaudit.model.audit import Assumption, BeamResult, Check, CheckName, RuleSummary, Status
from ifcaudit.model.building import Beam
from ifcaudit.model.framing import EndSupport
from ifcaudit.model.loads import LoadCase
from ifcaudit.model.section import Section
from ifcaudit.provenance import Source, Sourced, weakest
from ifcaudit.rulebook.records import RuleSet
from ifcaudit.sizing.lightest import Sizing

CAUTIONS = (
    (
        "A screening aid for qualified engineers. It does not replace design or review by a licensed professional, "
        "or the local building code."
    ),
    (
        "Not covered: loads of walls, stairs, facades and equipment; connections, web openings, notches and local web "
        "strength, torsion, axial force, lateral loads, composite action, fire, fatigue, seismic detailing, vibration, "
        "ponding, erection."
    ),
)
DEFLECTIONS = (CheckName.LIVE_DEFLECTION, CheckName.TOTAL_DEFLECTION)
TOLERANCE = 1e-9
"""A utilization above one by less than rounding is not a failure."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Judged:
    """One member with everything the stages found about it; later parts are ``None`` where a stage did not run."""

    loading: BeamLoading
    outcome: CheckOutcome | None = None
    sizing: Sizing | None = None


def set_aside(beam: Beam) -> BeamResult:
    """Return the result of an element that is no load-carrying beam."""
    return BeamResult(
        global_id=beam.global_id,
        entity_id=beam.entity_id,
        name=beam.name,
        storey=beam.storey,
        status=Status.SET_ASIDE,
        reason=beam.set_aside,
        findings=beam.findings,
    )


def unreadable(beam: Beam, reason: str = "") -> BeamResult:
    """Return the result of a beam whose geometry could not be read."""
    return BeamResult(
        global_id=beam.global_id,
        entity_id=beam.entity_id,
        name=beam.name,
        storey=beam.storey,
        status=Status.NOT_CHECKED,
        reason=reason or beam.unreadable or "its axis has no length in plan: check its geometry in the model",
        findings=beam.findings,
    )


def missing_input(loading: BeamLoading) -> str:
    """Say what keeps a beam from being checked; empty when nothing does."""
    member = loading.member
    if loading.problem:
        return loading.problem
    if member.problem:
        return member.problem
    if member.section is None or member.material is None:
        return "its section or material is not known: name them in the model"
    if loading.tributary_area <= 0.0:
        if loading.uncertain:
            return f"no floor load reaches it, and {loading.uncertain[0]}"
        return (
            "no floor load reaches it: no slab rests on it or on beams that it carries; "
            "add the slab to the model, or check it for its own loads by hand"
        )
    return ""


def judge(judged: Judged) -> BeamResult:
    """Turn what the stages found into one result."""
    loading, outcome = judged.loading, judged.outcome
    member, beam = loading.member, loading.member.beam
    checks = outcome.checks if outcome else ()
    status, reason = _status(loading, outcome)
    governing = max(checks, key=lambda check: check.utilization, default=None)
    inputs = _inputs(loading)
    by_name = {check.name: check for check in checks}
    flexure, shear = by_name.get(CheckName.FLEXURE), by_name.get(CheckName.SHEAR)
    deflection = max(
        (check for check in checks if check.name in DEFLECTIONS), key=lambda check: check.utilization, default=None
    )
    live_deflection = by_name.get(CheckName.LIVE_DEFLECTION)
    sizing = judged.sizing
    known = loading.loads is not None
    return BeamResult(
        global_id=beam.global_id,
        entity_id=beam.entity_id,
        name=beam.name,
        storey=beam.storey,
        status=status,
        reason=reason,
        governing=governing.name.value if governing else "",
        utilization=governing.utilization if governing else None,
        section=member.section.value.designation if member.section else "",
        section_source=member.section.source.label if member.section else "",
        grade=member.material.value.grade if member.material else "",
        grade_source=member.material.source.label if member.material else "",
        span=loading.loads.span if loading.loads else None,
        tributary_width=loading.tributary_width if known else None,
        tributary_area=loading.tributary_area if known else None,
        dead_load=float(loading.totals[LoadCase.DEAD]) if known and member.mass_per_length is not None else None,
        live_load=float(loading.totals[list(LIVE_CASES)].sum()) if known else None,
        moment=flexure.demand if flexure else None,
        moment_capacity=flexure.capacity if flexure else None,
        flexure_utilization=flexure.utilization if flexure else None,
        shear=shear.demand if shear else None,
        shear_capacity=shear.capacity if shear else None,
        shear_utilization=shear.utilization if shear else None,
        live_deflection=live_deflection.demand if live_deflection else None,
        live_deflection_limit=live_deflection.capacity if live_deflection else None,
        deflection_utilization=deflection.utilization if deflection else None,
        sized_for_strength=_designation(sizing.for_strength) if sizing else "",
        sized_for_stiffness=_designation(sizing.for_stiffness) if sizing else "",
        sized=_designation(sizing.for_both) if sizing else "",
        start_support=_support(member.framed.start),
        end_support=_support(member.framed.end),
        findings=_findings(loading, outcome, sizing),
        assumptions=_assumptions(inputs),
        checks=checks,
        inputs=inputs,
    )


def _status(loading: BeamLoading, outcome: CheckOutcome | None) -> tuple[Status, str]:
    missing = missing_input(loading)
    if missing:
        return Status.NOT_CHECKED, missing
    if outcome is None or outcome.problem or not outcome.checks:
        problem = outcome.problem if outcome else "no check was made"
        return Status.NOT_CHECKED, problem or "the rule set has no check for it"
    worst = max(outcome.checks, key=lambda check: check.utilization)
    if worst.utilization > 1.0 + TOLERANCE:
        return Status.INADEQUATE, _verdict_text(worst)
    if loading.uncertain:
        return (
            Status.NOT_CHECKED,
            f"its loads may be incomplete: {loading.uncertain[0]}; for the loads found, {_verdict_text(worst)}",
        )
    return Status.ADEQUATE, _verdict_text(worst)


def _verdict_text(check: Check) -> str:
    state = f", {check.limit_state}" if check.limit_state else ""
    return f"{check.name.value} governs at {check.utilization:.2f} ({check.combination}; {check.clause}{state})"


def _designation(section: Section | None) -> str:
    return section.designation if section else ""


def _support(support: EndSupport | None) -> str:
    return f"{support.carrier.value} {support.name or support.global_id}" if support else ""


def _findings(loading: BeamLoading, outcome: CheckOutcome | None, sizing: Sizing | None) -> tuple[str, ...]:
    member = loading.member
    return tuple(
        dict.fromkeys(
            (
                *member.beam.findings,
                *member.framed.findings,
                *member.findings,
                *loading.findings,
                *loading.uncertain,
                *(outcome.findings if outcome else ()),
                *(sizing.findings if sizing else ()),
            )
        )
    )


def _inputs(loading: BeamLoading) -> tuple[tuple[str, Sourced[object]], ...]:
    """Every input of the verdict with its source."""
    member = loading.member
    inputs: dict[tuple[str, str], tuple[str, Sourced[object]]] = {}
    if member.section:
        inputs["section", ""] = (
            "section",
            Sourced(
                value=member.section.value.designation,
                source=member.section.source,
                where=member.section.where,
                remedy=member.section.remedy,
            ),
        )
    if member.material:
        material = member.material
        inputs["grade", ""] = (
            "grade",
            Sourced(value=material.value.grade, source=material.source, where=material.where, remedy=material.remedy),
        )
    if loading.loads:
        inputs["span", ""] = (
            "span",
            Sourced(value=loading.loads.span, source=Source.DERIVED, where="between the centres of its supports"),
        )
        inputs["bracing", ""] = ("bracing of the compression flange", _bracing(loading))
    for slab in loading.slabs:
        for name, sourced in slab.load.inputs:
            inputs.setdefault((name, sourced.where), (name, sourced))
    return tuple(inputs.values())


def _bracing(loading: BeamLoading) -> Sourced[object]:
    if loading.continuously_braced:
        return Sourced(
            value="continuous", source=Source.DERIVED, where="a slab bears on the top flange along the whole span"
        )
    if loading.braced:
        stations = ", ".join(f"{station:.2f}" for station in loading.braced[:12])
        return Sourced(
            value=f"{len(loading.braced)} points",
            source=Source.DERIVED,
            where=f"beams framing in and slab edges at {stations} m from the first support",
        )
    return Sourced(value="ends only", source=Source.DERIVED, where="no slab on the top flange and no beam framing in")


def _assumptions(inputs: Sequence[tuple[str, Sourced[object]]]) -> tuple[str, ...]:
    return tuple(
        dict.fromkeys(f"{name}: {sourced.where}" for name, sourced in inputs if sourced.source is Source.ASSUMED)
    )


def provenance(result: BeamResult) -> Source:
    """The weakest source among the inputs of one verdict."""
    return weakest(sourced for _, sourced in result.inputs)


def count_assumptions(results: Sequence[BeamResult]) -> tuple[Assumption, ...]:
    """List what was assumed, for how many beams, most beams first."""
    counts: Counter[tuple[str, str]] = Counter()
    for result in results:
        counts.update(
            {
                (f"{name}: {sourced.where}", sourced.remedy)
                for name, sourced in result.inputs
                if sourced.source is Source.ASSUMED
            }
        )
    ordered = sorted(counts.items(), key=lambda item: (-item[1], item[0]))
    return tuple(Assumption(text=text, remedy=remedy, beams=beams) for (text, remedy), beams in ordered)


def summarise_rules(rules: RuleSet) -> RuleSummary:
    """State the rule set as every output must."""
    loads = rules.loads
    named = (
        ("floor live load", loads.floor_live),
        ("partition allowance", loads.partitions),
        ("superimposed dead load, floors", loads.superimposed_dead),
        ("superimposed dead load, roofs", loads.roof_superimposed_dead),
        ("roof live load", loads.roof_live),
        ("snow load", loads.snow),
    )
    values = [(name, value.text, "command line" if value.overridden else value.clause) for name, value in named]
    values.append(
        ("live-load reduction", "applied" if rules.reduction.enabled else "not applied", rules.reduction.clause)
    )
    return RuleSummary(name=rules.name, title=rules.title, editions=rules.editions, values=tuple(values))
