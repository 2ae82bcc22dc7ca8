"""Results written into real exports: nothing of the export is lost, and another program can read what was added."""

from __future__ import annotations

from collections import Counter
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.util.element as element_util
import pytest

from ifcaudit.model.audit import Audit, BeamResult, LoadBalance, RuleSummary, Status
from ifcaudit.outputs import to_ifc

FOLDER = Path(__file__).resolve().parents[3] / "shared" / "models"
MODELS = sorted(FOLDER.glob("*.ifc"))
OURS = {"IfcPropertySet", "IfcRelDefinesByProperties", "IfcPropertySingleValue"}
UNITS = {"IfcSIUnit", "IfcDerivedUnit", "IfcDerivedUnitElement"}

pytestmark = [
    pytest.mark.real_models,
    pytest.mark.skipif(not MODELS, reason="no real models at ../shared/models beside the repository"),
]


def invented_results(model: Any) -> Audit:
    """Return results with invented numbers for everything that is an IfcBeam."""
    beams = tuple(
        BeamResult(
            global_id=beam.GlobalId,
            entity_id=beam.id(),
            name=beam.Name or "",
            storey="",
            status=Status.INADEQUATE if row % 3 else Status.NOT_CHECKED,
            reason="invented: ≥ 1.00",
            utilization=1.0 + row / 1000,
            span=4.0 + row / 100,
            tributary_area=12.0,
            dead_load=25e3,
            moment=80e3,
            live_deflection_limit=4.0 / 360,
        )
        for row, beam in enumerate(sorted(model.by_type("IfcBeam"), key=lambda beam: beam.id()))
    )
    return Audit(
        model_file="model.ifc",
        schema=model.schema,
        rules=RuleSummary(name="invented", title="invented", editions=()),
        beams=beams,
        load_balance=LoadBalance(
            dead_applied=0.0,
            dead_reaching_supports=0.0,
            live_applied=0.0,
            live_reaching_supports=0.0,
            slab_area=0.0,
            assigned_area=0.0,
            unassigned_area=0.0,
        ),
    )


@pytest.mark.parametrize("path", MODELS or [FOLDER], ids=lambda path: path.stem)
def test_everything_is_kept_and_one_set_added(path: Path, tmp_path: Path) -> None:
    """Every original byte stays, instances are only added, each beam has one set; a second audit changes nothing."""
    before = ifcopenshell.open(str(path))
    audit = invented_results(before)
    target = tmp_path / "audited.ifc"
    to_ifc.write(audit, path, target)
    original, copy = path.read_bytes(), target.read_bytes()
    at = original.rindex(b"ENDSEC")
    assert copy.startswith(original[:at])
    assert copy.endswith(original[at:])
    after = ifcopenshell.open(str(target))
    added = Counter(item.is_a() for item in after)
    added.subtract(Counter(item.is_a() for item in before))
    assert {name for name, count in added.items() if count} <= OURS | UNITS
    assert added["IfcPropertySet"] == added["IfcRelDefinesByProperties"] == len(audit.beams)
    for result in audit.beams:
        beam = after.by_id(result.entity_id)
        assert beam.GlobalId == result.global_id
        written = element_util.get_psets(beam)[to_ifc.SET_NAME]
        assert (written["Status"], written["Reason"]) == (result.status.value, result.reason)
    to_ifc.write(audit, target, tmp_path / "again.ifc")
    assert (tmp_path / "again.ifc").read_bytes() == copy
