"""Loading rule sets: names, files, extending, overrides, and every message for a broken file."""

from __future__ import annotations

import time
from pathlib import Path

import pytest

from ifcaudit.errors import RuleError, UsageError
from ifcaudit.model.section import SectionKind
from ifcaudit.rulebook.loader import available_rule_sets, load_rules

PSF = 0.45359237 * 9.80665 / 0.3048**2  # NIST SP 811: defined pound, gravity and foot


def rule_file(folder: Path, text: str, name: str = "office.toml") -> Path:
    """Write a rule file."""
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return path


def problems(path: Path) -> list[str]:
    """What loading a broken file reports, line by line."""
    with pytest.raises(RuleError) as caught:
        load_rules(path)
    return str(caught.value).splitlines()


def test_default_rule_set_in_si() -> None:
    """Loads of the default rule set: ASCE 7-22 Table 4.3-1 offices 50 psf, roofs 20 psf, 4.3.2 partitions 15 psf."""
    rules = load_rules()
    assert rules.loads.floor_live.value == pytest.approx(50 * PSF)
    assert rules.loads.partitions.value == pytest.approx(15 * PSF)
    assert rules.loads.roof_live.value == pytest.approx(20 * PSF)
    assert rules.loads.floor_live.clause == "ASCE 7-22 Table 4.3-1, offices"
    assert rules.loads.floor_live.key == "loads.floor_live"
    assert rules.loads.snow.value == 0.0
    assert rules.steel_method == "aisc_360"
    assert not rules.reduction.enabled
    assert rules.reduction.area_coefficient.value == pytest.approx(4.572)  # 15 ft (ASCE 7-22 eq. 4.7-1)
    assert rules.reduction.least_influence_area.value == pytest.approx(37.16, abs=0.005)  # 400 ft²


def test_steel_grades_in_si() -> None:
    """A992 has F_y = 50 ksi = 345 MPa; E = 29 000 ksi = 200 GPa (AISC 360-22 Symbols)."""
    grade = load_rules().materials.grades["A992"]
    assert grade.yield_strength == pytest.approx(344.7e6, rel=1e-3)
    assert grade.modulus_of_elasticity == pytest.approx(200e9, rel=1e-3)
    assert grade.density == pytest.approx(7849, rel=1e-4)


def test_series_of_the_catalogue() -> None:
    """The catalogue holds the AISC series in the order of the rule set, each of one kind."""
    series = load_rules().catalogue.series
    assert list(series) == ["W", "S", "M", "HP", "C", "MC", "HSS", "HSS round"]
    kinds = {name: {section.kind for section in sections} for name, sections in series.items()}
    assert kinds["C"] == {SectionKind.CHANNEL}
    assert kinds["HSS"] == {SectionKind.RECTANGULAR_HOLLOW}
    assert kinds["HSS round"] == {SectionKind.ROUND_HOLLOW}


def test_live_load_override_is_the_whole_load() -> None:
    """A live load from outside replaces the live load and leaves no partition allowance on top."""
    loads = load_rules(live_load=2400.0).loads
    assert (loads.floor_live.value, loads.floor_live.text, loads.floor_live.overridden) == (2400.0, "2.4 kPa", True)
    assert (loads.partitions.value, loads.partitions.overridden) == (0.0, True)
    assert not loads.roof_live.overridden


def test_superimposed_dead_override_leaves_roofs_alone() -> None:
    """A superimposed dead load from outside counts for floors only."""
    loads = load_rules(superimposed_dead=750.0).loads
    assert (loads.superimposed_dead.value, loads.superimposed_dead.text) == (750.0, "0.75 kPa")
    assert loads.superimposed_dead.overridden
    assert loads.roof_superimposed_dead.value == pytest.approx(5 * PSF)


@pytest.mark.parametrize("enabled", [True, False])
def test_live_load_reduction_override(*, enabled: bool) -> None:
    """The caller decides over the rule set whether live loads are reduced."""
    assert load_rules(live_load_reduction=enabled).reduction.enabled is enabled


@pytest.mark.parametrize(
    ("option", "message"),
    [
        ({"live_load": -1.0}, "live load of -1 Pa: a load acts downwards and is finite; give zero or more"),
        (
            {"superimposed_dead": float("nan")},
            "superimposed dead load of nan Pa: a load acts downwards and is finite; give zero or more",
        ),
    ],
)
def test_a_load_that_is_none(option: dict[str, float], message: str) -> None:
    """A negative or infinite load is refused."""
    with pytest.raises(UsageError) as caught:
        load_rules(**option)  # type: ignore[arg-type]
    assert str(caught.value) == message


def test_unknown_rule_set_lists_what_there_is() -> None:
    """An unknown name gives the names that are known."""
    with pytest.raises(RuleError) as caught:
        load_rules("us-asd-1989")
    named = ", ".join(available_rule_sets())
    assert str(caught.value) == (
        f'unknown rule set "us-asd-1989"; available: {named}; or give the path of a rule file (.toml)'
    )


def test_missing_rule_file(tmp_path: Path) -> None:
    """A path that leads nowhere is said to."""
    path = tmp_path / "none.toml"
    with pytest.raises(RuleError) as caught:
        load_rules(path)
    named = ", ".join(available_rule_sets())
    assert str(caught.value) == (
        f"rule file {path}: no such file; give a TOML file, or the name of a rule set: {named}"
    )


def test_a_directory_is_no_rule_file(tmp_path: Path) -> None:
    """A folder is refused as a rule file."""
    with pytest.raises(RuleError) as caught:
        load_rules(tmp_path)
    named = ", ".join(available_rule_sets())
    assert str(caught.value) == (
        f"rule file {tmp_path}: is a directory; give a TOML file, or the name of a rule set: {named}"
    )


def test_extending_changes_single_values(tmp_path: Path) -> None:
    """A file that extends a rule set changes what it names and keeps the rest."""
    path = rule_file(
        tmp_path,
        """
        extends = "us-lrfd"
        title = "Library"
        [loads]
        floor_live = { occupancy = "library_reading_room" }
        snow = { value = 1.2, unit = "kPa", clause = "site study" }
        """,
    )
    rules = load_rules(path)
    assert (rules.title, rules.name) == ("Library", str(path))
    assert rules.loads.floor_live.value == pytest.approx(60 * PSF)
    assert (rules.loads.snow.value, rules.loads.snow.clause) == (1200.0, "site study")
    assert rules.loads.roof_live == load_rules().loads.roof_live
    assert rules.catalogue.series.keys() == load_rules().catalogue.series.keys()


def test_no_partitions_under_heavy_live_load(tmp_path: Path) -> None:
    """ASCE 7-22 4.3.2: no partition load is required where the live load is 80 psf or more."""
    text = 'extends = "us-lrfd"\n[loads]\nfloor_live = { occupancy = "office_corridor" }\n'
    partitions = load_rules(rule_file(tmp_path, text)).loads.partitions
    assert partitions.value == 0.0
    assert partitions.clause == ("ASCE 7-22 4.3.2, exception: not required where the floor live load is 80 psf or more")


def test_uses_that_may_not_be_reduced(tmp_path: Path) -> None:
    """ASCE 7-22 4.7.4 and 4.7.5: garages and assembly floors are not reduced, whatever the rule set wishes."""
    text = """
    extends = "us-lrfd"
    loads.floor_live = { occupancy = "passenger_garage" }
    reduction.enabled = true
    """
    reduction = load_rules(rule_file(tmp_path, text)).reduction
    assert not reduction.enabled
    assert reduction.clause == "ASCE 7-22 4.7.2: permitted, not compulsory; not for passenger_garage"


def test_a_section_file_beside_the_rule_file(tmp_path: Path) -> None:
    """A rule file may refer to its own section series, in any unit."""
    (tmp_path / "own.csv").write_text(
        "# series: T\n# kind: rectangle\n# source: hand calculation\n"
        "designation,mass_kg_per_m,area_cm2,depth_mm,width_mm,second_moment_major_cm4,elastic_modulus_major_cm3,"
        "plastic_modulus_major_cm3,radius_of_gyration_major_mm,second_moment_minor_cm4,elastic_modulus_minor_cm3,"
        "plastic_modulus_minor_cm3,radius_of_gyration_minor_mm\n"
        "T100,78.5,100,200,50,3333.333,333.333,500,57.735,208.333,83.333,125,14.434\n",
        encoding="utf-8",
    )
    rules = load_rules(rule_file(tmp_path, 'extends = "us-lrfd"\nfiles.sections = ["own", "aisc_w"]\n'))
    section = rules.catalogue.series["T"][0]
    assert (section.depth, section.area, section.mass_per_length) == pytest.approx((0.2, 0.01, 78.5))
    assert section.second_moment_major == pytest.approx(0.05 * 0.2**3 / 12, rel=1e-5)
    assert list(rules.catalogue.series) == ["T", "W"]


def test_all_errors_are_listed_together(tmp_path: Path) -> None:
    """A file with four errors gives one message with all four: file, key, what was found, what is allowed."""
    path = rule_file(
        tmp_path,
        """
        extends = "us-lrfd"
        colour = "red"
        [loads]
        superimposed_dead = { value = 5, unit = "psx", clause = "office standard" }
        floor_live = { occupancy = "ofice" }
        [deflection]
        floor_live_divisor = { value = "360", unit = "ratio", clause = "office standard" }
        """,
    )
    lines = problems(path)
    assert lines[-1].startswith(f'  {path}: loads.floor_live: found the occupancy "ofice"; allowed: office, ')
    assert lines[:-1] == [
        f"rule set {path}: 4 problems; correct the rule files and run again",
        (
            f'  {path}: loads.superimposed_dead: found the unit "psx"; '
            "allowed: a unit of pressure, such as psf, ksi, kPa, MPa, kN/m2"
        ),
        f'  {path}: deflection.floor_live_divisor.value: found "360"; allowed: a number',
        (
            f"  {path}: colour: found an unknown key; allowed: title, editions, steel_method, files, loads, reduction, "
            "deflection, resistance_factors"
        ),
    ]


def test_unknown_occupancy(tmp_path: Path) -> None:
    """An occupancy that the table does not hold is answered with the table's names."""
    path = rule_file(tmp_path, 'extends = "us-lrfd"\nloads.floor_live = { occupancy = "ofice" }\n')
    lines = problems(path)
    assert lines[1].startswith(
        f'  {path}: loads.floor_live: found the occupancy "ofice"; allowed: office, office_lobby, office_corridor, '
    )
    assert len(lines) == 2


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (
            'loads.snow = { value = 1, unit = "kPa" }',
            "loads.snow: found value, unit; allowed: either occupancy alone, or value, unit and clause",
        ),
        (
            'loads.snow = { occupancy = "roof", value = 1, unit = "kPa", clause = "c" }',
            (
                "loads.snow: found occupancy, value, unit, clause; "
                "allowed: either occupancy alone, or value, unit and clause"
            ),
        ),
        (
            'loads.snow = { value = -1, unit = "kPa", clause = "c" }',
            "loads.snow.value: found -1; allowed: 0 or more",
        ),
        (
            'loads.snow = { value = inf, unit = "kPa", clause = "c" }',
            "loads.snow.value: found inf; allowed: a finite number",
        ),
        ("reduction.enabled = 1", "reduction.enabled: found 1; allowed: true or false"),
        (
            'resistance_factors.phi_b = { value = 1.2, unit = "ratio", clause = "c" }',
            "resistance_factors.phi_b.value: found 1.2; allowed: 1 or less",
        ),
        (
            'resistance_factors.phi_b = { value = 0.9, unit = "kPa", clause = "c" }',
            'resistance_factors.phi_b: found the unit "kPa"; allowed: the word "ratio"',
        ),
        (
            'deflection.floor_live_divisor = { value = 0, unit = "ratio", clause = "c" }',
            "deflection.floor_live_divisor.value: found 0; allowed: more than 0",
        ),
        ("loads = 3", "loads: found 3; allowed: a table"),
        ('files.sections = "aisc_w"', 'files.sections: found "aisc_w"; allowed: a list in brackets'),
        ("editions = [1]", "editions[1]: found 1; allowed: text in quotes"),
        (
            "loads.floor_live.colour = 1",
            "loads.floor_live.colour: found an unknown key; allowed: occupancy, value, unit, clause",
        ),
        (
            'resistance_factors.phi_b = { value = 0.9, unit = "ratio", clause = "c", note = "n" }',
            "resistance_factors.phi_b.note: found an unknown key; allowed: value, unit, clause",
        ),
        ("editions = []", "editions: found a list of 0; allowed: at least 1 items"),
        ('title = ""', 'title: found ""; allowed: a text of at least 1 characters'),
        (
            'reduction.constant = { value = 0.25, unit = "ratio" }',
            "reduction.constant.clause: found nothing; allowed: this key is required",
        ),
    ],
)
def test_each_kind_of_error_says_what_is_allowed(tmp_path: Path, text: str, message: str) -> None:
    """Whatever is wrong with a value, the message gives key, what was found and what is allowed."""
    path = rule_file(tmp_path, f'extends = "us-lrfd"\n{text}\n')
    assert problems(path) == [
        f"rule set {path}: 1 problem; correct the rule files and run again",
        f"  {path}: {message}",
    ]


def test_unknown_load_case_in_a_combination(tmp_path: Path) -> None:
    """A combination may only use the load cases that there are."""
    combinations = rule_file(
        tmp_path,
        'title = "t"\n[[combinations]]\nname = "1.2D + 1.6W"\nfactors = { D = 1.2, W = 1.6 }\nclause = "c"\n',
        "own.toml",
    )
    path = rule_file(tmp_path, 'extends = "us-lrfd"\nfiles.combinations = "own"\n')
    assert problems(path)[1:] == [
        f"  {combinations}: combinations[1]: found a factor on W; allowed: factors on D, L, Lr, S"
    ]


def test_a_file_that_is_not_there(tmp_path: Path) -> None:
    """A reference that leads nowhere is answered with the packaged files of that kind."""
    path = rule_file(tmp_path, 'extends = "us-lrfd"\nfiles.materials = "mars"\n')
    assert problems(path)[1:] == [
        f'  {path}: files.materials: found "mars", which is not there; allowed: a file beside it, or one of us'
    ]


def test_extending_what_is_not_there(tmp_path: Path) -> None:
    """A base that is not there, and a base that extends the file in turn, are both refused."""
    path = rule_file(tmp_path, 'extends = "mars"\n')
    named = ", ".join(available_rule_sets())
    assert problems(path)[1:] == [
        f'  {path}: extends: found "mars", that is not there; allowed: a rule file beside it, or one of {named}'
    ]
    rule_file(tmp_path, 'extends = "two"\n', "one.toml")
    two = rule_file(tmp_path, 'extends = "one"\n', "two.toml")
    assert problems(tmp_path / "one.toml")[1:] == [
        (
            f'  {two}: extends: found "one", that extends this file in turn; '
            f"allowed: a rule file beside it, or one of {named}"
        )
    ]


def test_broken_toml(tmp_path: Path) -> None:
    """A syntax error gives its line and column."""
    path = rule_file(tmp_path, 'extends = "us-lrfd"\ntitle = \n')
    assert problems(path)[1:] == [
        f"  {path}: found TOML that cannot be read: Invalid value (at line 2, column 9); allowed: TOML syntax"
    ]


def test_bad_rows_of_a_section_file(tmp_path: Path) -> None:
    """Every bad row of a section file is listed with its line."""
    heading = (
        "designation,weight_plf,area_in2,depth_in,width_in,second_moment_major_in4,elastic_modulus_major_in3,"
        "plastic_modulus_major_in3,radius_of_gyration_major_in,second_moment_minor_in4,elastic_modulus_minor_in3,"
        "plastic_modulus_minor_in3,radius_of_gyration_minor_in"
    )
    good = ",10,3,8,4,30,8,9,3,4,2,3,1"
    own = tmp_path / "own.csv"
    own.write_text(
        f"# series: X\n# kind: I-shape\n# source: none\n{heading}\n"
        f"X1{good}\nX1{good}\nX2,ten,3,8,4,30,8,9,3,4,2,3,1\nX3,1\n",
        encoding="utf-8",
    )
    path = rule_file(tmp_path, 'extends = "us-lrfd"\nfiles.sections = ["own"]\n')
    assert problems(path)[1:] == [
        f"  {own}: line 6: found X1 again, first on line 5; allowed: each designation once",
        f'  {own}: line 7: found "ten" for mass_per_length; allowed: a plain number above zero',
        f"  {own}: line 8: found 2 cells; allowed: 13 cells",
    ]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (
            "# kind: I-shape\n# source: s\ndesignation,depth_in\n",
            '# series: found nothing; allowed: a header comment line "# series: ..."',
        ),
        (
            "# series: X\n# kind: spiral\n# source: s\ndesignation,depth_in\n",
            (
                '# kind: found "spiral"; allowed: I-shape, channel, tee, angle, rectangular hollow, round hollow, '
                "rectangle, round, other"
            ),
        ),
        (
            "# series: X\n# kind: I-shape\n# source: s\ndesignation,depth_psf\n",
            (
                'line 4: found the heading "depth_psf"; '
                "allowed: an attribute with a unit that fits it, such as depth_in, area_in2, weight_plf"
            ),
        ),
        (
            "# series: X\n# kind: I-shape\n# source: s\nname,depth_in\n",
            'line 4: found "name"; allowed: a first heading "designation"',
        ),
    ],
)
def test_bad_headings_of_a_section_file(tmp_path: Path, text: str, message: str) -> None:
    """A section file without series, with an unknown kind, a unit that does not fit, or no designations is refused."""
    own = tmp_path / "own.csv"
    own.write_text(text, encoding="utf-8")
    path = rule_file(tmp_path, 'extends = "us-lrfd"\nfiles.sections = ["own"]\n')
    assert problems(path)[1] == f"  {own}: {message}"


def test_a_file_that_is_no_text(tmp_path: Path) -> None:
    """A binary file is refused, not decoded by guess."""
    path = tmp_path / "binary.toml"
    path.write_bytes(b"\xff\xfe\x00")
    assert problems(path)[1:] == [
        (
            f"  {path}: found 'utf-8' codec can't decode byte 0xff in position 0: invalid start byte; "
            "allowed: a readable TOML file in UTF-8"
        )
    ]


def test_a_series_in_two_files(tmp_path: Path) -> None:
    """A series may come from one file only."""
    path = rule_file(tmp_path, 'extends = "us-lrfd"\nfiles.sections = ["aisc_w", "aisc_w"]\n')
    assert problems(path)[1:] == [
        '  rules/sections/aisc_w.csv: # series: found "W", which another file has; allowed: each series in one file'
    ]


def test_a_grade_that_the_file_does_not_hold(tmp_path: Path) -> None:
    """A default grade must be one of the file's own grades."""
    from ifcaudit.rulebook.files import packaged_rules

    text = (packaged_rules() / "materials" / "us.toml").read_text(encoding="utf-8")
    own = rule_file(tmp_path, text.replace('W = { grade = "A992"', 'W = { grade = "A999"'), "own.toml")
    path = rule_file(tmp_path, 'extends = "us-lrfd"\nfiles.materials = "own"\n')
    line = problems(path)[1]
    assert line.startswith(f'  {own}: found default_grades."W" names A999; allowed: grades of this file: A36, A53-B, ')


def test_loading_again_is_quick() -> None:
    """A second load reads the catalogue from memory: far below a third of a second."""
    load_rules()
    start = time.perf_counter()
    load_rules(live_load=3000.0)
    assert time.perf_counter() - start < 0.3
