"""Shared by the reading tests: the model builder, and a model written to disk and opened the way the audit does."""

from __future__ import annotations

import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parent))  # the builders are a plain module beside the tests
