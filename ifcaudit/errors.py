"""What can go wrong, as one tree.

::

    AuditError                 every error this package raises on purpose; exit status 2
    ├── UsageError             an argument that cannot be used
    │   └── QuantityError      a quantity whose number or unit cannot be read
    ├── ModelFileError         a model that cannot be opened or read
    └── RuleError              a rule set that cannot be found or does not validate

A beam that cannot be judged is no error: it is a result, ``not checked``, with its reason.
"""

from __future__ import annotations


class AuditError(Exception):
    """Base of every error raised on purpose; its text is one message for a person.

    Example:
        >>> isinstance(RuleError("rules/us.toml: no such file"), AuditError)
        True
    """


class UsageError(AuditError):
    """An argument that cannot be used."""


class QuantityError(UsageError):
    """A quantity whose number or unit cannot be read."""


class ModelFileError(AuditError):
    """A model that cannot be opened or read."""


class RuleError(AuditError):
    """A rule set that cannot be found, read or validated; lists every problem found."""
