"""Takes loads down: slab strips to beams and walls, secondary beams to primary ones, those to columns and walls.

Secondary beams are solved before the beams that carry them; their reactions, per load case, become point loads. Every
newton is accounted for: it reaches a column or wall, or it is listed as reaching nothing.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import shapely
from shapely import LineString

from ifcaudit.analysis.simple_beam import reactions
from ifcaudit.floor.bearing import BearingLine
from ifcaudit.floor.line_load import line_load
from ifcaudit.floor.stacking import Stack
from ifcaudit.loadpath.area_loads import AreaLoad
from ifcaudit.loadpath.beam_loads import LoadCollector, clip_segments, segment_totals, with_uniform
from ifcaudit.loadpath.members import Member
from ifcaudit.model.audit import LoadBalance
from ifcaudit.model.building import Beam
from ifcaudit.model.framing import Carrier, EndSupport, SlabLayout, Strip
from ifcaudit.model.loads import CASE_COUNT, BeamLoads, FloatArray, LoadCase
from ifcaudit.units import standard_gravity

LIVE_CASES = (LoadCase.LIVE, LoadCase.LIVE_UNREDUCED, LoadCase.ROOF_LIVE)
"""Cases that make up the live load of the tables."""
LEAST_SPAN = 0.05
"""Distance between support centres below which there is no span [m]."""
UNASSIGNED_REMARK = 0.5
"""Area of a slab part without support above which the beams around it are not called adequate [m²]."""
NEXT_TO = 0.5
"""Distance up to which a slab part lies next to a beam; the nearest two are always taken to [m]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class LoadedSlab:
    """One structural slab with its loads, the lines it rests on and how it is shared out."""

    stack: Stack
    load: AreaLoad
    lines: tuple[BearingLine, ...]
    layout: SlabLayout


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BeamLoading:
    """What loads one member, and what is known about it.

    Attributes:
        member: The member.
        loads: On its one simple span, without its self-weight; ``None`` when it does not span simply.
        self_weight: [N/m], zero while its section is unknown.
        totals: Unfactored total per case between its ends, self-weight included, shape (CASE_COUNT,) [N].
        tributary_area: Floor area whose load reaches it [m²].
        tributary_width: As an engineer writes it down [m]; zero when no floor load reaches it.
        braced: Stations from the first support at which its top flange is held [m].
        continuously_braced: A slab holds the top flange along the whole span.
        slabs: Slabs that load it, directly or through beams it carries.
        problem: Why it cannot be analysed as a simple span; empty when it can.
        uncertain: Why its loads may be incomplete; adequate then means nothing.
        findings: Remarks for the engineer.
    """

    member: Member
    loads: BeamLoads | None
    self_weight: float
    totals: FloatArray
    tributary_area: float
    tributary_width: float
    braced: tuple[float, ...]
    continuously_braced: bool
    slabs: tuple[LoadedSlab, ...]
    problem: str
    uncertain: tuple[str, ...]
    findings: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Takedown:
    """Loads of all members, in their order, and the balance of the whole."""

    beams: tuple[BeamLoading, ...]
    balance: LoadBalance


class _Path:
    """One member while loads arrive."""

    def __init__(self, member: Member) -> None:
        framed = member.framed
        self.member = member
        self.collector = LoadCollector()
        self.supports: list[EndSupport] = [
            support for support in (framed.start, *framed.interior, framed.end) if support is not None
        ]
        self.stations = self._support_stations()
        self.self_weight = (member.mass_per_length or 0.0) * standard_gravity() * _slope_ratio(member)
        self.direct_area = 0.0
        self.loaded: list[tuple[float, float]] = []
        self.side_spans: dict[int, list[float]] = {1: [], -1: []}
        self.covered: list[tuple[float, float]] = []
        self.framing_points: list[float] = []
        self.slabs: dict[str, LoadedSlab] = {}
        self.uncertain: list[str] = []
        self.findings: list[str] = []
        self.problem = _support_problem(member)
        self.spans: list[BeamLoads] = []

    def _support_stations(self) -> list[float]:
        """Stations of the supports, rising; an end that nothing carries gets a stand-in, so that loads have a way."""
        length = self.member.beam.plan_length
        stations: list[float] = []
        for station in sorted(support.station for support in self.supports):
            if not stations or station - stations[-1] > LEAST_SPAN:
                stations.append(station)
        if not stations:
            return [0.0, length]
        if len(stations) == 1:
            return [0.0, stations[0]] if stations[0] > length / 2 else [stations[0], length]
        return stations

    @property
    def span(self) -> float:
        return self.stations[-1] - self.stations[0]

    @property
    def own_weight(self) -> FloatArray:
        """Self-weight as an intensity per case [N/m]."""
        intensity = np.zeros(CASE_COUNT)
        intensity[LoadCase.DEAD] = self.self_weight
        return intensity

    def support_at(self, station: float) -> EndSupport | None:
        return next((support for support in self.supports if support.station == station), None)


def _slope_ratio(member: Member) -> float:
    beam = member.beam
    return beam.length / beam.plan_length


def _support_problem(member: Member) -> str:
    """Why this member is no simple span; each text says what would settle it."""
    framed = member.framed
    if framed.bedded:
        return f"lies along {framed.bedded}: it does not span freely, and openings below it are not analysed"
    missing = [
        text
        for label, support, gap, inner in (
            ("start", framed.start, framed.start_gap, framed.interior[:1]),
            ("end", framed.end, framed.end_gap, framed.interior[-1:]),
        )
        if support is None
        for text in [_overhang(framed.beam, label, inner[0]) if inner else f"nothing carries its {label} ({gap})"]
    ]
    if missing:
        remedy = (
            "only simple spans are analysed; check it by hand"
            if framed.interior
            else "model the support, or move the end onto it"
        )
        return f"{'; '.join(missing)}: {remedy}"
    if framed.interior:
        names = ", ".join(support.name or support.global_id for support in framed.interior)
        return (
            f"continuous over {names}: only simple spans are analysed; model one beam per span if it is not continuous"
        )
    if framed.standing:
        return f"{', '.join(framed.standing)} stands on it: its load is not taken down; check this transfer by hand"
    if framed.last_station - framed.first_station < LEAST_SPAN:
        return "its two supports coincide: check the model at its ends"
    return ""


def _overhang(beam: Beam, label: str, support: EndSupport) -> str:
    reach = support.station if label == "start" else beam.plan_length - support.station
    return (
        f"its {label} overhangs (by {reach:.2f} m beyond {support.carrier.value} {support.name or support.global_id})"
    )


def take_down(members: Sequence[Member], floors: Sequence[LoadedSlab], doubts: Mapping[str, Sequence[str]]) -> Takedown:
    """Carry every load to columns and walls.

    Args:
        members: Load-carrying candidates.
        floors: Structural slabs, laid out.
        doubts: GlobalId of a beam -> why its loads may be incomplete.
    """
    paths = {member.beam.global_id: _Path(member) for member in members}
    ledger = _Ledger()
    for floor in floors:
        _load_from_slab(floor, paths, ledger)
    for path in paths.values():
        path.uncertain.extend(doubts.get(path.member.beam.global_id, ()))
        ledger.apply_self_weight(path)
    for level in _levels(paths, ledger):
        _solve_level(level, paths, ledger)
    return Takedown(beams=tuple(_result(path) for path in paths.values()), balance=ledger.balance())


class _Ledger:
    """Sums of what is applied, what arrives, and what reaches nothing, per case."""

    def __init__(self) -> None:
        self.applied = np.zeros(CASE_COUNT)
        self.arrived = np.zeros(CASE_COUNT)
        self.stranded = np.zeros(CASE_COUNT)
        self.slab_area = 0.0
        self.unassigned_area = 0.0

    def apply_self_weight(self, path: _Path) -> None:
        self.applied[LoadCase.DEAD] += path.self_weight * path.span

    def balance(self) -> LoadBalance:
        live = list(LIVE_CASES)
        return LoadBalance(
            dead_applied=float(self.applied[LoadCase.DEAD]),
            dead_reaching_supports=float(self.arrived[LoadCase.DEAD]),
            live_applied=float(self.applied[live].sum()),
            live_reaching_supports=float(self.arrived[live].sum()),
            slab_area=self.slab_area,
            assigned_area=self.slab_area - self.unassigned_area,
            unassigned_area=self.unassigned_area,
            dead_unsupported=float(self.stranded[LoadCase.DEAD]),
            live_unsupported=float(self.stranded[live].sum()),
        )


def _load_from_slab(floor: LoadedSlab, paths: Mapping[str, _Path], ledger: _Ledger) -> None:
    """Share one slab out; what no support receives is stranded, and the beams beside it are uncertain."""
    slab, load, layout = floor.stack.slab, floor.load, floor.layout
    ledger.applied += load.pressures * slab.plan.area
    ledger.applied[LoadCase.DEAD] += sum(patch.dead * patch.plan.area for patch in load.patches)
    ledger.slab_area += slab.plan.area
    bearing = {line.line.global_id: line for line in floor.lines}
    for line in floor.lines:
        path = paths.get(line.line.global_id)
        if path is not None:
            path.covered.extend(line.covered)
            if line.finding:
                path.findings.append(line.finding)
    shapely.prepare([patch.plan for patch in load.patches])
    for strip in layout.strips:
        if strip.carrier is Carrier.WALL:
            ledger.arrived += _total(strip.polygon, load)
        else:
            _load_from_strip(strip, floor, bearing[strip.support_id], paths[strip.support_id])
    for part in layout.unassigned:
        ledger.stranded += _total(part, load)
        ledger.unassigned_area += part.area
        if part.area > UNASSIGNED_REMARK:
            _mark_uncertain_beside(part, floor, paths)


def _total(polygon: shapely.Polygon | shapely.MultiPolygon, load: AreaLoad) -> FloatArray:
    total = load.pressures * polygon.area
    for patch in load.patches:
        total[LoadCase.DEAD] += patch.dead * patch.plan.intersection(polygon).area
    return np.asarray(total)


def _mark_uncertain_beside(
    part: shapely.Polygon | shapely.MultiPolygon, floor: LoadedSlab, paths: Mapping[str, _Path]
) -> None:
    name = floor.stack.slab.name or floor.stack.slab.global_id
    lines = [bearing.line for bearing in floor.lines]
    distances = [part.distance(LineString([line.start, line.end])) for line in lines]
    reach = max([NEXT_TO, *sorted(distances)[1:2]])
    for line, distance in zip(lines, distances, strict=True):
        path = paths.get(line.global_id)
        if path is not None and distance <= reach:
            path.uncertain.append(f"{part.area:.1f} m² of slab {name} beside it rests on nothing")


def _load_from_strip(strip: Strip, floor: LoadedSlab, bearing: BearingLine, path: _Path) -> None:
    pressures, load = floor.load.pressures.copy(), floor.load
    partial = []
    for patch in load.patches:
        if patch.plan.covers(strip.polygon):
            pressures[LoadCase.DEAD] += patch.dead
        else:
            common = patch.plan.intersection(strip.polygon)
            if common.area > 1e-9:
                partial.append((common, patch.dead))
    spread = line_load(strip.polygon, strip.direction, bearing.line)
    positions = spread.positions + bearing.origin
    path.collector.add_segments(positions, spread.widths[:, :, None] * pressures)
    for common, dead in partial:
        extra = line_load(common, strip.direction, bearing.line)
        weight = np.zeros(CASE_COUNT)
        weight[LoadCase.DEAD] = dead
        path.collector.add_segments(extra.positions + bearing.origin, extra.widths[:, :, None] * weight)
    inside, widths = clip_segments(positions, spread.widths[:, :, None], path.stations[0], path.stations[-1])
    path.direct_area += float(segment_totals(inside, widths).sum())
    path.loaded.extend((float(first), float(last)) for first, last in inside)
    path.slabs[floor.stack.slab.global_id] = floor
    if strip.overhang:
        path.findings.append(f"carries {strip.polygon.area:.1f} m² of slab that has this one support only")


def _levels(paths: Mapping[str, _Path], ledger: _Ledger) -> list[list[_Path]]:
    """Order members so that whatever is carried comes before what carries it; loops are named and left out."""
    waiting = dict.fromkeys(paths, 0)
    carriers = {
        key: {support.global_id for support in path.supports if support.carrier is Carrier.BEAM}
        for key, path in paths.items()
    }
    for targets in carriers.values():
        for target in targets:
            waiting[target] += 1
    ready = [key for key, count in waiting.items() if count == 0]
    levels = []
    while ready:
        levels.append([paths[key] for key in ready])
        following = []
        for key in ready:
            waiting.pop(key)
            for target in sorted(carriers[key]):
                waiting[target] -= 1
                if waiting[target] == 0:
                    following.append(target)
        ready = following
    _name_loops([paths[key] for key in waiting], paths, ledger)
    return levels


def _name_loops(stuck: Sequence[_Path], paths: Mapping[str, _Path], ledger: _Ledger) -> None:
    """Members in a loop, or carrying one, cannot be solved: their loads are stranded."""
    names = ", ".join(sorted(path.member.beam.name or path.member.beam.global_id for path in stuck)[:6])
    for path in stuck:
        path.problem = path.problem or f"beams carry each other in a loop ({names}): check which one runs through"
        path.spans = path.collector.between(path.stations)
        for span in path.spans:
            ledger.stranded += with_uniform(span, path.own_weight).total()
        ledger.stranded += sum(path.collector.beyond(path.stations[0], path.stations[-1]))
        _pass_on_doubt(path, paths)


def _solve_level(level: Sequence[_Path], paths: Mapping[str, _Path], ledger: _Ledger) -> None:
    """Solve members of one level together and hand their reactions on."""
    for path in level:
        path.spans = path.collector.between(path.stations)
    results = reactions([with_uniform(span, path.own_weight) for path in level for span in path.spans])
    row = 0
    for path in level:
        at_supports: dict[int, FloatArray] = defaultdict(lambda: np.zeros(CASE_COUNT))
        for index in range(len(path.spans)):
            at_supports[index] = at_supports[index] + results[row, 0]
            at_supports[index + 1] = at_supports[index + 1] + results[row, 1]
            row += 1
        before, after = path.collector.beyond(path.stations[0], path.stations[-1])
        at_supports[0] = at_supports[0] + before
        at_supports[len(path.spans)] = at_supports[len(path.spans)] + after
        for index, station in enumerate(path.stations):
            _hand_on(path, path.support_at(station), at_supports[index], paths, ledger)
        _pass_on_doubt(path, paths)


def _hand_on(
    path: _Path, support: EndSupport | None, reaction: FloatArray, paths: Mapping[str, _Path], ledger: _Ledger
) -> None:
    if support is None:
        ledger.stranded += reaction
    elif support.carrier is not Carrier.BEAM:
        ledger.arrived += reaction
    else:
        carrier = paths[support.global_id]
        carrier.collector.add_point(support.station_on_carrier, reaction)
        carrier.framing_points.append(support.station_on_carrier)
        if reaction[LoadCase.AREA] > 0.0:
            carrier.side_spans[_side_of(path.member, carrier.member)].append(path.span)
        carrier.slabs.update(path.slabs)


def _pass_on_doubt(path: _Path, paths: Mapping[str, _Path]) -> None:
    """Whatever makes the reactions of a member doubtful makes the loads of its carriers doubtful."""
    member = path.member
    name = member.beam.name or member.beam.global_id
    reasons = []
    if path.problem:
        reasons.append(f"it carries {name}, whose reactions are not known ({path.problem.split(':')[0]})")
    elif path.uncertain:
        reasons.append(f"it carries {name}, whose loads may be incomplete")
    if member.mass_per_length is None:
        reasons.append(f"it carries {name}, whose weight is not known")
    for support in path.supports:
        if support.carrier is Carrier.BEAM and support.global_id in paths:
            paths[support.global_id].uncertain.extend(reasons)


def _side_of(carried: Member, carrier: Member) -> int:
    """1 when the carried beam lies left of its carrier, seen along the carrier's axis, else -1."""
    along, beam = carrier.beam, carried.beam
    dx, dy = along.end[0] - along.start[0], along.end[1] - along.start[1]
    x, y = 0.5 * (beam.start[0] + beam.end[0]), 0.5 * (beam.start[1] + beam.end[1])
    return 1 if dx * (y - along.start[1]) - dy * (x - along.start[0]) > 0.0 else -1


def _result(path: _Path) -> BeamLoading:
    totals = np.sum([with_uniform(span, path.own_weight).total() for span in path.spans], axis=0)
    first, last = path.stations[0], path.stations[-1]
    loads = path.spans[0] if not path.problem and len(path.spans) == 1 else None
    continuous, braced = _bracing(path, first, last)
    return BeamLoading(
        member=path.member,
        loads=loads,
        self_weight=path.self_weight,
        totals=np.asarray(totals),
        tributary_area=float(totals[LoadCase.AREA]),
        tributary_width=_tributary_width(path),
        braced=braced,
        continuously_braced=continuous,
        slabs=tuple(path.slabs.values()),
        problem=path.problem,
        uncertain=tuple(dict.fromkeys(path.uncertain)),
        findings=tuple(dict.fromkeys(path.findings)),
    )


SHORT_STRETCH = 0.05
"""Part of a girder's span below which slab lying directly on it says nothing about its width."""


def _tributary_width(path: _Path) -> float:
    """Direct area over its loaded length, plus half the mean length of the beams carried on either side."""
    width = sum(sum(spans) / len(spans) / 2.0 for spans in path.side_spans.values() if spans)
    length = sum(last - first for first, last in _merged(path.loaded))
    if length > (SHORT_STRETCH * path.span if width > 0.0 else 0.0):
        width += path.direct_area / length
    return width


def _merged(stretches: Sequence[tuple[float, float]], joint: float = 1e-6) -> list[tuple[float, float]]:
    merged: list[tuple[float, float]] = []
    for first, last in sorted(stretches):
        if merged and first <= merged[-1][1] + joint:
            merged[-1] = (merged[-1][0], max(merged[-1][1], last))
        else:
            merged.append((first, last))
    return merged


BRACED_EVERY = 0.5
"""Spacing of the bracing points that stand for a slab holding part of a span [m]."""
BARE_LENGTH = 0.3
"""Length at a support, or between two slabs, that may lie bare before a span is no longer held continuously [m]."""


def _bracing(path: _Path, first: float, last: float) -> tuple[bool, tuple[float, ...]]:
    """Where the top flange is held: all along, or at the beams framing in and along the stretches a slab covers."""
    stretches = [
        (max(start, first), min(end, last))
        for start, end in _merged(path.covered, BARE_LENGTH)
        if min(end, last) > max(start, first)
    ]
    if len(stretches) == 1 and stretches[0][0] - first <= BARE_LENGTH and last - stretches[0][1] <= BARE_LENGTH:
        return True, ()
    points = {round(point - first, 6) for point in path.framing_points}
    for start, end in stretches:
        count = max(2, int(np.ceil((end - start) / BRACED_EVERY)) + 1)
        points.update(round(float(point) - first, 6) for point in np.linspace(start, end, count))
    return False, tuple(sorted(point for point in points if 1e-3 < point < last - first - 1e-3))
