"""Who was studied: characteristics, and what was missing."""

from __future__ import annotations

from fourfold.report import cells
from fourfold.report.table import Cell, Heading, Row, Table
from fourfold.report.writer import Writer
from fourfold.results import tree


def characteristics(writer: Writer, found: tree.DescriptiveTable, id: str) -> Table:
    """Characteristics of the eligible, overall and by group; no P-values (STROBE 14a)."""
    groups = len(found.groups)
    width = 56 / (groups + 1)
    known = [size for size in found.group_sizes if size is not None]
    overall = sum(known) if len(known) == groups else None
    headings = [
        Heading("", 32, numeric=False),
        Heading(_sized(writer, writer.say("labels.columns.overall"), overall, "derived"), width),
    ]
    headings += [
        Heading(
            _sized(
                writer, group_heading(writer, found, place), size, found.hidden.get("group_sizes", "derived")
            ),
            width,
        )
        for place, size in enumerate(found.group_sizes)
    ]
    headings.append(Heading(writer.say("labels.columns.missing"), 12))
    rows: list[Row] = []
    previous: str | None = None
    for described in found.rows:
        if described.kind == "quantity":
            rows += _quantity_rows(writer, described)
        elif described.kind == "binary":
            header = writer.say("labels.rows.of_level", label=described.label, level=described.level)
            rows.append(_level_row(writer, header, described, "plain", with_missing=True))
        else:
            if described.variable != previous:
                missing = _missing(writer, described.overall)
                blanks = [cells.NOTHING] * (groups + 1)
                rows.append(Row(described.label, [*blanks, missing], "group"))
            rows.append(_level_row(writer, str(described.level), described, "level", with_missing=False))
        previous = described.variable
    return Table(
        id=id,
        caption=writer.say(
            "labels.captions.characteristics", by=found.by_label, outcome=found.by == writer.outcome.name
        ),
        headings=headings,
        rows=rows,
        notes=[
            writer.say("labels.notes.characteristics"),
            *cells.hidden_note(writer, rows, also=None in found.group_sizes),
        ],
        wide=groups > 3,
    )


def group_heading(writer: Writer, found: tree.DescriptiveTable, place: int) -> str:
    """What a group is called: by the outcome ``Event: yes``, ``Cases``; else its level."""
    if found.by == writer.outcome.name and len(found.groups) == 2:
        role = ("event", "non_event")[place]
        family = "case_control" if writer.case_control else "others"
        return writer.say(f"labels.groups.{family}.{role}")
    return writer.say("labels.rows.of_level", label=found.by_label, level=found.groups[place])


def _sized(writer: Writer, name: str, size: int | None, hidden: str) -> str:
    return writer.say(
        "labels.columns.sized",
        name=name,
        size=writer.numbers.count(size, hidden if size is None else None),
    )


def _quantity_rows(writer: Writer, described: tree.Descriptive) -> list[Row]:
    header = writer.say("labels.rows.with_unit", label=described.label, unit=described.unit)
    everyone = [described.overall, *described.groups]
    decimals = writer.numbers.recorded(described.decimals, described.overall.sd)
    blanks = [cells.NOTHING] * len(everyone)
    return [
        Row(header, [*blanks, _missing(writer, described.overall)], "group"),
        Row(
            writer.say("labels.rows.mean_sd"),
            [*(_mean(writer, cell, decimals) for cell in everyone), cells.NOTHING],
            "level",
        ),
        Row(
            writer.say("labels.rows.median_quartiles"),
            [*(_median(writer, cell, decimals) for cell in everyone), cells.NOTHING],
            "level",
        ),
    ]


def _level_row(
    writer: Writer, header: str, described: tree.Descriptive, kind: str, with_missing: bool
) -> Row:
    everyone = [described.overall, *described.groups]
    missing = _missing(writer, described.overall) if with_missing else cells.NOTHING
    return Row(header, [*(_share(writer, cell) for cell in everyone), missing], kind)


def _share(writer: Writer, cell: tree.DescriptiveCell) -> Cell:
    return cells.share(writer, cell.count, cell.total, cell.hidden.get("count"))


def _missing(writer: Writer, cell: tree.DescriptiveCell) -> Cell:
    return cells.count(writer, cell.missing, cell.hidden.get("missing"))


def _mean(writer: Writer, cell: tree.DescriptiveCell, decimals: int) -> Cell:
    if cell.mean is None:
        return cells.hidden_cell(writer) if cell.hidden else cells.absent(writer)
    return Cell(writer.numbers.mean_sd(cell.mean, cell.sd, decimals))


def _median(writer: Writer, cell: tree.DescriptiveCell, decimals: int) -> Cell:
    if cell.median is None:
        return cells.hidden_cell(writer) if cell.hidden else cells.absent(writer)
    median, lower, upper = (
        writer.numbers.number(value, decimals)
        for value in (cell.median, cell.lower_quartile, cell.upper_quartile)
    )
    return Cell(writer.say("labels.rows.quartiles", median=median, lower=lower, upper=upper))


def missing_values(writer: Writer) -> Table | None:
    """Missing values of each variable, and whether being incomplete goes with the outcome."""
    participants = writer.results.participants
    association = {found.variable: found for found in participants.missing_associations}
    found_any = [item for item in participants.missing if item.count != 0]
    if not found_any:
        return None
    rows = []
    for item in found_any:
        found = association.get(item.variable)
        rows.append(
            Row(
                item.label,
                [
                    cells.share(writer, item.count, participants.eligible, item.hidden.get("count")),
                    *_missing_association(writer, found),
                ],
            )
        )
    return Table(
        id="table-missing",
        caption=writer.say("labels.captions.missing"),
        headings=[
            Heading("", 26, numeric=False),
            Heading(writer.say("labels.columns.missing_share"), 14),
            Heading(writer.say("labels.columns.events_incomplete"), 15),
            Heading(writer.say("labels.columns.events_complete"), 15),
            Heading(writer.say("labels.columns.odds_ratio", confidence=writer.confidence), 21),
            Heading(writer.say("labels.columns.p"), 9),
        ],
        rows=rows,
        notes=[
            writer.say("labels.notes.missing", tests=sorted({found.test for found in association.values()})),
            *cells.hidden_note(writer, rows),
        ],
    )


def _missing_association(writer: Writer, found: tree.MissingAssociation | None) -> list[Cell]:
    if found is None:
        return [cells.absent(writer)] * 4

    def of(events: str, total: str) -> Cell:
        hidden = {"events": found.hidden.get(events, ""), "total": found.hidden.get(total, "")}
        kept = {key: why for key, why in hidden.items() if why}
        return cells.events_of_total(writer, getattr(found, events), getattr(found, total), kept)

    return [
        of("events_incomplete", "incomplete"),
        of("events_complete", "complete"),
        cells.ratio(writer, found.odds_ratio, found.lower, found.upper, hidden="odds_ratio" in found.hidden),
        cells.p_value(writer, found.p_value, "p_value" in found.hidden),
    ]


def missing_patterns(writer: Writer) -> Table | None:
    """Rows that lack exactly the same variables; only where there is more than one pattern."""
    patterns = writer.results.participants.patterns
    if len(patterns) < 2:
        return None
    rows = [
        Row(
            writer.words.listed([writer.label(name) for name in pattern.variables]),
            [cells.count(writer, pattern.count, pattern.hidden.get("count"))],
        )
        for pattern in patterns
    ]
    return Table(
        id="table-missing-patterns",
        caption=writer.say("labels.captions.patterns"),
        headings=[
            Heading(writer.say("labels.columns.missing_together"), 75, numeric=False),
            Heading(writer.say("labels.columns.rows"), 25),
        ],
        rows=rows,
        notes=cells.hidden_note(writer, rows),
    )


def crude_rows(writer: Writer) -> Table | None:
    """Rows that each crude model alone would have had, where it differs from the analysis set."""
    participants = writer.results.participants
    if not any(count != participants.analysed for count in participants.crude_rows.values()):
        return None
    rows = [
        Row(
            writer.label(name),
            [
                cells.count(writer, participants.analysed, participants.hidden.get("analysed")),
                cells.count(writer, count, participants.hidden.get("crude_rows", "derived")),
            ],
        )
        for name, count in participants.crude_rows.items()
    ]
    return Table(
        id="table-crude-rows",
        caption=writer.say("labels.captions.crude_rows"),
        headings=[
            Heading("", 50, numeric=False),
            Heading(writer.say("labels.columns.analysed"), 25),
            Heading(writer.say("labels.columns.crude_alone"), 25),
        ],
        rows=rows,
        notes=cells.hidden_note(writer, rows),
    )
