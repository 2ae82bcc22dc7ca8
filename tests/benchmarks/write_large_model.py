"""Writes a steel building of about 10,000 beams as STEP text, to time an audit on.

An IFC4 export of the usual weight: about 27 entities and 2 KB per beam, with property sets, quantities, types, profile
sets, columns, slabs with openings, and placements nested per storey. Same arguments, same bytes.
"""

from __future__ import annotations

import csv
import sys
import tempfile
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from hashlib import md5
from pathlib import Path

ROOT = Path(__file__).parents[2]
BAY_X, BAY_Y = 9.0, 7.8  # girders span along x, joists along y [m]
JOISTS_PER_BAY = 3
STOREY_HEIGHT = 4.0
LAYERS = (("Screed", 0.04, 2000.0), ("Concrete on metal deck", 0.13, 2350.0))  # name, thickness [m], density [kg/m³]
SLAB_BAYS = (5, 6)  # one slab covers so many bays
SHAFT = (1.2, 2.0)  # openings [m]
COLUMN = "W14X90"
JOISTS = (
    "W14X22",
    "W14X26",
    "W14X30",
    "W14X34",
    "W16X26",
    "W16X31",
    "W16X36",
    "W16X40",
    "W16X45",
    "W16X50",
    "W18X35",
    "W18X40",
    "W18X46",
    "W18X50",
    "W18X55",
    "W18X60",
    "W21X44",
    "W21X50",
    "W21X57",
    "W21X62",
)
GIRDERS = (
    "W21X68",
    "W21X73",
    "W21X83",
    "W21X93",
    "W24X55",
    "W24X62",
    "W24X68",
    "W24X76",
    "W24X84",
    "W24X94",
    "W24X103",
    "W24X104",
    "W27X84",
    "W27X94",
    "W27X102",
    "W27X114",
    "W30X90",
    "W30X99",
    "W30X108",
    "W30X116",
)
GUID_DIGITS = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_$"


@dataclass(frozen=True, slots=True)
class Profile:
    """Dimensions of one I-shape [mm] with its entity number once written."""

    name: str
    depth: float
    width: float
    flange: float
    web: float
    fillet: float


@dataclass(slots=True)
class Step:
    """STEP lines in the making."""

    lines: list[str] = field(default_factory=list)
    roles: int = 0

    def add(self, text: str) -> int:
        """Append one entity and return its number."""
        self.lines.append(text)
        return len(self.lines)

    def guid(self) -> str:
        """The next GlobalId; the order of calls decides it."""
        self.roles += 1
        number = int.from_bytes(md5(str(self.roles).encode(), usedforsecurity=False).digest(), "big")
        return "".join(GUID_DIGITS[number >> shift & 63] for shift in range(126, -1, -6))


def refs(numbers: Sequence[int]) -> str:
    """A list of references."""
    return "(" + ",".join(f"#{number}" for number in numbers) + ")"


def read_profiles(names: Sequence[str]) -> list[Profile]:
    """Dimensions from the catalogue of this project; the fillet is what h/t_w leaves between web and flange."""
    lines = (ROOT / "rules" / "sections" / "aisc_w.csv").read_text(encoding="utf-8").splitlines()
    table = {row["designation"]: row for row in csv.DictReader(line for line in lines if not line.startswith("#"))}
    profiles = []
    for name in names:
        row = table[name]
        depth, width, flange, web = (
            25.4 * float(row[f"{key}_in"]) for key in ("depth", "width", "flange_thickness", "web_thickness")
        )
        fillet = max(0.5 * (depth - web * float(row["web_slenderness"])) - flange, 5.0)
        profiles.append(Profile(name, *(round(value, 3) for value in (depth, width, flange, web, fillet))))
    return profiles


class LargeModel:
    """One building in the making; lengths in metres, written in millimetres."""

    def __init__(self, storeys: int, bays_x: int, bays_y: int) -> None:
        self.step = Step()
        self.storeys, self.bays_x, self.bays_y = storeys, bays_x, bays_y
        self.profiles = {profile.name: profile for profile in read_profiles([COLUMN, *JOISTS, *GIRDERS])}
        self.profile_ids: dict[str, int] = {}
        self.used: dict[str, list[int]] = {name: [] for name in self.profiles}
        self.beams = 0
        self._project()
        for name, profile in self.profiles.items():
            self.profile_ids[name] = self.step.add(
                f"IFCISHAPEPROFILEDEF(.AREA.,'{name}',$,{profile.width},{profile.depth},{profile.web},"
                f"{profile.flange},{profile.fillet},$,$)"
            )
        self._floor_build_up()

    def _project(self) -> None:
        add = self.step.add
        self.origin = add("IFCCARTESIANPOINT((0.,0.,0.))")
        self.up, self.east = add("IFCDIRECTION((0.,0.,1.))"), add("IFCDIRECTION((1.,0.,0.))")
        self.world = add(f"IFCAXIS2PLACEMENT3D(#{self.origin},$,$)")
        person = add("IFCPERSON($,'Benchmark',$,$,$,$,$,$)")
        office = add("IFCORGANIZATION($,'Benchmark',$,$,$)")
        user = add(f"IFCPERSONANDORGANIZATION(#{person},#{office},$)")
        program = add(f"IFCAPPLICATION(#{office},'1','Benchmark writer','benchmark-writer')")
        self.owner = add(f"IFCOWNERHISTORY(#{user},#{program},$,.NOCHANGE.,$,$,$,1705309200)")
        model = add(f"IFCGEOMETRICREPRESENTATIONCONTEXT($,'Model',3,1.E-05,#{self.world},$)")
        kind = "IFCGEOMETRICREPRESENTATIONSUBCONTEXT"
        self.body = add(f"{kind}('Body','Model',*,*,*,*,#{model},$,.MODEL_VIEW.,$)")
        self.axis = add(f"{kind}('Axis','Model',*,*,*,*,#{model},$,.GRAPH_VIEW.,$)")
        units = [
            add(f"IFCSIUNIT(*,.{unit}.,{prefix},.{name}.)")
            for unit, prefix, name in (
                ("LENGTHUNIT", ".MILLI.", "METRE"),
                ("AREAUNIT", "$", "SQUARE_METRE"),
                ("VOLUMEUNIT", "$", "CUBIC_METRE"),
                ("PLANEANGLEUNIT", "$", "RADIAN"),
                ("MASSUNIT", ".KILO.", "GRAM"),
            )
        ]
        assignment = add(f"IFCUNITASSIGNMENT({refs(units)})")
        self.project = add(
            f"IFCPROJECT('{self.step.guid()}',#{self.owner},'Benchmark',$,$,$,$,(#{model}),#{assignment})"
        )
        site_place = add(f"IFCLOCALPLACEMENT($,#{self.world})")
        self.building_place = add(f"IFCLOCALPLACEMENT(#{site_place},#{self.world})")
        guid, owner = self.step.guid, self.owner
        self.site = add(f"IFCSITE('{guid()}',#{owner},'Site',$,$,#{site_place},$,$,.ELEMENT.,$,$,$,$,$)")
        self.building = add(
            f"IFCBUILDING('{guid()}',#{owner},'Building',$,$,#{self.building_place},$,$,.ELEMENT.,$,$,$)"
        )
        for whole, part in ((self.project, self.site), (self.site, self.building)):
            add(f"IFCRELAGGREGATES('{guid()}',#{owner},$,$,#{whole},(#{part}))")

    def _floor_build_up(self) -> None:
        add = self.step.add
        layers = []
        for name, thickness, density in LAYERS:
            material = add(f"IFCMATERIAL('{name}',$,$)")
            single = add(f"IFCPROPERTYSINGLEVALUE('MassDensity',$,IFCMASSDENSITYMEASURE({density}),$)")
            add(f"IFCMATERIALPROPERTIES('Pset_MaterialCommon',$,(#{single}),#{material})")
            layers.append(add(f"IFCMATERIALLAYER(#{material},{1000 * thickness:.6},$,$,$,$,$)"))
        self.thickness = sum(thickness for _, thickness, _ in LAYERS)
        layer_set = add(f"IFCMATERIALLAYERSET({refs(layers)},'Floor',$)")
        self.layers = add(f"IFCMATERIALLAYERSETUSAGE(#{layer_set},.AXIS3.,.NEGATIVE.,{1000 * self.thickness:.6},$)")
        self.slabs: list[int] = []

    def storey(self, number: int) -> int:
        """Write one storey with all that is in it; the elevation is that of the finished floor above the steel."""
        add, guid, owner = self.step.add, self.step.guid, self.owner
        level = number * STOREY_HEIGHT
        point = add(f"IFCCARTESIANPOINT((0.,0.,{1000 * level}))")
        axes = add(f"IFCAXIS2PLACEMENT3D(#{point},$,$)")
        self.storey_place = add(f"IFCLOCALPLACEMENT(#{self.building_place},#{axes})")
        storey = add(
            f"IFCBUILDINGSTOREY('{guid()}',#{owner},'Level {number}',$,$,#{self.storey_place},$,$,.ELEMENT.,"
            f"{1000 * level})"
        )
        members = [*self._columns(number), *self._girders(number), *self._joists(number), *self._floor(number)]
        add(f"IFCRELCONTAINEDINSPATIALSTRUCTURE('{guid()}',#{owner},$,$,{refs(members)},#{storey})")
        return storey

    def _columns(self, number: int) -> Iterator[int]:
        # From finished floor to steel top of the storey above: the shaft of one storey ends under the slab.
        add, guid = self.step.add, self.step.guid
        height = 1000 * (STOREY_HEIGHT if number > 1 else STOREY_HEIGHT - self.thickness)
        foot = -1000 * STOREY_HEIGHT - (1000 * self.thickness if number > 1 else 0.0)
        solid = add(f"IFCEXTRUDEDAREASOLID(#{self.profile_ids[COLUMN]},#{self.world},#{self.up},{height:.6})")
        shape = add(f"IFCSHAPEREPRESENTATION(#{self.body},'Body','SweptSolid',(#{solid}))")
        definition = add(f"IFCPRODUCTDEFINITIONSHAPE($,$,(#{shape}))")
        for i in range(self.bays_x + 1):
            for j in range(self.bays_y + 1):
                point = add(f"IFCCARTESIANPOINT(({1000 * i * BAY_X},{1000 * j * BAY_Y:.6},{foot:.6}))")
                axes = add(f"IFCAXIS2PLACEMENT3D(#{point},#{self.up},#{self.east})")
                place = add(f"IFCLOCALPLACEMENT(#{self.storey_place},#{axes})")
                column = add(
                    f"IFCCOLUMN('{guid()}',#{self.owner},'C{number}-{i}-{j}',$,'{COLUMN}',#{place},#{definition},$,.COLUMN.)"
                )
                self.used[COLUMN].append(column)
                yield column

    def _girders(self, number: int) -> Iterator[int]:
        clear = self.profiles[COLUMN].width / 2000 + 0.012
        for j in range(self.bays_y + 1):
            for i in range(self.bays_x):
                start, end = (i * BAY_X + clear, j * BAY_Y), ((i + 1) * BAY_X - clear, j * BAY_Y)
                yield self._beam(f"G{number}-{i}-{j}", self._girder(number, i, j), start, end)

    def _girder(self, number: int, i: int, j: int) -> str:
        return GIRDERS[(3 * number + i + 5 * j) % len(GIRDERS)]

    def _joists(self, number: int) -> Iterator[int]:
        spacing = BAY_X / JOISTS_PER_BAY
        at_column = self.profiles[COLUMN].depth / 2000 + 0.012
        for k in range(self.bays_x * JOISTS_PER_BAY + 1):
            i, on_column = min(k // JOISTS_PER_BAY, self.bays_x - 1), k % JOISTS_PER_BAY == 0
            for j in range(self.bays_y):
                first, last = (
                    at_column if on_column else self.profiles[self._girder(number, i, line)].width / 2000 + 0.012
                    for line in (j, j + 1)
                )
                start, end = (k * spacing, j * BAY_Y + first), (k * spacing, (j + 1) * BAY_Y - last)
                name = JOISTS[(number + k + 7 * j) % len(JOISTS)]
                yield self._beam(f"J{number}-{k}-{j}", name, start, end)

    def _beam(self, mark: str, name: str, start: tuple[float, float], end: tuple[float, float]) -> int:
        add, guid, owner = self.step.add, self.step.guid, self.owner
        length = max(end[0] - start[0], end[1] - start[1])
        along, across = ("1.,0.,0.", "0.,1.,0.") if end[0] > start[0] else ("0.,1.,0.", "-1.,0.,0.")
        level = -1000 * self.thickness - self.profiles[name].depth / 2
        size = f"{1000 * length:.7}"
        point = add(f"IFCCARTESIANPOINT(({1000 * start[0]:.3f},{1000 * start[1]:.3f},{level:.3f}))")
        third, first = add(f"IFCDIRECTION(({along}))"), add(f"IFCDIRECTION(({across}))")
        axes = add(f"IFCAXIS2PLACEMENT3D(#{point},#{third},#{first})")
        place = add(f"IFCLOCALPLACEMENT(#{self.storey_place},#{axes})")
        zero, tip = add("IFCCARTESIANPOINT((0.,0.,0.))"), add(f"IFCCARTESIANPOINT((0.,0.,{size}))")
        line = add(f"IFCPOLYLINE((#{zero},#{tip}))")
        axis = add(f"IFCSHAPEREPRESENTATION(#{self.axis},'Axis','Curve3D',(#{line}))")
        solid_axes = add(f"IFCAXIS2PLACEMENT3D(#{zero},$,$)")
        solid = add(f"IFCEXTRUDEDAREASOLID(#{self.profile_ids[name]},#{solid_axes},#{self.up},{size})")
        body = add(f"IFCSHAPEREPRESENTATION(#{self.body},'Body','SweptSolid',(#{solid}))")
        shape = add(f"IFCPRODUCTDEFINITIONSHAPE($,$,(#{axis},#{body}))")
        beam = add(f"IFCBEAM('{guid()}',#{owner},'{mark}',$,'{name}',#{place},#{shape},'{self.beams}',.BEAM.)")
        values = (
            ("Reference", f"IFCIDENTIFIER('{name}')"),
            ("Span", f"IFCPOSITIVELENGTHMEASURE({size})"),
            ("Slope", "IFCPLANEANGLEMEASURE(0.)"),
            ("LoadBearing", "IFCBOOLEAN(.T.)"),
            ("IsExternal", "IFCBOOLEAN(.F.)"),
            ("FireRating", "IFCLABEL('R60')"),
        )
        singles = [add(f"IFCPROPERTYSINGLEVALUE('{key}',$,{value},$)") for key, value in values]
        common = add(f"IFCPROPERTYSET('{guid()}',#{owner},'Pset_BeamCommon',$,{refs(singles)})")
        add(f"IFCRELDEFINESBYPROPERTIES('{guid()}',#{owner},$,$,(#{beam}),#{common})")
        quantity = add(f"IFCQUANTITYLENGTH('Length',$,$,{size},$)")
        weight = add(f"IFCQUANTITYWEIGHT('NetWeight',$,$,{1.488164 * float(name.split('X')[1]) * length:.3f},$)")
        quantities = add(
            f"IFCELEMENTQUANTITY('{guid()}',#{owner},'Qto_BeamBaseQuantities',$,$,(#{quantity},#{weight}))"
        )
        add(f"IFCRELDEFINESBYPROPERTIES('{guid()}',#{owner},$,$,(#{beam}),#{quantities})")
        self.used[name].append(beam)
        self.beams += 1
        return beam

    def _floor(self, number: int) -> Iterator[int]:
        wide, deep = SLAB_BAYS
        for i in range(0, self.bays_x, wide):
            for j in range(0, self.bays_y, deep):
                x = (i * BAY_X, min(i + wide, self.bays_x) * BAY_X)
                y = (j * BAY_Y, min(j + deep, self.bays_y) * BAY_Y)
                yield self._slab(f"Slab {number}-{i}-{j}", x, y)

    def _block(self, x: tuple[float, float], y: tuple[float, float], depth: float) -> int:
        add = self.step.add
        corners = [
            add(f"IFCCARTESIANPOINT(({1000 * a:.3f},{1000 * b:.3f}))")
            for a, b in ((x[0], y[0]), (x[1], y[0]), (x[1], y[1]), (x[0], y[1]))
        ]
        outline = add(f"IFCPOLYLINE({refs([*corners, corners[0]])})")
        profile = add(f"IFCARBITRARYCLOSEDPROFILEDEF(.AREA.,$,#{outline})")
        solid = add(f"IFCEXTRUDEDAREASOLID(#{profile},#{self.world},#{self.up},{1000 * depth:.6})")
        shape = add(f"IFCSHAPEREPRESENTATION(#{self.body},'Body','SweptSolid',(#{solid}))")
        return add(f"IFCPRODUCTDEFINITIONSHAPE($,$,(#{shape}))")

    def _slab(self, name: str, x: tuple[float, float], y: tuple[float, float]) -> int:
        add, guid, owner = self.step.add, self.step.guid, self.owner
        point = add(f"IFCCARTESIANPOINT((0.,0.,{-1000 * self.thickness:.6}))")
        axes = add(f"IFCAXIS2PLACEMENT3D(#{point},$,$)")
        place = add(f"IFCLOCALPLACEMENT(#{self.storey_place},#{axes})")
        shape = self._block(x, y, self.thickness)
        slab = add(f"IFCSLAB('{guid()}',#{owner},'{name}',$,$,#{place},#{shape},$,.FLOOR.)")
        self.slabs.append(slab)
        low = add("IFCCARTESIANPOINT((0.,0.,-50.))")
        low_axes = add(f"IFCAXIS2PLACEMENT3D(#{low},$,$)")
        for number, (u, v) in enumerate(((0.5, 0.5), (BAY_X + 3.5, BAY_Y + 0.5))):
            if x[0] + u + SHAFT[0] < x[1] and y[0] + v + SHAFT[1] < y[1]:
                hole = self._block(
                    (x[0] + u, x[0] + u + SHAFT[0]), (y[0] + v, y[0] + v + SHAFT[1]), self.thickness + 0.1
                )
                hole_place = add(f"IFCLOCALPLACEMENT(#{place},#{low_axes})")
                opening = add(
                    f"IFCOPENINGELEMENT('{guid()}',#{owner},'{name} shaft {number}',$,$,#{hole_place},"
                    f"#{hole},$,.OPENING.)"
                )
                add(f"IFCRELVOIDSELEMENT('{guid()}',#{owner},$,$,#{slab},#{opening})")
        return slab

    def finish(self, storeys: Sequence[int]) -> None:
        """Write the relations that gather many elements."""
        add, guid, owner = self.step.add, self.step.guid, self.owner
        add(f"IFCRELAGGREGATES('{guid()}',#{owner},$,$,#{self.building},{refs(storeys)})")
        add(f"IFCRELASSOCIATESMATERIAL('{guid()}',#{owner},$,$,{refs(self.slabs)},#{self.layers})")
        steel = add("IFCMATERIAL('ASTM A992',$,'steel')")
        for name, elements in self.used.items():
            if not elements:
                continue
            member = add(f"IFCMATERIALPROFILE('{name}',$,#{steel},#{self.profile_ids[name]},$,$)")
            profile_set = add(f"IFCMATERIALPROFILESET('{name}',$,(#{member}),$)")
            add(f"IFCRELASSOCIATESMATERIAL('{guid()}',#{owner},$,$,{refs(elements)},#{profile_set})")
            kind = "COLUMN" if name == COLUMN else "BEAM"
            type_object = add(f"IFC{kind}TYPE('{guid()}',#{owner},'{name}',$,$,$,$,$,$,.{kind}.)")
            add(f"IFCRELDEFINESBYTYPE('{guid()}',#{owner},$,$,{refs(elements)},#{type_object})")


HEADER = """ISO-10303-21;
HEADER;
FILE_DESCRIPTION(('ViewDefinition [CoordinationView]'),'2;1');
FILE_NAME('benchmark.ifc','2024-01-15T09:00:00',(''),(''),'benchmark-writer','benchmark-writer','');
FILE_SCHEMA(('IFC4'));
ENDSEC;
DATA;
"""


def write_large_model(path: Path, *, storeys: int = 10, bays_x: int = 10, bays_y: int = 24) -> int:
    """Write the model and return its number of beams: per storey ``x (y + 1) + (3 x + 1) y`` for x by y bays."""
    model = LargeModel(storeys, bays_x, bays_y)
    model.finish([model.storey(number) for number in range(1, storeys + 1)])
    with path.open("w", encoding="ascii", newline="\n") as stream:
        stream.write(HEADER)
        stream.writelines(f"#{number}={text};\n" for number, text in enumerate(model.step.lines, start=1))
        stream.write("ENDSEC;\nEND-ISO-10303-21;\n")
    return model.beams


def cached_model(*, storeys: int = 10, bays_x: int = 10, bays_y: int = 24) -> Path:
    """Return the model in the folder for temporary files, written when this script has changed since."""
    stamp = md5(Path(__file__).read_bytes(), usedforsecurity=False).hexdigest()[:12]
    folder = Path(tempfile.gettempdir()) / "ifcaudit-benchmark"
    folder.mkdir(exist_ok=True)
    path = folder / f"{storeys}-{bays_x}-{bays_y}-{stamp}.ifc"
    if not path.exists():
        unfinished = path.with_suffix(".part")
        write_large_model(unfinished, storeys=storeys, bays_x=bays_x, bays_y=bays_y)
        unfinished.replace(path)
    return path


if __name__ == "__main__":
    target = Path(sys.argv[1]) if len(sys.argv) > 1 else cached_model()
    beams = write_large_model(target)
    print(f"{target}: {beams} beams, {target.stat().st_size / 1e6:.1f} MB")
