"""Verdicts: demand against capacity by a published standard."""
