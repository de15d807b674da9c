"""The participant flow: exclusions, missing values, and the people who remain."""

from __future__ import annotations

from itertools import combinations, pairwise

from fourfold.report.disclosure.ledger import Item, Key, Ledger, Path
from fourfold.report.disclosure.places.keys import (
    ALL,
    ANALYSED,
    BETWEEN,
    ELIGIBLE,
    EVENT,
    MISSING,
    NONE,
    RECORDED,
    UNRECORDED,
    Names,
    everyone,
    jointly,
    people,
)
from fourfold.results import tree

HERE: Path = ("participants",)
READ: Key = ("flow", "read")
INCOMPLETE: Key = ("flow", "incomplete")

THE_WHOLE = 1000.0
"""Cost of hiding the people analysed or their events: nothing else in the report can be read then."""


MOST_UNLISTED = 5
"""Variables whose possible patterns of missing values are all entered, if none is listed."""


def enter(results: tree.Results, ledger: Ledger, names: Names) -> None:
    """Enter the counts of the flow and how they add up."""
    found = results.participants
    _enter_steps(found, ledger)
    _enter_whole(results, ledger, names)
    _enter_missing(found, ledger, names)
    _enter_patterns(found, ledger, names)
    for field in ("duplicated_identifiers", "duplicated_rows"):
        ledger.place((*HERE, field), getattr(found, field), found.hidden, ("flow", field))
    ledger.place(
        ("provenance", "rows_read"), results.provenance.rows_read, results.provenance.hidden, READ, 20
    )


def _enter_steps(found: tree.Participants, ledger: Ledger) -> None:
    eligible = everyone(ELIGIBLE)
    ledger.place((*HERE, "read"), found.read, found.hidden, READ, 20)
    ledger.place((*HERE, "eligible"), found.eligible, found.hidden, eligible, 30)
    ledger.place((*HERE, "incomplete"), found.incomplete, found.hidden, INCOMPLETE, 10)
    left = [READ]
    for place, step in enumerate(found.exclusions):
        here: Path = (*HERE, "exclusions", place)
        last = place == len(found.exclusions) - 1
        remaining = eligible if last else ("flow", "remaining", str(place))
        ledger.place((*here, "count"), step.count, step.hidden, ("flow", "excluded", str(place)), 4)
        ledger.place((*here, "remaining"), step.remaining, step.hidden, remaining, 5)
        left.append(remaining)
    for place, (before, after) in enumerate(pairwise(left)):
        ledger.relate(before, [after, ("flow", "excluded", str(place))])
    if not found.exclusions:
        ledger.relate(READ, [eligible])


def _enter_whole(results: tree.Results, ledger: Ledger, names: Names) -> None:
    found, model = results.participants, results.model
    ledger.place((*HERE, "analysed"), found.analysed, found.hidden, everyone(ANALYSED), THE_WHOLE)
    ledger.place((*HERE, "events"), found.events, found.hidden, everyone(ANALYSED, EVENT), THE_WHOLE)
    ledger.place((*HERE, "non_events"), found.non_events, found.hidden, everyone(ANALYSED, NONE), THE_WHOLE)
    ledger.place(("model", "n"), model.n, model.hidden, everyone(ANALYSED), THE_WHOLE)
    ledger.place(("model", "events"), model.events, model.hidden, everyone(ANALYSED, EVENT), THE_WHOLE)
    ledger.relate(everyone(ANALYSED), [everyone(ANALYSED, EVENT), everyone(ANALYSED, NONE)])
    ledger.guard(everyone(ANALYSED, NONE))
    ledger.relate(everyone(ELIGIBLE), [everyone(ANALYSED), INCOMPLETE])
    ledger.relate(everyone(ELIGIBLE), [everyone(ELIGIBLE, RECORDED), everyone(ELIGIBLE, UNRECORDED)])
    ledger.relate(everyone(ELIGIBLE, RECORDED), [everyone(ELIGIBLE, EVENT), everyone(ELIGIBLE, NONE)])
    for outcome in (EVENT, NONE):
        ledger.relate(everyone(ELIGIBLE, outcome), [everyone(ANALYSED, outcome), everyone(BETWEEN, outcome)])
    ledger.relate(
        INCOMPLETE, [everyone(BETWEEN, EVENT), everyone(BETWEEN, NONE), everyone(ELIGIBLE, UNRECORDED)]
    )


def missing_of(variable: str, names: Names) -> Key:
    """Eligible people without a value of the variable."""
    if variable == names.outcome:
        return everyone(ELIGIBLE, UNRECORDED)
    return people(ELIGIBLE, variable, MISSING, ALL)


def _enter_missing(found: tree.Participants, ledger: Ledger, names: Names) -> None:
    for place, missing in enumerate(found.missing):
        here: Path = (*HERE, "missing", place)
        key = ledger.place(
            (*here, "count"), missing.count, missing.hidden, missing_of(missing.variable, names), 2
        )
        ledger.derive((*here, "percent"), [key, everyone(ELIGIBLE)])
    for variable, rows in found.crude_rows.items():
        key = people(ELIGIBLE, variable, RECORDED, RECORDED)
        ledger.place((*HERE, "crude_rows", Item(variable)), rows, found.hidden, key, 4)
        _relate_missing(variable, ledger)
    for place, one in enumerate(found.missing_associations):
        here = (*HERE, "missing_associations", place)
        keys = [
            ledger.place(
                (*here, field), getattr(one, field), one.hidden, people(ELIGIBLE, one.variable, *at), 3
            )
            for field, at in (
                ("events_incomplete", (MISSING, EVENT)),
                ("incomplete", (MISSING, RECORDED)),
                ("events_complete", (RECORDED, EVENT)),
                ("complete", (RECORDED, RECORDED)),
            )
        ]
        _relate_missing(one.variable, ledger)
        for field in ("odds_ratio", "lower", "upper", "p_value"):
            ledger.derive((*here, field), keys)


def _relate_missing(variable: str, ledger: Ledger) -> None:
    for outcome in (EVENT, NONE, RECORDED):
        ledger.relate(
            everyone(ELIGIBLE, outcome),
            [people(ELIGIBLE, variable, level, outcome) for level in (RECORDED, MISSING)],
        )
    for level in (RECORDED, MISSING):
        ledger.relate(
            people(ELIGIBLE, variable, level, RECORDED),
            [people(ELIGIBLE, variable, level, outcome) for outcome in (EVENT, NONE)],
        )
    ledger.relate(
        people(ELIGIBLE, variable, MISSING, ALL),
        [people(ELIGIBLE, variable, MISSING, outcome) for outcome in (RECORDED, UNRECORDED)],
    )
    ledger.guard(people(ELIGIBLE, variable, MISSING, EVENT), people(ELIGIBLE, variable, MISSING, NONE))


def _enter_patterns(found: tree.Participants, ledger: Ledger, names: Names) -> None:
    keys = [
        ledger.place(
            (*HERE, "patterns", place, "count"),
            pattern.count,
            pattern.hidden,
            ("flow", "pattern", str(place)),
        )
        for place, pattern in enumerate(found.patterns)
    ]
    if keys:
        others: list[Key] = [] if _all_listed(found, ledger, keys) else [("flow", "pattern", "others")]
        ledger.relate(INCOMPLETE, [*keys, *others])


def relate_patterns(results: tree.Results, ledger: Ledger, names: Names) -> None:
    """Whoever is missing shows in several places: link the patterns to all of them.

    A pattern is split by outcome, and again by each variable that heads a table of its own.
    """
    patterns = patterns_of(results, ledger, names)
    if not patterns:
        return
    outcomes: dict[Key, tuple[str, ...]] = {
        key: (UNRECORDED,) if names.outcome in lacking else (EVENT, NONE) for key, lacking in patterns.items()
    }
    for key in patterns:
        ledger.relate(key, [(*key, outcome) for outcome in outcomes[key]])
    for outcome in (EVENT, NONE):
        ledger.relate(
            everyone(BETWEEN, outcome), [(*key, outcome) for key in patterns if outcome in outcomes[key]]
        )
    for variable in {*names.in_model(), names.outcome} - {""}:
        lacking = [key for key in patterns if variable in patterns[key]]
        if variable == names.outcome:
            ledger.relate(missing_of(variable, names), lacking)
            continue
        ledger.relate(missing_of(variable, names), lacking)
        for outcome in (EVENT, NONE):
            ledger.relate(
                people(ELIGIBLE, variable, MISSING, outcome),
                [(*key, outcome) for key in lacking if outcome in outcomes[key]],
            )
    for table in results.descriptives.by_exposure:
        groups = [names.level(table.by, group) for group in table.groups]
        _split_patterns(table.by, groups, patterns, outcomes, ledger, names)


def _split_patterns(
    by: str,
    groups: list[str],
    patterns: dict[Key, frozenset[str]],
    outcomes: dict[Key, tuple[str, ...]],
    ledger: Ledger,
    names: Names,
) -> None:
    within = [key for key in patterns if by not in patterns[key]]
    for key in within:
        for outcome in outcomes[key]:
            ledger.relate((*key, outcome), [(*key, outcome, by, group) for group in groups])
    for group in groups:
        for outcome, whole in (
            (EVENT, people(BETWEEN, by, group, EVENT)),
            (NONE, people(BETWEEN, by, group, NONE)),
            (UNRECORDED, people(ELIGIBLE, by, group, UNRECORDED)),
        ):
            ledger.relate(whole, [(*key, outcome, by, group) for key in within if outcome in outcomes[key]])
        for variable in names.in_model():
            if variable != by:
                ledger.relate(
                    jointly(ELIGIBLE, (by, group), (variable, MISSING)),
                    [
                        (*key, outcome, by, group)
                        for key in within
                        if variable in patterns[key]
                        for outcome in outcomes[key]
                    ],
                )


def patterns_of(results: tree.Results, ledger: Ledger, names: Names) -> dict[Key, frozenset[str]] | None:
    """The patterns of missing values, which variables each lacks.

    Where they are not all listed, every pattern that there could be, if the variables are few; None
    if they are many, for then people who lack one variable tell little of another.
    """
    found = results.participants
    keys = [ledger.at.get((*HERE, "patterns", place, "count")) for place in range(len(found.patterns))]
    listed = {
        key: frozenset(pattern.variables)
        for key, pattern in zip(keys, found.patterns, strict=True)
        if key is not None
    }
    if listed and _all_listed(found, ledger, list(listed)):
        return listed
    variables = sorted({*names.in_model(), names.outcome} - {""})
    if found.incomplete == 0 or len(variables) > MOST_UNLISTED:
        return None
    possible = [frozenset(some) for n in range(1, len(variables) + 1) for some in combinations(variables, n)]
    ledger.relate(INCOMPLETE, [("flow", "lacking", *sorted(some)) for some in possible])
    return {("flow", "lacking", *sorted(some)): some for some in possible}


def _all_listed(found: tree.Participants, ledger: Ledger, keys: list[Key]) -> bool:
    """Do the patterns make up all the incomplete? After hiding it is taken that they do."""
    counts = [ledger.counts[key].value for key in keys]
    if None in counts or found.incomplete is None:
        return True
    return sum(count or 0 for count in counts) == found.incomplete
