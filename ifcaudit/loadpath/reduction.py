"""Floor live-load reduction."""

from __future__ import annotations

from math import sqrt

from ifcaudit.loadpath.takedown import BeamLoading
from ifcaudit.model.loads import LoadCase
from ifcaudit.rulebook.records import LiveLoadReduction, RuleSet


def reduced_share(tributary_area: float, rule: LiveLoadReduction) -> float:
    """Share of the live load that a member of this tributary area is designed for.

    ASCE 7-22 4.7.2: L = L0 (0.25 + 15 / sqrt(K_LL A_T)), areas in ft² (4.57 in m), where K_LL A_T is at least
    400 ft² (37.16 m²), and not less than 0.5 L0 for members supporting one floor.

    Args:
        tributary_area: A_T [m²].
        rule: The clause's numbers.

    Returns:
        1 where no reduction applies.
    """
    influence_area = rule.element_factor.value * tributary_area
    if not rule.enabled or influence_area < rule.least_influence_area.value:
        return 1.0
    share = rule.constant.value + rule.area_coefficient.value / sqrt(influence_area)
    return min(1.0, max(rule.least_ratio_one_floor.value, share))


def reduction_factor(loading: BeamLoading, rules: RuleSet) -> float:
    """Share of the reducible live load on one beam; 1 on roofs, and above the load up to which reduction is allowed."""
    if loading.totals[LoadCase.LIVE] <= 0.0:
        return 1.0
    if rules.loads.floor_live.value > rules.reduction.live_load_limit.value * (1.0 + 1e-9):
        return 1.0
    return reduced_share(loading.tributary_area, rules.reduction)
