"""Designations in the texts of a model."""

from __future__ import annotations

import pytest

from ifcaudit.rulebook.designations import index_designations, normalise_designation, unknown_designation
from ifcaudit.rulebook.loader import load_rules

INDEX = index_designations(load_rules().catalogue)


@pytest.mark.parametrize(
    ("text", "designation"),
    [
        ("W16X26", "W16X26"),
        ("w16x26", "W16X26"),
        ("W 16 x 26", "W16X26"),
        ("W16×26", "W16X26"),
        ("W-Wide Flange:W12X26:12345", "W12X26"),
        ("W Shapes:W12X26:W12X26:318823", "W12X26"),
        ("B1_W12x26_top", "W12X26"),
        ("(W27X84).", "W27X84"),
        ("C15X33.9", "C15X33.9"),
        ("MC12X10.6", "MC12X10.6"),
        ("HP 12x53", "HP12X53"),
        ("HSS6X6X1/4", "HSS6X6X1/4"),
        ("HSS6x6x.25", "HSS6X6X1/4"),
        ("HSS 6 x 6 x 0.25", "HSS6X6X1/4"),
        ("HSS152X152X6.4", "HSS6X6X1/4"),
        ("HSS4x8x1/4", "HSS8X4X1/4"),
        ("HSS 3-1/2 x 3-1/2 x 1/8", "HSS3-1/2X3-1/2X1/8"),
        ("HSS20.000X0.500", "HSS20.000X0.500"),
        ("HSS20X0.5", "HSS20.000X0.500"),
        ("HSS168X6.4", "HSS6.625X0.250"),
    ],
)
def test_spellings_of_the_trade(text: str, designation: str) -> None:
    """A designation is found in any usual spelling and inside longer names."""
    assert normalise_designation(text, INDEX) == designation


@pytest.mark.parametrize(
    ("metric", "imperial"),
    [
        ("W410x38.8", "W16X26"),
        ("W310X38.7", "W12X26"),
        ("W360X32.9", "W14X22"),
        ("W530X66", "W21X44"),
        ("W610X82", "W24X55"),
        ("W920X201", "W36X135"),
        ("W200X46.1", "W8X31"),
        ("W1000X222", "W40X149"),
        ("C380X50.4", "C15X33.9"),
        ("C200X17.1", "C8X11.5"),
        ("HP310X79", "HP12X53"),
    ],
)
def test_soft_metric_designations(metric: str, imperial: str) -> None:
    """Metric labels of the same shapes (AISC Shapes Database, metric designations, ASTM A6/A6M)."""
    assert normalise_designation(metric, INDEX) == imperial


@pytest.mark.parametrize(
    "text",
    [
        "W10", "W16X26000", "W16X26x12", "W16X27", "M10x90", "C20/25", "C12/15", "HSS6X6", "HSS6X6X1/0", "W0X0", "S235",
        "0W16X26", "IPE300", "70x170mm", "", "W16X26/W18X35", "W16X26, W18X35", "LIGGER", "GW16X26",
    ],
)  # fmt: skip
def test_texts_that_name_no_single_section(text: str) -> None:
    """Bolts, grades, numbers, unlisted and ambiguous names give no section."""
    assert normalise_designation(text, INDEX) is None


def test_every_designation_names_itself() -> None:
    """Each designation of the catalogue is found as itself, also in lower case and inside a type name."""
    for text, section in INDEX.exact.items():
        assert normalise_designation(f"Type:{text.lower()}:7", INDEX) == section.designation


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("HE220B", "HE220B"),
        ("Balk HEB 220", "HEB 220"),
        ("ipe300", "IPE300"),
        ("UB457x191x67", "UB457X191X67"),
        ("CHS219.1x6.3", "CHS219.1X6.3"),
        ("W16X27", "W16X27"),
        ("M10", ""),
        ("C20", ""),
        ("C24", ""),
        ("70x170mm", ""),
        ("LIGGER 4", ""),
        ("S235", ""),
    ],
)
def test_names_that_look_like_sections(text: str, name: str) -> None:
    """A name that looks like a rolled section is recognised as such; grades, bolts and timber sizes are not."""
    assert unknown_designation((text,)) == name
