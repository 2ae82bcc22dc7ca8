"""AISC 360-22, flexure (chapter F) and shear (chapter G) of steel members, load and resistance factor design.

Every formula accepts one :class:`~ifcaudit.model.section.Section` or a whole table of one kind, and numbers or arrays,
so that checking one beam and sizing over a catalogue are the same code. Values are SI. Where a clause does not cover a
section the strength is ``nan``; :func:`not_covered` says why.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ifcaudit.checks.strength import Factors, Sections, Strength
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.material import Material, MaterialFamily
from ifcaudit.model.section import FloatArray, Section, SectionKind, SectionTable

MATERIAL = MaterialFamily.STEEL
"""The material this standard judges."""
TITLE = "AISC 360-22"

_OPEN = {SectionKind.I_SHAPE, SectionKind.CHANNEL}
YIELDING, LATERAL, FLANGE, WEB, LOCAL = (
    "yielding",
    "lateral-torsional buckling",
    "flange local buckling",
    "web local buckling",
    "local buckling",
)
BUCKLING = "shear buckling"


def not_covered(section: Section, axis: BendingAxis) -> str:
    """Say why a section is outside the clauses implemented here; empty when it is inside."""
    if axis is BendingAxis.INCLINED:
        return "it is turned about its axis, so that it bends about both axes: check biaxial bending by hand"
    if section.kind in {SectionKind.TEE, SectionKind.ANGLE, SectionKind.OTHER}:
        return f"no clause for {section.kind.value} sections is implemented: check {section.designation} by hand"
    return ""


def moment_gradient_factor(
    largest: ArrayLike, quarter: ArrayLike, middle: ArrayLike, three_quarters: ArrayLike
) -> FloatArray:
    """C_b of an unbraced segment from the moments in it, AISC 360-22 eq. F1-1.

    Args:
        largest: Largest absolute moment in the segment [N·m].
        quarter: Moment at its quarter point.
        middle: At its middle.
        three_quarters: At its three-quarter point.

    Returns:
        C_b; 1 where the segment carries no moment.

    Example:
        >>> round(float(moment_gradient_factor(1.0, 0.75, 1.0, 0.75)), 2)  # uniform load, whole span unbraced
        1.14
    """
    M_max, M_A, M_B, M_C = (np.abs(np.asarray(value, dtype=np.float64)) for value in (
        largest, quarter, middle, three_quarters,
    ))  # fmt: skip
    denominator = 2.5 * M_max + 3.0 * M_A + 4.0 * M_B + 3.0 * M_C
    safe = np.where(denominator > 0.0, denominator, 1.0)
    return np.where(denominator > 0.0, 12.5 * M_max / safe, 1.0)


def flexural_strength(
    section: Sections,
    material: Material,
    unbraced_length: ArrayLike,
    C_b: ArrayLike,
    factors: Factors,
    axis: BendingAxis = BendingAxis.UPRIGHT,
) -> Strength:
    """Design flexural strength, AISC 360-22 F2, F3, F6, F7, F8 and F11.

    Args:
        section: One section, or a table of one kind.
        material: Steel.
        unbraced_length: L_b [m]; zero for a compression flange held all along.
        C_b: Of the segment.
        factors: Holds ``phi_b``.
        axis: Bending about the major axis (upright) or the minor one (flat).
    """
    L_b, gradient = np.asarray(unbraced_length, dtype=np.float64), np.asarray(C_b, dtype=np.float64)
    kind = section.kind
    if kind in _OPEN:
        parts = (
            _open_major(section, material, L_b, gradient)
            if axis is BendingAxis.UPRIGHT
            else _open_minor(section, material)
        )
    elif kind is SectionKind.RECTANGULAR_HOLLOW:
        parts = _rectangular_hollow(section, material, L_b, gradient, axis)
    elif kind is SectionKind.ROUND_HOLLOW:
        parts = _round_hollow(section, material)
    elif kind in {SectionKind.RECTANGLE, SectionKind.ROUND}:
        parts = _solid(section, material, L_b, gradient, axis)
    else:
        parts = _Parts("F1", {YIELDING: np.full_like(np.asarray(section.area, dtype=np.float64), np.nan)}, {})
    return _governing(parts, factors["phi_b"].value, L_b, gradient)


@dataclass(frozen=True, slots=True)
class _Parts:
    """Nominal strengths by limit state, with the clause and its intermediate values."""

    clause: ArrayLike
    states: Mapping[str, FloatArray]
    details: Mapping[str, tuple[ArrayLike, str]]


def _governing(parts: _Parts, phi: float, L_b: FloatArray, C_b: FloatArray) -> Strength:
    """The lowest limit state; one that is not covered (nan) takes the whole strength with it."""
    names = np.array(list(parts.states))
    states = [np.asarray(value, dtype=np.float64) for value in parts.states.values()]
    shape = np.broadcast_shapes(L_b.shape, C_b.shape, *(value.shape for value in states))
    values = np.stack([np.broadcast_to(value, shape) for value in states])
    # nan sorts as the lowest. No state exceeds yielding, so that the first of equals is yielding.
    lowest = np.where(np.isnan(values), -np.inf, values).argmin(axis=0)
    nominal = np.take_along_axis(values, lowest[None], axis=0)[0]
    details = {**parts.details, "phi_b": (phi, ""), "L_b": (L_b, "m"), "C_b": (C_b, "")}
    clause = np.broadcast_to(np.asarray(parts.clause), shape)
    return Strength(nominal, np.full(shape, phi), names[lowest], clause, details)


def _open_major(section: Sections, material: Material, L_b: FloatArray, C_b: FloatArray) -> _Parts:
    """I-shapes and channels about the major axis: F2, with F3 for flanges that are not compact."""
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    S_x, Z_x = np.asarray(section.elastic_modulus_major), np.asarray(section.plastic_modulus_major)
    r_y, r_ts = np.asarray(section.radius_of_gyration_minor), np.asarray(section.effective_radius_of_gyration)
    h_o, J = np.asarray(section.flange_centroid_distance), np.asarray(section.torsion_constant)
    M_p = F_y * Z_x  # F2-1
    c = 1.0  # F2-8a
    if section.kind is SectionKind.CHANNEL:
        c = 0.5 * h_o * np.sqrt(np.asarray(section.second_moment_minor) / np.asarray(section.warping_constant))  # F2-8b
    twist = J * c / (S_x * h_o)
    L_p = 1.76 * r_y * np.sqrt(E / F_y)  # F2-5
    L_r = 1.95 * r_ts * E / (0.7 * F_y) * np.sqrt(twist + np.sqrt(twist**2 + 6.76 * (0.7 * F_y / E) ** 2))  # F2-6
    M_r = 0.7 * F_y * S_x
    inelastic = C_b * (M_p - (M_p - M_r) * (L_b - L_p) / (L_r - L_p))  # F2-2
    slenderness = np.maximum(L_b, 1e-9) / r_ts
    F_cr = C_b * np.pi**2 * E / slenderness**2 * np.sqrt(1.0 + 0.078 * twist * slenderness**2)  # F2-4
    M_lateral = np.where(L_b <= L_p, M_p, np.where(L_b <= L_r, inelastic, F_cr * S_x))
    lambda_f, lambda_w = np.asarray(section.flange_slenderness), np.asarray(section.web_slenderness)
    compact = lambda_f <= 0.38 * np.sqrt(E / F_y)
    M_flange = _flange_local(section, M_p, M_r, E, F_y)
    if section.kind is SectionKind.CHANNEL:  # F3 is written for doubly symmetric shapes
        M_flange = np.where(compact, M_p, np.nan)
    # A web that is not compact belongs to F4 and F5, which are not implemented.
    M_web = np.where(lambda_w <= 3.76 * np.sqrt(E / F_y), M_p, np.nan)
    return _Parts(
        np.where(compact, "F2", "F3"),
        {
            YIELDING: M_p,
            LATERAL: np.minimum(M_lateral, M_p),
            FLANGE: M_flange,
            WEB: M_web,
        },
        {"F_y": (F_y, "Pa"), "Z_x": (Z_x, "m³"), "S_x": (S_x, "m³"), "L_p": (L_p, "m"), "L_r": (L_r, "m")},
    )


def _flange_local(section: Sections, M_p: FloatArray, M_r: FloatArray, E: float, F_y: float) -> FloatArray:
    """Flange local buckling of doubly symmetric shapes with compact webs: F3-1 and F3-2, limits of Table B4.1b."""
    S_x = np.asarray(section.elastic_modulus_major)
    lambda_f, lambda_w = np.asarray(section.flange_slenderness), np.asarray(section.web_slenderness)
    k_c = np.clip(4.0 / np.sqrt(lambda_w), 0.35, 0.76)
    lambda_pf, rolled = 0.38 * np.sqrt(E / F_y), 1.0 * np.sqrt(E / F_y)
    # A shape outside the catalogue may be welded from plates: case 11, F_L = 0.7 F_y, instead of case 10.
    lambda_rf = np.where(_in_catalogue(section), rolled, np.minimum(rolled, 0.95 * np.sqrt(k_c * E / (0.7 * F_y))))
    noncompact = M_p - (M_p - M_r) * (lambda_f - lambda_pf) / (lambda_rf - lambda_pf)  # F3-1
    slender = 0.9 * E * k_c * S_x / lambda_f**2  # F3-2
    return np.where(lambda_f <= lambda_pf, M_p, np.where(lambda_f <= lambda_rf, noncompact, slender))


def _open_minor(section: Sections, material: Material) -> _Parts:
    """I-shapes and channels about the minor axis: F6."""
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    S_y, Z_y = np.asarray(section.elastic_modulus_minor), np.asarray(section.plastic_modulus_minor)
    lambda_f = np.asarray(section.flange_slenderness)
    M_p = np.minimum(F_y * Z_y, 1.6 * F_y * S_y)  # F6-1
    lambda_pf, lambda_rf = 0.38 * np.sqrt(E / F_y), 1.0 * np.sqrt(E / F_y)
    noncompact = M_p - (M_p - 0.7 * F_y * S_y) * (lambda_f - lambda_pf) / (lambda_rf - lambda_pf)  # F6-2
    slender = 0.70 * E / lambda_f**2 * S_y  # F6-3, F6-4
    M_flange = np.where(lambda_f <= lambda_pf, M_p, np.where(lambda_f <= lambda_rf, noncompact, slender))
    return _Parts("F6", {YIELDING: M_p, FLANGE: M_flange}, {"F_y": (F_y, "Pa"), "Z_y": (Z_y, "m³")})


def _rectangular_hollow(
    section: Sections, material: Material, L_b: FloatArray, C_b: FloatArray, axis: BendingAxis
) -> _Parts:
    """Square and rectangular hollow sections: F7."""
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    upright = axis is BendingAxis.UPRIGHT
    ending = "major" if upright else "minor"
    S, Z = (np.asarray(getattr(section, f"{name}_modulus_{ending}")) for name in ("elastic", "plastic"))
    inertia = np.asarray(getattr(section, f"second_moment_{ending}"))
    across, along = np.asarray(section.flange_slenderness), np.asarray(section.web_slenderness)
    lambda_f, lambda_w = (across, along) if upright else (along, across)
    depth = np.asarray(section.depth if upright else section.width)
    t, root = np.asarray(section.web_thickness), np.sqrt(E / F_y)
    M_p, M_y = F_y * Z, F_y * S
    noncompact = np.minimum(M_p - (M_p - M_y) * (3.57 * lambda_f / root - 4.0), M_p)  # F7-2
    b = lambda_f * t
    b_e = np.minimum(1.92 * t * root * (1.0 - 0.38 / lambda_f * root), b)  # F7-4
    # The width lost is taken from both flanges, which keeps the neutral axis and is on the safe side.
    S_e = (inertia - 2.0 * (b - b_e) * t * (0.5 * (depth - t)) ** 2) / (0.5 * depth)
    M_flange = np.where(lambda_f <= 1.12 * root, M_p, np.where(lambda_f <= 1.40 * root, noncompact, F_y * S_e))
    web = np.minimum(M_p - (M_p - M_y) * (0.305 * lambda_w / root - 0.738), M_p)  # F7-6
    # Slender webs (F7.3(c)) do not occur in the catalogue and are not implemented.
    M_web = np.where(lambda_w <= 2.42 * root, M_p, np.where(lambda_w <= 5.70 * root, web, np.nan))
    M_lateral, L_p, L_r = _hollow_lateral(section, material, (M_p, S), (L_b, C_b), axis)
    return _Parts(
        "F7",
        {
            YIELDING: M_p,
            LATERAL: np.minimum(M_lateral, M_p),
            FLANGE: M_flange,
            WEB: M_web,
        },
        {"F_y": (F_y, "Pa"), "Z": (Z, "m³"), "S": (S, "m³"), "L_p": (L_p, "m"), "L_r": (L_r, "m")},
    )


def _hollow_lateral(
    section: Sections,
    material: Material,
    moments: tuple[FloatArray, FloatArray],
    segment: tuple[FloatArray, FloatArray],
    axis: BendingAxis,
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Lateral-torsional buckling of rectangular hollow sections: F7-10 to F7-13; M_n, L_p and L_r.

    Args:
        section: Sections.
        material: Steel.
        moments: M_p and S about the axis of bending.
        segment: L_b and C_b.
        axis: Axis of bending.
    """
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    (M_p, S), (L_b, C_b) = moments, segment
    depth, width = np.asarray(section.depth), np.asarray(section.width)
    r_y = np.asarray(section.radius_of_gyration_minor)
    if axis is not BendingAxis.UPRIGHT:
        depth, width, r_y = width, depth, np.asarray(section.radius_of_gyration_major)
    stiffness = E * r_y * np.sqrt(np.asarray(section.torsion_constant) * np.asarray(section.area))
    L_p = 0.13 * stiffness / M_p  # F7-12
    L_r = 2.0 * stiffness / (0.7 * F_y * S)  # F7-13
    inelastic = C_b * (M_p - (M_p - 0.7 * F_y * S) * (L_b - L_p) / (L_r - L_p))  # F7-10
    elastic = 2.0 * C_b * stiffness / np.maximum(L_b, 1e-9)  # F7-11
    M_lateral = np.where(L_b <= L_p, M_p, np.where(L_b <= L_r, inelastic, elastic))
    # Square sections, and those bent about their weaker axis, have no weak direction to buckle in.
    return np.where(width >= depth * (1.0 - 1e-9), M_p, M_lateral), L_p, L_r


def _round_hollow(section: Sections, material: Material) -> _Parts:
    """Round hollow sections: F8."""
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    S, Z = np.asarray(section.elastic_modulus_major), np.asarray(section.plastic_modulus_major)
    slenderness = np.asarray(section.flange_slenderness)
    M_p = F_y * Z
    noncompact = (0.021 * E / slenderness + F_y) * S  # F8-2
    slender = 0.33 * E / slenderness * S  # F8-3, F8-4
    M_local = np.where(slenderness <= 0.07 * E / F_y, M_p, np.where(slenderness <= 0.31 * E / F_y, noncompact, slender))
    M_local = np.where(slenderness < 0.45 * E / F_y, np.minimum(M_local, M_p), np.nan)
    return _Parts("F8", {YIELDING: M_p, LOCAL: M_local}, {"F_y": (F_y, "Pa"), "Z": (Z, "m³"), "S": (S, "m³")})


def _solid(section: Sections, material: Material, L_b: FloatArray, C_b: FloatArray, axis: BendingAxis) -> _Parts:
    """Solid rectangles and rounds: F11."""
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    ending = "major" if axis is BendingAxis.UPRIGHT else "minor"
    S, Z = (np.asarray(getattr(section, f"{name}_modulus_{ending}")) for name in ("elastic", "plastic"))
    M_y = F_y * S
    M_p = np.minimum(F_y * Z, (1.5 if section.kind is SectionKind.RECTANGLE else 1.6) * M_y)  # F11-1
    details: dict[str, tuple[ArrayLike, str]] = {"F_y": (F_y, "Pa"), "Z": (Z, "m³")}
    if section.kind is SectionKind.ROUND:
        return _Parts("F11", {YIELDING: M_p}, details)
    depth, thickness = np.asarray(section.depth), np.asarray(section.width)
    if axis is not BendingAxis.UPRIGHT:
        depth, thickness = thickness, depth
    ratio = L_b * depth / thickness**2
    inelastic = C_b * (1.52 - 0.274 * ratio * F_y / E) * M_y  # F11-3
    elastic = 1.9 * E * C_b / np.maximum(ratio, 1e-12) * S  # F11-4, F11-5
    M_lateral = np.where(ratio <= 0.08 * E / F_y, M_p, np.where(ratio <= 1.9 * E / F_y, inelastic, elastic))
    # A bar bent about its weaker axis does not buckle sideways.
    M_lateral = np.where(depth > thickness, np.minimum(M_lateral, M_p), M_p)
    return _Parts("F11", {YIELDING: M_p, LATERAL: M_lateral}, details)


# ---- shear


def shear_strength(
    section: Sections,
    material: Material,
    shear_span: ArrayLike,
    factors: Factors,
    axis: BendingAxis = BendingAxis.UPRIGHT,
) -> Strength:
    """Design shear strength, AISC 360-22 G2.1, G4, G5 and G6.

    Args:
        section: One section, or a table of one kind.
        material: Steel.
        shear_span: Distance from maximum to zero shear, L_v of G5 [m].
        factors: Holds ``phi_v`` and ``phi_v_rolled``.
        axis: Upright, or flat.
    """
    kind = section.kind
    if kind in _OPEN:
        return (
            _open_web(section, material, factors)
            if axis is BendingAxis.UPRIGHT
            else _flanges(section, material, factors)
        )
    if kind is SectionKind.RECTANGULAR_HOLLOW:
        return _hollow_webs(section, material, factors, axis)
    if kind is SectionKind.ROUND_HOLLOW:
        return _round_shear(section, material, np.asarray(shear_span, dtype=np.float64), factors)
    area = np.asarray(section.area, dtype=np.float64)
    # A solid section yields first at mid-depth, where the shear stress is 3/2 (round: 4/3) of the mean.
    share = {SectionKind.RECTANGLE: 2.0 / 3.0, SectionKind.ROUND: 3.0 / 4.0}.get(kind, np.nan)
    plain = 0.6 * material.yield_strength * area * share
    return _shear("G1, parabolic stress", plain, np.ones_like(area), factors["phi_v"].value, {})


def _shear(
    clause: str,
    plain: FloatArray,
    reduction: FloatArray,
    phi: ArrayLike,
    details: Mapping[str, tuple[ArrayLike, str]],
) -> Strength:
    """Shear yielding times the web coefficient."""
    nominal = np.asarray(plain * reduction)
    state = np.where(np.broadcast_to(reduction, nominal.shape) < 1.0, BUCKLING, YIELDING)
    factor = np.broadcast_to(np.asarray(phi, dtype=np.float64), nominal.shape)
    named = {**details, "phi_v": (factor, ""), "C_v": (reduction, "")}
    return Strength(nominal, factor, state, np.broadcast_to(np.asarray(clause), nominal.shape), named)


def _in_catalogue(section: Sections) -> NDArray[np.bool_]:
    """Whether each section is of a catalogue series, and so a rolled shape."""
    if isinstance(section, SectionTable):
        return np.array([bool(member.family) for member in section.sections])
    return np.asarray(bool(section.family))


def _open_web(section: Sections, material: Material, factors: Factors) -> Strength:
    """Webs of I-shapes and channels, unstiffened: G2.1 (k_v = 5.34)."""
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    slenderness = np.asarray(section.web_slenderness)
    A_w = np.asarray(section.depth) * np.asarray(section.web_thickness)
    limit = 1.10 * np.sqrt(5.34 * E / F_y)
    C_v1 = np.where(slenderness <= limit, 1.0, limit / slenderness)  # G2-3, G2-4
    rolled = _in_catalogue(section) & (section.kind is SectionKind.I_SHAPE)
    stocky = (slenderness <= 2.24 * np.sqrt(E / F_y)) & rolled  # G2.1(a)
    phi = np.where(stocky, factors["phi_v_rolled"].value, factors["phi_v"].value)
    return _shear("G2.1", 0.6 * F_y * A_w, C_v1, phi, {"A_w": (A_w, "m²")})


def _C_v2(slenderness: FloatArray, k_v: float, E: float, F_y: float) -> FloatArray:
    """Web shear buckling coefficient: G2-9 to G2-11."""
    root = np.sqrt(k_v * E / F_y)
    inelastic = 1.10 * root / slenderness
    elastic = 1.51 * k_v * E / (slenderness**2 * F_y)
    return np.where(slenderness <= 1.10 * root, 1.0, np.where(slenderness <= 1.37 * root, inelastic, elastic))


def _flanges(section: Sections, material: Material, factors: Factors) -> Strength:
    """Two flanges of an I-shape or channel that lies flat: G6 (k_v = 1.2)."""
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    A_w = 2.0 * np.asarray(section.width) * np.asarray(section.flange_thickness)
    C_v2 = _C_v2(np.asarray(section.flange_slenderness), 1.2, E, F_y)
    return _shear("G6", 0.6 * F_y * A_w, C_v2, factors["phi_v"].value, {"A_w": (A_w, "m²")})


def _hollow_webs(section: Sections, material: Material, factors: Factors, axis: BendingAxis) -> Strength:
    """Two webs of a rectangular hollow section: G4 (k_v = 5)."""
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    slenderness = np.asarray(section.web_slenderness if axis is BendingAxis.UPRIGHT else section.flange_slenderness)
    t = np.asarray(section.web_thickness)
    A_w = 2.0 * slenderness * t * t
    return _shear("G4", 0.6 * F_y * A_w, _C_v2(slenderness, 5.0, E, F_y), factors["phi_v"].value, {"A_w": (A_w, "m²")})


def _round_shear(section: Sections, material: Material, L_v: FloatArray, factors: Factors) -> Strength:
    """Round hollow sections: G5."""
    E, F_y = material.modulus_of_elasticity, material.yield_strength
    slenderness, diameter = np.asarray(section.flange_slenderness), np.asarray(section.depth)
    slender = np.maximum(
        1.60 * E / (np.sqrt(np.maximum(L_v, 1e-6) / diameter) * slenderness**1.25),  # G5-2a
        0.78 * E / slenderness**1.5,  # G5-2b
    )
    reduction = np.minimum(slender / (0.6 * F_y), 1.0)
    plain = 0.6 * F_y * np.asarray(section.area) / 2.0  # G5-1
    return _shear("G5", plain, reduction, factors["phi_v"].value, {"L_v": (L_v, "m")})
