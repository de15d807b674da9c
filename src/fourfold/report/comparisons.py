"""How sentences name a comparison and its odds ratio: shared by Answer and Results paragraph."""

from __future__ import annotations

from fourfold.report import cells
from fourfold.report.writer import Writer
from fourfold.results import tree


def comparison(writer: Writer, estimate: tree.Estimate) -> str:
    """``Current smoker (yes against no)``; the label comes first, so that any label reads well."""
    variable = writer.variables[estimate.term]
    say, number = writer.say, writer.numbers.number
    if estimate.contrast is not None:
        start, end = estimate.contrast
        return say(
            "answer.exposure.comparison.contrast",
            label=variable.label,
            start=number(start, None),
            end=number(end, None),
            unit=variable.unit,
        )
    if variable.kind == "quantity":
        if variable.shape == "log2":
            return say("answer.exposure.comparison.log2", label=variable.label)
        return say(
            "answer.exposure.comparison.quantity",
            label=variable.label,
            per=number(estimate.per if estimate.per is not None else 1.0, None),
            unit=variable.unit,
        )
    if variable.kind == "binary":
        return say(
            "answer.exposure.comparison.binary",
            label=variable.label,
            present=variable.present or say("labels.rows.present"),
            absent=variable.reference or say("labels.rows.absent"),
        )
    return say(
        "answer.exposure.comparison.level",
        label=variable.label,
        level=estimate.level,
        reference=estimate.reference or variable.reference,
    )


def is_hidden(estimate: tree.Estimate) -> bool:
    """Was the odds ratio taken away because it would give a count away?"""
    return estimate.note == "hidden" or "odds_ratio" in estimate.hidden


def ratio(writer: Writer, estimate: tree.Estimate) -> str:
    """The odds ratio alone, as printed."""
    return writer.numbers.odds_ratio(estimate.odds_ratio)


def interval(writer: Writer, estimate: tree.Estimate) -> str:
    """The limits alone, as printed beside the odds ratio."""
    return cells.limits(writer, estimate.lower, estimate.upper, estimate.odds_ratio)


def p_phrase(writer: Writer, p: float | None) -> str | None:
    """``P = 0.02``, or None where there is no test."""
    return None if p is None else writer.numbers.p_phrase(p)


def holds_one(estimate: tree.Estimate) -> bool:
    """Does the interval hold an odds ratio of 1? An unbounded side holds everything beyond."""
    if estimate.odds_ratio is None:
        return False
    below = estimate.lower is None or estimate.lower <= 1
    above = estimate.upper is None or estimate.upper >= 1
    return below and above


def covariate_labels(writer: Writer) -> list[str]:
    """Labels of what the leading estimates are adjusted for, as in a sentence."""
    return [writer.inline(variable.name) for variable in writer.of_role("covariate")]
