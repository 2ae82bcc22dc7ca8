"""From an IFC file to a :class:`~ifcaudit.model.building.Building`: SI, world coordinates, no rules."""
