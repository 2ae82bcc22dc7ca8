"""Find catalogue designations in the texts of a model.

``W16X26``, ``w 16 x 26``, ``W410x38.8`` (soft metric: nominal depth in mm, mass in kg/m), ``HSS6X6X1/4``,
``HSS6x6x.25``, ``HSS152X152X6.4``, inside texts such as ``W-Wide Flange:W12X26:12345``.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field
from functools import cache

from ifcaudit.model.section import Section
from ifcaudit.rulebook.records import Catalogue
from ifcaudit.units import convert, factor

_NUMBER = r"\d+-\d+/\d+|\d+/\d+|\d*\.\d+|\d+"
_AFTER = r"(?![0-9A-Z]|/\d|\.\d|\s*[X×*]\s*[\d.])"
_ROLLED = re.compile(rf"(?<![A-Z0-9.])(HP|MC|[WSMC])[\s-]*(\d+(?:\.\d+)?)\s*[X×*]\s*(\d+(?:\.\d+)?){_AFTER}")
_HOLLOW = re.compile(rf"(?<![A-Z0-9.])HSS[\s-]*({_NUMBER})\s*[X×*]\s*({_NUMBER})(?:\s*[X×*]\s*({_NUMBER}))?{_AFTER}")
_LOOKS_LIKE_A_SECTION = re.compile(
    r"(?<![A-Z0-9.])(?:IPE|IPN|HE|HEA|HEB|HEM|UPE|UPN|UBP|UB|UC|PFC|RHS|SHS|CHS|HSS|HP|MC|WT|[WSMCL])[\s-]*"
    r"\d+(?:[./]\d+)*(?:\s*[X×*]\s*\d+(?:[-./]\d+)*)*(?:\s?[ABM])?(?![0-9A-Z])"
)
_NEEDS_TWO_NUMBERS = re.compile(r"^(?:HSS|HP|MC|WT|UB|UC|UBP|[WSMCL])[\s-]*\d+(?:[./]\d+)*$")
_BREAKS = re.compile(r"[\s:;,|()\[\]\"_]+")

_INCH_TOLERANCE = 0.003
_METRIC_TOLERANCE = 0.6
_METRIC_WALL_TOLERANCE = 0.11
_DEPTH_SHARE = 0.035
_MASS_SHARE = 0.023


@dataclass(slots=True)
class DesignationIndex:
    """The designations of a catalogue, taken apart for look-up.

    Attributes:
        exact: Designation in upper case without spaces -> section.
        rolled: Series letters -> (nominal depth [in], weight [plf], section).
        hollow: Number of sizes -> (sizes [in], section); sizes of a rectangle largest first.
    """

    exact: dict[str, Section] = field(default_factory=dict)
    rolled: dict[str, list[tuple[float, float, Section]]] = field(default_factory=dict)
    hollow: dict[int, list[tuple[tuple[float, ...], Section]]] = field(default_factory=dict)


def index_designations(catalogue: Catalogue) -> DesignationIndex:
    """Take the designations of a catalogue apart."""
    index = DesignationIndex()
    for sections in catalogue.series.values():
        for section in sections:
            text = section.designation.upper().replace(" ", "")
            index.exact[text] = section
            if match := _HOLLOW.fullmatch(text):
                sizes = _hollow_sizes(match)
                index.hollow.setdefault(len(sizes), []).append((sizes, section))
            elif match := _ROLLED.fullmatch(text):
                letters, depth, weight = match.groups()
                index.rolled.setdefault(letters, []).append((float(depth), float(weight), section))
    return index


def find_designation(texts: Iterable[str], index: DesignationIndex) -> tuple[Section, str] | None:
    """Find the first text that names exactly one section of the catalogue.

    Returns:
        The section and the text that names it; ``None`` where none does.
    """
    for text in texts:
        named = _named(text.upper(), index)
        if len(named) == 1:
            return named.popitem()[1], text
    return None


def normalise_designation(text: str, index: DesignationIndex) -> str | None:
    """Return the catalogue's own designation of the one section that a text names; ``None`` for none or several."""
    found = find_designation((text,), index)
    return found[0].designation if found else None


def unknown_designation(texts: Iterable[str]) -> str:
    """Return the first part of a text that looks like the name of a rolled section, in capitals; empty for none.

    Example:
        >>> unknown_designation(("Beam", "HE220B", "Level 1"))
        'HE220B'
    """
    for text in texts:
        for match in _LOOKS_LIKE_A_SECTION.finditer(text.upper()):
            if not _NEEDS_TWO_NUMBERS.match(match.group()):
                return match.group().strip()
    return ""


def _named(text: str, index: DesignationIndex) -> dict[str, Section]:
    """Every section that a text names, by designation."""
    tokens = [text.replace(" ", ""), *_BREAKS.split(text)]
    found = {index.exact[token].designation: index.exact[token] for token in tokens if token in index.exact}
    for match in _ROLLED.finditer(text):
        letters, depth, weight = match.groups()
        section = _rolled(index.rolled.get(letters, ()), float(depth), float(weight))
        if section:
            found[section.designation] = section
    for match in _HOLLOW.finditer(text):
        sizes = _hollow_sizes(match)
        section = _hollow(index.hollow.get(len(sizes), ()), sizes)
        if section:
            found[section.designation] = section
    return found


def _rolled(candidates: Iterable[tuple[float, float, Section]], depth: float, weight: float) -> Section | None:
    """The section of this nominal depth and weight, in inches and plf, else in mm and kg/m."""
    listed = list(candidates)
    for nominal, plf, section in listed:
        if nominal == depth and plf == weight:
            return section
    if not depth or not weight:
        return None
    inch, kilograms = _millimetres_per_inch(), _kilograms_per_plf()
    close = [
        (abs(plf * kilograms / weight - 1.0), section)
        for nominal, plf, section in listed
        if abs(nominal * inch / depth - 1.0) <= _DEPTH_SHARE and abs(plf * kilograms / weight - 1.0) <= _MASS_SHARE
    ]
    return _only_closest(close)


def _hollow(candidates: Iterable[tuple[tuple[float, ...], Section]], sizes: tuple[float, ...]) -> Section | None:
    """The hollow section of these sizes, in inches, else in mm."""
    listed = list(candidates)
    inch = _millimetres_per_inch()
    for scale, tolerance, wall in (
        (1.0, _INCH_TOLERANCE, _INCH_TOLERANCE),
        (inch, _METRIC_TOLERANCE, _METRIC_WALL_TOLERANCE),
    ):
        close = []
        for known, section in listed:
            gaps = [abs(size * scale - given) for size, given in zip(known, sizes, strict=True)]
            if max(gaps[:-1]) <= tolerance and gaps[-1] <= wall:
                close.append((max(gaps[:-1]) / tolerance + gaps[-1] / wall, section))
        if close:
            return _only_closest(close)
    return None


def _only_closest(candidates: list[tuple[float, Section]]) -> Section | None:
    """The closest candidate, unless another is as close."""
    ordered = sorted(candidates, key=lambda item: item[0])
    if not ordered or (len(ordered) > 1 and ordered[1][0] - ordered[0][0] < 1e-9):
        return None
    return ordered[0][1]


def _hollow_sizes(match: re.Match[str]) -> tuple[float, ...]:
    sizes = [_size(text) for text in match.groups() if text is not None]
    return (*sorted(sizes[:-1], reverse=True), sizes[-1])


def _size(text: str) -> float:
    """Read a size such as ``3-1/2``, ``1/4``, ``.25`` or ``20.000``.

    Example:
        >>> [_size(text) for text in ("3-1/2", "1/4", ".25")]
        [3.5, 0.25, 0.25]
    """
    whole, _, fraction = text.rpartition("-")
    numerator, _, denominator = fraction.partition("/")
    if denominator and float(denominator) == 0.0:
        return 0.0
    return float(whole or 0.0) + float(numerator) / float(denominator or 1.0)


@cache
def _millimetres_per_inch() -> float:
    return convert(1.0, "in", "mm")


@cache
def _kilograms_per_plf() -> float:
    return factor("pound/foot", "mass per length")
