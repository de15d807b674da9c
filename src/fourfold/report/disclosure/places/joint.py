"""Three tables of the same people: exposure by covariate, each of them by outcome.

The report shows an exposure against a covariate, the exposure against the outcome and the
covariate against the outcome, never all three at once. Three such tables still bind each other,
most of all where people are few; so the table of all three is in the ledger, though it stands
nowhere.
"""

from __future__ import annotations

from itertools import product

from fourfold.report.disclosure.ledger import Key, Ledger
from fourfold.report.disclosure.places.flow import patterns_of
from fourfold.report.disclosure.places.keys import (
    ANALYSED,
    ELIGIBLE,
    EVENT,
    MISSING,
    NONE,
    UNRECORDED,
    Names,
    jointly,
    people,
)
from fourfold.results import tree

MOST_CELLS = 1500
"""In a study with more, people are many and the three tables leave each other room."""

OUTCOMES = (EVENT, NONE, UNRECORDED)


def relate(results: tree.Results, ledger: Ledger, names: Names) -> None:
    """Enter the tables of exposure, covariate and outcome together."""
    pairs = [
        (table.by, variable)
        for table in results.descriptives.by_exposure
        for variable in dict.fromkeys(row.variable for row in table.rows)
        if names.categorical(variable) and variable != names.outcome
    ]
    cells = sum((len(names.levels(by)) + 1) * (len(names.levels(variable)) + 1) * 5 for by, variable in pairs)
    if cells > MOST_CELLS:
        return
    for by, variable in dict.fromkeys((min(pair), max(pair)) for pair in pairs):
        _Pair(by, variable, results, ledger, names).relate()


class _Pair:
    def __init__(self, first: str, second: str, results: tree.Results, ledger: Ledger, names: Names) -> None:
        self.variables = first, second
        self.levels = names.levels(first), names.levels(second)
        self.patterns = patterns_of(results, ledger, names)
        self.results, self.ledger, self.names = results, ledger, names
        self.modelled = set(self.variables) <= set(names.in_model())

    def cell(self, who: str, at: tuple[str, str], outcome: str) -> Key:
        return who, "three", *self.variables, *at, outcome

    def relate(self) -> None:
        wide = [[*levels, MISSING] for levels in self.levels]
        for at in product(wide[0], wide[1]):
            both = jointly(ELIGIBLE, (self.variables[0], at[0]), (self.variables[1], at[1]))
            self.ledger.relate(both, [self.cell(ELIGIBLE, at, outcome) for outcome in OUTCOMES])
        for side, outcome in product((0, 1), OUTCOMES):
            self._margins(ELIGIBLE, side, wide, outcome)
        if not self.modelled:
            return
        for outcome in (EVENT, NONE):
            for at in product(self.levels[0], self.levels[1]):
                whole = self.cell(ELIGIBLE, at, outcome)
                self.ledger.relate(
                    whole, [self.cell(who, at, outcome) for who in (ANALYSED, "lacking others")]
                )
            for side in (0, 1):
                self._margins(ANALYSED, side, [list(levels) for levels in self.levels], outcome)
            self._lacking_others(outcome)

    def _margins(self, who: str, side: int, levels: list[list[str]], outcome: str) -> None:
        for level in levels[side]:
            cells = [
                self.cell(who, (level, other) if side == 0 else (other, level), outcome)
                for other in levels[1 - side]
            ]
            self.ledger.relate(people(who, self.variables[side], level, outcome), cells)

    def _lacking_others(self, outcome: str) -> None:
        """Those who lack another variable only are told by the patterns."""
        if self.patterns is None:
            return
        around = {*self.variables, self.names.outcome}
        lacking = [(*key, outcome) for key, variables in self.patterns.items() if not variables & around]
        cells = [self.cell("lacking others", at, outcome) for at in product(self.levels[0], self.levels[1])]
        if lacking:
            whole: Key = ("lacking others", *self.variables, outcome)
            self.ledger.relate(whole, lacking)
            self.ledger.relate(whole, cells)
        else:
            for cell in cells:
                self.ledger.nobody(cell)
