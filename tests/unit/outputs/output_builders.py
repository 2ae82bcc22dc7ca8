"""Builders of audits and of small models in three schemas, for the tests of the outputs."""

from __future__ import annotations

import hashlib
from collections.abc import Iterable
from pathlib import Path
from typing import Any

import ifcopenshell
from ifcopenshell.guid import compress

from ifcaudit.model.audit import (
    Assumption,
    Audit,
    BeamResult,
    Check,
    CheckName,
    LoadBalance,
    RuleSummary,
    Status,
)
from ifcaudit.provenance import Source, Sourced

OWNER_HISTORY = """\
#1=IFCPERSON($,'Weber',$,$,$,$,$,$);
#2=IFCORGANIZATION($,'Own office',$,$,$);
#3=IFCPERSONANDORGANIZATION(#1,#2,$);
#4=IFCAPPLICATION(#2,'1','Modeller','modeller');
#5=IFCOWNERHISTORY(#3,#4,$,.NOCHANGE.,$,$,$,1600000000);
"""
MILLIMETRES = """\
#10=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);
#11=IFCSIUNIT(*,.AREAUNIT.,$,.SQUARE_METRE.);
#19=IFCUNITASSIGNMENT((#10,#11));
"""
MILLIMETRES_AND_FORCES = """\
#10=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);
#11=IFCSIUNIT(*,.AREAUNIT.,.MILLI.,.SQUARE_METRE.);
#12=IFCSIUNIT(*,.FORCEUNIT.,.KILO.,.NEWTON.);
#13=IFCDERIVEDUNITELEMENT(#12,1);
#14=IFCDERIVEDUNITELEMENT(#10,1);
#15=IFCDERIVEDUNIT((#13,#14),.TORQUEUNIT.,$);
#19=IFCUNITASSIGNMENT((#10,#11,#12,#15));
"""
FEET_AND_POUNDS = """\
#10=IFCSIUNIT(*,.LENGTHUNIT.,$,.METRE.);
#11=IFCDIMENSIONALEXPONENTS(1,0,0,0,0,0,0);
#12=IFCMEASUREWITHUNIT(IFCLENGTHMEASURE(0.0254),#10);
#13=IFCCONVERSIONBASEDUNIT(#11,.LENGTHUNIT.,'INCH',#12);
#14=IFCMEASUREWITHUNIT(IFCLENGTHMEASURE(12.),#13);
#15=IFCCONVERSIONBASEDUNIT(#11,.LENGTHUNIT.,'FOOT',#14);
#16=IFCSIUNIT(*,.FORCEUNIT.,$,.NEWTON.);
#17=IFCDIMENSIONALEXPONENTS(1,1,-2,0,0,0,0);
#18=IFCMEASUREWITHUNIT(IFCFORCEMEASURE(4.4482216152605),#16);
#20=IFCCONVERSIONBASEDUNIT(#17,.FORCEUNIT.,'POUND-FORCE',#18);
#21=IFCDERIVEDUNITELEMENT(#20,1);
#22=IFCDERIVEDUNITELEMENT(#15,1);
#23=IFCDERIVEDUNIT((#21,#22),.TORQUEUNIT.,$);
#19=IFCUNITASSIGNMENT((#15,#20,#23));
"""


def global_id(text: str) -> str:
    """Return an IFC GlobalId that follows from a text."""
    return compress(hashlib.blake2b(text.encode(), digest_size=16).hexdigest())


def step_file(
    schema: str = "IFC4",
    units: str = MILLIMETRES,
    owner: str = OWNER_HISTORY,
    beams: int = 3,
    newline: str = "\n",
    extra: str = "",
    end: str = "ENDSEC;\nEND-ISO-10303-21;\n",
) -> bytes:
    """Return a small model: a project with units, a storey, beams #100, #101 … without geometry."""
    if schema == "IFC4X3_ADD2":
        units = units.replace(".TORQUEUNIT.,$)", ".TORQUEUNIT.,$,$)")
    by = "#5" if owner else "$"
    tail = "" if schema == "IFC2X3" else ",.BEAM."
    members = ",".join(f"#{100 + i}" for i in range(beams))
    lines = [
        "ISO-10303-21;",
        "HEADER;",
        "FILE_DESCRIPTION(('ViewDefinition [ReferenceView]'),'2;1');",
        "FILE_NAME('tower.ifc','2021-02-03T04:05:06',(''),(''),'','','');",
        f"FILE_SCHEMA(('{schema}'));",
        "ENDSEC;",
        "DATA;",
        *owner.splitlines(),
        *units.splitlines(),
        "#30=IFCCARTESIANPOINT((0.,0.,0.));",
        "#31=IFCAXIS2PLACEMENT3D(#30,$,$);",
        "#32=IFCGEOMETRICREPRESENTATIONCONTEXT($,'Model',3,1.E-05,#31,$);",
        f"#33=IFCPROJECT('{global_id('project')}',{by},'It''s; a #9=test',$,$,$,$,(#32),{'#19' if units else '$'});",
        "#34=IFCLOCALPLACEMENT($,#31);",
        f"#36=IFCBUILDING('{global_id('building')}',{by},'B',$,$,#34,$,$,.ELEMENT.,$,$,$);",
        f"#35=IFCBUILDINGSTOREY('{global_id('storey')}',{by},'Level 1',$,$,#34,$,$,.ELEMENT.,0.);",
        f"#37=IFCRELAGGREGATES('{global_id('in project')}',{by},$,$,#33,(#36));",
        f"#38=IFCRELAGGREGATES('{global_id('in building')}',{by},$,$,#36,(#35));",
        *(
            f"#{100 + i}=IFCBEAM('{global_id(f'beam {i}')}',{by},'Beam {i}',$,$,#34,$,'#{i}'{tail});"
            for i in range(beams)
        ),
        f"#90=IFCRELCONTAINEDINSPATIALSTRUCTURE('{global_id('contained')}',{by},$,$,({members}),#35);",
        *extra.splitlines(),
    ]
    return (newline.join((*lines, "")) + end.replace("\n", newline)).encode()


def beam_result(number: int, **changes: Any) -> BeamResult:
    """Return a result for beam ``#100 + number`` of :func:`step_file`, numbers of a loaded floor beam."""
    values: dict[str, Any] = {
        "global_id": global_id(f"beam {number}"),
        "entity_id": 100 + number,
        "name": f"Beam {number}",
        "storey": "Level 1",
        "status": Status.INADEQUATE,
        "reason": "flexure: 1.25 of the design strength",
        "governing": "flexure",
        "utilization": 1.25,
        "section": "W16X26",
        "section_source": "model",
        "grade": "A992",
        "grade_source": "assumed",
        "span": 9.144,
        "tributary_width": 3.048 + 0.1 * number,
        "tributary_area": 27.870912,
        "dead_load": 98765.4321,
        "live_load": 66723.3,
        "moment": 281_250.0,
        "moment_capacity": 225_000.0,
        "flexure_utilization": 1.25,
        "shear": 123_000.0,
        "shear_capacity": 314_000.0,
        "shear_utilization": 123 / 314,
        "live_deflection": 0.0217,
        "live_deflection_limit": 9.144 / 360,
        "deflection_utilization": 0.0217 / (9.144 / 360),
        "sized_for_strength": "W18X35",
        "sized_for_stiffness": "W16X26",
        "sized": "W18X35",
        "start_support": "column C1",
        "end_support": "girder G1",
        "findings": ("first remark", "second remark"),
        "assumptions": ("grade A992 assumed", "simple supports"),
        "checks": (
            Check(
                name=CheckName.FLEXURE,
                demand=281_250.0,
                capacity=225_000.0,
                utilization=1.25,
                combination="1.2D + 1.6L",
                clause="AISC 360-22 F2.1",
                limit_state="yielding",
                position=4.572,
                details=(("L_b", 0.0, "m"),),
            ),
        ),
        "inputs": (
            ("span", Sourced(value=9.144, source=Source.DERIVED, where="support centres")),
            ("grade", Sourced(value="A992", source=Source.ASSUMED, where="default", remedy="name the grade")),
        ),
    }
    return BeamResult(**(values | changes))


def bare_result(number: int, status: Status = Status.NOT_CHECKED, **changes: Any) -> BeamResult:
    """Return a result with nothing known but its reason."""
    return BeamResult(
        global_id=global_id(f"beam {number}"),
        entity_id=100 + number,
        name=f"Beam {number}",
        storey="",
        status=status,
        reason="no section: give the beam a profile",
        **changes,
    )


def audit_of(beams: Iterable[BeamResult], **changes: Any) -> Audit:
    """Return an audit with these results."""
    values: dict[str, Any] = {
        "model_file": "tower.ifc",
        "schema": "IFC4",
        "rules": RuleSummary(
            name="us-lrfd",
            title="United States, strength design",
            editions=("ASCE 7-22", "AISC 360-22"),
            values=(("floor live load", "50 psf", "ASCE 7-22 Table 4.3-1"),),
        ),
        "beams": tuple(beams),
        "load_balance": LoadBalance(
            dead_applied=200_000.0,
            dead_reaching_supports=199_000.0,
            live_applied=0.0,
            live_reaching_supports=0.0,
            slab_area=100.0,
            assigned_area=99.5,
            unassigned_area=0.5,
            dead_unsupported=1_000.0,
        ),
        "assumptions": (Assumption(text="grade A992", remedy="name the grade", beams=2),),
        "findings": ("no roof found",),
        "cautions": ("a screening aid",),
        "version": "0.1.0",
    }
    return Audit(**(values | changes))


_KEPT: list[Any] = []


def opened(path: Path) -> Any:
    """Open a model and hold on to it: the library's instances do not outlive their model."""
    _KEPT.append(ifcopenshell.open(str(path)))
    return _KEPT[-1]
