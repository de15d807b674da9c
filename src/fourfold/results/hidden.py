"""How a hidden number is marked: the lowest piece of the results tree."""

from __future__ import annotations

Hidden = dict[str, str]
"""Field name -> why it is hidden: ``small`` (below the limit), ``subtraction`` (would reveal
another), ``derived`` (computed from a hidden count)."""
