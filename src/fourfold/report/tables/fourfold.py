"""The fourfold table of each binary exposure, with what the design allows to be computed."""

from __future__ import annotations

from fourfold.report import cells
from fourfold.report.table import Cell, Heading, Row, Table
from fourfold.report.writer import Writer
from fourfold.results import tree


def fourfold_table(writer: Writer, found: tree.FourfoldTable) -> Table:
    """Counts by exposure and outcome; the share with the event where the design gives one."""
    family = "case_control" if writer.case_control else "others"
    headings = [
        Heading(found.label, 32 if writer.share != "none" else 43, numeric=False),
        Heading(writer.say(f"labels.groups.{family}.event"), 15),
        Heading(writer.say(f"labels.groups.{family}.non_event"), 16),
        Heading(writer.say("labels.columns.total"), 12),
    ]
    if writer.share != "none":
        headings.append(
            Heading(writer.say(f"labels.columns.{writer.share}", confidence=writer.confidence), 25)
        )
    rows = [
        _row(writer, found, found.exposed_label, "a", "b", found.risk_exposed, "risk_exposed"),
        _row(writer, found, found.unexposed_label, "c", "d", found.risk_unexposed, "risk_unexposed"),
    ]
    rows.append(_total(writer, found))
    return Table(
        id=f"table-fourfold-{_place(writer, found)}",
        caption=writer.say("labels.captions.fourfold", label=found.label, event=writer.outcome.label),
        headings=headings,
        rows=rows,
        notes=cells.hidden_note(writer, rows),
    )


def measures(writer: Writer, found: tree.FourfoldTable) -> list[tuple[str, str]]:
    """Name and value of each measure of association that the design supports."""
    values: list[tuple[str, Cell]] = []
    confidence = writer.confidence
    for name, interval in (
        ("odds_ratio", found.odds_ratio),
        ("risk_ratio", found.risk_ratio),
    ):
        hidden = name in found.hidden
        if interval is None and not hidden:
            continue
        heading = writer.say(f"labels.measures.{name}.{writer.share}", confidence=confidence)
        cell = (
            cells.hidden_cell(writer)
            if interval is None
            else cells.ratio(writer, interval.estimate, interval.lower, interval.upper, hidden)
        )
        values.append((heading, cell))
    if found.risk_difference is not None or "risk_difference" in found.hidden:
        heading = writer.say(f"labels.measures.risk_difference.{writer.share}", confidence=confidence)
        values.append((heading, _difference(writer, found)))
    values.append((writer.say("labels.measures.chi_squared"), _chi_squared(writer, found)))
    values.append(
        (
            writer.say("labels.measures.fisher"),
            cells.p_value(writer, found.fisher_p, "fisher_p" in found.hidden),
        )
    )
    return [(heading, cell.text) for heading, cell in values]


def _place(writer: Writer, found: tree.FourfoldTable) -> int:
    return writer.results.tables.index(found) + 1


def _row(
    writer: Writer,
    found: tree.FourfoldTable,
    header: str,
    event: str,
    non_event: str,
    risk: tree.Interval | None,
    risk_name: str,
) -> Row:
    first, second = getattr(found, event), getattr(found, non_event)
    total = None if first is None or second is None else first + second
    row = [
        cells.count(writer, first, found.hidden.get(event)),
        cells.count(writer, second, found.hidden.get(non_event)),
        cells.count(writer, total, None if total is not None else "derived"),
    ]
    if writer.share != "none":
        row.append(_risk(writer, risk, total, risk_name in found.hidden))
    return Row(header, row)


def _total(writer: Writer, found: tree.FourfoldTable) -> Row:
    def added(*values: int | None) -> int | None:
        known = [value for value in values if value is not None]
        return sum(known) if len(known) == len(values) else None

    sums = [added(found.a, found.c), added(found.b, found.d), added(found.a, found.b, found.c, found.d)]
    row = [cells.count(writer, value, None if value is not None else "derived") for value in sums]
    if writer.share != "none":
        row.append(cells.NOTHING)
    return Row(writer.say("labels.columns.total"), row, "total")


def _risk(writer: Writer, risk: tree.Interval | None, total: int | None, hidden: bool) -> Cell:
    if risk is None or risk.estimate is None:
        return cells.hidden_cell(writer) if hidden else cells.absent(writer)
    share = writer.numbers.percent(100 * risk.estimate, total)
    if not share:
        return cells.absent(writer)
    return Cell(f"{share} ({percent_limits(writer, risk, total)})")


def percent_limits(writer: Writer, interval: tree.Interval, total: int | None) -> str:
    """Limits of a proportion in percent."""
    if interval.lower is None or interval.upper is None:
        return writer.say("labels.absent")
    return writer.say(
        "labels.joining.interval",
        lower=writer.numbers.percent(100 * interval.lower, total),
        upper=writer.numbers.percent(100 * interval.upper, total),
    )


def _difference(writer: Writer, found: tree.FourfoldTable) -> Cell:
    difference = found.risk_difference
    if difference is None or difference.estimate is None:
        return cells.hidden_cell(writer) if "risk_difference" in found.hidden else cells.absent(writer)
    parts = [
        writer.numbers.number(100 * value, 1)
        for value in (difference.estimate, difference.lower, difference.upper)
        if value is not None
    ]
    if len(parts) < 3:
        return Cell(parts[0])
    return Cell(writer.say("labels.measures.points", estimate=parts[0], lower=parts[1], upper=parts[2]))


def _chi_squared(writer: Writer, found: tree.FourfoldTable) -> Cell:
    if found.chi_squared is None:
        return cells.hidden_cell(writer) if "chi_squared" in found.hidden else cells.absent(writer)
    return Cell(
        writer.say(
            "labels.measures.statistic",
            statistic=writer.numbers.number(found.chi_squared, 2),
            p=writer.numbers.p_phrase(found.chi_squared_p),
        )
    )
