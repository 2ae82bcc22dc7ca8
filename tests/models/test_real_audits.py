"""Whole audits of real exports: they run to the end, and every candidate is judged or carries its reason."""

from __future__ import annotations

from functools import cache
from pathlib import Path

import pytest

import ifcaudit
from ifcaudit.model.audit import Audit, Status

MODELS = Path(__file__).parents[3] / "shared" / "models"
FILES = sorted(MODELS.glob("*.ifc"))

pytestmark = [
    pytest.mark.real_models,
    pytest.mark.skipif(not FILES, reason="no real exports beside the checkout (../shared/models)"),
]


@cache
def audit(name: str) -> Audit:
    """Audit one model once."""
    return ifcaudit.audit(MODELS / name)


@pytest.mark.parametrize("name", [path.name for path in FILES])
def test_every_candidate_is_judged_or_carries_its_reason(name: str) -> None:
    """No exception, a reason on every row, numbers where a verdict is given, and load and area accounted for."""
    result = audit(name)
    for beam in result.beams:
        assert beam.reason, beam.global_id
        judged = beam.status in {Status.ADEQUATE, Status.INADEQUATE}
        assert not judged or (beam.utilization is not None and beam.span is not None and beam.section)
        assert beam.status is not Status.ADEQUATE or (beam.utilization is not None and beam.utilization <= 1.0 + 1e-9)
    balance = result.load_balance
    for applied, arrived, stranded in (
        (balance.dead_applied, balance.dead_reaching_supports, balance.dead_unsupported),
        (balance.live_applied, balance.live_reaching_supports, balance.live_unsupported),
    ):
        assert arrived + stranded == pytest.approx(applied, rel=1e-6, abs=1.0)
    assert balance.assigned_area + balance.unassigned_area == pytest.approx(balance.slab_area)


def test_roof_beam_of_the_housing_block_is_carried_and_loaded_as_seen_by_hand() -> None:
    """HE180A ``3VTO1qjLvBT83esj2J$Cpx``: from a 300 mm wall to the HE160A ``3csGQdbV9AEf4vjjNnS$cU``.

    Facts noted with the data set: along y from 5.03 to 10.59 at x = -1.90, carrying a flat roof; its timber joists span
    3.2 m to the west and 3.0 m to the east, so that its tributary width is (3.2 + 3.0)/2 = 3.1 m.
    """
    beam = next(item for item in audit("housing-structure.ifc").beams if item.global_id == "3VTO1qjLvBT83esj2J$Cpx")
    assert "kalkzandsteen_300mm" in beam.start_support
    assert beam.end_support.startswith("beam ")
    assert beam.tributary_width == pytest.approx(3.1, abs=0.01)
    assert beam.span is not None
    # 5.56 m of steel, half of 0.30 m of wall at one end, half a flange of 0.16 m at the other
    assert beam.span == pytest.approx(5.56 + 0.15, abs=0.1)


def test_names_that_contradict_the_drawing_are_not_trusted() -> None:
    """Beams named after one section and drawn as another are never called adequate."""
    wrong = {"3E1lhUjbn6Q83O0eMzicqh", "13lKJkBNr3Ihzig_2H1hMm", "2id5JruDL6g9P3kQnXGsrB", "0pwbcyQ8v6mRtN2Pp6uYo8"}
    found = {beam.global_id: beam for beam in audit("housing-steel-package.ifc").beams if beam.global_id in wrong}
    assert set(found) == wrong
    assert all(beam.status is not Status.ADEQUATE for beam in found.values())
