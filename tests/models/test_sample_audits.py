"""The audit of the sample models agrees with the hand calculations of ``sample_facts``, in tables and property sets."""

from __future__ import annotations

import csv
import json
import math
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.util.element
import ifcopenshell.util.unit
import ifcopenshell.validate
import pytest
from models import sample_facts
from models.sample_facts import OFFICE, OFFICE_FACTS, WORKSHOP, WORKSHOP_FACTS, Fact

from ifcaudit.cli import main

ROOT = Path(__file__).parents[2]
UNITS = {OFFICE: "si", WORKSHOP: "us"}
SUFFIXES = {
    "si": {"length": "m", "area": "m2", "force": "kN", "moment": "kNm", "deflection": "mm"},
    "us": {"length": "ft", "area": "ft2", "force": "kip", "moment": "kip-ft", "deflection": "in"},
}
COLUMNS = {
    "span": "length",
    "tributary_width": "length",
    "tributary_area": "area",
    "dead_load": "force",
    "live_load": "force",
    "moment": "moment",
    "moment_capacity": "moment",
    "shear": "force",
    "shear_capacity": "force",
    "live_deflection": "deflection",
    "live_deflection_limit": "deflection",
}
# The hand calculations keep three significant figures in tabulated properties and round conversions at seven; the
# table prints four decimals. 0.05 % covers both and is far below what any modelling error would make.
CLOSE = 5e-4


@dataclass(frozen=True, slots=True)
class Run:
    """One audited sample: table rows by name, JSON record, audited model."""

    status: int
    rows: dict[str, dict[str, str]]
    failures: list[dict[str, str]]
    record: dict[str, Any]
    model: Path
    units: str


@pytest.fixture(scope="module")
def runs(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Run]:
    """Audit both samples once, as a user does."""
    found = {}
    for name, units in UNITS.items():
        out = tmp_path_factory.mktemp("audit") / "out"
        status = main(["audit", str(ROOT / "sample_models" / name), "--out", str(out), "--units", units, "--quiet"])
        tables = []
        for table in ("beams.csv", "failures.csv"):
            with (out / table).open(encoding="utf-8", newline="") as file:
                tables.append(list(csv.DictReader(file)))
        found[name] = Run(
            status=status,
            rows={row["name"]: row for row in tables[0]},
            failures=tables[1],
            record=json.loads((out / "audit.json").read_text(encoding="utf-8")),
            model=out / f"{Path(name).stem}.audited.ifc",
            units=units,
        )
    return found


CASES = [
    pytest.param(name, fact, id=fact.name.replace(" ", "-"))
    for name, facts in ((OFFICE, OFFICE_FACTS), (WORKSHOP, WORKSHOP_FACTS))
    for fact in facts
]


@pytest.mark.parametrize(("name", "fact"), CASES)
def test_row_of_a_beam_agrees_with_its_hand_calculation(name: str, fact: Fact, runs: dict[str, Run]) -> None:
    """Section, span, width, area, loads, moment, shear, deflection, capacities and verdict as worked out by hand."""
    run = runs[name]
    row = run.rows[fact.name]
    assert (row["section"], row["grade"], row["status"], row["governing"]) == (
        fact.section,
        fact.grade,
        fact.status,
        fact.governing,
    )
    for attribute, quantity in COLUMNS.items():
        expected = getattr(fact, attribute)
        if expected is not None:
            found = float(row[f"{attribute}_{SUFFIXES[run.units][quantity]}"])
            assert found == pytest.approx(expected, rel=CLOSE, abs=6e-4), attribute
    assert float(row["utilization"]) == pytest.approx(fact.utilization, rel=CLOSE, abs=6e-5)


@pytest.mark.parametrize(
    ("name", "inadequate", "candidates"),
    [
        (OFFICE, sample_facts.OFFICE_INADEQUATE, sample_facts.OFFICE_CANDIDATES),
        (WORKSHOP, sample_facts.WORKSHOP_INADEQUATE, sample_facts.WORKSHOP_CANDIDATES),
    ],
)
def test_failures_are_those_found_by_hand_worst_first(
    name: str, inadequate: frozenset[str], candidates: int, runs: dict[str, Run]
) -> None:
    """Exactly the beams that are too small by hand stand in ``failures.csv``, and the exit status says so."""
    run = runs[name]
    assert run.status == 1
    assert len(run.rows) == candidates
    assert {row["name"] for row in run.failures} == inadequate
    utilizations = [float(row["utilization"]) for row in run.failures]
    assert utilizations == sorted(utilizations, reverse=True)
    assert all(row["sized"] for row in run.failures)


def test_what_cannot_be_judged_and_what_is_no_beam_carry_their_reasons(runs: dict[str, Run]) -> None:
    """A beam end on nothing and a beam without body are not checked; bolt, plate and railing are set aside."""
    rows = runs[OFFICE].rows
    by_status: dict[str, set[str]] = {}
    for name, row in rows.items():
        by_status.setdefault(row["status"], set()).add(name)
    assert by_status["not checked"] == set(sample_facts.OFFICE_NOT_CHECKED)
    assert by_status["set aside"] == set(sample_facts.OFFICE_SET_ASIDE)
    assert rows["Canopy arm A2"]["reason"].startswith("nothing carries its end (")
    assert rows["Entrance lintel"]["reason"].startswith("it has no body in the model")
    assert all(row["reason"] for row in rows.values())


def test_assumed_grade_is_marked_with_the_override_that_settles_it(runs: dict[str, Run]) -> None:
    """The one beam whose material only says steel is checked with the default grade, and says so."""
    run = runs[OFFICE]
    assumed = {name for name, row in run.rows.items() if row["grade_source"] == "assumed"}
    assert assumed == set(sample_facts.OFFICE_ASSUMED_GRADE)
    (assumption,) = [item for item in run.record["assumptions"] if item["text"].startswith("grade")]
    assert assumption["beams"] == 1
    assert "default_grades" in assumption["remedy"]


@pytest.mark.parametrize(
    ("name", "live", "area"),
    [
        (OFFICE, sample_facts.OFFICE_LIVE, sample_facts.OFFICE_FLOOR_AREA + sample_facts.OFFICE_ROOF_AREA),
        (
            WORKSHOP,
            sample_facts.WORKSHOP_LIVE * sample_facts.KIP,
            (sample_facts.WORKSHOP_ROOF_AREA + sample_facts.WORKSHOP_LOFT_AREA) * 0.3048**2,
        ),
    ],
)
def test_both_balances_close(name: str, live: float, area: float, runs: dict[str, Run]) -> None:
    """All live load worked out from the plan areas is applied and arrives; no slab is left over."""
    balance = runs[name].record["load_balance"]
    assert balance["live_applied_kN"] == pytest.approx(live, rel=CLOSE)
    assert balance["live_reaching_supports_kN"] == pytest.approx(balance["live_applied_kN"], rel=1e-9)
    assert balance["dead_reaching_supports_kN"] == pytest.approx(balance["dead_applied_kN"], rel=5e-4)
    assert balance["unassigned_area_m2"] == pytest.approx(0.0, abs=1e-6)
    assert balance["slab_area_m2"] == pytest.approx(area, rel=1e-9)


@pytest.mark.parametrize("name", [OFFICE, WORKSHOP])
def test_property_sets_hold_the_table_in_the_units_of_the_file(name: str, runs: dict[str, Run]) -> None:
    """Every candidate has one set, whose values are those of the table once the file's units are read."""
    run = runs[name]
    model = ifcopenshell.open(run.model)
    length = ifcopenshell.util.unit.calculate_unit_scale(model)
    feet = 0.3048 if run.units == "us" else 1.0
    beams = model.by_type("IfcBeam")
    assert len(beams) == len(run.rows)
    for beam in beams:
        values = ifcopenshell.util.element.get_psets(beam)["IfcAudit_BeamCheck"]
        row = run.rows[beam.Name]
        assert values["Status"] == row["status"]
        assert values["Reason"] == row["reason"]
        if row["utilization"]:
            assert values["Utilization"] == pytest.approx(float(row["utilization"]), abs=6e-5)
            assert values["SectionProposed"] == row["sized"]
        if row[f"span_{SUFFIXES[run.units]['length']}"]:
            span = float(row[f"span_{SUFFIXES[run.units]['length']}"])
            assert values["Span"] * length == pytest.approx(span * feet, abs=1e-4)


@pytest.mark.parametrize("name", [OFFICE, WORKSHOP])
def test_audited_model_validates_and_keeps_everything(name: str, runs: dict[str, Run]) -> None:
    """The audited model is valid, its first bytes are the source's, and the source's instances are all there."""
    source = (ROOT / "sample_models" / name).read_bytes()
    audited = runs[name].model.read_bytes()
    head = source[: source.rindex(b"ENDSEC")]
    assert audited.startswith(head)
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(runs[name].model), logger)
    assert logger.statements == []


def test_auditing_an_audited_model_changes_nothing(runs: dict[str, Run], tmp_path: Path) -> None:
    """The set is updated, never added a second time: the second audit writes the same bytes."""
    again = tmp_path / "again"
    assert main(["audit", str(runs[OFFICE].model), "--out", str(again), "--quiet"]) == 1
    (second,) = again.glob("*.ifc")
    assert second.read_bytes() == runs[OFFICE].model.read_bytes()


def test_load_options_replace_the_rule_set_everywhere(tmp_path: Path) -> None:
    """4 kPa live and 1 kPa superimposed replace floor live, partitions and allowance; the joist shows it.

    Joist BC 2.5 carries 21 m²: live 21 x 4 = 84 kN; dead 21 x (3.6088 + 1.0) + 26 plf x 8.4 m.
    """
    out = tmp_path / "out"
    main([
        "audit", str(ROOT / "sample_models" / OFFICE), "--out", str(out), "--quiet",
        "--live-load", "4 kN/m2", "--superimposed-dead", "1 kPa",
    ])  # fmt: skip
    with (out / "beams.csv").open(encoding="utf-8", newline="") as file:
        row = next(row for row in csv.DictReader(file) if row["name"] == "L1 joist BC 2.5")
    assert float(row["live_load_kN"]) == pytest.approx(84.0, rel=CLOSE)
    slab = 368 * 9.80665 / 1000
    assert float(row["dead_load_kN"]) == pytest.approx(21 * (slab + 1.0) + 26 * sample_facts.PLF * 8.4, rel=CLOSE)


def test_live_load_reduction_lowers_the_moment_of_a_large_girder_only(tmp_path: Path) -> None:
    """Girder C 1-2 (39 m², K_LL A_T = 78 m²) takes 0.25 + 4.572/sqrt(78) of its 50 psf; partitions are not reduced.

    Joists of 21 m² (42 m²) are just above the least influence area of 37.16 m², so they are reduced less.
    """
    rows = {}
    for option in ("--live-load-reduction", "--no-live-load-reduction"):
        out = tmp_path / option
        main(["audit", str(ROOT / "sample_models" / OFFICE), "--out", str(out), "--quiet", option])
        with (out / "beams.csv").open(encoding="utf-8", newline="") as file:
            rows[option] = {row["name"]: row for row in csv.DictReader(file)}
    share = 0.25 + 4.572 / math.sqrt(78.0)
    assert share == pytest.approx(0.7677, abs=1e-4)
    full = rows["--no-live-load-reduction"]["L1 girder C 1-2"]
    less = rows["--live-load-reduction"]["L1 girder C 1-2"]
    deflections = float(less["live_deflection_mm"]) / float(full["live_deflection_mm"])
    assert deflections == pytest.approx((50 * share + 15) / 65, rel=CLOSE)
    assert float(less["live_load_kN"]) == float(full["live_load_kN"])  # the table states the unreduced load
