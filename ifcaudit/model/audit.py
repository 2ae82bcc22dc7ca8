"""The result of an audit."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import TYPE_CHECKING

from ifcaudit.provenance import Sourced

if TYPE_CHECKING:
    from pandas import DataFrame


class Status(StrEnum):
    """Verdict on one candidate."""

    ADEQUATE = "adequate"
    INADEQUATE = "inadequate"
    NOT_CHECKED = "not checked"
    SET_ASIDE = "set aside"


class CheckName(StrEnum):
    """What was compared."""

    FLEXURE = "flexure"
    SHEAR = "shear"
    LIVE_DEFLECTION = "live deflection"
    TOTAL_DEFLECTION = "total deflection"


@dataclass(frozen=True, slots=True, kw_only=True)
class Check:
    """One demand against one capacity, SI (N·m, N or m by ``name``).

    Attributes:
        name: What was compared.
        demand: Governing demand.
        capacity: Design strength or limit it is compared with.
        utilization: demand / capacity.
        combination: Load combination that governs.
        clause: Clause of the standard applied.
        limit_state: What limits the capacity (``yielding``, ``lateral-torsional buckling`` …).
        position: Distance from the first support at which it governs [m].
        details: Intermediate values for a checker: (symbol or name, value in SI, unit).
    """

    name: CheckName
    demand: float
    capacity: float
    utilization: float
    combination: str
    clause: str
    limit_state: str = ""
    position: float = 0.0
    details: tuple[tuple[str, float, str], ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class BeamResult:
    """The verdict on one candidate, SI. ``None`` means: not known for this beam.

    Attributes:
        global_id: IFC GlobalId.
        entity_id: Instance number in the file.
        name: Name in the model.
        storey: Containing storey.
        status: Verdict.
        reason: For ``not checked`` and ``set aside``: what is missing and how to supply it; else what governs.
        governing: Name of the governing check.
        utilization: Largest utilization.
        section: Catalogue designation, or a description of the dimensions.
        section_source: Where the section came from.
        grade: Material grade.
        grade_source: Where the grade came from.
        span: Between support centres [m].
        tributary_width: As an engineer writes it down [m].
        tributary_area: Floor area whose load reaches the beam [m²].
        dead_load: Total unfactored dead load between its ends, reactions of carried beams included [N].
        live_load: The same for live load (floor and roof) [N].
        moment: Factored moment of the governing combination [N·m].
        moment_capacity: Design flexural strength [N·m].
        flexure_utilization: moment / moment_capacity.
        shear: Factored shear of the governing combination [N].
        shear_capacity: Design shear strength [N].
        shear_utilization: shear / shear_capacity.
        live_deflection: Largest deflection under live load [m].
        live_deflection_limit: What it is allowed to be [m].
        deflection_utilization: Largest of live and total deflection over their limits.
        sized_for_strength: Lightest section for flexure and shear.
        sized_for_stiffness: Lightest section for deflection.
        sized: Lightest section for both.
        start_support: What carries the first end.
        end_support: What carries the other end.
        findings: Remarks for the engineer.
        assumptions: What was assumed for this beam.
        checks: Every check made, with its clause.
        inputs: Every input with its source, by name.
    """

    global_id: str
    entity_id: int
    name: str
    storey: str
    status: Status
    reason: str
    governing: str = ""
    utilization: float | None = None
    section: str = ""
    section_source: str = ""
    grade: str = ""
    grade_source: str = ""
    span: float | None = None
    tributary_width: float | None = None
    tributary_area: float | None = None
    dead_load: float | None = None
    live_load: float | None = None
    moment: float | None = None
    moment_capacity: float | None = None
    flexure_utilization: float | None = None
    shear: float | None = None
    shear_capacity: float | None = None
    shear_utilization: float | None = None
    live_deflection: float | None = None
    live_deflection_limit: float | None = None
    deflection_utilization: float | None = None
    sized_for_strength: str = ""
    sized_for_stiffness: str = ""
    sized: str = ""
    start_support: str = ""
    end_support: str = ""
    findings: tuple[str, ...] = ()
    assumptions: tuple[str, ...] = ()
    checks: tuple[Check, ...] = ()
    inputs: tuple[tuple[str, Sourced[object]], ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class LoadBalance:
    """Load applied against load that reaches supports [N], and area shared out [m²].

    ``*_unsupported`` is load that reached a beam end, or a slab part, that nothing carries: it explains a residual.
    """

    dead_applied: float
    dead_reaching_supports: float
    live_applied: float
    live_reaching_supports: float
    slab_area: float
    assigned_area: float
    unassigned_area: float
    dead_unsupported: float = 0.0
    live_unsupported: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Assumption:
    """Something taken for granted, for how many beams, and the override that settles it."""

    text: str
    remedy: str
    beams: int


@dataclass(frozen=True, slots=True, kw_only=True)
class RuleSummary:
    """The rule set as an output has to state it.

    Attributes:
        name: Name given on the command line (``us-lrfd``).
        title: For people.
        editions: Standards and editions applied.
        values: Key values used, as (name, text with unit, source clause or override).
    """

    name: str
    title: str
    editions: tuple[str, ...]
    values: tuple[tuple[str, str, str], ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Audit:
    """The result of auditing one model.

    Attributes:
        model_file: Name of the file, without its folder.
        schema: IFC schema.
        rules: Rule set applied.
        beams: One result per candidate, by instance number.
        load_balance: Both invariants.
        assumptions: What was assumed, largest number of beams first.
        findings: Remarks on the whole model.
        cautions: What every output must say.
        version: Version of this package.
    """

    model_file: str
    schema: str
    rules: RuleSummary
    beams: tuple[BeamResult, ...]
    load_balance: LoadBalance
    assumptions: tuple[Assumption, ...] = ()
    findings: tuple[str, ...] = ()
    cautions: tuple[str, ...] = ()
    version: str = ""

    def with_status(self, status: Status) -> tuple[BeamResult, ...]:
        """Return the results with one status; inadequate ones worst first."""
        chosen = (beam for beam in self.beams if beam.status is status)
        return tuple(sorted(chosen, key=lambda beam: (-(beam.utilization or 0.0), beam.entity_id)))

    def to_frame(self, units: str = "si") -> DataFrame:
        """Return the table of ``beams.csv`` as a data frame, one row per candidate.

        Args:
            units: ``si`` or ``us``; decides column suffixes and values.
        """
        import pandas as pd

        from ifcaudit.model.table import columns, table_row

        names = [column.heading for column in columns(units)]
        return pd.DataFrame([table_row(beam, units) for beam in self.beams], columns=names)
