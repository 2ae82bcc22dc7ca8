"""The summary a person reads on a terminal, and progress on work longer than a second."""

from __future__ import annotations

import time
from collections import Counter
from collections.abc import Sequence
from pathlib import Path
from types import TracebackType
from typing import Self

from rich.console import Console
from rich.progress import BarColumn, MofNCompleteColumn, SpinnerColumn, TextColumn, TimeElapsedColumn
from rich.progress import Progress as Bars
from rich.table import Table
from rich.text import Text

from ifcaudit.model.audit import Audit, BeamResult, Status
from ifcaudit.units import table_factor, table_suffix

WORST = 5
_STYLES = {
    Status.ADEQUATE: "green",
    Status.INADEQUATE: "bold red",
    Status.NOT_CHECKED: "yellow",
    Status.SET_ASIDE: "dim",
}
_PATIENCE = 1.0
"""Work shorter than this shows no progress [s]."""


class Progress:
    """Shows which stage is running once the whole takes longer than a second; silent when piped or quiet."""

    def __init__(self, *, quiet: bool, console: Console | None = None) -> None:
        self._console = console or Console(stderr=True)
        self._enabled = not quiet and self._console.is_terminal
        self._began = time.monotonic()
        self._bars: Bars | None = None

    def __enter__(self) -> Self:
        self._began = time.monotonic()
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        if self._bars is not None:
            self._bars.stop()

    def step(self, stage: str, total: int | None) -> None:
        """Begin a stage; ``total`` is the number of beams it handles, when known."""
        if not self._enabled or time.monotonic() - self._began < _PATIENCE:
            return
        if self._bars is None:
            self._bars = Bars(
                SpinnerColumn(),
                TextColumn("{task.description}"),
                BarColumn(),
                MofNCompleteColumn(),
                TimeElapsedColumn(),
                console=self._console,
                transient=True,
            )
            self._bars.start()
        for task in self._bars.tasks:
            self._bars.update(task.id, completed=task.total or 1, total=task.total or 1)
        self._bars.add_task(stage, total=total)


def print_summary(audit: Audit, files: Sequence[Path], units: str, console: Console | None = None) -> None:
    """Print rule set, counts, worst beams, assumptions, load balance and where the files are."""
    console = console or Console(highlight=False, soft_wrap=False)
    if not console.is_terminal:
        console = Console(file=console.file, highlight=False, width=118, no_color=True)
    console.print(Text.assemble((audit.model_file, "bold"), f"  ({audit.schema})"))
    console.print(Text(f"Rules: {audit.rules.name}, {audit.rules.title}"))
    console.print(Text("       " + "; ".join(audit.rules.editions)))
    for name, value, clause in audit.rules.values:
        source = f" ({clause})" if clause else ""
        console.print(Text(f"       {name}: {value}{source}", style="dim"))
    _print_counts(audit, console)
    _print_worst(audit, units, console)
    _print_not_checked(audit, console)
    _print_assumptions(audit, console)
    _print_balance(audit, units, console)
    for finding in audit.findings:
        console.print(Text(f"Finding: {finding}"))
    if files:
        console.print(Text("Written to " + str(files[0].parent) + ": " + ", ".join(path.name for path in files)))
    for caution in audit.cautions:
        console.print(Text(caution, style="italic"))


def _print_counts(audit: Audit, console: Console) -> None:
    counts = Counter(beam.status for beam in audit.beams)
    line = Text(f"{len(audit.beams)} candidate beams: ")
    parts = [Text(f"{counts[status]} {status.value}", style=_STYLES[status]) for status in Status]
    console.print()
    console.print(line + Text(", ").join(parts))


def _print_worst(audit: Audit, units: str, console: Console) -> None:
    worst = audit.with_status(Status.INADEQUATE)
    if not worst:
        return
    suffix = table_suffix("length", units).strip("_")
    table = Table(title=f"Worst {min(WORST, len(worst))} of {len(worst)} inadequate beams", title_justify="left")
    for heading, justify in (
        ("beam", "left"),
        ("storey", "left"),
        ("section", "left"),
        (f"span, {suffix}", "right"),
        ("governing", "left"),
        ("utilization", "right"),
        ("lightest adequate", "left"),
    ):
        table.add_column(heading, justify="right" if justify == "right" else "left")
    for beam in worst[:WORST]:
        span = "" if beam.span is None else f"{beam.span * table_factor('length', units):.2f}"
        table.add_row(
            *(Text(text) for text in (beam.name or beam.global_id, beam.storey, beam.section, span, beam.governing)),
            Text(f"{beam.utilization:.2f}" if beam.utilization is not None else "", style="bold red"),
            Text(beam.sized or "none in the catalogue"),
        )
    console.print(table)


def _print_not_checked(audit: Audit, console: Console) -> None:
    reasons = Counter(_short(beam) for beam in audit.with_status(Status.NOT_CHECKED))
    for reason, count in reasons.most_common(6):
        noun = "beam" if count == 1 else "beams"
        console.print(Text(f"Not checked, {count} {noun}: {reason}", style="yellow"))
    if len(reasons) > 6:
        console.print(Text(f"  and {len(reasons) - 6} other reasons, see beams.csv", style="yellow"))


def _short(beam: BeamResult) -> str:
    """The kind of reason, without the names of the elements concerned."""
    head = beam.reason.split(" (")[0].split(":")[0]
    return head if len(head) <= 100 else head[:97] + "..."


def _print_assumptions(audit: Audit, console: Console) -> None:
    for assumption in audit.assumptions:
        noun = "beam" if assumption.beams == 1 else "beams"
        console.print(Text(f"Assumed for {assumption.beams} {noun}: {assumption.text}. {assumption.remedy}".rstrip()))


def _print_balance(audit: Audit, units: str, console: Console) -> None:
    balance = audit.load_balance
    force, area = table_factor("force", units), table_factor("area", units)
    force_unit, area_unit = (table_suffix(quantity, units).strip("_") for quantity in ("force", "area"))
    for name, applied, arrived, stranded in (
        ("dead", balance.dead_applied, balance.dead_reaching_supports, balance.dead_unsupported),
        ("live", balance.live_applied, balance.live_reaching_supports, balance.live_unsupported),
    ):
        share = 100.0 * (applied - arrived) / applied if applied else 0.0
        text = f"Load balance, {name}: {applied * force:.1f} {force_unit} applied, {arrived * force:.1f} reach supports"
        if abs(share) >= 0.005:
            text += f" ({share:.2f} % short; {stranded * force:.1f} at ends and slab parts that nothing carries)"
        console.print(Text(text))
    console.print(
        Text(
            f"Slab area: {balance.slab_area * area:.1f} {area_unit}, "
            f"of which {balance.unassigned_area * area:.1f} rest on no beam or wall"
        )
    )
