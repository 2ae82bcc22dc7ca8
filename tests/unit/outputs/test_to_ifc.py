"""What is written into the model, read back through the library as any other program would."""

import dataclasses
import re
import uuid

import ifcopenshell
import ifcopenshell.util.element as element_util
import ifcopenshell.util.unit as unit_util
import ifcopenshell.validate
import pytest
from output_builders import (
    FEET_AND_POUNDS,
    MILLIMETRES,
    MILLIMETRES_AND_FORCES,
    audit_of,
    bare_result,
    beam_result,
    global_id,
    opened,
    step_file,
)

from ifcaudit.errors import ModelFileError, UsageError
from ifcaudit.outputs import to_ifc

SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3_ADD2")
# Order and types the issue asks for, written out by hand; attributes of the record beside them.
QUANTITIES = {
    "Span": ("span", "IfcPositiveLengthMeasure", "LENGTHUNIT"),
    "TributaryWidth": ("tributary_width", "IfcLengthMeasure", "LENGTHUNIT"),
    "TributaryArea": ("tributary_area", "IfcAreaMeasure", "AREAUNIT"),
    "DeadLoad": ("dead_load", "IfcForceMeasure", "FORCEUNIT"),
    "LiveLoad": ("live_load", "IfcForceMeasure", "FORCEUNIT"),
    "BendingMoment": ("moment", "IfcTorqueMeasure", "TORQUEUNIT"),
    "MomentCapacity": ("moment_capacity", "IfcTorqueMeasure", "TORQUEUNIT"),
    "LiveDeflection": ("live_deflection", "IfcLengthMeasure", "LENGTHUNIT"),
    "LiveDeflectionLimit": ("live_deflection_limit", "IfcLengthMeasure", "LENGTHUNIT"),
}
ORDER = [
    "Status",
    "Reason",
    "Governing",
    "Utilization",
    "FlexureUtilization",
    "ShearUtilization",
    "DeflectionUtilization",
    "Span",
    "TributaryWidth",
    "TributaryArea",
    "DeadLoad",
    "LiveLoad",
    "BendingMoment",
    "MomentCapacity",
    "LiveDeflection",
    "LiveDeflectionLimit",
    "SectionForStrength",
    "SectionForStiffness",
    "SectionProposed",
    "RuleSet",
    "Assumptions",
]


def audited(tmp_path, data, audit, name="out.ifc"):
    """Write the model and its audited copy; return the path of the copy."""
    source = tmp_path / f"source of {name}"
    source.write_bytes(data)
    target = tmp_path / name
    to_ifc.write(audit, source, target)
    return target


def sets_of(model, beam):
    """Return all property sets of our name that reach a beam."""
    return [
        relation.RelatingPropertyDefinition
        for relation in beam.IsDefinedBy
        if relation.is_a("IfcRelDefinesByProperties") and relation.RelatingPropertyDefinition.Name == to_ifc.SET_NAME
    ]


def validation_messages(path):
    """Return what the library's validator says, without instance numbers and order."""
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(path), logger, express_rules=True)
    return sorted(re.sub(r"#\d+|0x[0-9a-f]+", "#", str(item.get("message"))) for item in logger.statements)


def si_value(model, prop):
    """Return a property's value in SI, by its own unit or else the project's, as the library works it out."""
    unit = unit_util.get_property_unit(prop, model)
    assert unit is not None, f"{prop.Name} has no unit"
    return prop.NominalValue.wrappedValue * unit_util.get_unit_scale(unit)


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize(
    "units", [MILLIMETRES, MILLIMETRES_AND_FORCES, FEET_AND_POUNDS, ""], ids=["mm", "mm kN", "ft lbf", "none"]
)
def test_values_read_back_in_si_equal_the_record(tmp_path, audit, schema, units):
    """In every schema, and whatever units the project declares, a value read back in SI is the value of the record."""
    model = opened(audited(tmp_path, step_file(schema, units), audit))
    for result in audit.beams[:2]:
        (written,) = sets_of(model, model.by_guid(result.global_id))
        properties = {prop.Name: prop for prop in written.HasProperties}
        assert [prop.Name for prop in written.HasProperties] == ORDER
        for name, (attribute, measure, _) in QUANTITIES.items():
            assert properties[name].NominalValue.is_a() == measure
            assert si_value(model, properties[name]) == pytest.approx(getattr(result, attribute), rel=1e-10)


@pytest.mark.parametrize("schema", SCHEMAS)
def test_values_are_in_the_units_of_the_project(tmp_path, schema):
    """A 30 ft span is 30 in a project in feet and 9144 in millimetres; 1000 lbf of load is 1000 where pounds rule."""
    audit = audit_of([beam_result(0, dead_load=4448.2216152605, moment=1355.8179483314)])  # NIST SP 811, table B.8
    feet = element_util.get_psets(
        opened(audited(tmp_path, step_file(schema, FEET_AND_POUNDS), audit, "ft.ifc")).by_id(100)
    )[to_ifc.SET_NAME]
    assert (feet["Span"], feet["DeadLoad"], feet["BendingMoment"]) == pytest.approx((30.0, 1000.0, 1000.0), rel=1e-9)
    millimetres = element_util.get_psets(
        opened(audited(tmp_path, step_file(schema, MILLIMETRES), audit, "mm.ifc")).by_id(100)
    )[to_ifc.SET_NAME]
    assert millimetres["Span"] == pytest.approx(9144.0)
    assert millimetres["LiveDeflectionLimit"] == pytest.approx(25.4)


def test_units_are_written_only_where_the_project_declares_none(tmp_path, audit):
    """Forces and moments carry their own, shared unit in a project without one; lengths and areas do not."""
    model = opened(audited(tmp_path, step_file(), audit))
    properties = {prop.Name: prop for prop in sets_of(model, model.by_id(100))[0].HasProperties}
    own = {name for name in QUANTITIES if properties[name].Unit is not None}
    assert own == {"DeadLoad", "LiveLoad", "BendingMoment", "MomentCapacity"}
    assert properties["BendingMoment"].Unit == properties["MomentCapacity"].Unit
    complete = opened(audited(tmp_path, step_file(units=MILLIMETRES_AND_FORCES), audit, "complete.ifc"))
    assert all(prop.Unit is None for prop in sets_of(complete, complete.by_id(100))[0].HasProperties)


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("units", [MILLIMETRES, ""], ids=["mm", "none"])
def test_validates_as_well_as_the_input(tmp_path, audit, schema, units):
    """The library's validator, EXPRESS rules included, finds nothing in the copy that it does not find in the input."""
    target = audited(tmp_path, step_file(schema, units), audit)
    assert validation_messages(target) == validation_messages(tmp_path / "source of out.ifc")


def test_unknown_values_are_left_out(tmp_path):
    """A beam about which only the reason is known gets Status, Reason and RuleSet, no empty properties."""
    audit = audit_of([bare_result(0), beam_result(1, span=0.0, utilization=float("inf"), live_deflection=float("nan"))])
    model = opened(audited(tmp_path, step_file(), audit))
    bare = element_util.get_psets(model.by_id(100))[to_ifc.SET_NAME]
    bare.pop("id")
    assert bare == {
        "Status": "not checked",
        "Reason": "no section: give the beam a profile",
        "RuleSet": "us-lrfd: ASCE 7-22, AISC 360-22",
    }
    second = element_util.get_psets(model.by_id(101))[to_ifc.SET_NAME]
    assert not {"Span", "Utilization", "LiveDeflection"} & set(second)  # a positive length is never 0


@pytest.mark.parametrize(
    "text",
    ["it's", "back\\slash", "≤ 5 × m² – é", "日本 😀", "\\X2\\00E9\\X0\\", "line\nbreak", "", "/* ; */ #1=", "\udc80"],
)
def test_text_reads_back_as_written(tmp_path, text):
    """Any text survives: quotes, backslashes, every script; what is no character at all becomes a question mark."""
    model = opened(audited(tmp_path, step_file(), audit_of([beam_result(0, reason=text or "empty", sized=text)])))
    written = element_util.get_psets(model.by_id(100))[to_ifc.SET_NAME]
    assert written["Reason"] == text.replace("\udc80", "?") or not text
    assert written.get("SectionProposed", "") == text.replace("\udc80", "?")


def test_label_is_cut_to_what_the_schema_allows(tmp_path):
    """An IfcLabel holds 255 characters; an IfcText keeps all."""
    model = opened(audited(tmp_path, step_file(), audit_of([beam_result(0, sized="é" * 300, reason="é" * 300)])))
    written = element_util.get_psets(model.by_id(100))[to_ifc.SET_NAME]
    assert len(written["SectionProposed"]) == 255
    assert written["SectionProposed"].endswith("é...")
    assert written["Reason"] == "é" * 300


@pytest.mark.parametrize("newline", ["\n", "\r\n"], ids=["LF", "CRLF"])
@pytest.mark.parametrize(
    "end", ["ENDSEC;\nEND-ISO-10303-21;\n", "\n  ENDSEC ;  \n\nEND-ISO-10303-21;", "ENDSEC;END-ISO-10303-21;"]
)
def test_every_original_byte_stays(tmp_path, audit, newline, end):
    """The copy is the original with text put before the end of the data section, in the line ends of the file."""
    data = step_file(newline=newline, end=end)
    copy = audited(tmp_path, data, audit).read_bytes()
    at = data.rindex(b"ENDSEC")
    assert copy.startswith(data[:at])
    assert copy.endswith(data[at:])
    added = copy[at : len(copy) - len(data) + at]
    assert added.count(b"\n") == added.count(newline.encode())
    assert opened(tmp_path / "out.ifc").by_type("IfcBeam")


def test_equal_properties_are_shared(tmp_path):
    """Beams with the same values refer to the same property instances: 50 equal beams, 21 properties."""
    audit = audit_of(
        dataclasses.replace(beam_result(0), global_id=global_id(f"beam {i}"), entity_id=100 + i) for i in range(50)
    )
    model = opened(audited(tmp_path, step_file(beams=50), audit))
    assert len(model.by_type("IfcPropertySingleValue")) == len(ORDER)
    assert len(model.by_type("IfcPropertySet")) == len(model.by_type("IfcRelDefinesByProperties")) == 50


def test_global_ids_follow_from_the_beam(tmp_path, audit):
    """GlobalIds are well formed, differ from each other, and depend on nothing but the beam's own."""
    model = opened(audited(tmp_path, step_file(), audit))
    later = opened(
        audited(tmp_path, step_file(beams=9, extra="#900=IFCPERSON($,'Later',$,$,$,$,$,$);"), audit, "later.ifc")
    )
    ids = [item.GlobalId for item in model.by_type("IfcRoot")]
    assert len(set(ids)) == len(ids)
    for beam in audit.beams:
        first, second = (sets_of(file, file.by_guid(beam.global_id))[0].GlobalId for file in (model, later))
        assert first == second
        assert uuid.UUID(ifcopenshell.guid.expand(first))


def test_compressed_agrees_with_the_library():
    """128 bits are written as the library's own function writes them."""
    for number in (0, 1, 2**128 - 1, 0x0123456789ABCDEFFEDCBA9876543210):
        text = number.to_bytes(16, "big")
        assert to_ifc.compressed(text) == ifcopenshell.guid.compress(text.hex())


def test_two_beams_with_one_global_id(tmp_path):
    """Where the model gives two beams the same GlobalId, each still gets a set, with GlobalIds that differ."""
    data = step_file().replace(global_id("beam 1").encode(), global_id("beam 0").encode())
    audit = audit_of([beam_result(0), beam_result(1, global_id=global_id("beam 0"))])
    model = opened(audited(tmp_path, data, audit))
    written = [sets_of(model, model.by_id(number))[0].GlobalId for number in (100, 101)]
    assert len(set(written)) == 2


@pytest.mark.parametrize("schema", SCHEMAS)
def test_owner_history(tmp_path, audit, schema):
    """The file's owner history is reused; without one IFC2X3, which demands it, gets one and later schemas none."""
    model = opened(audited(tmp_path, step_file(schema), audit))
    assert sets_of(model, model.by_id(100))[0].OwnerHistory.id() == 5
    without = opened(audited(tmp_path, step_file(schema, owner=""), audit, "without.ifc"))
    owner = sets_of(without, without.by_id(100))[0].OwnerHistory
    assert (owner is not None) == (schema == "IFC2X3")
    assert len(without.by_type("IfcOwnerHistory")) == (schema == "IFC2X3")


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("owner", [True, False], ids=["owner", "no owner"])
@pytest.mark.parametrize("units", [MILLIMETRES, FEET_AND_POUNDS, ""], ids=["mm", "ft lbf", "none"])
def test_auditing_the_audited_model_changes_nothing(tmp_path, audit, schema, owner, units):
    """Writing the same results into the audited model gives the same file, byte for byte; so does writing twice."""
    data = step_file(schema, units) if owner else step_file(schema, units, owner="")
    first = audited(tmp_path, data, audit)
    assert audited(tmp_path, first.read_bytes(), audit, "again.ifc").read_bytes() == first.read_bytes()
    assert audited(tmp_path, data, audit, "twice.ifc").read_bytes() == first.read_bytes()


@pytest.mark.parametrize("end", ["ENDSEC;END-ISO-10303-21;", "/* end */ ENDSEC;\r\n/* of file */\r\nEND-ISO-10303-21;"])
def test_auditing_again_in_files_of_unusual_form(tmp_path, audit, end):
    """Comments and missing line ends do not keep the second audit from giving the same file."""
    first = audited(tmp_path, step_file(end=end, extra="/* #7=IFCPERSON( ; it's */"), audit)
    assert audited(tmp_path, first.read_bytes(), audit, "again.ifc").read_bytes() == first.read_bytes()


def test_new_results_replace_the_old(tmp_path, audit):
    """A second audit with other results leaves one set per beam, with the new values, and nothing of the old."""
    first = audited(tmp_path, step_file(), audit)
    changed = audit_of([beam_result(0, utilization=0.5, reason="changed"), bare_result(1)])
    second = audited(tmp_path, first.read_bytes(), changed, "second.ifc")
    assert second.read_bytes() == audited(tmp_path, step_file(), changed, "direct.ifc").read_bytes()
    model = opened(second)
    assert [len(sets_of(model, model.by_id(100 + i))) for i in range(3)] == [1, 1, 0]
    assert element_util.get_psets(model.by_id(100))[to_ifc.SET_NAME]["Utilization"] == 0.5


def renumbered(audit, model):
    """Return the results with the instance numbers a re-saved model has."""
    beams = [dataclasses.replace(beam, entity_id=model.by_guid(beam.global_id).id()) for beam in audit.beams]
    return dataclasses.replace(audit, beams=tuple(beams))


@pytest.mark.parametrize("schema", SCHEMAS)
def test_saved_by_another_program_in_between(tmp_path, audit, schema):
    """After another program has saved the model with new numbers and new GlobalIds, there is still one set per beam."""
    first = audited(tmp_path, step_file(schema), audit)
    other = ifcopenshell.file(schema=schema if schema != "IFC4X3_ADD2" else "IFC4X3")
    before = opened(first)  # held on to: its instances do not outlive it
    for item in sorted(before, key=lambda item: -item.id()):
        other.add(item)
    for relation in other.by_type("IfcRelDefinesByProperties"):
        relation.GlobalId = ifcopenshell.guid.new()
    other.write(str(tmp_path / "saved.ifc"))
    saved = opened(tmp_path / "saved.ifc")
    second = audited(tmp_path, (tmp_path / "saved.ifc").read_bytes(), renumbered(audit, saved), "second.ifc")
    model = opened(second)
    for beam in audit.beams:
        (written,) = sets_of(model, model.by_guid(beam.global_id))
        assert [prop.Name for prop in written.HasProperties] == [
            name for name in ORDER if beam.span or name in {"Status", "Reason", "RuleSet"}
        ]
    counts = [len(opened(path).by_type("IfcPropertySingleValue")) for path in (first, second)]
    assert counts[0] == counts[1]
    assert (
        audited(tmp_path, second.read_bytes(), renumbered(audit, model), "third.ifc").read_bytes()
        == second.read_bytes()
    )


def edited(tmp_path, path, edit):
    """Let another program change a model."""
    model = opened(path)
    edit(model)
    model.write(str(tmp_path / "edited.ifc"))
    return (tmp_path / "edited.ifc").read_bytes()


def test_one_set_on_several_beams_is_split(tmp_path, audit):
    """A set that another program has put on all beams is replaced by one set per beam."""

    def share(model):
        first, *others = (item for beam in model.by_type("IfcBeam") for item in beam.IsDefinedBy)
        first.RelatedObjects = model.by_type("IfcBeam")
        for relation in others:
            model.remove(relation)

    data = edited(tmp_path, audited(tmp_path, step_file(), audit), share)
    model = opened(audited(tmp_path, data, audit, "second.ifc"))
    sets = [sets_of(model, model.by_id(100 + i)) for i in range(3)]
    assert [len(found) for found in sets] == [1, 1, 1]
    assert len({found[0].id() for found in sets}) == 3
    assert len(model.by_type("IfcPropertySet")) == 3


def test_several_sets_in_one_relation(tmp_path, audit):
    """Another program's set that shares a relation with ours (IfcPropertySetDefinitionSet) stays on its beam."""
    first = audited(tmp_path, step_file(), audit).read_bytes()
    relation = re.search(rb"(IFCRELDEFINESBYPROPERTIES\([^;]*\(#100\)),(#\d+)\);", first)
    joined = relation[1] + b",IFCPROPERTYSETDEFINITIONSET((" + relation[2] + b",#9001)));"
    other = (
        b"#9000=IFCPROPERTYSINGLEVALUE('Fire',$,IFCLABEL('R60'),$);\n"
        b"#9001=IFCPROPERTYSET('%s',$,'Other',$,(#9000));\n" % global_id("other").encode()
    )
    data = first.replace(relation[0], joined).replace(b"ENDSEC;\nEND-", other + b"ENDSEC;\nEND-")
    assert b"IFCPROPERTYSETDEFINITIONSET" in data
    target = audited(tmp_path, data, audit, "second.ifc")
    model = opened(target)
    definitions = [
        item.Name
        for relation in model.by_id(100).IsDefinedBy
        for item in (
            relation.RelatingPropertyDefinition[0]
            if relation.RelatingPropertyDefinition.is_a("IfcPropertySetDefinitionSet")
            else (relation.RelatingPropertyDefinition,)
        )
    ]
    assert sorted(definitions) == [to_ifc.SET_NAME, "Other"]
    assert audited(tmp_path, target.read_bytes(), audit, "third.ifc").read_bytes() == target.read_bytes()


def test_what_others_added_or_use_is_kept(tmp_path, audit):
    """A property somebody added to our set is carried over; one of ours used in their own set is not taken away."""

    def extend(model):
        (written,) = sets_of(model, model.by_id(100))
        value = model.create_entity("IfcPropertySingleValue", "ReviewedBy", None, model.create_entity("IfcLabel", "AB"))
        status = written.HasProperties[0]
        written.HasProperties = (*written.HasProperties, value)
        theirs = model.create_entity("IfcPropertySet", global_id("theirs"), None, "Theirs", None, (status,))
        model.create_entity(
            "IfcRelDefinesByProperties", global_id("their relation"), None, None, None, (model.by_id(101),), theirs
        )

    data = edited(tmp_path, audited(tmp_path, step_file(), audit), extend)
    target = audited(tmp_path, data, audit, "second.ifc")
    model = opened(target)
    assert element_util.get_psets(model.by_id(100))[to_ifc.SET_NAME]["ReviewedBy"] == "AB"
    assert element_util.get_psets(model.by_id(101))["Theirs"]["Status"] == "inadequate"
    assert audited(tmp_path, target.read_bytes(), audit, "third.ifc").read_bytes() == target.read_bytes()


def test_relation_that_something_refers_to(tmp_path, audit):
    """IFC2X3 lets a document hang on our relation: then it cannot be replaced, and the message says what to do."""

    def attach(model):
        document = model.create_entity("IfcDocumentReference", None, None, "D")
        relation = model.by_id(100).IsDefinedBy[0]
        model.create_entity(
            "IfcRelAssociatesDocument", global_id("document"), model.by_id(5), None, None, (relation,), document
        )

    data = edited(tmp_path, audited(tmp_path, step_file("IFC2X3"), audit), attach)
    with pytest.raises(ModelFileError, match=r"another instance refers to it, so it cannot be replaced; remove the"):
        audited(tmp_path, data, audit, "second.ifc")


def test_file_of_unusual_form_is_written_anew(tmp_path, audit):
    """Text after the end of the file, which a plain append could not handle, does not keep results out."""
    data = step_file(end="ENDSEC;\nEND-ISO-10303-21;\nleft over")
    model = opened(audited(tmp_path, data, audit))
    assert [len(sets_of(model, beam)) for beam in model.by_type("IfcBeam")] == [1, 1, 1]
    assert sorted(item.GlobalId for item in model.by_type("IfcBeam")) == sorted(beam.global_id for beam in audit.beams)


@pytest.mark.parametrize(
    "data", [b"PK\x03\x04....", b"<?xml version='1.0'?><ifcXML/>", b"", b"hello"], ids=["zip", "xml", "empty", "text"]
)
def test_other_kinds_of_file_are_refused(tmp_path, audit, data):
    """Compressed, XML and other files are refused with what to do instead; nothing is written."""
    with pytest.raises(ModelFileError, match=r"STEP files \(\.ifc, starting with ISO-10303-21\) only; save"):
        audited(tmp_path, data, audit)
    assert not (tmp_path / "out.ifc").exists()


def test_results_of_another_model_are_refused(tmp_path, audit):
    """A model exported again meanwhile has other beams at these numbers: refused, not written on the wrong beam."""
    data = step_file().replace(global_id("beam 1").encode(), global_id("another").encode())
    with pytest.raises(ModelFileError, match=f"#101 is not the beam {re.escape(global_id('beam 1'))} of the results"):
        audited(tmp_path, data, audit)


def test_never_onto_the_input(model, audit):
    """Writing onto the input is refused and leaves it as it was."""
    before = model.read_bytes()
    with pytest.raises(UsageError, match="would overwrite its own input"):
        to_ifc.write(audit, model, model)
    assert model.read_bytes() == before


def test_an_open_model_gives_the_same_file(tmp_path, model, audit):
    """Handing over the open model saves work and changes nothing."""
    to_ifc.write(audit, model, tmp_path / "a.ifc")
    to_ifc.write(audit, model, tmp_path / "b.ifc", opened=opened(model))
    assert (tmp_path / "a.ifc").read_bytes() == (tmp_path / "b.ifc").read_bytes()


def test_no_results_is_a_plain_copy(tmp_path, model):
    """A model without candidates is copied as it is."""
    to_ifc.write(audit_of([]), model, tmp_path / "copy.ifc")
    assert (tmp_path / "copy.ifc").read_bytes() == model.read_bytes()


def test_a_property_listed_twice_in_our_set(tmp_path, audit):
    """A set in which another program lists a property twice is replaced like any other."""

    def repeat(model):
        (written,) = sets_of(model, model.by_id(100))
        written.HasProperties = (*written.HasProperties, written.HasProperties[7])

    data = edited(tmp_path, audited(tmp_path, step_file(), audit), repeat)
    model = opened(audited(tmp_path, data, audit, "second.ifc"))
    (written,) = sets_of(model, model.by_id(100))
    assert [prop.Name for prop in written.HasProperties] == ORDER


def test_a_set_of_ours_that_a_type_holds(tmp_path, audit):
    """A set of our name that somebody has put on a beam type stays there and leaves the beam, which gets its own."""

    def hold(model):
        (written,) = sets_of(model, model.by_id(100))
        model.create_entity(
            "IfcBeamType", global_id("type"), None, "T", None, None, (written,), None, None, None, "BEAM"
        )

    data = edited(tmp_path, audited(tmp_path, step_file(), audit), hold)
    target = audited(tmp_path, data, audit_of([beam_result(0, utilization=0.25)]), "second.ifc")
    model = opened(target)
    (written,) = sets_of(model, model.by_id(100))
    (held,) = model.by_type("IfcBeamType")[0].HasPropertySets
    assert held.id() != written.id()
    assert element_util.get_psets(model.by_id(100))[to_ifc.SET_NAME]["Utilization"] == 0.25
