"""The columns of the beam table: one place that knows their order, headings and units."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

from ifcaudit.errors import UsageError
from ifcaudit.model.audit import BeamResult
from ifcaudit.units import table_factor, table_suffix

_TEXT = ""
_COLUMNS: tuple[tuple[str, str], ...] = (
    ("global_id", _TEXT),
    ("name", _TEXT),
    ("storey", _TEXT),
    ("status", _TEXT),
    ("reason", _TEXT),
    ("governing", _TEXT),
    ("utilization", "ratio"),
    ("section", _TEXT),
    ("section_source", _TEXT),
    ("grade", _TEXT),
    ("grade_source", _TEXT),
    ("span", "length"),
    ("tributary_width", "length"),
    ("tributary_area", "area"),
    ("dead_load", "force"),
    ("live_load", "force"),
    ("moment", "moment"),
    ("moment_capacity", "moment"),
    ("flexure_utilization", "ratio"),
    ("shear", "force"),
    ("shear_capacity", "force"),
    ("shear_utilization", "ratio"),
    ("live_deflection", "deflection"),
    ("live_deflection_limit", "deflection"),
    ("deflection_utilization", "ratio"),
    ("sized_for_strength", _TEXT),
    ("sized_for_stiffness", _TEXT),
    ("sized", _TEXT),
    ("start_support", _TEXT),
    ("end_support", _TEXT),
    ("findings", _TEXT),
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """One column: heading with its unit suffix, attribute of :class:`BeamResult`, quantity and factor from SI."""

    heading: str
    attribute: str
    quantity: str
    factor: float


@cache
def columns(units: str) -> tuple[Column, ...]:
    """Return the columns of the beam table in ``si`` or ``us`` units.

    Example:
        >>> [column.heading for column in columns("us")][11:14]
        ['span_ft', 'tributary_width_ft', 'tributary_area_ft2']
    """
    if units not in {"si", "us"}:
        raise UsageError(f"--units {units}: unknown system of units; allowed: si, us")
    return tuple(
        Column(
            heading=name + table_suffix(quantity, units),
            attribute=name,
            quantity=quantity,
            factor=table_factor(quantity, units),
        )
        for name, quantity in _COLUMNS
    )


def table_row(beam: BeamResult, units: str) -> list[str | float | None]:
    """Return one row of the beam table: text as it is, numbers converted, ``None`` where not known."""
    row: list[str | float | None] = []
    for column in columns(units):
        value = getattr(beam, column.attribute)
        if isinstance(value, tuple):
            row.append("; ".join(value))
        elif column.quantity == _TEXT:
            row.append(str(value))
        else:
            row.append(None if value is None else value * column.factor)
    return row
