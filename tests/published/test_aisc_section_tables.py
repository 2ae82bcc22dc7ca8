"""The AISC section tables, against published values and against properties computed from the dimensions."""

from __future__ import annotations

import csv
from math import sqrt
from pathlib import Path
from statistics import median

import pytest

from ifcaudit.model.section import ProfileShape, Section, SectionKind
from ifcaudit.rulebook.loader import load_rules
from ifcaudit.rulebook.section_properties import (
    i_shape_section,
    rectangular_hollow_section,
    round_hollow_section,
    section_from_dimensions,
)

INCH = 0.0254
SERIES = load_rules().catalogue.series
BY_NAME = {section.designation: section for sections in SERIES.values() for section in sections}
POWERS = {"area": 2, "elastic": 3, "plastic": 3, "second": 4, "torsion": 4, "warping": 6}


def inches(section: Section, attribute: str) -> float:
    """A property in inches to its power."""
    power = POWERS.get(attribute.partition("_")[0], 1)
    return float(getattr(section, attribute)) / INCH**power


@pytest.mark.parametrize(
    ("designation", "attribute", "published", "source"),
    [
        ("W18X50", "second_moment_major", 800, "AISC Design Examples v16.0, F.1-2B"),
        ("W18X50", "plastic_modulus_major", 101, "AISC Design Examples v16.0, F.1-1B"),
        ("W18X50", "elastic_modulus_major", 88.9, "AISC Design Examples v16.0, F.1-2B"),
        ("W18X50", "radius_of_gyration_minor", 1.65, "AISC Design Examples v16.0, F.1-2B"),
        ("W18X50", "torsion_constant", 1.24, "AISC Design Examples v16.0, F.1-2B"),
        ("W18X50", "effective_radius_of_gyration", 1.98, "AISC Design Examples v16.0, F.1-2B"),
        ("W18X50", "flange_centroid_distance", 17.4, "AISC Design Examples v16.0, F.1-2B"),
        ("W18X50", "warping_constant", 3040, "AISC Shapes Database, 15th ed."),
        ("W21X48", "second_moment_major", 959, "AISC Design Examples v16.0, F.3A"),
        ("W24X55", "second_moment_major", 1350, "AISC Design Examples v16.0, F.4"),
        ("W12X58", "plastic_modulus_minor", 32.5, "AISC Design Examples v16.0, F.5"),
        ("W12X58", "elastic_modulus_minor", 21.4, "AISC Design Examples v16.0, F.5"),
        ("W24X62", "depth", 23.7, "AISC Design Examples v16.0, G.1B"),
        ("W24X62", "web_thickness", 0.430, "AISC Design Examples v16.0, G.1B"),
        ("C15X33.9", "second_moment_major", 315, "AISC Design Examples v16.0, F.2-1A"),
        ("HSS8X8X3/16", "second_moment_major", 54.4, "AISC Design Examples v16.0, F.8A"),
        ("HSS10X6X3/16", "flange_thickness", 0.174, "AISC Design Examples v16.0, F.7B"),
        ("HSS16.000X0.375", "area", 17.2, "AISC Design Examples v16.0, G.5"),
    ],
)
def test_published_properties(designation: str, attribute: str, published: float, source: str) -> None:
    """The catalogue carries the values that published worked examples use."""
    assert inches(BY_NAME[designation], attribute) == pytest.approx(published, rel=1e-6), source


def test_published_slenderness() -> None:
    """W21X48 has b_f/2t_f = 9.47 and HSS10X6X3/16 b/t = 31.5 (AISC Design Examples v16.0, F.3B and F.7B)."""
    assert BY_NAME["W21X48"].flange_slenderness == 9.47
    assert BY_NAME["HSS10X6X3/16"].flange_slenderness == 31.5


def test_number_of_w_shapes() -> None:
    """The 16th edition lists 289 W shapes (AISC Shapes Database v16.0)."""
    assert len(SERIES["W"]) == 289


def test_w_shapes_with_reduced_shear_factor() -> None:
    """Eight W shapes have h/t_w > 2.24 sqrt(E/F_y) at 50 ksi (AISC 360-22 G2.1 user note)."""
    limit = 2.24 * sqrt(29000 / 50)
    slender = {section.designation for section in SERIES["W"] if section.web_slenderness > limit}
    assert slender == {"W44X230", "W40X149", "W36X135", "W33X118", "W30X90", "W24X55", "W16X26", "W12X14"}


def test_w_shapes_with_noncompact_flanges() -> None:
    """Nine W shapes have b_f/2t_f > 0.38 sqrt(E/F_y) at 50 ksi (AISC Design Examples v16.0, F.3; 360-22 F2 user note).

    W6X9 prints 9.16 where the limit is 9.152: the note leaves it out.
    """
    limit = 0.38 * sqrt(29000 / 50)
    noncompact = {section.designation for section in SERIES["W"] if section.flange_slenderness > limit}
    listed = {"W21X48", "W14X99", "W14X90", "W12X65", "W10X12", "W8X31", "W8X10", "W6X15", "W6X8.5"}
    assert noncompact - {"W6X9"} == listed
    assert BY_NAME["W6X9"].flange_slenderness == pytest.approx(limit, rel=1e-3)


def test_no_w_shape_has_a_slender_flange() -> None:
    """AISC 360-22 F3 user note: no W shape of 50 ksi steel has slender flanges, b_f/2t_f > 1.0 sqrt(E/F_y)."""
    assert max(section.flange_slenderness for section in SERIES["W"]) < sqrt(29000 / 50)


# The lightest shapes have nominal weights that the tables themselves do not derive from the area.
NOMINAL_WEIGHTS = {"M4X4.08": 0.944, "M3X2.9": 0.932, "C3X3.5": 0.944, "MC10X6.5": 0.980, "MC6X6.5": 0.980}


@pytest.mark.parametrize("series", SERIES)
def test_weight_is_area_times_density_of_steel(series: str) -> None:
    """Weight in plf is area times 490 pcf (AISC Manual Table 17-12, from memory) within 2 %.

    The weight of HSS is that of the nominal wall, its area that of 0.93 of it (AISC 360-22 B4.2): the weight is
    up to 1/0.93 times as much, a little more in round ones, a little less where corners weigh.
    """
    for section in SERIES[series]:
        ratio = section.mass_per_length / (section.area * 490 * 0.45359237 / 0.3048**3)
        if section.designation in NOMINAL_WEIGHTS:
            assert ratio == pytest.approx(NOMINAL_WEIGHTS[section.designation], abs=0.001)
        elif series.startswith("HSS"):
            assert 1.04 <= ratio <= 1.005 / 0.93, section.designation
        else:
            assert ratio == pytest.approx(1.0, abs=0.02), section.designation


@pytest.mark.parametrize("series", SERIES)
def test_moduli_hang_together(series: str) -> None:
    """Z > S about both axes, I = S d/2 and I = A r², within the rounding of three printed figures."""
    for section in SERIES[series]:
        assert section.plastic_modulus_major > section.elastic_modulus_major, section.designation
        assert section.plastic_modulus_minor > section.elastic_modulus_minor, section.designation
        assert section.second_moment_major >= section.second_moment_minor * 0.999, section.designation
        for name, power in (("major", 2), ("minor", 2)):
            inertia = getattr(section, f"second_moment_{name}")
            gyration = getattr(section, f"radius_of_gyration_{name}")
            assert inertia == pytest.approx(section.area * gyration**power, rel=0.025), section.designation
        modulus = 2 * section.second_moment_major / section.depth
        assert section.elastic_modulus_major == pytest.approx(modulus, rel=0.02), section.designation


def _design_k() -> dict[str, float]:
    lines = Path(__file__).with_name("aisc_w_k_design.csv").read_text(encoding="utf-8").splitlines()
    rows = csv.DictReader(line for line in lines if not line.startswith("#"))
    return {row["designation"]: float(row["k_design_in"]) * INCH for row in rows}


# Properties from nominal dimensions with root radius k_des - t_f against the tabulated ones, W shapes: median and
# largest deviation [%]. The tables print three figures and round their own dimensions.
W_DEVIATIONS = {
    "area": (0.08, 0.75),
    "second_moment_major": (0.25, 1.0),
    "plastic_modulus_major": (0.21, 1.05),
    "elastic_modulus_major": (0.21, 0.85),
    "second_moment_minor": (0.27, 1.45),
    "torsion_constant": (0.17, 1.15),
    "warping_constant": (0.47, 2.0),
    "effective_radius_of_gyration": (0.16, 0.71),
}


@pytest.mark.parametrize("attribute", W_DEVIATIONS)
def test_w_shapes_follow_from_their_dimensions(attribute: str) -> None:
    """Every W shape's tabulated properties (AISC Shapes Database v16.0) follow from its dimensions and fillets."""
    design_k = _design_k()
    deviations = []
    for listed in SERIES["W"]:
        computed = i_shape_section(
            ProfileShape(
                kind=SectionKind.I_SHAPE,
                depth=listed.depth,
                width=listed.width,
                flange_thickness=listed.flange_thickness,
                web_thickness=listed.web_thickness,
                fillet_radius=design_k[listed.designation] - listed.flange_thickness,
            )
        )
        assert computed is not None
        deviations.append(abs(getattr(computed, attribute) / getattr(listed, attribute) - 1) * 100)
    typical, largest = W_DEVIATIONS[attribute]
    assert median(deviations) <= typical
    assert max(deviations) <= largest


def test_w18x50_from_its_dimensions() -> None:
    """W18X50 with k_des = 0.972 in (AISC Shapes Database): A 14.7, I_x 800, Z_x 101, S_x 88.9, J 1.24, C_w 3040."""
    section = i_shape_section(
        ProfileShape(
            kind=SectionKind.I_SHAPE,
            depth=18.0 * INCH,
            width=7.50 * INCH,
            web_thickness=0.355 * INCH,
            flange_thickness=0.570 * INCH,
            fillet_radius=(0.972 - 0.570) * INCH,
        )
    )
    assert section is not None
    for attribute, published in (
        ("area", 14.7),
        ("second_moment_major", 800),
        ("plastic_modulus_major", 101),
        ("elastic_modulus_major", 88.9),
        ("radius_of_gyration_minor", 1.65),
        ("torsion_constant", 1.24),
        ("warping_constant", 3040),
        ("effective_radius_of_gyration", 1.98),
        ("flange_centroid_distance", 17.4),
    ):
        assert inches(section, attribute) == pytest.approx(published, rel=0.003), attribute


def test_rectangular_hss_follow_from_their_dimensions() -> None:
    """With outside corners of 2 t the tabulated A, I, S, Z follow within 1 %, J within 5 % (AISC Shapes Database)."""
    for listed in SERIES["HSS"]:
        computed = rectangular_hollow_section(
            ProfileShape(kind=listed.kind, depth=listed.depth, width=listed.width, web_thickness=listed.web_thickness)
        )
        assert computed is not None
        for attribute in ("area", "second_moment_major", "elastic_modulus_minor", "plastic_modulus_major"):
            assert getattr(computed, attribute) == pytest.approx(getattr(listed, attribute), rel=0.01), (
                listed.designation
            )
        assert computed.torsion_constant == pytest.approx(listed.torsion_constant, rel=0.05), listed.designation
        assert computed.flange_slenderness == pytest.approx(listed.flange_slenderness, rel=0.01), listed.designation


def test_round_hss_follow_from_their_dimensions() -> None:
    """A, I, S and Z of round HSS follow from diameter and design wall within the tables' rounding, 1.5 %."""
    for listed in SERIES["HSS round"]:
        computed = round_hollow_section(
            ProfileShape(kind=listed.kind, depth=listed.depth, width=listed.width, web_thickness=listed.web_thickness)
        )
        assert computed is not None
        for attribute in ("area", "second_moment_major", "elastic_modulus_major", "plastic_modulus_major"):
            assert getattr(computed, attribute) == pytest.approx(getattr(listed, attribute), rel=0.015), (
                listed.designation
            )


def _european(h: float, b: float, t_w: float, t_f: float, r: float) -> Section:
    section = section_from_dimensions(
        ProfileShape(
            kind=SectionKind.I_SHAPE,
            depth=h / 1000,
            width=b / 1000,
            web_thickness=t_w / 1000,
            flange_thickness=t_f / 1000,
            fillet_radius=r / 1000,
        )
    )
    assert section is not None
    return section


@pytest.mark.parametrize(
    ("dimensions", "area", "inertia", "elastic", "plastic", "minor"),
    [
        ((300, 150, 7.1, 10.7, 15), 53.81, 8356, 557.1, 628.4, 603.8),  # IPE300
        ((190, 200, 6.5, 10, 18), 53.83, 3692, 388.6, 429.5, 1336),  # HEA200
        ((300, 300, 11, 19, 27), 149.1, 25170, 1678, 1869, 8563),  # HEB300
    ],
)
def test_european_shapes_from_their_dimensions(
    dimensions: tuple[float, ...], area: float, inertia: float, elastic: float, plastic: float, minor: float
) -> None:
    """IPE and HE properties of the European tables (makers' tables, as three public data sets agree), in cm."""
    section = _european(*dimensions)
    assert section.area * 1e4 == pytest.approx(area, rel=0.0005)
    assert section.second_moment_major * 1e8 == pytest.approx(inertia, rel=0.0005)
    assert section.elastic_modulus_major * 1e6 == pytest.approx(elastic, rel=0.0005)
    assert section.plastic_modulus_major * 1e6 == pytest.approx(plastic, rel=0.0005)
    assert section.second_moment_minor * 1e8 == pytest.approx(minor, rel=0.0005)


@pytest.mark.parametrize(
    ("dimensions", "torsion", "warping"),
    [
        ((300, 150, 7.1, 10.7, 15), 19.9, 1.26e5),  # IPE300
        ((290, 300, 8.5, 14, 27), 87.8, None),  # HEA300
        ((300, 300, 11, 19, 27), 189, 1.69e6),  # HEB300
    ],
)
def test_torsion_of_european_shapes(dimensions: tuple[float, ...], torsion: float, warping: float | None) -> None:
    """I_t by El Darwish and Johnston, I_w = t_f b³ (h - t_f)²/24, as public European tables print them (cm⁴, cm⁶)."""
    section = _european(*dimensions)
    assert section.torsion_constant * 1e8 == pytest.approx(torsion, rel=0.001)
    if warping is not None:
        assert section.warping_constant * 1e12 == pytest.approx(warping, rel=0.002)


def test_hot_finished_tube() -> None:
    """RHS 200x100x8, corners 1.5 t and 1.0 t (EN 10210-2): A 44.8 cm², I 2234 cm⁴, W_pl 282 cm³, I_t 1804 cm⁴."""
    profile = ProfileShape(
        kind=SectionKind.RECTANGULAR_HOLLOW, depth=0.2, width=0.1, web_thickness=0.008, fillet_radius=0.012
    )
    section = rectangular_hollow_section(profile, inner_radius=0.008)
    assert section is not None
    assert section.area * 1e4 == pytest.approx(44.8, rel=0.002)
    assert section.second_moment_major * 1e8 == pytest.approx(2234, rel=0.0005)
    assert section.plastic_modulus_major * 1e6 == pytest.approx(282, rel=0.0005)
    assert section.torsion_constant * 1e8 == pytest.approx(1804, rel=0.001)


def test_ratio_of_plastic_to_elastic_modulus() -> None:
    """Z/S of W shapes: least 1.098 (W14X90), largest 1.327 (W14X873), median 1.145 (AISC Shapes Database v16.0)."""
    ratios = {s.designation: s.plastic_modulus_major / s.elastic_modulus_major for s in SERIES["W"]}
    assert min(ratios, key=lambda name: ratios[name]) == "W14X90"
    assert max(ratios, key=lambda name: ratios[name]) == "W14X873"
    assert median(ratios.values()) == pytest.approx(1.145, abs=0.0005)


def test_facts_agree_with_a_second_copy_of_the_tables() -> None:
    """Where another copy of the tables is at hand, every shape in it agrees (15th edition, xsect)."""
    xsect_data = pytest.importorskip("xsect.data.query_db", reason="the package xsect is not installed")
    import sqlite3

    database = Path(xsect_data.__file__).parent / "xsect.sqlite"
    rows = sqlite3.connect(database).execute(
        "select name, unit_weight, area, inertia_x, plast_sect_mod_x, inertia_y, inertia_t from aisc_imperial_15_0"
    )
    attributes = ("area", "second_moment_major", "plastic_modulus_major", "second_moment_minor", "torsion_constant")
    compared = 0
    for name, _, *values in rows:
        if name in BY_NAME:
            compared += 1
            ours = [inches(BY_NAME[name], attribute) for attribute in attributes]
            assert ours == pytest.approx([float(value) for value in values], rel=1e-6), name
    assert compared > 900


def test_csv_numbers_are_plain() -> None:
    """Numbers in section files carry no exponent, sign or thousands separator."""
    from ifcaudit.rulebook.files import packaged_rules

    for path in packaged_rules().glob("sections/*.csv"):
        lines = [line for line in path.read_text(encoding="utf-8").splitlines() if not line.startswith("#")]
        for row in list(csv.reader(lines))[1:]:
            assert all(set(cell) <= set("0123456789.") for cell in row[1:]), row
