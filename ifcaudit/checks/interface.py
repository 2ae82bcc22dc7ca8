"""What a check needs to know about a beam, what it answers, and what a design standard must offer."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from importlib import import_module
from typing import Protocol, cast

from numpy.typing import ArrayLike

from ifcaudit.checks.strength import Factors, Sections, Strength
from ifcaudit.model.audit import Check
from ifcaudit.model.building import BendingAxis
from ifcaudit.model.loads import BeamLoads
from ifcaudit.model.material import Material, MaterialFamily
from ifcaudit.model.section import Section


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class CheckInput:
    """One simple-span beam, ready to be checked.

    Attributes:
        section: Its section.
        material: Its material.
        loads: Everything on it except its own weight.
        axis: How gravity bends it.
        continuously_braced: Its compression flange is held all along.
        braced_positions: Else, where it is held between its supports, from the first one [m].
        is_roof: Its deflection is limited as a roof member's.
        live_load_factor: Share of the reducible live load that counts.
    """

    section: Section
    material: Material
    loads: BeamLoads
    axis: BendingAxis = BendingAxis.UPRIGHT
    continuously_braced: bool = False
    braced_positions: tuple[float, ...] = ()
    is_roof: bool = False
    live_load_factor: float = 1.0


def distinct(items: Sequence[CheckInput]) -> tuple[list[CheckInput], list[int]]:
    """Find beams that are the same to the last bit, as bays and storeys repeat.

    Returns:
        The different ones, and for each item its place among them.
    """
    found: dict[object, int] = {}
    different: list[CheckInput] = []
    places: list[int] = []
    for item in items:
        loads = item.loads
        key = (
            id(item.section),
            id(item.material),
            item.axis,
            item.continuously_braced,
            item.braced_positions,
            item.is_roof,
            item.live_load_factor,
            loads.span,
            loads.segment_positions.tobytes(),
            loads.segment_intensities.tobytes(),
            loads.point_positions.tobytes(),
            loads.point_magnitudes.tobytes(),
        )
        place = found.setdefault(key, len(different))
        if place == len(different):
            different.append(item)
        places.append(place)
    return different, places


@dataclass(frozen=True, slots=True, kw_only=True)
class CheckOutcome:
    """Every check of one beam, or why it cannot be made.

    Attributes:
        checks: Flexure, shear, live and total deflection.
        problem: What is not covered and what to do; empty when all checks were made.
        findings: Remarks for the engineer.
    """

    checks: tuple[Check, ...] = ()
    problem: str = ""
    findings: tuple[str, ...] = ()


class Standard(Protocol):
    """What a module under ``checks/standards/`` offers; see ``aisc_360`` for the meaning of each."""

    TITLE: str
    MATERIAL: MaterialFamily

    def not_covered(self, section: Section, axis: BendingAxis) -> str:
        """Say why a section is outside the standard; empty when inside."""
        ...

    def moment_gradient_factor(
        self, largest: ArrayLike, quarter: ArrayLike, middle: ArrayLike, three_quarters: ArrayLike
    ) -> ArrayLike:
        """Factor for the moment diagram of an unbraced segment."""
        ...

    def flexural_strength(
        self,
        section: Sections,
        material: Material,
        unbraced_length: ArrayLike,
        C_b: ArrayLike,  # noqa: N803 — the clause's own symbol
        factors: Factors,
        axis: BendingAxis,
    ) -> Strength:
        """Design flexural strength.

        Sizing relies on it to fall with ``unbraced_length`` and to gain at most in proportion to ``C_b``.
        """
        ...

    def shear_strength(
        self, section: Sections, material: Material, shear_span: ArrayLike, factors: Factors, axis: BendingAxis
    ) -> Strength:
        """Design shear strength."""
        ...


def load_standard(name: str) -> Standard:
    """Find the standard that a rule set names.

    Example:
        >>> load_standard("aisc_360").TITLE
        'AISC 360-22'
    """
    return cast("Standard", import_module(f"ifcaudit.checks.standards.{name}"))
