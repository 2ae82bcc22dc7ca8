"""Writes all outputs of an audit, or none.

Every file is written into a temporary folder inside the output folder (the same file system for certain), then moved
into place. If anything fails, the output folder holds what it held before.
"""

from __future__ import annotations

import pkgutil
from collections.abc import Mapping
from importlib import import_module
from pathlib import Path
from tempfile import TemporaryDirectory

from ifcaudit import outputs
from ifcaudit.errors import UsageError
from ifcaudit.model.audit import Audit
from ifcaudit.outputs import FileWriter

_AUDITED = ".audited"


def discover() -> Mapping[str, FileWriter]:
    """Return the writer of each file, by file name, of every module ``to_*`` in this package.

    Example:
        >>> [name for name in discover() if name.endswith(".csv")]
        ['beams.csv', 'failures.csv']
    """
    writers: dict[str, FileWriter] = {}
    for module in sorted(pkgutil.iter_modules(outputs.__path__), key=lambda module: module.name):
        if module.name.startswith("to_"):
            writers.update(import_module(f"{outputs.__name__}.{module.name}").FILES)
    return writers


def model_name(source: Path) -> str:
    """Return the name that stands in output file names: without extension and without ``.audited``.

    Example:
        >>> model_name(Path("tower.ifc")), model_name(Path("tower.audited.ifc"))
        ('tower', 'tower')
    """
    return source.stem.removesuffix(_AUDITED) or source.stem


def write_all(audit: Audit, source: Path, out: Path, units: str) -> tuple[Path, ...]:
    """Write every output into a folder and return the paths, sorted by name.

    Args:
        audit: What to write.
        source: The model audited; never changed.
        out: Folder to write into; made if it does not exist.
        units: ``si`` or ``us``, for the tables.

    Raises:
        UsageError: The folder cannot be written into, or an output would overwrite the model.
        ModelFileError: The model is no STEP file, or has changed since it was read.
    """
    targets = {out / name.replace("{model}", model_name(source)): writer for name, writer in discover().items()}
    _require_usable(out, source, targets)
    made = _make(out)
    try:
        with TemporaryDirectory(prefix=".ifcaudit-", dir=out) as folder:
            written = {target: Path(folder) / target.name for target in targets}
            for target, writer in targets.items():
                writer(audit, source, written[target], units)
            _move(written, Path(folder))
    except OSError as error:
        _remove_empty(made)
        raise UsageError(
            f"{out}: the results cannot be written ({error.strerror or error}); nothing was changed"
        ) from error
    except BaseException:
        _remove_empty(made)
        raise
    return tuple(sorted(targets))


def _require_usable(out: Path, source: Path, targets: Mapping[Path, FileWriter]) -> None:
    if out.exists() and not out.is_dir():
        raise UsageError(f"{out}: is a file; --out takes a folder")
    for target in targets:
        if target.is_dir():
            raise UsageError(
                f"{target}: is a folder where a result has to be written; choose another folder with --out"
            )
        if target.exists() and target.samefile(source):
            raise UsageError(
                f"{target}: the results would overwrite the model that was audited; choose another folder with --out"
            )


def _make(out: Path) -> list[Path]:
    """Make the folder; return the folders that did not exist before, innermost first."""
    missing = [folder for folder in (out, *out.parents) if not folder.exists()]
    try:
        out.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        _remove_empty(missing)
        raise UsageError(f"{out}: the folder cannot be made ({error.strerror or error})") from error
    return missing


def _remove_empty(folders: list[Path]) -> None:
    for folder in folders:
        try:
            folder.rmdir()
        except OSError:  # not made, or somebody else has put something in it
            return


def _move(written: Mapping[Path, Path], folder: Path) -> None:
    """Move the files into place; put back what was there if one of them cannot be moved."""
    before = folder / "before"
    before.mkdir()
    moved: list[Path] = []
    try:
        for target, file in written.items():
            if target.exists():
                target.replace(before / target.name)
            moved.append(target)
            file.replace(target)
    except OSError:
        for target in moved:
            target.unlink(missing_ok=True)
            if (before / target.name).exists():
                (before / target.name).replace(target)
        raise
