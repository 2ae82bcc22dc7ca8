"""The same bay described in another way is the same bay: turned, moved, mirrored, re-united, split, in any schema."""

from __future__ import annotations

from math import radians
from pathlib import Path
from typing import Any

import pytest
from models.bay_builder import write_bay

import ifcaudit
from ifcaudit.model.audit import Audit

BAY: dict[str, Any] = {
    "joist_spacing": 2.7,
    "joist_span": 7.4,
    "girder_span": 10.8,
    "joist_section": "W14X22",
    "girder_section": "W21X44",
    "joist_bays": 2,
}
COMPARED = (
    "span", "tributary_width", "tributary_area", "dead_load", "live_load", "moment", "moment_capacity",
    "shear", "shear_capacity", "live_deflection", "utilization",
)  # fmt: skip


def audit_bay(folder: Path, name: str, **changes: Any) -> Audit:
    """Write and audit one description of the bay."""
    return ifcaudit.audit(write_bay(folder / f"{name}.ifc", **{**BAY, **changes}))


@pytest.fixture(scope="module")
def plain(tmp_path_factory: pytest.TempPathFactory) -> Audit:
    """The bay along the axes, in metres, IFC4."""
    return audit_bay(tmp_path_factory.mktemp("plain"), "plain")


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param({"rotation": radians(90)}, id="quarter-turn"),
        pytest.param({"rotation": radians(33.3), "offset": (120.0, -40.0)}, id="turned-and-moved"),
        pytest.param({"rotation": radians(-71), "offset": (4.5e5, 5.6e6)}, id="survey-coordinates"),
        pytest.param({"mirrored": True}, id="mirrored"),
        pytest.param({"reversed_axes": True}, id="axes-reversed"),
        pytest.param({"length_unit": "MILLIMETRE"}, id="millimetres"),
        pytest.param({"length_unit": "FOOT"}, id="feet"),
        pytest.param({"length_unit": "INCH", "schema": "IFC2X3"}, id="inches-IFC2X3"),
        pytest.param({"schema": "IFC4X3"}, id="IFC4X3"),
        pytest.param({"split_storey": True}, id="beams-on-two-storeys"),
        pytest.param({"split_slab": True}, id="slab-in-two-pieces"),
    ],
)
def test_verdicts_do_not_depend_on_how_the_bay_is_described(
    changes: dict[str, Any], plain: Audit, tmp_path: Path
) -> None:
    """Every number of every beam stays, to what survey coordinates leave of the digits of a double."""
    other = audit_bay(tmp_path, "other", **changes)
    by_name = {beam.name: beam for beam in other.beams}
    assert sorted(by_name) == sorted(beam.name for beam in plain.beams)
    assert any(beam.tributary_width and beam.tributary_width > 7.0 for beam in plain.beams)
    for beam in plain.beams:
        twin = by_name[beam.name]
        assert twin.status is beam.status
        assert (twin.section, twin.sized, twin.governing) == (beam.section, beam.sized, beam.governing)
        for attribute in COMPARED:
            assert getattr(twin, attribute) == pytest.approx(getattr(beam, attribute), rel=1e-5), attribute


def test_all_load_reaches_the_columns(plain: Audit) -> None:
    """Area and load are shared out without rest: 2 x 7.4 m by 10.8 m of slab."""
    balance = plain.load_balance
    assert balance.slab_area == pytest.approx(2 * 7.4 * 10.8)
    assert balance.unassigned_area == pytest.approx(0.0, abs=1e-6)
    assert balance.dead_reaching_supports == pytest.approx(balance.dead_applied, rel=1e-9)
    assert balance.live_reaching_supports == pytest.approx(balance.live_applied, rel=1e-9)


def test_upper_storeys_do_not_load_the_beams_below(plain: Audit, tmp_path: Path) -> None:
    """In a building of three floors each bay carries its own floor; columns, not beams, bring the others down."""
    tall = audit_bay(tmp_path, "tall", storeys=3)
    joists = [beam for beam in tall.beams if beam.name.startswith("joist 0-1")]
    single = next(beam for beam in plain.beams if beam.name == "joist 0-1")
    assert len(joists) == 3
    for joist in joists:
        assert joist.moment == pytest.approx(single.moment, rel=1e-6)
    assert tall.load_balance.live_applied == pytest.approx(3 * plain.load_balance.live_applied)


def test_twice_the_live_load_is_twice_the_live_effect(tmp_path: Path) -> None:
    """Deflection and live load are linear in the live load; dead load does not move."""
    path = write_bay(tmp_path / "bay.ifc", **BAY)
    once, twice = (ifcaudit.audit(path, live_load=load) for load in (2000.0, 4000.0))
    for first, second in zip(once.beams, twice.beams, strict=True):
        assert second.live_load == pytest.approx(2 * first.live_load)
        assert second.live_deflection == pytest.approx(2 * first.live_deflection)
        assert second.dead_load == pytest.approx(first.dead_load)
