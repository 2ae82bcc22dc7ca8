"""The one place that knows about units at the edges. Inside, everything is SI: m, N, Pa, kg."""

from __future__ import annotations

import math
import re
from functools import cache
from typing import TYPE_CHECKING, Any

from ifcaudit.errors import QuantityError

if TYPE_CHECKING:
    import pint

_DIMENSION_UNITS = {
    "length": "m",
    "area": "m**2",
    "force": "N",
    "moment": "N*m",
    "pressure": "Pa",
    "line load": "N/m",
    "density": "kg/m**3",
    "mass per length": "kg/m",
    "section modulus": "m**3",
    "second moment of area": "m**4",
    "warping constant": "m**6",
    "ratio": "",
}
_EXAMPLES = {"pressure": '"50 psf", "2.4 kPa", "2.4 kN/m2"', "length": '"9 m", "30 ft"', "density": '"2400 kg/m3"'}
_TABLE_UNITS = {
    "si": {"ratio": "", "length": "m", "area": "m2", "force": "kN", "moment": "kNm", "deflection": "mm"},
    "us": {"ratio": "", "length": "ft", "area": "ft2", "force": "kip", "moment": "kip-ft", "deflection": "in"},
}
_ONE_UNIT = r"[A-Za-zµ°_]+\.?(?:\s*(?:\^|\*\*)?\s*-?\d)?"
_UNIT = re.compile(rf"{_ONE_UNIT}(?:\s*[*/·-]?\s*{_ONE_UNIT})*")
_SPELLINGS = {unit.lower(): unit for unit in ("psf", "ksf", "psi", "ksi", "plf", "klf", "pcf", "kPa", "MPa", "kN/m2")}
_NUMBER_AND_UNIT = re.compile(r"^\s*([-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)\s*(.*?)\s*$")
_TRAILING_EXPONENT = re.compile(r"([A-Za-z])\s*\^?\s*([2346])(?![\d.])")


@cache
def _registry() -> pint.UnitRegistry[Any]:
    import pint

    registry: pint.UnitRegistry[Any] = pint.UnitRegistry()
    for definition in (
        "psf = pound_force / foot**2 = _ = lbf_per_square_foot",
        "ksf = 1000 * psf",
        "plf = pound_force / foot",
        "klf = 1000 * plf",
        "pcf = pound / foot**3",
        "kNm = kilonewton * meter",
        "ips = inch / second",
    ):
        registry.define(definition)
    return registry


def _unit_text(text: str) -> str:
    """Write a unit the way the units library reads it: ``kN/m2`` and ``kN/m²`` become ``kN/m**2``."""
    text = _SPELLINGS.get(text.lower(), text)
    text = text.replace("²", "2").replace("³", "3").replace("⁴", "4").replace("·", "*").replace("kip-ft", "kip*ft")
    text = re.sub(r"\blbs?\s*/\s*(?:ft\s*(?:\^|\*\*)?\s*2|sq\.? ?ft)", "psf", text)
    return _TRAILING_EXPONENT.sub(r"\1**\2", text)


def convert(value: float, unit: str, to: str) -> float:
    """Convert a number between units.

    Example:
        >>> round(convert(1.0, "kip/ft", "kN/m"), 4)
        14.5939

    Raises:
        QuantityError: A unit is unknown, or the two measure different things.
    """
    import pint

    if not all(_UNIT.fullmatch(_unit_text(text)) for text in (unit, to) if text):
        raise QuantityError(f'"{unit}" cannot be converted to {to}: it is not written as a unit')
    try:
        return float(_registry().Quantity(value, _unit_text(unit)).to(_unit_text(to)).magnitude)
    except (pint.PintError, AttributeError, TypeError, ValueError, SyntaxError, AssertionError) as error:
        raise QuantityError(f'"{unit}" cannot be converted to {to}: {error}') from error


@cache
def factor(unit: str, dimension: str) -> float:
    """Return the factor from a unit to SI for a dimension named in this module.

    Raises:
        QuantityError: The unit is unknown, or measures something else.

    Example:
        >>> factor("ft", "length")
        0.3048
    """
    return float(f"{convert(1.0, unit, _DIMENSION_UNITS[dimension]):.15g}")  # the last bit is rounding


def parse_quantity(text: str, dimension: str, what: str = "quantity") -> float:
    """Read a quantity as a person types it and return it in SI.

    Args:
        text: Number and unit, such as ``"50 psf"`` or ``"2.4 kN/m2"``.
        dimension: ``pressure``, ``length``, ``density`` … as named in this module.
        what: How the message calls it, for instance ``--live-load``.

    Example:
        >>> round(parse_quantity("50 psf", "pressure"), 1)
        2394.0

    Raises:
        QuantityError: No number, no unit, an unknown unit, or a unit of another kind.
    """
    examples = _EXAMPLES.get(dimension, f"a number and a unit of {dimension}")
    match = _NUMBER_AND_UNIT.match(text)
    if not match or not match.group(2):
        missing = "no number" if not match else "no unit"
        raise QuantityError(f'{what} "{text}": {missing} found; write a {dimension} such as {examples}')
    number, unit = float(match.group(1)), match.group(2)
    if unit.startswith(","):
        raise QuantityError(f'{what} "{text}": write the number with a decimal point and no thousands separators')
    if not math.isfinite(number):
        raise QuantityError(f'{what} "{text}": the number is not finite; write a {dimension} such as {examples}')
    try:
        return number * factor(unit, dimension)
    except QuantityError:
        raise QuantityError(
            f'{what} "{text}": "{unit}" is not a unit of {dimension}; write a {dimension} such as {examples}'
        ) from None


@cache
def standard_gravity() -> float:
    """Standard acceleration of free fall [m/s²].

    Example:
        >>> standard_gravity()
        9.80665
    """
    return convert(1.0, "standard_gravity", "m/s**2")


def table_suffix(quantity: str, units: str) -> str:
    """Return the heading suffix of a table column, ``_kNm`` for a moment in SI; empty for text and ratios."""
    unit = _TABLE_UNITS[units].get(quantity, "")
    return f"_{unit}" if unit else ""


def table_factor(quantity: str, units: str) -> float:
    """Return the factor from SI to a table column's unit.

    Example:
        >>> table_factor("force", "si")
        0.001
    """
    unit = _TABLE_UNITS[units].get(quantity, "")
    dimension = "length" if quantity == "deflection" else quantity
    return 1.0 / factor(unit, dimension) if unit else 1.0
