"""What broken input makes the libraries raise: caught per element, so that it costs that element and no other."""

from __future__ import annotations

import shapely

MALFORMED = (
    ValueError,
    TypeError,
    ArithmeticError,
    LookupError,
    AttributeError,
    RuntimeError,
    shapely.errors.ShapelyError,
)
"""References to nothing or to the wrong class, numbers out of range, empty or self-crossing outlines."""
