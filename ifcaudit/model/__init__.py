"""Frozen records that the stages exchange: SI units, world coordinates, no behaviour beyond geometry."""
