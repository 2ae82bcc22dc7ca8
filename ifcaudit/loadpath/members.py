"""A framed beam with its section and material identified: what the load path and the checks work on."""

from __future__ import annotations

from dataclasses import dataclass
from math import isfinite

from ifcaudit.model.building import Beam
from ifcaudit.model.framing import FramedBeam
from ifcaudit.model.material import Material, MaterialFamily
from ifcaudit.model.section import Section
from ifcaudit.provenance import Sourced


@dataclass(frozen=True, slots=True, kw_only=True)
class Member:
    """One candidate on its way through the audit.

    Attributes:
        framed: The beam and what carries it.
        section: Its section; ``None`` when it could not be identified.
        series: Catalogue series to size from; empty outside the catalogue.
        material: Its material; ``None`` when unknown.
        problem: Why section or material are missing, and how to supply them; empty otherwise.
        findings: Remarks for the engineer.
    """

    framed: FramedBeam
    section: Sourced[Section] | None
    series: str
    material: Sourced[Material] | None
    problem: str = ""
    findings: tuple[str, ...] = ()

    @property
    def beam(self) -> Beam:
        """The beam as read."""
        return self.framed.beam

    @property
    def mass_per_length(self) -> float | None:
        """Mass per length of the section in its material [kg/m]; ``None`` while either is unknown."""
        if self.section is None or self.material is None:
            return None
        if self.material.value.family is MaterialFamily.STEEL:
            return self.section.value.mass_per_length
        mass = self.section.value.area * self.material.value.density
        return mass if isfinite(mass) else None
