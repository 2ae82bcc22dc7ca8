"""Simply supported beams under piecewise-linear and point loads, exact, many at once.

Loads become Macaulay terms ``c <x - a>^n``: a line load that begins at a station is a step (n = 0) and a ramp (n = 1),
its end takes both away again, and a point load is an impulse (n = -1). Shear, moment and deflection follow by
raising n:

    V(x) = R - sum c <x - a>^(n+1) / (n+1)!
    M(x) = R x - sum c <x - a>^(n+2) / (n+2)!

Between neighbouring stations the shear is a quadratic, so that its zero, and with it the largest moment, is exact.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from math import factorial

import numpy as np
from numpy.typing import NDArray

from ifcaudit.model.loads import CASE_COUNT, BeamLoads, FloatArray

CHUNK = 64
"""Beams handled together: large enough for vector speed, small enough to stay in the cache."""
SHORTEST_SLOPE = 1e-4
"""Line loads shorter than this are uniform [m]."""
OVER_SUPPORT = 1e-6
"""A point load nearer to a support than this stands over it [m]."""
MOST_STEPS = 60
"""Steps in which halving alone finds a place on the span to rounding."""


@dataclass(frozen=True, slots=True, eq=False)
class PackedLoads:
    """Macaulay terms of several beams, padded to equal numbers with terms that weigh nothing.

    Attributes:
        spans: Shape (beams,) [m].
        stations: Where line loads begin and end, shape (beams, lines) [m].
        steps: Change of intensity there, shape (beams, lines, CASE_COUNT) [N/m].
        ramps: Change of slope there, shape (beams, lines, CASE_COUNT) [N/m²].
        point_stations: Shape (beams, points) [m].
        points: Shape (beams, points, CASE_COUNT) [N].
        reactions: Shape (beams, 2, CASE_COUNT) [N].
    """

    spans: FloatArray
    stations: FloatArray
    steps: FloatArray
    ramps: FloatArray
    point_stations: FloatArray
    points: FloatArray
    reactions: FloatArray

    @property
    def breaks(self) -> FloatArray:
        """Rising stations from 0 to the span between which the loading is smooth, shape (beams, breaks) [m]."""
        ends = np.stack([np.zeros_like(self.spans), self.spans], axis=1)
        inner = np.concatenate([self.stations, self.point_stations], axis=1)
        return np.sort(np.concatenate([ends, np.clip(inner, 0.0, self.spans[:, None])], axis=1), axis=1)


def pack(beams: Sequence[BeamLoads]) -> PackedLoads:
    """Turn the loads of several beams into padded Macaulay terms, with their reactions.

    Example:
        >>> loads = BeamLoads(span=4.0, segment_positions=np.array([[0.0, 4.0]]),
        ...     segment_intensities=np.full((1, 2, CASE_COUNT), 10.0), point_positions=np.zeros(0),
        ...     point_magnitudes=np.zeros((0, CASE_COUNT)))
        >>> pack([loads]).reactions[0, :, 0].tolist()
        [20.0, 20.0]
    """
    spans = np.array([beam.span for beam in beams])
    lines, points = _line_loads(beams), _point_loads(beams)
    total, moment = np.zeros((len(beams), CASE_COUNT)), np.zeros((len(beams), CASE_COUNT))
    for part in (lines, points):
        np.add.at(total, part.rows, part.totals)
        np.add.at(moment, part.rows, part.moments)
    far = moment / spans[:, None]
    return PackedLoads(
        spans=spans,
        stations=lines.table(lines.stations),
        steps=lines.table(lines.terms[0]),
        ramps=lines.table(lines.terms[1]),
        point_stations=points.table(points.stations),
        points=points.table(points.terms[0]),
        reactions=np.stack([total - far, far], axis=1),
    )


@dataclass(frozen=True, slots=True, eq=False)
class _Terms:
    """Loads of one kind of several beams in one list, and the terms they become.

    Attributes:
        beams: Number of beams.
        rows: Beam of each load.
        totals: Of each load, shape (loads, CASE_COUNT) [N].
        moments: About the first support, of the same shape [N·m].
        owners: Beam of each term.
        stations: Where each term begins [m].
        terms: Coefficients by order, each of shape (terms, CASE_COUNT).
    """

    beams: int
    rows: NDArray[np.int64]
    totals: FloatArray
    moments: FloatArray
    owners: NDArray[np.int64]
    stations: FloatArray
    terms: tuple[FloatArray, ...]

    def table(self, values: FloatArray) -> FloatArray:
        """Arrange one value per term in one row per beam, padded with zeros."""
        order = np.argsort(self.owners, kind="stable")
        counts = np.bincount(self.owners, minlength=self.beams)
        columns = np.arange(len(order)) - np.repeat(np.cumsum(counts) - counts, counts)
        result = np.zeros((self.beams, int(counts.max(initial=0)), *values.shape[1:]))
        result[self.owners[order], columns] = values[order]
        return result


def _line_loads(beams: Sequence[BeamLoads]) -> _Terms:
    rows = np.repeat(np.arange(len(beams)), [len(beam.segment_positions) for beam in beams])
    where = np.concatenate([np.zeros((0, 2)), *(beam.segment_positions for beam in beams)])
    what = np.concatenate([np.zeros((0, 2, CASE_COUNT)), *(beam.segment_intensities for beam in beams)])
    length = (where[:, 1] - where[:, 0])[:, None]
    # The slope of a very short load would be lost in rounding: it acts with its mean intensity.
    sloped = length > SHORTEST_SLOPE
    what = np.where(sloped[:, :, None], what, what.mean(axis=1, keepdims=True))
    left, right = what[:, 0], what[:, 1]
    slope = np.divide(right - left, length, out=np.zeros_like(left), where=sloped)
    totals = length * (left + right) / 2.0
    # The moment of a trapezoid about its own start: w_left l²/2 + (w_right - w_left) l²/3.
    about_start = length**2 * (left / 6.0 + right / 3.0)
    return _Terms(
        len(beams),
        rows,
        totals,
        totals * where[:, :1] + about_start,
        np.concatenate([rows, rows]),
        where.T.ravel(),
        (np.concatenate([left, -right]), np.concatenate([slope, -slope])),
    )


def _point_loads(beams: Sequence[BeamLoads]) -> _Terms:
    counts = [len(beam.point_positions) for beam in beams]
    rows = np.repeat(np.arange(len(beams)), counts)
    ends = np.repeat(np.array([beam.span for beam in beams]), counts)
    where = np.concatenate([np.zeros(0), *(beam.point_positions for beam in beams)])
    where = np.where(where < OVER_SUPPORT, 0.0, where)
    where = np.where(where > ends - OVER_SUPPORT, ends, where)
    what = np.concatenate([np.zeros((0, CASE_COUNT)), *(beam.point_magnitudes for beam in beams)])
    return _Terms(len(beams), rows, what, what * where[:, None], rows, where, (what,))


def reactions(beams: Sequence[BeamLoads]) -> FloatArray:
    """Reactions at both supports of each beam, upwards positive.

    Args:
        beams: Loads of each.

    Returns:
        Shape (beams, 2, CASE_COUNT) [N].
    """
    return pack(beams).reactions if beams else np.zeros((0, 2, CASE_COUNT))


@dataclass(frozen=True, slots=True, eq=False)
class _Combined:
    """Packed loads with factors applied: one set of terms per beam and combination."""

    packed: PackedLoads
    steps: FloatArray
    ramps: FloatArray
    points: FloatArray
    left: FloatArray
    right: FloatArray

    def spread(self, positions: FloatArray) -> FloatArray:
        """Repeat places for every combination: (beams, places) becomes (beams, combinations, places)."""
        return np.broadcast_to(positions[:, None, :], (*self.left.shape, positions.shape[1]))

    def integral(self, positions: FloatArray, times: int) -> FloatArray:
        """Load integrated ``times`` times from the left at places of shape (beams, combinations, places).

        ``times``: 1 for shear, 2 for moment, 3 and 4 for slope and deflection; a point load counts where it stands.
        """
        reach = np.maximum(positions[:, :, None, :] - self.packed.stations[:, None, :, None], 0.0)
        lower = _power(reach, times) / factorial(times)
        result = np.einsum("bct,bctp->bcp", self.steps, lower)
        result += np.einsum("bct,bctp->bcp", self.ramps, lower * reach / (times + 1))
        if self.points.shape[2]:
            gap = positions[:, :, None, :] - self.packed.point_stations[:, None, :, None]
            shape = (gap >= 0.0).astype(np.float64) if times == 1 else _power(np.maximum(gap, 0.0), times - 1)
            result += np.einsum("bct,bctp->bcp", self.points, shape / factorial(times - 1))
        return np.asarray(result)

    def moment(self, positions: FloatArray) -> FloatArray:
        """Sagging moment at places of shape (beams, combinations, places)."""
        return self.left[:, :, None] * positions - self.integral(positions, 2)


def _power(value: FloatArray, exponent: int) -> FloatArray:
    result = value
    for _ in range(exponent - 1):
        result = result * value
    return result


def _combine(beams: Sequence[BeamLoads], factors: FloatArray) -> _Combined:
    packed = pack(beams)
    steps, ramps, points, ends = (
        np.einsum("bck,btk->bct", factors, terms)
        for terms in (packed.steps, packed.ramps, packed.points, packed.reactions)
    )
    return _Combined(packed, steps, ramps, points, ends[:, :, 0], ends[:, :, 1])


def _in_chunks(
    beams: Sequence[BeamLoads],
    factors: FloatArray,
    work: Callable[[_Combined, NDArray[np.int64]], tuple[FloatArray, ...]],
    empty: tuple[FloatArray, ...],
) -> tuple[FloatArray, ...]:
    """Do the work on beams of like numbers of loads together, so that little is padded, and restore the order."""
    if not beams:
        return empty
    each = np.broadcast_to(factors, (len(beams), *factors.shape[-2:]))
    order = np.argsort([2 * len(beam.segment_positions) + len(beam.point_positions) for beam in beams], kind="stable")
    parts = []
    for first in range(0, len(order), CHUNK):
        rows = order[first : first + CHUNK]
        parts.append(work(_combine([beams[row] for row in rows], each[rows]), rows))
    back = np.argsort(order, kind="stable")
    return tuple(np.concatenate(column)[back] for column in zip(*parts, strict=True))


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
    none = np.zeros((0, factors.shape[-2]))
    return Forces(*_in_chunks(beams, factors, lambda combined, _: _extremes(combined), (none,) * 5))


def _extremes(combined: _Combined) -> tuple[FloatArray, ...]:
    breaks = combined.spread(combined.packed.breaks)
    after = combined.left[:, :, None] - combined.integral(breaks, 1)
    positions = _peak_candidates(combined, breaks, after)
    moments = combined.moment(positions)
    best = moments.argmax(axis=2)[:, :, None]
    shears = _shears(combined, breaks, after)
    shear_positions = np.concatenate([breaks, breaks], axis=2)
    worst = np.abs(shears).argmax(axis=2)[:, :, None]
    return (
        np.maximum(np.take_along_axis(moments, best, axis=2)[:, :, 0], 0.0),
        np.take_along_axis(positions, best, axis=2)[:, :, 0],
        np.maximum(-moments.min(axis=2), 0.0),
        np.take_along_axis(np.abs(shears), worst, axis=2)[:, :, 0],
        np.take_along_axis(shear_positions, worst, axis=2)[:, :, 0],
    )


def _shears(combined: _Combined, breaks: FloatArray, after: FloatArray) -> FloatArray:
    """Shear just after and just before every break within the beam.

    Nothing of the beam lies before its first support or after its last: what stands over a support loads no section.
    """
    at = breaks[:, :, None, :] == combined.packed.point_stations[:, None, :, None]
    before = after + np.einsum("bct,bctp->bcp", combined.points, at.astype(np.float64))
    is_last = breaks >= combined.packed.spans[:, None, None]
    return np.concatenate([np.where(is_last, before, after), np.where(breaks > 0.0, before, after)], axis=2)


def _peak_candidates(combined: _Combined, breaks: FloatArray, after: FloatArray) -> FloatArray:
    """Every break, and the zero of the shear within each interval, where the moment may peak."""
    load, slope = _intensity_after(combined, breaks)
    width = np.diff(breaks, axis=2)
    zero = _quadratic_zero(-0.5 * slope[:, :, :-1], -load[:, :, :-1], after[:, :, :-1], width)
    return np.concatenate([breaks, breaks[:, :, :-1] + zero], axis=2)


def _intensity_after(combined: _Combined, positions: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Line load and its slope just after each position."""
    reach = positions[:, :, None, :] - combined.packed.stations[:, None, :, None]
    begun = (reach >= 0.0).astype(np.float64)
    load = np.einsum("bct,bctp->bcp", combined.steps, begun)
    load += np.einsum("bct,bctp->bcp", combined.ramps, np.maximum(reach, 0.0))
    return np.asarray(load), np.asarray(np.einsum("bct,bctp->bcp", combined.ramps, begun))


def _quadratic_zero(a: FloatArray, b: FloatArray, c: FloatArray, width: FloatArray) -> FloatArray:
    """First zero of a t² + b t + c within 0..width, else 0; the root that does not cancel is used."""
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
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
        positions: Shape (beams, positions), or (beams, combinations, positions) [m].

    Returns:
        Shape (beams, combinations, positions) [N·m].
    """

    def work(combined: _Combined, rows: NDArray[np.int64]) -> tuple[FloatArray, ...]:
        where = positions[rows]
        return (combined.moment(combined.spread(where) if where.ndim == 2 else where),)

    return _in_chunks(beams, factors, work, (np.zeros((0, factors.shape[-2], positions.shape[-1])),))[0]


def deflection(beams: Sequence[BeamLoads], factors: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Largest deflection times flexural rigidity under each combination, and where it occurs.

    Args:
        beams: Loads of each.
        factors: Shape (combinations, CASE_COUNT), or (beams, combinations, CASE_COUNT).

    Returns:
        Two arrays of shape (beams, combinations): deflection times EI [N·m³] and position [m].
    """
    none = np.zeros((0, factors.shape[-2]))
    values = _in_chunks(beams, factors, lambda combined, _: _largest_deflection(combined), (none, none))
    return values[0], values[1]


def _largest_deflection(combined: _Combined) -> tuple[FloatArray, FloatArray]:
    """Find where the slope vanishes; downward loads on a simple span leave one such place.

    Newton's method, as the slope's own slope is the moment, held between bounds that close in on the place.
    """
    left = combined.left
    spans = np.broadcast_to(combined.packed.spans[:, None], left.shape)
    at_span = combined.integral(spans[:, :, None], 4)[:, :, 0]
    # EI y = slope0 x - R x^3/6 + load integrated four times, and y = 0 at the far support.
    slope0 = (left * spans**3 / 6.0 - at_span) / spans
    low, high, where = np.zeros_like(left), spans, spans / 2.0
    for _ in range(MOST_STEPS):
        slope = slope0 - left * where**2 / 2.0 + combined.integral(where[:, :, None], 3)[:, :, 0]
        low, high = np.where(slope > 0.0, where, low), np.where(slope > 0.0, high, where)
        moment = combined.moment(where[:, :, None])[:, :, 0]
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            next_place = where + slope / moment
        # Where the bounds exclude the step, or there is no moment to divide by, halve instead.
        next_place = np.where((next_place >= low) & (next_place <= high), next_place, 0.5 * (low + high))
        next_place = np.where(slope == 0.0, where, next_place)
        settled = np.abs(next_place - where) <= 1e-10 * spans
        where = next_place
        if settled.all():
            break
    value = slope0 * where - left * where**3 / 6.0 + combined.integral(where[:, :, None], 4)[:, :, 0]
    return value, where
