"""Small IFC models for the reading tests, written entity by entity in any schema and length unit."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid

Vector = Sequence[float]
FOOT_IN_METRES = 0.3048  # international foot, NIST SP 811, appendix B


class ModelBuilder:
    """Writes one storey of a building; lengths are in the unit of the model."""

    def __init__(self, schema: str = "IFC4", unit: str | None = "metre") -> None:
        self.file = ifcopenshell.file(schema=schema)
        self.schema = self.file.schema
        self.owner = self._owner()
        units = self.file.create_entity("IfcUnitAssignment", Units=self._units(unit))
        context = self.file.create_entity(
            "IfcGeometricRepresentationContext",
            ContextType="Model",
            CoordinateSpaceDimension=3,
            WorldCoordinateSystem=self.axes(),
        )
        self.context = context
        self.project = self.rooted("IfcProject", Name="Test", RepresentationContexts=[context], UnitsInContext=units)
        self.building = self.rooted("IfcBuilding", Name="House", CompositionType="ELEMENT")
        self.storey = self.rooted("IfcBuildingStorey", Name="Level 2", CompositionType="ELEMENT")
        self.aggregate(self.project, self.building)
        self.aggregate(self.building, self.storey)

    # ---- frame of the file

    def _owner(self) -> Any:
        make = self.file.create_entity
        person = make("IfcPerson", FamilyName="Tester")
        organization = make("IfcOrganization", Name="Tests")
        both = make("IfcPersonAndOrganization", ThePerson=person, TheOrganization=organization)
        application = make(
            "IfcApplication",
            ApplicationDeveloper=organization,
            Version="1",
            ApplicationFullName="tests",
            ApplicationIdentifier="tests",
        )
        return make(
            "IfcOwnerHistory", OwningUser=both, OwningApplication=application, ChangeAction="ADDED", CreationDate=0
        )

    def _units(self, unit: str | None) -> list[Any]:
        make = self.file.create_entity
        metre = make("IfcSIUnit", UnitType="LENGTHUNIT", Name="METRE")
        angle = make("IfcSIUnit", UnitType="PLANEANGLEUNIT", Name="RADIAN")
        if unit is None:
            return [angle]
        if unit == "metre":
            return [metre, angle]
        if unit == "millimetre":
            return [make("IfcSIUnit", UnitType="LENGTHUNIT", Prefix="MILLI", Name="METRE"), angle]
        assert unit == "foot"
        value = make("IfcLengthMeasure", FOOT_IN_METRES)
        measure = make("IfcMeasureWithUnit", ValueComponent=value, UnitComponent=metre)
        size = make("IfcDimensionalExponents", 1, 0, 0, 0, 0, 0, 0)
        foot = make(
            "IfcConversionBasedUnit", Dimensions=size, UnitType="LENGTHUNIT", Name="FOOT", ConversionFactor=measure
        )
        return [foot, angle]

    def rooted(self, ifc_class: str, **attributes: Any) -> Any:
        """Write an entity with a GlobalId and owner."""
        return self.file.create_entity(
            ifc_class, GlobalId=ifcopenshell.guid.new(), OwnerHistory=self.owner, **attributes
        )

    # ---- geometry

    def point(self, *values: float) -> Any:
        """Write a point."""
        return self.file.create_entity("IfcCartesianPoint", [float(value) for value in values])

    def direction(self, *values: float) -> Any:
        """Write a direction."""
        return self.file.create_entity("IfcDirection", [float(value) for value in values])

    def axes(self, origin: Vector = (0, 0, 0), z: Vector | None = None, x: Vector | None = None) -> Any:
        """Write an axis placement."""
        return self.file.create_entity(
            "IfcAxis2Placement3D",
            Location=self.point(*origin),
            Axis=None if z is None else self.direction(*z),
            RefDirection=None if x is None else self.direction(*x),
        )

    def place(
        self, origin: Vector = (0, 0, 0), z: Vector = (0, 0, 1), x: Vector = (1, 0, 0), inside: Any = None
    ) -> Any:
        """Write a local placement, inside another one if given."""
        return self.file.create_entity(
            "IfcLocalPlacement", PlacementRelTo=inside, RelativePlacement=self.axes(origin, z, x)
        )

    def polyline(self, corners: Sequence[Vector]) -> Any:
        """Write a closed polyline."""
        points = [self.point(*corner) for corner in corners]
        return self.file.create_entity("IfcPolyline", Points=[*points, points[0]])

    def outline(self, corners: Sequence[Vector], holes: Sequence[Sequence[Vector]] = ()) -> Any:
        """Write a profile of arbitrary outline, with holes."""
        if not holes:
            return self.file.create_entity(
                "IfcArbitraryClosedProfileDef", ProfileType="AREA", OuterCurve=self.polyline(corners)
            )
        return self.file.create_entity(
            "IfcArbitraryProfileDefWithVoids",
            ProfileType="AREA",
            OuterCurve=self.polyline(corners),
            InnerCurves=[self.polyline(hole) for hole in holes],
        )

    def rectangle(self, length: float, width: float, centre: Vector = (0, 0)) -> Any:
        """Write a rectangular profile."""
        position = self.file.create_entity("IfcAxis2Placement2D", Location=self.point(*centre))
        return self.file.create_entity(
            "IfcRectangleProfileDef", ProfileType="AREA", Position=position, XDim=float(length), YDim=float(width)
        )

    def extrusion(self, profile: Any, depth: float, direction: Vector = (0, 0, 1), position: Any = None) -> Any:
        """Write an extruded solid."""
        return self.file.create_entity(
            "IfcExtrudedAreaSolid",
            SweptArea=profile,
            Position=position or self.axes(),
            ExtrudedDirection=self.direction(*direction),
            Depth=float(depth),
        )

    def faceted(self, corners: Sequence[Vector], faces: Sequence[Sequence[int]]) -> Any:
        """Write a faceted solid from corners and corner numbers per face."""
        points = [self.point(*corner) for corner in corners]
        made = []
        for face in faces:
            loop = self.file.create_entity("IfcPolyLoop", Polygon=[points[k] for k in face])
            bound = self.file.create_entity("IfcFaceOuterBound", Bound=loop, Orientation=True)
            made.append(self.file.create_entity("IfcFace", Bounds=[bound]))
        shell = self.file.create_entity("IfcClosedShell", CfsFaces=made)
        return self.file.create_entity("IfcFacetedBrep", Outer=shell)

    def shape(self, *items: Any, kind: str = "SweptSolid") -> Any:
        """Write the body representation of a product."""
        body = self.file.create_entity(
            "IfcShapeRepresentation",
            ContextOfItems=self.context,
            RepresentationIdentifier="Body",
            RepresentationType=kind,
            Items=list(items),
        )
        return self.file.create_entity("IfcProductDefinitionShape", Representations=[body])

    # ---- elements and relations

    def element(
        self, ifc_class: str, *items: Any, name: str = "", placement: Any = None, contained: bool = True, **more: Any
    ) -> Any:
        """Write an element in the storey."""
        made = self.rooted(
            ifc_class,
            Name=name or None,
            ObjectPlacement=placement or self.place(),
            Representation=self.shape(*items) if items else None,
            **more,
        )
        if contained:
            self.rooted("IfcRelContainedInSpatialStructure", RelatedElements=[made], RelatingStructure=self.storey)
        return made

    def aggregate(self, whole: Any, *parts: Any) -> None:
        """Make parts of a whole."""
        self.rooted("IfcRelAggregates", RelatingObject=whole, RelatedObjects=list(parts))

    def void(self, element: Any, *items: Any, placement: Any = None, name: str = "") -> Any:
        """Write an opening in an element."""
        opening = self.element("IfcOpeningElement", *items, name=name, placement=placement, contained=False)
        self.rooted("IfcRelVoidsElement", RelatingBuildingElement=element, RelatedOpeningElement=opening)
        return opening

    def typed(self, element: Any, type_object: Any) -> None:
        """Give an element its type."""
        self.rooted("IfcRelDefinesByType", RelatedObjects=[element], RelatingType=type_object)

    def material(self, name: str, **more: Any) -> Any:
        """Write a material."""
        return self.file.create_entity("IfcMaterial", Name=name, **more)

    def layer_set(self, *layers: tuple[str | None, float]) -> Any:
        """Write a layer set from (material name, thickness) pairs."""
        made = [
            self.file.create_entity(
                "IfcMaterialLayer", Material=None if name is None else self.material(name), LayerThickness=float(size)
            )
            for name, size in layers
        ]
        return self.file.create_entity("IfcMaterialLayerSet", MaterialLayers=made)

    def layer_usage(self, layer_set: Any) -> Any:
        """Write the usage of a layer set."""
        return self.file.create_entity(
            "IfcMaterialLayerSetUsage",
            ForLayerSet=layer_set,
            LayerSetDirection="AXIS3",
            DirectionSense="POSITIVE",
            OffsetFromReferenceLine=0.0,
        )

    def made_of(self, definition: Any, *elements: Any) -> None:
        """Associate a material definition with elements."""
        self.rooted("IfcRelAssociatesMaterial", RelatedObjects=list(elements), RelatingMaterial=definition)

    def single(self, name: str, kind: str, value: Any) -> Any:
        """Write a single-valued property."""
        return self.file.create_entity(
            "IfcPropertySingleValue", Name=name, NominalValue=self.file.create_entity(kind, value)
        )

    def property_set(self, name: str, *properties: Any) -> Any:
        """Write a property set."""
        return self.rooted("IfcPropertySet", Name=name, HasProperties=list(properties))

    def describe(self, element: Any, name: str, **texts: str) -> None:
        """Give an element a property set of labels."""
        made = self.property_set(name, *(self.single(key, "IfcLabel", text) for key, text in texts.items()))
        self.rooted("IfcRelDefinesByProperties", RelatedObjects=[element], RelatingPropertyDefinition=made)

    def write(self, folder: Path) -> Path:
        """Write the file and return its path."""
        path = folder / "model.ifc"
        self.file.write(str(path))
        return path
