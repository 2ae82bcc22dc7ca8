"""AISC 360 as formulas: continuity at the limits, one implementation for sections and tables, what is not covered."""

from __future__ import annotations

from dataclasses import replace
from math import isnan, nan, pi, sqrt

import numpy as np
import pytest
from helpers.beam_cases import KSI, steel
from hypothesis import given
from hypothesis import strategies as st

from ifcaudit.checks.standards.aisc_360 import (
    flexural_strength,
    moment_gradient_factor,
    not_covered,
    shear_strength,
)
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.section import ProfileShape, Section, SectionKind, section_table
from ifcaudit.rulebook.loader import load_rules
from ifcaudit.rulebook.section_properties import section_from_dimensions

RULES = load_rules()
FACTORS = RULES.steel.factors
SERIES = RULES.catalogue.series
SECTIONS = {section.designation: section for part in SERIES.values() for section in part}
E, F_Y = 29_000 * KSI, 50 * KSI
ROOT = sqrt(E / F_Y)


def nominal(
    section: Section, length: float = 0.0, gradient: float = 1.0, axis: BendingAxis = BendingAxis.UPRIGHT
) -> float:
    """Nominal flexural strength [N·m]."""
    return float(flexural_strength(section, steel(), length, gradient, FACTORS, axis).nominal)


def drawn(kind: SectionKind, depth: float, width: float, wall: float | None = None) -> Section:
    """A section from its dimensions [m]; flange and web of one thickness."""
    section = section_from_dimensions(
        ProfileShape(kind=kind, depth=depth, width=width, flange_thickness=wall, web_thickness=wall)
    )
    assert section is not None
    return section


@pytest.mark.parametrize("series", SERIES)
@pytest.mark.parametrize("axis", [BendingAxis.UPRIGHT, BendingAxis.FLAT])
@pytest.mark.parametrize("length", [0.0, 4.0, 15.0])
def test_a_table_gives_what_each_section_gives(series: str, axis: BendingAxis, length: float) -> None:
    """Checking one section and sizing over a whole series are the same numbers, flexure and shear."""
    sections = SERIES[series]
    table = section_table(sections)
    flexure = flexural_strength(table, steel(), length, 1.3, FACTORS, axis)
    shear = shear_strength(table, steel(), 3.0, FACTORS, axis)
    for row in range(0, len(sections), max(1, len(sections) // 25)):
        alone = flexural_strength(sections[row], steel(), length, 1.3, FACTORS, axis)
        assert flexure.design[row] == pytest.approx(float(alone.design), rel=1e-12, nan_ok=True)
        assert flexure.limit_state[row] == str(alone.limit_state)
        assert flexure.clause[row] == str(alone.clause)
        web = shear_strength(sections[row], steel(), 3.0, FACTORS, axis)
        assert shear.design[row] == pytest.approx(float(web.design), rel=1e-12)


@pytest.mark.parametrize("series", SERIES)
@given(
    position=st.floats(0.0, 0.999),
    lengths=st.tuples(st.floats(0.0, 30.0), st.floats(0.0, 30.0)),
    gradient=st.floats(1.0, 3.0),
)
def test_strength_falls_with_unbraced_length(
    series: str, position: float, lengths: tuple[float, float], gradient: float
) -> None:
    """A longer unbraced length is never stronger; the gradient helps at most in proportion; M_p is never exceeded."""
    section = SERIES[series][int(position * len(SERIES[series]))]
    short, long = sorted(lengths)
    strong = nominal(section, long, gradient)
    if isnan(strong):
        return
    assert strong <= nominal(section, short, gradient) * (1 + 1e-9)
    assert nominal(section, long) <= strong * (1 + 1e-9)
    assert strong <= gradient * nominal(section, long) * (1 + 1e-9)
    assert strong <= F_Y * section.plastic_modulus_major * (1 + 1e-9)


@pytest.mark.parametrize("name", ["W18X50", "W14X90", "C10X30", "MC12X40", "HSS20X4X1/4", "S12X35", "HP12X53"])
@pytest.mark.parametrize("limit", ["L_p", "L_r"])
def test_continuous_at_the_limiting_lengths(name: str, limit: str) -> None:
    """The three ranges of lateral-torsional buckling meet at L_p and L_r within the rounding of the code's factors."""
    section = SECTIONS[name]
    where = float(np.asarray(flexural_strength(section, steel(), 1.0, 1.0, FACTORS).details[limit][0]))
    assert nominal(section, where * (1 - 1e-9)) == pytest.approx(nominal(section, where * (1 + 1e-9)), rel=5e-3)


@pytest.mark.parametrize(
    ("section", "field", "limit", "tolerance"),
    [
        (SECTIONS["W18X50"], "flange_slenderness", 0.38 * ROOT, 1e-6),
        (replace(SECTIONS["W18X50"], web_slenderness=27.0), "flange_slenderness", 1.0 * ROOT, 0.025),
        (SECTIONS["HSS8X8X1/2"], "flange_slenderness", 1.12 * ROOT, 2e-3),
        (SECTIONS["HSS8X8X1/2"], "web_slenderness", 2.42 * ROOT, 1e-3),
        (SECTIONS["HSS16.000X0.500"], "flange_slenderness", 0.07 * E / F_Y, 0.02),
        (SECTIONS["HSS16.000X0.500"], "flange_slenderness", 0.31 * E / F_Y, 0.01),
    ],
)
def test_continuous_at_the_limiting_slenderness(section: Section, field: str, limit: float, tolerance: float) -> None:
    """The ranges of local buckling of Table B4.1b meet within the rounding of the code's factors.

    At 1.0 sqrt(E/F_y) that takes k_c = 0.76, where 0.9 k_c = 0.684 stands beside 0.7 (a rolled shape of lower k_c steps
    down there by the clause); the round section's strength meets F_y Z, with a Z/S of its own, within 2 %.
    """
    below, above = (replace(section, **{field: limit * part}) for part in (1 - 1e-9, 1 + 1e-9))
    assert nominal(below) == pytest.approx(nominal(above), rel=tolerance)


def test_minor_axis_of_a_noncompact_shape() -> None:
    """F6-2 by hand for W14X90: b_f/2t_f = 10.2, between 0.38 and 1.0 sqrt(E/F_y)."""
    section = SECTIONS["W14X90"]
    plastic = min(F_Y * section.plastic_modulus_minor, 1.6 * F_Y * section.elastic_modulus_minor)
    share = (section.flange_slenderness / ROOT - 0.38) / (1.0 - 0.38)
    by_hand = plastic - (plastic - 0.7 * F_Y * section.elastic_modulus_minor) * share
    assert section.flange_slenderness == 10.2
    assert nominal(section, axis=BendingAxis.FLAT) == pytest.approx(by_hand, rel=1e-12)


def test_minor_axis_of_a_slender_shape() -> None:
    """F6-3 and F6-4 by hand: flanges of 30 at 50 ksi, F_cr = 0.70 E / 30²; F6-2 meets them at 1.0 sqrt(E/F_y)."""
    slender = replace(SECTIONS["W14X90"], flange_slenderness=30.0)
    by_hand = 0.70 * E / 900 * slender.elastic_modulus_minor
    assert nominal(slender, axis=BendingAxis.FLAT) == pytest.approx(by_hand, rel=1e-12)
    at_limit = replace(slender, flange_slenderness=ROOT)
    assert nominal(at_limit, axis=BendingAxis.FLAT) == pytest.approx(0.7 * F_Y * slender.elastic_modulus_minor)


def test_solid_bar_by_hand() -> None:
    """F11 for a bar 200 mm deep and 40 mm thick, in its three ranges of L_b d / t²."""
    bar = drawn(SectionKind.RECTANGLE, 0.2, 0.04)
    modulus = 0.04 * 0.2**2 / 6
    assert nominal(bar, 0.1) == pytest.approx(F_Y * 0.04 * 0.2**2 / 4)
    ratio = 6.0 * 0.2 / 0.04**2
    assert 0.08 * E / F_Y < ratio < 1.9 * E / F_Y
    assert nominal(bar, 6.0) == pytest.approx((1.52 - 0.274 * ratio * F_Y / E) * F_Y * modulus)
    ratio = 12.0 * 0.2 / 0.04**2
    assert ratio > 1.9 * E / F_Y
    assert nominal(bar, 12.0) == pytest.approx(1.9 * E / ratio * modulus)
    round_bar = drawn(SectionKind.ROUND, 0.1, 0.1)
    assert nominal(round_bar, 9.0) == pytest.approx(F_Y * min(0.1**3 / 6, 1.6 * pi * 0.1**3 / 32))


@pytest.mark.parametrize(("kind", "wall"), [(SectionKind.RECTANGLE, None), (SectionKind.RECTANGULAR_HOLLOW, 0.006)])
@pytest.mark.parametrize("length", [0.0, 3.0, 20.0])
def test_turning_the_drawing_changes_nothing(kind: SectionKind, wall: float | None, length: float) -> None:
    """A bar or tube drawn standing and one drawn lying but turned upright are equally strong, buckling included."""
    standing, lying = drawn(kind, 0.3, 0.1, wall), drawn(kind, 0.1, 0.3, wall)
    assert nominal(standing, length) == pytest.approx(nominal(lying, length, axis=BendingAxis.FLAT), rel=1e-12)
    assert nominal(lying, length) == pytest.approx(nominal(standing, length, axis=BendingAxis.FLAT), rel=1e-12)
    # Standing it bends about its strong axis and buckles; lying it does not.
    assert nominal(standing, 20.0) < 0.999 * nominal(standing)
    assert nominal(lying, 20.0) == nominal(lying)


def test_shapes_outside_the_catalogue_take_the_limits_of_welded_ones() -> None:
    """A slender-webbed I-shape not in the catalogue: lambda_r = 0.95 sqrt(k_c E / F_L), F_L = 0.7 F_y, and 0.9 in G2.1.

    Table B4.1b, case 11; k_c = 4/sqrt(h/t_w) with h/t_w = 75 is 0.46, so that the limit is 0.77 sqrt(E/F_y).
    """
    rolled = replace(SECTIONS["W18X50"], flange_slenderness=0.9 * ROOT, web_slenderness=75.0)
    welded = replace(rolled, family="")
    slender = 0.9 * E * (4 / sqrt(75)) * rolled.elastic_modulus_major / rolled.flange_slenderness**2
    assert nominal(welded) == pytest.approx(slender)
    assert nominal(welded) < nominal(rolled)
    stocky = replace(SECTIONS["W18X50"], family="")
    assert float(shear_strength(SECTIONS["W18X50"], steel(), 0.0, FACTORS).factor) == 1.0
    assert float(shear_strength(stocky, steel(), 0.0, FACTORS).factor) == 0.9


@pytest.mark.parametrize(
    "section",
    [
        replace(SECTIONS["W18X50"], web_slenderness=3.75 * ROOT),
        replace(SECTIONS["C10X30"], flange_slenderness=0.379 * ROOT),
        replace(SECTIONS["HSS8X8X1/2"], web_slenderness=5.69 * ROOT),
        replace(SECTIONS["HSS16.000X0.500"], flange_slenderness=0.449 * E / F_Y),
    ],
)
def test_clauses_reach_up_to_their_limits(section: Section) -> None:
    """Just inside the limits of Table B4.1b and of F8 there is a strength."""
    assert nominal(section) > 0.0


@pytest.mark.parametrize(
    "section",
    [
        replace(SECTIONS["W18X50"], web_slenderness=3.77 * ROOT),
        replace(SECTIONS["C10X30"], flange_slenderness=0.39 * ROOT),
        replace(SECTIONS["HSS8X8X1/2"], web_slenderness=5.71 * ROOT),
        replace(SECTIONS["HSS16.000X0.500"], flange_slenderness=0.46 * E / F_Y),
        replace(SECTIONS["W18X50"], kind=SectionKind.TEE),
        replace(SECTIONS["W18X50"], web_slenderness=nan),
    ],
)
def test_what_no_clause_covers_has_no_strength(section: Section) -> None:
    """Beyond the limits of the clauses the strength is not a number, never a guess."""
    assert isnan(nominal(section))


@pytest.mark.parametrize(
    ("kind", "axis", "reason"),
    [
        (SectionKind.I_SHAPE, BendingAxis.UPRIGHT, ""),
        (SectionKind.CHANNEL, BendingAxis.FLAT, ""),
        (
            SectionKind.TEE,
            BendingAxis.UPRIGHT,
            "no clause for tee sections is implemented: check W18X50 by hand",
        ),
        (
            SectionKind.I_SHAPE,
            BendingAxis.INCLINED,
            "it is turned about its axis, so that it bends about both axes: check biaxial bending by hand",
        ),
    ],
)
def test_reason_for_not_covering(kind: SectionKind, axis: BendingAxis, reason: str) -> None:
    """The reason says what is missing and what to do; it is empty where the clauses apply."""
    assert not_covered(replace(SECTIONS["W18X50"], kind=kind), axis) == reason


def test_gradient_factor_of_uniform_and_of_no_moment() -> None:
    """C_b is 1 for uniform moment by F1-1, and 1 where there is no moment."""
    assert float(moment_gradient_factor(5.0, 5.0, 5.0, 5.0)) == pytest.approx(1.0)
    assert float(moment_gradient_factor(0.0, 0.0, 0.0, 0.0)) == 1.0


def test_shear_of_solids_by_hand() -> None:
    """A rectangle yields in shear at 3/2 of the mean stress, a round at 4/3 (mechanics of materials)."""
    rectangle, round_bar = drawn(SectionKind.RECTANGLE, 0.1, 0.04), drawn(SectionKind.ROUND, 0.1, 0.1)
    assert float(shear_strength(rectangle, steel(), 0.0, FACTORS).nominal) == pytest.approx(0.6 * F_Y * 0.004 * 2 / 3)
    assert float(shear_strength(round_bar, steel(), 0.0, FACTORS).nominal) == pytest.approx(
        0.6 * F_Y * pi * 0.01 / 4 * 3 / 4
    )


@pytest.mark.parametrize("slenderness", [20.0, 32.0, 60.0])
def test_shear_of_flanges_by_hand(slenderness: float) -> None:
    """G6 with k_v = 1.2 in the three ranges of C_v2 (G2-9 to G2-11), 29 and 36 being their limits at 50 ksi."""
    section = replace(SECTIONS["W14X90"], flange_slenderness=slenderness)
    ratio = slenderness / sqrt(1.2 * 29_000 / 50)
    by_hand = {20.0: 1.0, 32.0: 1.10 / ratio, 60.0: 1.51 / ratio**2}[slenderness]
    plain = 0.6 * F_Y * 2 * section.width * section.flange_thickness
    strength = shear_strength(section, steel(), 0.0, FACTORS, BendingAxis.FLAT)
    assert float(strength.nominal) == pytest.approx(plain * by_hand, rel=1e-12)


@pytest.mark.parametrize(("slenderness", "shear_span"), [(220.0, 1.0), (220.0, 40.0), (250.0, 2.0)])
def test_shear_of_thin_round_sections_by_hand(slenderness: float, shear_span: float) -> None:
    """G5-2a and G5-2b: the larger of 1.60 E / (sqrt(L_v/D) (D/t)^(5/4)) and 0.78 E / (D/t)^(3/2), up to 0.6 F_y."""
    section = replace(SECTIONS["HSS16.000X0.375"], flange_slenderness=slenderness)
    with_length = 1.60 * E / (sqrt(shear_span / section.depth) * slenderness**1.25)
    critical = min(max(with_length, 0.78 * E / slenderness**1.5), 0.6 * F_Y)
    strength = shear_strength(section, steel(), shear_span, FACTORS)
    assert float(strength.nominal) == pytest.approx(critical * section.area / 2, rel=1e-12)
