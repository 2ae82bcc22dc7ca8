"""Screens the steel beams of an IFC building model against published structural standards.

A screening aid for qualified engineers. It does not replace design or review by a licensed professional,
or the local building code.
"""

from __future__ import annotations

from importlib import import_module
from importlib.metadata import version
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from ifcaudit.errors import AuditError
    from ifcaudit.model.audit import Audit
    from ifcaudit.pipeline import audit
    from ifcaudit.rulebook.loader import load_rules

    __version__: str

__all__ = ["Audit", "AuditError", "__version__", "audit", "load_rules"]

_HOMES = {
    "Audit": "ifcaudit.model.audit",
    "AuditError": "ifcaudit.errors",
    "audit": "ifcaudit.pipeline",
    "load_rules": "ifcaudit.rulebook.loader",
}


def __getattr__(name: str) -> Any:
    """Load a public name when it is first used, so that ``import ifcaudit`` stays quick."""
    if name == "__version__":
        return version("ifcaudit")
    if name not in _HOMES:
        raise AttributeError(f"module 'ifcaudit' has no attribute {name!r}")
    return getattr(import_module(_HOMES[name]), name)
