"""Takes small scenes down and judges them, with one section and one grade for every beam."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import cache

from helpers.scene import beam, column, slab
from shapely import Polygon, box

from ifcaudit import assembly
from ifcaudit.floor.bearing import bearing_lines
from ifcaudit.floor.framing import frame_beams
from ifcaudit.floor.stacking import stack_slabs
from ifcaudit.floor.tributary import lay_out_slab
from ifcaudit.loadpath.area_loads import area_load, mass_per_area
from ifcaudit.loadpath.members import Member
from ifcaudit.loadpath.takedown import BeamLoading, LoadedSlab, Takedown, take_down
from ifcaudit.model.audit import BeamResult
from ifcaudit.model.building import Beam, Slab, VerticalSupport
from ifcaudit.model.framing import SlabBehaviour
from ifcaudit.pipeline import judge_all
from ifcaudit.provenance import Source, Sourced
from ifcaudit.rulebook.loader import load_rules
from ifcaudit.rulebook.records import RuleSet

GRAVITY = 9.80665


@cache
def rules() -> RuleSet:
    """Rules with loads that are easy to add up: 3 kPa live, no partitions, 0.5 kPa superimposed."""
    return load_rules("us-lrfd", live_load=3000.0, superimposed_dead=500.0)


def run(
    beams: Sequence[Beam],
    supports: Sequence[VerticalSupport],
    slabs: Sequence[Slab],
    *,
    rule_set: RuleSet | None = None,
    doubts: Mapping[str, Sequence[str]] | None = None,
    unknown: Sequence[str] = (),
) -> Takedown:
    """Take a scene's loads down with W16X26 beams of A992; those named ``unknown`` have no known material."""
    used = rule_set or rules()
    section = next(item for item in rules().catalogue.series["W"] if item.designation == "W16X26")
    material = rules().materials.grades["A992"]
    framed = frame_beams(beams, supports)
    members = [
        Member(
            framed=item,
            section=Sourced(value=section, source=Source.MODEL),
            series="W",
            material=None if item.beam.name in unknown else Sourced(value=material, source=Source.MODEL),
        )
        for item in framed
    ]

    def density(material: object) -> Sourced[float]:
        return Sourced(value=2400.0, source=Source.MODEL)

    stacks, _ = stack_slabs(slabs, [mass_per_area(item, density) for item in slabs])
    lines = bearing_lines(stacks, framed, supports)
    floors = [
        LoadedSlab(
            stack=stack,
            load=area_load(stack, used, density),
            lines=rests_on,
            layout=lay_out_slab(
                stack.slab.global_id, stack.slab.plan, [item.line for item in rests_on], SlabBehaviour()
            ),
        )
        for stack, rests_on in zip(stacks, lines, strict=True)
    ]
    return take_down(members, floors, doubts or {})


def bay(plan: Polygon | None = None) -> tuple[list[Beam], list[VerticalSupport], list[Slab]]:
    """A bay 9 m by 6 m: girders along x at y = 0 and 6, joists along y at x = 0, 3, 6, 9, columns at the corners."""
    girders = [beam("G0", (0, 0), (9, 0), height=0.5), beam("G6", (0, 6), (9, 6), height=0.5)]
    joists = [beam(f"J{x}", (x, 0.02), (x, 5.98), height=0.4) for x in (0, 3, 6, 9)]
    columns = [column(f"C{x}{y}", x, y) for x in (0, 9) for y in (0, 6)]
    return girders + joists, columns, [slab("S", plan or box(0, 0, 9, 6))]


def loading(result: Takedown, name: str) -> BeamLoading:
    """Return one beam's loading."""
    return next(item for item in result.beams if item.member.beam.name == name)


def verdicts(result: Takedown, rule_set: RuleSet | None = None) -> dict[str, BeamResult]:
    """Judge every beam of a scene, by name."""
    judged = judge_all(result.beams, rule_set or rules())
    return {item.loading.member.beam.name: assembly.judge(item) for item in judged}
