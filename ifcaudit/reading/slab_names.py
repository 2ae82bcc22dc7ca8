"""What the names of slabs say in several languages: roof, bearing on the ground, precast unit."""

from __future__ import annotations

import re
from collections.abc import Iterable

_ROOF = re.compile(
    r"(?<![a-z])(?:roof|dak(?!kapel|terras)|dach(?!geschoss|boden|terrasse)|toit|cubierta|tejado|techumbre|copertura|tetto"
    r"|telha|cobertura|tak(?![a-z])|yttertak|katto|vesikatto|strecha|střecha)"
)
_ON_GRADE = re.compile(
    r"slabs?[\s_-]*on[\s_-]*(?:grade|ground)|(?<![a-z])(?:on[\s_-]grade|ground[\s_-]bearing|sog(?![a-z])|foundation|footing"
    r"|base[\s_-]?slab|fundering|bodenplatte|sohlplatte|fundament|radier|dallage|fondation|solera|cimentaci"
    r"|fondazion|platea|bottenplatta|grundplatta|maanvarai|pavement)"
)
_UNIT = re.compile(
    r"hollow[\s_-]*core|kanaalplaat|hohldiele|hohlkorper|spannbeton|(?<![a-z])(?:planks?(?![a-z])|double[\s_-]*tees?"
    r"|tt[\s_-]|predalle|prelosa|dalle alv|alveolar|systeemvloer"
    r"|floor[\s_-]*unit|deck(?:ing)?(?![a-z])|ontelolaatta|huldekke)"
)


def _first(pattern: re.Pattern[str], names: Iterable[str]) -> str:
    return next((name for name in names if pattern.search(name.lower())), "")


def roof_name(names: Iterable[str]) -> str:
    """Return the first name that says roof; empty when none does.

    Example:
        >>> roof_name(["Floor", "Basic Roof:zinken dak"])
        'Basic Roof:zinken dak'
        >>> roof_name(["Decke Dachgeschoss", "waterproof screed"])
        ''
    """
    return _first(_ROOF, names)


def on_grade_name(names: Iterable[str]) -> str:
    """Return the first name that says the slab bears on the ground; empty when none does.

    Example:
        >>> on_grade_name(["CL_16_funderingsplaat_250mm"])
        'CL_16_funderingsplaat_250mm'
        >>> on_grade_name(["Slab on metal deck"])
        ''
    """
    return _first(_ON_GRADE, names)


def floor_unit_name(names: Iterable[str]) -> str:
    """Return the first name that says precast unit, plank or deck; empty when none does.

    Example:
        >>> floor_unit_name(["HCS 200 hollowcore"])
        'HCS 200 hollowcore'
    """
    return _first(_UNIT, names)
