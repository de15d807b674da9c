"""The one catalogue of everything the program can notice."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

from fourfold.findings import (
    estimation,
    influence,
    performance,
    reading,
    shape,
    size,
)
from fourfold.findings.entry import GRADES, Entry
from fourfold.results import tree

SECTIONS = (
    estimation, size, shape, influence, reading, performance,
)  # fmt: skip

CATALOGUE: Mapping[str, Entry] = MappingProxyType(
    {entry.id: entry for section in SECTIONS for entry in section.ENTRIES}
)


def notice(results: tree.Results) -> list[tree.Finding]:
    """Everything noticed in ``results``: serious first, then concerns, then remarks."""
    found = [finding for entry in CATALOGUE.values() for finding in entry.notice(results)]
    return sorted(found, key=lambda finding: GRADES.index(finding.grade))
