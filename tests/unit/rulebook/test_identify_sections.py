"""Name and drawing of a section: which decides, and what is said about it."""

from __future__ import annotations

from math import isnan

import pytest

from ifcaudit.model.section import ProfileShape, SectionKind
from ifcaudit.provenance import Source
from ifcaudit.rulebook.identify import SectionMatch, identify_section
from ifcaudit.rulebook.loader import load_rules

CATALOGUE = load_rules().catalogue
SERIES = "W, S, M, HP, C, MC, HSS, HSS round"


def drawn(
    kind: SectionKind, depth: float, width: float, web: float | None = None, flange: float | None = None, **more: object
) -> ProfileShape:
    """A profile with its dimensions in millimetres."""
    return ProfileShape(
        kind=kind,
        depth=depth / 1000,
        width=width / 1000,
        web_thickness=None if web is None else web / 1000,
        flange_thickness=None if flange is None else flange / 1000,
        **more,  # type: ignore[arg-type]
    )


# W16X26 (AISC Shapes Database v16.0): d 15.7, b_f 5.50, t_w 0.250, t_f 0.345 in.
W16X26 = drawn(SectionKind.I_SHAPE, 398.8, 139.7, 6.35, 8.76)


def outcome(match: SectionMatch) -> tuple[str, Source, str, tuple[str, ...]]:
    """Designation, source, place and findings of a match that has a section."""
    assert match.section is not None
    assert match.problem == ""
    return match.section.value.designation, match.section.source, match.section.where, match.findings


def test_name_and_drawing_agree() -> None:
    """A drawing within 3 % or 1 mm of the section named is that section, as the model says."""
    assert outcome(identify_section(W16X26, ("W16X26",), CATALOGUE)) == ("W16X26", Source.MODEL, 'named "W16X26"', ())


def test_drawing_with_detailing_dimensions_agrees() -> None:
    """W18X50 drawn with detailing dimensions 3/8 and 9/16 in for t_w 0.355 and t_f 0.570 in is W18X50 all the same."""
    profile = drawn(SectionKind.I_SHAPE, 457.2, 190.5, 9.525, 14.2875)
    assert outcome(identify_section(profile, ("W18X50",), CATALOGUE))[:2] == ("W18X50", Source.MODEL)


def test_drawing_decides_over_a_name_that_disagrees() -> None:
    """Named W16X26 but drawn as W16X31 (d 15.9, b_f 5.53, t_w 0.275, t_f 0.440 in): W16X31, and both are reported."""
    profile = drawn(SectionKind.I_SHAPE, 403.9, 140.5, 6.99, 11.18)
    assert outcome(identify_section(profile, ("W16X26",), CATALOGUE)) == (
        "W16X31",
        Source.DERIVED,
        (
            'named "W16X26", drawn I-shape 403.9x140.5x7x11.2 mm; '
            "inferred from its dimensions, I-shape 403.9x140.5x7x11.2 mm"
        ),
        ('named "W16X26", drawn I-shape 403.9x140.5x7x11.2 mm: the drawing decides',),
    )


def test_drawing_without_a_name() -> None:
    """A drawing that is a catalogue section is that section, derived from its dimensions."""
    match = identify_section(W16X26, ("Beam 12",), CATALOGUE)
    where = "inferred from its dimensions, I-shape 398.8x139.7x6.3x8.8 mm"
    assert outcome(match) == ("W16X26", Source.DERIVED, where, ())
    assert match.family == "W"


@pytest.mark.parametrize("series", ["W", "C", "MC", "HSS", "HSS round"])
def test_every_section_is_recognised_from_its_own_dimensions(series: str) -> None:
    """Drawn exactly, each section is found again, or one with the same dimensions that is no heavier."""
    for section in CATALOGUE.series[series]:
        profile = ProfileShape(
            kind=section.kind,
            depth=section.depth,
            width=section.width,
            flange_thickness=section.flange_thickness,
            web_thickness=section.web_thickness,
        )
        match = identify_section(profile, (), CATALOGUE)
        assert match.section is not None
        found = match.section.value
        same = (found.depth, found.width, found.flange_thickness, found.web_thickness)
        assert same == (section.depth, section.width, section.flange_thickness, section.web_thickness)
        assert found.mass_per_length <= section.mass_per_length


def test_tube_drawn_with_its_nominal_wall() -> None:
    """HSS6X6X1/4 drawn with the nominal wall of 6.35 mm is found with its design wall of 0.233 in."""
    match = identify_section(drawn(SectionKind.RECTANGULAR_HOLLOW, 152.4, 152.4, 6.35), (), CATALOGUE)
    assert match.section is not None
    assert match.section.value.designation == "HSS6X6X1/4"
    assert match.section.value.web_thickness == pytest.approx(0.233 * 0.0254)


def test_tube_drawn_flat() -> None:
    """HSS8X4X1/4 with the 8 in side level takes its strength across the 4 in depth."""
    upright = next(section for section in CATALOGUE.series["HSS"] if section.designation == "HSS8X4X1/4")
    match = identify_section(drawn(SectionKind.RECTANGULAR_HOLLOW, 101.6, 203.2, 5.92), ("HSS8X4X1/4",), CATALOGUE)
    finding = "HSS8X4X1/4 is drawn with its longer side level: its strength is taken about the axis as drawn"
    assert outcome(match) == ("HSS8X4X1/4", Source.MODEL, 'named "HSS8X4X1/4"', (finding,))
    assert match.section is not None
    assert match.section.value.plastic_modulus_major == upright.plastic_modulus_minor
    assert match.section.value.flange_slenderness == upright.web_slenderness


def test_section_outside_the_catalogue() -> None:
    """IPE300, not in the catalogue, gets the properties of its dimensions: W_pl 628.4 cm³ (makers' tables)."""
    profile = drawn(SectionKind.I_SHAPE, 300, 150, 7.1, 10.7, fillet_radius=0.015)
    match = identify_section(profile, ("IPE300",), CATALOGUE)
    assert outcome(match) == (
        "I 300x150x7.1x10.7 mm",
        Source.DERIVED,
        "named IPE300, which is not in this rule set's catalogue; properties from its dimensions",
        (),
    )
    assert match.family == ""
    assert match.section is not None
    assert match.section.value.plastic_modulus_major == pytest.approx(628.4e-6, rel=5e-4)


def test_timber_named_otherwise_than_drawn() -> None:
    """A rafter named 44x120mm and drawn 70 × 170 is 70 × 170, and both are reported."""
    match = identify_section(drawn(SectionKind.RECTANGLE, 170, 70), ("Houten balk 44x120mm",), CATALOGUE)
    finding = 'named "Houten balk 44x120mm", drawn rectangle 170x70 mm: the drawing decides'
    assert outcome(match)[0] == "rectangle 70x170 mm"
    assert match.findings == (finding,)


def test_timber_named_as_drawn() -> None:
    """A size in the name that agrees, in either order, is no finding."""
    assert identify_section(drawn(SectionKind.RECTANGLE, 170, 70), ("70x170mm",), CATALOGUE).findings == ()


def test_named_section_drawn_as_a_solid_envelope() -> None:
    """W16X26 drawn as a solid rectangle of its depth and width is W16X26: solid, it would be six times as strong."""
    match = identify_section(drawn(SectionKind.RECTANGLE, 398.8, 139.7), ("W16X26",), CATALOGUE)
    finding = 'named "W16X26", drawn rectangle 398.8x139.7 mm of the same depth and width: taken as the section named'
    assert outcome(match) == ("W16X26", Source.MODEL, 'named "W16X26"', (finding,))


@pytest.mark.parametrize(
    ("profile", "texts", "problem"),
    [
        (
            None,
            ("IPE300",),
            (
                f"named IPE300, which is not in this rule set's catalogue ({SERIES}), and no profile could be read: "
                "give the beam a profile in the model, or use a rule set with that series"
            ),
        ),
        (
            None,
            ("LIGGER",),
            (
                f"no section: no profile could be read, and no name is in this rule set's catalogue ({SERIES}): "
                "give the beam a profile in the model, or name its type after its section"
            ),
        ),
        (
            drawn(SectionKind.RECTANGLE, 300, 140),
            ("W16X26",),
            (
                'named "W16X26", drawn rectangle 300x140 mm, which is another section: '
                "correct the name or the profile in the model, whichever is wrong"
            ),
        ),
        (
            drawn(SectionKind.CHANNEL, 200, 75, 8.5, 11.5, tapered=True),
            ("UPN200",),
            (
                "its flanges slope or its section changes along its length (channel 200x75x8.5x11.5 mm), and it is no "
                f"section of this rule set's catalogue ({SERIES}): use a rule set with that series"
            ),
        ),
        (
            drawn(SectionKind.I_SHAPE, 300, 150),
            (),
            (
                "no section properties: the profile (I-shape 300x150 mm) gives no usable thickness or outline, "
                "and its name is not in this rule set's catalogue: "
                "complete the profile in the model, or name its section"
            ),
        ),
        (
            drawn(SectionKind.OTHER, 300, 150),
            (),
            (
                "no section properties: the profile (other 300x150 mm) gives no usable thickness or outline, "
                "and its name is not in this rule set's catalogue: "
                "complete the profile in the model, or name its section"
            ),
        ),
    ],
)
def test_what_cannot_be_identified_says_what_to_supply(
    profile: ProfileShape | None, texts: tuple[str, ...], problem: str
) -> None:
    """Without a usable section the match is empty and says what is missing."""
    match = identify_section(profile, texts, CATALOGUE)
    assert match.section is None
    assert match.problem == problem


def test_general_outline() -> None:
    """An outline of no known shape has area and second moments, no moduli, so that no strength can be claimed."""
    outline = ((0.0, 0.0), (0.15, 0.0), (0.15, 0.3), (0.0, 0.3))
    match = identify_section(drawn(SectionKind.OTHER, 300, 150, outline=outline), (), CATALOGUE)
    assert match.section is not None
    section = match.section.value
    assert section.area == pytest.approx(0.045)
    assert section.second_moment_major == pytest.approx(0.15 * 0.3**3 / 12)
    assert isnan(section.plastic_modulus_major)
    assert isnan(section.elastic_modulus_major)
