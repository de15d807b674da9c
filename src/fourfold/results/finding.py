"""Something the program noticed."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

from fourfold.results.hidden import Hidden


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """Something the program noticed. Words are made from ``id`` and ``values`` at rendering.

    ``grade`` is remark, concern or serious. ``section`` is the report section it belongs to:
    participants, results, trust or methods. ``about`` names the variables concerned.
    """

    id: str
    grade: str
    section: str
    values: dict[str, Any]
    source: str
    about: list[str] = field(default_factory=list)
    hidden: Hidden = field(default_factory=dict)
