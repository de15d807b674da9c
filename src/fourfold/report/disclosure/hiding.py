"""The one pass that hides small counts, and what gives them away, before anything is written.

Counts are entered in a ledger with how they add up; the ledger decides which to hide; then the
tree is rewritten. Everything computed from a hidden count goes with it. Running the pass on what
it returned changes nothing, and a tree without small counts comes back as it was.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields, is_dataclass, replace
from typing import Any

from fourfold.report.disclosure import rewrite, secondary
from fourfold.report.disclosure.ledger import DERIVED, Ledger, Path
from fourfold.report.disclosure.limit import Limit
from fourfold.report.disclosure.places import (
    analysed,
    audit,
    characteristics,
    findings,
    fit,
    fitted_risks,
    flow,
    groups,
    joint,
    roc,
)
from fourfold.report.disclosure.places.keys import ALL, ANALYSED, EVENT, NONE, Names, everyone
from fourfold.results import tree

TINY_FILE = 10
"""A file of fewer rows than this times the limit could be guessed row by row from its hash."""


def hide(results: tree.Results) -> tree.Results:
    """Hide every small count of the tree and everything that would give one away.

    Parameters
    ----------
    results : tree.Results
        ``analysis.smallest_count`` and ``analysis.hide_zero`` say which counts are small.

    Returns
    -------
    tree.Results
        Hidden fields are None and named in the ``hidden`` mapping of their owner: ``small``,
        ``subtraction`` (would reveal a small one) or ``derived`` (computed from a hidden one).
    """
    limit = Limit.of(results.analysis)
    if not (results.analysis.show_people and not limit.active):
        results = _without_people(results)
    if not limit.active:
        return results
    truth, names = results, Names.of(results)
    results = _joined(_without_patterns(results, limit), limit)
    ledger = ledger_of(results, limit)
    secondary.choose(ledger)
    hidden = {path: _reason(ledger, path) for path in ledger.at if ledger.is_hidden(ledger.at[path])}
    hidden |= {
        path: DERIVED for path, keys in ledger.derived.items() if any(ledger.is_hidden(key) for key in keys)
    }
    hidden |= {path: hidden.get(path, DERIVED) for path in fit.figures(results, ledger, names)}
    rounded = {
        path: decimals
        for path, (keys, decimals) in ledger.rounded.items()
        if any(ledger.is_hidden(key) for key in keys)
    }
    hiding = rewrite.hide_at(rewrite.round_at(results, rounded), hidden)
    hiding = _with_notes(hiding, hidden)
    hiding = fit.without_separation(hiding, fit.separated_by_hidden(results, ledger, names))
    hiding = _without_shares(_with_thin_curve(hiding, truth, ledger), ledger)
    hiding = replace(hiding, findings=findings.hide(results.findings, ledger, _shown(hiding)))
    return _without_hash(hiding, ledger)


def ledger_of(results: tree.Results, limit: Limit) -> Ledger:
    """The settled ledger of a tree: every count that stands in it and how they add up."""
    ledger, names = Ledger(limit), Names.of(results)
    flow.enter(results, ledger, names)
    analysed.enter(results, ledger, names)
    characteristics.enter(results, ledger, names)
    flow.relate_patterns(results, ledger, names)
    joint.relate(results, ledger, names)
    fitted_risks.enter(results, ledger)
    audit.enter(results, ledger)
    if results.sample_size is not None:
        ledger.derive(("sample_size", "events_per_parameter"), [everyone(ANALYSED, EVENT)])
    ledger.settle()
    return ledger


def _reason(ledger: Ledger, path: Path) -> str:
    return ledger.counts[ledger.at[path]].hidden or DERIVED


def _with_notes(results: tree.Results, hidden: dict[Path, str]) -> tree.Results:
    """Say of each odds ratio that went that it is hidden; a note on separation would tell a zero."""

    def noted(kind: str) -> list[tree.Estimate]:
        return [
            replace(estimate, note="hidden", hidden={**estimate.hidden, "odds_ratio": DERIVED})
            if ("estimates", kind, place, "odds_ratio") in hidden
            else estimate
            for place, estimate in enumerate(getattr(results.estimates, kind))
        ]

    return replace(results, estimates=tree.Estimates(crude=noted("crude"), adjusted=noted("adjusted")))


def _joined(results: tree.Results, limit: Limit) -> tree.Results:
    """Groups and bins with few people joined with their neighbours."""
    confidence, calibration = results.analysis.confidence, results.calibration
    return replace(
        results,
        calibration=None if calibration is None else groups.calibration(calibration, limit, confidence),
        outcome_by_quantity=[
            groups.outcome_by_quantity(one, limit, confidence) for one in results.outcome_by_quantity
        ],
    )


def _with_thin_curve(results: tree.Results, truth: tree.Results, ledger: Ledger) -> tree.Results:
    """The ROC curve without steps that tell a small count, or the sum of hidden bins of risk."""
    found = results.discrimination
    if found is None:
        return results
    known = _totals_known(ledger) and "auc" not in found.hidden
    events, non_events = (
        ledger.counts[everyone(ANALYSED, outcome)].value if known else None for outcome in (EVENT, NONE)
    )
    avoid = fitted_risks.edges(truth) if any(one.hidden for one in results.risk_distribution) else set()
    return replace(results, discrimination=roc.thin(found, events, non_events, avoid, ledger.limit))


def _without_shares(results: tree.Results, ledger: Ledger) -> tree.Results:
    """Where the people analysed or their events are hidden, nothing that adds up to them stays."""
    calibration = results.calibration
    revealing = results.discrimination is not None and "auc" in results.discrimination.hidden
    known = _totals_known(ledger)
    if calibration is not None and (revealing or not known):
        calibration = _emptied(calibration, "groups", "curve")
    by_quantity = results.outcome_by_quantity
    if not known:
        by_quantity = [_emptied(one, "bins", "curve") for one in by_quantity]
    return replace(results, calibration=calibration, outcome_by_quantity=by_quantity)


def _totals_known(ledger: Ledger) -> bool:
    return not any(ledger.is_hidden(everyone(ANALYSED, outcome)) for outcome in (ALL, EVENT, NONE))


def _emptied(value: Any, *names: str) -> Any:
    filled = [name for name in names if getattr(value, name)]
    if not filled:
        return value
    told = dict.fromkeys(filled, DERIVED)
    return replace(value, **{name: [] for name in filled}, hidden={**value.hidden, **told})


def _without_people(results: tree.Results) -> tree.Results:
    if not any(one.points for one in results.outcome_by_quantity):
        return results
    return replace(
        results, outcome_by_quantity=[replace(one, points=[]) for one in results.outcome_by_quantity]
    )


def _without_patterns(results: tree.Results, limit: Limit) -> tree.Results:
    """Where zeros are hidden, a list of the patterns that occur tells which do not."""
    if not limit.hide_zero:
        return results
    return replace(results, participants=_emptied(results.participants, "patterns"))


def _without_hash(results: tree.Results, ledger: Ledger) -> tree.Results:
    """Take the hash of a tiny file away if anything of it is hidden: it would confirm a guess."""
    found = results.provenance
    rows = found.rows_read if found.rows_read is not None else results.participants.read
    tiny = rows is None or rows < TINY_FILE * ledger.limit.smallest
    if not tiny or found.data_sha256 is None or not any(_marks(results)):
        return results
    provenance = replace(found, data_sha256=None, hidden={**found.hidden, "data_sha256": DERIVED})
    return replace(results, provenance=provenance)


def _shown(results: tree.Results) -> Iterator[float]:
    """Figures that are still told once small counts are hidden, and that findings repeat."""
    yield from _doubles([results.estimates, results.tables, results.discrimination])
    size, influence, together = results.sample_size, results.influence, results.collinearity
    found: list[float | None] = [test.p_value for test in results.term_tests]
    if size is not None:
        found += [size.shrinkage, size.required, size.shortfall, *(one.required for one in size.criteria)]
    if influence is not None:
        changes = [(one.largest_change, one.largest_change_refitted) for one in influence.terms]
        found += [abs(change) for pair in changes for change in pair if change is not None]
    if together is not None:
        found += [together.condition_index, *(one.scaled for one in together.gvif)]
    if results.calibration is not None and results.calibration.hosmer_lemeshow is not None:
        found.append(results.calibration.hosmer_lemeshow.p_value)
    yield from (float(one) for one in found if one is not None)


def _doubles(value: Any) -> Iterator[float]:
    """Every double anywhere in the tree."""
    if isinstance(value, float):
        yield value
    elif is_dataclass(value) and not isinstance(value, type):
        for field in fields(value):
            yield from _doubles(getattr(value, field.name))
    elif isinstance(value, list):
        for item in value:
            yield from _doubles(item)


def _marks(value: Any) -> Iterator[str]:
    """Every reason given anywhere in the tree."""
    if is_dataclass(value) and not isinstance(value, type):
        for field in fields(value):
            if field.name == "hidden":
                yield from getattr(value, field.name).values()
            else:
                yield from _marks(getattr(value, field.name))
    elif isinstance(value, list):
        for item in value:
            yield from _marks(item)
