"""Sentences that lead the tables by which the model is judged."""

from __future__ import annotations

from fourfold.report.writer import Writer


def model_test(writer: Writer) -> str | None:
    """The whole model against none, and its information criteria."""
    model, numbers = writer.results.model, writer.numbers
    if model.likelihood_ratio is None or model.likelihood_ratio_p is None:
        return None
    return writer.say(
        "labels.trust.model_test",
        statistic=numbers.number(model.likelihood_ratio, 2),
        df=model.likelihood_ratio_df,
        p=numbers.p_phrase(model.likelihood_ratio_p),
        aic=numbers.number(model.aic, 1, model.hidden.get("aic")),
        bic=numbers.number(model.bic, 1, model.hidden.get("bic")),
        n=numbers.count(model.n, model.hidden.get("n")),
    )


def size(writer: Writer) -> str | None:
    """Events per candidate parameter, shrinkage and the R squared of the criteria."""
    found, numbers = writer.results.sample_size, writer.numbers
    if found is None:
        return None
    return writer.say(
        "labels.trust.events_per_parameter",
        value=numbers.number(found.events_per_parameter, 1, found.hidden.get("events_per_parameter")),
        candidates=numbers.count(found.candidate_parameters),
        shrinkage=None if found.shrinkage is None else numbers.number(found.shrinkage, 2),
        r_squared=None if found.r_squared is None else numbers.number(found.r_squared, 3),
        assumed=found.r_squared_assumed,
    )


def influence(writer: Writer) -> str | None:
    """The largest leverage, residuals and distance; no single person is shown."""
    found, numbers = writer.results.influence, writer.numbers
    if found is None:
        return None

    def number(name: str, digits: int) -> str:
        value: float | None = getattr(found, name)
        return numbers.number(value, digits, found.hidden.get(name))

    return writer.say(
        "labels.trust.influence",
        leverage=number("largest_leverage", 2),
        mean=number("mean_leverage", 2),
        pearson=number("largest_pearson", 1),
        deviance=number("largest_deviance_residual", 1),
        cook=number("largest_cook", 2),
    )
