"""Everything that the program can notice, in one place, and how it notices.

Rules read the results tree alone. Words are made from a finding's id and values at rendering, in
any language. What may not be told is declared here by its place in the values, so that the pass
that hides small counts reaches into findings as well.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from types import MappingProxyType
from typing import Any, NamedTuple

from fourfold.findings import (
    coding,
    data,
    design,
    fit,
    flow,
    leverage,
    performance,
    phrases,
    places,
    reading,
    release,
    selection,
    shape,
    size,
)
from fourfold.findings.entry import GRADES, Entry
from fourfold.findings.places import Path
from fourfold.results import tree

__all__ = ["CATALOGUE", "Entry", "Path", "Sensitive", "notice", "replace", "sensitive"]

COUNT, DERIVED = "count", "derived"

_STAGES = (
    data, flow, design, selection, coding, fit, reading, phrases, shape, size, leverage, performance, release,
)  # fmt: skip

CATALOGUE: Mapping[str, Entry] = MappingProxyType(
    {entry.id: entry for stage in _STAGES for entry in stage.ENTRIES}
)


def notice(results: tree.Results) -> list[tree.Finding]:
    """Everything there is to notice: serious first, then concerns, then remarks.

    Parameters
    ----------
    results : tree.Results
        A whole tree, or one as far as an audit goes: pieces that are None or empty are passed over.

    Returns
    -------
    list of tree.Finding
        Within a grade, in the order of the catalogue.
    """
    found = [finding for entry in CATALOGUE.values() for finding in entry.notice(results)]
    return sorted(found, key=lambda finding: GRADES.index(finding.grade))


class Sensitive(NamedTuple):
    """A place in a finding's values, what stands there, and whether it is a ``count`` or ``derived``."""

    path: Path
    value: Any
    kind: str


def sensitive(finding: tree.Finding) -> list[Sensitive]:
    """Every value of a finding that counts people or from which such a count could be worked out.

    Of a finding that the catalogue does not know every whole number is taken for a count and every
    other number for derived: one from another version must not tell what is hidden.
    """
    entry = CATALOGUE.get(finding.id)
    if entry is None:
        return [
            Sensitive(path, value, COUNT if isinstance(value, int) else DERIVED)
            for path, value in places.numbers(finding.values)
        ]
    return [
        Sensitive(path, places.value_at(finding.values, path), kind)
        for kind, patterns in ((COUNT, entry.counts), (DERIVED, entry.derived))
        for pattern in patterns
        for path in places.paths(finding.values, pattern)
    ]


def replace(finding: tree.Finding, path: Path, value: Any, reason: str | None = None) -> tree.Finding:
    """A finding with another value at one place; with a reason, the place is named as hidden for it."""
    hidden = finding.hidden if reason is None else {**finding.hidden, places.written(path): reason}
    return dataclasses.replace(finding, values=places.with_value(finding.values, path, value), hidden=hidden)
