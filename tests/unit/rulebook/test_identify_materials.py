"""Materials and grades from the words of a model, and what a slab layer weighs."""

from __future__ import annotations

from math import isnan

import pytest

from ifcaudit.model.material import MaterialFamily, MaterialText
from ifcaudit.model.section import SectionKind
from ifcaudit.provenance import Source
from ifcaudit.rulebook.identify import identify_material, layer_density
from ifcaudit.rulebook.loader import load_rules

RULES = load_rules()
REMEDY = "Name the grade in the material of the model, or set default_grades in a rule file."


def text(*names: str, grades: tuple[str, ...] = (), density: float | None = None) -> MaterialText:
    """What a model says."""
    return MaterialText(names=names, grades=grades, density=density)


@pytest.mark.parametrize(
    ("name", "grade"),
    [
        ("STEEL/S235JR", "S235"), ("S355J2+N", "S355"), ("STEEL/St52-3", "S355"), ("S275J2", "S275"),
        ("ASTM A992", "A992"), ("A992 Gr 50", "A992"), ("A992Fy50", "A992"), ("Steel - A36", "A36"),
        ("A572 Gr. 50", "A572-50"), ("A572GR50", "A572-50"), ("ASTM A572/A572M Grade 50", "A572-50"),
        ("A572", "A572-42"),
        ("A500 Gr. C", "A500-C"), ("A500 GRADE B", "A500-B"), ("A500", "A500-B"), ("A53 Gr B", "A53-B"),
    ],
)  # fmt: skip
def test_grades_named_in_a_material(name: str, grade: str) -> None:
    """A grade is found in any usual spelling; without its class, the weakest of the standard is taken."""
    match = identify_material(text(name), "", RULES.materials)
    assert match.material.value.grade == grade
    assert match.material.source is Source.MODEL
    assert match.material.where == f'material "{name}"'


@pytest.mark.parametrize(
    ("name", "yield_strength"),
    [("Steel 345 MPa", 345e6), ("Fy=50 ksi", 344.74e6), ("Staal 235 N/mm2", 235e6)],
)
def test_a_yield_strength_written_out(name: str, yield_strength: float) -> None:
    """A strength with its unit is as good as a grade (50 ksi = 344.74 MPa)."""
    match = identify_material(text(name), "W", RULES.materials)
    assert match.material.value.yield_strength == pytest.approx(yield_strength, rel=1e-4)
    assert match.material.source is Source.MODEL


def test_a_grade_property_comes_before_a_name() -> None:
    """A grade property is more deliberate than a name."""
    match = identify_material(text("S235", grades=("S355J2",)), "", RULES.materials)
    assert (match.material.value.grade, match.material.where) == ("S355", 'grade property "S355J2"')


def test_several_grades_give_the_weakest() -> None:
    """Where materials of several grades are related, the weakest counts and all are reported."""
    match = identify_material(text("S355", "S235"), "", RULES.materials)
    assert match.material.value.grade == "S235"
    assert match.findings == ("several grades are named (S355, S235): the weakest, S235, is taken",)


@pytest.mark.parametrize(
    ("material", "family", "grade", "said", "series"),
    [
        (text("staal"), "W", "A992", 'the model says "staal", no grade known to the rules', "W sections"),
        (text("Solid"), "HP", "A572-50", 'the model says "Solid", no grade known to the rules', "HP sections"),
        (text(), "HSS", "A500-C", "the model names no material", "HSS sections"),
        (text("Stahl"), "", "S235", 'the model says "Stahl", no grade known to the rules',
         "sections outside the catalogue"),
    ],
)  # fmt: skip
def test_default_grade_is_an_assumption(
    material: MaterialText, family: str, grade: str, said: str, series: str
) -> None:
    """Steel without a grade gets the default of its series, marked as assumed, with what settles it."""
    match = identify_material(material, family, RULES.materials)
    assert match.material.value.family is MaterialFamily.STEEL
    assert match.material.value.grade == grade
    assert (match.material.source, match.material.remedy) == (Source.ASSUMED, REMEDY)
    assert match.material.where == f"{said}: {grade}, the rule set's default for {series}"


@pytest.mark.parametrize(
    ("name", "family"),
    [
        ("hout", MaterialFamily.TIMBER), ("GL24h", MaterialFamily.TIMBER), ("Holz", MaterialFamily.TIMBER),
        ("bois massif", MaterialFamily.TIMBER), ("beton_C20/25", MaterialFamily.CONCRETE),
        ("Stahlbeton 65690", MaterialFamily.CONCRETE), ("hormigón armado", MaterialFamily.CONCRETE),
        ("Concrete 30 MPa", MaterialFamily.CONCRETE), ("Metal - Aluminum", MaterialFamily.OTHER),
        ("Stainless steel", MaterialFamily.OTHER),
    ],
)  # fmt: skip
def test_other_families_never_become_steel(name: str, family: MaterialFamily) -> None:
    """Timber, concrete and other metals stay what they are, even in the shape of a rolled section."""
    match = identify_material(text(name), "W", RULES.materials, kind=SectionKind.I_SHAPE)
    assert match.material.value.family is family
    assert isnan(match.material.value.yield_strength)
    assert match.material.source is Source.MODEL


@pytest.mark.parametrize(
    ("material", "problem"),
    [
        (
            text("Solid"),
            (
                'the material "Solid" is not known to the rules, and the section tells no family: '
                "name the material in the model (A992, steel, timber …)"
            ),
        ),
        (
            text(),
            (
                "the model names no material, and the section tells no family: "
                "name the material in the model (A992, steel, timber …)"
            ),
        ),
    ],
)
def test_a_material_that_nothing_tells(material: MaterialText, problem: str) -> None:
    """A rectangle of unknown material is of unknown family, and the problem says what to supply."""
    match = identify_material(material, "", RULES.materials, kind=SectionKind.RECTANGLE)
    assert match.material.value.family is MaterialFamily.UNKNOWN
    assert match.problem == problem


def test_a_steel_shape_without_a_material_is_steel() -> None:
    """An I-shape outside the catalogue with no material gets the weakest common grade, as assumed."""
    match = identify_material(text(), "", RULES.materials, kind=SectionKind.I_SHAPE)
    assert (match.material.value.grade, match.material.source) == ("S235", Source.ASSUMED)


@pytest.mark.parametrize(
    ("name", "kind"),
    [
        ("isolatie_vloer", "insulation"), ("cementdekvloer", "screed"), ("beton_C20/25", "concrete"),
        ("prefabbeton", "concrete"), ("Leichtbeton 102890359", "lightweight concrete"), ("EPS", "insulation"),
        ("Lightweight Concrete", "lightweight concrete"), ("gipsplaat", "gypsum"), ("Estrich", "screed"),
        ("béton armé", "concrete"), ("chape ciment", "screed"), ("calcestruzzo", "concrete"), ("hormigón", "concrete"),
        ("luchtspouw", "air"), ("Air", "air"), ("Metal Deck", "steel deck"), ("Masonry Block", "masonry"),
        ("Ceiling tile", "ceiling tile"), ("Roof Tile", "tile"), ("hout", "timber"), ("Glaswolle", "insulation"),
        ("Kanaalplaat 200", "hollow core units"), ("Structure, Steel Bar Joist Layer", "joists with space"),
        ("Staalplaatbetonvloer", "concrete"), ("Concrete Masonry Units", "masonry"),
    ],
)  # fmt: skip
def test_layers_by_a_word_in_their_name(name: str, kind: str) -> None:
    """The longest word found in a layer's material decides its density, in several languages."""
    density = layer_density(text(name), RULES.materials, RULES.loads.slab_weight_default)
    assert density.source is Source.RULES
    assert f'in "{name}": {kind}, ' in density.where


def test_stated_density_comes_first() -> None:
    """A density in the model is the model's word; one of zero is none."""
    stated = layer_density(text("concrete", density=2300.0), RULES.materials, RULES.loads.slab_weight_default)
    assert (stated.value, stated.source) == (2300.0, Source.MODEL)
    absent = layer_density(text("concrete", density=0.0), RULES.materials, RULES.loads.slab_weight_default)
    assert absent.source is Source.RULES
    assert absent.value == pytest.approx(150 * 0.45359237 / 0.3048**3)


@pytest.mark.parametrize(
    ("material", "said"),
    [(text("dak_schild"), '"dak_schild" is not known to the rules'), (text(), "no material is named")],
)
def test_an_unknown_layer_is_assumed_to_be_concrete(material: MaterialText, said: str) -> None:
    """What is not recognised weighs as normal-weight concrete, assumed, with what settles it."""
    density = layer_density(material, RULES.materials, RULES.loads.slab_weight_default)
    assert density.source is Source.ASSUMED
    assert density.where == f"{said}: 150 pcf (common practice, no source: normal-weight reinforced concrete)"
    assert density.remedy == (
        "State the mass density of the material in the model, or add a word for it to a rule file."
    )
