"""The table of odds ratios: exposures (or predictors), and covariates apart from them."""

from __future__ import annotations

from collections.abc import Sequence

from fourfold.report import cells
from fourfold.report.table import Cell, Heading, Row, Table
from fourfold.report.writer import Writer
from fourfold.results import tree


def odds_ratio_table(writer: Writer, id: str, names: Sequence[str], caption: str) -> Table:
    """Events / total, crude and adjusted odds ratio and P of each variable in ``names``."""
    rows: list[Row] = []
    notes: list[str] = []
    for name in names:
        rows += _variable_rows(writer, writer.variables[name], notes)
    analysis = writer.results.analysis
    reference_rules = [
        writer.say(
            "labels.notes.reference_rule",
            label=writer.inline(name),
            reference=writer.variables[name].reference,
        )
        for name in names
        if writer.variables[name].reference_rule == "most frequent" and writer.variables[name].reference
    ]
    general = writer.say(
        "labels.notes.odds_ratios",
        adjusted_for=[found.name for found in writer.modelled()],
        n=writer.results.participants.analysed,
        intervals=analysis.intervals,
        p_adjusted=_test_name(writer),
    )
    return Table(
        id=id,
        caption=caption,
        headings=[
            Heading("", 30, numeric=False),
            Heading(writer.say("labels.columns.events_total"), 15),
            Heading(writer.say("labels.columns.crude", confidence=writer.confidence), 23),
            Heading(writer.say("labels.columns.adjusted", confidence=writer.confidence), 23),
            Heading(writer.say("labels.columns.p"), 9),
        ],
        rows=rows,
        notes=[general, *reference_rules, *notes, *cells.hidden_note(writer, rows)],
    )


def _test_name(writer: Writer) -> str | None:
    tests = sorted({found.test for found in writer.results.estimates.adjusted})
    return writer.words.listed(tests, "or") if tests else None


def _variable_rows(writer: Writer, variable: tree.Variable, notes: list[str]) -> list[Row]:
    pairs = list(writer.pairs(variable.name))
    for _, adjusted in pairs:
        reason = separation_reason(writer, adjusted)
        if reason:
            notes.append(reason)
    if variable.kind == "quantity":
        if variable.shape in ("quadratic", "spline"):
            return _shaped_rows(writer, variable, pairs)
        return [
            _row(writer, variable_header(writer, variable), crude, adjusted, "plain")
            for crude, adjusted in pairs
        ]
    return _level_rows(writer, variable, pairs)


Pair = tuple[tree.Estimate | None, tree.Estimate]


def _shaped_rows(writer: Writer, variable: tree.Variable, pairs: list[Pair]) -> list[Row]:
    unit = f" {variable.unit}" if variable.unit else ""
    rows = [_group(writer, variable, variable_header(writer, variable))]
    for crude, adjusted in pairs:
        start, end = adjusted.contrast or [0.0, 0.0]
        header = writer.say(
            "labels.rows.contrast",
            start=writer.numbers.number(start, None),
            end=writer.numbers.number(end, None),
            unit=unit,
        )
        rows.append(_row(writer, header, crude, adjusted, "level"))
    return rows


def _level_rows(writer: Writer, variable: tree.Variable, pairs: list[Pair]) -> list[Row]:
    by_level = {adjusted.level: (crude, adjusted) for crude, adjusted in pairs}
    rows = [_group(writer, variable, variable.label)]
    reference = _reference_row(writer, variable)
    order: list[str | None] = list(variable.levels)
    if variable.kind == "binary":
        rows.append(reference)
        rows += [
            _row(writer, variable.present or writer.say("labels.rows.present"), crude, adjusted, "level")
            for crude, adjusted in pairs
        ]
        return rows
    for level in order:
        if level == variable.reference:
            rows.append(reference)
        elif level in by_level:
            rows.append(_row(writer, str(level), *by_level[level], "level"))
    return rows


def _group(writer: Writer, variable: tree.Variable, header: str) -> Row:
    """The row that heads a variable's levels; it carries the joint test where there are several."""
    several = variable.shape in ("quadratic", "spline") or len(writer.estimates(variable.name)) > 1
    test = writer.joint_test(variable.name) if several else None
    p = cells.p_value(writer, test.p_value, "p_value" in test.hidden) if test else cells.NOTHING
    detail = writer.say("labels.rows.joint_test", df=test.df) if test else None
    return Row(header, [cells.NOTHING, cells.NOTHING, cells.NOTHING, p], "group", detail)


def _row(writer: Writer, header: str, crude: tree.Estimate | None, adjusted: tree.Estimate, kind: str) -> Row:
    return Row(
        header,
        [
            cells.events_of_total(writer, adjusted.events, adjusted.total, adjusted.hidden),
            cells.odds_ratio(writer, crude),
            cells.odds_ratio(writer, adjusted),
            cells.p_value(writer, adjusted.p_value, "p_value" in adjusted.hidden),
        ],
        kind,
    )


def _reference_row(writer: Writer, variable: tree.Variable) -> Row:
    word = Cell(writer.say("labels.rows.reference"), "reference")
    return Row(
        variable.reference or writer.say("labels.rows.absent"),
        [_reference_counts(writer, variable), word, word, cells.NOTHING],
        "level",
    )


def _reference_counts(writer: Writer, variable: tree.Variable) -> Cell:
    for table in writer.results.tables:
        if table.exposure == variable.name:
            total = None if table.c is None or table.d is None else table.c + table.d
            hidden = {"events": table.hidden.get("c", ""), "total": table.hidden.get("d", "")}
            return cells.events_of_total(
                writer, table.c, total, {key: why for key, why in hidden.items() if why}
            )
    for level in writer.results.audit.levels:
        if level.variable == variable.name and level.reference:
            both = level.events is not None and level.non_events is not None
            total = (level.events or 0) + (level.non_events or 0) if both else None
            hidden = {"events": level.hidden.get("events", ""), "total": level.hidden.get("non_events", "")}
            return cells.events_of_total(
                writer, level.events, total, {key: why for key, why in hidden.items() if why}
            )
    return cells.absent(writer)


def variable_header(writer: Writer, variable: tree.Variable) -> str:
    """``Age, per 10 years``; ``Body-mass index, spline with 4 knots``; or the label alone."""
    if variable.kind != "quantity":
        return variable.label
    return writer.say(
        f"labels.rows.quantity.{variable.shape}",
        label=variable.label,
        unit=variable.unit,
        per=writer.numbers.number(1.0 if variable.per is None else variable.per, None),
        knots=len(variable.knots),
    )


def separation_reason(writer: Writer, estimate: tree.Estimate) -> str | None:
    """Why a term has no finite estimate, with its cells where they say it."""
    if estimate.note not in cells.SEPARATED:
        return None
    where = estimate.label if estimate.level is None else f"{estimate.label}: {estimate.level}"
    if estimate.hidden:
        kind = "hidden"
    elif estimate.total and estimate.events == 0:
        kind = "no_event"
    elif estimate.total and estimate.events == estimate.total:
        kind = "all_events"
    else:
        kind = "combination"
    for table in writer.results.tables:
        if table.exposure == estimate.term and kind == "combination":
            if table.c == 0:
                kind = "no_event_in_reference"
            elif table.d == 0:
                kind = "all_events_in_reference"
    return writer.say(f"labels.separated.reason.{kind}", where=where, total=estimate.total)
