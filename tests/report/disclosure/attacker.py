"""An attacker who knows nothing of the program: every number shown is an equation in the people.

The unknowns are how many people there are of each kind (each combination of what is recorded,
missing values included). Every count that a tree shows is a sum of them. What a hidden count can
still be is found by integer programming over all of them at once.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
from scipy.optimize import Bounds, LinearConstraint, milp

from fourfold.results import tree

Person = dict[str, Any]
Test = Callable[[Person], bool]


@dataclass(frozen=True)
class Statement:
    """A place of the tree that counts the people who pass ``test``."""

    where: str
    value: int | None
    reason: str | None
    test: Test


def statements(results: tree.Results) -> Iterator[Statement]:
    """Every count of the tree with whom it counts; ``analysed`` marks complete people."""
    flow = results.participants

    def one(where: str, owner: Any, field: str, test: Test, at: Any = None) -> Statement:
        value = getattr(owner, field)
        if at is not None:
            value = value[at]
        reason = owner.hidden.get(field) if value is None else None
        return Statement(f"{where}.{field}{'' if at is None else [at]}", value, reason, test)

    def event(person: Person) -> bool:
        return person["outcome"] == "yes"

    def complete(person: Person) -> bool:
        return None not in person.values()

    yield one("flow", flow, "eligible", lambda p: True)
    yield one("flow", flow, "incomplete", lambda p: not complete(p))
    yield one("flow", flow, "analysed", complete)
    yield one("flow", flow, "events", lambda p: complete(p) and event(p))
    yield one("flow", flow, "non_events", lambda p: complete(p) and not event(p))
    yield one("flow.exclusion", flow.exclusions[0], "remaining", lambda p: True)
    yield one("model", results.model, "n", complete)
    yield one("model", results.model, "events", lambda p: complete(p) and event(p))
    for name in flow.crude_rows:
        yield one("flow", flow, "crude_rows", lambda p, v=name: _known(p, v), name)
    for missing in flow.missing:
        yield one(f"missing.{missing.variable}", missing, "count", lambda p, v=missing.variable: p[v] is None)
    for pattern in flow.patterns if not results.analysis.hide_zero else []:
        yield one(
            f"pattern.{pattern.variables}", pattern, "count",
            lambda p, names=pattern.variables: sorted(k for k, v in p.items() if v is None) == sorted(names),
        )  # fmt: skip
    for found in flow.missing_associations:
        name = found.variable
        at = f"association.{name}"
        yield one(at, found, "incomplete", lambda p, v=name: p["outcome"] is not None and p[v] is None)
        yield one(at, found, "events_incomplete", lambda p, v=name: event(p) and p[v] is None)
        yield one(at, found, "complete", lambda p, v=name: _known(p, v))
        yield one(at, found, "events_complete", lambda p, v=name: event(p) and p[v] is not None)
    for level in results.audit.levels:
        at = f"level.{level.variable}.{level.level}"

        def inside(person: Person, level: tree.SparseLevel = level) -> bool:
            return complete(person) and person[level.variable] == level.level

        yield one(at, level, "events", lambda p, i=inside: i(p) and event(p))
        yield one(at, level, "non_events", lambda p, i=inside: i(p) and not event(p))
    for table in results.tables:
        for cell, exposed, with_event in (
            ("a", "yes", True), ("b", "yes", False), ("c", "no", True), ("d", "no", False),
        ):  # fmt: skip

            def counted(
                person: Person, t: tree.FourfoldTable = table, e: str = exposed, w: bool = with_event
            ) -> bool:
                return complete(person) and person[t.exposure] == e and event(person) == w

            yield one("table", table, cell, counted)
    for kind in ("crude", "adjusted"):
        for estimate in getattr(results.estimates, kind):
            at = f"{kind}.{estimate.term}.{estimate.level}"

            def within(person: Person, e: tree.Estimate = estimate) -> bool:
                return complete(person) and (e.term.startswith("q") or person[e.term] == (e.level or "yes"))

            yield one(at, estimate, "events", lambda p, i=within: i(p) and event(p))
            yield one(at, estimate, "total", within)
    tables = [results.descriptives.by_outcome, *results.descriptives.by_exposure]
    for described in tables:
        assert described is not None
        yield from _table(described, one)
    yield from _bins(results, complete, event)


def _table(described: tree.DescriptiveTable, one: Callable[..., Statement]) -> Iterator[Statement]:
    by = described.by
    for place, group in enumerate(described.groups):
        yield one(f"by {by}", described, "group_sizes", lambda p, g=group: p[by] == g, place)
    for row in described.rows:
        for cell in (row.overall, *row.groups):

            def column(person: Person, g: str = cell.group) -> bool:
                return person[by] is not None if g == "overall" else bool(person[by] == g)

            at = f"by {by}.{row.variable}.{row.level}.{cell.group}"
            name = row.variable
            yield one(at, cell, "total", lambda p, c=column, v=name: c(p) and p[v] is not None)
            yield one(at, cell, "missing", lambda p, c=column, v=name: c(p) and p[v] is None)
            if row.level is not None:
                yield one(at, cell, "count", lambda p, c=column, v=name, k=row.level: c(p) and p[v] == k)


def _bins(results: tree.Results, complete: Test, event: Test) -> Iterator[Statement]:
    for place, found in enumerate(results.risk_distribution):

        def inside(person: Person, place: int = place) -> bool:
            return complete(person) and person["bin"] == place

        for field, wanted in (("events", True), ("non_events", False)):
            value = getattr(found, field)
            yield Statement(
                f"risk {place}.{field}", value, found.hidden.get(field) if value is None else None,
                lambda p, i=inside, w=wanted: i(p) and event(p) == w,
            )  # fmt: skip


def _known(person: Person, variable: str) -> bool:
    return person["outcome"] is not None and person[variable] is not None


class Attack:
    """The equations of one tree over all kinds of people there could be."""

    def __init__(
        self, results: tree.Results, truth: tree.Results, kinds: list[Person], *, marks: bool = True
    ) -> None:
        limit = truth.analysis.smallest_count
        least = 0 if truth.analysis.hide_zero else 1
        self.found = list(statements(results))
        self.truth = [one.value for one in statements(truth)]
        self.low, self.high = [], []
        for one, true in zip(self.found, self.truth, strict=True):
            low, high = 0.0, np.inf
            if one.value is not None:
                low = high = float(one.value)
            elif marks and one.reason == "small":
                low, high = float(least), limit - 1.0
            elif marks and one.reason == "subtraction":
                # More than he can know: which of these are below the limit themselves.
                assert true is not None
                low = float(limit if true >= limit else least)
            self.low.append(low)
            self.high.append(high)
        self.matrix = np.array([[float(one.test(kind)) for kind in kinds] for one in self.found])

    def range_of(self, test_row: np.ndarray) -> tuple[float, float]:
        """Least and greatest number of people of a kind that all equations allow."""
        ends = []
        for sign in (1.0, -1.0):
            found = milp(
                sign * test_row,
                integrality=np.ones(test_row.size, dtype=np.int64),
                bounds=Bounds(0, 1e6),
                constraints=LinearConstraint(self.matrix, self.low, self.high),
            )
            assert found.x is not None, found.message
            ends.append(round(float(test_row @ found.x)))
        return ends[0], ends[1]

    def hidden(self) -> Iterator[tuple[Statement, int, np.ndarray]]:
        """Each hidden count once, with its true value and the kinds of people it counts."""
        seen: set[bytes] = set()
        for one, true, row in zip(self.found, self.truth, self.matrix, strict=True):
            if one.value is None and true is not None and row.tobytes() not in seen:
                seen.add(row.tobytes())
                yield one, true, row
