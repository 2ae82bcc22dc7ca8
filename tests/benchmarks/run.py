"""Times the stages of an audit on a large model: ``python tests/benchmarks/run.py [beams]``.

Every time is printed as seconds and as a multiple of ``ifcopenshell.open`` alone, measured in the same run on the same
machine, so that runs on different machines can be compared. Single runs scatter by a factor of two: compare medians.
"""

from __future__ import annotations

import statistics
import sys
import time
from collections.abc import Callable, Sequence
from itertools import pairwise
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import TypeVar

OPEN = "ifcopenshell.open alone"
BEAMS_PER_STOREY = 994  # of the default plan, 10 by 24 bays
REPEATS = 3

Result = TypeVar("Result")


def timed(stage: Callable[[], Result]) -> tuple[float, Result]:
    """Run one stage and return its time [s] and its result."""
    started = time.perf_counter()
    result = stage()
    return time.perf_counter() - started, result


def median_time(stage: Callable[[], object], repeats: int = REPEATS) -> float:
    """Median time of several runs [s]; what each run returns is let go before the next."""
    return statistics.median(timed(stage)[0] for _ in range(repeats))


def stage_table(rows: Sequence[tuple[str, float]]) -> str:
    """Print and return stages with their seconds and their multiples of the first one.

    Args:
        rows: Name and seconds of each stage; the first is plain opening, the measure of all others.

    Raises:
        ValueError: There are no rows, or the first took no time.

    Example:
        >>> text = stage_table([("open", 1.25), ("reading", 1.0), ("floor", 0.5)])
        stage        seconds   × open
        open           1.250     1.00
        reading        1.000     0.80
        floor          0.500     0.40
        all others     1.500     1.20
    """
    if not rows or rows[0][1] <= 0.0:
        raise ValueError("the first row must be the time of plain opening, greater than zero")
    unit = rows[0][1]
    others = [("all others", sum(seconds for _, seconds in rows[1:]))] if len(rows) > 1 else []
    table = [*rows, *others]
    width = max(len(name) for name, _ in table)
    lines = [f"{'stage':<{width}}  {'seconds':>8} {'× open':>8}"]
    lines += [f"{name:<{width}}  {seconds:>8.3f} {seconds / unit:>8.2f}" for name, seconds in table]
    text = "\n".join(lines)
    print(text)
    return text


def open_alone(path: Path) -> float:
    """Median time of plain opening [s]."""
    import ifcopenshell

    return median_time(lambda: ifcopenshell.open(str(path)))


def stage_times(path: Path) -> dict[str, float]:
    """Audit a model once and return the seconds of each stage; reading includes its own opening."""
    from ifcaudit.outputs.files import write_all
    from ifcaudit.pipeline import audit

    marks: list[tuple[str, float]] = []
    with TemporaryDirectory() as out:
        result = audit(path, progress=lambda stage, _total: marks.append((stage, time.perf_counter())))
        marks.append(("putting results together", time.perf_counter()))
        marks.append(("writing", time.perf_counter()))
        write_all(result, path, Path(out), "si")
        marks.append(("", time.perf_counter()))
    names = ["reading (open included)" if name == "reading" else name for name, _ in marks[:-1]]
    ends = [moment for _, moment in marks]
    return {name: after - before for name, (before, after) in zip(names, pairwise(ends), strict=True)}


def main(arguments: Sequence[str]) -> int:
    """Write the model when it is not there yet, time the stages and print the table."""
    from write_large_model import cached_model

    import ifcaudit.pipeline  # noqa: F401 — start-up is no stage of a large model

    beams = int(arguments[0]) if arguments else 10_000
    path = cached_model(storeys=max(1, round(beams / BEAMS_PER_STOREY)))
    print(f"{path.name}: {path.stat().st_size / 1e6:.1f} MB")
    runs = [stage_times(path) for _ in range(REPEATS)]
    medians = [(name, statistics.median(run[name] for run in runs)) for name in runs[0]]
    stage_table([(OPEN, open_alone(path)), *medians])
    return 0


if __name__ == "__main__":
    raise SystemExit(main(sys.argv[1:]))
