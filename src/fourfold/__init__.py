"""Fourfold: from a study description and a data file to a risk report."""

__version__ = "0.1.0"
