"""How the text of a STEP file is split, compared with what the library reads."""

import ifcopenshell
import pytest
from output_builders import step_file

from ifcaudit.outputs.step_text import NotAppendableError, StepText, arguments, real, references


def instance_numbers(data):
    """Return the instance numbers the library finds."""
    model = ifcopenshell.file.from_string(data.decode())
    return {item.id() for item in model}


@pytest.mark.parametrize(
    "extra",
    [
        "#900=IFCPERSON('a;b #7=IFCX(',$,$,$,$,$,$,$);",
        "#900 =\n IFCPERSON ( 'it''s' ,\n$,$,$,$,$,$,$ ) ;",
        "/* #950=IFCPERSON('x',$,$,$,$,$,$,$); it's */#900=IFCPERSON('a',$,/* ; */$,$,$,$,$,$);",
        "#900=IFCPERSON('a',$,$,$,$,$,$,$);#901=IFCPERSON('b',$,$,$,$,$,$,$);",
        "#900=IFCPERSON('not /* a comment',$,$,$,$,$,$,$);\n#901=IFCPERSON('*/',$,$,$,$,$,$,$);",
        "#900=IFCPERSON('\\S\\'b',$,$,$,$,$,$,$);\n#901=IFCPERSON('c\\\\',$,$,$,$,$,$,$);",
        "#900=IfcPerson('lower case',$,$,$,$,$,$,$);",
    ],
    ids=["string", "spread", "comment", "one line", "comment in string", "shifted quote", "case"],
)
def test_instances_are_those_the_library_finds(extra):
    """Strings, comments, spacing and line breaks hide no instance and show none that is not there."""
    data = step_file(extra=extra)
    assert set(StepText(data).index) == instance_numbers(data)
    assert StepText(data).numbers >= instance_numbers(data)
    assert StepText(data).statement(100).startswith(b"#100=IFCBEAM(")
    assert StepText(data).statement(12345) == b""


def test_removing_gives_the_bytes_without_the_line():
    """Removing an instance takes its line, and replacing one leaves every other byte."""
    data = step_file(newline="\r\n", extra="#900=IFCPERSON('a',$,$,$,$,$,$,$);")
    assert StepText(data).replaced({900: b""}).data == step_file(newline="\r\n")
    changed = step_file(newline="\r\n", extra="#900=IFCPERSON($,$,$,$,$,$,$,$);")
    assert StepText(data).replaced({900: b"#900=IFCPERSON($,$,$,$,$,$,$,$);"}).data == changed


@pytest.mark.parametrize(
    "end",
    ["", "ENDSEC;\n", "ENDSEC;\nEND-ISO-10303-21;\nmore", "ENDSEC;\nEND-ISO-10303-21;\nSIGNATURE;\nabc\nENDSEC;\n"],
)
def test_unusual_ends_are_not_appended_to(end):
    """A file that is cut off, or goes on after its end, is no file to append to."""
    with pytest.raises(NotAppendableError, match="no data section that ends with ENDSEC"):
        StepText(step_file(end=end))


def test_text_that_is_no_statement():
    """An apostrophe without its partner is found out instead of guessed around."""
    text = StepText(step_file(extra="#900=IFCPERSON('a,$,$,$,$,$,$,$);\n/* */"))
    with pytest.raises(NotAppendableError, match="is no statement"):
        _ = text.index


def test_arguments_and_references():
    """Commas and numbers inside strings, lists and typed values do not count."""
    statement = b"#5=IFCX('a,''(#3',(#1,#2),IFCLABEL('x,y'),/* , */$,#4);"
    assert arguments(statement) == [b"'a,''(#3'", b"(#1,#2)", b"IFCLABEL('x,y')", b"$", b"#4"]
    assert references(statement) == [5, 1, 2, 4]


@pytest.mark.parametrize("value", [1.0, 9144.0, 1 / 3, 1e-12, 6.02e23, -0.0, 123456789.123, 1e16])
def test_reals_read_back(value):
    """A real number has a point, as ISO 10303-21 demands, and reads back to 12 significant digits."""
    text = real(value)
    assert "." in text
    assert float(text) == pytest.approx(value, rel=1e-11)
    model = ifcopenshell.file.from_string(
        step_file(extra=f"#900=IFCPROPERTYSINGLEVALUE('x',$,IFCREAL({text}),$);").decode()
    )
    assert model.by_id(900).NominalValue.wrappedValue == pytest.approx(value, rel=1e-11)
