"""Words in names that tell members from fittings, in the languages of common exports (en, nl, de, fr, es, it)."""

from __future__ import annotations

import re

RAFTER_WORDS = (
    "joist", "rafter", "purlin", "gording", "spoor", "spant", "balklaag", "vloerbalk", "sparren", "pfette", "sparre",
    "deckenbalken", "kehlbalken", "chevron", "panne", "solive", "faîtière", "faitiere", "vigueta", "correa", "cabio",
    "travetto", "arcareccio", "puntone",
)  # fmt: skip
"""Members that carry a floor or roof although they are no ``IfcBeam``; rafters slope."""

FITTING_WORDS = (
    "bolt", "nut", "washer", "rod", "stud", "plate", "gusset", "stiffener", "anchor", "bracket", "cleat", "hook",
    "railing", "handrail", "baluster", "sill", "mullion", "brace", "bracing", "formwork", "shim", "screw", "clip",
    "moer", "bout", "sluitring", "draadeind", "plaat", "schot", "anker", "ankerbout", "haak", "leuning", "dorpel",
    "schoor", "windverband", "hijsoog", "strip",
    "schraube", "mutter", "scheibe", "platte", "blech", "geländer", "gelaender", "handlauf", "haken", "strebe",
    "verband", "schalung", "sohlbank", "fensterbank",
    "boulon", "écrou", "ecrou", "rondelle", "plaque", "platine", "raidisseur", "ancrage", "crochet", "garde-corps",
    "main courante", "contreventement", "appui de fenêtre",
    "perno", "tuerca", "arandela", "chapa", "placa", "anclaje", "barandilla", "pasamanos", "arriostramiento",
    "bullone", "dado", "rondella", "piastra", "ancoraggio", "ringhiera", "corrimano", "controvento",
)  # fmt: skip
"""Fittings, plates and secondary elements that real exports put into ``IfcBeam``."""


def _pattern(words: tuple[str, ...], *, whole: bool) -> re.Pattern[str]:
    """One expression for all words; a whole word may carry a plural ending and stand beside digits or underscores."""
    body = "|".join(sorted(map(re.escape, words), key=len, reverse=True))
    return re.compile(rf"(?<![^\W\d_])(?:{body})(?:e?s|en|n)?(?![^\W\d_])" if whole else f"(?:{body})", re.IGNORECASE)


_RAFTER = _pattern(RAFTER_WORDS, whole=False)
_FITTING = _pattern(FITTING_WORDS, whole=True)


def names_rafter(text: str) -> bool:
    """The text names a joist, rafter or purlin.

    Example:
        >>> names_rafter("Sparren-12"), names_rafter("Pfosten-3")
        (True, False)
    """
    return bool(_RAFTER.search(text))


def fitting_word(text: str) -> str:
    """The word of a text that names a fitting; empty when there is none.

    Example:
        >>> fitting_word("MOER_M10"), fitting_word("Nutley girder")
        ('MOER', '')
    """
    found = _FITTING.search(text)
    return found.group(0) if found else ""
