"""Read a rule set: find its files, validate all of them, turn every number into SI."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from os import PathLike, fspath
from pathlib import Path
from typing import Any, TypeVar

from pydantic import ValidationError

from ifcaudit.errors import UsageError
from ifcaudit.model.material import Material, MaterialFamily
from ifcaudit.model.section import Section
from ifcaudit.rulebook import schema
from ifcaudit.rulebook.files import (
    available_rule_sets,
    origin_of,
    read_standard,
    read_toml,
    rule_file,
    shown,
)
from ifcaudit.rulebook.problems import Problem, raise_all, validation_problems
from ifcaudit.rulebook.records import (
    Catalogue,
    Combination,
    DeflectionRules,
    LiveLoadReduction,
    LoadRules,
    MaterialRules,
    RuleSet,
    RuleValue,
    SteelResistance,
)
from ifcaudit.rulebook.section_files import read_series
from ifcaudit.units import factor

__all__ = ["available_rule_sets", "load_rules"]

Model = TypeVar("Model", bound=schema.Strict)
_REPLACED = "replaced by the caller: the whole load"


@dataclass(frozen=True, slots=True, kw_only=True)
class _Files:
    """The validated files of one rule set."""

    standard: schema.StandardFile
    materials: schema.MaterialFile
    occupancies: schema.OccupancyFile
    combinations: schema.CombinationFile
    catalogue: Catalogue


def load_rules(
    name_or_file: str | PathLike[str] = "us-lrfd",
    *,
    live_load: float | None = None,
    superimposed_dead: float | None = None,
    live_load_reduction: bool | None = None,
) -> RuleSet:
    """Read and validate a rule set.

    Args:
        name_or_file: Name of a rule set that comes with this package, or the path of a rule file. A rule file may refer
            to packaged files by name and to files beside it, and may extend another rule set and change single values.
        live_load: Replaces the live load of floors [Pa]; it is the whole load, so the partition allowance becomes zero.
        superimposed_dead: Replaces the superimposed dead load of floors [Pa].
        live_load_reduction: Replaces the rule set's decision whether to reduce live loads.

    Returns:
        The rule set in SI; every number with its clause and the text it was read from.

    Raises:
        RuleError: No such rule set or file; or its files do not validate. Every problem is listed in one message.
        UsageError: A load is negative.

    Example:
        >>> rules = load_rules("us-lrfd")
        >>> rules.loads.floor_live.text, round(rules.loads.floor_live.value)
        ('50 psf', 2394)
    """
    _not_negative("live load", live_load)
    _not_negative("superimposed dead load", superimposed_dead)
    name = fspath(name_or_file)
    rules = _rule_set(_read(rule_file(name_or_file), name), name)
    if live_load is not None:
        loads = replace(
            rules.loads,
            floor_live=_overridden(live_load, "loads.floor_live"),
            partitions=_overridden(0.0, "loads.partitions"),
        )
        rules = replace(rules, loads=loads)
    if superimposed_dead is not None:
        loads = replace(rules.loads, superimposed_dead=_overridden(superimposed_dead, "loads.superimposed_dead"))
        rules = replace(rules, loads=loads)
    if live_load_reduction is not None:
        rules = replace(rules, reduction=replace(rules.reduction, enabled=live_load_reduction))
    return rules


def _not_negative(what: str, load: float | None) -> None:
    if load is not None and not 0.0 <= load < float("inf"):
        raise UsageError(f"{what} of {load:g} Pa: a load acts downwards and is finite; give zero or more")


def _overridden(load: float, key: str) -> RuleValue:
    return RuleValue(
        value=load, text=f"{load / factor('kPa', 'pressure'):.4g} kPa", clause=_REPLACED, key=key, overridden=True
    )


def _read(path: Path, name: str) -> _Files:
    """Read and validate every file; one error for all problems in all of them."""
    table, origin = read_standard(path, name)
    problems: list[Problem] = []
    standard = _validated(schema.StandardFile, table, shown(path), problems)
    problems = [
        replace(problem, file=shown(origin_of(tuple(problem.place.split(".")), origin))) for problem in problems
    ]
    references = table.get("files")
    files: Mapping[str, Any] = references if isinstance(references, dict) else {}
    materials = _file(schema.MaterialFile, files.get("materials"), problems)
    occupancies = _file(schema.OccupancyFile, files.get("occupancies"), problems)
    combinations = _file(schema.CombinationFile, files.get("combinations"), problems)
    catalogue = _catalogue(files.get("sections"), problems)
    if occupancies:
        _check_occupancies(table.get("loads"), occupancies, origin, problems)
    raise_all(name, problems)
    assert standard and materials and occupancies and combinations  # noqa: S101, PT018 — else raised above
    return _Files(
        standard=standard,
        materials=materials,
        occupancies=occupancies,
        combinations=combinations,
        catalogue=catalogue,
    )


def _validated(model: type[Model], table: Mapping[str, Any], file: str, problems: list[Problem]) -> Model | None:
    try:
        return model.model_validate(table)
    except ValidationError as error:
        problems.extend(validation_problems(error, model, file))
        return None


def _file(model: type[Model], path: object, problems: list[Problem]) -> Model | None:
    if not isinstance(path, str):
        return None
    before = len(problems)
    table = read_toml(Path(path), problems)
    return _validated(model, table, shown(Path(path)), problems) if len(problems) == before else None


def _catalogue(paths: object, problems: list[Problem]) -> Catalogue:
    series: dict[str, tuple[Section, ...]] = {}
    for path in paths if isinstance(paths, list) else []:
        if not isinstance(path, str):
            continue
        read = read_series(Path(path), shown(Path(path)))
        problems.extend(read.problems)
        if read.name in series:
            problems.append(
                Problem(
                    file=shown(Path(path)),
                    place="# series",
                    found=f'"{read.name}", which another file has',
                    allowed="each series in one file",
                )
            )
        series[read.name] = read.sections
    return Catalogue(series=series)


def _check_occupancies(
    loads: object,
    occupancies: schema.OccupancyFile,
    origin: dict[tuple[str, ...], Path],
    problems: list[Problem],
) -> None:
    """Look up every occupancy that a load names, also where other keys do not validate."""
    for key, load in loads.items() if isinstance(loads, dict) else ():
        name = load.get("occupancy") if isinstance(load, dict) else None
        if isinstance(name, str) and name not in occupancies.occupancies:
            problems.append(
                Problem(
                    file=shown(origin_of(("loads", key), origin)),
                    place=f"loads.{key}",
                    found=f'the occupancy "{name}"',
                    allowed=", ".join(occupancies.occupancies),
                )
            )


def _rule_set(files: _Files, name: str) -> RuleSet:
    standard = files.standard
    return RuleSet(
        name=name,
        title=standard.title,
        editions=tuple(standard.editions),
        steel_method=standard.steel_method,
        loads=_loads(standard.loads, files.occupancies),
        reduction=_reduction(standard, files.occupancies),
        strength_combinations=tuple(_combination(item) for item in files.combinations.combinations),
        deflection=DeflectionRules(
            **{
                key: _value(getattr(standard.deflection, key), f"deflection.{key}")
                for key in schema.Deflection.model_fields
            }
        ),
        steel=SteelResistance(
            factors={
                key: _value(item, f"resistance_factors.{key}") for key, item in standard.resistance_factors.items()
            }
        ),
        materials=_materials(files.materials),
        catalogue=files.catalogue,
    )


def _value(quantity: schema.Quantity, key: str) -> RuleValue:
    return RuleValue(value=quantity.in_si, text=quantity.text, clause=quantity.clause, key=key)


def _load(load: schema.Load, key: str, occupancies: schema.OccupancyFile) -> RuleValue:
    if load.occupancy is not None:
        return _value(occupancies.occupancies[load.occupancy], key)
    return _value(schema.Pressure(value=load.value or 0.0, unit=load.unit or "", clause=load.clause or ""), key)


def _loads(loads: schema.Loads, occupancies: schema.OccupancyFile) -> LoadRules:
    floor_live = _load(loads.floor_live, "loads.floor_live", occupancies)
    partitions = _load(loads.partitions, "loads.partitions", occupancies)
    threshold = loads.partitions_not_required_from
    if floor_live.value >= threshold.in_si * (1.0 - 1e-9):
        clause = f"{threshold.clause}: not required where the floor live load is {threshold.text} or more"
        partitions = replace(partitions, value=0.0, text=f"0 {threshold.unit}", clause=clause)
    return LoadRules(
        floor_live=floor_live,
        partitions=partitions,
        superimposed_dead=_load(loads.superimposed_dead, "loads.superimposed_dead", occupancies),
        roof_live=_load(loads.roof_live, "loads.roof_live", occupancies),
        roof_superimposed_dead=_load(loads.roof_superimposed_dead, "loads.roof_superimposed_dead", occupancies),
        snow=_load(loads.snow, "loads.snow", occupancies),
        slab_weight_default=_value(loads.slab_weight_default, "loads.slab_weight_default"),
    )


def _reduction(standard: schema.StandardFile, occupancies: schema.OccupancyFile) -> LiveLoadReduction:
    """The reduction as the rule set states it; off where it takes the floors for a use that may not be reduced."""
    reduction = standard.reduction
    use = standard.loads.floor_live.occupancy
    barred = use is not None and not occupancies.occupancies[use].reducible
    return LiveLoadReduction(
        enabled=reduction.enabled and not barred,
        element_factor=_value(reduction.element_factor, "reduction.element_factor"),
        constant=_value(reduction.constant, "reduction.constant"),
        area_coefficient=_value(reduction.area_coefficient, "reduction.area_coefficient"),
        least_influence_area=_value(reduction.least_influence_area, "reduction.least_influence_area"),
        least_ratio_one_floor=_value(reduction.least_ratio_one_floor, "reduction.least_ratio_one_floor"),
        live_load_limit=_value(reduction.live_load_limit, "reduction.live_load_limit"),
        clause=f"{reduction.clause}; not for {use}" if barred else reduction.clause,
    )


def _combination(item: schema.Combination) -> Combination:
    factors = {case: value for symbol, value in item.factors.items() for case in schema.CASES_BY_SYMBOL[symbol]}
    return Combination(name=item.name, factors=factors, clause=item.clause)


def _materials(file: schema.MaterialFile) -> MaterialRules:
    grades: dict[str, Material] = {}
    for name, grade in file.grades.items():
        material = Material(
            family=MaterialFamily.STEEL,
            grade=name,
            density=file.steel.density.in_si,
            modulus_of_elasticity=file.steel.modulus_of_elasticity.in_si,
            shear_modulus=file.steel.shear_modulus.in_si,
            yield_strength=grade.yield_strength.in_si,
            ultimate_strength=grade.ultimate_strength.in_si,
        )
        grades |= {spelling.upper().replace(" ", ""): material for spelling in (name, *grade.aliases)}
    return MaterialRules(
        grades=grades,
        family_words={
            word.lower(): MaterialFamily(family) for family, words in file.family_words.items() for word in words
        },
        default_grades={series: default.grade for series, default in file.default_grades.items()},
        densities={
            word.lower(): _value(density, f"densities.{name}")
            for name, density in file.densities.items()
            for word in density.words
        },
        one_way_words=tuple(word.lower() for word in file.one_way.words),
    )
