"""Crude and adjusted odds ratios of each term, from fitted models to rows of the results tree."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import chdtrc, ndtri

from fourfold.data.columns import Rows
from fourfold.data.design import DesignTerm
from fourfold.models import profile
from fourfold.models import tests as model_tests
from fourfold.pipeline.model_fit import FittedModel
from fourfold.results import tree

Array = NDArray[np.float64]

SEPARATED_NOTE = {1: "separated upward", -1: "separated downward", 2: "separated"}


@dataclass(frozen=True, slots=True)
class LogOdds:
    """One estimate on the log scale; ``direction`` is 0 where it is finite."""

    estimate: float
    standard_error: float
    lower: float
    upper: float
    p_value: float
    direction: int


def estimates_of(
    model: FittedModel,
    rows: Rows,
    variables: Sequence[tree.Variable],
    analysis: tree.Analysis,
    compare: dict[str, list[tuple[float, float]]],
) -> list[tree.Estimate]:
    """Every odds ratio of a model, in the order of its terms.

    Parameters
    ----------
    compare : dict
        For each shaped quantity, the pairs of values whose odds are compared.
    """
    by_name = {variable.name: variable for variable in variables}
    single = _single_columns(model, analysis)
    found: list[tree.Estimate] = []
    for term in model.design.terms:
        variable = by_name[term.variable]
        if term.shape in ("quadratic", "spline"):
            found += _contrasts(model, term, variable, rows, analysis, compare[term.variable])
        else:
            found += [
                _row(variable, term, column, single[column], rows, model.event, analysis)
                for column in term.columns
            ]
    return found


def _single_columns(model: FittedModel, analysis: tree.Analysis) -> dict[int, LogOdds]:
    """Estimates of the columns that are odds ratios by themselves, all limits advanced together."""
    columns = [
        column
        for term in model.design.terms
        if term.shape not in ("quadratic", "spline")
        for column in term.columns
    ]
    if not columns:
        return {}
    by_profile = analysis.intervals == "profile likelihood"
    separated = model.separation if model.separated else None
    z = float(ndtri((1 + analysis.confidence / 100) / 2))
    # A boundary has no standard error: where the estimate is infinite only the profile speaks.
    if by_profile or model.separated:
        limits = profile.profile_limits(
            model.blocks,
            model.event,
            model.fit,
            columns,
            confidence=analysis.confidence,
            counts=model.counts,
            separation=separated,
        )
        ratio_tests = model_tests.likelihood_ratio(
            model.blocks, model.event, model.fit, [(column,) for column in columns], counts=model.counts
        )
    answer: dict[int, LogOdds] = {}
    for place, column in enumerate(columns):
        direction = int(model.separation.direction[column])
        b = float(model.fit.coefficients[column])
        se = math.sqrt(model.fit.covariance[column, column]) if direction == 0 else math.nan
        if by_profile or direction != 0:
            lower, upper = float(limits.lower[place]), float(limits.upper[place])
            p = float(ratio_tests[place].p_value)
        else:
            lower, upper = b - z * se, b + z * se
            p = float(chdtrc(1, (b / se) ** 2))
        answer[column] = LogOdds(b, se, lower, upper, p, direction)
    return answer


def _row(
    variable: tree.Variable,
    term: DesignTerm,
    column: int,
    found: LogOdds,
    rows: Rows,
    event: NDArray[np.bool_],
    analysis: tree.Analysis,
) -> tree.Estimate:
    place = term.columns.index(column)
    values = rows.columns[variable.name].values
    level: str | None = None
    if variable.kind == "binary":
        inside = values == 1
    elif variable.kind == "quantity":
        inside = np.ones(rows.n, dtype=bool)
    else:
        level = term.levels[place]
        inside = values == rows.columns[variable.name].levels.index(str(level))
    events, total = rows.count(inside & event), rows.count(inside)
    if variable.kind == "quantity" and variable.shape == "linear":
        per = variable.per if variable.per is not None else 1.0
    else:
        per = None
    reference = variable.reference
    if variable.kind == "quantity":
        reference = None
    return _estimate(
        variable, found, 1.0 if per is None else per, analysis,
        level=level, reference=reference, per=per, events=events, total=total,
    )  # fmt: skip


def _contrasts(
    model: FittedModel,
    term: DesignTerm,
    variable: tree.Variable,
    rows: Rows,
    analysis: tree.Analysis,
    pairs: Iterable[tuple[float, float]],
) -> list[tree.Estimate]:
    everyone = np.ones(rows.n, dtype=bool)
    events, total = rows.count(everyone & model.event), rows.people
    answer = []
    for start, end in pairs:
        contrast = np.zeros(len(model.design.parameters))
        steps = model.design.basis(term, np.array([start, end], dtype=float))
        contrast[list(term.columns)] = steps[1] - steps[0]
        found = _contrast(model, term, contrast, analysis)
        answer.append(
            _estimate(
                variable,
                found,
                1.0,
                analysis,
                level=None,
                reference=None,
                per=None,
                events=events,
                total=total,
                contrast=[float(start), float(end)],
            )
        )
    return answer


def _contrast(model: FittedModel, term: DesignTerm, contrast: Array, analysis: tree.Analysis) -> LogOdds:
    directions = {int(model.separation.direction[column]) for column in term.columns}
    if directions != {0}:
        return LogOdds(math.inf, math.nan, -math.inf, math.inf, math.nan, 2)
    used = contrast != 0
    b = float(contrast[used] @ model.fit.coefficients[used])
    se = math.sqrt(float(contrast[used] @ model.fit.covariance[np.ix_(used, used)] @ contrast[used]))
    if analysis.intervals == "profile likelihood":
        limits = profile.profile_contrast(
            model.blocks, model.event, model.fit, contrast,
            confidence=analysis.confidence, counts=model.counts,
            separation=model.separation if model.separated else None,
        )  # fmt: skip
        return LogOdds(b, se, float(limits.lower[0]), float(limits.upper[0]), float(limits.p_value[0]), 0)
    z = float(ndtri((1 + analysis.confidence / 100) / 2))
    return LogOdds(b, se, b - z * se, b + z * se, float(chdtrc(1, (b / se) ** 2)), 0)


def _estimate(
    variable: tree.Variable,
    found: LogOdds,
    scale: float,
    analysis: tree.Analysis,
    *,
    level: str | None,
    reference: str | None,
    per: float | None,
    events: int,
    total: int,
    contrast: list[float] | None = None,
) -> tree.Estimate:
    finite = found.direction == 0
    by_profile = analysis.intervals == "profile likelihood" or not finite
    log_odds = found.estimate * scale
    lower, upper = sorted((found.lower * scale, found.upper * scale))
    return tree.Estimate(
        term=variable.name,
        label=variable.label,
        role=variable.role,
        level=level,
        reference=reference,
        per=per,
        unit=variable.unit,
        events=events,
        total=total,
        log_odds_ratio=log_odds if finite else None,
        standard_error=found.standard_error * abs(scale) if finite else None,
        odds_ratio=_ratio(log_odds) if finite else None,
        lower=_ratio(lower),
        upper=_ratio(upper),
        p_value=found.p_value if math.isfinite(found.p_value) else None,
        interval="profile likelihood" if by_profile else "Wald",
        test="likelihood ratio" if by_profile else "Wald",
        contrast=contrast,
        note=None if finite else SEPARATED_NOTE[found.direction],
    )


def _ratio(log_odds: float) -> float | None:
    """Exponential of a log odds ratio; None where it is infinite or beyond a double."""
    if not math.isfinite(log_odds) or log_odds > 700:
        return None
    return math.exp(log_odds)


def term_tests_of(
    model: FittedModel, variables: Sequence[tree.Variable], analysis: tree.Analysis
) -> list[tree.TermTest]:
    """Joint test of each term, and of the non-linear part of each shaped quantity."""
    labels = {variable.name: variable.label for variable in variables}
    wanted: list[tuple[DesignTerm, tuple[int, ...], str]] = []
    for term in model.design.terms:
        wanted.append((term, term.columns, "overall"))
        if term.shape in ("quadratic", "spline"):
            wanted.append((term, term.columns[1:], "non-linearity"))
    by_ratio = analysis.intervals == "profile likelihood" or model.separated
    if by_ratio:
        results = model_tests.likelihood_ratio(
            model.blocks, model.event, model.fit, [columns for _, columns, _ in wanted], counts=model.counts
        )
    else:
        results = [model_tests.wald(model.fit, columns) for _, columns, _ in wanted]
    return [
        tree.TermTest(
            term=term.variable,
            label=labels[term.variable],
            df=int(result.df),
            statistic=float(result.statistic),
            p_value=float(result.p_value),
            test="likelihood ratio" if by_ratio else "Wald",
            part=part,
        )
        for (term, _, part), result in zip(wanted, results, strict=True)
    ]
