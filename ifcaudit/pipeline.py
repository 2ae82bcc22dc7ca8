"""The whole story on one screen: from a file and a rule set to an :class:`~ifcaudit.model.audit.Audit`."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from functools import cache
from importlib.metadata import version
from os import PathLike
from pathlib import Path

from ifcaudit import assembly
from ifcaudit.assembly import Judged
from ifcaudit.checks.interface import CheckInput
from ifcaudit.checks.verdict import check_beams
from ifcaudit.floor.bearing import bearing_lines, standing_walls
from ifcaudit.floor.framing import frame_beams
from ifcaudit.floor.stacking import stack_slabs
from ifcaudit.floor.tributary import lay_out_slab
from ifcaudit.loadpath.area_loads import area_load, layout_assumptions, mass_per_area
from ifcaudit.loadpath.beam_loads import on_slope
from ifcaudit.loadpath.doubts import doubtful_beams
from ifcaudit.loadpath.members import Member
from ifcaudit.loadpath.reduction import reduction_factor
from ifcaudit.loadpath.slab_action import slab_behaviour
from ifcaudit.loadpath.takedown import BeamLoading, LoadedSlab, take_down
from ifcaudit.model.audit import Audit, BeamResult
from ifcaudit.model.building import Beam, BendingAxis, Building
from ifcaudit.model.framing import FramedBeam
from ifcaudit.model.loads import LoadCase
from ifcaudit.model.material import MaterialText
from ifcaudit.model.section import Section, SectionKind
from ifcaudit.provenance import Sourced
from ifcaudit.reading.building import read_building
from ifcaudit.rulebook.identify import identify_material, identify_section, layer_density
from ifcaudit.rulebook.loader import load_rules
from ifcaudit.rulebook.records import RuleSet
from ifcaudit.sizing.lightest import size_beams

ProgressStep = Callable[[str, int | None], None]
BOX_TOLERANCE = 0.03
"""Part by which the box of a mesh may differ from the section it is named after."""
NOTABLE_SLOPE = 0.02
"""Rise over run above which a beam is said to slope."""
SHORTEST_PLAN_LENGTH = 0.05
"""A member shorter than this in plan is upright and carries no floor as a beam [m]."""


def audit(
    path: str | PathLike[str],
    *,
    rules: str | PathLike[str] | RuleSet = "us-lrfd",
    live_load: float | None = None,
    superimposed_dead: float | None = None,
    live_load_reduction: bool | None = None,
    progress: ProgressStep = lambda stage, total: None,
) -> Audit:
    """Judge every beam of a building model.

    Args:
        path: The IFC file; it is only read.
        rules: Name of a rule set, a rule file, or a rule set already loaded.
        live_load: Live load of all floors [Pa], the whole of it; ``None`` leaves it to the rule set.
        superimposed_dead: Superimposed dead load of all floors [Pa]; ``None`` leaves it to the rule set.
        live_load_reduction: Whether the standard's reduction applies; ``None`` leaves it to the rule set.
        progress: Called with each stage's name and, when known, the number of beams in it.

    Returns:
        One result per candidate beam, the load balance, and everything that was assumed.

    Raises:
        ModelFileError: The file cannot be opened or read.
        RuleError: The rule set cannot be found or does not validate.
    """
    rule_set = _rule_set(rules, live_load, superimposed_dead, live_load_reduction=live_load_reduction)
    progress("reading", None)
    building = read_building(Path(path))
    candidates = _distinct([beam for beam in building.beams if not beam.set_aside and _has_axis(beam)])
    progress("floor layout", len(candidates))
    framed = frame_beams(candidates, building.supports)
    floors, findings = lay_out_floors(building, framed, rule_set)
    progress("load path", len(candidates))
    members = [identify(item, rule_set) for item in framed]
    takedown = take_down(members, floors, doubtful_beams(building.slabs, framed))
    progress("checks", len(candidates))
    judged = judge_all(takedown.beams, rule_set, progress)
    results = _results(building.beams, judged)
    return Audit(
        model_file=building.file_name,
        schema=building.schema,
        rules=assembly.summarise_rules(rule_set),
        beams=results,
        load_balance=takedown.balance,
        assumptions=assembly.count_assumptions(results),
        findings=(*building.findings, *findings),
        cautions=assembly.CAUTIONS,
        version=version("ifcaudit"),
    )


def _rule_set(
    rules: str | PathLike[str] | RuleSet,
    live_load: float | None,
    superimposed_dead: float | None,
    *,
    live_load_reduction: bool | None,
) -> RuleSet:
    if isinstance(rules, RuleSet):
        return rules
    return load_rules(
        rules, live_load=live_load, superimposed_dead=superimposed_dead, live_load_reduction=live_load_reduction
    )


def _has_axis(beam: Beam) -> bool:
    return not beam.unreadable and beam.plan_length > SHORTEST_PLAN_LENGTH


def _distinct(beams: Sequence[Beam]) -> list[Beam]:
    """Keep the first beam of each GlobalId: a second one cannot be told from it in any output."""
    return list({beam.global_id: beam for beam in reversed(beams)}.values())[::-1]


def identify(framed: FramedBeam, rules: RuleSet) -> Member:
    """Identify section and material of one beam."""
    beam = framed.beam
    section = identify_section(beam.profile, beam.designations, rules.catalogue)
    kind = beam.profile.kind if beam.profile else None
    material = identify_material(beam.material, section.family, rules.materials, kind=kind)
    return Member(
        framed=framed,
        section=section.section,
        series=section.family,
        material=material.material,
        problem=section.problem or _contradiction(beam, section.section) or material.problem,
        findings=(*section.findings, *material.findings, *_remarks(beam)),
    )


def _remarks(beam: Beam) -> tuple[str, ...]:
    """What the checks leave out for this beam."""
    remarks = []
    if beam.cut:
        remarks.append("its solid is cut (cope, notch or hole): the full section is checked, not what is left of it")
    if abs(beam.rise) > NOTABLE_SLOPE * beam.plan_length:
        remarks.append("it slopes: bending at right angles to it is checked, axial force is not")
    return tuple(remarks)


def _contradiction(beam: Beam, section: Sourced[Section] | None) -> str:
    """A section known by name alone must at least fit the box of its mesh: names in real exports are often wrong."""
    if section is None or beam.profile is not None:
        return ""
    named = section.value
    drawn, listed = sorted((beam.height, beam.width)), sorted((named.depth, named.width))
    if all(abs(a - b) <= BOX_TOLERANCE * b for a, b in zip(drawn, listed, strict=True)):
        return ""
    return (
        f"named {named.designation} ({named.depth * 1000:.0f} x {named.width * 1000:.0f} mm) but drawn as a mesh of "
        f"{beam.height * 1000:.0f} x {beam.width * 1000:.0f} mm: correct the one that is wrong in the model"
    )


def lay_out_floors(
    building: Building, framed: Sequence[FramedBeam], rules: RuleSet
) -> tuple[list[LoadedSlab], tuple[str, ...]]:
    """Share out every suspended slab among the beams and walls it rests on."""

    @cache
    def density_of(material: MaterialText) -> Sourced[float]:
        return layer_density(material, rules.materials, rules.loads.slab_weight_default)

    suspended = [slab for slab in building.slabs if not slab.on_grade and not slab.unreadable]
    stacks, findings = stack_slabs(suspended, [mass_per_area(slab, density_of) for slab in suspended])
    lines = bearing_lines(stacks, framed, building.supports)
    walls = standing_walls(stacks, building.supports)
    floors = []
    remarks = list(findings)
    for stack, rests_on, walls_on_it in zip(stacks, lines, walls, strict=True):
        layout = lay_out_slab(
            stack.slab.global_id,
            stack.slab.plan,
            [item.line for item in rests_on],
            slab_behaviour(stack, rules.materials),
        )
        load = area_load(stack, rules, density_of)
        taken = (*load.inputs, *layout_assumptions(stack.slab, layout, walls_on_it))
        load = replace(load, inputs=taken)
        floors.append(LoadedSlab(stack=stack, load=load, lines=rests_on, layout=layout))
        remarks.extend(f"slab {stack.slab.name or stack.slab.global_id}: {text}" for text in layout.findings)
    return floors, tuple(remarks)


def judge_all(
    loadings: Sequence[BeamLoading], rules: RuleSet, progress: ProgressStep = lambda stage, total: None
) -> list[Judged]:
    """Check and size every beam that can be checked; the others keep their reason."""
    ready = [index for index, loading in enumerate(loadings) if not assembly.missing_input(loading)]
    inputs = [check_input(loadings[index], rules) for index in ready]
    outcomes = dict(zip(ready, check_beams(inputs, rules), strict=True))
    progress("sizing", len(ready))
    series = [loadings[index].member.series for index in ready]
    sizings = dict(zip(ready, size_beams(inputs, rules, series), strict=True))
    return [
        Judged(loading=loading, outcome=outcomes.get(index), sizing=sizings.get(index))
        for index, loading in enumerate(loadings)
    ]


def check_input(loading: BeamLoading, rules: RuleSet) -> CheckInput:
    """Put together what the checks need to know about one beam."""
    member = loading.member
    assert member.section is not None  # noqa: S101 — missing_input() has turned away members without
    assert member.material is not None  # noqa: S101 — as above
    assert loading.loads is not None  # noqa: S101 — as above
    totals, beam = loading.totals, member.beam
    slope = beam.length / beam.plan_length
    round_section = member.section.value.kind in {SectionKind.ROUND, SectionKind.ROUND_HOLLOW}
    return CheckInput(
        section=member.section.value,
        material=member.material.value,
        loads=loading.loads if slope == 1.0 else on_slope(loading.loads, slope),
        axis=BendingAxis.UPRIGHT if round_section else beam.bending,
        continuously_braced=loading.continuously_braced,
        braced_positions=tuple(position * slope for position in loading.braced),
        is_roof=bool(totals[LoadCase.LIVE] + totals[LoadCase.LIVE_UNREDUCED] <= 0.0),
        live_load_factor=reduction_factor(loading, rules),
    )


def _results(beams: Sequence[Beam], judged: Sequence[Judged]) -> tuple[BeamResult, ...]:
    by_id = {item.loading.member.beam.entity_id: item for item in judged}
    results = []
    for beam in beams:
        if beam.set_aside:
            results.append(assembly.set_aside(beam))
        elif beam.entity_id in by_id:
            results.append(assembly.judge(by_id[beam.entity_id]))
        elif _has_axis(beam):
            results.append(
                assembly.unreadable(beam, f"another beam has its GlobalId {beam.global_id}: give it its own")
            )
        else:
            results.append(assembly.unreadable(beam))
    return tuple(results)
