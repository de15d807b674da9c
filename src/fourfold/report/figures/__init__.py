"""Figures of the report, each drawn as its own lean SVG from the results tree."""
