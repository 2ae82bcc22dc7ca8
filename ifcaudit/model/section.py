"""Cross-sections: what the model draws, and what the checks use."""

from __future__ import annotations

from dataclasses import dataclass, fields
from enum import StrEnum
from math import nan
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

Point2: TypeAlias = tuple[float, float]


class SectionKind(StrEnum):
    """Shape families, as far as the checks tell them apart."""

    I_SHAPE = "I-shape"
    CHANNEL = "channel"
    TEE = "tee"
    ANGLE = "angle"
    RECTANGULAR_HOLLOW = "rectangular hollow"
    ROUND_HOLLOW = "round hollow"
    RECTANGLE = "rectangle"
    ROUND = "round"
    OTHER = "other"


@dataclass(frozen=True, slots=True, kw_only=True)
class ProfileShape:
    """A cross-section as the model draws it, before any catalogue is consulted. Lengths in m.

    Attributes:
        kind: Recognised shape.
        depth: Size along the profile's own y axis.
        width: Size along the profile's own x axis.
        flange_thickness: I-shapes, channels, tees, angles; ``None`` where the shape has none.
        web_thickness: Web of an I-shape, channel or tee; wall of a hollow section; ``None`` for solids.
        fillet_radius: Root fillet of rolled shapes, outer corner radius of hollow ones; ``None`` where not drawn.
        outline: Outer outline of a shape given by its edges, counter-clockwise, unclosed; empty when parametric.
        name: Profile name written in the model; empty when there is none.
        tapered: Flanges slope (S shapes, C channels) or the section changes along the member.
    """

    kind: SectionKind
    depth: float
    width: float
    flange_thickness: float | None = None
    web_thickness: float | None = None
    fillet_radius: float | None = None
    outline: tuple[Point2, ...] = ()
    name: str = ""
    tapered: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Section:
    """A cross-section with everything the checks need, in SI (m, m², m³, m⁴, m⁶, kg/m).

    "Major" is the axis of larger second moment, across the depth. Not-applicable values are ``nan``.

    Attributes:
        kind: Shape family.
        designation: Catalogue name (``W16X26``), or a description of the dimensions.
        family: Catalogue series (``W``, ``C``, ``HSS``); empty for a section outside the catalogue.
        depth: Overall depth d.
        width: Flange width or overall width b.
        flange_thickness: Flange thickness t_f; design wall thickness for hollow sections.
        web_thickness: Web thickness t_w; design wall thickness for hollow sections.
        flange_slenderness: Width-to-thickness ratio of Table B4.1b: b_f/2t_f, b/t_f of a channel, b/t, or D/t.
        web_slenderness: h/t_w, or h/t of a rectangular hollow section.
        area: Gross area.
        mass_per_length: Nominal mass per length.
        second_moment_major: I about the major axis.
        elastic_modulus_major: S about the major axis.
        plastic_modulus_major: Z about the major axis.
        radius_of_gyration_major: r about the major axis.
        second_moment_minor: I about the minor axis.
        elastic_modulus_minor: S about the minor axis (the smaller one).
        plastic_modulus_minor: Z about the minor axis.
        radius_of_gyration_minor: r about the minor axis.
        torsion_constant: St. Venant constant J.
        warping_constant: C_w.
        effective_radius_of_gyration: r_ts of AISC 360 F2-7.
        flange_centroid_distance: Distance between flange centroids, h_o.
    """

    kind: SectionKind
    designation: str
    family: str
    depth: float
    width: float
    flange_thickness: float = nan
    web_thickness: float = nan
    flange_slenderness: float = nan
    web_slenderness: float = nan
    area: float
    mass_per_length: float
    second_moment_major: float
    elastic_modulus_major: float
    plastic_modulus_major: float
    radius_of_gyration_major: float
    second_moment_minor: float
    elastic_modulus_minor: float
    plastic_modulus_minor: float
    radius_of_gyration_minor: float
    torsion_constant: float = nan
    warping_constant: float = nan
    effective_radius_of_gyration: float = nan
    flange_centroid_distance: float = nan


FloatArray: TypeAlias = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SectionTable:
    """Many sections of one kind as columns: the attributes of :class:`Section`, each an array of equal length.

    A formula written for a :class:`Section` accepts a table unchanged, so that sizing and checking cannot differ.
    """

    kind: SectionKind
    sections: tuple[Section, ...]
    depth: FloatArray
    width: FloatArray
    flange_thickness: FloatArray
    web_thickness: FloatArray
    flange_slenderness: FloatArray
    web_slenderness: FloatArray
    area: FloatArray
    mass_per_length: FloatArray
    second_moment_major: FloatArray
    elastic_modulus_major: FloatArray
    plastic_modulus_major: FloatArray
    radius_of_gyration_major: FloatArray
    second_moment_minor: FloatArray
    elastic_modulus_minor: FloatArray
    plastic_modulus_minor: FloatArray
    radius_of_gyration_minor: FloatArray
    torsion_constant: FloatArray
    warping_constant: FloatArray
    effective_radius_of_gyration: FloatArray
    flange_centroid_distance: FloatArray


def section_table(sections: tuple[Section, ...]) -> SectionTable:
    """Turn sections of one kind into columns.

    Raises:
        ValueError: The sections are of several kinds, or there are none.
    """
    kinds = {section.kind for section in sections}
    if len(kinds) != 1:
        raise ValueError(f"a section table holds sections of one kind, got {sorted(kinds)}")
    columns = {
        field.name: np.array([getattr(section, field.name) for section in sections], dtype=np.float64)
        for field in fields(SectionTable)
        if field.name not in {"kind", "sections"}
    }
    return SectionTable(kind=kinds.pop(), sections=sections, **columns)
