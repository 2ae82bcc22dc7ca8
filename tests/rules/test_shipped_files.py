"""Every rule file that comes with the package holds together: clauses, units, no duplicates."""

from __future__ import annotations

import tomllib
from collections import Counter
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from ifcaudit.model.loads import LoadCase
from ifcaudit.rulebook.files import packaged_rules
from ifcaudit.rulebook.loader import available_rule_sets, load_rules
from ifcaudit.rulebook.section_files import read_series

TOML_FILES = sorted(packaged_rules().rglob("*.toml"))
CSV_FILES = sorted(packaged_rules().glob("sections/*.csv"))


def _numbers(table: Any, at: str = "") -> Iterator[tuple[str, dict[str, Any]]]:
    """Every number in a rule file, with the table it stands in."""
    if isinstance(table, dict):
        for key, value in table.items():
            if isinstance(value, int | float) and not isinstance(value, bool):
                yield f"{at}.{key}", table
            else:
                yield from _numbers(value, f"{at}.{key}")
    elif isinstance(table, list):
        for number, value in enumerate(table):
            yield from _numbers(value, f"{at}[{number}]")


@pytest.mark.parametrize("path", TOML_FILES, ids=lambda path: path.stem)
def test_every_number_has_its_clause(path: Path) -> None:
    """A number stands in a table with unit and clause; load factors stand under their combination's clause."""
    table = tomllib.loads(path.read_text(encoding="utf-8"))
    for place, holder in _numbers(table):
        if ".factors." in place:
            continue
        assert len(holder.get("clause", "")) >= 8, place
        assert holder.get("unit"), place
    for combination in table.get("combinations", []):
        assert combination["clause"].startswith("ASCE 7-22 2.3.1"), combination["name"]


@pytest.mark.parametrize("name", available_rule_sets())
def test_every_rule_set_loads(name: str) -> None:
    """Units parse, references resolve, and nothing is unknown in any shipped rule set."""
    rules = load_rules(name)
    assert rules.strength_combinations
    assert all(rules.catalogue.series.values())
    assert all(grade in rules.materials.grades for grade in rules.materials.default_grades.values())


@pytest.mark.parametrize("path", CSV_FILES, ids=lambda path: path.stem)
def test_every_section_file_is_clean(path: Path) -> None:
    """No duplicate designations, no bad cells, and the header names the source."""
    series = read_series(path, path.name)
    assert series.problems == ()
    assert not [name for name, count in Counter(s.designation for s in series.sections).items() if count > 1]
    header = [line for line in path.read_text(encoding="utf-8").splitlines() if line.startswith("#")]
    assert any("16th edition" in line for line in header)


def test_designations_are_unique_over_all_series() -> None:
    """One designation means one section in the whole catalogue."""
    series = load_rules().catalogue.series
    counts = Counter(section.designation for sections in series.values() for section in sections)
    assert counts.most_common(1)[0][1] == 1


def test_every_shipped_file_is_used() -> None:
    """No section file lies about unused."""
    assert sum(len(sections) for sections in load_rules().catalogue.series.values()) == sum(
        len(read_series(path, path.name).sections) for path in CSV_FILES
    )


def test_gravity_combinations_of_strength_design() -> None:
    """ASCE 7-22 2.3.1 with strength-level snow (factors 1.0 and 0.3), live load reducible or not alike."""
    factors = {item.name: dict(item.factors) for item in load_rules().strength_combinations}
    dead, live, partition = LoadCase.DEAD, LoadCase.LIVE, LoadCase.LIVE_UNREDUCED
    roof, snow = LoadCase.ROOF_LIVE, LoadCase.SNOW
    assert factors == {
        "1.4D": {dead: 1.4},
        "1.2D + 1.6L + 0.5Lr": {dead: 1.2, live: 1.6, partition: 1.6, roof: 0.5},
        "1.2D + 1.6L + 0.3S": {dead: 1.2, live: 1.6, partition: 1.6, snow: 0.3},
        "1.2D + 1.6Lr + 1.0L": {dead: 1.2, roof: 1.6, live: 1.0, partition: 1.0},
        "1.2D + 1.0S + 1.0L": {dead: 1.2, snow: 1.0, live: 1.0, partition: 1.0},
    }


def test_words_of_materials_are_in_lower_case() -> None:
    """Texts are compared in lower case, so words must be."""
    materials = load_rules().materials
    words = [*materials.family_words, *materials.densities, *materials.one_way_words]
    assert [word for word in words if word != word.lower()] == []


def test_no_density_word_is_listed_twice() -> None:
    """A word that two materials claim would let the order of the file decide a weight."""
    table = tomllib.loads((packaged_rules() / "materials" / "us.toml").read_text(encoding="utf-8"))
    counts = Counter(word for density in table["densities"].values() for word in density["words"])
    assert [word for word, count in counts.items() if count > 1] == []
    families = Counter(word for words in table["family_words"].values() for word in words)
    assert [word for word, count in families.items() if count > 1] == []
