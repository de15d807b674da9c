"""Hiding of small counts and of everything that gives them away: one pass over the tree."""

from fourfold.report.disclosure.hiding import hide

__all__ = ["hide"]
