"""Counts of the audit that add up to nothing else: implausible values, codes, dates out of order."""

from __future__ import annotations

from fourfold.report.disclosure.ledger import Ledger, Path
from fourfold.results import tree


def enter(results: tree.Results, ledger: Ledger) -> None:
    """Enter the counts; the values of few people go with their count."""
    for place, found in enumerate(results.audit.implausible):
        here: Path = ("audit", "implausible", place)
        for field, extreme in (("below", "lowest"), ("above", "highest")):
            key = ledger.place(
                (*here, field),
                getattr(found, field),
                found.hidden,
                ("implausible", found.variable, field, str(place)),
            )
            ledger.derive((*here, extreme), [key])
    for place, code in enumerate(results.audit.suspected_codes):
        ledger.place(
            ("audit", "suspected_codes", place, "count"),
            code.count,
            code.hidden,
            ("code", code.variable, str(place)),
        )
    for place, dates in enumerate(results.audit.date_order):
        ledger.place(
            ("audit", "date_order", place, "count"),
            dates.count,
            dates.hidden,
            ("dates", dates.covariate, str(place)),
        )
    if results.influence is not None:
        for field in ("high_leverage", "large_residuals"):
            ledger.place(
                ("influence", field),
                getattr(results.influence, field),
                results.influence.hidden,
                ("influence", field),
            )
