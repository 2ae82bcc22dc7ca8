"""Whole checks of beams, by hand: demands with self-weight, bracing, service loads, and what is not checked."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise
from math import nan, sqrt

import numpy as np
import pytest
from helpers.beam_cases import FOOT, KIP_FOOT, KIP_PER_FOOT, KSI, loads, steel, together

from ifcaudit.checks.interface import CheckInput, CheckOutcome
from ifcaudit.checks.standards.aisc_360 import flexural_strength, moment_gradient_factor
from ifcaudit.checks.verdict import check_beams
from ifcaudit.model.audit import Check, CheckName
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.loads import BeamLoads, LoadCase
from ifcaudit.model.material import MaterialFamily
from ifcaudit.model.section import ProfileShape, SectionKind
from ifcaudit.rulebook.loader import load_rules
from ifcaudit.rulebook.records import RuleSet
from ifcaudit.rulebook.section_properties import section_from_dimensions
from ifcaudit.sizing.lightest import Sizing, size_beams

RULES = load_rules()
SECTIONS = {section.designation: section for part in RULES.catalogue.series.values() for section in part}
G = 9.80665
STEEL = steel()


def uniform(span: float, intensity: float, case: LoadCase) -> BeamLoads:
    """A uniform load of one case."""
    return loads(span, [(0, span, intensity, intensity)], case=case)


def checked(item: CheckInput, rules: RuleSet = RULES) -> dict[CheckName, Check]:
    """Checks of one beam by name."""
    outcome = check_beams([item], rules)[0]
    assert outcome.problem == ""
    return {check.name: check for check in outcome.checks}


def detail(check: Check, name: str) -> float:
    """One intermediate value of the record."""
    return next(value for symbol, value, _ in check.details if symbol == name)


def test_floor_beam_by_hand() -> None:
    """W16X26 on 7.2 m under D = 6 kN/m and L = 9 kN/m, braced throughout, each number worked out here.

    Self-weight 26 lb/ft. Flexure phi M_n = 166 kip-ft and shear phi V_n = 106 kip: Manual Table 3-2, from memory.
    """
    span, section = 7.2, SECTIONS["W16X26"]
    item = CheckInput(
        section=section,
        material=STEEL,
        loads=together(uniform(span, 6e3, LoadCase.DEAD), uniform(span, 9e3, LoadCase.LIVE)),
        continuously_braced=True,
    )
    checks = checked(item)
    weight = 26 * 0.45359237 / FOOT * G
    factored = 1.2 * (6e3 + weight) + 1.6 * 9e3
    flexure, shear = checks[CheckName.FLEXURE], checks[CheckName.SHEAR]
    assert flexure.demand == pytest.approx(factored * span**2 / 8, rel=1e-9)
    assert flexure.capacity / KIP_FOOT == pytest.approx(166, rel=3e-3)
    assert flexure.utilization == pytest.approx(flexure.demand / flexure.capacity, rel=1e-12)
    assert flexure.position == pytest.approx(span / 2)
    assert flexure.clause == "AISC 360-22 F2"
    assert flexure.limit_state == "yielding"
    assert flexure.combination == "1.2D + 1.6L + 0.5Lr"
    assert (detail(flexure, "L_b"), detail(flexure, "C_b"), detail(flexure, "phi_b")) == (0.0, 1.0, 0.9)
    assert detail(flexure, "M_n") == pytest.approx(flexure.capacity / 0.9)
    assert shear.demand == pytest.approx(factored * span / 2, rel=1e-9)
    assert shear.capacity / (KIP_FOOT / FOOT) == pytest.approx(106, rel=3e-3)
    assert (shear.clause, detail(shear, "phi_v")) == ("AISC 360-22 G2.1", 0.9)
    rigidity = 29_000 * KSI * section.second_moment_major
    live, total = checks[CheckName.LIVE_DEFLECTION], checks[CheckName.TOTAL_DEFLECTION]
    assert live.demand == pytest.approx(5 * 9e3 * span**4 / 384 / rigidity, rel=1e-9)
    assert live.capacity == pytest.approx(0.020)  # 7200 / 360
    assert (live.combination, total.combination) == ("L", "L")
    # IBC Table 1604.3 footnote g: the dead load of steel members counts nothing in D + L
    assert total.demand == pytest.approx(live.demand)
    assert total.capacity == pytest.approx(0.030)  # 7200 / 240


def test_published_example() -> None:
    """AISC Design Examples v16.0, F.1-1A: W18X50 on 35 ft under D = 0.45 and L = 0.75 kip/ft.

    M_u = 266 kip-ft (its dead load is the whole, so that the beam's 0.05 kip/ft comes off), phi M_n = 379 kip-ft,
    live deflection against L/360 = 1.17 in needs 748 in4 of the 800 in4 there are.
    """
    span = 35 * FOOT
    dead, live = (0.45 - 0.05) * KIP_PER_FOOT, 0.75 * KIP_PER_FOOT
    item = CheckInput(
        section=SECTIONS["W18X50"],
        material=STEEL,
        loads=together(uniform(span, dead, LoadCase.DEAD), uniform(span, live, LoadCase.LIVE)),
        continuously_braced=True,
    )
    checks = checked(item)
    assert checks[CheckName.FLEXURE].demand / KIP_FOOT == pytest.approx(266, abs=0.5)
    assert checks[CheckName.FLEXURE].capacity / KIP_FOOT == pytest.approx(379, abs=0.5)
    assert checks[CheckName.LIVE_DEFLECTION].utilization == pytest.approx(748 / 800, abs=1e-3)


@pytest.mark.parametrize("braces", [(), (0.5,), (1 / 3, 2 / 3), (0.2, 0.45, 0.9)])
def test_unbraced_segments_by_hand(braces: tuple[float, ...]) -> None:
    """C_b, L_b and M_u of every segment under uniform load, from M = w x (L - x)/2; the worst one governs."""
    span, intensity = 10.5, 14e3
    section = SECTIONS["W18X50"]
    weight = section.mass_per_length * G
    item = CheckInput(
        section=section,
        material=STEEL,
        loads=uniform(span, intensity, LoadCase.LIVE),
        braced_positions=tuple(part * span for part in braces),
    )
    factored = 1.2 * weight + 1.6 * intensity
    worst = (0.0, 0.0, 0.0)
    ends = [0.0, *(part * span for part in braces), span]
    for start, end in pairwise(ends):
        largest, *quarters = (
            factored * x * (span - x) / 2
            for x in (min(max(span / 2, start), end), *(start + part * (end - start) for part in (0.25, 0.5, 0.75)))
        )
        gradient = float(moment_gradient_factor(largest, *quarters))
        strength = float(flexural_strength(section, STEEL, end - start, gradient, RULES.steel.factors).design)
        worst = max(worst, (largest / strength, end - start, gradient))
    flexure = checked(item)[CheckName.FLEXURE]
    assert flexure.utilization == pytest.approx(worst[0], rel=1e-9)
    assert detail(flexure, "L_b") == pytest.approx(worst[1])
    assert detail(flexure, "C_b") == pytest.approx(worst[2])


def test_braces_need_no_order_and_may_stand_at_the_supports() -> None:
    """Braces in any order, doubled, at or beyond the supports, divide the span as the plain list does."""
    item = CheckInput(
        section=SECTIONS["W18X50"],
        material=STEEL,
        loads=uniform(9.0, 15e3, LoadCase.LIVE),
        braced_positions=(3.0, 6.0),
    )
    untidy = replace(item, braced_positions=(6.0, -0.2, 3.0, 0.0, 3.0, 9.0, 9.4))
    assert check_beams([item], RULES)[0].checks == check_beams([untidy], RULES)[0].checks


def test_a_batch_gives_what_each_beam_gives() -> None:
    """Beams of all kinds checked together, in any order, are judged as each alone."""
    generator = np.random.default_rng(3)
    names = ["W18X50", "W21X48", "C10X30", "HSS10X6X3/16", "HSS16.000X0.375", "S12X35", "M12X10", "HP12X53"]
    items = []
    for row in range(64):
        span = float(generator.uniform(3.0, 12.0))
        carried = together(
            uniform(span, float(generator.uniform(1e3, 1e4)), LoadCase.DEAD),
            uniform(span, float(generator.uniform(1e3, 1e4)), LoadCase.LIVE),
            loads(span, points=[(float(generator.uniform(0, span)), 2e4)], case=LoadCase.ROOF_LIVE),
        )
        items.append(
            CheckInput(
                section=SECTIONS[names[row % len(names)]],
                material=steel([36.0, 50.0][row % 2]),
                loads=carried,
                axis=BendingAxis.FLAT if row % 5 == 0 else BendingAxis.UPRIGHT,
                continuously_braced=row % 3 == 0,
                braced_positions=tuple(generator.uniform(0, span, row % 4).tolist()),
                live_load_factor=float(generator.uniform(0.5, 1.0)),
            )
        )
    for item, outcome in zip(items, check_beams(items, RULES), strict=True):
        alone = check_beams([item], RULES)[0]
        assert outcome.problem == alone.problem == ""
        for check, same in zip(outcome.checks, alone.checks, strict=True):
            assert (check.name, check.clause, check.limit_state) == (same.name, same.clause, same.limit_state)
            assert check.utilization == pytest.approx(same.utilization, rel=1e-9)
            assert [value for _, value, _ in check.details] == pytest.approx(
                [value for _, value, _ in same.details], rel=1e-9
            )


@pytest.mark.parametrize(
    "change",
    [
        {"section": SECTIONS["W16X26"]},
        {"material": steel(36)},
        {"loads": uniform(8.0, 9.1e3, LoadCase.LIVE)},
        {"loads": uniform(8.1, 9e3, LoadCase.LIVE)},
        {"loads": loads(8.0, points=[(4.0, 60e3)], case=LoadCase.LIVE)},
        {"axis": BendingAxis.FLAT},
        {"continuously_braced": True},
        {"braced_positions": (4.0,)},
        {"is_roof": True},
        {"live_load_factor": 0.9},
    ],
    ids=lambda change: next(iter(change)),
)
def test_equal_beams_are_checked_once_and_others_apart(change: dict[str, object]) -> None:
    """Beams that repeat share one outcome; one that differs in a single input gets its own."""
    item = CheckInput(section=SECTIONS["W18X50"], material=STEEL, loads=uniform(8.0, 9e3, LoadCase.LIVE))
    same = replace(item, loads=uniform(8.0, 9e3, LoadCase.LIVE))
    other = replace(item, **change)  # type: ignore[arg-type]
    outcomes = check_beams([item, other, same], RULES)
    assert outcomes[0] is outcomes[2]
    assert outcomes[0] != outcomes[1]
    assert outcomes[1].checks == check_beams([other], RULES)[0].checks


def test_live_load_reduction() -> None:
    """A factor of 0.7 takes reducible live load down in strength and deflection, and leaves the other live load."""
    span = 8.0
    carried = together(uniform(span, 10e3, LoadCase.LIVE), uniform(span, 4e3, LoadCase.LIVE_UNREDUCED))
    item = CheckInput(
        section=SECTIONS["W18X50"], material=STEEL, loads=carried, continuously_braced=True, live_load_factor=0.7
    )
    checks = checked(item)
    weight = SECTIONS["W18X50"].mass_per_length * G
    assert checks[CheckName.FLEXURE].demand == pytest.approx((1.2 * weight + 1.6 * 11e3) * span**2 / 8)
    rigidity = 29_000 * KSI * SECTIONS["W18X50"].second_moment_major
    assert checks[CheckName.LIVE_DEFLECTION].demand == pytest.approx(5 * 11e3 * span**4 / 384 / rigidity)


@pytest.mark.parametrize(
    ("roof_live", "snow", "factored", "service", "strength_name", "service_name"),
    [
        (1.0e3, 0.0, 1.6 * 1.0e3, 1.0e3, "1.2D + 1.6Lr + 1.0L", "Lr"),
        (1.0e3, 2.5e3, 1.0 * 2.5e3, 2.5e3, "1.2D + 1.0S + 1.0L", "S"),
    ],
)
def test_roof_beam(
    roof_live: float, snow: float, factored: float, service: float, strength_name: str, service_name: str
) -> None:
    """A roof beam: ASCE 7-22 2.3.1 with strength-level snow; its deflection under Lr or S against the roof limit.

    Roof live load and snow do not act together; the limit is span/240 (IBC Table 1604.3, nonplaster ceiling).
    """
    span = 9.6
    carried = together(
        uniform(span, 2e3, LoadCase.DEAD),
        uniform(span, roof_live, LoadCase.ROOF_LIVE),
        uniform(span, snow, LoadCase.SNOW),
    )
    section = SECTIONS["W14X22"]
    checks = checked(CheckInput(section=section, material=STEEL, loads=carried, continuously_braced=True, is_roof=True))
    weight = section.mass_per_length * G
    flexure, live = checks[CheckName.FLEXURE], checks[CheckName.LIVE_DEFLECTION]
    assert flexure.demand == pytest.approx((1.2 * (2e3 + weight) + factored) * span**2 / 8)
    assert flexure.combination == strength_name
    assert live.demand == pytest.approx(5 * service * span**4 / 384 / (29_000 * KSI * section.second_moment_major))
    assert live.combination == service_name
    assert live.capacity == pytest.approx(span / 240)
    assert checks[CheckName.TOTAL_DEFLECTION].capacity == pytest.approx(span / 180)


def test_dead_share_of_total_deflection() -> None:
    """Where a rule set counts half the dead load of steel, the total deflection does, self-weight included."""
    share = replace(RULES.deflection.steel_dead_share, value=0.5)
    rules = replace(RULES, deflection=replace(RULES.deflection, steel_dead_share=share))
    span, section = 6.0, SECTIONS["W14X22"]
    carried = together(uniform(span, 8e3, LoadCase.DEAD), uniform(span, 5e3, LoadCase.LIVE))
    total = checked(CheckInput(section=section, material=STEEL, loads=carried), rules)[CheckName.TOTAL_DEFLECTION]
    service = 5e3 + 0.5 * (8e3 + section.mass_per_length * G)
    assert total.demand == pytest.approx(5 * service * span**4 / 384 / (29_000 * KSI * section.second_moment_major))
    assert total.combination == "0.5 D + L"


def test_beam_that_carries_only_itself() -> None:
    """Without loads a beam carries its own weight by 1.4 D, and deflects by nothing under live load."""
    section = SECTIONS["W14X22"]
    checks = checked(CheckInput(section=section, material=STEEL, loads=loads(6.0), continuously_braced=True))
    assert checks[CheckName.FLEXURE].demand == pytest.approx(1.4 * section.mass_per_length * G * 36 / 8)
    assert checks[CheckName.FLEXURE].combination == "1.4D"
    assert checks[CheckName.LIVE_DEFLECTION].demand == 0.0
    assert checks[CheckName.LIVE_DEFLECTION].utilization == 0.0
    assert checks[CheckName.LIVE_DEFLECTION].combination == "no live load"


@pytest.mark.parametrize("braces", [(), (2.0, 4.0)])
@pytest.mark.parametrize("name", ["HSS16.000X0.375", "HSS10X6X3/16", "W18X50", "C10X30"])
def test_beam_without_moment_between_braces(name: str, braces: tuple[float, ...]) -> None:
    """Every kind of section is checked with and without braces, down to a load of nothing but itself."""
    item = CheckInput(section=SECTIONS[name], material=STEEL, loads=loads(6.0), braced_positions=braces)
    assert 0.0 < checked(item)[CheckName.FLEXURE].utilization < 0.2


def test_flat_channel() -> None:
    """A channel laid flat bends about its minor axis: F6, G6 and its minor second moment of area."""
    section = SECTIONS["C10X30"]
    item = CheckInput(section=section, material=STEEL, loads=uniform(2.0, 5e3, LoadCase.LIVE), axis=BendingAxis.FLAT)
    checks = checked(item)
    by_hand = 0.9 * 50 * KSI * min(section.plastic_modulus_minor, 1.6 * section.elastic_modulus_minor)
    assert checks[CheckName.FLEXURE].capacity == pytest.approx(by_hand)
    assert checks[CheckName.FLEXURE].clause == "AISC 360-22 F6"
    assert checks[CheckName.SHEAR].clause == "AISC 360-22 G6"
    assert detail(checks[CheckName.LIVE_DEFLECTION], "I") == pytest.approx(section.second_moment_minor)


def test_round_section_takes_half_the_span_as_shear_span() -> None:
    """L_v of G5 is the distance from the largest shear to none: half of a simple span."""
    item = CheckInput(section=SECTIONS["HSS16.000X0.375"], material=STEEL, loads=uniform(9.754, 5e3, LoadCase.LIVE))
    assert detail(checked(item)[CheckName.SHEAR], "L_v") == pytest.approx(4.877)


def outcome_of(item: CheckInput) -> CheckOutcome:
    """Outcome of one beam between two that are checked, so that a problem does not shift the others."""
    good = CheckInput(section=SECTIONS["W18X50"], material=STEEL, loads=uniform(9.0, 1e3, LoadCase.LIVE))
    outcomes = check_beams([good, item, good], RULES)
    assert outcomes[0].checks == outcomes[2].checks
    assert len(outcomes[0].checks) == 4
    return outcomes[1]


def test_other_materials_are_not_checked() -> None:
    """A timber beam has no method in this rule set, and says what to do."""
    timber = replace(STEEL, family=MaterialFamily.TIMBER)
    outcome = outcome_of(CheckInput(section=SECTIONS["W18X50"], material=timber, loads=loads(6.0)))
    assert outcome.checks == ()
    assert outcome.problem == (
        "it is of timber, for which the rule set has no method: check it by hand, or use a rule set that covers it"
    )


def test_slender_web_is_not_checked() -> None:
    """A plate girder whose web is not compact belongs to F4 and F5: not checked, by name."""
    root = sqrt(29_000 / 50)
    profile = ProfileShape(kind=SectionKind.I_SHAPE, depth=1.2, width=0.3, flange_thickness=0.02, web_thickness=0.008)
    section = section_from_dimensions(profile)
    assert section is not None
    assert section.web_slenderness > 3.76 * root
    outcome = outcome_of(CheckInput(section=section, material=STEEL, loads=loads(12.0)))
    assert outcome.problem == (
        f"{section.designation} has an element more slender than the clauses implemented cover: check it by hand"
    )


def test_inclined_beam_is_not_checked() -> None:
    """A purlin turned with its roof bends about both axes, which no check here covers."""
    item = CheckInput(section=SECTIONS["C10X30"], material=STEEL, loads=loads(6.0), axis=BendingAxis.INCLINED)
    assert "bends about both axes" in outcome_of(item).problem


def test_grade_without_strength_is_not_checked() -> None:
    """A steel grade without a yield strength is named, with the place to supply it."""
    unknown = replace(STEEL, grade="Q999", yield_strength=nan)
    outcome = outcome_of(CheckInput(section=SECTIONS["W18X50"], material=unknown, loads=loads(6.0)))
    assert outcome.problem == (
        "grade Q999 has no yield strength or modulus of elasticity: "
        "add both to the grade in the rule set's materials file"
    )


@pytest.mark.parametrize(
    ("carried", "problem"),
    [
        (
            uniform(6.0, -20e3, LoadCase.LIVE),
            "loads act upwards on it, so that its bottom flange is compressed: check it by hand",
        ),
        (
            uniform(6.0, nan, LoadCase.DEAD),
            "its loads are not finite numbers: check the geometry and the weights of the slabs that it carries",
        ),
    ],
)
def test_loads_outside_the_method_are_not_checked(carried: BeamLoads, problem: str) -> None:
    """Uplift, and loads that are no numbers, never pass as adequate."""
    for braced in (True, False):
        item = CheckInput(section=SECTIONS["W18X50"], material=STEEL, loads=carried, continuously_braced=braced)
        assert outcome_of(item).problem == problem
        assert size_beams([item], RULES, ["W"]) == [Sizing(findings=(f"not sized: {problem}",))]


def test_nothing_to_check() -> None:
    """No beams, no outcomes."""
    assert check_beams([], RULES) == []
