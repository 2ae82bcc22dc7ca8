"""Materials: what the model writes, and what the checks use."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from math import nan


class MaterialFamily(StrEnum):
    """What a member is made of, as far as it decides which method judges it."""

    STEEL = "steel"
    CONCRETE = "concrete"
    TIMBER = "timber"
    MASONRY = "masonry"
    OTHER = "other"
    UNKNOWN = "unknown"


@dataclass(frozen=True, slots=True, kw_only=True)
class MaterialText:
    """What the model says about the material of an element.

    Attributes:
        names: Material names, in the order the model relates them; may hold empty strings dropped.
        grades: Texts of grade properties (``Grade``, ``StrengthGrade`` …) of material or element.
        density: Stated mass density [kg/m³]; ``None`` where absent or not positive.
    """

    names: tuple[str, ...] = ()
    grades: tuple[str, ...] = ()
    density: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Material:
    """A structural material, SI.

    Attributes:
        family: Decides the method.
        grade: Name of the grade (``A992``).
        density: Mass density [kg/m³].
        modulus_of_elasticity: E [Pa].
        shear_modulus: G [Pa].
        yield_strength: F_y [Pa]; ``nan`` where the family has none.
        ultimate_strength: F_u [Pa]; ``nan`` where the family has none.
    """

    family: MaterialFamily
    grade: str
    density: float
    modulus_of_elasticity: float = nan
    shear_modulus: float = nan
    yield_strength: float = nan
    ultimate_strength: float = nan
