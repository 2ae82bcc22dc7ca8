"""What every design standard answers with."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ifcaudit.model.section import FloatArray, Section, SectionTable
from ifcaudit.rulebook.records import RuleValue

Sections: TypeAlias = Section | SectionTable
"""One section, or a table of sections of one kind."""
Factors: TypeAlias = Mapping[str, RuleValue]
"""Resistance factors by their name in the standard."""


@dataclass(frozen=True, slots=True, eq=False)
class Strength:
    """A design strength with what limits it.

    Attributes:
        nominal: Nominal strength [N·m or N], ``nan`` where not covered.
        factor: Resistance factor.
        limit_state: Name of the limit state that governs, of the same shape.
        clause: Section of the specification that gives it, of the same shape.
        details: Intermediate values for a checker: name -> (value in SI, unit).
    """

    nominal: FloatArray
    factor: FloatArray
    limit_state: NDArray[np.str_]
    clause: NDArray[np.str_]
    details: Mapping[str, tuple[ArrayLike, str]]

    @property
    def design(self) -> FloatArray:
        """Nominal strength times resistance factor."""
        return np.asarray(self.factor * self.nominal)
