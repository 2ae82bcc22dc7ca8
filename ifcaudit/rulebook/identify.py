"""What a model means by its names and drawings: section, material, density of a layer."""

from __future__ import annotations

from ifcaudit.rulebook.identify_materials import MaterialMatch, identify_material, layer_density
from ifcaudit.rulebook.identify_sections import SectionMatch, identify_section

__all__ = ["MaterialMatch", "SectionMatch", "identify_material", "identify_section", "layer_density"]
