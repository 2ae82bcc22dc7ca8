"""The statics of simple beams: properties that hold for any loads, and the edges of the batch."""

from __future__ import annotations

import numpy as np
import pytest
from helpers.beam_cases import Line, Point, loads, once, together
from hypothesis import given, settings
from hypothesis import strategies as st

from ifcaudit.analysis.simple_beam import CHUNK, deflection, envelope, moment_at, pack, reactions
from ifcaudit.model.loads import CASE_COUNT, BeamLoads, FloatArray, LoadCase

SPAN = 9.0
PARTS = st.floats(0.0, 1.0).map(lambda value: round(value, 3))
INTENSITIES = st.floats(0.0, 40e3).map(lambda value: round(value, 1))
LINES = st.tuples(PARTS, PARTS, INTENSITIES, INTENSITIES).map(
    lambda line: (min(line[:2]) * SPAN, max(line[:2]) * SPAN, line[2], line[3])
)
POINTS = st.tuples(
    PARTS.map(lambda part: round(part * SPAN, 3)), st.floats(0.0, 2e5).map(lambda value: round(value, 1))
)
LOADS = st.builds(
    lambda lines, points: loads(SPAN, lines, points), st.lists(LINES, max_size=4), st.lists(POINTS, max_size=4)
)
STATIONS = np.linspace(0.0, SPAN, 61)[None, :]


def mirrored(beam: BeamLoads) -> BeamLoads:
    """The same beam seen from the other side."""
    return BeamLoads(
        span=beam.span,
        segment_positions=beam.span - beam.segment_positions[:, ::-1],
        segment_intensities=beam.segment_intensities[:, ::-1],
        point_positions=beam.span - beam.point_positions,
        point_magnitudes=beam.point_magnitudes,
    )


def size(beam: BeamLoads) -> float:
    """Total load, the measure of what is rounding."""
    return float(beam.total().sum()) + 1.0


@given(LOADS)
def test_equilibrium(beam: BeamLoads) -> None:
    """Both reactions carry the whole load, and their moment about the first support is the load's, case by case."""
    ends = reactions([beam])[0]
    assert ends.sum(axis=0) == pytest.approx(beam.total(), abs=1e-9 * size(beam))
    fine = 0.0
    for (start, end), (left, right) in zip(beam.segment_positions, beam.segment_intensities[:, :, 0], strict=True):
        length = end - start
        fine += left * length * (start + length / 2) + (right - left) * length / 2 * (start + 2 * length / 3)
    fine += float(beam.point_positions @ beam.point_magnitudes[:, 0])
    assert ends[1, LoadCase.DEAD] * SPAN == pytest.approx(fine, abs=1e-9 * size(beam))


@given(LOADS, LOADS)
def test_superposition(first: BeamLoads, second: BeamLoads) -> None:
    """Moments of two load sets add up to those of both together; the sum of the peaks is never exceeded."""
    moments = moment_at([first, second, together(first, second)], once(), np.repeat(STATIONS, 3, axis=0))[:, 0]
    assert moments[0] + moments[1] == pytest.approx(moments[2], abs=1e-9 * size(together(first, second)) * SPAN)
    peaks = envelope([first, second, together(first, second)], once()).moment[:, 0]
    assert peaks[2] <= peaks[0] + peaks[1] + 1e-6 * size(together(first, second))


@given(LOADS)
def test_mirror(beam: BeamLoads) -> None:
    """Seen from the other side, shear, moment and deflection are as large, and the reactions change places."""
    pair = [beam, mirrored(beam)]
    forces, bent, ends = envelope(pair, once()), deflection(pair, once())[0], reactions(pair)
    for values in (forces.moment, forces.shear, bent):
        assert values[0] == pytest.approx(values[1], rel=1e-9, abs=1e-7 * size(beam))
    assert ends[0, ::-1] == pytest.approx(ends[1], abs=1e-9 * size(beam))


@given(LOADS, st.floats(0.05, 0.95))
def test_splitting_a_line_load(beam: BeamLoads, part: float) -> None:
    """A line load cut into two changes nothing."""
    lines: list[Line] = []
    for (start, end), (left, right) in zip(beam.segment_positions, beam.segment_intensities[:, :, 0], strict=True):
        middle, value = start + part * (end - start), left + part * (right - left)
        lines += [(start, middle, left, value), (middle, end, value, right)]
    points: list[Point] = list(zip(beam.point_positions, beam.point_magnitudes[:, 0], strict=True))
    pair = [beam, loads(SPAN, lines, points)]
    forces, bent = envelope(pair, once()), deflection(pair, once())[0]
    for values in (forces.moment, forces.shear, bent):
        assert values[0] == pytest.approx(values[1], rel=1e-8, abs=1e-7 * size(beam))


@given(LOADS)
def test_peak_is_no_smaller_than_any_station(beam: BeamLoads) -> None:
    """The largest moment is at least that at 61 stations, occurs where it is said to, and nothing hogs."""
    forces = envelope([beam], once())
    rounding = 1e-9 * size(beam) * SPAN
    assert forces.moment[0, 0] >= moment_at([beam], once(), STATIONS).max() - rounding
    place = forces.moment_position[:, :1]
    assert moment_at([beam], once(), place)[0, 0, 0] == pytest.approx(forces.moment[0, 0], abs=rounding)
    assert forces.hogging[0, 0] <= rounding


@settings(max_examples=25)
@given(LOADS)
def test_deflection_is_the_moment_integrated_twice(beam: BeamLoads) -> None:
    """EI y by the unit-load method, integrated numerically at the place found, and no neighbour deflects more."""
    value, place = deflection([beam], once())
    fine = np.linspace(0.0, SPAN, 4001)[None, :]
    moments = moment_at([beam], once(), fine)[0, 0]

    def by_unit_load(at: float) -> float:
        unit = np.where(fine[0] < at, fine[0] * (SPAN - at) / SPAN, at * (SPAN - fine[0]) / SPAN)
        return float(np.trapezoid(moments * unit, fine[0]))

    here = by_unit_load(float(place[0, 0]))
    assert value[0, 0] == pytest.approx(here, rel=1e-5, abs=1e-4 * size(beam))
    for step in (-0.05, 0.05):
        beside = min(SPAN, max(0.0, float(place[0, 0]) + step))
        assert by_unit_load(beside) <= here * (1 + 1e-6) + 1e-4 * size(beam)


def test_many_uneven_beams_equal_each_alone() -> None:
    """Beams of 0 to 12 loads, in more than two chunks, give in one call what each gives alone, in its own place."""
    generator = np.random.default_rng(7)
    beams = []
    for _ in range(2 * CHUNK + 5):
        span = float(generator.uniform(2.0, 15.0))
        lines = [
            (*np.sort(generator.uniform(0, span, 2)).tolist(), *generator.uniform(0, 1e4, 2).tolist())
            for _ in range(int(generator.integers(0, 7)))
        ]
        points = [(float(generator.uniform(0, span)), 1e4) for _ in range(int(generator.integers(0, 7)))]
        beams.append(loads(span, lines, points))
    factors = generator.uniform(0.5, 1.6, (len(beams), 3, CASE_COUNT))
    places = generator.uniform(0.0, 2.0, (len(beams), 2))
    forces, bent, moments = envelope(beams, factors), deflection(beams, factors), moment_at(beams, factors, places)
    for row in range(0, len(beams), 9):
        alone = envelope([beams[row]], factors[row])
        for name in ("moment", "moment_position", "shear"):
            assert getattr(forces, name)[row] == pytest.approx(getattr(alone, name)[0], rel=1e-12, abs=1e-9), name
        assert bent[0][row] == pytest.approx(deflection([beams[row]], factors[row])[0][0], rel=1e-12)
        assert moments[row] == pytest.approx(moment_at([beams[row]], factors[row], places[row : row + 1])[0], abs=1e-6)
        assert reactions(beams)[row] == pytest.approx(reactions([beams[row]])[0])


def test_no_loads() -> None:
    """A beam without loads has neither forces nor deflection, beside one that has."""
    beams = [loads(5.0), loads(4.0, [(0, 4, 10.0, 10.0)])]
    forces = envelope(beams, once())
    assert forces.moment[:, 0].tolist() == [0.0, 20.0]
    assert forces.shear[:, 0].tolist() == [0.0, 20.0]
    assert deflection(beams, once())[0][:, 0] == pytest.approx([0.0, 5 * 10 * 4**4 / 384])
    assert envelope([loads(5.0)], once()).moment.tolist() == [[0.0]]


def test_no_beams() -> None:
    """Nothing in, nothing out, with the axes kept."""
    factors: FloatArray = np.ones((3, CASE_COUNT))
    assert envelope([], factors).moment.shape == (0, 3)
    assert deflection([], factors)[0].shape == (0, 3)
    assert moment_at([], factors, np.zeros((0, 4))).shape == (0, 3, 4)
    assert reactions([]).shape == (0, 2, CASE_COUNT)


@pytest.mark.parametrize("place", [0.0, 1e-9, 6.0, 6.0 - 1e-9])
def test_load_over_a_support_loads_no_section(place: float) -> None:
    """A point load over a support is in its reaction, and neither in the shear nor in the moment of the beam."""
    beam = together(loads(6.0, [(0, 6, 10.0, 10.0)]), loads(6.0, points=[(place, 500.0)]))
    forces = envelope([beam], once())
    assert reactions([beam])[0, :, LoadCase.DEAD].sum() == pytest.approx(560.0)
    assert forces.shear[0, 0] == pytest.approx(30.0)
    assert forces.moment[0, 0] == pytest.approx(10 * 36 / 8)


def test_segment_without_length_carries_nothing() -> None:
    """A line load from a place to the same place is no load and no error."""
    forces = envelope([loads(6.0, [(2.0, 2.0, 100.0, 50.0)])], once())
    assert forces.moment[0, 0] == 0.0
    assert forces.shear[0, 0] == 0.0


def test_cases_keep_apart_and_factors_apply() -> None:
    """1.2 D + 1.6 L of separate cases is the sum of both, each with its factor; a case without factor is left out."""
    beam = together(
        loads(8.0, [(0, 8, 5e3, 5e3)]),
        loads(8.0, points=[(4.0, 20e3)], case=LoadCase.LIVE),
        loads(8.0, points=[(4.0, 1e9)], case=LoadCase.AREA),
    )
    factors = once(LoadCase.DEAD, 1.2) + once(LoadCase.LIVE, 1.6)
    # 1.2 x 5 x 8²/8 + 1.6 x 20 x 8/4 = 48 + 64 kNm
    assert envelope([beam], factors).moment[0, 0] == pytest.approx(112e3)


def test_uplift_is_reported_as_hogging() -> None:
    """An upward load hogs a simple span: no sagging moment, and its size as hogging."""
    forces = envelope([loads(8.0, [(0, 8, -1e3, -1e3)])], once())
    assert forces.moment[0, 0] == 0.0
    assert forces.hogging[0, 0] == pytest.approx(8e3)


def test_padding_is_one_table_wide() -> None:
    """Packed terms have one row per beam and as many columns as the beam with most loads needs."""
    packed = pack([loads(5.0, [(0, 5, 1.0, 1.0)] * 3, [(1.0, 2.0)]), loads(5.0)])
    assert packed.stations.shape == (2, 6)
    assert packed.points.shape == (2, 1, CASE_COUNT)
