"""One-beam IFC models for the reading tests, in any schema and unit."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid

from ifcaudit.model.building import Beam
from ifcaudit.reading.building import read_building

Vector = Sequence[float]


class SteelModel:
    """A project with one storey; lengths are in the unit of the model."""

    def __init__(self, schema: str = "IFC4", prefix: str | None = "MILLI", *, units: bool = True) -> None:
        self.file = ifcopenshell.file(schema=schema)
        make = self.make
        owner = None
        if schema == "IFC2X3":
            person, organization = make("IfcPerson", FamilyName="T"), make("IfcOrganization", Name="T")
            both = make("IfcPersonAndOrganization", ThePerson=person, TheOrganization=organization)
            application = make(
                "IfcApplication",
                ApplicationDeveloper=organization,
                Version="1",
                ApplicationFullName="t",
                ApplicationIdentifier="t",
            )
            owner = make(
                "IfcOwnerHistory", OwningUser=both, OwningApplication=application, ChangeAction="ADDED", CreationDate=0
            )
        self.owner = owner
        length = [make("IfcSIUnit", UnitType="LENGTHUNIT", Prefix=prefix, Name="METRE")] if units else []
        angle = make("IfcSIUnit", UnitType="PLANEANGLEUNIT", Name="RADIAN")
        assignment = make("IfcUnitAssignment", Units=[*length, angle])
        self.context = make(
            "IfcGeometricRepresentationContext",
            ContextType="Model",
            CoordinateSpaceDimension=3,
            WorldCoordinateSystem=self.axes(),
        )
        self.project = self.rooted(
            "IfcProject", Name="P", RepresentationContexts=[self.context], UnitsInContext=assignment
        )
        self.storey = self.rooted("IfcBuildingStorey", Name="Level 1")
        self.rooted("IfcRelAggregates", RelatingObject=self.project, RelatedObjects=[self.storey])

    def make(self, ifc_class: str, **attributes: Any) -> Any:
        """Create an instance."""
        return self.file.create_entity(ifc_class, **attributes)

    def rooted(self, ifc_class: str, **attributes: Any) -> Any:
        """Create an instance with a GlobalId."""
        return self.make(ifc_class, GlobalId=ifcopenshell.guid.new(), OwnerHistory=self.owner, **attributes)

    def point(self, values: Vector) -> Any:
        """An ``IfcCartesianPoint``."""
        return self.make("IfcCartesianPoint", Coordinates=[float(value) for value in values])

    def direction(self, values: Vector) -> Any:
        """An ``IfcDirection``."""
        return self.make("IfcDirection", DirectionRatios=[float(value) for value in values])

    def axes(self, origin: Vector = (0, 0, 0), z: Vector | None = None, x: Vector | None = None) -> Any:
        """An ``IfcAxis2Placement3D``."""
        return self.make(
            "IfcAxis2Placement3D",
            Location=self.point(origin),
            Axis=self.direction(z) if z else None,
            RefDirection=self.direction(x) if x else None,
        )

    def place(
        self, origin: Vector = (0, 0, 0), z: Vector | None = None, x: Vector | None = None, parent: Any = None
    ) -> Any:
        """An ``IfcLocalPlacement``."""
        return self.make("IfcLocalPlacement", PlacementRelTo=parent, RelativePlacement=self.axes(origin, z, x))

    def turned(self, degrees_x: Vector, origin: Vector = (0, 0)) -> Any:
        """An ``IfcAxis2Placement2D`` whose x axis has the ratios given."""
        return self.make("IfcAxis2Placement2D", Location=self.point(origin), RefDirection=self.direction(degrees_x))

    def i_profile(self, name: str = "W16X26", *, position: Any = None, scale: float = 1.0) -> Any:
        """W16X26 in mm: 15.7 x 5.50 in, flange 0.345, web 0.250 (AISC Shapes Database, 16th edition)."""
        return self.make(
            "IfcIShapeProfileDef",
            ProfileType="AREA",
            ProfileName=name,
            Position=position or self.turned((1, 0)),
            OverallWidth=139.7 * scale,
            OverallDepth=398.78 * scale,
            WebThickness=6.35 * scale,
            FlangeThickness=8.763 * scale,
            FilletRadius=10.2 * scale,
        )

    def outline(self, corners: Sequence[Vector], name: str = "") -> Any:
        """A closed outline from its corners."""
        ring = self.make("IfcPolyline", Points=[self.point(corner) for corner in (*corners, corners[0])])
        return self.make("IfcArbitraryClosedProfileDef", ProfileType="AREA", ProfileName=name, OuterCurve=ring)

    def extrusion(self, profile: Any, depth: float, *, position: Any = None, along: Vector = (0, 0, 1)) -> Any:
        """An ``IfcExtrudedAreaSolid``; by default along x of the product, depth upwards."""
        return self.make(
            "IfcExtrudedAreaSolid",
            SweptArea=profile,
            Position=position or self.axes((0, 0, 0), (1, 0, 0), (0, 1, 0)),
            ExtrudedDirection=self.direction(along),
            Depth=float(depth),
        )

    def element(
        self, *items: Any, ifc_class: str = "IfcBeam", placement: Any = None, kind: str = "SweptSolid", **more: Any
    ) -> Any:
        """A product with a body, contained in the storey."""
        shape = None
        if items:
            representation = self.make(
                "IfcShapeRepresentation",
                ContextOfItems=self.context,
                RepresentationIdentifier="Body",
                RepresentationType=kind,
                Items=list(items),
            )
            shape = self.make("IfcProductDefinitionShape", Representations=[representation])
        attributes = {"Name": "B1", **more}
        product = self.rooted(ifc_class, ObjectPlacement=placement or self.place(), Representation=shape, **attributes)
        self.rooted("IfcRelContainedInSpatialStructure", RelatedElements=[product], RelatingStructure=self.storey)
        return product

    def read(self, folder: Path) -> tuple[Beam, ...]:
        """Write the model and read its beams as the audit does."""
        path = folder / "model.ifc"
        self.file.write(str(path))
        return read_building(path).beams
