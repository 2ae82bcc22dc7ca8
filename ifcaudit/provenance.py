"""Where each input of a verdict came from.

Every span, section, grade, load and bracing length carries its source. A verdict is as good as the weakest of them.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from enum import IntEnum
from typing import Generic, TypeVar

T_co = TypeVar("T_co", covariant=True)


class Source(IntEnum):
    """Who says so, strongest first: the model, geometry derived from it, the rule set, or an assumption."""

    MODEL = 1
    DERIVED = 2
    RULES = 3
    ASSUMED = 4

    @property
    def label(self) -> str:
        """The word used in tables: ``model``, ``derived``, ``rules`` or ``assumed``."""
        return self.name.lower()


@dataclass(frozen=True, slots=True, kw_only=True)
class Sourced(Generic[T_co]):
    """A value together with where it came from.

    Attributes:
        value: The value itself, in SI where it is a quantity.
        source: Who says so.
        where: The place, for a checker: an attribute, a rule file and key, or the geometry used.
        remedy: For an assumption, the override that settles it; empty otherwise.

    Example:
        >>> Sourced(value=50.0, source=Source.RULES, where="loads.live").source.label
        'rules'
    """

    value: T_co
    source: Source
    where: str = ""
    remedy: str = ""


def weakest(inputs: Iterable[Sourced[object]]) -> Source:
    """Return the weakest source among the inputs; ``MODEL`` when there are none.

    Example:
        >>> weakest([Sourced(value=1, source=Source.MODEL), Sourced(value=2, source=Source.ASSUMED)]).label
        'assumed'
    """
    return max((item.source for item in inputs), default=Source.MODEL)
