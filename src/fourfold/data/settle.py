"""After the exclusions: coded variables become columns, and what cannot be used is refused.

An excluded row need not be right; every row that stays must be.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fourfold.data.coding import Coded
from fourfold.data.columns import Column
from fourfold.data.levels import match, spelled
from fourfold.data.nearest import nearest
from fourfold.data.raw import RawTable
from fourfold.description.model import Variable
from fourfold.errors import Position, Problem

Mask = NDArray[np.bool_]
SHOWN = 5
YES = ("yes", "true", "1", "present", "positive")


def settle(coded: Coded, variable: Variable, kept: Mask, table: RawTable) -> Column | Problem:
    """The column over the rows kept, or what is wrong with it."""
    label = variable.label or coded.name
    if coded.unreadable is not None and (coded.unreadable & kept).any():
        return _unreadable(coded, coded.unreadable & kept, table)
    if coded.kind == "binary":
        return _binary(coded, variable, label, kept, table)
    values = coded.values[kept]
    if coded.kind in ("quantity", "date"):
        return Column(coded.name, label, coded.kind, values, decimals=recorded_decimals(values))
    if coded.listed is None:
        if coded.kind == "ordered" and not _all_numbers(coded.labels):
            return _problem(
                table,
                f"{coded.name}: an ordered variable whose levels are words needs its order; the data hold "
                f"{_counts(coded, kept)}.",
                "List them in order in `levels:`.",
            )
        return _compact(coded, label, values)
    if (values >= coded.listed).any():
        extra = [place for place in range(coded.listed, len(coded.labels)) if (values == place).any()]
        near = nearest(coded.labels[extra[0]], coded.labels[: coded.listed]) if len(extra) == 1 else ""
        return _problem(
            table,
            f"{coded.name}: the data hold levels that the description does not list: "
            f"{_counts(coded, kept, extra)}; listed are {', '.join(coded.labels[: coded.listed])}.{near}",
            "Correct the data, add the level to `levels:` if it is real, name it under `missing:` if it "
            "means 'not recorded', or exclude these rows.",
        )
    return Column(coded.name, label, coded.kind, values, coded.labels[: coded.listed])


def _compact(coded: Coded, label: str, values: NDArray[np.float64]) -> Column:
    """Levels found in the data: only those that the rows kept still hold."""
    used = np.unique(values[~np.isnan(values)]).astype(int)
    lookup = np.full(len(coded.labels) + 1, np.nan)
    lookup[used] = np.arange(used.size)
    places = np.where(np.isnan(values), len(coded.labels), values).astype(int)
    return Column(coded.name, label, coded.kind, lookup[places], tuple(coded.labels[place] for place in used))


def _binary(coded: Coded, variable: Variable, label: str, kept: Mask, table: RawTable) -> Column | Problem:
    occurring = [word for word, found in zip(coded.labels, coded.found, strict=True) if found]
    values = coded.values[kept]
    remaining = [
        word for place, word in enumerate(coded.labels) if coded.found[place] and (values == place).any()
    ]
    candidates = list(coded.labels) if coded.listed == 2 else occurring
    if len(remaining) > 2:
        return _problem(
            table,
            f"{coded.name}: a binary variable has two values besides missing; the data hold "
            f"{_counts(coded, kept)}.",
            "Call it a category, name the values that mean 'not recorded' under `missing:`, or exclude them.",
        )
    if len(occurring) < 2 and coded.listed != 2 and occurring:
        return _problem(
            table,
            f"{coded.name}: a binary variable has two values besides missing; the data hold one, "
            f"{_counts(coded, kept)}.",
            "Check the file and the `missing:` codes; without a second value it cannot be analysed.",
        )
    if not candidates:
        return Column(coded.name, label, "binary", values, ("", ""))
    present = _present(variable, candidates, coded.decimal)
    if present is None:
        asked = (
            "`present:` is not stated"
            if variable.present is None
            else f"none is {spelled(variable.present)!r}"
        )
        near = "" if variable.present is None else nearest(spelled(variable.present), candidates)
        return _problem(
            table,
            f"{coded.name}: which value means yes? The data hold {_counts(coded, None)}; {asked}.{near}",
            "Write the value that means yes after `present:`, in quotes, as the data spell it.",
        )
    others = [word for word in remaining if word != present] or [
        word for word in candidates if word != present
    ]
    if len(others) > 1 and len(remaining) == 2:
        return _problem(
            table,
            f"{coded.name}: `present: {present}` does not occur in the rows left after the exclusions; they "
            f"hold {_counts(coded, kept)}.",
            "Check `present:` and the exclusions.",
        )
    absent = others[0] if len(others) == 1 else f"not {present}"
    coded_values = np.where(np.isnan(values), np.nan, (values == coded.labels.index(present)).astype(float))
    shown = present if variable.present is None else spelled(variable.present)
    return Column(coded.name, label, "binary", coded_values, (absent, shown))


def _present(variable: Variable, candidates: list[str], decimal: str) -> str | None:
    if variable.present is not None:
        return match(spelled(variable.present), candidates, decimal)
    yes = [word for word in candidates if word.casefold() in YES]
    return yes[0] if len(yes) == 1 else None


def _unreadable(coded: Coded, bad: Mask, table: RawTable) -> Problem:
    places = np.flatnonzero(bad)
    shown = "; ".join(
        f"{table.line_word} {table.lines[place]}: {coded.source[place].as_py()!r}" for place in places[:SHOWN]
    )
    rest = f" and {places.size - SHOWN} more" if places.size > SHOWN else ""
    if coded.kind == "date":
        expected, advice = "a date as 2024-01-31", "Write dates as year-month-day."
    else:
        expected = "a finite number" if table.decimal == "." else "a finite number with a decimal comma"
        advice = (
            "Correct the data, name a code that means 'not recorded' under `missing:`, call it a category, "
            "or state `decimal:` under `data:`."
        )
    first = int(table.lines[places[0]])
    return Problem(
        f"{coded.name} is a {coded.kind}, so each value must be {expected}; {places.size} "
        f"{'is' if places.size == 1 else 'are'} not: {shown}{rest}.",
        advice,
        Position(table.file, first),
    )


def _counts(coded: Coded, kept: Mask | None, places: list[int] | None = None) -> str:
    values = coded.values if kept is None else coded.values[kept]
    totals = np.bincount(values[~np.isnan(values)].astype(int), minlength=len(coded.labels))
    chosen = range(len(coded.labels)) if places is None else places
    words = [f"{coded.labels[place]!r} ({totals[place]} rows)" for place in chosen if totals[place]]
    most = 12
    return ", ".join(words[:most]) + (f" and {len(words) - most} more" if len(words) > most else "")


def _problem(table: RawTable, what: str, advice: str) -> Problem:
    return Problem(what, advice, Position(table.file))


def _all_numbers(words: tuple[str, ...]) -> bool:
    try:
        [float(word) for word in words]
    except ValueError:
        return False
    return True


def recorded_decimals(values: NDArray[np.float64], most: int = 6, sample: int = 100_000) -> int:
    """The fewest decimals that hold 99% of the values; judged on the first ``sample`` of them."""
    known = values[~np.isnan(values)][:sample]
    for decimals in range(most):
        scaled = known * 10.0**decimals
        off = np.abs(scaled - np.round(scaled)) > 1e-9 * np.maximum(1.0, np.abs(scaled))
        if off.mean() <= 0.01 if off.size else True:
            return decimals
    return most
