"""Which material and which grade are meant, and what a slab layer weighs."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from functools import lru_cache
from math import nan
from typing import TypeVar

from ifcaudit.model.material import Material, MaterialFamily, MaterialText
from ifcaudit.model.section import SectionKind
from ifcaudit.provenance import Source, Sourced
from ifcaudit.rulebook.memory import PerOwner
from ifcaudit.rulebook.records import MaterialRules, RuleValue
from ifcaudit.units import factor

T = TypeVar("T")

_STEEL_ONLY = {SectionKind.I_SHAPE, SectionKind.CHANNEL, SectionKind.RECTANGULAR_HOLLOW, SectionKind.ROUND_HOLLOW}
_STRENGTH = re.compile(r"(?<![\d.])(\d+(?:\.\d+)?)\s*(MPA|N/MM2|N/MM²|KSI)(?![A-Z0-9])")
_STRENGTH_UNITS = {"MPA": "MPa", "N/MM2": "MPa", "N/MM²": "MPa", "KSI": "ksi"}
_YIELD_WORDS = re.compile(r"\bF\s*_?Y\b|YIELD")
_LEAST_YIELD, _LARGEST_YIELD = 180e6, 700e6
_METRIC_TWIN = re.compile(r"(?<![A-Z0-9])(?:ASTM\s*)?A(\d{2,4})(?:\s*/\s*A?\1M|M)(?![A-Z0-9])")
_SEPARATORS = re.compile(r"[_/\\,.;:()\[\]\"\-+]+")


@dataclass(frozen=True, slots=True, kw_only=True)
class MaterialMatch:
    """What was found out about a material.

    Attributes:
        material: The material with its source; its family is ``UNKNOWN`` where nothing tells.
        problem: Why the family is unknown, and how to supply it; empty otherwise.
        findings: Remarks for the engineer.
    """

    material: Sourced[Material]
    problem: str = ""
    findings: tuple[str, ...] = ()


def identify_material(
    material: MaterialText, section_family: str, rules: MaterialRules, *, kind: SectionKind | None = None
) -> MaterialMatch:
    """Say which material a beam has.

    A grade in a grade property or a material name is the model's word. A text that names a family but no grade, or a
    steel section without either, gets the rule set's default grade for the section series, as assumed. Timber and
    concrete never become steel, whatever their shape.

    Args:
        material: What the model says.
        section_family: Catalogue series of the section; empty outside the catalogue.
        rules: Of the rule set.
        kind: Shape of the section; an I-shape, channel or tube without a material is taken as steel.

    Example:
        >>> from ifcaudit.rulebook.loader import load_rules
        >>> match = identify_material(MaterialText(names=("STEEL/S235JR",)), "", load_rules().materials)
        >>> match.material.value.grade, match.material.source.label
        ('S235', 'model')
    """
    answers = _ANSWERS.of(rules)
    key = (material, section_family, kind)
    if key not in answers:
        answers[key] = _identify(material, section_family, rules, kind)
    return answers[key]


def _no_answers(_rules: MaterialRules) -> dict[tuple[MaterialText, str, SectionKind | None], MaterialMatch]:
    return {}


_ANSWERS = PerOwner(_no_answers)


def _identify(
    material: MaterialText, section_family: str, rules: MaterialRules, kind: SectionKind | None
) -> MaterialMatch:
    texts = (*material.grades, *material.names)
    family = _family(texts, rules.family_words)
    steel_shape = bool(section_family) or kind in _STEEL_ONLY
    if family in {None, MaterialFamily.STEEL}:
        graded = _graded(material, rules, certain=family is not None or steel_shape)
        if graded:
            return graded
        if family or steel_shape:
            return _default_grade(material, section_family, rules)
        return _unknown(texts)
    named = texts[0] if len(texts) == 1 else " / ".join(texts)
    density = _known_density(material, rules)
    value = Material(family=family or MaterialFamily.OTHER, grade=named, density=density.value if density else nan)
    return MaterialMatch(material=Sourced(value=value, source=Source.MODEL, where=f'material "{named}"'))


def layer_density(material: MaterialText, rules: MaterialRules, default: RuleValue) -> Sourced[float]:
    """Density of a layer's material [kg/m³]: stated in the model, else by a word in its name, else the default.

    The longest matching word wins: ``isolatie_vloer`` is insulation, ``cementdekvloer`` a screed.

    Args:
        material: What the model says.
        rules: Of the rule set.
        default: For a material that is not recognised (``loads.slab_weight_default``).

    Example:
        >>> from ifcaudit.rulebook.loader import load_rules
        >>> rules = load_rules()
        >>> text = MaterialText(names=("beton_C20/25",))
        >>> density = layer_density(text, rules.materials, rules.loads.slab_weight_default)
        >>> round(density.value), density.source.label
        (2403, 'rules')
    """
    known = _known_density(material, rules)
    if known:
        return known
    named = " / ".join(material.names)
    where = f'"{named}" is not known to the rules' if named else "no material is named"
    return Sourced(
        value=default.value,
        source=Source.ASSUMED,
        where=f"{where}: {default.text} ({default.clause})",
        remedy="State the mass density of the material in the model, or add a word for it to a rule file.",
    )


def _known_density(material: MaterialText, rules: MaterialRules) -> Sourced[float] | None:
    if material.density is not None and material.density > 0.0:
        return Sourced(value=material.density, source=Source.MODEL, where="mass density of the material in the model")
    for name in material.names:
        word = _longest_word(name, rules.densities)
        if word:
            value = rules.densities[word]
            kind = value.key.partition(".")[2].replace("_", " ")
            where = f'"{word}" in "{name}": {kind}, {value.text} ({value.clause})'
            return Sourced(value=value.value, source=Source.RULES, where=where)
    return None


def _graded(material: MaterialText, rules: MaterialRules, *, certain: bool) -> MaterialMatch | None:
    """The grade that the texts name; grade properties come before names."""
    patterns = _grade_patterns(tuple(rules.grades))
    for label, texts in (("grade property", material.grades), ("material", material.names)):
        found = {
            rules.grades[grade].grade: (rules.grades[grade], text)
            for text in texts
            for grade in _grades_in(text, patterns)
        }
        if found:
            weakest = min(found.values(), key=lambda item: item[0].yield_strength)
            return _grade_match(weakest, f'{label} "{weakest[1]}"', tuple(found))
        for text in texts:
            stress = _stated_yield(text, certain=certain)
            if stress is not None:
                value = _with_yield(rules, *stress)
                return MaterialMatch(material=Sourced(value=value, source=Source.MODEL, where=f'{label} "{text}"'))
    return None


def _grade_match(weakest: tuple[Material, str], where: str, grades: tuple[str, ...]) -> MaterialMatch:
    findings: tuple[str, ...] = ()
    if len(grades) > 1:
        findings = (f"several grades are named ({', '.join(grades)}): the weakest, {weakest[0].grade}, is taken",)
    return MaterialMatch(material=Sourced(value=weakest[0], source=Source.MODEL, where=where), findings=findings)


@lru_cache(maxsize=8)
def _grade_patterns(grades: tuple[str, ...]) -> tuple[tuple[str, re.Pattern[str]], ...]:
    """A pattern for each spelling of a grade, longest spelling first: ``A572-50`` also finds ``A572 Gr. 50``."""
    between = r"[\s\-_./,]*(?:GR(?:ADE|\b|\.|(?=\d))[\s\-_./]*)?"
    patterns = []
    for grade in sorted(grades, key=len, reverse=True):
        parts = [re.escape(part) for part in grade.split("-")]
        last = r"(?![A-Z0-9])" if grade[-1].isalpha() else r"(?!\d)"
        patterns.append((grade, re.compile(r"(?<![A-Z0-9])(?:ASTM)?" + between.join(parts) + last)))
    return tuple(patterns)


def _grades_in(text: str, patterns: Iterable[tuple[str, re.Pattern[str]]]) -> list[str]:
    """Grades named in a text; a longer spelling hides the shorter ones inside it, ``A572/A572M`` counts as ``A572``."""
    rest = _METRIC_TWIN.sub(r"A\1", text.upper())
    found = []
    for grade, pattern in patterns:
        if pattern.search(rest):
            found.append(grade)
            rest = pattern.sub(" ", rest)
    return found


def _stated_yield(text: str, *, certain: bool) -> tuple[float, str] | None:
    """A yield strength written out: ``345 MPa``, ``Fy=50 ksi``; of several the smallest.

    Where nothing else says steel, only a text that speaks of yielding counts.
    """
    upper = text.upper()
    if not certain and not _YIELD_WORDS.search(upper):
        return None
    stresses = [
        (float(number) * factor(_STRENGTH_UNITS[unit], "pressure"), f"F_y = {number} {_STRENGTH_UNITS[unit]}")
        for number, unit in _STRENGTH.findall(upper)
    ]
    usable = [item for item in stresses if _LEAST_YIELD <= item[0] <= _LARGEST_YIELD]
    return min(usable) if usable else None


def _with_yield(rules: MaterialRules, yield_strength: float, grade: str) -> Material:
    like = next(iter(rules.grades.values()))
    return replace(like, grade=grade, yield_strength=yield_strength, ultimate_strength=nan)


def _default_grade(material: MaterialText, section_family: str, rules: MaterialRules) -> MaterialMatch:
    series = section_family if section_family in rules.default_grades else "*"
    grade = rules.default_grades[series]
    of = f"{series} sections" if series != "*" else "sections outside the catalogue"
    named = " / ".join((*material.grades, *material.names))
    said = f'the model says "{named}", no grade known to the rules' if named else "the model names no material"
    value = rules.grades[grade.upper().replace(" ", "")]
    return MaterialMatch(
        material=Sourced(
            value=value,
            source=Source.ASSUMED,
            where=f"{said}: {grade}, the rule set's default for {of}",
            remedy="Name the grade in the material of the model, or set default_grades in a rule file.",
        )
    )


def _unknown(texts: tuple[str, ...]) -> MaterialMatch:
    named = " / ".join(texts)
    said = f'the material "{named}" is not known to the rules' if named else "the model names no material"
    value = Material(family=MaterialFamily.UNKNOWN, grade="", density=nan)
    return MaterialMatch(
        material=Sourced(value=value, source=Source.MODEL, where=said),
        problem=f"{said}, and the section tells no family: name the material in the model (A992, steel, timber …)",
    )


def _family(texts: Iterable[str], words: Mapping[str, MaterialFamily]) -> MaterialFamily | None:
    """The family named by the longest word in the first text that has one."""
    for text in texts:
        word = _longest_word(text, words)
        if word:
            return words[word]
    return None


def _longest_word(text: str, words: Mapping[str, T]) -> str:
    """The longest of the words found in a text, the first of equals; empty for none.

    Separators count as spaces too, so that a word may ask for one at its ends.
    """
    lower = text.lower()
    spaced = f" {' '.join(_SEPARATORS.sub(' ', lower).split())} "
    return max((word for word in words if word in lower or word in spaced), key=len, default="")
