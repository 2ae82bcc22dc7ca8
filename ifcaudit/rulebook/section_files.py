"""Section series from CSV: one file per series, a unit in every heading, the source in the header comment.

Header comment lines ``# series:``, ``# kind:`` and ``# source:`` are required. A heading is the name of an attribute of
:class:`~ifcaudit.model.section.Section` with its unit (``depth_in``, ``second_moment_major_in4``); slendernesses have
no unit, and the mass per length is written ``weight_plf`` or ``mass_kg_per_m``.
"""

from __future__ import annotations

import csv
from collections.abc import Sequence
from dataclasses import MISSING, dataclass, fields
from functools import cache
from math import isfinite, nan
from pathlib import Path

from ifcaudit.errors import QuantityError
from ifcaudit.model.section import Section, SectionKind
from ifcaudit.rulebook.problems import Problem
from ifcaudit.units import factor, standard_gravity

_DIMENSIONS = {
    "depth": "length",
    "width": "length",
    "flange_thickness": "length",
    "web_thickness": "length",
    "flange_slenderness": "ratio",
    "web_slenderness": "ratio",
    "area": "area",
    "mass_per_length": "mass per length",
    "second_moment_major": "second moment of area",
    "elastic_modulus_major": "section modulus",
    "plastic_modulus_major": "section modulus",
    "radius_of_gyration_major": "length",
    "second_moment_minor": "second moment of area",
    "elastic_modulus_minor": "section modulus",
    "plastic_modulus_minor": "section modulus",
    "radius_of_gyration_minor": "length",
    "torsion_constant": "second moment of area",
    "warping_constant": "warping constant",
    "effective_radius_of_gyration": "length",
    "flange_centroid_distance": "length",
}
_STEMS = {"weight": "mass_per_length", "mass": "mass_per_length"} | {name: name for name in _DIMENSIONS}
_REQUIRED = tuple(field.name for field in fields(Section) if field.default is MISSING and field.name in _DIMENSIONS)
_HEADER_KEYS = ("series", "kind", "source")


@dataclass(frozen=True, slots=True, kw_only=True)
class Series:
    """One section series, and what is wrong with its file."""

    name: str
    sections: tuple[Section, ...]
    problems: tuple[Problem, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Column:
    attribute: str
    factor: float


def read_series(path: Path, shown: str) -> Series:
    """Read one section series; parsed once per process while the file stays the same.

    Args:
        path: The CSV file.
        shown: How messages call it.
    """
    return _read_series(path, shown, path.stat().st_mtime_ns)


@cache
def _read_series(path: Path, shown: str, _changed: int) -> Series:
    try:
        lines = path.read_text(encoding="utf-8").splitlines()
    except (OSError, UnicodeDecodeError) as error:
        problem = Problem(file=shown, place="", found=str(error), allowed="a readable CSV file in UTF-8")
        return Series(name="", sections=(), problems=(problem,))
    comments = [line for line in lines if line.startswith("#")]
    rows = [(number, line) for number, line in enumerate(lines, 1) if line.strip() and not line.startswith("#")]
    problems: list[Problem] = []
    header = _header(comments, shown, problems)
    kind = header.get("kind", "")
    if kind and kind not in set(SectionKind):
        problems.append(
            Problem(
                file=shown, place="# kind", found=f'"{kind}"', allowed=", ".join(item.value for item in SectionKind)
            )
        )
    columns = _columns(rows, shown, problems)
    if problems:
        return Series(name=header.get("series", ""), sections=(), problems=tuple(problems))
    sections = _sections(rows[1:], columns, (SectionKind(kind), header["series"]), shown, problems)
    return Series(name=header["series"], sections=tuple(sections), problems=tuple(problems))


def _header(comments: Sequence[str], shown: str, problems: list[Problem]) -> dict[str, str]:
    header: dict[str, str] = {}
    for line in comments:
        key, separator, text = line.lstrip("# ").partition(":")
        if separator:
            header.setdefault(key.strip(), text.strip())
    problems.extend(
        Problem(file=shown, place=f"# {key}", found="nothing", allowed=f'a header comment line "# {key}: ..."')
        for key in _HEADER_KEYS
        if not header.get(key)
    )
    return header


def _columns(rows: Sequence[tuple[int, str]], shown: str, problems: list[Problem]) -> list[_Column]:
    """One column per heading after ``designation``, each with its factor to SI."""
    number, first = rows[0] if rows else (1, "")
    headings = next(csv.reader([first]), [])
    place = f"line {number}"
    if not headings or headings[0] != "designation":
        found = f'"{headings[0]}"' if headings else "nothing"
        problems.append(Problem(file=shown, place=place, found=found, allowed='a first heading "designation"'))
        return []
    columns = []
    for heading in headings[1:]:
        column = _column(heading)
        if column is None:
            problems.append(
                Problem(
                    file=shown,
                    place=place,
                    found=f'the heading "{heading}"',
                    allowed="an attribute with a unit that fits it, such as depth_in, area_in2, weight_plf",
                )
            )
        else:
            columns.append(column)
    present = [column.attribute for column in columns]
    problems.extend(
        Problem(file=shown, place=place, found=f"no heading for {name}", allowed="this column is required")
        for name in _REQUIRED
        if name not in present and not problems
    )
    problems.extend(
        Problem(file=shown, place=place, found=f"two headings for {name}", allowed="one column for each attribute")
        for name in dict.fromkeys(present)
        if present.count(name) > 1
    )
    return columns


def _column(heading: str) -> _Column | None:
    """Read a heading.

    Example:
        >>> _column("depth_in")
        _Column(attribute='depth', factor=0.0254)
    """
    stem = max((name for name in _STEMS if heading == name or heading.startswith(f"{name}_")), key=len, default="")
    if not stem:
        return None
    attribute = _STEMS[stem]
    weighs = stem == "weight"  # a force per length; the mass is what weighs that much
    unit = heading[len(stem) + 1 :].replace("_per_", "/")
    dimension = "line load" if weighs else _DIMENSIONS[attribute]
    if dimension == "ratio":
        return None if unit else _Column(attribute=attribute, factor=1.0)
    try:
        in_si = factor(unit, dimension) if unit else nan
    except QuantityError:
        return None
    in_si = in_si / standard_gravity() if weighs else in_si
    return _Column(attribute=attribute, factor=in_si) if isfinite(in_si) else None


def _sections(
    rows: Sequence[tuple[int, str]],
    columns: Sequence[_Column],
    kind_and_series: tuple[SectionKind, str],
    shown: str,
    problems: list[Problem],
) -> list[Section]:
    kind, series = kind_and_series
    sections = []
    seen: dict[str, int] = {}
    for (number, _), cells in zip(rows, csv.reader(line for _, line in rows), strict=True):
        found_before = len(problems)
        place = f"line {number}"
        if len(cells) != len(columns) + 1:
            problems.append(
                Problem(file=shown, place=place, found=f"{len(cells)} cells", allowed=f"{len(columns) + 1} cells")
            )
            continue
        designation = cells[0].strip()
        if not designation or designation in seen:
            found = f"{designation} again, first on line {seen[designation]}" if designation else "no designation"
            problems.append(Problem(file=shown, place=place, found=found, allowed="each designation once"))
        seen.setdefault(designation, number)
        values = {
            column.attribute: _value(cell, column, (shown, place), problems)
            for column, cell in zip(columns, cells[1:], strict=True)
        }
        if len(problems) == found_before:
            sections.append(Section(kind=kind, designation=designation, family=series, **values))
    return sections


def _value(cell: str, column: _Column, where: tuple[str, str], problems: list[Problem]) -> float:
    """Read one cell: a plain positive number, or empty where the shape has no such property."""
    if not cell.strip() and column.attribute not in _REQUIRED:
        return nan
    try:
        number = float(cell)
    except ValueError:
        number = nan
    if not isfinite(number) or number <= 0.0 or "_" in cell:
        found = f'"{cell}" for {column.attribute}'
        problems.append(Problem(file=where[0], place=where[1], found=found, allowed="a plain number above zero"))
        return nan
    return number * column.factor
