"""AISC 360-22 chapter G against the AISC Design Examples, v16.0."""

from __future__ import annotations

from dataclasses import replace
from math import sqrt

import numpy as np
import pytest
from helpers.beam_cases import INCH, KIP, KSI, steel

from ifcaudit.checks.standards.aisc_360 import shear_strength
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.section import ProfileShape, SectionKind
from ifcaudit.rulebook.loader import load_rules
from ifcaudit.rulebook.section_properties import i_shape_section

RULES = load_rules()
FACTORS = RULES.steel.factors
SECTIONS = {section.designation: section for part in RULES.catalogue.series.values() for section in part}


@pytest.mark.parametrize(
    ("section", "axis", "yield_ksi", "span", "published", "source"),
    [
        ("W24X62", BendingAxis.UPRIGHT, 50, 0.0, 306, "G.1B, phi_v = 1.00"),
        ("C15X33.9", BendingAxis.UPRIGHT, 50, 0.0, 162, "G.2B, phi_v = 0.90"),
        ("HSS6X4X3/8", BendingAxis.UPRIGHT, 50, 0.0, 93.6, "G.4, h = H - 3t, k_v = 5"),
        ("HSS16.000X0.375", BendingAxis.UPRIGHT, 50, 192 * INCH, 232, "G.5, L_v = 192 in"),
        ("W21X48", BendingAxis.FLAT, 50, 0.0, 189, "G.6, two flanges"),
    ],
)
def test_design_shear_strength(
    section: str, axis: BendingAxis, yield_ksi: float, span: float, published: float, source: str
) -> None:
    """Design shear strength [kip] within 0.3 % of the printed example."""
    strength = shear_strength(SECTIONS[section], steel(yield_ksi), span, FACTORS, axis)
    assert float(strength.design) / KIP == pytest.approx(published, rel=3e-3), source
    assert str(strength.limit_state) == "yielding"


def test_slender_web() -> None:
    """A welded girder, d = 36 in, t_w = 5/16 in, h = 33 in: C_v1 = 0.577 and phi V_n = 176 kip (G.8A, unstiffened)."""
    profile = ProfileShape(
        kind=SectionKind.I_SHAPE,
        depth=36 * INCH,
        width=16 * INCH,
        flange_thickness=1.5 * INCH,
        web_thickness=0.3125 * INCH,
    )
    section = i_shape_section(profile)
    assert section is not None
    assert section.web_slenderness == pytest.approx(106, abs=0.5)
    strength = shear_strength(replace(section, web_slenderness=106.0), steel(50), 0.0, FACTORS)  # as the example rounds
    assert float(np.asarray(strength.details["C_v"][0])) == pytest.approx(0.577, abs=0.001)
    # the example goes on with t_w = 0.313 in and A_w = 11.3 in2, which are 0.4 % larger
    assert float(strength.design) / KIP == pytest.approx(176, rel=4e-3)
    assert str(strength.limit_state) == "shear buckling"


def test_shapes_with_the_lower_factor() -> None:
    """Eight W shapes take phi_v = 0.90 at F_y = 50 ksi (AISC 360-22 G2.1, user note); all others 1.00."""
    lower = {
        section.designation
        for section in RULES.catalogue.series["W"]
        if float(shear_strength(section, steel(), 0.0, FACTORS).factor) < 1.0
    }
    assert lower == {"W44X230", "W40X149", "W36X135", "W33X118", "W30X90", "W24X55", "W16X26", "W12X14"}


@pytest.mark.parametrize("slenderness", [30.0, 60.0, 75.0, 90.0, 200.0, 300.0])
def test_web_coefficient_of_hollow_sections(slenderness: float) -> None:
    """C_v2 of two webs, k_v = 5, in its three ranges: G2-9 to G2-11, written out here by hand."""
    section = replace(SECTIONS["HSS6X4X3/8"], web_slenderness=slenderness)
    ratio = slenderness / sqrt(5 * 29_000 / 50)
    by_hand = 1.0 if ratio <= 1.10 else 1.10 / ratio if ratio <= 1.37 else 1.51 / ratio**2
    strength = shear_strength(section, steel(), 0.0, FACTORS)
    t = section.web_thickness
    assert float(strength.nominal) == pytest.approx(0.6 * 50 * KSI * 2 * slenderness * t * t * by_hand, rel=1e-12)
