"""Counts of the analysis set: fourfold tables, estimates and levels, by outcome."""

from __future__ import annotations

from collections.abc import Iterable

from fourfold.report.disclosure.ledger import Key, Ledger, Path
from fourfold.report.disclosure.places.keys import (
    ABSENT,
    ALL,
    ANALYSED,
    BETWEEN,
    ELIGIBLE,
    EVENT,
    MISSING,
    NONE,
    PRESENT,
    Names,
    everyone,
    people,
)
from fourfold.results import tree

TABLE_FIGURES = ("odds_ratio", "risk_ratio", "risk_difference", "chi_squared", "chi_squared_p", "fisher_p")
ESTIMATE_FIGURES = ("log_odds_ratio", "standard_error", "odds_ratio", "lower", "upper", "p_value")


def enter(results: tree.Results, ledger: Ledger, names: Names) -> None:
    """Enter the counts of the analysis set, what is computed from them, and how they add up."""
    _enter_tables(results, ledger, names)
    _enter_estimates(results, ledger, names)
    _enter_levels(results, ledger, names)
    for variable in names.in_model():
        if names.categorical(variable):
            _relate(variable, ledger, names, _levels_seen(results, names, variable))


def cells(variable: str, levels: Iterable[str]) -> list[Key]:
    """Events and non-events of these levels of a variable."""
    return [people(ANALYSED, variable, level, outcome) for level in levels for outcome in (EVENT, NONE)]


def _cost(names: Names, variable: str, level: str) -> float:
    # With the reference level goes every crude odds ratio of the variable.
    return 2.0 * names.dearer(variable) * (3.0 if level == names.reference(variable) else 1.0)


def _enter_tables(results: tree.Results, ledger: Ledger, names: Names) -> None:
    for place, table in enumerate(results.tables):
        here: Path = ("tables", place)
        keys = [
            ledger.place(
                (*here, field),
                getattr(table, field),
                table.hidden,
                people(ANALYSED, table.exposure, level, outcome),
                _cost(names, table.exposure, level),
            )
            for field, level, outcome in (
                ("a", PRESENT, EVENT),
                ("b", PRESENT, NONE),
                ("c", ABSENT, EVENT),
                ("d", ABSENT, NONE),
            )
        ]
        ledger.derive((*here, "risk_exposed"), keys[:2])
        ledger.derive((*here, "risk_unexposed"), keys[2:])
        # The smallest expected count is a product of two margins: it could give a margin away.
        for field in (*TABLE_FIGURES, "smallest_expected"):
            ledger.derive((*here, field), keys)
        if ledger.limit.hide_zero:
            ledger.derive((*here, "note"), keys)


def _enter_estimates(results: tree.Results, ledger: Ledger, names: Names) -> None:
    for kind in ("crude", "adjusted"):
        for place, estimate in enumerate(getattr(results.estimates, kind)):
            here: Path = ("estimates", kind, place)
            level = ALL
            if names.categorical(estimate.term):
                level = names.level(estimate.term, estimate.level)
            cost = _cost(names, estimate.term, level) if level != ALL else 1000.0
            for field, outcome in (("events", EVENT), ("total", ALL)):
                key = people(ANALYSED, estimate.term, level, outcome)
                ledger.place((*here, field), getattr(estimate, field), estimate.hidden, key, cost)
            reference = names.reference(estimate.term)
            if kind == "crude" and level != ALL and reference is not None:
                # A crude model of a category has as many parameters as levels: an odds ratio of it
                # and its interval are functions of the four counts that it compares.
                for field in ESTIMATE_FIGURES:
                    ledger.derive((*here, field), cells(estimate.term, (level, reference)))
    for place, test in enumerate(results.term_tests):
        if test.model == "crude" and names.categorical(test.term):
            for field in ("statistic", "p_value"):
                ledger.derive(("term_tests", place, field), cells(test.term, names.levels(test.term)))


def _enter_levels(results: tree.Results, ledger: Ledger, names: Names) -> None:
    for place, found in enumerate(results.audit.levels):
        level = names.level(found.variable, found.level)
        for field, outcome in (("events", EVENT), ("non_events", NONE)):
            ledger.place(
                ("audit", "levels", place, field),
                getattr(found, field),
                found.hidden,
                people(ANALYSED, found.variable, level, outcome),
                _cost(names, found.variable, level),
            )


def _levels_seen(results: tree.Results, names: Names, variable: str) -> list[str]:
    written = [one.level for one in results.audit.levels if one.variable == variable]
    written += [
        one.level for one in results.estimates.adjusted if one.term == variable and one.level is not None
    ]
    return [names.level(variable, level) for level in written]


def _relate(variable: str, ledger: Ledger, names: Names, seen: list[str]) -> None:
    levels = names.levels(variable, seen)
    for level in levels:
        # How many of a level had no event, or were there at all, follows from what is shown of it.
        parts = [people(ANALYSED, variable, level, outcome) for outcome in (EVENT, NONE)]
        ledger.relate(people(ANALYSED, variable, level, ALL), parts)
        ledger.guard(*parts, people(ANALYSED, variable, level, ALL))
        for outcome in (EVENT, NONE):
            ledger.relate(
                people(ELIGIBLE, variable, level, outcome),
                [people(who, variable, level, outcome) for who in (ANALYSED, BETWEEN)],
            )
    for outcome in (EVENT, NONE, ALL):
        ledger.relate(
            everyone(ANALYSED, outcome), [people(ANALYSED, variable, level, outcome) for level in levels]
        )
    for outcome in (EVENT, NONE):
        ledger.relate(
            everyone(BETWEEN, outcome),
            [
                *(people(BETWEEN, variable, level, outcome) for level in levels),
                people(ELIGIBLE, variable, MISSING, outcome),
            ],
        )
