"""The command line: arguments and exit statuses only; every command is one call into the library."""

from __future__ import annotations

import argparse
import gc
import sys
from collections.abc import Sequence
from importlib.metadata import version
from pathlib import Path
from typing import TYPE_CHECKING

from ifcaudit.errors import AuditError, UsageError

if TYPE_CHECKING:
    from ifcaudit.model.audit import Audit

EXIT_ADEQUATE, EXIT_INADEQUATE, EXIT_USAGE, EXIT_NOT_CHECKED = range(4)
_EPILOG = """\
exit status:
  0  every load-carrying beam was checked and is adequate
  1  at least one beam is inadequate
  2  bad usage, or a model or rule set that cannot be read
  3  no beam is inadequate, but some could not be checked, or there are none

A screening aid for qualified engineers. It does not replace design or review by a
licensed professional, or the local building code.
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command and return its exit status."""
    options = _parser().parse_args(arguments)
    # One audit holds nearly all it makes until it ends: collecting on the way costs a seventh of its time for nothing.
    collecting = gc.isenabled()
    gc.disable()
    try:
        return _audit(options)
    except AuditError as error:
        print(f"ifcaudit: {error}", file=sys.stderr)  # noqa: T201 — one message on standard error is the interface
        return EXIT_USAGE
    except KeyboardInterrupt:
        print("ifcaudit: interrupted; nothing was written", file=sys.stderr)  # noqa: T201 — as above
        return EXIT_USAGE
    finally:
        if collecting:
            gc.enable()


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="ifcaudit",
        description="Screens the beams of an IFC building model against published structural standards.",
        epilog=_EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument("--version", action="version", version=f"ifcaudit {version('ifcaudit')}")
    commands = parser.add_subparsers(dest="command", required=True, metavar="COMMAND")
    audit = commands.add_parser(
        "audit",
        help="judge every beam of a model; write tables, a record and the model with its verdicts",
        description="Judges every beam of a model and writes beams.csv, failures.csv, audit.json and the model with one"
        " property set per beam. The model itself is never touched.",
        epilog=_EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    audit.add_argument("model", metavar="MODEL.ifc", help="the building model (IFC2X3, IFC4 or IFC4X3)")
    audit.add_argument("--rules", default="us-lrfd", metavar="NAME_OR_FILE", help="rule set (default: %(default)s)")
    audit.add_argument("--out", metavar="DIR", help="where to write (default: MODEL-audit beside the model)")
    audit.add_argument("--units", choices=("si", "us"), default="si", help="units of the tables (default: %(default)s)")
    audit.add_argument(
        "--live-load",
        metavar="QUANTITY",
        help='live load of all floors, the whole of it, no partition allowance on top: "2.4 kPa", "50 psf"',
    )
    audit.add_argument(
        "--superimposed-dead", metavar="QUANTITY", help='superimposed dead load of all floors: "0.5 kPa", "10 psf"'
    )
    audit.add_argument(
        "--live-load-reduction",
        action=argparse.BooleanOptionalAction,
        default=None,
        help="apply the standard's live-load reduction, or do not (default: as the rule set says)",
    )
    audit.add_argument("--quiet", action="store_true", help="print nothing but errors")
    return parser


def _audit(options: argparse.Namespace) -> int:
    from ifcaudit.outputs.files import write_all
    from ifcaudit.outputs.terminal import Progress, print_summary
    from ifcaudit.pipeline import audit

    live_load = _pressure(options.live_load, "--live-load")
    superimposed_dead = _pressure(options.superimposed_dead, "--superimposed-dead")
    model = Path(options.model)
    out = Path(options.out) if options.out else model.with_name(f"{model.stem}-audit")
    if out.exists() and not out.is_dir():
        raise UsageError(f"--out {options.out}: is a file; name a folder that exists or may be made")
    with Progress(quiet=options.quiet) as progress:
        result = audit(
            model,
            rules=options.rules,
            live_load=live_load,
            superimposed_dead=superimposed_dead,
            live_load_reduction=options.live_load_reduction,
            progress=progress.step,
        )
        progress.step("writing", None)
        files = write_all(result, model, out, options.units)
    if not options.quiet:
        print_summary(result, files, options.units)
    return exit_status(result)


def _pressure(text: str | None, option: str) -> float | None:
    if text is None:
        return None
    from ifcaudit.units import parse_quantity

    value = parse_quantity(text, "pressure", option)
    if value < 0.0:
        raise UsageError(f'{option} "{text}": a load acts downwards; write a positive pressure, or zero')
    return value


def exit_status(result: Audit) -> int:
    """Return the exit status that a result stands for."""
    from ifcaudit.model.audit import Status

    statuses = {beam.status for beam in result.beams} - {Status.SET_ASIDE}
    if Status.INADEQUATE in statuses:
        return EXIT_INADEQUATE
    if Status.NOT_CHECKED in statuses or not statuses:
        return EXIT_NOT_CHECKED
    return EXIT_ADEQUATE


if __name__ == "__main__":
    sys.exit(main())
