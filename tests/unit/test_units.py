"""Units at the edges: what a person types, and factors to SI."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifcaudit.errors import QuantityError
from ifcaudit.units import convert, factor, parse_quantity, standard_gravity, table_factor, table_suffix

# International foot and pound (NIST SP 811, appendix B): 1 ft = 0.3048 m, 1 lb = 0.45359237 kg, g_n = 9.80665 m/s².
FOOT, POUND, GRAVITY = 0.3048, 0.45359237, 9.80665
PSF = POUND * GRAVITY / FOOT**2


@pytest.mark.parametrize(
    ("unit", "dimension", "expected"),
    [
        ("ft", "length", FOOT),
        ("in", "length", FOOT / 12),
        ("psf", "pressure", PSF),
        ("ksi", "pressure", PSF * 144_000),
        ("pcf", "density", POUND / FOOT**3),
        ("kip", "force", POUND * GRAVITY * 1000),
        ("kip-ft", "moment", POUND * GRAVITY * 1000 * FOOT),
        ("plf", "line load", POUND * GRAVITY / FOOT),
        ("in4", "second moment of area", (FOOT / 12) ** 4),
        ("in6", "warping constant", (FOOT / 12) ** 6),
        ("kN/m2", "pressure", 1000.0),
    ],
)
def test_factors_follow_the_definitions_of_the_units(unit: str, dimension: str, expected: float) -> None:
    """Every factor is built from the defined foot, pound and standard gravity (NIST SP 811)."""
    assert factor(unit, dimension) == pytest.approx(expected, rel=1e-12)


def test_standard_gravity() -> None:
    """Gravity is the conventional value of the third CGPM (1901), 9.80665 m/s²."""
    assert standard_gravity() == GRAVITY


@pytest.mark.parametrize(
    "text",
    [
        "50 psf",
        "50psf",
        " 50  PSF ",
        "50 lb/ft2",
        "50 lb/ft^2",
        "50 lb/ft²",
        "50 lbs/sq ft",
        "50 lbf/ft**2",
        "0.05 ksf",
    ],
)
def test_a_load_is_read_in_every_usual_spelling(text: str) -> None:
    """Fifty pounds per square foot are 2.394 kPa, however they are written."""
    assert parse_quantity(text, "pressure") == pytest.approx(50 * PSF, rel=1e-12)


@pytest.mark.parametrize("text", ["2.4 kPa", "2.4 kN/m2", "2.4kN/m²", "2.4 kN/m^2", "2.4 kpa", "2400 Pa", "2.4e3 N/m2"])
def test_a_metric_load_is_read_in_every_usual_spelling(text: str) -> None:
    """2.4 kPa is 2400 Pa, however it is written."""
    assert parse_quantity(text, "pressure") == pytest.approx(2400.0, rel=1e-12)


_NOT_A_PRESSURE = 'is not a unit of pressure; write a pressure such as "50 psf", "2.4 kPa", "2.4 kN/m2"'


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("50", '--live-load "50": no unit found; write a pressure such as "50 psf", "2.4 kPa", "2.4 kN/m2"'),
        ("psf", '--live-load "psf": no number found; write a pressure such as "50 psf", "2.4 kPa", "2.4 kN/m2"'),
        ("50 m", f'--live-load "50 m": "m" {_NOT_A_PRESSURE}'),
        ("50 slugs", f'--live-load "50 slugs": "slugs" {_NOT_A_PRESSURE}'),
        ("240 kg/m2", f'--live-load "240 kg/m2": "kg/m2" {_NOT_A_PRESSURE}'),
        ("5 9**9**9**9", f'--live-load "5 9**9**9**9": "9**9**9**9" {_NOT_A_PRESSURE}'),
        ("5 psf; quit", f'--live-load "5 psf; quit": "psf; quit" {_NOT_A_PRESSURE}'),
        ("2,4 kPa", '--live-load "2,4 kPa": write the number with a decimal point and no thousands separators'),
        (
            "1e999 psf",
            (
                '--live-load "1e999 psf": the number is not finite; '
                'write a pressure such as "50 psf", "2.4 kPa", "2.4 kN/m2"'
            ),
        ),
    ],
)
def test_a_quantity_that_cannot_be_read_says_what_to_write(text: str, message: str) -> None:
    """Every way to write it wrong gives one message that names the argument and shows what is right."""
    with pytest.raises(QuantityError) as caught:
        parse_quantity(text, "pressure", "--live-load")
    assert str(caught.value) == message


@given(st.text(max_size=20))
def test_no_text_gives_a_traceback(text: str) -> None:
    """Whatever is typed is a quantity or a QuantityError."""
    try:
        parse_quantity(text, "pressure")
    except QuantityError:
        return


def test_trade_arithmetic_of_line_loads() -> None:
    """25 psf on widths of 6, 12 and 24 ft is 0.15, 0.30 and 0.60 kip/ft (common practice, no source)."""
    pressure = parse_quantity("25 psf", "pressure")
    loads = [convert(pressure * parse_quantity(f"{width} ft", "length"), "N/m", "kip/ft") for width in (6, 12, 24)]
    assert loads == pytest.approx([0.15, 0.30, 0.60], rel=1e-12)


def test_trade_arithmetic_of_deflection_limits() -> None:
    """Span/360 is 1.0, 1.33 and 2.0 in at 30, 40 and 60 ft (common practice, no source)."""
    limits = [parse_quantity(f"{span} ft", "length") / 360 * table_factor("deflection", "us") for span in (30, 40, 60)]
    assert limits == pytest.approx([1.0, 4 / 3, 2.0], rel=1e-12)


def test_table_columns_name_their_units() -> None:
    """A column's suffix and factor belong together: 1355.8 N·m are 1 kip-ft less a thousandth."""
    assert [table_suffix(quantity, "us") for quantity in ("length", "moment", "ratio", "")] == [
        "_ft",
        "_kip-ft",
        "",
        "",
    ]
    assert 1000 * POUND * GRAVITY * FOOT * table_factor("moment", "us") == pytest.approx(1.0, rel=1e-12)
    assert table_factor("moment", "si") == pytest.approx(1e-3)
