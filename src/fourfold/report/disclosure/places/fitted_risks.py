"""Counts by fitted risk: the bins of its distribution."""

from __future__ import annotations

from fourfold.report.disclosure.ledger import Key, Ledger
from fourfold.report.disclosure.places.keys import ANALYSED, EVENT, NONE, everyone
from fourfold.results import tree


def enter(results: tree.Results, ledger: Ledger) -> None:
    """Enter the bins: together they hold everybody analysed."""
    for field, outcome in (("events", EVENT), ("non_events", NONE)):
        keys: list[Key] = [
            ledger.place(
                ("risk_distribution", place, field),
                getattr(found, field),
                found.hidden,
                ("fitted risk", str(place), outcome),
                0.5,
            )
            for place, found in enumerate(results.risk_distribution)
        ]
        if keys:
            ledger.relate(everyone(ANALYSED, outcome), keys)
