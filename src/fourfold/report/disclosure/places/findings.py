"""Counts inside findings, and figures in them that were computed from hidden ones."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace
from typing import Any

from fourfold.report.disclosure.ledger import DERIVED, SMALL, SUBTRACTION, Ledger
from fourfold.results import tree


def hide(found: Sequence[tree.Finding], ledger: Ledger) -> list[tree.Finding]:
    """Findings without what may not be told; the finding itself stays.

    A finding names its counts but not which people they count, so the rule is strict: where one
    count of a finding is small, or equals one that is hidden elsewhere, all its counts go, and
    what is derived from counts goes with them.
    """
    elsewhere = {
        count.value
        for count in ledger.counts.values()
        if count.hidden == SUBTRACTION and count.value is not None
    }
    touched = {part for key in ledger.counts if ledger.is_hidden(key) for part in key}
    return [
        _hidden(finding, ledger, elsewhere, touched)
        for finding in found
        if not _tells_a_zero(finding, ledger, touched)
    ]


def _hidden(finding: tree.Finding, ledger: Ledger, elsewhere: set[int], touched: set[str]) -> tree.Finding:
    counts, derived = _sensitive(finding)
    small = {name for name in counts if any(ledger.limit.small(n) for n in _numbers(finding.values[name]))}
    revealing = small | {
        name for name in counts if any(n in elsewhere for n in _numbers(finding.values[name]))
    }
    reasons: dict[str, str] = {}
    if revealing:
        reasons |= {name: SMALL if name in small else SUBTRACTION for name in counts}
    if revealing or finding.hidden or touched & set(finding.about):
        reasons |= dict.fromkeys(derived, DERIVED)
    reasons = {name: reason for name, reason in reasons.items() if finding.values[name] is not None}
    if not reasons:
        return finding
    return replace(
        finding,
        values={name: None if name in reasons else value for name, value in finding.values.items()},
        hidden={**finding.hidden, **reasons},
    )


def _sensitive(finding: tree.Finding) -> tuple[list[str], list[str]]:
    """Names of the counts and of the derived figures among the values."""
    from fourfold.findings import catalogue

    entry = catalogue.CATALOGUE.get(finding.id)
    if entry is None:
        # A finding of another version: every whole number may be a count, the rest derived.
        counts = [name for name, value in finding.values.items() if any(_numbers(value))]
        return counts, [name for name, value in finding.values.items() if isinstance(value, float)]
    return (
        [name for name in entry.counts if name in finding.values],
        [name for name in entry.derived if name in finding.values],
    )


def _numbers(value: Any) -> Iterator[int]:
    """Whole numbers anywhere in a value."""
    if isinstance(value, bool):
        return
    if isinstance(value, int):
        yield value
    elif isinstance(value, dict):
        for item in value.values():
            yield from _numbers(item)
    elif isinstance(value, list | tuple):
        for item in value:
            yield from _numbers(item)


def _tells_a_zero(finding: tree.Finding, ledger: Ledger, touched: set[str]) -> bool:
    """Would the finding say of a hidden zero that it is one? Separation is nothing else."""
    return ledger.limit.hide_zero and finding.id.startswith("SEP-") and bool(touched & set(finding.about))
