"""ASCE 7-22 4.7 live-load reduction."""

from __future__ import annotations

from dataclasses import replace

import pytest

from ifcaudit.loadpath.reduction import reduced_share
from ifcaudit.rulebook.loader import load_rules
from ifcaudit.units import convert

RULE = replace(load_rules("us-lrfd").reduction, enabled=True)


@pytest.mark.parametrize(
    ("area", "share"),
    [
        # L/L0 = 0.25 + 15 / sqrt(2 A_T), A_T in ft²; formula of ASCE 7-22 4.7.2, K_LL = 2 of Table 4.7-1
        pytest.param(450.0, 0.25 + 15.0 / 30.0, id="0.75 at 450 ft2"),
        pytest.param(199.0, 1.0, id="none below 400 ft2 of influence area"),
        pytest.param(800.0, 0.25 + 15.0 / 40.0, id="0.625 at 800 ft2"),
        pytest.param(5000.0, 0.5, id="not below one half for one floor"),
    ],
)
def test_share_follows_the_clause(area: float, share: float) -> None:
    """The clause in feet and the rule file in metres agree to the rounding of its metric coefficient."""
    # 4.57 m against 15 ft = 4.572 m: 0.05 % of the second term
    assert reduced_share(convert(area, "ft2", "m2"), RULE) == pytest.approx(share, rel=1e-3)


def test_reduction_is_off_unless_the_rule_set_or_the_user_permits_it() -> None:
    """Reduction is permitted, not compulsory."""
    assert not load_rules("us-lrfd").reduction.enabled
    assert reduced_share(1000.0, load_rules("us-lrfd").reduction) == 1.0
    assert load_rules("us-lrfd", live_load_reduction=True).reduction.enabled
