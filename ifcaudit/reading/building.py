"""From an IFC file to the building the later stages work on."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Sequence
from pathlib import Path

from ifcaudit.errors import ModelFileError
from ifcaudit.model.building import Beam, Building, Slab
from ifcaudit.reading.ifc_file import Model, open_model
from ifcaudit.reading.malformed import MALFORMED

Progress = Callable[[str], None]


def _silent(_: str) -> None:
    """Report nothing."""


def read_building(path: Path, progress: Progress | None = None) -> Building:
    """Read beams, slabs, columns and walls of a model in world coordinates and SI units.

    Args:
        path: The IFC file.
        progress: Called with the name of each step before it starts.

    Returns:
        The building, with remarks on what could not be read.

    Raises:
        ModelFileError: The file cannot be opened or is no IFC model.
    """
    try:
        return _read(path, progress or _silent)
    except MALFORMED as error:
        raise ModelFileError(
            f"{path}: is malformed ({type(error).__name__}: {error}); repair it, or export the model again"
        ) from error


def _read(path: Path, report: Progress) -> Building:
    from ifcaudit.reading.beams import read_beams
    from ifcaudit.reading.bodies import Bodies
    from ifcaudit.reading.placements import Placements
    from ifcaudit.reading.profiles import Profiles
    from ifcaudit.reading.relations import Relations
    from ifcaudit.reading.slabs import read_slabs
    from ifcaudit.reading.supports import read_supports

    report("opening the model")
    model = open_model(path)
    placements, relations = Placements(model), Relations(model)
    profiles = Profiles(model, placements)
    bodies = Bodies(model, placements, profiles)
    report("reading beams")
    beams = read_beams(model, bodies, profiles, relations)
    report("reading slabs")
    slabs = read_slabs(model, placements, bodies, relations)
    report("reading columns and walls")
    supports, support_findings = read_supports(model, bodies, relations)
    return Building(
        file_name=path.name,
        schema=model.schema,
        length_unit=model.length_unit,
        beams=beams,
        slabs=slabs,
        supports=supports,
        findings=(*_remarks(model, beams, slabs, supported=bool(supports)), *support_findings),
    )


def _remarks(model: Model, beams: Sequence[Beam], slabs: Sequence[Slab], *, supported: bool) -> tuple[str, ...]:
    remarks = list(model.findings)
    if not beams:
        remarks.append("the model has no IfcBeam, and no IfcMember that could be a joist, rafter or purlin")
    if not slabs:
        remarks.append(
            "the model has no slab or roof: no floor load reaches any beam; read the file that holds the floors"
        )
    if not supported:
        remarks.append("the model has no column or wall; read the file that holds them, or state the supports")
    remarks.extend(_left_out(model))
    unreadable = Counter(slab.unreadable for slab in slabs if slab.unreadable)
    remarks.extend(f"{count} of {len(slabs)} slabs cannot be read: {reason}" for reason, count in unreadable.items())
    return tuple(remarks)


_WEIGHING = (
    ("IfcCovering", "coverings"),
    ("IfcPlate", "plates"),
    ("IfcStair", "stairs"),
    ("IfcRamp", "ramps"),
    ("IfcCurtainWall", "curtain walls"),
    ("IfcBuildingElementProxy", "proxies"),
)
"""Elements that may rest on beams and are not taken down."""


def _left_out(model: Model) -> list[str]:
    """Say which elements of the model weigh something that no beam is given."""
    counts = [(len(model.file.by_type(ifc_class)), plural) for ifc_class, plural in _WEIGHING]
    named = ", ".join(f"{count} {plural}" for count, plural in counts if count)
    if not named:
        return []
    return [f"the weight of these is not taken down: {named}; add what rests on floors with --superimposed-dead"]
