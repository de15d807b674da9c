"""Cells of tables: one place that says how a hidden, absent or separated value looks."""

from __future__ import annotations

from fourfold.report.table import Cell, Row
from fourfold.report.writer import Writer
from fourfold.results import tree

NOTHING = Cell("", "empty")
SEPARATED = ("separated upward", "separated downward", "separated")


def count(writer: Writer, value: int | None, hidden: str | None = None) -> Cell:
    """A count, ``fewer than N`` or ``hidden``."""
    return Cell(writer.numbers.count(value, hidden), "hidden" if value is None and hidden else "value")


def hidden_cell(writer: Writer) -> Cell:
    """A value that the hiding rule took away."""
    return Cell(writer.say("labels.hidden.word"), "hidden")


def absent(writer: Writer) -> Cell:
    """A value that does not exist."""
    return Cell(writer.say("labels.absent"), "empty")


def events_of_total(writer: Writer, events: int | None, total: int | None, hidden: tree.Hidden) -> Cell:
    """``12 / 40``, either part possibly hidden."""
    if events is None and total is None and not ("events" in hidden or "total" in hidden):
        return absent(writer)
    first = writer.numbers.count(events, hidden.get("events", "derived" if events is None else None))
    second = writer.numbers.count(total, hidden.get("total", "derived" if total is None else None))
    kind = "hidden" if events is None or total is None else "value"
    return Cell(f"{first} / {second}", kind)


def share(writer: Writer, value: int | None, total: int | None, hidden: str | None = None) -> Cell:
    """``12 (30%)``; the percentage only where the denominator carries one."""
    if value is None:
        return count(writer, value, hidden or "derived")
    if not total:
        return count(writer, value)
    percent = writer.numbers.percent(100 * value / total, total)
    text = writer.numbers.count(value)
    return Cell(f"{text} ({percent})" if percent else text)


def odds_ratio(writer: Writer, estimate: tree.Estimate | None) -> Cell:
    """``2.52 (1.16 to 5.64)``, or why there is none."""
    if estimate is None:
        return absent(writer)
    return ratio(
        writer,
        estimate.odds_ratio,
        estimate.lower,
        estimate.upper,
        hidden="odds_ratio" in estimate.hidden or estimate.note == "hidden",
        note=estimate.note,
    )


def ratio(
    writer: Writer,
    value: float | None,
    lower: float | None,
    upper: float | None,
    hidden: bool = False,
    note: str | None = None,
) -> Cell:
    """A ratio with its interval; a side without a limit is named."""
    if value is not None:
        return Cell(f"{writer.numbers.odds_ratio(value)} ({limits(writer, lower, upper, value)})")
    if hidden:
        return hidden_cell(writer)
    # A bound without an estimate says the same of a fourfold table with an empty cell.
    if note in SEPARATED or lower is not None or upper is not None:
        return Cell(_no_finite_estimate(writer, lower, upper), "words")
    return absent(writer)


def limits(writer: Writer, lower: float | None, upper: float | None, like: float | None = None) -> str:
    """``1.16 to 5.64``, or ``no lower limit to 5.64``."""
    if lower is not None and upper is not None:
        return writer.numbers.interval(lower, upper, like=like)
    if lower is None and upper is None:
        return writer.say("labels.separated.no_limits")
    key = "no_lower" if lower is None else "no_upper"
    bound = lower if lower is not None else upper
    return writer.say(f"labels.separated.{key}", bound=writer.numbers.odds_ratio(bound))


def _no_finite_estimate(writer: Writer, lower: float | None, upper: float | None) -> str:
    if lower is None and upper is None:
        return writer.say("labels.separated.none")
    key = "at_most" if lower is None else "at_least"
    bound = lower if lower is not None else upper
    return writer.say(
        f"labels.separated.{key}",
        bound=writer.numbers.odds_ratio(bound),
        confidence=writer.confidence,
    )


def p_value(writer: Writer, value: float | None, hidden: bool = False) -> Cell:
    """A P-value as printed, never 0.000."""
    if value is None:
        return hidden_cell(writer) if hidden else absent(writer)
    return Cell(writer.numbers.p_value(value))


def number(writer: Writer, value: float | None, digits: int, hidden: bool = False) -> Cell:
    """A number with ``digits`` decimals."""
    if value is None:
        return hidden_cell(writer) if hidden else absent(writer)
    return Cell(writer.numbers.number(value, digits))


def area(writer: Writer, found: tree.Discrimination, digits: int) -> str:
    """``0.75 (95% CI 0.67 to 0.81)``; a bound alone, or no interval, where that is all there is."""
    number = writer.numbers.number
    if found.auc is None:
        return writer.say("labels.hidden.word") if found.hidden else writer.say("labels.absent")
    lower = None if found.lower is None else number(found.lower, digits)
    upper = None if found.upper is None else number(found.upper, digits)
    return writer.say(
        "labels.area", area=number(found.auc, digits), lower=lower, upper=upper, confidence=writer.confidence
    )


def hidden_note(writer: Writer, rows: list[Row], also: bool = False) -> list[str]:
    """The line that explains hidden values, if any row (or, by ``also``, a heading) has one."""
    if also or any(cell.kind == "hidden" for row in rows for cell in row.cells):
        return [writer.say("labels.hidden.note", limit=writer.results.analysis.smallest_count)]
    return []
