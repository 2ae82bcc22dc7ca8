"""Shared builders of test scenes."""
