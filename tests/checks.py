"""Every check of the project in one command: ``python3 tests/checks.py``.

Needs nothing but Python 3.11: makes a virtual environment ``.venv`` beside this project when there is none, installs
the project with its development tools, and runs formatting, lint, strict types, import directions, and the tests with
branch coverage. Further arguments go to pytest.
"""

from __future__ import annotations

import os
import subprocess
import sys
import venv
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
ENVIRONMENT = ROOT / ".venv"
PYTHON = ENVIRONMENT / ("Scripts/python.exe" if os.name == "nt" else "bin/python")
LEAST_COVERAGE = 85
CHECKS = (
    ("format", ["ruff", "format", "--check", "--quiet", "."]),
    ("lint", ["ruff", "check", "--quiet", "."]),
    ("types", ["mypy"]),
    ("import directions", ["importlinter.cli", "lint-imports"]),
)


def main(arguments: list[str]) -> int:
    """Run every check and return 1 when any fails."""
    prepare()
    failed = [name for name, command in CHECKS if not run(name, command)]
    if not run("tests", ["pytest", "-q", "--cov", f"--cov-fail-under={LEAST_COVERAGE}", *arguments]):
        failed.append("tests")
    print("all checks pass" if not failed else f"failed: {', '.join(failed)}", flush=True)
    return 1 if failed else 0


def prepare() -> None:
    """Make the environment, and install the project with its tools unless pyproject.toml is unchanged since."""
    if not PYTHON.exists():
        print("making", ENVIRONMENT.name, flush=True)
        venv.create(ENVIRONMENT, with_pip=True)
    mark = ENVIRONMENT / "installed-from.toml"
    wanted = (ROOT / "pyproject.toml").read_text(encoding="utf-8")
    if mark.exists() and mark.read_text(encoding="utf-8") == wanted:
        return
    print("installing the project and its development tools", flush=True)
    subprocess.run([str(PYTHON), "-m", "pip", "install", "--quiet", "--editable", ".[dev]"], cwd=ROOT, check=True)
    mark.write_text(wanted, encoding="utf-8")


def run(name: str, command: list[str]) -> bool:
    """Run one tool as a module of the environment and say whether it passed."""
    print(f"== {name}", flush=True)
    module, *rest = command
    call = [str(PYTHON), "-m", module, *rest]
    if name == "import directions":
        call = [str(PYTHON.with_name("lint-imports"))]
    return subprocess.run(call, cwd=ROOT, check=False).returncode == 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
