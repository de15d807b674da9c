"""The data stage as a whole: a description becomes coded rows, a participant flow and an audit."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
import pyarrow as pa
from numpy.typing import NDArray

from fourfold.data.audit import audit
from fourfold.data.coding import Coded, band, band_labels, code, levelled
from fourfold.data.columns import Column, Rows
from fourfold.data.conditions import satisfied
from fourfold.data.duplicates import identical_rows, repeated_identifiers
from fourfold.data.incompleteness import associations_with_outcome, missing_by_variable, missing_patterns
from fourfold.data.levels import is_plain_number, spelled
from fourfold.data.raw import RawTable
from fourfold.data.settle import settle
from fourfold.data.source import named_in, read
from fourfold.data.variables import MODEL_ROLES, in_order, resolve
from fourfold.description.model import StudyDescription
from fourfold.errors import DataError, Position, Problem
from fourfold.results import tree

if TYPE_CHECKING:
    from fourfold.description.read import Loaded

Mask = NDArray[np.bool_]
MOST_PEOPLE = 2**53


@dataclass(frozen=True, slots=True)
class Prepared:
    """Everything that later stages need to know of the data.

    Attributes
    ----------
    sha256 : str
        Of the data file.
    rows_read : int
    columns_read : tuple of str
        Columns of the file that were read.
    eligible : Rows
        Rows left after the exclusions.
    analysis : Rows
        Eligible rows complete in the outcome and every variable of the model.
    outcome : (n,) bool array
        The event, over the analysis rows.
    participants : tree.Participants
    audit : tree.Audit
    variables : list of tree.Variable
        Outcome first, then exposures, predictors, covariates and other described variables.
    """

    sha256: str
    rows_read: int
    columns_read: tuple[str, ...]
    eligible: Rows
    analysis: Rows
    outcome: Mask
    participants: tree.Participants
    audit: tree.Audit
    variables: list[tree.Variable]


def prepare(loaded: Loaded) -> Prepared:
    """Read and code the data of a study.

    Raises
    ------
    DataError
        If the data do not fit the description; every problem of the coding is reported at once.
    """
    description = loaded.description
    table = read(loaded)
    coded = _code_all(description, table)
    counts = _counts(description, table)
    everyone = np.ones(table.n, dtype=bool) if counts is None else counts > 0
    kept, exclusions = _exclude(description, coded, everyone, counts)
    if not kept.any():
        flow = "; ".join(f"{step.reason}: {step.count}" for step in exclusions)
        raise _error(
            table, f"no row is left after the exclusions ({flow}).", "Check the conditions of `exclusions:`."
        )
    eligible = _settle_all(description, coded, table, kept, counts)
    model = [name for name, role, _ in in_order(description) if role in MODEL_ROLES]
    needed = [description.outcome, *model]
    complete = ~np.logical_or.reduce([eligible.columns[name].missing for name in needed])
    analysis = eligible.take(complete)
    event = _outcome(description, table, eligible, analysis, needed)
    participants = tree.Participants(
        read=table.n if counts is None else int(counts.sum()),
        exclusions=exclusions,
        eligible=eligible.people,
        incomplete=eligible.people - analysis.people,
        analysed=analysis.people,
        events=analysis.count(event),
        non_events=analysis.count(~event),
        crude_rows=_crude_rows(description, eligible),
        missing=missing_by_variable(eligible, needed),
        patterns=missing_patterns(eligible, needed),
        missing_associations=associations_with_outcome(
            eligible, description.outcome, needed, description.analysis.confidence
        ),
        duplicated_identifiers=_repeated_identifiers(description, table, kept),
        duplicated_rows=_identical_rows(description, table, kept),
    )
    variables = resolve(description, analysis)
    return Prepared(
        sha256=table.sha256,
        rows_read=table.n,
        columns_read=tuple(table.columns),
        eligible=eligible,
        analysis=analysis,
        outcome=event,
        participants=participants,
        audit=audit(description, variables, eligible, analysis, event),
        variables=variables,
    )


def _code_all(description: StudyDescription, table: RawTable) -> dict[str, Coded]:
    coded: dict[str, Coded] = {}
    described = description.variables
    for name, variable in described.items():
        if variable.from_ is None:
            coded[name] = code(name, variable, table, description.data.missing)
    for name, variable in described.items():
        if variable.from_ is not None:
            labels = band_labels(variable.cut)
            coded[name] = band(name, variable.cut, labels, coded[variable.from_])
    codes = [spelled(value) for value in description.data.missing if value is not None]
    for exclusion in description.exclusions:
        for name in named_in(exclusion.where):
            if name not in coded:
                coded[name] = levelled(name, "category", table.columns[name], codes, [], table.decimal)
    return coded


def _counts(description: StudyDescription, table: RawTable) -> NDArray[np.int64] | None:
    name = description.data.counts
    if name is None:
        return None
    # A count of 999 is 999 people: codes that are numbers do not apply here.
    codes = [spelled(value) for value in description.data.missing if value is not None]
    counts = code_counts(name, table, [word for word in codes if not is_plain_number(word)])
    wrong = np.isnan(counts) | (counts < 0) | (counts != np.floor(counts))
    if wrong.any():
        places = np.flatnonzero(wrong)
        shown = ", ".join(f"{table.line_word} {table.lines[place]}" for place in places[:5])
        raise DataError(
            Problem(
                f"{name} says how many people a row stands for, so each value must be a whole number of 0 or "
                f"more; {places.size} are not: {shown}.",
                "Correct the data; a row that stands for nobody has 0.",
                Position(table.file, int(table.lines[places[0]])),
            )
        )
    if counts.sum() >= MOST_PEOPLE:
        raise _error(
            table, f"the counts in {name} add up to more than can be counted exactly.", "Check the column."
        )
    if not counts.any():
        raise _error(table, f"every count in {name} is 0: the file stands for nobody.", "Check the column.")
    return counts.astype(np.int64)


def code_counts(name: str, table: RawTable, codes: Sequence[str]) -> NDArray[np.float64]:
    """The counts as numbers; NaN where empty or no number."""
    from fourfold.description.model import Variable

    return code(name, Variable(kind="quantity", column=name, missing=list(codes)), table, []).values


def _exclude(
    description: StudyDescription, coded: dict[str, Coded], everyone: Mask, counts: NDArray[np.int64] | None
) -> tuple[Mask, list[tree.Exclusion]]:
    """Apply the exclusions in order; each counts only people whom none before it left out."""
    weight = np.ones(everyone.size, dtype=np.int64) if counts is None else counts
    kept = everyone
    steps = []
    for exclusion in description.exclusions:
        left_out = kept & satisfied(exclusion.where, coded)
        kept = kept & ~left_out
        steps.append(
            tree.Exclusion(
                reason=exclusion.reason, count=int(weight[left_out].sum()), remaining=int(weight[kept].sum())
            )
        )
    return kept, steps


def _settle_all(
    description: StudyDescription,
    coded: dict[str, Coded],
    table: RawTable,
    kept: Mask,
    counts: NDArray[np.int64] | None,
) -> Rows:
    columns: dict[str, Column] = {}
    problems: list[Problem] = []
    for name, variable in description.variables.items():
        settled = settle(coded[name], variable, kept, table)
        if isinstance(settled, Problem):
            problems.append(settled)
        else:
            columns[name] = settled
    if problems:
        raise DataError(problems)
    return Rows(columns, None if counts is None else counts[kept], table.lines[kept])


def _outcome(
    description: StudyDescription, table: RawTable, eligible: Rows, analysis: Rows, needed: Sequence[str]
) -> Mask:
    if analysis.n == 0:
        empty = [name for name in needed if eligible.columns[name].missing.all()]
        why = f"{', '.join(empty)} has no value in any of them" if empty else "each lacks some value"
        raise _error(
            table,
            f"none of the {eligible.n} rows left after the exclusions is complete: {why}.",
            "Check the `missing:` codes, or leave the emptiest variable out of the model.",
        )
    outcome = analysis.columns[description.outcome]
    event = outcome.values == 1
    if event.all() or not event.any():
        only = outcome.levels[1] if event.all() else outcome.levels[0]
        raise _error(
            table,
            f"{description.outcome}: everybody in the analysis set has the outcome {only!r} "
            f"({analysis.people} people), so nothing can be compared.",
            "Check `present:`, the exclusions and the `missing:` codes.",
        )
    return np.asarray(event)


def _crude_rows(description: StudyDescription, eligible: Rows) -> dict[str, int | None]:
    known = ~eligible.columns[description.outcome].missing
    return {
        entry.variable: eligible.count(known & ~eligible.columns[entry.variable].missing)
        for entry in (*description.exposures, *description.predictors)
    }


def _repeated_identifiers(description: StudyDescription, table: RawTable, kept: Mask) -> int:
    name = description.data.identifier
    return 0 if name is None else repeated_identifiers(table.columns[name], kept)


def _identical_rows(description: StudyDescription, table: RawTable, kept: Mask) -> int:
    # Where a row stands for many, equal rows are a way of writing, not a slip.
    if description.data.counts is not None:
        return 0
    identifier = description.data.identifier
    # The identifier first: where it tells all rows apart, nothing else need be looked at.
    names = sorted(table.columns, key=lambda name: name != identifier)
    columns = [table.columns[name] for name in names if not pa.types.is_null(table.columns[name].type)]
    return identical_rows(columns, kept, identified=identifier is not None)


def _error(table: RawTable, what: str, advice: str) -> DataError:
    return DataError(Problem(what, advice, Position(table.file)))
