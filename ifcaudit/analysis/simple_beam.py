"""Simply supported beams under piecewise-linear and point loads, exact, many at once.

Loads become Macaulay terms ``c <x - a>^n``: a line load that begins at a station is a step (n = 0) and a ramp (n = 1),
its end takes both away again, and a point load is an impulse (n = -1). Shear, moment and deflection follow by
raising n:

    V(x) = R - sum c <x - a>^(n+1) / (n+1)!
    M(x) = R x - sum c <x - a>^(n+2) / (n+2)!

Between neighbouring stations the shear is a quadratic, so that its zero, and with it the largest moment, is exact.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ifcaudit.model.loads import CASE_COUNT, BeamLoads, FloatArray

CHUNK = 64
"""Beams handled together: large enough for vector speed, small enough to stay in the cache."""
_FACTORIAL = np.array([1.0, 1.0, 2.0, 6.0, 24.0, 120.0])


def reactions(beams: Sequence[BeamLoads]) -> FloatArray:
    """Reactions at both supports of each beam, upwards positive.

    Args:
        beams: Loads of each.

    Returns:
        Shape (beams, 2, CASE_COUNT) [N].
    """
    result = np.zeros((len(beams), 2, CASE_COUNT))
    for index, beam in enumerate(beams):
        first, last = beam.segment_positions[:, 0], beam.segment_positions[:, 1]
        left, right = beam.segment_intensities[:, 0], beam.segment_intensities[:, 1]
        length = (last - first)[:, None]
        total = length * (left + right) / 2.0
        # The moment of a trapezoid about its own start: w_left l²/2 + (w_right - w_left) l²/3.
        about_start = length**2 * (left / 6.0 + right / 3.0)
        moment = (total * first[:, None] + about_start).sum(axis=0)
        moment = moment + (beam.point_magnitudes * beam.point_positions[:, None]).sum(axis=0)
        result[index, 1] = moment / beam.span
        result[index, 0] = beam.total() - result[index, 1]
    return result


@dataclass(frozen=True, slots=True, eq=False)
class PackedLoads:
    """Macaulay terms of several beams, padded to equal numbers with terms that weigh nothing.

    Attributes:
        spans: Shape (beams,) [m].
        stations: Where terms begin, shape (beams, terms) [m].
        orders: -1 for a point load, 0 for a step, 1 for a ramp, shape (beams, terms).
        coefficients: Shape (beams, terms, CASE_COUNT) [N m^-(n+1)].
        breaks: Rising stations from 0 to the span between which the loading is smooth, shape (beams, breaks) [m].
    """

    spans: FloatArray
    stations: FloatArray
    orders: NDArray[np.int64]
    coefficients: FloatArray
    breaks: FloatArray


def pack(beams: Sequence[BeamLoads]) -> PackedLoads:
    """Turn the loads of several beams into padded Macaulay terms."""
    terms = max(4 * len(beam.segment_positions) + len(beam.point_positions) for beam in beams)
    stations = np.zeros((len(beams), terms))
    orders = np.zeros((len(beams), terms), dtype=np.int64)
    coefficients = np.zeros((len(beams), terms, CASE_COUNT))
    for row, beam in enumerate(beams):
        first, last = beam.segment_positions[:, 0], beam.segment_positions[:, 1]
        left, right = beam.segment_intensities[:, 0], beam.segment_intensities[:, 1]
        slope = (right - left) / (last - first)[:, None]
        where = np.concatenate([first, first, last, last, beam.point_positions])
        count = len(first)
        stations[row, : len(where)] = where
        orders[row, : len(where)] = np.concatenate(
            [np.tile(np.repeat([0, 1], count), 2), np.full(len(beam.point_positions), -1)]
        )
        coefficients[row, : len(where)] = np.concatenate([left, slope, -right, -slope, beam.point_magnitudes])
    spans = np.array([beam.span for beam in beams])
    inner = np.clip(stations, 0.0, spans[:, None])
    breaks = np.sort(np.concatenate([np.zeros((len(beams), 1)), inner, spans[:, None]], axis=1), axis=1)
    return PackedLoads(spans=spans, stations=stations, orders=orders, coefficients=coefficients, breaks=breaks)


def _integral(packed: PackedLoads, weights: FloatArray, positions: FloatArray, times: int) -> FloatArray:
    """Load integrated ``times`` times from the left, per beam, combination and position.

    Args:
        packed: Terms.
        weights: Terms times factors, shape (beams, combinations, terms).
        positions: Shape (beams, combinations, positions) [m]; a point load counts where it stands.
        times: 1 for shear, 2 for moment, 3 and 4 for slope and deflection.
    """
    power = packed.orders + times
    reach = positions[:, :, None, :] - packed.stations[:, None, :, None]
    inside = np.where(reach >= 0.0, reach, 0.0)
    exponent = power[:, None, :, None]
    shape = np.where(exponent == 0, (reach >= 0.0).astype(np.float64), inside**exponent) / _FACTORIAL[exponent]
    return np.asarray(np.einsum("bct,bctp->bcp", weights, shape))


@dataclass(frozen=True, slots=True, eq=False)
class Forces:
    """Extremes of each beam under each combination, shapes (beams, combinations).

    Attributes:
        moment: Largest sagging moment [N·m].
        moment_position: Where it occurs, from the first support [m].
        hogging: Largest hogging moment, zero or positive [N·m].
        shear: Largest absolute shear [N].
        shear_position: Support or station at which it occurs [m].
    """

    moment: FloatArray
    moment_position: FloatArray
    hogging: FloatArray
    shear: FloatArray
    shear_position: FloatArray


def envelope(beams: Sequence[BeamLoads], factors: FloatArray) -> Forces:
    """Largest moments and shears of each beam under each combination.

    Args:
        beams: Loads of each.
        factors: Load factors, shape (combinations, CASE_COUNT), or (beams, combinations, CASE_COUNT).

    Returns:
        Exact extremes.
    """
    parts = [_chunk_envelope(chunk, part) for chunk, part in _chunks(beams, factors)]
    if not parts:
        empty = np.zeros((0, factors.shape[-2]))
        return Forces(empty, empty, empty, empty, empty)
    return Forces(*(np.concatenate([part[column] for part in parts]) for column in range(5)))


def _chunks(beams: Sequence[BeamLoads], factors: FloatArray) -> Iterator[tuple[Sequence[BeamLoads], FloatArray]]:
    each = np.broadcast_to(factors, (len(beams), *factors.shape[-2:]))
    for first in range(0, len(beams), CHUNK):
        yield beams[first : first + CHUNK], each[first : first + CHUNK]


def _support_reactions(beams: Sequence[BeamLoads], factors: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Reactions per beam and combination, shapes (beams, combinations)."""
    both = np.einsum("bck,bsk->bcs", factors, reactions(beams))
    return both[:, :, 0], both[:, :, 1]


def _chunk_envelope(beams: Sequence[BeamLoads], factors: FloatArray) -> tuple[FloatArray, ...]:
    packed = pack(beams)
    weights = np.einsum("bck,btk->bct", factors, packed.coefficients)
    left, right = _support_reactions(beams, factors)
    positions, moments = _moment_candidates(packed, weights, left)
    best = moments.argmax(axis=2)[:, :, None]
    shears, shear_positions = _shear_candidates(packed, weights, left, right)
    worst = np.abs(shears).argmax(axis=2)[:, :, None]
    return (
        np.maximum(np.take_along_axis(moments, best, axis=2)[:, :, 0], 0.0),
        np.take_along_axis(positions, best, axis=2)[:, :, 0],
        np.maximum(-moments.min(axis=2), 0.0),
        np.take_along_axis(np.abs(shears), worst, axis=2)[:, :, 0],
        np.take_along_axis(shear_positions, worst, axis=2)[:, :, 0],
    )


def _shear_candidates(
    packed: PackedLoads, weights: FloatArray, left: FloatArray, right: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Shear just inside both supports and on both sides of every break."""
    combinations = weights.shape[1]
    breaks = np.broadcast_to(packed.breaks[:, None, :], (len(packed.spans), combinations, packed.breaks.shape[1]))
    after = left[:, :, None] - _integral(packed, weights, breaks, 1)
    before = after + _jumps(packed, weights, breaks)
    ends = np.stack([left, -right], axis=2)
    end_positions = np.stack([np.zeros_like(left), np.broadcast_to(packed.spans[:, None], left.shape)], axis=2)
    return np.concatenate([ends, after, before], axis=2), np.concatenate([end_positions, breaks, breaks], axis=2)


def _jumps(packed: PackedLoads, weights: FloatArray, positions: FloatArray) -> FloatArray:
    """Sum of the point loads standing exactly at each position."""
    at = (positions[:, :, None, :] == packed.stations[:, None, :, None]) & (packed.orders == -1)[:, None, :, None]
    return np.asarray(np.einsum("bct,bctp->bcp", weights, at.astype(np.float64)))


def _moment_candidates(packed: PackedLoads, weights: FloatArray, left: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Moments at every break and at the zero of the shear within each interval."""
    combinations = weights.shape[1]
    shape = (len(packed.spans), combinations, packed.breaks.shape[1])
    breaks = np.broadcast_to(packed.breaks[:, None, :], shape)
    after = left[:, :, None] - _integral(packed, weights, breaks, 1)
    load, slope = _intensity_after(packed, weights, breaks)
    width = np.diff(breaks, axis=2)
    zero = _quadratic_zero(-0.5 * slope[:, :, :-1], -load[:, :, :-1], after[:, :, :-1], width)
    positions = np.concatenate([breaks, breaks[:, :, :-1] + zero], axis=2)
    moments = left[:, :, None] * positions - _integral(packed, weights, positions, 2)
    return positions, moments


def _intensity_after(packed: PackedLoads, weights: FloatArray, positions: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Line load and its slope just after each position."""
    begun = positions[:, :, None, :] >= packed.stations[:, None, :, None]
    reach = positions[:, :, None, :] - packed.stations[:, None, :, None]
    step = (packed.orders == 0)[:, None, :, None] & begun
    ramp = (packed.orders == 1)[:, None, :, None] & begun
    load = np.einsum("bct,bctp->bcp", weights, step + np.where(ramp, reach, 0.0))
    return load, np.einsum("bct,bctp->bcp", weights, ramp.astype(np.float64))


def _quadratic_zero(a: FloatArray, b: FloatArray, c: FloatArray, width: FloatArray) -> FloatArray:
    """First zero of a t² + b t + c within 0..width, else 0; the root that does not cancel is used."""
    with np.errstate(divide="ignore", invalid="ignore"):
        root = np.sqrt(np.maximum(b * b - 4.0 * a * c, 0.0))
        q = -0.5 * (b + np.where(b >= 0.0, root, -root))
        first, second = c / q, q / a
    choices = np.stack([first, second])
    valid = np.isfinite(choices) & (choices >= 0.0) & (choices <= width)
    smallest = np.where(valid, choices, np.inf).min(axis=0)
    return np.where(np.isfinite(smallest), smallest, 0.0)


def moment_at(beams: Sequence[BeamLoads], factors: FloatArray, positions: FloatArray) -> FloatArray:
    """Moments at given positions.

    Args:
        beams: Loads of each.
        factors: Shape (combinations, CASE_COUNT), or (beams, combinations, CASE_COUNT).
        positions: Shape (beams, positions) [m].

    Returns:
        Shape (beams, combinations, positions) [N·m].
    """
    parts = []
    row = 0
    for chunk, part in _chunks(beams, factors):
        packed = pack(chunk)
        weights = np.einsum("bck,btk->bct", part, packed.coefficients)
        left, _ = _support_reactions(chunk, part)
        where = positions[row : row + len(chunk)][:, None, :]
        where = np.broadcast_to(where, (len(chunk), part.shape[1], positions.shape[1]))
        parts.append(left[:, :, None] * where - _integral(packed, weights, where, 2))
        row += len(chunk)
    return np.concatenate(parts) if parts else np.zeros((0, factors.shape[-2], positions.shape[-1]))


def deflection(beams: Sequence[BeamLoads], factors: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Largest deflection times flexural rigidity under each combination, and where it occurs.

    Args:
        beams: Loads of each.
        factors: Shape (combinations, CASE_COUNT), or (beams, combinations, CASE_COUNT).

    Returns:
        Two arrays of shape (beams, combinations): deflection times EI [N·m³] and position [m].
    """
    parts = [_chunk_deflection(chunk, part) for chunk, part in _chunks(beams, factors)]
    if not parts:
        empty = np.zeros((0, factors.shape[-2]))
        return empty, empty
    return np.concatenate([part[0] for part in parts]), np.concatenate([part[1] for part in parts])


def _chunk_deflection(beams: Sequence[BeamLoads], factors: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Find where the slope vanishes by bisection; downward loads on a simple span leave one such place."""
    packed = pack(beams)
    weights = np.einsum("bck,btk->bct", factors, packed.coefficients)
    left, _ = _support_reactions(beams, factors)
    spans = np.broadcast_to(packed.spans[:, None], left.shape)
    at_span = _integral(packed, weights, spans[:, :, None], 4)[:, :, 0]
    # EI y = slope0 x - R x^3/6 + load integrated four times, and y = 0 at the far support.
    slope0 = (left * spans**3 / 6.0 - at_span) / spans
    low, high = np.zeros_like(left), spans.copy()
    for _ in range(60):
        middle = 0.5 * (low + high)
        slope = slope0 - left * middle**2 / 2.0 + _integral(packed, weights, middle[:, :, None], 3)[:, :, 0]
        low, high = np.where(slope > 0.0, middle, low), np.where(slope > 0.0, high, middle)
    where = 0.5 * (low + high)
    value = slope0 * where - left * where**3 / 6.0 + _integral(packed, weights, where[:, :, None], 4)[:, :, 0]
    return value, where
