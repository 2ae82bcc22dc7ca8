"""Makes the builders beside the tests importable, and the fixtures built with them."""

import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))

from output_builders import audit_of, bare_result, beam_result, step_file

from ifcaudit.model.audit import Audit


@pytest.fixture
def audit() -> Audit:
    """Return three results: inadequate, inadequate, not checked."""
    return audit_of([beam_result(0), beam_result(1, utilization=1.5), bare_result(2)])


@pytest.fixture
def model(tmp_path: Path) -> Path:
    """Return the path of the small IFC4 model in millimetres."""
    path = tmp_path / "tower.ifc"
    path.write_bytes(step_file())
    return path
