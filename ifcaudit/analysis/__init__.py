"""Mechanics of single beams, vectorised; no rules, no model."""
