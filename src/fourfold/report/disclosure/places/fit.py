"""Figures of the fitted model that give counts away.

An adjusted estimate is safe where many different people stand behind it. It is not where the
model has few patterns of its covariates: then what is printed of the fit is as many equations as
there are unknown counts, and they can be solved. Nor is it where its precision bounds a hidden
count from below.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields, replace
from math import prod

from fourfold.report.disclosure.ledger import DERIVED, SMALL, Key, Ledger, Path
from fourfold.report.disclosure.places.analysed import ESTIMATE_FIGURES, cells
from fourfold.report.disclosure.places.keys import ALL, ANALYSED, EVENT, NONE, Names, everyone, people
from fourfold.results import tree

LIKELIHOODS = (
    "log_likelihood", "null_log_likelihood", "deviance", "aic", "bic", "likelihood_ratio",
    "likelihood_ratio_p", "r_squared",
)  # fmt: skip
WITH_N = ("null_log_likelihood", "likelihood_ratio", "likelihood_ratio_p", "bic", "r_squared")
"""What tells the number of people or events, given the rest of the model."""

WHOLE_NUMBERS = 4
"""Unknown counts for each number of a covariance matrix: whole numbers need fewer equations."""

FURTHER_EQUATIONS = 3
"""Log-likelihood, log-likelihood without covariates, and number of people."""


def figures(results: tree.Results, ledger: Ledger, names: Names) -> Iterator[Path]:
    """Figures to hide, once it is known which counts are hidden."""
    yield from _revealing(results, ledger, names)
    yield from _with_hidden_totals(results, ledger)
    yield from _of_hidden_levels(results, ledger, names)
    told = separated_by_hidden(results, ledger, names)
    for place, estimate in enumerate(results.estimates.adjusted):
        if estimate.term in told:
            yield from (("estimates", "adjusted", place, field) for field in ESTIMATE_FIGURES)
    yield from _too_precise(results, ledger, names)


def _too_precise(results: tree.Results, ledger: Ledger, names: Names) -> Iterator[Path]:
    """Adjusted estimates whose precision alone tells how many people are in a hidden cell.

    On the same rows, and with an intercept, an adjusted standard error is never below Woolf's from
    the level's own four cells: score equations fix the sum of risks in both groups, the weight
    p (1 - p) is concave, and further columns only take information away. An interval too narrow for
    a single person in a hidden cell therefore narrows the count down, often to one value.
    """
    revealing = set()
    for place, estimate in enumerate(results.estimates.adjusted):
        reference = names.reference(estimate.term)
        if estimate.standard_error is None or reference is None or not names.categorical(estimate.term):
            continue
        level = names.level(estimate.term, estimate.level)
        four = cells(estimate.term, (level, reference))
        if not _excludes_one_person(estimate.standard_error, four, ledger):
            continue
        revealing.add(estimate.term)
        yield from (("estimates", "adjusted", place, field) for field in ESTIMATE_FIGURES)
    if not revealing:
        return
    yield ("model", "covariance")
    for place, test in enumerate(results.term_tests):
        if test.term in revealing:
            yield from (("term_tests", place, field) for field in ("statistic", "p_value"))
    # A prediction model is nothing without its equation; a coefficient alone has no precision.
    if results.study.purpose != "prediction":
        for place, term in enumerate(results.model.terms):
            if term in revealing:
                yield ("model", "coefficients", place)


def _excludes_one_person(standard_error: float, keys: list[Key], ledger: Ledger) -> bool:
    counts = [ledger.counts[key] for key in keys if key in ledger.counts]
    if not any(count.hidden == SMALL for count in counts):
        return False
    shown = sum(1 / count.value for count in counts if not count.hidden and count.value)
    return standard_error**2 < 1 + shown


def separated_by_hidden(results: tree.Results, ledger: Ledger, names: Names) -> set[str]:
    """Terms without a finite estimate that have a hidden count, where zeros are hidden too.

    That no estimate exists tells that a cell is empty, in the adjusted model as in the crude one.
    """
    if not ledger.limit.hide_zero:
        return set()
    terms = {one.term for one in results.estimates.adjusted if (one.note or "").startswith("separated")}
    return {
        term
        for term in terms
        if names.categorical(term) and any(ledger.is_hidden(key) for key in _counts_of(term, names))
    }


def without_separation(results: tree.Results, told: set[str]) -> tree.Results:
    """The model without the names of parameters that an empty hidden cell leaves without estimate."""
    if not told:
        return results
    model = results.model
    term_of = dict(zip(model.parameters, model.terms, strict=True))
    kept = [name for name in model.separated if term_of.get(name) not in told]
    return replace(
        results,
        model=replace(
            model,
            separated=kept,
            separation=model.separation if kept else None,
            hidden={**model.hidden, "separated": DERIVED, "separation": DERIVED},
        ),
    )


def _revealing(results: tree.Results, ledger: Ledger, names: Names) -> Iterator[Path]:
    terms = names.in_model()
    # The values of a quantity are not in the report, so the number of patterns is unknown.
    if not terms or not all(names.categorical(term) for term in terms):
        return
    if not any(ledger.is_hidden(key) for term in terms for key in _counts_of(term, names)):
        return
    levels = [len(names.levels(term)) for term in terms]
    unknown = prod(levels)
    parameters = 1 + sum(count - 1 for count in levels)
    margins = sum(count - 1 for count in levels)
    joint = sum((levels[0] - 1) * (count - 1) for count in levels[1:] if results.descriptives.by_exposure)
    printed = 2 * (parameters - 1) + margins + joint + FURTHER_EQUATIONS
    if len(terms) == 1 or unknown <= printed:
        yield from _all_of_the_fit(results, names)
    elif unknown <= printed + WHOLE_NUMBERS * parameters * (parameters + 1) // 2:
        yield ("model", "covariance")


def _all_of_the_fit(results: tree.Results, names: Names) -> Iterator[Path]:
    model: Path = ("model",)
    yield from ((*model, "coefficients", place) for place in range(len(results.model.coefficients)))
    yield from ((*model, field) for field in ("covariance", "decrement", *LIKELIHOODS))
    for place, estimate in enumerate(results.estimates.adjusted):
        if names.categorical(estimate.term):
            yield from (("estimates", "adjusted", place, field) for field in ESTIMATE_FIGURES)
    for place in range(len(results.term_tests)):
        yield from (("term_tests", place, field) for field in ("statistic", "p_value"))
    # Inflation factors tell how terms go together, and so the people at levels of both.
    yield ("collinearity",)
    yield from _discrimination(results)
    yield from _calibration(results)
    yield from _sample_size(results, ("shrinkage", "r_squared", "required", "shortfall"))
    if results.influence is not None:
        yield from (
            ("influence", one.name) for one in fields(tree.Influence) if one.name not in ("hidden", "terms")
        )
        for place in range(len(results.influence.terms)):
            for field in ("largest_change", "largest_change_refitted"):
                yield ("influence", "terms", place, field)
    for place in range(len(results.risk_distribution)):
        yield from (("risk_distribution", place, field) for field in ("events", "non_events"))


def _with_hidden_totals(results: tree.Results, ledger: Ledger) -> Iterator[Path]:
    """The people analysed or their events are hidden: so is what is a fraction of them."""
    if not any(ledger.is_hidden(everyone(ANALYSED, outcome)) for outcome in (ALL, EVENT, NONE)):
        return
    yield from (("model", field) for field in WITH_N)
    yield from _discrimination(results)
    yield from _calibration(results)
    yield from _sample_size(
        results, ("events_per_parameter", "shrinkage", "r_squared", "required", "shortfall")
    )
    if results.influence is not None:
        yield ("influence", "mean_leverage")


def _of_hidden_levels(results: tree.Results, ledger: Ledger, names: Names) -> Iterator[Path]:
    """The largest leverage is near one over the people of the rarest level."""
    if results.influence is None:
        return
    for term in names.in_model():
        for level in names.levels(term):
            count = ledger.counts.get(people(ANALYSED, term, level, ALL))
            if count is not None and (count.hidden == SMALL or ledger.limit.small(count.value)):
                yield ("influence", "largest_leverage")


def _counts_of(term: str, names: Names) -> list[tuple[str, ...]]:
    levels = names.levels(term)
    return [*cells(term, levels), *(people(ANALYSED, term, level, ALL) for level in levels)]


def _discrimination(results: tree.Results) -> Iterator[Path]:
    if results.discrimination is not None:
        yield from (("discrimination", field) for field in ("auc", "standard_error", "lower", "upper"))


def _calibration(results: tree.Results) -> Iterator[Path]:
    if results.calibration is None:
        return
    for one in fields(tree.Calibration):
        numeric = isinstance(getattr(results.calibration, one.name), float)
        if numeric:
            yield ("calibration", one.name)
    if results.calibration.hosmer_lemeshow is not None:
        here: Path = ("calibration", "hosmer_lemeshow")
        yield from ((*here, field) for field in ("statistic", "p_value"))
        for place in range(len(results.calibration.hosmer_lemeshow.by_groups)):
            yield from ((*here, "by_groups", place, field) for field in ("statistic", "p_value"))


def _sample_size(results: tree.Results, named: tuple[str, ...]) -> Iterator[Path]:
    if results.sample_size is None:
        return
    yield from (("sample_size", field) for field in named)
    for place in range(len(results.sample_size.criteria)):
        yield from (("sample_size", "criteria", place, field) for field in ("required", "shortfall"))
