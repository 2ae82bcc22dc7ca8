"""Simple-beam diagrams of the AISC Manual (Table 3-22 in the 16th edition, 3-23 before), and textbook closed forms."""

from __future__ import annotations

from collections.abc import Sequence
from math import sqrt

import numpy as np
import pytest
from helpers.beam_cases import FOOT, INCH, KIP, KIP_FOOT, KIP_PER_FOOT, KSI, Line, Point, loads, once

from ifcaudit.analysis.simple_beam import deflection, envelope, moment_at, reactions
from ifcaudit.model.loads import BeamLoads, LoadCase

L, w, P = 8.4, 13.0e3, 47.0e3
SOURCE = "AISC Manual, 16th ed., Table 3-22 (3-23 in the 14th and 15th)"


@pytest.mark.parametrize(
    ("lines", "points", "moment", "place", "left", "right", "largest_deflection", "diagram"),
    [
        ([(0, L, w, w)], [], w * L**2 / 8, L / 2, w * L / 2, w * L / 2, 5 * w * L**4 / 384, "1, uniform load"),
        (
            [(0, L, 0, w)],
            [],
            w * L**2 / (9 * sqrt(3)),
            L / sqrt(3),
            w * L / 6,
            w * L / 3,
            # 0.01304 W L³ with W = w L / 2, printed to four figures
            pytest.approx(0.01304 * (w * L / 2) * L**3, rel=4e-4),
            "2, load increasing uniformly to one end",
        ),
        (
            [(0, L / 2, 0, w), (L / 2, L, w, 0)],
            [],
            w * L**2 / 12,
            L / 2,
            w * L / 4,
            w * L / 4,
            w * L**4 / 120,
            "3, load increasing uniformly to the centre: M = WL/6, deflection WL³/60",
        ),
        ([], [(L / 2, P)], P * L / 4, L / 2, P / 2, P / 2, P * L**3 / 48, "7, concentrated load at the centre"),
        (
            [],
            [(5.1, P)],
            P * 5.1 * (L - 5.1) / L,
            5.1,
            P * (L - 5.1) / L,
            P * 5.1 / L,
            # P a b (a + 2b) sqrt(3a (a + 2b)) / (27 L) where a > b
            P * 5.1 * (L - 5.1) * (5.1 + 2 * (L - 5.1)) * sqrt(3 * 5.1 * (5.1 + 2 * (L - 5.1))) / (27 * L),
            "8, concentrated load at any point",
        ),
        (
            [],
            [(L / 3, P), (2 * L / 3, P)],
            P * L / 3,
            None,
            P,
            P,
            23 * P * L**3 / 648,
            "9, two equal loads symmetrically placed, a = L/3: P a (3L² - 4a²)/24",
        ),
        (
            [],
            [(1.7, P), (L - 1.7, P)],
            P * 1.7,
            None,
            P,
            P,
            P * 1.7 * (3 * L**2 - 4 * 1.7**2) / 24,
            "9, two equal loads symmetrically placed",
        ),
    ],
)
def test_simple_beam_diagram(
    lines: Sequence[Line],
    points: Sequence[Point],
    moment: float,
    place: float | None,
    left: float,
    right: float,
    largest_deflection: float,
    diagram: str,
) -> None:
    """Reactions, largest moment with its place, largest shear and largest deflection equal the closed form."""
    beam = loads(L, lines, points)
    forces = envelope([beam], once())
    assert reactions([beam])[0, :, LoadCase.DEAD] == pytest.approx([left, right], rel=1e-12), (SOURCE, diagram)
    assert forces.moment[0, 0] == pytest.approx(moment, rel=1e-12), (SOURCE, diagram)
    assert forces.shear[0, 0] == pytest.approx(max(left, right), rel=1e-12), (SOURCE, diagram)
    if place is not None:
        assert forces.moment_position[0, 0] == pytest.approx(place, rel=1e-9), (SOURCE, diagram)
    value, _ = deflection([beam], once())
    expected = (
        largest_deflection
        if not isinstance(largest_deflection, float)
        else pytest.approx(largest_deflection, rel=1e-11)
    )
    assert value[0, 0] == expected, (SOURCE, diagram)


def test_partial_uniform_load() -> None:
    """Table 3-22, diagram 4: R1 = wb(2c + b)/2L, M = R1 (a + R1/2w) at a + R1/w."""
    a, b = 1.3, 4.6
    c = L - a - b
    left = w * b * (2 * c + b) / (2 * L)
    forces = envelope([loads(L, [(a, a + b, w, w)])], once())
    assert forces.moment[0, 0] == pytest.approx(left * (a + left / (2 * w)), rel=1e-12)
    assert forces.moment_position[0, 0] == pytest.approx(a + left / w, rel=1e-12)


def test_place_of_largest_deflection_under_a_point_load() -> None:
    """Table 3-22, diagram 8: the deflection is largest at sqrt(a (a + 2b) / 3) from the support beyond a, a > b."""
    a = 6.2
    b = L - a
    _, place = deflection([loads(L, [], [(a, P)])], once())
    assert place[0, 0] == pytest.approx(sqrt(a * (a + 2 * b) / 3), rel=1e-8)


def test_trapezoid_of_a_two_way_panel() -> None:
    """A load rising over a, level, and falling over a: M = w (3L² - 4a²)/24, from statics (M = wL²/12 for a = L/2).

    Deflection w (5L² - 4a²)² / 1920 EI: Roark's Formulas, from memory; for a = L/2 it is wL⁴/120, diagram 3.
    """
    a = 2.1
    beam = loads(L, [(0, a, 0, w), (a, L - a, w, w), (L - a, L, w, 0)])
    assert envelope([beam], once()).moment[0, 0] == pytest.approx(w * (3 * L**2 - 4 * a**2) / 24, rel=1e-12)
    assert deflection([beam], once())[0][0, 0] == pytest.approx(w * (5 * L**2 - 4 * a**2) ** 2 / 1920, rel=1e-11)


def test_moment_along_the_span() -> None:
    """Table 3-22, diagram 1: M_x = w x (L - x) / 2."""
    places = [0.0, 0.9, 2.1, 4.2, 6.3, L]
    moments = moment_at([loads(L, [(0, L, w, w)])], once(), np.array([places]))
    assert moments[0, 0] == pytest.approx([w * x * (L - x) / 2 for x in places], rel=1e-12, abs=1e-6)


@pytest.mark.parametrize(
    ("beam", "printed", "unit", "source"),
    [
        (loads(35 * FOOT, [(0, 35 * FOOT, 1.74 * KIP_PER_FOOT, 1.74 * KIP_PER_FOOT)]), 266, KIP_FOOT, "F.1-1A, M_u"),
        (loads(35 * FOOT, [(0, 35 * FOOT, 1.20 * KIP_PER_FOOT, 1.20 * KIP_PER_FOOT)]), 184, KIP_FOOT, "F.1-1A, M_a"),
        (
            loads(
                40 * FOOT,
                [(0, 40 * FOOT, 0.06 * KIP_PER_FOOT, 0.06 * KIP_PER_FOOT)],
                [(40 * FOOT / 3, 28.8 * KIP), (80 * FOOT / 3, 28.8 * KIP)],
            ),
            396,
            KIP_FOOT,
            "F.3A, M_u",
        ),
    ],
)
def test_moments_of_design_examples(beam: BeamLoads, printed: float, unit: float, source: str) -> None:
    """AISC Design Examples v16.0 print the required strength to three figures."""
    moment = envelope([beam], once()).moment[0, 0] / unit
    assert moment == pytest.approx(printed, abs=0.5), source


@pytest.mark.parametrize(
    ("span", "line", "point", "inertia", "printed", "source"),
    [
        (25, 0.69, 0.0, 315, 0.664, "F.2-1A, C15X33.9"),
        (40, 0.05, 18.0, 959, 2.64, "F.3A, W21X48, loads at third points"),
        (21, 0.375, 0.0, 54.4, 1.04, "F.8A, HSS8X8X3/16"),
    ],
)
def test_deflections_of_design_examples(
    span: float, line: float, point: float, inertia: float, printed: float, source: str
) -> None:
    """AISC Design Examples v16.0 print deflections [in] to three figures; E = 29 000 ksi."""
    length, intensity = span * FOOT, line * KIP_PER_FOOT
    points = [(length / 3, point * KIP), (2 * length / 3, point * KIP)] if point else []
    value, _ = deflection([loads(length, [(0, length, intensity, intensity)], points)], once())
    found = value[0, 0] / (29_000 * KSI * inertia * INCH**4) / INCH
    assert found == pytest.approx(printed, abs=0.005 if printed > 1 else 0.0005), source
