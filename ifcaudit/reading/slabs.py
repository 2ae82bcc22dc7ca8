"""Slabs and roofs: net outline in plan, levels, slope and layers."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import hypot, nan
from typing import Any

import shapely
from shapely import Polygon

from ifcaudit.model.building import Layer, PlanArea, Slab
from ifcaudit.model.material import MaterialText
from ifcaudit.reading.bodies import Bodies, HalfSpace, Mesh, Prism, Unreadable, plan_footprint, z_range
from ifcaudit.reading.ifc_file import Model
from ifcaudit.reading.malformed import MALFORMED
from ifcaudit.reading.materials import MaterialLayer
from ifcaudit.reading.placements import Placements
from ifcaudit.reading.plates import (
    UNCUT,
    Extrusion,
    Plate,
    centre_of,
    clean_area,
    group_plates,
    merge_plates,
    plan_of_mesh,
    plates_of_extrusion,
    plates_of_mesh,
    touches,
    with_finding,
)
from ifcaudit.reading.relations import Relations
from ifcaudit.reading.slab_names import floor_unit_name, on_grade_name, roof_name

_PART_CLASSES = ("IfcBuildingElementPart", "IfcPlate", "IfcCovering", "IfcBuildingElementProxy", "IfcSlab")
_THROUGH = 0.005  # an opening that stops this far from a face still goes through [m]
_THROUGH_SHARE = 0.95  # or one that takes this share of the thickness
_LAYER_TOLERANCE = 0.02  # agreement of layers and solid, as a share of the thickness
_UNIT_WIDTH = 3.2  # widest precast unit that travels by road [m] (common practice, no source)
_UNIT_PROPORTION = 1.5  # a unit is longer than wide by at least this
_GROUND_TYPES = {"BASESLAB", "PAVING", "SIDEWALK", "APPROACH_SLAB"}


@dataclass(frozen=True, slots=True, kw_only=True)
class _Piece:
    """A plate with the material of the part it came from."""

    plate: Plate
    material: MaterialText


@dataclass(frozen=True, slots=True, kw_only=True)
class _Opening:
    """An opening as a block."""

    name: str
    area: PlanArea
    bottom: float
    top: float
    recess: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class _Nature:
    """What kind of slab it is, and the remarks that go with an answer found in a name only."""

    roof: bool
    on_grade: bool
    unit_name: str
    findings: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Context:
    """What reading a slab needs, at hand."""

    model: Model
    placements: Placements
    bodies: Bodies
    relations: Relations


def read_slabs(model: Model, placements: Placements, bodies: Bodies, relations: Relations) -> tuple[Slab, ...]:
    """Read every slab and roof of a model, by instance number.

    A body whose top has several planes (a gable drawn as one roof) gives one record per plane; the GlobalIds of the
    second and following ones carry ``:2``, ``:3`` …, so that they stay distinct. A roof that is aggregated from
    slabs is represented by its slabs.

    Args:
        model: The opened file.
        placements: World placements.
        bodies: Solids in world coordinates.
        relations: What belongs to what.

    Returns:
        One or more records per element; an unreadable one has an empty plan and says why.
    """
    context = _Context(model=model, placements=placements, bodies=bodies, relations=relations)
    elements = {element.id(): element for named in ("IfcSlab", "IfcRoof") for element in model.file.by_type(named)}
    wanted = [elements[key] for key in sorted(elements) if not _represented_elsewhere(context, elements[key])]
    return tuple(slab for element in wanted for slab in _read_safely(context, element))


def _read_safely(context: _Context, element: Any) -> tuple[Slab, ...]:
    """Read one element; whatever is malformed in it stays its own."""
    try:
        return _read(context, element)
    except MALFORMED as error:
        return (
            Slab(
                global_id=str(context.model.get(element, "GlobalId")),
                entity_id=element.id(),
                ifc_class=element.is_a(),
                name=str(context.model.get(element, "Name") or "").strip(),
                storey=context.relations.storey_of(element.id()),
                plan=Polygon(),
                gross_area=0.0,
                top=nan,
                bottom=nan,
                unreadable=f"it is malformed ({error}); repair or export the model again",
            ),
        )


def _represented_elsewhere(context: _Context, element: Any) -> bool:
    """Tell whether another record stands for this element: its whole where that carries the body, or its slabs."""
    if element.is_a("IfcRoof"):
        parts = context.relations.parts_of(element.id())
        return not _has_body(context, element) and any(part.is_a("IfcSlab") for part in parts)
    whole = context.relations.parent_of(element.id())
    if whole is None or whole.id() == element.id():
        return False
    return bool(whole.is_a("IfcSlab")) or bool(whole.is_a("IfcRoof") and _has_body(context, whole))


def _has_body(context: _Context, element: Any) -> bool:
    return any(not isinstance(body, Unreadable) for body in context.bodies.of(element))


def _read(context: _Context, element: Any) -> tuple[Slab, ...]:
    pieces, problems = _pieces(context, element)
    groups = [[pieces[k] for k in group] for group in group_plates([piece.plate for piece in pieces])]
    nature = _nature(context, element)
    if not groups:
        return (_unreadable(context, element, nature, "; ".join(dict.fromkeys(problems))),)
    openings, opening_problems = _openings(context, element)
    slabs: list[Slab] = []
    merged = [(merge_plates([piece.plate for piece in group]), group) for group in groups]
    for plate, group in sorted(merged, key=lambda pair: -pair[0].plan.area):
        net, opening_notes = _take_out(plate, openings)
        if net.is_empty:
            continue
        layers, layer_notes = _layers(context, element, plate, group)
        notes = (*plate.findings, *problems, *opening_problems, *opening_notes, *layer_notes, *nature.findings)
        slabs.append(_slab(context, element, len(slabs) + 1, plate, net, layers, nature, notes))
    if slabs:
        return tuple(slabs)
    return (_unreadable(context, element, nature, "its openings leave nothing of its outline"),)


def _slab(
    context: _Context,
    element: Any,
    number: int,
    plate: Plate,
    net: PlanArea,
    layers: tuple[Layer, ...],
    nature: _Nature,
    notes: Sequence[str],
) -> Slab:
    suffix = f":{number}" if number > 1 else ""
    return Slab(
        global_id=f"{context.model.get(element, 'GlobalId')}{suffix}",
        entity_id=element.id(),
        ifc_class=element.is_a(),
        name=_text(context.model, element, "Name"),
        storey=context.relations.storey_of(element.id()),
        plan=net,
        gross_area=float(plate.plan.area),
        top=plate.top,
        bottom=plate.bottom,
        gradient=plate.gradient,
        reference=plate.reference,
        layers=layers,
        roof=nature.roof,
        on_grade=nature.on_grade,
        floor_unit=bool(nature.unit_name) and _unit_shaped(plate.plan),
        findings=tuple(dict.fromkeys(notes)),
    )


def _unreadable(context: _Context, element: Any, nature: _Nature, reason: str) -> Slab:
    """A record without an outline; its level is that of its placement, where it has one."""
    transform = context.placements.of(context.model.get(element, "ObjectPlacement"))
    level = 0.0 if transform is None else float(transform.origin[2])
    return Slab(
        global_id=str(context.model.get(element, "GlobalId")),
        entity_id=element.id(),
        ifc_class=element.is_a(),
        name=_text(context.model, element, "Name"),
        storey=context.relations.storey_of(element.id()),
        plan=Polygon(),
        gross_area=0.0,
        top=level,
        bottom=level,
        roof=nature.roof,
        on_grade=nature.on_grade,
        unreadable=f"{reason or 'it has no body'}; export it with a closed solid body",
        findings=nature.findings,
    )


def _text(model: Model, element: Any, attribute: str) -> str:
    return str(model.get(element, attribute) or "").strip()


def _label(model: Model, element: Any) -> str:
    return f"{_text(model, element, 'Name') or element.is_a()} ({model.get(element, 'GlobalId')})"


# ---- body


def _pieces(context: _Context, element: Any) -> tuple[list[_Piece], list[str]]:
    """Return the plates of an element's own body, else those of its parts, and what could not be read."""
    pieces, problems = _own_pieces(context, element)
    if pieces:
        return pieces, problems
    for part in context.relations.parts_of(element.id()):
        if any(part.is_a(named) for named in _PART_CLASSES):
            of_part, part_problems = _own_pieces(context, part)
            pieces.extend(of_part)
            problems.extend(f"part {_label(context.model, part)}: {problem}" for problem in part_problems)
    return pieces, problems


def _own_pieces(context: _Context, element: Any) -> tuple[list[_Piece], list[str]]:
    material = context.relations.material_of(element.id())
    pieces: list[_Piece] = []
    problems: list[str] = []
    for body in context.bodies.of(element):
        if isinstance(body, Unreadable):
            problems.append(body.reason)
            continue
        try:
            plates = _plates(body)
        except MALFORMED as error:
            problems.append(f"its body is no usable solid ({error})")
            continue
        if not plates:
            problems.append("no face of its body looks up")
        pieces.extend(_Piece(plate=plate, material=material) for plate in plates)
    return pieces, problems


def _plates(body: Prism | Mesh) -> tuple[Plate, ...]:
    unfollowed: list[HalfSpace] = []
    if isinstance(body, Mesh):
        plates = plates_of_mesh(body.vertices, body.faces)
    else:
        plates = plates_of_extrusion(_extrusion(body))
        unfollowed = [clip for clip in body.clips if clip.bounded]
    return tuple(
        with_finding(plate, UNCUT)
        if body.cut or any(touches(plate, clip.point, clip.normal) for clip in unfollowed)
        else plate
        for plate in plates
    )


def _extrusion(body: Prism) -> Extrusion:
    direction, depth = body.direction, body.depth
    return Extrusion(
        profile=body.outline,
        origin=body.transform.origin,
        x_axis=body.transform.x,
        y_axis=body.transform.y,
        sweep=(direction[0] * depth, direction[1] * depth, direction[2] * depth),
        clips=tuple((clip.point, clip.normal) for clip in body.clips if not clip.bounded),
    )


def outline_of(body: Prism | Mesh) -> PlanArea:
    """Return the plan outline of a body."""
    return plan_of_mesh(body.vertices, body.faces) if isinstance(body, Mesh) else clean_area(plan_footprint(body))


# ---- openings


def _openings(context: _Context, element: Any) -> tuple[list[_Opening], list[str]]:
    relations = context.relations
    parent = relations.parent_of(element.id())
    owners = [element.id(), *(part.id() for part in relations.parts_of(element.id()))]
    if parent is not None and parent.is_a("IfcElement"):
        owners.append(parent.id())
    entities = {each.id(): each for owner in owners for each in relations.openings_of(owner)}
    found: list[_Opening] = []
    problems: list[str] = []
    for opening in entities.values():
        name = _label(context.model, opening)
        blocks = [body for body in context.bodies.of(opening) if not isinstance(body, Unreadable)]
        if not blocks:
            problems.append(f"opening {name} has no readable body; its area is still loaded")
        recess = context.model.get(opening, "PredefinedType") == "RECESS"
        for body in blocks:
            try:
                low, high = z_range(body)
                area = outline_of(body)
            except MALFORMED:
                problems.append(f"opening {name} has no readable body; its area is still loaded")
                continue
            found.append(_Opening(name=name, area=area, bottom=low, top=high, recess=recess))
    return found, problems


def _take_out(plate: Plate, openings: Sequence[_Opening]) -> tuple[PlanArea, list[str]]:
    """Return the plan without the openings that go through, and a remark for each that does not."""
    through: list[PlanArea] = []
    notes: list[str] = []
    for opening in openings:
        common = clean_area(plate.plan.intersection(opening.area))
        if common.is_empty:
            continue
        if not opening.recess and _goes_through(plate, opening, common):
            through.append(opening.area)
        else:
            notes.append(f"opening {opening.name} does not go through; its {common.area:.2f} m² is still loaded")
    if not through:
        return plate.plan, notes
    return clean_area(plate.plan.difference(shapely.union_all(through))), notes


def _goes_through(plate: Plate, opening: _Opening, common: PlanArea) -> bool:
    rise = plate.rise_to(centre_of(common))
    top, bottom = plate.top + rise, plate.bottom + rise
    if opening.top >= top - _THROUGH and opening.bottom <= bottom + _THROUGH:
        return True
    taken = min(top, opening.top) - max(bottom, opening.bottom)
    return taken >= _THROUGH_SHARE * (top - bottom)


# ---- layers


def _layers(
    context: _Context, element: Any, plate: Plate, pieces: Sequence[_Piece]
) -> tuple[tuple[Layer, ...], list[str]]:
    stated = _stated_layers(context, element)
    if not stated:
        return _inferred_layers(context, element, plate, pieces), []
    layers = tuple(Layer(thickness=layer.thickness, material=layer.material) for layer in stated)
    total = sum(layer.thickness for layer in layers)
    # Sloping roofs extruded vertically: tools disagree whether the layers are measured square or vertically.
    measured = (plate.thickness, plate.top - plate.bottom, (plate.top - plate.bottom) / plate.surface_ratio)
    if any(abs(total - depth) <= _LAYER_TOLERANCE * max(total, depth) for depth in measured):
        return layers, []
    note = f"its layers add up to {total:.3f} m, its solid is {plate.thickness:.3f} m thick; the layers are used"
    return layers, [note]


def _stated_layers(context: _Context, element: Any) -> tuple[MaterialLayer, ...]:
    """Return the layer set of the slab or its type, else of its whole, else of the first part that has one."""
    relations = context.relations
    parent = relations.parent_of(element.id())
    owners = [element.id()] + ([parent.id()] if parent is not None else [])
    parts = [part.id() for part in relations.parts_of(element.id())]
    for owner in owners:
        layers = relations.layers_of(owner)
        if layers:
            return layers
    of_parts = [layers for part in parts if (layers := relations.layers_of(part))]
    # Parts that all say the same are pieces of one build-up; parts that differ are themselves the layers.
    return of_parts[0] if of_parts and all(layers == of_parts[0] for layers in of_parts) else ()


def _inferred_layers(context: _Context, element: Any, plate: Plate, pieces: Sequence[_Piece]) -> tuple[Layer, ...]:
    """Return one layer per material of the bodies, top first, each of the thickness that gives its volume."""
    parent = context.relations.parent_of(element.id())
    fallback = context.relations.material_of(parent.id()) if parent is not None else MaterialText()
    volumes: dict[MaterialText, float] = {}
    for piece in sorted(pieces, key=lambda each: -each.plate.top):
        material = piece.material if piece.material.names else fallback
        volume = piece.plate.plan.area * piece.plate.thickness
        volumes[material] = volumes.get(material, 0.0) + volume
    whole = sum(volumes.values())
    if whole <= 0.0:
        return ()
    return tuple(
        Layer(thickness=plate.thickness * volume / whole, material=material, inferred=True)
        for material, volume in volumes.items()
    )


# ---- kind


def _nature(context: _Context, element: Any) -> _Nature:
    relations, model = context.relations, context.model
    type_object, parent = relations.type_of(element.id()), relations.parent_of(element.id())
    owners = [each for each in (element, type_object, parent) if each is not None and each.is_a("IfcObjectDefinition")]
    names = [text for owner in owners for text in _names(model, owner) if not owner.is_a("IfcSpatialStructureElement")]
    kinds = {str(model.get(each, "PredefinedType") or "") for each in (element, type_object) if each is not None}
    findings = []
    on_grade, roof = bool(kinds & _GROUND_TYPES), "ROOF" in kinds or _is_roof(element) or _is_roof(parent)
    if not on_grade and not roof and (name := on_grade_name(names)):
        on_grade = True
        findings.append(f'taken as bearing on the ground because of its name "{name}"')
    if not on_grade and not roof and (name := roof_name(names)):
        roof = True
        findings.append(f'taken as a roof because of its name "{name}"')
    return _Nature(
        roof=roof and not on_grade, on_grade=on_grade, unit_name=floor_unit_name(names), findings=tuple(findings)
    )


def _is_roof(entity: Any | None) -> bool:
    return entity is not None and bool(entity.is_a("IfcRoof"))


def _names(model: Model, entity: Any) -> list[str]:
    texts = [_text(model, entity, attribute) for attribute in ("Name", "ObjectType", "ElementType")]
    return [text for text in texts if text]


def _unit_shaped(plan: PlanArea) -> bool:
    """Tell whether an outline has the proportions of one precast unit."""
    corners = shapely.get_coordinates(shapely.oriented_envelope(plan))
    if len(corners) < 4:
        return False
    sides = sorted(hypot(*(corners[k + 1] - corners[k])) for k in (0, 1))
    return bool(sides[0] <= _UNIT_WIDTH and sides[1] >= _UNIT_PROPORTION * sides[0])
