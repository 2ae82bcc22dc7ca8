"""``python -m ifcaudit``."""

from __future__ import annotations

import sys

from ifcaudit.cli import main

if __name__ == "__main__":
    sys.exit(main())
