"""Everything that is wrong with a rule set, collected before anything is raised."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, get_args

from pydantic import BaseModel, ValidationError

from ifcaudit.errors import RuleError


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """One thing that is wrong.

    Attributes:
        file: Where, as a person would write it.
        place: Dotted key, or line and column of a table; empty for the file as a whole.
        found: What is there.
        allowed: What may be there.
    """

    file: str
    place: str
    found: str
    allowed: str

    def __str__(self) -> str:
        where = f"{self.file}: {self.place}" if self.place else self.file
        return f"{where}: found {self.found}; allowed: {self.allowed}"


def raise_all(name: str, problems: Sequence[Problem]) -> None:
    """Raise one error that lists every problem; do nothing where there are none.

    Raises:
        RuleError: There is at least one.
    """
    if not problems:
        return
    count = "1 problem" if len(problems) == 1 else f"{len(problems)} problems"
    lines = [
        f"rule set {name}: {count}; correct the rule files and run again",
        *(f"  {problem}" for problem in problems),
    ]
    raise RuleError("\n".join(lines))


def validation_problems(error: ValidationError, model: type[BaseModel], file: str) -> list[Problem]:
    """Turn what the validation library reports into problems in our own words."""
    problems = []
    for item in error.errors(include_url=False):
        found, allowed = _found_and_allowed(item, model)
        problems.append(Problem(file=file, place=dotted(item["loc"]), found=found, allowed=allowed))
    return problems


def dotted(keys: Iterable[int | str]) -> str:
    """Write a place in a TOML file as a dotted key; list items by number from 1.

    Example:
        >>> dotted(("grades", "A572-50", "aliases", 0))
        'grades.A572-50.aliases[1]'
    """
    text = ""
    for key in keys:
        text += f"[{key + 1}]" if isinstance(key, int) else f".{key}" if text else key
    return text


def _found_and_allowed(item: Mapping[str, Any], model: type[BaseModel]) -> tuple[str, str]:
    kind, context = item["type"], item.get("ctx", {})
    if "found" in context:
        return context["found"], context["allowed"]
    if kind == "extra_forbidden":
        return "an unknown key", ", ".join(_keys_beside(model, item["loc"]))
    if kind == "missing":
        return "nothing", "this key is required"
    return _as_written(item["input"]), _allowed(kind, context)


def _as_written(value: Any) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return f'"{value}"'
    if isinstance(value, dict | list):
        return "a table" if isinstance(value, dict) else f"a list of {len(value)}"
    return str(value)


_ALLOWED = {
    "float_type": "a number",
    "bool_type": "true or false",
    "string_type": "text in quotes",
    "list_type": "a list in brackets",
    "dict_type": "a table",
    "model_type": "a table",
    "finite_number": "a finite number",
    "string_too_short": "a text of at least {min_length} characters",
    "too_short": "at least {min_length} items",
    "greater_than_equal": "{ge:g} or more",
    "greater_than": "more than {gt:g}",
    "less_than_equal": "{le:g} or less",
}


def _allowed(kind: str, context: Mapping[str, Any]) -> str:
    return _ALLOWED.get(kind, kind.replace("_", " ")).format(**context)


def _keys_beside(model: type[BaseModel], location: Sequence[int | str]) -> list[str]:
    """The keys allowed where an unknown one was found."""
    current: Any = model
    for key in location[:-1]:
        if isinstance(current, type) and issubclass(current, BaseModel):
            current = current.model_fields[str(key)].annotation
        else:
            current = get_args(current)[-1]
        while get_args(current) and hasattr(current, "__metadata__"):
            current = get_args(current)[0]
    return list(current.model_fields) if isinstance(current, type) and issubclass(current, BaseModel) else []
