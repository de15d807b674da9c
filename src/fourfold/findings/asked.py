"""Questions that many rules ask of a results tree."""

from __future__ import annotations

from typing import Any

from fourfold.results import tree

LEADING = ("exposure", "predictor")


def prediction(results: tree.Results) -> bool:
    """Is a prediction model being developed?"""
    return results.study.purpose == "prediction"


def case_control(results: tree.Results) -> bool:
    """Were people sampled by the outcome?"""
    return results.study.design == "case-control"


def fitted(results: tree.Results) -> bool:
    """Is there a model? An audit alone has none."""
    return bool(results.model.parameters)


def modelled(results: tree.Results) -> list[tree.Variable]:
    """Variables of the adjusted model, those that answer the question first."""
    return [variable for variable in results.variables if variable.role in (*LEADING, "covariate")]


def of_role(results: tree.Results, *roles: str) -> list[tree.Variable]:
    """Variables with one of these roles."""
    return [variable for variable in results.variables if variable.role in roles]


def leading_names(results: tree.Results) -> set[str]:
    """Names of the exposures or predictors."""
    return {variable.name for variable in of_role(results, *LEADING)}


def shape(results: tree.Results, name: str) -> str:
    """How a variable enters the model."""
    return next((variable.shape for variable in results.variables if variable.name == name), "linear")


def rarer(results: tree.Results) -> int | None:
    """People with the event or without it, whichever are fewer; None where one is hidden."""
    events, others = results.participants.events, results.participants.non_events
    return None if events is None or others is None else min(events, others)


def small(results: tree.Results, count: int | None) -> bool:
    """Will this count be hidden?

    That a finding is made must not tell more of a hidden count than that it is small: where one is
    looked at, rules ask this first, so that all counts that are hidden alike are treated alike.
    """
    least = 0 if results.analysis.hide_zero else 1
    return count is not None and least <= count < results.analysis.smallest_count


def few(results: tree.Results, wanted: int) -> int:
    """A threshold for counts that does not part hidden counts from each other."""
    return max(wanted, results.analysis.smallest_count)


def small_cells(results: tree.Results, name: str) -> bool:
    """Is some count of a variable's levels, by outcome, going to be hidden?"""
    return any(
        small(results, count)
        for one in results.audit.levels
        if one.variable == name
        for count in (one.events, one.non_events)
    )


def model_names(results: tree.Results) -> list[str]:
    """Names of all variables of the model: what a figure of the whole fit is about."""
    return [variable.name for variable in modelled(results)]


def adjusted(results: tree.Results, *roles: str) -> list[tree.Estimate]:
    """Adjusted estimates of variables with one of these roles; of all where none is named."""
    return [one for one in results.estimates.adjusted if not roles or one.role in roles]


def which(estimate: tree.Estimate) -> dict[str, Any]:
    """The comparison that an estimate makes, as the words of a finding need it."""
    return {"variable": estimate.term, "level": estimate.level, "contrast": estimate.contrast}


def names(found: list[dict[str, Any]]) -> list[str]:
    """The variables of a list of items, each once, in order."""
    return list(dict.fromkeys(str(item["variable"]) for item in found))
