"""The lightest section: against checking the whole series one by one, and against published selections."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from helpers.beam_cases import FOOT, INCH, KIP, KIP_PER_FOOT, loads, steel, together

from ifcaudit.checks.interface import CheckInput
from ifcaudit.checks.standards.aisc_360 import flexural_strength
from ifcaudit.checks.verdict import check_beams
from ifcaudit.model.audit import CheckName
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.loads import LoadCase
from ifcaudit.model.material import MaterialFamily
from ifcaudit.model.section import SectionKind
from ifcaudit.rulebook.loader import load_rules
from ifcaudit.rulebook.records import RuleSet
from ifcaudit.sizing.lightest import STIFFNESS, STRENGTH, Sizing, size_beams

RULES = load_rules()
SERIES = RULES.catalogue.series
SECTIONS = {section.designation: section for part in SERIES.values() for section in part}
STEEL = steel()


def names(sizing: Sizing) -> tuple[str | None, str | None, str | None]:
    """Designations for strength, for stiffness and for both."""
    found = (sizing.for_strength, sizing.for_stiffness, sizing.for_both)
    return tuple(section.designation if section else None for section in found)  # type: ignore[return-value]


def one_by_one(item: CheckInput, series: str, rules: RuleSet = RULES) -> tuple[str | None, str | None, str | None]:
    """Check every section of the series as the audit would, lightest first, of equal weights the stronger first."""

    def braced(section: object) -> float:
        design = flexural_strength(section, item.material, 0.0, 1.0, rules.steel.factors, item.axis).design  # type: ignore[arg-type]
        return float(np.nan_to_num(design))

    sections = sorted(SERIES[series], key=lambda section: (section.mass_per_length, -braced(section)))
    outcomes = check_beams([replace(item, section=section) for section in sections], rules)
    found: list[str | None] = []
    for wanted in (STRENGTH, STIFFNESS, STRENGTH + STIFFNESS):
        passing = (
            section.designation
            for section, outcome in zip(sections, outcomes, strict=True)
            if outcome.checks
            and all(check.utilization <= 1.0 + 1e-9 for check in outcome.checks if check.name in wanted)
        )
        found.append(next(passing, None))
    return found[0], found[1], found[2]


def random_item(generator: np.random.Generator, section: str, *, heavy: float = 1.0) -> CheckInput:
    """A beam with uniform, triangular and point loads of every case, braced in one of several ways."""
    span = float(generator.uniform(3.0, 16.0))
    size = heavy * float(np.exp(generator.uniform(np.log(0.02), np.log(3.0))))

    def value() -> float:
        return size * float(generator.uniform(0.0, 12e3))

    cases = list(generator.permutation(5)[: int(generator.integers(1, 5))])
    parts = [loads(span, [(0, span, value(), value())], case=LoadCase(int(case))) for case in cases]
    if generator.random() < 0.6:
        places = np.sort(generator.uniform(0.05, 0.95, int(generator.integers(1, 4)))) * span
        parts.append(loads(span, points=[(float(place), 8 * value()) for place in places], case=LoadCase.LIVE))
    braces = generator.uniform(0, span, int(generator.integers(0, 5)))
    return CheckInput(
        section=SECTIONS[section],
        material=STEEL,
        loads=together(*parts),
        continuously_braced=bool(generator.random() < 0.35),
        braced_positions=tuple(float(brace) for brace in braces),
        is_roof=bool(generator.random() < 0.3),
        live_load_factor=float(generator.uniform(0.5, 1.0)),
    )


@pytest.mark.parametrize(
    ("section", "series", "heavy", "count"),
    [
        ("W18X50", "W", 1.0, 40),
        ("W18X50", "W", 6.0, 10),
        ("S12X35", "S", 0.5, 8),
        ("M12X10", "M", 0.1, 8),
        ("HP12X53", "HP", 1.0, 8),
        ("C10X30", "C", 0.2, 12),
        ("MC12X40", "MC", 0.3, 8),
        ("HSS10X6X3/16", "HSS", 0.5, 12),
        ("HSS16.000X0.375", "HSS round", 0.5, 8),
    ],
)
def test_same_as_checking_one_by_one(section: str, series: str, heavy: float, count: int) -> None:
    """The array comparison finds what checking the whole series finds, for random beams of every series."""
    generator = np.random.default_rng(len(section) + int(10 * heavy))
    items = [random_item(generator, section, heavy=heavy) for _ in range(count)]
    items += [replace(item, axis=BendingAxis.FLAT) for item in items[:4]]
    sizings = size_beams(items, RULES, [series] * len(items))
    for item, sizing in zip(items, sizings, strict=True):
        assert names(sizing) == one_by_one(item, series)


def test_same_as_checking_one_by_one_where_dead_load_counts() -> None:
    """With a rule set that counts the dead-load deflection, self-weight decides stiffness too."""
    share = replace(RULES.deflection.steel_dead_share, value=1.0)
    rules = replace(RULES, deflection=replace(RULES.deflection, steel_dead_share=share))
    generator = np.random.default_rng(11)
    items = [random_item(generator, "W18X50", heavy=0.3) for _ in range(15)]
    for item, sizing in zip(items, size_beams(items, rules, ["W"] * len(items)), strict=True):
        assert names(sizing) == one_by_one(item, "W", rules)


@pytest.mark.parametrize(
    ("section", "span", "governing"),
    [
        ("W16X26", 7.0, CheckName.FLEXURE),
        ("W24X55", 9.0, CheckName.FLEXURE),
        ("W36X135", 40.0, CheckName.FLEXURE),
        ("W16X26", 1.0, CheckName.SHEAR),
        ("W36X135", 2.0, CheckName.SHEAR),
        ("W21X44", 14.0, CheckName.LIVE_DEFLECTION),
    ],
)
@pytest.mark.parametrize("braced", [True, False])
def test_same_as_checking_one_by_one_at_the_edge(
    section: str, span: float, governing: CheckName, *, braced: bool
) -> None:
    """At a load that uses a section up to one part in ten million more or less, nothing is rounded its way."""
    unit = CheckInput(
        section=SECTIONS[section],
        material=STEEL,
        loads=loads(span, [(0, span, 1.0, 1.0)], case=LoadCase.LIVE),
        continuously_braced=braced,
        braced_positions=(span / 4, span / 2, 3 * span / 4),
    )

    def at(intensity: float) -> CheckInput:
        return replace(unit, loads=loads(span, [(0, span, intensity, intensity)], case=LoadCase.LIVE))

    def utilization(intensity: float) -> float:
        checks = {check.name: check.utilization for check in check_beams([at(intensity)], RULES)[0].checks}
        return checks[governing]

    # Utilization is a straight line over the load while 1.2 D + 1.6 L governs.
    low, high = utilization(1e4), utilization(2e4)
    full = 1e4 + (1.0 - low) / (high - low) * 1e4
    assert utilization(full) == pytest.approx(1.0, abs=1e-9)
    items = [at(full * (1.0 + change)) for change in (-1e-7, 1e-7)]
    found = [names(sizing) for sizing in size_beams(items, RULES, ["W", "W"])]
    assert found == [one_by_one(item, "W") for item in items]


def test_self_weight_counts_in_every_combination() -> None:
    """Of beams that carry only themselves 1.4 D decides, in whatever order a rule set lists its combinations."""
    rules = replace(RULES, strength_combinations=RULES.strength_combinations[::-1])
    items = [
        CheckInput(section=SECTIONS["W18X50"], material=STEEL, loads=loads(span), continuously_braced=True)
        for span in np.linspace(37.0, 42.0, 11)
    ]
    found = [names(sizing) for sizing in size_beams(items, rules, ["W"] * len(items))]
    assert found == [one_by_one(item, "W") for item in items]
    assert len({strength for strength, _, _ in found}) > 1


@pytest.mark.parametrize("seed", range(3))
def test_the_section_found_passes_and_every_lighter_one_fails(seed: int) -> None:
    """What is proposed passes all checks of the audit with its own weight; no lighter section of the series does."""
    item = random_item(np.random.default_rng(100 + seed), "W18X50")
    proposed = size_beams([item], RULES, ["W"])[0].for_both
    assert proposed is not None
    lighter = [section for section in SERIES["W"] if section.mass_per_length < proposed.mass_per_length - 1e-9]
    outcomes = check_beams([replace(item, section=section) for section in (proposed, *lighter)], RULES)
    worst = [max((check.utilization for check in outcome.checks), default=np.inf) for outcome in outcomes]
    assert worst[0] <= 1.0 + 1e-9
    assert all(value > 1.0 for value in worst[1:])


def test_of_equal_weights_the_stronger() -> None:
    """Of several W shapes of 26 lb/ft that are strong enough, the one of the largest Z_x is proposed.

    Z_x in the AISC Shapes Database, 16th edition: W16X26 44.2 in3, W14X26 40.2, W12X26 37.2, W10X26 31.3. The load asks
    for 36.9 in3, more than any lighter shape has (W14X22 33.2, W12X22 29.3).
    """
    span = 6.0
    factored = 0.9 * 50 * KIP / INCH**2 * 41 * INCH**3 * 0.9
    item = CheckInput(
        section=SECTIONS["W12X26"],
        material=STEEL,
        loads=loads(span, points=[(span / 2, factored * 4 / span / 1.6)], case=LoadCase.LIVE),
        continuously_braced=True,
    )
    found = size_beams([item], RULES, ["W"])[0].for_strength
    assert found is not None
    assert found.designation == "W16X26"
    weights = {section.mass_per_length for section in SERIES["W"] if section.designation.endswith("X26")}
    assert len(weights) == 1


def uniform_item(span: float, dead: float, live: float, section: str = "W18X50") -> CheckInput:
    """A braced beam in feet and kip/ft; the example's dead load includes 0.05 kip/ft of self-weight."""
    length = span * FOOT
    return CheckInput(
        section=SECTIONS[section],
        material=STEEL,
        loads=together(
            loads(length, [(0, length, (dead - 0.05) * KIP_PER_FOOT, (dead - 0.05) * KIP_PER_FOOT)]),
            loads(length, [(0, length, live * KIP_PER_FOOT, live * KIP_PER_FOOT)], case=LoadCase.LIVE),
        ),
        continuously_braced=True,
    )


def test_selection_by_strength_and_deflection() -> None:
    """35 ft under D = 0.45 and L = 0.75 kip/ft needs M_u = 266 kip-ft and I = 748 in4 (Design Examples v16.0, F.1-1A).

    The example takes W18X50 (I = 800 in4): it limits the nominal depth to 18 in (from memory). Without that limit the
    lightest W shape stiff enough is W21X44 (I = 843 in4), and the lightest strong enough W18X40 (phi M_p = 294 kip-ft,
    Manual Table 3-2 from memory; W16X40 of the same weight has 274).
    """
    item = uniform_item(35, 0.45, 0.75)
    assert names(size_beams([item], RULES, ["W"])[0]) == ("W18X40", "W21X44", "W21X44")
    shallow = tuple(section for section in SERIES["W"] if section.depth < 18.05 * INCH)
    series = {**SERIES, "W": shallow}
    rules = replace(RULES, catalogue=replace(RULES.catalogue, series=series))
    assert names(size_beams([item], rules, ["W"])[0])[2] == "W18X50"


def test_selection_by_second_moment_of_area() -> None:
    """30 ft under L = 2 kip/ft within 1.00 in (span/360) needs 1260 in4: W24X55 with 1350 in4.

    AISC Design Examples v16.0, F.4.
    """
    item = uniform_item(30, 0.8, 2.0)
    assert names(size_beams([item], RULES, ["W"])[0])[1] == "W24X55"


def test_stiffness_governs_light_loads_and_strength_heavy_ones() -> None:
    """On one span a light load is sized by stiffness and a heavy one by strength (common practice, no source)."""
    light, heavy = size_beams([uniform_item(30, 0.15, 0.3), uniform_item(30, 8.0, 6.0)], RULES, ["W", "W"])
    for sizing, governing, other in (
        (light, light.for_stiffness, light.for_strength),
        (heavy, heavy.for_strength, heavy.for_stiffness),
    ):
        assert governing is not None
        assert other is not None
        assert governing.mass_per_length > other.mass_per_length
        assert sizing.for_both == governing


def test_series_of_a_section_outside_the_catalogue() -> None:
    """An I-shape in no series is sized from W, a channel from C; a bar from none, and says so."""
    i_shape = replace(uniform_item(20, 0.3, 0.3), section=replace(SECTIONS["W18X50"], family="", designation="I 450"))
    channel = replace(i_shape, section=replace(SECTIONS["C10X30"], family="", designation="U 254"))
    bar = replace(i_shape, section=replace(SECTIONS["W18X50"], kind=SectionKind.RECTANGLE, family=""))
    found = size_beams([i_shape, channel, bar], RULES, ["", "", ""])
    assert [sizing.for_both and sizing.for_both.family for sizing in found] == ["W", "C", None]
    assert found[2].findings == ("not sized: its section belongs to no catalogue series",)


def test_no_section_is_enough() -> None:
    """Where the whole series is too weak or too soft there is no proposal, and the finding says which."""
    crushing = uniform_item(30, 0.1, 400.0)
    assert size_beams([crushing], RULES, ["W"])[0] == Sizing(
        findings=(
            "no W section of the catalogue is strong enough",
            "no W section of the catalogue is stiff enough",
        )
    )
    assert size_beams([uniform_item(150, 0.1, 1.2)], RULES, ["C"])[0].for_stiffness is None


@pytest.mark.parametrize(
    ("change", "finding"),
    [
        (
            {"material": replace(STEEL, family=MaterialFamily.TIMBER)},
            "not sized: the rule set has no method for timber",
        ),
        (
            {"axis": BendingAxis.INCLINED},
            "not sized: it is turned about its axis, so that it bends about both axes: check biaxial bending by hand",
        ),
    ],
)
def test_what_cannot_be_checked_is_not_sized(change: dict[str, object], finding: str) -> None:
    """A beam outside the standard gets no proposal but the reason, and the others theirs, in order."""
    good = uniform_item(35, 0.45, 0.75)
    sizings = size_beams([replace(good, **change), good], RULES, ["W", "W"])  # type: ignore[arg-type]
    assert sizings[0] == Sizing(findings=(finding,))
    assert names(sizings[1])[2] == "W21X44"


def test_nothing_to_size() -> None:
    """No beams, no sizings."""
    assert size_beams([], RULES, []) == []


def test_checks_named_are_all_checks() -> None:
    """Strength and stiffness together are every check the audit makes."""
    assert set(STRENGTH + STIFFNESS) == set(CheckName)
