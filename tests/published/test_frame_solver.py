"""The mechanics against an independent frame solver, PyNiteFEA (MIT), on random load sets."""

from __future__ import annotations

import warnings

import numpy as np
import pytest
from helpers.beam_cases import loads

from ifcaudit.analysis.simple_beam import deflection, envelope, moment_at, reactions
from ifcaudit.model.loads import BeamLoads, FloatArray, LoadCase

E_MODULUS, INERTIA = 200e9, 3.0e-4


def random_beam(generator: np.random.Generator) -> BeamLoads:
    """One to four line loads, triangles and trapezoids, and up to four point loads."""
    span = float(generator.uniform(3.0, 14.0))
    lines = []
    for _ in range(int(generator.integers(1, 5))):
        start, end = np.sort(generator.uniform(0.0, span, 2)).tolist()
        left, right = generator.uniform(0.0, 30e3, 2).tolist()
        lines.append((start, end, left if generator.random() < 0.7 else 0.0, right))
    places = generator.uniform(0.02, 0.98, int(generator.integers(0, 5))) * span
    return loads(span, lines, [(float(place), float(generator.uniform(5e3, 9e4))) for place in places])


class Solver:
    """One simple span in the frame solver; deflections read on a fine grid (its own extremes sample coarsely)."""

    def __init__(self, beam: BeamLoads) -> None:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            from Pynite import FEModel3D
        model = FEModel3D()
        model.add_node("near", 0, 0, 0)
        model.add_node("far", beam.span, 0, 0)
        model.add_material("steel", E_MODULUS, 77e9, 0.3, 7850)
        model.add_section("section", 8e-3, 1e-4, INERTIA, 1e-6)
        model.add_member("beam", "near", "far", "steel", "section")
        model.def_support("near", True, True, True, True, False, False)
        model.def_support("far", False, True, True, False, False, False)
        for (start, end), values in zip(beam.segment_positions, beam.segment_intensities[:, :, 0], strict=True):
            model.add_member_dist_load("beam", "Fy", -float(values[0]), -float(values[1]), float(start), float(end))
        for place, value in zip(beam.point_positions, beam.point_magnitudes[:, 0], strict=True):
            model.add_member_pt_load("beam", "Fy", -float(value), float(place))
        model.analyze_linear()
        self.nodes, self.member, self.span = model.nodes, model.members["beam"], beam.span

    def reactions(self) -> list[float]:
        """Upward reactions at both supports."""
        return [float(self.nodes[name].RxnFY["Combo 1"]) for name in ("near", "far")]

    def sagging(self) -> float:
        """Largest sagging moment, which the solver counts negative."""
        return -float(self.member.min_moment("Mz", "Combo 1"))

    def moment(self, place: float) -> float:
        """Sagging moment at a place."""
        return -float(self.member.moment("Mz", place, "Combo 1"))

    def shear(self) -> float:
        """Largest absolute shear."""
        return max(
            abs(float(self.member.max_shear("Fy", "Combo 1"))), abs(float(self.member.min_shear("Fy", "Combo 1")))
        )

    def deflection(self) -> float:
        """Largest deflection on 2001 stations."""
        return -min(float(self.member.deflection("dy", place)) for place in np.linspace(0.0, self.span, 2001))


@pytest.fixture(scope="module")
def beams() -> list[BeamLoads]:
    """Twelve random beams."""
    generator = np.random.default_rng(20260)
    return [random_beam(generator) for _ in range(12)]


@pytest.fixture(scope="module")
def factors() -> FloatArray:
    """Dead load alone, unfactored: the solver carries the same load."""
    factors = np.zeros((1, len(LoadCase)))
    factors[0, LoadCase.DEAD] = 1.0
    return factors


def test_frame_solver_agrees(beams: list[BeamLoads], factors: FloatArray) -> None:
    """Reactions, extremes of shear, moment and deflection, and moments along the span, of twelve random beams."""
    pytest.importorskip("Pynite", reason="the frame solver PyNiteFEA is not installed")
    forces, (bent, _), ends = envelope(beams, factors), deflection(beams, factors), reactions(beams)
    places = np.array([[0.17, 0.41, 0.66, 0.93]]) * np.array([[beam.span] for beam in beams])
    moments = moment_at(beams, factors, places)
    for row, beam in enumerate(beams):
        solver = Solver(beam)
        assert ends[row, :, LoadCase.DEAD] == pytest.approx(solver.reactions(), rel=1e-6)
        assert forces.shear[row, 0] == pytest.approx(solver.shear(), rel=1e-6)
        assert forces.moment[row, 0] == pytest.approx(solver.sagging(), rel=1e-5)
        assert bent[row, 0] / (E_MODULUS * INERTIA) == pytest.approx(solver.deflection(), rel=1e-5)
        for place, moment in zip(places[row], moments[row, 0], strict=True):
            assert moment == pytest.approx(solver.moment(float(place)), rel=1e-6)
