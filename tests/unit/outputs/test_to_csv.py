"""What beams.csv and failures.csv hold."""

import csv
import math
import re
from pathlib import Path

import pytest
from output_builders import audit_of, bare_result, beam_result

from ifcaudit.model.audit import Status
from ifcaudit.outputs import to_csv

# The headings the issue asks for, written out by hand.
SI_HEADINGS = (
    "global_id,name,storey,status,reason,governing,utilization,section,section_source,grade,grade_source,span_m,"
    "tributary_width_m,tributary_area_m2,dead_load_kN,live_load_kN,moment_kNm,moment_capacity_kNm,flexure_utilization,"
    "shear_kN,shear_capacity_kN,shear_utilization,live_deflection_mm,live_deflection_limit_mm,deflection_utilization,"
    "sized_for_strength,sized_for_stiffness,sized,start_support,end_support,findings"
)


def rows_of(path: Path) -> list[dict[str, str]]:
    """Read a table as any program would."""
    with path.open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def test_columns_and_numbers_in_si(tmp_path, audit):
    """The SI table has the agreed headings in order, and plain numbers in m, kN, kNm and mm."""
    path = tmp_path / "beams.csv"
    to_csv.write(audit, path, units="si")
    assert path.read_text(encoding="utf-8").splitlines()[0] == SI_HEADINGS
    first = rows_of(path)[0]
    assert first["span_m"] == "9.1440"
    assert first["dead_load_kN"] == "98.765"  # 98 765.4321 N
    assert first["moment_kNm"] == "281.250"
    assert first["live_deflection_limit_mm"] == "25.4000"  # 9.144 m / 360 = 1 in
    assert first["utilization"] == "1.2500"
    assert first["findings"] == "first remark; second remark"


def test_numbers_in_feet_and_kips(tmp_path, audit):
    """The US table converts to ft, ft², kip, kip-ft and in: 30 ft span, 300 ft², limit 30 ft / 360 = 1 in."""
    path = tmp_path / "beams.csv"
    to_csv.write(audit, path, units="us")
    first = rows_of(path)[0]
    assert first["span_ft"] == "30.0000"
    assert first["tributary_area_ft2"] == "300.000"
    assert first["live_load_kip"] == "15.000"  # 66 723.3 N / 4448.2216 N (lbf of NIST SP 811, table B.8)
    assert first["live_deflection_limit_in"] == "1.0000"


def test_unknown_values_are_empty(tmp_path):
    """A value that is not known, or not finite, is an empty cell: never nan, inf or None."""
    path = tmp_path / "beams.csv"
    to_csv.write(audit_of([bare_result(0), beam_result(1, utilization=math.inf, span=math.nan)]), path, units="si")
    first, second = rows_of(path)
    assert [first[name] for name in ("span_m", "utilization", "moment_kNm", "sized")] == ["", "", "", ""]
    assert (second["utilization"], second["span_m"]) == ("", "")
    assert not re.search(r"\b(nan|inf|None)\b", path.read_text(encoding="utf-8"))


def test_failures_are_the_inadequate_ones_worst_first(tmp_path):
    """failures.csv lists inadequate beams by falling utilization; beams.csv lists all by instance number."""
    results = [
        beam_result(3, utilization=1.1),
        beam_result(0, utilization=1.3),
        beam_result(1, status=Status.ADEQUATE, utilization=0.7),
        beam_result(2, utilization=2.0),
    ]
    for name, writer in to_csv.FILES.items():
        writer(audit_of(results), tmp_path / "unused.ifc", tmp_path / name, "si")
    assert [row["name"] for row in rows_of(tmp_path / "failures.csv")] == ["Beam 2", "Beam 0", "Beam 3"]
    assert [row["name"] for row in rows_of(tmp_path / "beams.csv")] == ["Beam 0", "Beam 1", "Beam 2", "Beam 3"]


@pytest.mark.parametrize("text", ["=1+1", "+1", "-1", "@SUM(A1)", "\t=1", "\r=1", "  =1+1", '=HYPERLINK("x","y")'])
def test_text_cannot_become_a_formula(tmp_path, text):
    """A text that a spreadsheet would evaluate starts with an apostrophe (OWASP, CSV Injection)."""
    path = tmp_path / "beams.csv"
    to_csv.write(audit_of([beam_result(0, name=text, findings=(text,))]), path, units="si")
    (row,) = rows_of(path)
    assert row["name"].startswith("'")
    assert row["findings"].startswith("'")
    assert row["name"].endswith(text.lstrip("\r"))


def test_one_beam_is_one_line(tmp_path):
    """Line breaks inside a text become spaces, so that a row stays a line; commas and quotes are quoted."""
    path = tmp_path / "beams.csv"
    to_csv.write(audit_of([beam_result(0, name='a\r\nb\nc,"d"\u2028é')]), path, units="si")
    assert len(path.read_bytes().split(b"\n")) == 3  # heading, beam, and nothing after the last line feed
    assert b"\r" not in path.read_bytes()
    assert rows_of(path)[0]["name"] == 'a b c,"d" é'


@pytest.mark.parametrize(
    ("value", "decimals", "text"),
    [(-1e-9, 4, "0.0000"), (1e22, 2, "10000000000000000000000.00"), (1e-7, 4, "0.0000"), (-2.5, 3, "-2.500")],
)
def test_numbers_have_no_exponent_and_no_negative_zero(value, decimals, text):
    """Very small and very large numbers are written in full, and zero has no sign."""
    assert to_csv.plain_number(value, decimals) == text
