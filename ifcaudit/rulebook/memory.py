"""Answers kept per rule set: rules hold mappings and cannot be hashed, so they are known by identity."""

from __future__ import annotations

from collections.abc import Callable
from typing import Generic, TypeVar

Owner = TypeVar("Owner")
Kept = TypeVar("Kept")


class PerOwner(Generic[Owner, Kept]):
    """Something made once for each of the last few owners.

    Example:
        >>> lengths = PerOwner(len)
        >>> lengths.of([1, 2, 3])
        3
    """

    def __init__(self, make: Callable[[Owner], Kept], most: int = 4) -> None:
        self._make = make
        self._most = most
        self._kept: list[tuple[Owner, Kept]] = []

    def of(self, owner: Owner) -> Kept:
        """Return what belongs to an owner; made when it is first asked for."""
        for known, kept in self._kept:
            if known is owner:
                return kept
        made = self._make(owner)
        self._kept.append((owner, made))
        del self._kept[: -self._most]
        return made
