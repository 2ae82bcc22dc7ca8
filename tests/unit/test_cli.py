"""The command as a user runs it: exit statuses, messages, and nothing half-written."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Sequence
from pathlib import Path

import pytest

from ifcaudit.cli import main

ROOT = Path(__file__).resolve().parents[2]
OFFICE = ROOT / "sample_models" / "harbour-yard-office.ifc"
EMPTY_MODEL = """ISO-10303-21;
HEADER;
FILE_DESCRIPTION(('ViewDefinition [ReferenceView]'),'2;1');
FILE_NAME('empty.ifc','2026-01-01T00:00:00',(''),(''),'','','');
FILE_SCHEMA(('IFC4'));
ENDSEC;
DATA;
#1=IFCPROJECT('0YvctVUKr0kugbFTf53O9L',$,'Empty',$,$,$,$,$,#2);
#2=IFCUNITASSIGNMENT((#3));
#3=IFCSIUNIT(*,.LENGTHUNIT.,.MILLI.,.METRE.);
ENDSEC;
END-ISO-10303-21;
"""


def run(arguments: Sequence[str | Path], capsys: pytest.CaptureFixture[str]) -> tuple[int, str, str]:
    """Run the command in this process; return status, output and errors."""
    try:
        status = main([str(argument) for argument in arguments])
    except SystemExit as stop:
        status = int(stop.code or 0)
    captured = capsys.readouterr()
    return status, captured.out, captured.err


@pytest.fixture
def bad_models(tmp_path: Path) -> dict[str, Path]:
    """Files that are no readable model."""
    text = tmp_path / "letter.ifc"
    text.write_text("Dear colleague,\n")
    truncated = tmp_path / "truncated.ifc"
    truncated.write_text(EMPTY_MODEL[: EMPTY_MODEL.index("#3=")])
    return {"missing": tmp_path / "missing.ifc", "folder": tmp_path, "text": text, "truncated": truncated}


@pytest.mark.parametrize("kind", ["missing", "folder", "text", "truncated"])
def test_unreadable_model_gives_one_message_and_writes_nothing(
    kind: str, bad_models: dict[str, Path], tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """A file that is no model ends with status 2, one line that names it, and no output folder."""
    out = tmp_path / "out"
    status, output, errors = run(["audit", bad_models[kind], "--out", out], capsys)
    assert status == 2
    assert output == ""
    assert errors.startswith("ifcaudit: ")
    assert bad_models[kind].name in errors
    assert "Traceback" not in errors
    assert len(errors.strip().splitlines()) == 1
    assert not out.exists()


def test_model_without_beams_ends_with_status_3(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """No beam was judged, so nothing is adequate."""
    model = tmp_path / "empty.ifc"
    model.write_text(EMPTY_MODEL)
    status, output, _ = run(["audit", model], capsys)
    assert status == 3
    assert "0 candidate beams" in output
    assert sorted(path.name for path in (tmp_path / "empty-audit").iterdir()) == [
        "audit.json",
        "beams.csv",
        "empty.audited.ifc",
        "failures.csv",
    ]


def test_unknown_rule_set_lists_those_there_are(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """The message about an unknown rule set says which may be used."""
    model = tmp_path / "empty.ifc"
    model.write_text(EMPTY_MODEL)
    status, _, errors = run(["audit", model, "--rules", "mars-lrfd"], capsys)
    assert status == 2
    assert "mars-lrfd" in errors
    assert "us-lrfd" in errors
    assert not (tmp_path / "empty-audit").exists()


def test_rule_file_with_three_errors_lists_all_three(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """All problems of a rule file are reported together."""
    model = tmp_path / "empty.ifc"
    model.write_text(EMPTY_MODEL)
    rules = tmp_path / "office.toml"
    rules.write_text(
        'extends = "us-lrfd"\n'
        "[loads]\n"
        'floor_live = { value = "heavy", unit = "psf", clause = "brief" }\n'
        'roof_live = { value = 20, unit = "furlong", clause = "brief" }\n'
        'flor_live = { value = 20, unit = "psf", clause = "brief" }\n'
    )
    status, _, errors = run(["audit", model, "--rules", rules], capsys)
    assert status == 2
    for key in ("loads.floor_live", "loads.roof_live", "loads.flor_live"):
        assert key in errors
    assert "Traceback" not in errors


@pytest.mark.parametrize(
    ("option", "value", "message"),
    [
        (
            "--live-load",
            "50",
            'ifcaudit: --live-load "50": no unit found; write a pressure such as "50 psf", "2.4 kPa", "2.4 kN/m2"\n',
        ),
        (
            "--superimposed-dead",
            "3 ft",
            (
                'ifcaudit: --superimposed-dead "3 ft": "ft" is not a unit of pressure; '
                'write a pressure such as "50 psf", "2.4 kPa", "2.4 kN/m2"\n'
            ),
        ),
        (
            "--live-load",
            "-1 kPa",
            'ifcaudit: --live-load "-1 kPa": a load acts downwards; write a positive pressure, or zero\n',
        ),
    ],
)
def test_quantity_that_cannot_be_used_says_what_can(
    option: str, value: str, message: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """A load without unit, of another kind, or upwards is bad usage."""
    status, _, errors = run(["audit", tmp_path / "model.ifc", f"{option}={value}"], capsys)
    assert (status, errors) == (2, message)


def test_output_folder_that_is_a_file_is_refused(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A file in the place of the output folder is not overwritten."""
    model = tmp_path / "empty.ifc"
    model.write_text(EMPTY_MODEL)
    status, _, errors = run(["audit", model, "--out", model], capsys)
    assert status == 2
    assert "is a file" in errors
    assert model.read_text() == EMPTY_MODEL


def test_quiet_prints_nothing(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """With ``--quiet`` only errors are printed."""
    model = tmp_path / "empty.ifc"
    model.write_text(EMPTY_MODEL)
    assert run(["audit", model, "--quiet"], capsys) == (3, "", "")


def test_command_runs_from_a_clean_directory(tmp_path: Path) -> None:
    """``python -m ifcaudit`` audits a sample from another folder, touches nothing but DIR, and repeats itself."""
    before = OFFICE.read_bytes()
    for name in ("first", "second"):
        done = subprocess.run(  # noqa: S603 — our own command
            [sys.executable, "-m", "ifcaudit", "audit", str(OFFICE), "--out", name],
            cwd=tmp_path,
            capture_output=True,
            text=True,
            check=False,
        )
        assert done.returncode == 1, done.stderr
        assert "Traceback" not in done.stderr
        assert "inadequate" in done.stdout
    assert OFFICE.read_bytes() == before
    assert sorted(path.name for path in tmp_path.iterdir()) == ["first", "second"]
    for path in sorted((tmp_path / "first").iterdir()):
        assert path.read_bytes() == (tmp_path / "second" / path.name).read_bytes(), path.name
