"""Tells load-carrying beams from what else stands in ``IfcBeam``: by geometry first, then by name."""

from __future__ import annotations

from collections.abc import Sequence
from math import atan2, degrees

from ifcaudit.model.section import ProfileShape, SectionKind
from ifcaudit.reading.vocabulary import fitting_word

SHORTEST = 0.8
"""Length below which an element is a stub or a fitting [m]."""
STEEPEST = 20.0
"""Slope above which a beam is a leg, a brace or a column [degrees]."""
STEEPEST_RAFTER = 60.0
"""The same for joists, rafters and purlins [degrees]."""
LEAST_SLENDERNESS = 3.0
"""Length over depth below which an element is a block."""
THINNEST = 0.035
"""Smaller cross dimension below which an element is a plate, a rod or a board [m]."""
DEEPEST = 1.5
"""Depth above which an element is a wall or a band [m]."""
FLATTEST = 6.0
"""Depth over width of a solid element above which it is a plate on edge."""
FLATTEST_JOIST = 8.0
"""The same for joists."""
ROLLED = {
    SectionKind.I_SHAPE,
    SectionKind.CHANNEL,
    SectionKind.RECTANGULAR_HOLLOW,
    SectionKind.ROUND_HOLLOW,
    SectionKind.TEE,
}
"""Shapes that no fitting has, above the size of a railing: a word in the name does not set them aside."""
LARGEST_RAILING = 0.08
"""Depth up to which a tube may be a railing, so that its name decides [m]."""


def set_aside_reason(
    *,
    plan_length: float,
    rise: float,
    height: float,
    width: float,
    profile: ProfileShape | None,
    rafter: bool,
    texts: Sequence[str],
) -> str:
    """Say why an element is no load-carrying beam; empty when it is one.

    Args:
        plan_length: Length in plan [m].
        rise: Difference in level of its ends [m].
        height: Extent across the axis in the vertical plane [m].
        width: Extent in plan across the axis [m].
        profile: Its section, when read.
        rafter: It is a joist, rafter or purlin.
        texts: Names, types and profile names.
    """
    length = (plan_length**2 + rise**2) ** 0.5
    rolled = profile is not None and profile.kind in ROLLED
    named = not rolled or max(height, width) <= LARGEST_RAILING
    return _by_geometry(
        length, degrees(atan2(abs(rise), plan_length)), height, width, rafter=rafter, rolled=rolled
    ) or (_by_name(texts) if named else "")


def _by_geometry(length: float, slope: float, height: float, width: float, *, rafter: bool, rolled: bool) -> str:
    thin, deep = min(height, width), max(height, width)
    steepest = STEEPEST_RAFTER if rafter else STEEPEST
    flattest = FLATTEST_JOIST if rafter else FLATTEST
    rules = (
        (length < SHORTEST, f"only {length:.2f} m long: a stub or fitting (beams are {SHORTEST} m or longer)"),
        (slope > steepest, f"slopes {slope:.0f} degrees: a leg, brace or column (beams up to {steepest:.0f})"),
        (thin < THINNEST, f"only {thin * 1000:.0f} mm thick: a plate, rod or board (beams from {THINNEST * 1000:.0f})"),
        (height > DEEPEST, f"{height:.2f} m deep: a wall or band (beams up to {DEEPEST} m)"),
        (
            length < LEAST_SLENDERNESS * deep,
            f"{length:.2f} m long and {deep:.2f} m deep: a block (beams are {LEAST_SLENDERNESS:.0f} times as long)",
        ),
        (
            not rolled and thin > 0.0 and deep > flattest * thin,
            f"{deep * 1000:.0f} x {thin * 1000:.0f} mm: a plate on edge (beams up to {flattest:.0f} to 1)",
        ),
    )
    return next((text for applies, text in rules if applies), "")


def _by_name(texts: Sequence[str]) -> str:
    for text in texts:
        word = fitting_word(text)
        if word:
            return f'its name says "{word}" ({text}): no load-carrying beam'
    return ""
