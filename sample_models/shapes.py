"""Dimensions of the steel shapes drawn in the sample models.

AISC 16th ed. dimensions, in inches. The detailing radius of an I-shape is ``k_des - t_f``.
"""

from __future__ import annotations

from dataclasses import dataclass

INCH = 0.0254
"""Metres."""


@dataclass(frozen=True)
class Shape:
    """One rolled shape or tube, in metres.

    Attributes:
        designation: As in the tables.
        kind: ``I``, ``C`` or ``BOX``.
        depth: Overall depth.
        width: Flange width, or width of a tube.
        flange: Flange thickness, or wall thickness of a tube.
        web: Web thickness.
        fillet: Radius between web and flange, or outer corner radius of a tube.
    """

    designation: str
    kind: str
    depth: float
    width: float
    flange: float
    web: float
    fillet: float


# designation: d, b_f, t_f, t_w, k_des [in]
_I_SHAPES = {
    "W6X15": (5.99, 5.99, 0.260, 0.230, 0.510),
    "W8X10": (7.89, 3.94, 0.205, 0.170, 0.505),
    "W8X13": (7.99, 4.00, 0.255, 0.230, 0.555),
    "W8X18": (8.14, 5.25, 0.330, 0.230, 0.630),
    "W10X12": (9.87, 3.96, 0.210, 0.190, 0.510),
    "W10X33": (9.73, 7.96, 0.435, 0.290, 0.935),
    "W10X39": (9.92, 7.99, 0.530, 0.315, 1.03),
    "W12X14": (11.9, 3.97, 0.225, 0.200, 0.525),
    "W12X16": (12.0, 3.99, 0.265, 0.220, 0.565),
    "W12X19": (12.2, 4.01, 0.350, 0.235, 0.650),
    "W12X22": (12.3, 4.03, 0.425, 0.260, 0.725),
    "W14X22": (13.7, 5.00, 0.335, 0.230, 0.735),
    "W14X26": (13.9, 5.03, 0.420, 0.255, 0.820),
    "W16X26": (15.7, 5.50, 0.345, 0.250, 0.747),
    "W16X31": (15.9, 5.53, 0.440, 0.275, 0.842),
    "W18X35": (17.7, 6.00, 0.425, 0.300, 0.827),
    "W21X44": (20.7, 6.50, 0.450, 0.350, 0.950),
    "W21X50": (20.8, 6.53, 0.535, 0.380, 1.04),
}
# designation: d, b_f, mean t_f, t_w [in]; the inner faces of the flanges slope 2 in 12
_CHANNELS = {
    "C6X8.2": (6.00, 1.92, 0.343, 0.200),
    "C10X15.3": (10.0, 2.60, 0.436, 0.240),
}
# designation: depth, width, design wall thickness, outer corner radius [in]
_BOXES = {
    "HSS6X6X1/4": (6.00, 6.00, 0.233, 0.466),
    "HSS8X8X3/8": (8.00, 8.00, 0.349, 0.698),
}

SHAPES: dict[str, Shape] = {
    **{
        name: Shape(name, "I", d * INCH, b * INCH, tf * INCH, tw * INCH, (k - tf) * INCH)
        for name, (d, b, tf, tw, k) in _I_SHAPES.items()
    },
    **{
        name: Shape(name, "C", d * INCH, b * INCH, tf * INCH, tw * INCH, 0.0)
        for name, (d, b, tf, tw) in _CHANNELS.items()
    },
    **{
        name: Shape(name, "BOX", d * INCH, b * INCH, t * INCH, t * INCH, r * INCH)
        for name, (d, b, t, r) in _BOXES.items()
    },
}
