"""What audit.json holds."""

import json
import math

import pytest
from output_builders import audit_of, bare_result, beam_result

from ifcaudit.model.audit import LoadBalance
from ifcaudit.outputs import to_json


def written(audit, tmp_path):
    """Write and read back, refusing what is no strict JSON."""
    path = tmp_path / "audit.json"
    to_json.write(audit, path)

    def refuse(name):
        raise AssertionError(f"{name} is no JSON number")

    return json.loads(path.read_text(encoding="utf-8"), parse_constant=refuse)


def test_load_balance_in_kilonewtons(tmp_path, audit):
    """The balance has the agreed names, in kN and m², with what is lost as a residual in kN and per cent."""
    balance = written(audit, tmp_path)["load_balance"]
    assert balance == {
        "dead_applied_kN": 200.0,
        "dead_reaching_supports_kN": 199.0,
        "dead_unsupported_kN": 1.0,
        "dead_residual_kN": 1.0,
        "dead_residual_percent": 0.5,
        "live_applied_kN": 0.0,
        "live_reaching_supports_kN": 0.0,
        "live_unsupported_kN": 0.0,
        "live_residual_kN": 0.0,
        "live_residual_percent": None,  # nothing applied: no share can be given
        "slab_area_m2": 100.0,
        "assigned_area_m2": 99.5,
        "unassigned_area_m2": 0.5,
    }


def test_beam_in_si_with_checks_and_sources(tmp_path, audit):
    """A beam is written in SI with unit suffixes, its checks with clauses, its inputs with source, place and remedy."""
    beam = written(audit, tmp_path)["beams"][0]
    assert beam["span_m"] == 9.144
    assert beam["moment_N_m"] == 281_250.0
    assert beam["dead_load_N"] == 98765.4321
    assert beam["status"] == "inadequate"
    check = beam["checks"][0]
    assert (check["name"], check["unit"], check["clause"]) == ("flexure", "N m", "AISC 360-22 F2.1")
    assert check["details"] == [{"name": "L_b", "value": 0.0, "unit": "m"}]
    grade = {"name": "grade", "value": "A992", "source": "assumed", "where": "default", "remedy": "name the grade"}
    assert beam["inputs"][1] == grade


def test_unknown_and_not_finite_are_null(tmp_path):
    """Unknown values, nan and infinity are null: the file is strict JSON."""
    first, second = written(audit_of([bare_result(0), beam_result(1, utilization=math.inf, span=math.nan)]), tmp_path)[
        "beams"
    ]
    assert first["span_m"] is None
    assert (second["utilization"], second["span_m"]) == (None, None)


def test_rules_assumptions_cautions(tmp_path, audit):
    """The heading says by which rules and editions, on what assumptions and with which cautions."""
    document = written(audit, tmp_path)
    assert document["rules"]["editions"] == ["ASCE 7-22", "AISC 360-22"]
    assert document["rules"]["values"][0]["value"] == "50 psf"
    assert document["assumptions"] == [{"text": "grade A992", "remedy": "name the grade", "beams": 2}]
    assert (document["findings"], document["cautions"], document["version"]) == (
        ["no roof found"],
        ["a screening aid"],
        "0.1.0",
    )


def test_same_audit_same_bytes_one_beam_one_line(tmp_path, audit):
    """Writing twice gives the same bytes, last bits of floating point do not show, and a beam is one line."""
    to_json.write(audit, tmp_path / "a.json")
    to_json.write(audit, tmp_path / "b.json")
    assert (tmp_path / "a.json").read_bytes() == (tmp_path / "b.json").read_bytes()
    lines = (tmp_path / "a.json").read_text(encoding="utf-8").splitlines()
    assert sum('"global_id"' in line for line in lines) == len(audit.beams)
    assert to_json.plain(0.1 + 0.2) == 0.3


def test_no_beams_and_odd_names(tmp_path):
    """An audit without beams, and a name that is no proper Unicode, still give strict JSON."""
    assert written(audit_of([]), tmp_path)["beams"] == []
    (beam,) = written(audit_of([beam_result(0, name='"ü"\udc80\n')]), tmp_path)["beams"]
    assert beam["name"] == '"ü"\udc80\n'


@pytest.mark.parametrize("case", ["dead", "live"])
def test_residual_is_applied_minus_reaching(case):
    """The residual is what was applied and reached no support: 80 kN of 100 kN leave 20 kN, 20 per cent."""
    loads = dict.fromkeys(
        ("dead_applied", "dead_reaching_supports", "live_applied", "live_reaching_supports", "slab_area"), 0.0
    )
    loads |= {f"{case}_applied": 100e3, f"{case}_reaching_supports": 80e3, "assigned_area": 0.0, "unassigned_area": 0.0}
    balance = to_json.load_balance(LoadBalance(**loads))
    assert (balance[f"{case}_residual_kN"], balance[f"{case}_residual_percent"]) == (20.0, 20.0)
