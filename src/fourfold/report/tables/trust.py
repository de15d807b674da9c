"""Tables by which a reader judges the model."""

from __future__ import annotations

from fourfold.report import cells
from fourfold.report.table import Cell, Heading, Row, Table
from fourfold.report.tables.fourfold import percent_limits
from fourfold.report.writer import Writer
from fourfold.results import tree


def performance(writer: Writer) -> Table | None:
    """Discrimination, overall accuracy and explained variation, on the fitting data."""
    rows: list[Row] = []
    found = writer.results.discrimination
    if found is not None:
        rows.append(
            Row(
                writer.say("labels.performance.auc"),
                [_auc(writer, found), _reading(writer, "auc")],
            )
        )
    calibration = writer.results.calibration
    if calibration is not None:
        for name, digits in (("brier", 4), ("scaled_brier", 3)):
            value = getattr(calibration, name)
            if value is not None or name in calibration.hidden:
                cell = cells.number(writer, value, digits, name in calibration.hidden)
                rows.append(Row(writer.say(f"labels.performance.{name}"), [cell, _reading(writer, name)]))
        if calibration.spiegelhalter_z is not None:
            text = writer.say(
                "labels.performance.z_with_p",
                z=writer.numbers.number(calibration.spiegelhalter_z, 2),
                p=writer.numbers.p_phrase(calibration.spiegelhalter_p),
            )
            rows.append(
                Row(
                    writer.say("labels.performance.spiegelhalter"),
                    [Cell(text), _reading(writer, "spiegelhalter")],
                )
            )
    r_squared = writer.results.model.r_squared
    if r_squared is not None:
        for name in ("cox_snell", "nagelkerke", "mcfadden", "tjur"):
            value = getattr(r_squared, name)
            if value is not None:
                rows.append(
                    Row(
                        writer.say(f"labels.performance.{name}"),
                        [cells.number(writer, value, 3), _reading(writer, name)],
                    )
                )
    if not rows:
        return None
    return Table(
        id="table-performance",
        caption=writer.say("labels.captions.performance"),
        headings=[
            Heading(writer.say("labels.columns.measure"), 26, numeric=False),
            Heading(writer.say("labels.columns.value"), 30),
            Heading(writer.say("labels.columns.reading"), 44, numeric=False),
        ],
        rows=rows,
        notes=cells.hidden_note(writer, rows),
    )


def _auc(writer: Writer, found: tree.Discrimination) -> Cell:
    return Cell(cells.area(writer, found, 3), "hidden" if found.auc is None and found.hidden else "value")


def _reading(writer: Writer, name: str) -> Cell:
    return Cell(writer.say(f"labels.readings.{name}"), "words")


def hosmer_lemeshow(writer: Writer) -> Table | None:
    """Observed and expected events by group of fitted risk."""
    calibration = writer.results.calibration
    if calibration is None or not calibration.groups:
        return None
    with_risk = not writer.case_control
    # A share of fewer than 20 people is not printed; a column of dashes would say nothing.
    with_share = with_risk and any(len(_proportion(writer, group).text) > 1 for group in calibration.groups)
    rows = [
        Row(
            str(place),
            [
                *([_range(writer, group)] if with_risk else []),
                cells.count(writer, group.n, group.hidden.get("n")),
                cells.count(writer, group.observed, group.hidden.get("observed")),
                cells.number(writer, group.expected, 1, "expected" in group.hidden),
                *([_proportion(writer, group)] if with_share else []),
            ],
        )
        for place, group in enumerate(calibration.groups, start=1)
    ]
    headings = [Heading(writer.say("labels.columns.group"), 10, numeric=False)]
    if with_risk:
        headings.append(Heading(writer.say("labels.columns.fitted_risk"), 21))
    headings += [
        Heading(writer.say("labels.columns.people"), 13),
        Heading(writer.say("labels.columns.observed"), 13),
        Heading(writer.say("labels.columns.expected"), 13),
    ]
    if with_share:
        headings.append(
            Heading(writer.say("labels.columns.observed_share", confidence=writer.confidence), 30)
        )
    return Table(
        id="table-hosmer-lemeshow",
        caption=writer.say("labels.captions.hosmer_lemeshow"),
        headings=headings,
        rows=rows,
        notes=[*_hosmer_lemeshow_notes(writer, calibration), *cells.hidden_note(writer, rows)],
    )


def _range(writer: Writer, group: tree.CalibrationGroup) -> Cell:
    if group.lowest is None or group.highest is None:
        return cells.hidden_cell(writer) if group.hidden else cells.absent(writer)
    return Cell(
        writer.say(
            "labels.joining.interval",
            lower=writer.numbers.risk(group.lowest),
            upper=writer.numbers.risk(group.highest),
        )
    )


def _proportion(writer: Writer, group: tree.CalibrationGroup) -> Cell:
    if group.proportion is None:
        return cells.hidden_cell(writer) if group.hidden else cells.absent(writer)
    observed = tree.Interval(estimate=group.proportion, lower=group.lower, upper=group.upper)
    share = writer.numbers.percent(100 * group.proportion, group.n)
    if not share:
        return cells.absent(writer)
    return Cell(f"{share} ({percent_limits(writer, observed, group.n)})")


def _hosmer_lemeshow_notes(writer: Writer, calibration: tree.Calibration) -> list[str]:
    found = calibration.hosmer_lemeshow
    if found is None:
        return []
    notes = [writer.say("labels.hosmer_lemeshow.rule", rule=writer.phrase(found.rule), groups=found.groups)]
    if found.statistic is not None and found.df is not None:
        notes.append(
            writer.say(
                "labels.hosmer_lemeshow.statistic",
                statistic=writer.numbers.number(found.statistic, 2),
                df=found.df,
                p=writer.numbers.p_phrase(found.p_value),
            )
        )
    if len(calibration.groups) != found.groups:
        notes.append(writer.say("labels.hosmer_lemeshow.gathered", groups=found.groups))
    if found.verdict is not None:
        notes.append(writer.say(f"labels.hosmer_lemeshow.verdict.{found.verdict.replace(' ', '_')}"))
    other = [row for row in found.by_groups if row.groups != found.groups and row.p_value is not None]
    if other:
        listed = [
            writer.say(
                "labels.hosmer_lemeshow.one_other", groups=row.groups, p=writer.numbers.p_phrase(row.p_value)
            )
            for row in other
        ]
        notes.append(writer.say("labels.hosmer_lemeshow.others", listed=writer.words.listed(listed)))
    return notes


def sample_size(writer: Writer) -> Table | None:
    """What the four criteria of Riley et al. would ask for, and the shortfall."""
    found = writer.results.sample_size
    if found is None or not found.criteria:
        return None
    rows = [
        Row(
            writer.say(f"labels.riley.{criterion.id}"),
            [
                cells.count(writer, criterion.required, found.hidden.get("criteria")),
                cells.count(writer, criterion.shortfall, found.hidden.get("criteria")),
            ],
        )
        for criterion in found.criteria
    ]
    rows.append(
        Row(
            writer.say("labels.riley.all"),
            [
                cells.count(writer, found.required, found.hidden.get("required")),
                cells.count(writer, found.shortfall, found.hidden.get("shortfall")),
            ],
            "total",
        )
    )
    return Table(
        id="table-sample-size",
        caption=writer.say("labels.captions.sample_size"),
        headings=[
            Heading(writer.say("labels.columns.criterion"), 60, numeric=False),
            Heading(writer.say("labels.columns.required"), 20),
            Heading(writer.say("labels.columns.shortfall"), 20),
        ],
        rows=rows,
        notes=cells.hidden_note(writer, rows),
    )


def influence(writer: Writer) -> Table | None:
    """How far one row moves each estimate; no single person is shown."""
    found = writer.results.influence
    if found is None or not found.terms:
        return None
    rows = [
        Row(
            _parameter(writer, term),
            [
                cells.number(writer, term.largest_change, 2, "terms" in found.hidden),
                cells.number(writer, term.largest_change_refitted, 2, "terms" in found.hidden),
                Cell(writer.say("labels.yes" if term.crosses_one else "labels.no"), "words"),
            ],
        )
        for term in found.terms
    ]
    return Table(
        id="table-influence",
        caption=writer.say("labels.captions.influence"),
        headings=[
            Heading(writer.say("labels.columns.parameter"), 40, numeric=False),
            Heading(writer.say("labels.columns.one_step"), 20),
            Heading(writer.say("labels.columns.refitted"), 20),
            Heading(writer.say("labels.columns.crosses_one"), 20),
        ],
        rows=rows,
        notes=cells.hidden_note(writer, rows),
    )


def _parameter(writer: Writer, term: tree.InfluenceTerm) -> str:
    several = len(writer.estimates(term.term)) > 1
    return writer.parameter(term.parameter, term.term) if several else writer.label(term.term)


def collinearity(writer: Writer) -> Table | None:
    """Generalised variance inflation of each term."""
    found = writer.results.collinearity
    if found is None or not found.gvif:
        return None
    rows = [
        Row(
            item.label,
            [Cell(str(item.df)), cells.number(writer, item.gvif, 2), cells.number(writer, item.scaled, 2)],
        )
        for item in found.gvif
    ]
    notes = []
    if found.condition_index is not None:
        notes.append(
            writer.say(
                "labels.notes.condition_index",
                value=writer.numbers.number(found.condition_index, 1),
                shared=[writer.label(name) for name in found.shared_terms],
            )
        )
    return Table(
        id="table-collinearity",
        caption=writer.say("labels.captions.collinearity"),
        headings=[
            Heading(writer.say("labels.columns.term"), 52, numeric=False),
            Heading(writer.say("labels.columns.df"), 12),
            Heading(writer.say("labels.columns.gvif"), 18),
            Heading(writer.say("labels.columns.gvif_scaled"), 18),
        ],
        rows=rows,
        notes=notes,
    )
