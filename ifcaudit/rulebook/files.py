"""Where rule files are, and how a file refers to others."""

from __future__ import annotations

import tomllib
from functools import cache
from os import PathLike, fspath, sep
from pathlib import Path
from typing import Any

from ifcaudit.errors import RuleError
from ifcaudit.rulebook.problems import Problem, raise_all

_EXTENSIONS = {"sections": ".csv"}


@cache
def packaged_rules() -> Path:
    """The folder of the rules that come with this package: inside it when installed, beside it in a checkout.

    Raises:
        RuleError: There is none: the installation is not complete.
    """
    package = Path(__file__).resolve().parents[1]
    for folder in (package / "rules", package.parent / "rules"):
        if (folder / "standards").is_dir():
            return folder
    raise RuleError("the rules that come with ifcaudit are missing from this installation: install it again")


def available_rule_sets() -> tuple[str, ...]:
    """Names of the rule sets that come with this package, in alphabetical order.

    Example:
        >>> "us-lrfd" in available_rule_sets()
        True
    """
    return tuple(sorted(path.stem for path in (packaged_rules() / "standards").glob("*.toml")))


def rule_file(name_or_file: str | PathLike[str]) -> Path:
    """Find a rule set by the name of one that comes with this package, or by the path of a file.

    Raises:
        RuleError: There is no such rule set or file.
    """
    given = fspath(name_or_file)
    if given in available_rule_sets():
        return packaged_rules() / "standards" / f"{given}.toml"
    path = Path(given)
    if path.is_file():
        return path
    named = ", ".join(available_rule_sets())
    if path.suffix == ".toml" or "/" in given or sep in given:
        what = "is a directory" if path.is_dir() else "no such file"
        raise RuleError(f"rule file {given}: {what}; give a TOML file, or the name of a rule set: {named}")
    raise RuleError(f'unknown rule set "{given}"; available: {named}; or give the path of a rule file (.toml)')


def shown(path: Path) -> str:
    """Write a path as messages show it: packaged files from ``rules/`` on, others as given."""
    folder = packaged_rules()
    return f"rules/{path.relative_to(folder).as_posix()}" if path.is_relative_to(folder) else str(path)


def referred_file(name: str, kind: str, beside: Path) -> Path | None:
    """Find a file that a rule file refers to: beside it, or among the packaged files of its kind.

    Args:
        name: As written, with or without its extension.
        kind: ``sections``, ``materials``, ``occupancies``, ``combinations`` or ``standards``.
        beside: The file that refers to it.
    """
    extension = _EXTENSIONS.get(kind, ".toml")
    names = [name] if name.endswith(extension) else [name, name + extension]
    for folder in (beside.parent, packaged_rules() / kind):
        for candidate in names:
            path = folder / candidate
            if path.suffix == extension and path.is_file() and path != beside:
                return path
    return None


def packaged_names(kind: str) -> str:
    """Names of the packaged files of a kind, for messages."""
    extension = _EXTENSIONS.get(kind, ".toml")
    return ", ".join(sorted(path.stem for path in (packaged_rules() / kind).glob(f"*{extension}")))


def read_toml(path: Path, problems: list[Problem]) -> dict[str, Any]:
    """Read a TOML file; empty, with a problem noted, where it cannot be read."""
    try:
        return tomllib.loads(path.read_text(encoding="utf-8"))
    except tomllib.TOMLDecodeError as error:
        found, allowed = f"TOML that cannot be read: {error}", "TOML syntax"
    except (OSError, UnicodeDecodeError) as error:
        found, allowed = str(error), "a readable TOML file in UTF-8"
    problems.append(Problem(file=shown(path), place="", found=found, allowed=allowed))
    return {}


def read_standard(path: Path, name: str) -> tuple[dict[str, Any], dict[tuple[str, ...], Path]]:
    """Read a rule set file with everything it extends.

    Returns:
        The merged tables, file references resolved to paths, and the file that gives each key.

    Raises:
        RuleError: A file cannot be read, or extends one that does not exist or extends it in turn.
    """
    problems: list[Problem] = []
    chain: list[tuple[Path, dict[str, Any]]] = []
    following: Path | None = path
    while following is not None:
        table = read_toml(following, problems)
        raise_all(name, problems)
        base = table.pop("extends", None)
        _resolve_references(table, following, problems)
        chain.append((following, table))
        following = _base_of(base, [file for file, _ in chain], problems)
    raise_all(name, problems)
    merged: dict[str, Any] = {}
    origin: dict[tuple[str, ...], Path] = {(): path}
    for file, table in reversed(chain):
        _merge(merged, table, (), (file, origin))
    return merged, origin


def _base_of(base: Any, read: list[Path], problems: list[Problem]) -> Path | None:
    if base is None:
        return None
    found = referred_file(base, "standards", read[-1]) if isinstance(base, str) else None
    if found is None or found in read:
        what = "that extends this file in turn" if found else "that is not there"
        problems.append(
            Problem(
                file=shown(read[-1]),
                place="extends",
                found=f'"{base}", {what}',
                allowed=f"a rule file beside it, or one of {packaged_names('standards')}",
            )
        )
        return None
    return found


def _resolve_references(table: dict[str, Any], file: Path, problems: list[Problem]) -> None:
    """Replace names of files by paths, so that a merged table no longer depends on where it came from."""
    references = table.get("files")
    if not isinstance(references, dict):
        return
    for kind, names in references.items():
        if kind == "sections" and isinstance(names, list):
            references[kind] = [_resolve(name, kind, file, problems) for name in names]
        elif kind in {"combinations", "materials", "occupancies"}:
            references[kind] = _resolve(names, kind, file, problems)


def _resolve(name: Any, kind: str, file: Path, problems: list[Problem]) -> Any:
    if not isinstance(name, str):
        return name
    path = referred_file(name, kind, file)
    if path is None:
        allowed = f"a file beside it, or one of {packaged_names(kind)}"
        problems.append(
            Problem(file=shown(file), place=f"files.{kind}", found=f'"{name}", which is not there', allowed=allowed)
        )
        return name
    return str(path)


_LEAF_KEYS = {"value", "occupancy", "grade", "factors"}


def _merge(
    into: dict[str, Any], table: dict[str, Any], at: tuple[str, ...], source: tuple[Path, dict[tuple[str, ...], Path]]
) -> None:
    """Lay one table over another; a quantity is replaced as a whole, never mixed from two files."""
    file, origin = source
    for key, value in table.items():
        below = into.get(key)
        origin[*at, key] = file
        if isinstance(value, dict) and isinstance(below, dict) and not _LEAF_KEYS & (value.keys() | below.keys()):
            _merge(below, value, (*at, key), source)
        else:
            into[key] = value
            for known in [place for place in origin if place[: len(at) + 1] == (*at, key)]:
                origin[known] = file


def origin_of(keys: tuple[int | str, ...], origin: dict[tuple[str, ...], Path]) -> Path:
    """The file that gives a key, or the one that gives the table it should be in."""
    names = tuple(str(key) for key in keys)
    while names not in origin:
        names = names[:-1]
    return origin[names]
