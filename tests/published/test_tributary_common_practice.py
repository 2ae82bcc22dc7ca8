"""Facts that every structural office uses: common practice, no source. In the units, and through whole audits."""

from __future__ import annotations

from pathlib import Path

import pytest
from models.bay_builder import write_bay
from shapely import box

import ifcaudit
from ifcaudit.floor.line_load import line_load
from ifcaudit.model.audit import Audit, BeamResult
from ifcaudit.model.framing import Carrier, SupportLine
from ifcaudit.units import convert

FOOT = convert(1.0, "ft", "m")
INCH = convert(1.0, "in", "m")
PSF = convert(1.0, "psf", "Pa")
KIP_PER_FOOT = convert(1.0, "kip/ft", "N/m")


def beam_named(audit: Audit, name: str) -> BeamResult:
    """Return one beam's result."""
    return next(beam for beam in audit.beams if beam.name == name)


@pytest.mark.parametrize(("width", "load"), [(6, 0.15), (12, 0.30), (24, 0.60)])
def test_line_load_is_pressure_times_tributary_width(width: float, load: float) -> None:
    """25 psf on 6, 12 and 24 ft is 0.15, 0.30 and 0.60 kip/ft (common practice, no source)."""
    line = SupportLine(global_id="B", carrier=Carrier.BEAM, start=(0.0, 0.0), end=(30 * FOOT, 0.0))
    half = width / 2 * FOOT
    spread = line_load(box(0.0, -half, 30 * FOOT, half), (0.0, 1.0), line)
    assert spread.widths * 25 * PSF / KIP_PER_FOOT == pytest.approx(load)


@pytest.mark.parametrize(("spacing", "load"), [(6, 0.15), (12, 0.30), (24, 0.60)])
def test_joist_of_a_whole_audit_carries_pressure_times_its_spacing(spacing: float, load: float, tmp_path: Path) -> None:
    """25 psf of live load on joists 6, 12 and 24 ft apart, 31 ft long, read back from the audit's result.

    The girders are as long as two spacings, so that the joist in the middle has its full width.
    """
    path = write_bay(
        tmp_path / "bay.ifc",
        joist_spacing=spacing * FOOT,
        joist_span=31 * FOOT if spacing > 6 else 26 * FOOT,
        girder_span=2 * spacing * FOOT,
        joist_section="W18X35",
        girder_section="W21X50",
        layers=(("Metal deck with lightweight topping", 0.05, 1800.0),),
    )
    joist = beam_named(ifcaudit.audit(path, live_load=25 * PSF), "joist 0-1")
    assert joist.span is not None
    assert joist.live_load is not None
    assert joist.tributary_width == pytest.approx(spacing * FOOT)
    assert joist.live_load / joist.span / KIP_PER_FOOT == pytest.approx(load)


def test_interior_girder_takes_half_the_joists_from_either_side(tmp_path: Path) -> None:
    """Between joists of 24 ft on both sides an interior girder has 24 ft, an edge girder 12 ft (no source)."""
    path = write_bay(
        tmp_path / "bay.ifc",
        joist_spacing=7 * FOOT,
        joist_span=24 * FOOT,
        girder_span=28 * FOOT,
        joist_bays=2,
        joist_section="W16X31",
        girder_section="W21X44",
    )
    audit = ifcaudit.audit(path, live_load=25 * PSF)
    assert beam_named(audit, "girder 1").tributary_width == pytest.approx(24 * FOOT)
    assert beam_named(audit, "girder 0").tributary_width == pytest.approx(12 * FOOT)
    # 24 ft x 25 psf = 0.60 kip/ft is the equivalent line load an engineer writes down. The girder's joists bring
    # (1 + 1 + 1) x 7 ft of the 4 x 7 ft between its columns, the outer joists go to the columns: 0.45 of 0.60.
    girder = beam_named(audit, "girder 1")
    assert girder.live_load is not None
    assert girder.live_load / (28 * FOOT) / KIP_PER_FOOT == pytest.approx(0.60 * 3 / 4)


@pytest.mark.parametrize(
    ("span", "limit"),
    [
        pytest.param(30 * FOOT, 1.0 * INCH, id="30 ft: 1.0 in"),
        pytest.param(40 * FOOT, 1.3333 * INCH, id="40 ft: 1.33 in"),
        pytest.param(60 * FOOT, 2.0 * INCH, id="60 ft: 2.0 in"),
        pytest.param(24 * FOOT, 0.80 * INCH, id="24 ft: 0.80 in"),
        pytest.param(9.0, 0.025, id="9 m: 25 mm"),
    ],
)
def test_live_deflection_limit_is_span_over_360(span: float, limit: float, tmp_path: Path) -> None:
    """span/360 (common practice; IBC Table 1604.3 floor members) is the limit that the audit reports."""
    path = write_bay(
        tmp_path / "bay.ifc",
        joist_spacing=3.1,
        joist_span=span,
        girder_span=6.2,
        joist_section="W18X35",
        girder_section="W21X44",
    )
    joist = beam_named(ifcaudit.audit(path), "joist 0-1")
    assert joist.span == pytest.approx(span)
    assert joist.live_deflection_limit == pytest.approx(limit, rel=1e-4)
    assert span / 360 == pytest.approx(limit, rel=1e-4)
