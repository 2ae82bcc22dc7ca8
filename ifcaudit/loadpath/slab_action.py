"""How a slab may act: decks and planks span one way, a cast concrete panel may span two ways."""

from __future__ import annotations

from ifcaudit.floor.stacking import Stack
from ifcaudit.model.framing import SlabBehaviour
from ifcaudit.model.material import MaterialFamily
from ifcaudit.rulebook.records import MaterialRules

LEAST_TWO_WAY_THICKNESS = 0.10
"""Thinner concrete is taken as a topping on deck or planks, which spans one way [m]."""


def slab_behaviour(stack: Stack, materials: MaterialRules) -> SlabBehaviour:
    """Say whether the structural slab of a stack may span two ways.

    Only cast concrete may. Where any text of the slab or of a layer names deck, planks, hollow-core or precast units,
    or the slab is a floor unit, it spans one way.
    """
    slab = stack.slab
    texts = [slab.name.lower(), *(name.lower() for layer in slab.layers for name in layer.material.names)]
    if slab.floor_unit or any(word in text for word in materials.one_way_words for text in texts):
        return SlabBehaviour(two_way=False)
    concrete = sum(
        layer.thickness
        for layer in slab.layers
        if any(_family(name, materials) is MaterialFamily.CONCRETE for name in layer.material.names)
    )
    return SlabBehaviour(two_way=concrete >= LEAST_TWO_WAY_THICKNESS)


def _family(name: str, materials: MaterialRules) -> MaterialFamily | None:
    """The family named by the longest word found in a material's name."""
    lower = name.lower()
    words = [word for word in materials.family_words if word in lower]
    return materials.family_words[max(words, key=len)] if words else None
