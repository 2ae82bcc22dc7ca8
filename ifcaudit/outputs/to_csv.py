"""Writes the beam table as CSV.

The files are plain UTF-8 without a byte order mark and with line feeds: what scripts and ``pandas.read_csv`` expect,
and what keeps two runs comparable line by line. A spreadsheet that guesses the encoding wrongly is told UTF-8 when
importing. Numbers have a fixed number of decimals, a point, no thousands separators and no exponent; a value that is
not known, or not finite, is an empty cell.
"""

from __future__ import annotations

import csv
import math
import re
from collections.abc import Mapping
from pathlib import Path

from ifcaudit.model.audit import Audit, Status
from ifcaudit.model.table import columns, table_row
from ifcaudit.outputs import FileWriter

# A spreadsheet reads a cell that starts with one of these as a formula; the full-width forms are folded by some.
_FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r", "＝", "＋", "－", "＠")
_LINE_BREAKS = re.compile("(?:\r\n|[\r\n\v\f\x1c-\x1e\x85\u2028\u2029])+")
# 0.1 mm, 0.0001 of a ratio, 1 N: finer than any input, coarse enough to hide the last bits of floating point.
_DECIMALS = {"ratio": 4, "length": 4, "area": 3, "force": 3, "moment": 3, "deflection": 4}


def safe_text(text: str) -> str:
    r"""Return text that a spreadsheet shows as text: one line, and never a formula.

    Example:
        >>> safe_text("=1+1"), safe_text("two\nlines"), safe_text("W16X26")
        ("'=1+1", 'two lines', 'W16X26')
    """
    one_line = _LINE_BREAKS.sub(" ", text).replace("\0", "")
    dangerous = text.startswith(_FORMULA_STARTS) or one_line.lstrip().startswith(_FORMULA_STARTS)
    return "'" + one_line if dangerous else one_line


def plain_number(value: float | None, decimals: int) -> str:
    """Return a number with fixed decimals; empty for ``None`` and for what is not finite; never ``-0``.

    Example:
        >>> plain_number(1234567.891, 2), plain_number(-0.00001, 4), plain_number(None, 4)
        ('1234567.89', '0.0000', '')
    """
    if value is None or not math.isfinite(value):
        return ""
    text = f"{value:.{decimals}f}"
    return text.removeprefix("-") if float(text) == 0.0 else text


def write(audit: Audit, path: Path, *, units: str, only: Status | None = None) -> None:
    """Write one row per candidate.

    Args:
        audit: What to write.
        path: File to write.
        units: ``si`` or ``us``; decides heading suffixes and values.
        only: Write the results with this status, worst first; ``None`` writes all by instance number.
    """
    table = columns(units)
    beams = sorted(audit.beams, key=lambda beam: beam.entity_id) if only is None else audit.with_status(only)
    with path.open("w", encoding="utf-8", errors="backslashreplace", newline="") as file:
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(column.heading for column in table)
        for beam in beams:
            writer.writerow(
                safe_text(cell) if isinstance(cell, str) else plain_number(cell, _DECIMALS[column.quantity])
                for column, cell in zip(table, table_row(beam, units), strict=True)
            )


def _write_beams(audit: Audit, source: Path, target: Path, units: str) -> None:
    write(audit, target, units=units)


def _write_failures(audit: Audit, source: Path, target: Path, units: str) -> None:
    write(audit, target, units=units, only=Status.INADEQUATE)


FILES: Mapping[str, FileWriter] = {"beams.csv": _write_beams, "failures.csv": _write_failures}
