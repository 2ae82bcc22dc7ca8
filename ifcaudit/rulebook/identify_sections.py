"""Which section is meant: by its name, by the geometry drawn, or by both. Where they disagree, the geometry decides."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from ifcaudit.model.section import ProfileShape, Section, SectionKind
from ifcaudit.provenance import Source, Sourced
from ifcaudit.rulebook import designations as names
from ifcaudit.rulebook.memory import PerOwner
from ifcaudit.rulebook.records import Catalogue
from ifcaudit.rulebook.section_properties import outline_moments, section_from_dimensions

AGREEMENT_SHARE = 0.03
AGREEMENT_LENGTH = 0.001
"""A name and a drawing agree within 3 % or 1 mm on every dimension: exports draw rounded detailing dimensions."""

MATCH_SHARE = 0.01
MATCH_LENGTH = 0.0006
"""A drawing without a name is a catalogue section within 1 % or 0.6 mm on every dimension."""

AREA_SHARE = 0.05
"""An outline that was not recognised may be a named section whose depth and width agree, if its area does too."""

NOMINAL_WALL = 1.0 / 0.93
"""Nominal to design wall thickness of HSS (AISC 360-22 B4.2); a drawing may show either."""

_ENVELOPES = {SectionKind.RECTANGLE, SectionKind.ROUND, SectionKind.OTHER}
_HOLLOW = {SectionKind.RECTANGULAR_HOLLOW, SectionKind.ROUND_HOLLOW}
_RECTANGLE_NAME = re.compile(r"(?<![\d.,])(\d+(?:[.,]\d+)?)\s*[xX×*]\s*(\d+(?:[.,]\d+)?)\s*mm")


@dataclass(frozen=True, slots=True, kw_only=True)
class SectionMatch:
    """What was found out about a section.

    Attributes:
        section: The section with its source; ``None`` when it could not be identified.
        family: Catalogue series; empty outside the catalogue.
        problem: Why there is no section, and how to supply it; empty otherwise.
        findings: Remarks for the engineer.
    """

    section: Sourced[Section] | None
    family: str = ""
    problem: str = ""
    findings: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class _Candidates:
    """Catalogue sections of one kind, with their dimensions as columns."""

    sections: tuple[Section, ...]
    depth: NDArray[np.float64]
    width: NDArray[np.float64]
    flange: NDArray[np.float64]
    web: NDArray[np.float64]


@dataclass(slots=True)
class _Index:
    catalogue: Catalogue
    designations: names.DesignationIndex
    candidates: dict[SectionKind, _Candidates]
    found: dict[tuple[ProfileShape | None, tuple[str, ...]], SectionMatch] = field(default_factory=dict)


def identify_section(profile: ProfileShape | None, designations: tuple[str, ...], catalogue: Catalogue) -> SectionMatch:
    """Say which section a beam has.

    A name and a drawing that agree give the catalogue section, as the model says. Where they disagree, the drawing
    decides, with a finding that says both. A drawing without a name gives the catalogue section of its dimensions, as
    derived, or the properties of its dimensions. A name without a drawing gives the catalogue section.

    Args:
        profile: The section drawn; ``None`` where it could not be read.
        designations: Texts that may name the section, most trusted first.
        catalogue: Of the rule set.

    Example:
        >>> from ifcaudit.rulebook.loader import load_rules
        >>> match = identify_section(None, ("W-Wide Flange:W12X26:12345",), load_rules().catalogue)
        >>> match.section.value.designation, match.section.source.label, match.family
        ('W12X26', 'model', 'W')
    """
    index = _INDEXES.of(catalogue)
    key = (profile, designations)
    if key not in index.found:
        index.found[key] = _identify(profile, designations, index)
    return index.found[key]


def _index(catalogue: Catalogue) -> _Index:
    """The look-up tables of a catalogue."""
    by_kind: dict[SectionKind, list[Section]] = {}
    for sections in catalogue.series.values():
        for section in sections:
            by_kind.setdefault(section.kind, []).append(section)
    return _Index(
        catalogue=catalogue,
        designations=names.index_designations(catalogue),
        candidates={kind: _candidates(sections) for kind, sections in by_kind.items()},
    )


_INDEXES = PerOwner(_index)


def _candidates(sections: Iterable[Section]) -> _Candidates:
    ordered = tuple(sorted(sections, key=lambda section: section.mass_per_length))
    return _Candidates(
        ordered,
        np.array([section.depth for section in ordered]),
        np.array([section.width for section in ordered]),
        np.array([section.flange_thickness for section in ordered]),
        np.array([section.web_thickness for section in ordered]),
    )


def _identify(profile: ProfileShape | None, texts: tuple[str, ...], index: _Index) -> SectionMatch:
    texts = texts if profile is None or not profile.name else (profile.name, *texts)
    found = names.find_designation(texts, index.designations)
    if profile is None:
        return _by_name(found, texts, index)
    if found is None:
        return _by_dimensions(profile, index, *_unknown_name(profile, texts))
    named, text = found
    where = f'named "{text}"'
    if _agree(profile, named):
        return _match(_as_drawn(named, profile), Source.MODEL, where, _turned_finding(named, profile))
    if profile.kind in _ENVELOPES and profile.kind is not named.kind:
        return _envelope(profile, named, where)
    drawn = _describe(profile)
    return _by_dimensions(profile, index, f"{where}, drawn {drawn}", (f"{where}, drawn {drawn}: the drawing decides",))


def _by_name(found: tuple[Section, str] | None, texts: tuple[str, ...], index: _Index) -> SectionMatch:
    if found:
        named, text = found
        return _match(named, Source.MODEL, f'named "{text}", without a profile')
    series = ", ".join(index.catalogue.series)
    unknown = names.unknown_designation(texts)
    if unknown:
        problem = (
            f"named {unknown}, which is not in this rule set's catalogue ({series}), and no profile could be read: "
            "give the beam a profile in the model, or use a rule set with that series"
        )
    else:
        problem = (
            f"no section: no profile could be read, and no name is in this rule set's catalogue ({series}): "
            "give the beam a profile in the model, or name its type after its section"
        )
    return SectionMatch(section=None, problem=problem)


def _unknown_name(profile: ProfileShape, texts: tuple[str, ...]) -> tuple[str, tuple[str, ...]]:
    """What to say about names that the catalogue does not know: for the source, and as findings."""
    unknown = names.unknown_designation(texts)
    if unknown:
        return f"named {unknown}, which is not in this rule set's catalogue", ()
    if profile.kind is SectionKind.RECTANGLE:
        drawn = sorted((profile.depth, profile.width))
        for text in texts:
            for match in _RECTANGLE_NAME.finditer(text):
                sizes = sorted(float(size.replace(",", ".")) / 1000.0 for size in match.groups())
                if not all(_near(one, two) for one, two in zip(sizes, drawn, strict=True)):
                    finding = f'named "{text}", drawn {_describe(profile)}: the drawing decides'
                    return f'named "{text}"', (finding,)
    return "", ()


def _by_dimensions(profile: ProfileShape, index: _Index, where: str, findings: tuple[str, ...] = ()) -> SectionMatch:
    before = f"{where}; " if where else ""
    nearest = _nearest(profile, index)
    if nearest:
        turned = _turned_finding(nearest, profile)
        text = f"{before}inferred from its dimensions, {_describe(profile)}"
        return _match(_as_drawn(nearest, profile), Source.DERIVED, text, (*findings, *turned))
    if profile.tapered:
        problem = (
            f"its flanges slope or its section changes along its length ({_describe(profile)}), and it is no section "
            f"of this rule set's catalogue ({', '.join(index.catalogue.series)}): use a rule set with that series"
        )
        return SectionMatch(section=None, problem=problem, findings=findings)
    section = section_from_dimensions(profile)
    if section is None:
        problem = (
            f"no section properties: the profile ({_describe(profile)}) gives no usable thickness or outline, "
            "and its name is not in this rule set's catalogue: complete the profile in the model, or name its section"
        )
        return SectionMatch(section=None, problem=problem, findings=findings)
    corners = _corner_text(profile)
    return _match(section, Source.DERIVED, f"{before}properties from its dimensions{corners}", findings)


def _corner_text(profile: ProfileShape) -> str:
    if profile.fillet_radius is not None:
        return ""
    if profile.kind is SectionKind.RECTANGULAR_HOLLOW:
        return ", outer corner radius taken as twice the wall"
    return ", no fillets drawn" if profile.kind in {SectionKind.I_SHAPE, SectionKind.CHANNEL} else ""


def _envelope(profile: ProfileShape, named: Section, where: str) -> SectionMatch:
    """A named steel section drawn as a solid or an outline that was not recognised."""
    drawn = _describe(profile)
    same_size = _near(profile.depth, named.depth) and _near(profile.width, named.width)
    if same_size and profile.kind is SectionKind.OTHER and len(profile.outline) > 2:
        area = outline_moments(profile.outline)[0]
        same_size = abs(area / named.area - 1.0) <= AREA_SHARE
    if same_size:
        finding = f"{where}, drawn {drawn} of the same depth and width: taken as the section named"
        return _match(named, Source.MODEL, where, (finding,))
    problem = (
        f"{where}, drawn {drawn}, which is another section: "
        "correct the name or the profile in the model, whichever is wrong"
    )
    return SectionMatch(section=None, problem=problem)


def _match(section: Section, source: Source, where: str, findings: tuple[str, ...] = ()) -> SectionMatch:
    return SectionMatch(
        section=Sourced(value=section, source=source, where=where), family=section.family, findings=findings
    )


def _near(one: float, two: float) -> bool:
    return abs(one - two) <= max(AGREEMENT_LENGTH, AGREEMENT_SHARE * abs(two))


def _agree(profile: ProfileShape, named: Section) -> bool:
    """Whether a drawing shows the section named, as far as it gives dimensions."""
    if profile.kind is not named.kind:
        return False
    turned = _is_turned(named, profile)
    depth, width = (named.width, named.depth) if turned else (named.depth, named.width)
    if not (_near(profile.depth, depth) and _near(profile.width, width)):
        return False
    walls = ((profile.flange_thickness, named.flange_thickness), (profile.web_thickness, named.web_thickness))
    return all(drawn is None or any(_near(drawn, wall) for wall in _walls(named, listed)) for drawn, listed in walls)


def _walls(named: Section, thickness: float) -> tuple[float, ...]:
    return (thickness, thickness * NOMINAL_WALL) if named.kind in _HOLLOW else (thickness,)


def _nearest(profile: ProfileShape, index: _Index) -> Section | None:
    """The catalogue section closest to a drawing, within tolerance; of equals the lightest."""
    candidates = index.candidates.get(profile.kind)
    flange, web = profile.flange_thickness, profile.web_thickness
    if profile.kind in _HOLLOW:
        flange = web = web or flange
    if candidates is None or not flange or not web:
        return None
    depth, width = profile.depth, profile.width
    if profile.kind is SectionKind.RECTANGULAR_HOLLOW:
        depth, width = max(depth, width), min(depth, width)
    gaps = [
        _gap(candidates.depth, depth),
        _gap(candidates.width, width),
        _wall_gap(candidates.flange, flange, profile.kind),
        _wall_gap(candidates.web, web, profile.kind),
    ]
    worst = np.max(gaps, axis=0)
    total = np.where(worst <= 1.0, np.sum(np.square(gaps), axis=0), np.inf)
    best = int(np.argmin(np.round(total, 9)))
    return candidates.sections[best] if np.isfinite(total[best]) else None


def _gap(listed: NDArray[np.float64], drawn: float) -> NDArray[np.float64]:
    """Distance in units of what is tolerated."""
    return np.abs(listed - drawn) / np.maximum(MATCH_LENGTH, MATCH_SHARE * listed)


def _wall_gap(listed: NDArray[np.float64], drawn: float, kind: SectionKind) -> NDArray[np.float64]:
    gap = _gap(listed, drawn)
    return np.minimum(gap, _gap(listed * NOMINAL_WALL, drawn)) if kind in _HOLLOW else gap


def _is_turned(section: Section, profile: ProfileShape) -> bool:
    """Whether a rectangular tube is drawn with the catalogue's depth level."""
    return (
        section.kind is SectionKind.RECTANGULAR_HOLLOW
        and section.depth - section.width > AGREEMENT_LENGTH
        and profile.width - profile.depth > AGREEMENT_LENGTH
    )


def _as_drawn(section: Section, profile: ProfileShape) -> Section:
    """The section with "major" across the depth as drawn."""
    if not _is_turned(section, profile):
        return section
    return replace(
        section,
        depth=section.width,
        width=section.depth,
        flange_slenderness=section.web_slenderness,
        web_slenderness=section.flange_slenderness,
        second_moment_major=section.second_moment_minor,
        elastic_modulus_major=section.elastic_modulus_minor,
        plastic_modulus_major=section.plastic_modulus_minor,
        radius_of_gyration_major=section.radius_of_gyration_minor,
        second_moment_minor=section.second_moment_major,
        elastic_modulus_minor=section.elastic_modulus_major,
        plastic_modulus_minor=section.plastic_modulus_major,
        radius_of_gyration_minor=section.radius_of_gyration_major,
    )


def _turned_finding(section: Section, profile: ProfileShape) -> tuple[str, ...]:
    if not _is_turned(section, profile):
        return ()
    return (
        f"{section.designation} is drawn with its longer side level: its strength is taken about the axis as drawn",
    )


def _describe(profile: ProfileShape) -> str:
    """The dimensions of a drawing, as a person reads them."""
    sizes = [profile.depth, profile.width, profile.web_thickness, profile.flange_thickness]
    if profile.kind in _HOLLOW:
        sizes = [profile.depth, profile.width, profile.web_thickness or profile.flange_thickness]
    if profile.kind in {SectionKind.ROUND, SectionKind.ROUND_HOLLOW}:
        del sizes[1]
    text = "x".join(f"{round(size * 1000.0, 1):g}" for size in sizes if size is not None)
    return f"{profile.kind.value} {text} mm"
