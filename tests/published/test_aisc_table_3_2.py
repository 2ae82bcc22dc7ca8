"""AISC Manual Table 3-2 (W shapes by Z_x, LRFD, F_y = 50 ksi).

The table's values are from memory, except those marked "read": in the AISC Design Examples v16.0. What is asserted is
the formula (F2, F3, G2 with the properties of the 16th edition), which has to reproduce them to the table's rounding.
"""

from __future__ import annotations

import numpy as np
import pytest
from helpers.beam_cases import FOOT, KIP, KIP_FOOT, steel

from ifcaudit.checks.standards.aisc_360 import flexural_strength, shear_strength
from ifcaudit.rulebook.loader import load_rules

RULES = load_rules()
FACTORS = RULES.steel.factors
SECTIONS = {section.designation: section for section in RULES.catalogue.series["W"]}

# shape, phi M_px [kip-ft], phi M_rx [kip-ft], BF [kip], L_p [ft], L_r [ft], phi V_nx [kip], phi_v
TABLE = [
    ("W36X135", 1910, None, None, 8.41, 24.3, 577, 0.90),
    ("W30X99", 1170, None, None, 7.42, 21.3, 463, 1.00),
    ("W27X84", 915, None, None, 7.31, 20.8, 368, 1.00),
    ("W24X76", 750, 462, 22.6, 6.78, 19.5, 315, 1.00),
    ("W24X68", 664, 404, 21.2, 6.61, 18.9, 295, 1.00),
    ("W24X55", 503, 299, 22.2, 4.73, 13.9, 252, 0.90),  # phi M_px read: F.4
    ("W21X50", 413, 248, 18.3, 4.59, 13.6, 237, 1.00),
    ("W21X48", 398, 244, 14.8, 6.09, 16.5, 216, 1.00),  # phi M_px read: F.3A
    ("W21X44", 358, 214, 16.8, 4.45, 13.0, 217, 1.00),
    ("W18X50", 379, 233, 13.1, 5.83, 16.9, 192, 1.00),  # phi M_px, L_p, L_r read: F.1
    ("W18X35", 249, 151, 12.3, 4.31, 12.3, 159, 1.00),
    ("W16X31", 203, 124, 10.3, 4.13, 11.8, 131, 1.00),
    ("W16X26", 166, 101, 8.98, 3.96, 11.2, 106, 0.90),
    ("W14X22", 125, 76.1, 7.27, 3.67, 10.4, 94.5, 1.00),
    ("W12X26", 140, 87.7, 5.46, 5.33, 14.9, 84.2, 1.00),
    ("W12X14", 65.3, 39.1, 5.17, 2.66, 7.73, 64.3, 0.90),
    ("W10X12", 46.9, 28.6, 3.53, 2.87, 8.05, 56.3, 1.00),
    ("W8X31", 114, 72.2, 2.37, 7.18, 24.8, 68.4, 1.00),
    ("W14X90", 574, 375, 7.28, 15.1, 42.5, 185, 1.00),
    ("W12X65", 356, 231, 5.41, 11.9, 35.1, 142, 1.00),
]


@pytest.mark.parametrize("row", TABLE, ids=[str(row[0]) for row in TABLE])
def test_row(row: tuple[str, float, float | None, float | None, float, float, float, float]) -> None:
    """One row of the table: strengths and lengths to three figures, BF to 1.5 % (the Manual takes unrounded values).

    L_p of a shape whose flange is not compact is where F2-2 falls to its plateau, L_p' in the Manual.
    """
    name, plastic, elastic, slope, plateau_ends, elastic_from, shear, phi_v = row
    section = SECTIONS[name]

    def moment(length: float) -> float:
        return float(flexural_strength(section, steel(), length, 1.0, FACTORS).design) / KIP_FOOT

    result = flexural_strength(section, steel(), 0.0, 1.0, FACTORS)
    L_p, L_r = (float(np.asarray(result.details[symbol][0])) for symbol in ("L_p", "L_r"))
    assert moment(0.0) == pytest.approx(plastic, rel=5e-3)
    at_limit = moment(L_r)
    falls_by = (0.9 * 50 * section.plastic_modulus_major / 0.0254**3 / 12 - at_limit) / ((L_r - L_p) / FOOT)
    ends = L_r / FOOT - (moment(0.0) - at_limit) / falls_by
    assert ends == pytest.approx(plateau_ends, rel=5e-3)
    assert moment(ends * FOOT * 0.999) == pytest.approx(moment(0.0), rel=1e-12)
    assert moment(ends * FOOT * 1.01) < moment(0.0)
    assert L_r / FOOT == pytest.approx(elastic_from, rel=5e-3)
    if elastic is not None and slope is not None:
        assert at_limit == pytest.approx(elastic, rel=5e-3)
        assert falls_by == pytest.approx(slope, rel=1.5e-2)
    web = shear_strength(section, steel(), 0.0, FACTORS)
    assert float(web.design) / KIP == pytest.approx(shear, rel=5e-3)
    assert float(web.factor) == phi_v
