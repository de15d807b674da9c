"""Counts of the characteristics tables, by outcome and by exposure."""

from __future__ import annotations

from collections import defaultdict

from fourfold.report.disclosure.ledger import Key, Ledger, Path
from fourfold.report.disclosure.places.keys import (
    ABSENT,
    ALL,
    ELIGIBLE,
    EVENT,
    MISSING,
    NONE,
    PRESENT,
    RECORDED,
    UNRECORDED,
    Names,
    everyone,
    jointly,
    people,
)
from fourfold.results import tree

MOMENTS = ("mean", "sd")
POSITIONS = ("median", "lower_quartile", "upper_quartile")


def enter(results: tree.Results, ledger: Ledger, names: Names) -> None:
    """Enter the counts of the tables, what is computed from them, and how they add up."""
    found = results.descriptives
    if found.by_outcome is not None:
        _Table(found.by_outcome, ("descriptives", "by_outcome"), ledger, names).enter()
    for place, table in enumerate(found.by_exposure):
        _Table(table, ("descriptives", "by_exposure", place), ledger, names).enter()


class _Table:
    """One table of characteristics; its columns are levels of ``by``."""

    def __init__(self, table: tree.DescriptiveTable, here: Path, ledger: Ledger, names: Names) -> None:
        self.table, self.here, self.ledger, self.names = table, here, ledger, names
        self.by = table.by
        self.by_outcome = table.by == names.outcome
        self.groups = [names.level(table.by, group) for group in table.groups]

    def enter(self) -> None:
        for place, (group, size) in enumerate(zip(self.groups, self.table.group_sizes, strict=True)):
            self.ledger.place(
                (*self.here, "group_sizes", place), size, self.table.hidden, self.size(group), 40
            )
        levels: dict[str, list[str]] = defaultdict(list)
        for place, row in enumerate(self.table.rows):
            levels[row.variable].append(self._enter_row(place, row))
        for variable, seen in levels.items():
            self._relate(variable, [level for level in seen if level != RECORDED])
        self._relate_groups()

    def size(self, group: str) -> Key:
        """People of one column."""
        if self.by_outcome:
            return everyone(ELIGIBLE, _outcome(group))
        return people(ELIGIBLE, self.by, group, ALL)

    def cell(self, group: str, variable: str, level: str) -> Key:
        """People of one column at a level of a variable; ``RECORDED`` for the column over all groups."""
        if self.by_outcome:
            return people(ELIGIBLE, variable, level, _outcome(group))
        if variable == self.names.outcome:
            return people(ELIGIBLE, self.by, group, _outcome(level))
        return jointly(ELIGIBLE, (self.by, group), (variable, level))

    def _enter_row(self, place: int, row: tree.Descriptive) -> str:
        counted = row.level is not None
        level = self.names.level(row.variable, row.level) if counted else RECORDED
        columns: list[tuple[str, tree.DescriptiveCell, Path, float]] = [
            (RECORDED, row.overall, ("overall",), 2.5)
        ]
        columns += [
            (group, cell, ("groups", number), 1.0)
            for number, (group, cell) in enumerate(zip(self.groups, row.groups, strict=True))
        ]
        for group, cell, step, dear in columns:
            here: Path = (*self.here, "rows", place, *step)
            dear *= self.names.dearer(row.variable)
            total = self.ledger.place(
                (*here, "total"), cell.total, cell.hidden, self.cell(group, row.variable, RECORDED), 6 * dear
            )
            self.ledger.place(
                (*here, "missing"),
                cell.missing,
                cell.hidden,
                self.cell(group, row.variable, MISSING),
                2 * dear,
            )
            if counted:
                count = self.ledger.place(
                    (*here, "count"), cell.count, cell.hidden, self.cell(group, row.variable, level), dear
                )
                self.ledger.derive((*here, "percent"), [count, total])
            else:
                self._enter_moments(here, row, total)
        return level

    def _enter_moments(self, here: Path, row: tree.Descriptive, total: Key) -> None:
        count = self.ledger.counts.get(total)
        few = count is not None and (self.ledger.limit.small(count.value) or count.hidden == "small")
        for field in (*MOMENTS, *POSITIONS):
            if few:
                self.ledger.derive((*here, field), [total])
            elif field in MOMENTS:
                # The last digits of a mean tell by how many the sum was divided.
                self.ledger.round_off((*here, field), [total], row.decimals + 1)

    def _relate(self, variable: str, seen: list[str]) -> None:
        relate, cell = self.ledger.relate, self.cell
        levels = self.names.levels(variable, seen) if seen else []
        for group in (*self.groups, RECORDED):
            if levels:
                relate(cell(group, variable, RECORDED), [cell(group, variable, level) for level in levels])
                self.ledger.guard(*(cell(group, variable, level) for level in levels))
            size = self.size(group)
            relate(size, [cell(group, variable, known) for known in (RECORDED, MISSING)])
        for level in (*levels, RECORDED, MISSING):
            relate(cell(RECORDED, variable, level), [cell(group, variable, level) for group in self.groups])
        if variable != self.names.outcome:
            self._relate_to_everyone(variable, levels)

    def _relate_to_everyone(self, variable: str, levels: list[str]) -> None:
        """People left out of the table because ``by`` is not recorded link it to the other tables."""
        left: list[Key] = []
        for level in (*(levels or [RECORDED]), MISSING):
            everywhere = people(ELIGIBLE, variable, level, ALL)
            without = (
                people(ELIGIBLE, variable, level, UNRECORDED)
                if self.by_outcome
                else jointly(ELIGIBLE, (self.by, MISSING), (variable, level))
            )
            self.ledger.relate(everywhere, [self.cell(RECORDED, variable, level), without])
            left.append(without)
        whole = everyone(ELIGIBLE, UNRECORDED) if self.by_outcome else people(ELIGIBLE, self.by, MISSING, ALL)
        self.ledger.relate(whole, left)

    def _relate_groups(self) -> None:
        self.ledger.relate(self.size(RECORDED), [self.size(group) for group in self.groups])
        if self.by_outcome:
            return
        self.ledger.relate(everyone(ELIGIBLE), [self.size(RECORDED), people(ELIGIBLE, self.by, MISSING, ALL)])
        for group in (*self.groups, RECORDED, MISSING):
            self.ledger.relate(
                people(ELIGIBLE, self.by, group, ALL),
                [people(ELIGIBLE, self.by, group, outcome) for outcome in (RECORDED, UNRECORDED)],
            )


def _outcome(level: str) -> str:
    """A level of the outcome, or of what is known of it, as the last part of a key."""
    return {PRESENT: EVENT, ABSENT: NONE, MISSING: UNRECORDED}.get(level, level)
