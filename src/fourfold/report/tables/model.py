"""The fitted equation, so that others can use it, and the tests of its terms."""

from __future__ import annotations

import math

from fourfold.report import cells
from fourfold.report.table import Cell, Heading, Row, Table
from fourfold.report.writer import Writer

INTERCEPT = "(intercept)"


def equation(writer: Writer) -> Table:
    """Every coefficient with the intercept, and how each column is coded (TRIPOD+AI 22)."""
    model = writer.results.model
    rows = []
    for place, parameter in enumerate(model.parameters):
        coefficient = model.coefficients[place]
        name = (
            writer.say("labels.rows.intercept")
            if parameter == INTERCEPT
            else writer.parameter(parameter, model.terms[place])
        )
        coding = model.coding[place] if parameter != INTERCEPT else writer.say("labels.rows.intercept_coding")
        rows.append(
            Row(
                name,
                [
                    Cell(coding, "words"),
                    _coefficient(writer, coefficient, "coefficients" in model.hidden),
                    _standard_error(writer, place),
                ],
            )
        )
    return Table(
        id="table-equation",
        caption=writer.say("labels.captions.equation", event=writer.outcome.label),
        headings=[
            Heading(writer.say("labels.columns.parameter"), 30, numeric=False),
            Heading(writer.say("labels.columns.coding"), 38, numeric=False),
            Heading(writer.say("labels.columns.coefficient"), 17),
            Heading(writer.say("labels.columns.standard_error"), 15),
        ],
        rows=rows,
        notes=[*_knots(writer), *cells.hidden_note(writer, rows)],
    )


def _coefficient(writer: Writer, value: float | None, hidden: bool) -> Cell:
    if value is None:
        return cells.hidden_cell(writer) if hidden else Cell(writer.say("labels.separated.none"), "words")
    return Cell(writer.numbers.number(value, _decimals(value)))


def _decimals(value: float) -> int:
    """Decimals that give five significant figures, so that others can use the equation."""
    if value == 0:
        return 5
    return min(max(4 - math.floor(math.log10(abs(value))), 2), 10)


def _standard_error(writer: Writer, place: int) -> Cell:
    model = writer.results.model
    if model.covariance is None:
        return cells.hidden_cell(writer) if "covariance" in model.hidden else cells.absent(writer)
    variance = model.covariance[place][place]
    if variance is None:
        return cells.absent(writer)
    error = math.sqrt(variance)
    coefficient = model.coefficients[place]
    return Cell(writer.numbers.number(error, _decimals(error if coefficient is None else coefficient)))


def _knots(writer: Writer) -> list[str]:
    return [
        writer.say(
            "labels.notes.knots",
            label=variable.label,
            knots=writer.words.listed([writer.numbers.number(knot, None) for knot in variable.knots]),
            unit=variable.unit,
        )
        for variable in writer.results.variables
        if variable.shape == "spline" and variable.knots
    ]


def term_tests(writer: Writer) -> Table | None:
    """Joint tests of terms of several columns, and of non-linearity."""
    shaped = {test.term for test in writer.results.term_tests if test.part == "non-linearity"}
    chosen = [
        test
        for test in writer.results.term_tests
        if test.model == "adjusted" and (test.df > 1 or test.term in shaped)
    ]
    if not chosen:
        return None
    rows = [
        Row(
            test.label,
            [
                Cell(writer.say(f"labels.parts.{test.part.replace('-', '_')}"), "words"),
                Cell(str(test.df)),
                cells.number(writer, test.statistic, 2, "statistic" in test.hidden),
                cells.p_value(writer, test.p_value, "p_value" in test.hidden),
            ],
        )
        for test in chosen
    ]
    return Table(
        id="table-term-tests",
        caption=writer.say("labels.captions.term_tests", test=chosen[0].test),
        headings=[
            Heading(writer.say("labels.columns.term"), 36, numeric=False),
            Heading(writer.say("labels.columns.tested"), 30, numeric=False),
            Heading(writer.say("labels.columns.df"), 10),
            Heading(writer.say("labels.columns.chi_squared"), 14),
            Heading(writer.say("labels.columns.p"), 10),
        ],
        rows=rows,
        notes=cells.hidden_note(writer, rows),
    )
