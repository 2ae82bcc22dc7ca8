"""Writes a small building as IFC: storeys, steel beams and columns, layered slabs with openings, walls.

Everything is given in metres and world coordinates, z up, and written in the file's own length unit. The same calls
give the same bytes: GlobalIds come from the role of an element, and nothing carries the time of writing.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from hashlib import md5
from math import atan, cos, hypot, radians, sin
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid
from shapes import INCH, SHAPES, Shape

Point = tuple[float, float]

FOOT = 12 * INCH
"""Metres."""
POUND_PER_CUBIC_FOOT = 0.45359237 / FOOT**3
"""Kilograms per cubic metre."""
_METRES = {"MILLIMETRE": 0.001, "METRE": 1.0, "FOOT": FOOT, "INCH": INCH}
_FIXED_TIME = "2024-01-15T09:00:00"
_FIXED_SECONDS = 1705309200
_SLOPE_OF_CHANNEL_FLANGES = atan(2 / 12)


@dataclass(frozen=True)
class Layer:
    """One layer of a floor or roof: material name, thickness [m], density [kg/m³]."""

    material: str
    thickness: float
    density: float


@dataclass(frozen=True)
class Grid:
    """A plan grid, turned about its origin: grid coordinates [m] and angle [degrees] to world coordinates."""

    origin: Point = (0.0, 0.0)
    angle: float = 0.0
    mirrored: bool = False

    def at(self, x: float, y: float) -> Point:
        """Return the world coordinates of a point of the grid."""
        along, across = radians(self.angle), -y if self.mirrored else y
        return (
            self.origin[0] + x * cos(along) - across * sin(along),
            self.origin[1] + x * sin(along) + across * cos(along),
        )

    def between(self, start: Point, end: Point, clear_start: float, clear_end: float) -> tuple[Point, Point]:
        """Return the world ends of a line between two grid points, shortened at either end [m]."""
        length = hypot(end[0] - start[0], end[1] - start[1])
        along = ((end[0] - start[0]) / length, (end[1] - start[1]) / length)
        first = (start[0] + clear_start * along[0], start[1] + clear_start * along[1])
        last = (end[0] - clear_end * along[0], end[1] - clear_end * along[1])
        return self.at(*first), self.at(*last)


@dataclass(frozen=True)
class Storey:
    """A storey as written: its elevation [m] and its entities."""

    name: str
    elevation: float
    entity: Any
    placement: Any


class IfcBuilding:
    """One model in the making.

    Args:
        name: Of the project; GlobalIds are derived from it and from each element's role.
        schema: ``IFC2X3``, ``IFC4`` or ``IFC4X3``.
        length_unit: ``MILLIMETRE``, ``METRE``, ``FOOT`` or ``INCH``.
        pounds: Densities are written in lb/ft³ instead of kg/m³.
    """

    def __init__(self, name: str, schema: str = "IFC4", length_unit: str = "MILLIMETRE", *, pounds: bool = False):
        self.name = name
        self.schema = schema
        self.file = ifcopenshell.file(schema="IFC4X3_ADD2" if schema == "IFC4X3" else schema)
        self._old = schema == "IFC2X3"
        self._unit = _METRES[length_unit]
        self._density_unit = POUND_PER_CUBIC_FOOT if pounds else 1.0
        self._roles: set[str] = set()
        self._materials: dict[str, Any] = {}
        self._profiles: dict[tuple[str, str], Any] = {}
        self._types: dict[tuple[str, str], tuple[Any, list[Any]]] = {}
        self._maps: dict[tuple[str, str, float], Any] = {}
        self._made_of: dict[int, tuple[Any, list[Any]]] = {}
        self._contained: dict[str, tuple[Any, list[Any]]] = {}
        self._storeys: list[Storey] = []
        self._up = self._direction(0.0, 0.0, 1.0)
        self._east = self._direction(1.0, 0.0, 0.0)
        self._owner = self._owner_history()
        self._spatial_structure(length_unit, pounds=pounds)

    # ---- small entities

    def _new(self, named: str, *values: Any, **attributes: Any) -> Any:
        return self.file.create_entity(named, *values, **attributes)

    def _rooted(self, named: str, role: str, **attributes: Any) -> Any:
        if role in self._roles:
            raise ValueError(f"role {role!r} is given twice; GlobalIds would repeat")
        self._roles.add(role)
        number = md5(f"{self.name}/{role}".encode(), usedforsecurity=False).hexdigest()
        guid = ifcopenshell.guid.compress(number)
        return self._new(named, GlobalId=guid, OwnerHistory=self._owner, **attributes)

    def _length(self, metres: float) -> float:
        return round(metres / self._unit, 7) + 0.0

    def _point(self, *metres: float) -> Any:
        return self._new("IfcCartesianPoint", [self._length(value) for value in metres])

    def _direction(self, *ratios: float) -> Any:
        return self._new("IfcDirection", [round(ratio, 12) + 0.0 for ratio in ratios])

    def _axes(self, origin: tuple[float, float, float], axis: Any = None, reference: Any = None) -> Any:
        return self._new("IfcAxis2Placement3D", self._point(*origin), axis, reference)

    def _flat_axes(self) -> Any:
        return self._new("IfcAxis2Placement2D", self._point(0.0, 0.0))

    def _placement(self, parent: Any, axes: Any) -> Any:
        return self._new("IfcLocalPlacement", parent, axes)

    # ---- project

    def _owner_history(self) -> Any | None:
        if not self._old:
            return None
        person = self._new("IfcPerson", FamilyName="Sample")
        office = self._new("IfcOrganization", Name="Sample models")
        user = self._new("IfcPersonAndOrganization", person, office)
        program = self._new("IfcApplication", office, "1", "Sample model writer", "sample-model-writer")
        return self._new(
            "IfcOwnerHistory",
            OwningUser=user,
            OwningApplication=program,
            ChangeAction="ADDED",
            CreationDate=_FIXED_SECONDS,
        )

    def _spatial_structure(self, length_unit: str, *, pounds: bool) -> None:
        context = self._new(
            "IfcGeometricRepresentationContext",
            ContextType="Model",
            CoordinateSpaceDimension=3,
            Precision=1e-5,
            WorldCoordinateSystem=self._axes((0.0, 0.0, 0.0)),
        )
        self._body = self._new(
            "IfcGeometricRepresentationSubContext",
            ContextIdentifier="Body",
            ContextType="Model",
            ParentContext=context,
            TargetView="MODEL_VIEW",
        )
        self.project = self._rooted(
            "IfcProject",
            "project",
            Name=self.name,
            RepresentationContexts=[context],
            UnitsInContext=self._new("IfcUnitAssignment", self._units(length_unit, pounds=pounds)),
        )
        site_place = self._placement(None, self._axes((0.0, 0.0, 0.0)))
        site = self._rooted(
            "IfcSite", "site", Name="Site", ObjectPlacement=site_place, CompositionType="ELEMENT", RefElevation=0.0
        )
        self._building_place = self._placement(site_place, self._axes((0.0, 0.0, 0.0)))
        self._building = self._rooted(
            "IfcBuilding",
            "building",
            Name=self.name,
            ObjectPlacement=self._building_place,
            CompositionType="ELEMENT",
        )
        self._aggregate("project", self.project, [site])
        self._aggregate("site", site, [self._building])

    def _units(self, length_unit: str, *, pounds: bool) -> list[Any]:
        metre = self._new("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")
        kilogram = self._new("IfcSIUnit", UnitType="MASSUNIT", Prefix="KILO", Name="GRAM")
        length, mass = metre, kilogram
        if length_unit == "MILLIMETRE":
            length = self._new("IfcSIUnit", UnitType="LENGTHUNIT", Prefix="MILLI", Name="METRE")
        elif length_unit != "METRE":
            length = self._converted(length_unit, "LENGTHUNIT", "IfcLengthMeasure", self._unit, metre)
        foot = length if length_unit == "FOOT" else metre
        if pounds:
            mass = self._converted("POUND", "MASSUNIT", "IfcMassMeasure", 0.45359237, kilogram)
            if length_unit != "FOOT":
                foot = self._converted("FOOT", "LENGTHUNIT", "IfcLengthMeasure", FOOT, metre)
        density = self._new(
            "IfcDerivedUnit",
            Elements=[
                self._new("IfcDerivedUnitElement", mass, 1),
                self._new("IfcDerivedUnitElement", foot if pounds else metre, -3),
            ],
            UnitType="MASSDENSITYUNIT",
        )
        plain = (("AREAUNIT", "SQUARE_METRE"), ("VOLUMEUNIT", "CUBIC_METRE"), ("PLANEANGLEUNIT", "RADIAN"))
        return [length, mass, density, *(self._new("IfcSIUnit", UnitType=kind, Name=name) for kind, name in plain)]

    def _converted(self, name: str, kind: str, measure: str, factor: float, base: Any) -> Any:
        exponents = (1, 0, 0, 0, 0, 0, 0) if kind == "LENGTHUNIT" else (0, 1, 0, 0, 0, 0, 0)
        return self._new(
            "IfcConversionBasedUnit",
            Dimensions=self._new("IfcDimensionalExponents", *exponents),
            UnitType=kind,
            Name=name,
            ConversionFactor=self._new("IfcMeasureWithUnit", self._new(measure, factor), base),
        )

    def _aggregate(self, role: str, whole: Any, parts: list[Any]) -> None:
        self._rooted("IfcRelAggregates", f"parts of {role}", RelatingObject=whole, RelatedObjects=parts)

    def storey(self, name: str, elevation: float) -> Storey:
        """Add a storey at an elevation [m]."""
        place = self._placement(self._building_place, self._axes((0.0, 0.0, elevation)))
        entity = self._rooted(
            "IfcBuildingStorey",
            f"storey {name}",
            Name=name,
            ObjectPlacement=place,
            CompositionType="ELEMENT",
            Elevation=self._length(elevation),
        )
        storey = Storey(name, elevation, entity, place)
        self._storeys.append(storey)
        return storey

    # ---- materials, profiles, types

    def material(self, name: str, density: float | None = None) -> Any:
        """Return the material of this name, with its density [kg/m³] where one is given at first use."""
        if name not in self._materials:
            entity = self._materials[name] = self._new("IfcMaterial", Name=name)
            if density is not None:
                self._state_density(entity, round(density / self._density_unit, 6))
        return self._materials[name]

    def _state_density(self, material: Any, density: float) -> None:
        if self._old:
            self._new("IfcGeneralMaterialProperties", Material=material, MassDensity=density)
            return
        single = self._new(
            "IfcPropertySingleValue", Name="MassDensity", NominalValue=self._new("IfcMassDensityMeasure", density)
        )
        self._new("IfcMaterialProperties", Name="Pset_MaterialCommon", Properties=[single], Material=material)

    def profile(self, shape: Shape, name: str = "") -> Any:
        """Return the parametric profile of a shape; a name given replaces its own designation."""
        name = name or shape.designation
        key = (shape.designation, name)
        if key not in self._profiles:
            self._profiles[key] = self._make_profile(shape, name)
        return self._profiles[key]

    def _make_profile(self, shape: Shape, name: str) -> Any:
        common = {"ProfileType": "AREA", "ProfileName": name, "Position": self._flat_axes()}
        depth, width, flange, web, fillet = (
            self._length(value) for value in (shape.depth, shape.width, shape.flange, shape.web, shape.fillet)
        )
        if shape.kind == "I":
            return self._new(
                "IfcIShapeProfileDef",
                **common,
                OverallWidth=width,
                OverallDepth=depth,
                WebThickness=web,
                FlangeThickness=flange,
                FilletRadius=fillet,
            )
        if shape.kind == "C":
            return self._new(
                "IfcUShapeProfileDef",
                **common,
                Depth=depth,
                FlangeWidth=width,
                WebThickness=web,
                FlangeThickness=flange,
                FlangeSlope=round(_SLOPE_OF_CHANNEL_FLANGES, 9),
            )
        return self._new(
            "IfcRectangleHollowProfileDef",
            **common,
            XDim=width,
            YDim=depth,
            WallThickness=flange,
            InnerFilletRadius=self._length(shape.fillet - shape.flange),
            OuterFilletRadius=fillet,
        )

    def _give_type(self, element: Any, named: str, kind: str, name: str) -> None:
        key = (named, name)
        if key not in self._types:
            entity = self._rooted(named, f"type {named} {name}", Name=name, PredefinedType=kind)
            self._types[key] = (entity, [])
        self._types[key][1].append(element)

    def _make_of(self, element: Any, definition: Any) -> None:
        self._made_of.setdefault(definition.id(), (definition, []))[1].append(element)

    def _steel(self, profile: Any, material: str) -> Any:
        """A profile set where the schema knows one, else the plain material."""
        base = self.material(material)
        if self._old:
            return base
        key = f"{profile.ProfileName}\n{profile.id()}\n{material}"
        if key not in self._materials:
            member = self._new("IfcMaterialProfile", Name=profile.ProfileName, Material=base, Profile=profile)
            self._materials[key] = self._new(
                "IfcMaterialProfileSet", Name=profile.ProfileName, MaterialProfiles=[member]
            )
        return self._materials[key]

    def _describe(self, element: Any, role: str, values: Sequence[tuple[str, Any]]) -> None:
        """Attach ``Pset_BeamCommon`` or its kin."""
        kind = element.is_a().removeprefix("Ifc").removesuffix("StandardCase")
        singles = [self._new("IfcPropertySingleValue", Name=name, NominalValue=value) for name, value in values]
        properties = self._rooted(
            "IfcPropertySet", f"properties of {role}", Name=f"Pset_{kind}Common", HasProperties=singles
        )
        self._rooted(
            "IfcRelDefinesByProperties",
            f"properties to {role}",
            RelatedObjects=[element],
            RelatingPropertyDefinition=properties,
        )

    # ---- elements

    def _place_in(self, storey: Storey, element: Any) -> None:
        self._contained.setdefault(storey.name, (storey.entity, []))[1].append(element)

    def _shape(self, kind: str, items: list[Any]) -> Any:
        body = self._new("IfcShapeRepresentation", self._body, "Body", kind, items)
        return self._new("IfcProductDefinitionShape", Representations=[body])

    def _extrusion(self, profile: Any, depth: float) -> Any:
        return self._new("IfcExtrudedAreaSolid", profile, self._axes((0.0, 0.0, 0.0)), self._up, self._length(depth))

    def _mapped(self, profile: Any, depth: float) -> Any:
        """A body drawn once per profile and length and used many times."""
        key = (profile.ProfileName, str(profile.id()), round(depth, 6))
        if key not in self._maps:
            body = self._new(
                "IfcShapeRepresentation", self._body, "Body", "SweptSolid", [self._extrusion(profile, depth)]
            )
            self._maps[key] = self._new("IfcRepresentationMap", self._axes((0.0, 0.0, 0.0)), body)
        target = self._new("IfcCartesianTransformationOperator3D", LocalOrigin=self._point(0.0, 0.0, 0.0))
        return self._new("IfcMappedItem", self._maps[key], target)

    def bar(
        self,
        role: str,
        profile: Any | None,
        ends: tuple[Point, Point],
        level: float,
        *,
        material: str,
        storey: Storey,
        type_name: str = "",
        mapped: bool = False,
    ) -> Any:
        """Add an ``IfcBeam`` whose axis runs level between two plan points; no profile: no body."""
        start, end = ends
        length = hypot(end[0] - start[0], end[1] - start[1])
        along = ((end[0] - start[0]) / length, (end[1] - start[1]) / length)
        # The profile's y points up, so that its x, which is up × along, points to the left.
        axes = self._axes(
            (start[0], start[1], level - storey.elevation),
            self._direction(along[0], along[1], 0.0),
            self._direction(-along[1], along[0], 0.0),
        )
        shape = None
        if profile is not None:
            solid = self._mapped(profile, length) if mapped else self._extrusion(profile, length)
            shape = self._shape("MappedRepresentation" if mapped else "SweptSolid", [solid])
        element = self._rooted(
            "IfcBeam",
            role,
            Name=role,
            ObjectType=type_name or None,
            ObjectPlacement=self._placement(storey.placement, axes),
            Representation=shape,
            Tag=str(len(self._roles)),
            **({} if self._old else {"PredefinedType": "BEAM"}),
        )
        self._place_in(storey, element)
        self._make_of(element, self._steel(profile, material) if profile is not None else self.material(material))
        return element

    def beam(
        self,
        role: str,
        section: str,
        ends: tuple[Point, Point],
        top: float,
        storey: Storey,
        *,
        material: str = "ASTM A992",
        drawn: str = "",
        mapped: bool = False,
    ) -> Any:
        """Add a level steel beam.

        Args:
            role: Its name, also the root of its GlobalId.
            section: Designation the model gives it.
            ends: Plan points of the two ends of the solid.
            top: Level of its top face.
            storey: Storey it is contained in.
            material: Material name.
            drawn: Designation whose dimensions are drawn, where they differ from the name.
            mapped: Use one shared body per profile and length.
        """
        shape = SHAPES[drawn or section]
        element = self.bar(
            role,
            self.profile(shape, section),
            ends,
            top - shape.depth / 2,
            material=material,
            storey=storey,
            type_name=section,
            mapped=mapped,
        )
        self._give_type(element, "IfcBeamType", "BEAM", section)
        length = hypot(ends[1][0] - ends[0][0], ends[1][1] - ends[0][1])
        self._describe(
            element,
            role,
            (
                ("Reference", self._new("IfcIdentifier", section)),
                ("Span", self._new("IfcPositiveLengthMeasure", self._length(length))),
                ("LoadBearing", self._new("IfcBoolean", wrappedValue=True)),
            ),
        )
        return element

    def column(
        self,
        role: str,
        section: str,
        at: Point,
        levels: tuple[float, float],
        storey: Storey,
        *,
        material: str = "ASTM A992",
        angle: float = 0.0,
    ) -> Any:
        """Add a column between two levels; its flanges look along y, turned by an angle [degrees]."""
        bottom, top = levels
        profile = self.profile(SHAPES[section])
        turned = self._direction(cos(radians(angle)), sin(radians(angle)), 0.0)
        axes = self._axes((at[0], at[1], bottom - storey.elevation), self._up, turned)
        element = self._rooted(
            "IfcColumn",
            role,
            Name=role,
            ObjectType=section,
            ObjectPlacement=self._placement(storey.placement, axes),
            Representation=self._shape("SweptSolid", [self._extrusion(profile, top - bottom)]),
            Tag=str(len(self._roles)),
        )
        self._place_in(storey, element)
        self._give_type(element, "IfcColumnType", "COLUMN", section)
        self._make_of(element, self._steel(profile, material))
        self._describe(element, role, (("Reference", self._new("IfcIdentifier", section)),))
        return element

    def _polygon(self, points: Sequence[Point]) -> Any:
        corners = [self._point(*point) for point in points]
        outline = self._new("IfcPolyline", [*corners, corners[0]])
        return self._new("IfcArbitraryClosedProfileDef", "AREA", None, outline)

    def slab(
        self,
        role: str,
        outline: Sequence[Point],
        top: float,
        layers: Sequence[Layer],
        storey: Storey,
        *,
        kind: str = "FLOOR",
        openings: Sequence[tuple[str, Sequence[Point]]] = (),
    ) -> Any:
        """Add a level slab with its layers, top first, and openings through it.

        Args:
            role: Its name.
            outline: Plan corners.
            top: Level of the finished top.
            layers: From the top down; their sum is the thickness.
            storey: Storey it is contained in.
            kind: ``FLOOR``, ``ROOF`` or ``BASESLAB``.
            openings: Name and plan corners of each.
        """
        thickness = sum(layer.thickness for layer in layers)
        place = self._placement(storey.placement, self._axes((0.0, 0.0, top - thickness - storey.elevation)))
        element = self._rooted(
            "IfcSlab",
            role,
            Name=role,
            ObjectPlacement=place,
            Representation=self._shape("SweptSolid", [self._extrusion(self._polygon(outline), thickness)]),
            PredefinedType=kind,
        )
        self._place_in(storey, element)
        self._make_of(element, self._layer_usage(role, layers))
        for name, corners in openings:
            self._open(element, place, name, corners, thickness)
        return element

    def _layer_usage(self, name: str, layers: Sequence[Layer]) -> Any:
        members = []
        for layer in layers:
            material = self.material(layer.material, layer.density)
            members.append(
                self._new("IfcMaterialLayer", Material=material, LayerThickness=self._length(layer.thickness))
            )
        layer_set = self._new("IfcMaterialLayerSet", MaterialLayers=members, LayerSetName=name)
        # From the underside of the solid, layers given from the top down run against its third axis.
        thickness = self._length(sum(layer.thickness for layer in layers))
        return self._new("IfcMaterialLayerSetUsage", layer_set, "AXIS3", "NEGATIVE", thickness)

    def _open(self, slab: Any, place: Any, name: str, corners: Sequence[Point], thickness: float) -> None:
        solid = self._extrusion(self._polygon(corners), thickness + 0.1)
        opening = self._rooted(
            "IfcOpeningElement",
            f"opening {name}",
            Name=name,
            ObjectPlacement=self._placement(place, self._axes((0.0, 0.0, -0.05))),
            Representation=self._shape("SweptSolid", [solid]),
            **({} if self._old else {"PredefinedType": "OPENING"}),
        )
        self._rooted(
            "IfcRelVoidsElement",
            f"opening {name} in slab",
            RelatingBuildingElement=slab,
            RelatedOpeningElement=opening,
        )

    def wall(
        self,
        role: str,
        line: tuple[Point, Point],
        thickness: float,
        levels: tuple[float, float],
        storey: Storey,
        *,
        material: str,
        density: float,
    ) -> Any:
        """Add a straight wall along its centreline between two levels."""
        (x0, y0), (x1, y1) = line
        bottom, top = levels
        length = hypot(x1 - x0, y1 - y0)
        along = self._direction((x1 - x0) / length, (y1 - y0) / length, 0.0)
        half = thickness / 2
        outline = self._polygon([(0.0, -half), (length, -half), (length, half), (0.0, half)])
        axes = self._axes((x0, y0, bottom - storey.elevation), self._up, along)
        element = self._rooted(
            "IfcWall",
            role,
            Name=role,
            ObjectPlacement=self._placement(storey.placement, axes),
            Representation=self._shape("SweptSolid", [self._extrusion(outline, top - bottom)]),
        )
        self._place_in(storey, element)
        self._make_of(element, self.material(material, density))
        return element

    # ---- file

    def write(self, path: Path) -> None:
        """Finish the relations and write the file."""
        self._finish()
        header = self.file.header
        header.file_description.description = ("ViewDefinition [CoordinationView]",)
        header.file_name.name = Path(path).name
        header.file_name.time_stamp = _FIXED_TIME
        header.file_name.author = ("",)
        header.file_name.organization = ("",)
        header.file_name.preprocessor_version = "sample-model-writer"
        header.file_name.originating_system = "sample-model-writer"
        header.file_name.authorization = ""
        self.file.write(str(path))

    def _finish(self) -> None:
        self._aggregate("building", self._building, [storey.entity for storey in self._storeys])
        for name, (storey, elements) in self._contained.items():
            self._rooted(
                "IfcRelContainedInSpatialStructure",
                f"elements of storey {name}",
                RelatedElements=elements,
                RelatingStructure=storey,
            )
        for (named, name), (entity, elements) in self._types.items():
            self._rooted("IfcRelDefinesByType", f"typed {named} {name}", RelatedObjects=elements, RelatingType=entity)
        for number, (definition, elements) in enumerate(self._made_of.values()):
            self._rooted(
                "IfcRelAssociatesMaterial",
                f"material {number}",
                RelatedObjects=elements,
                RelatingMaterial=definition,
            )
