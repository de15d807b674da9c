"""Whether the outcome and the variables of the model exist, are of a fitting kind, and have one role."""

from __future__ import annotations

from collections.abc import Iterator

from fourfold.description.agreement_variables import kind_of, names_of
from fourfold.description.legible import Legible, RoleAt
from fourfold.description.node import Path, Positions
from fourfold.description.wording import did_you_mean, quoted
from fourfold.errors import Problem

_MODEL_KINDS = ("quantity", "category", "ordered", "binary", "bands")
_SINGULAR = {"exposures": "an exposure", "predictors": "a predictor", "covariates": "a covariate"}


def check_roles(parts: Legible, positions: Positions) -> Iterator[Problem]:
    """Problems of the outcome, the role lists, and names under other sections."""
    yield from _outcome(parts, positions)
    yield from _purpose(parts, positions)
    taken: dict[str, str] = {parts.outcome: "the outcome"} if parts.outcome else {}
    counts = parts.data.section.counts if parts.data and "counts" not in parts.data.wrong else None
    for at in parts.roles:
        yield from _member(at, parts, positions)
        if counts is not None and _column(at.name, parts) == counts:
            yield Problem(
                f"{quoted(at.name)} is {_SINGULAR[at.role]} and also holds the `counts:` of the rows.",
                "Remove it from the model, or correct `counts:` under `data:`.",
                positions.find(*at.path),
            )
        if at.name in taken:
            before = taken[at.name]
            again = (
                f"{before} already" if before != _SINGULAR[at.role] else f"listed twice under `{at.role}:`"
            )
            yield Problem(
                f"{quoted(at.name)} is {again}; a variable has one role.",
                "Remove it from one of the two places.",
                positions.find(*at.path),
            )
        taken.setdefault(at.name, _SINGULAR[at.role])
    yield from _follow_up(parts, positions)


def _outcome(parts: Legible, positions: Positions) -> Iterator[Problem]:
    outcome, variables = parts.outcome, parts.variables
    if outcome is None or variables is None:
        return
    where = positions.find("outcome")
    if outcome not in variables:
        yield _not_described("outcome", outcome, parts, ("outcome",), positions, ("binary",))
    elif kind_of(variables[outcome]) not in (None, "binary"):
        kind = kind_of(variables[outcome])
        found = "bands" if kind == "bands" else f"kind: {kind}"
        yield Problem(
            f"The outcome {quoted(outcome)} is of {found}; an outcome is binary: the event occurred or not."
            if kind != "bands"
            else f"The outcome {quoted(outcome)} is cut into bands; an outcome is binary.",
            'If the column holds two values, write kind: binary and the event as present: "yes".',
            where,
        )


def _purpose(parts: Legible, positions: Positions) -> Iterator[Problem]:
    study = parts.study
    if study is None or "purpose" not in study.section.model_fields_set:
        return
    purpose = study.section.purpose
    lists = parts.lists_given
    wanted, unwanted = (
        ("exposures", "predictors") if purpose == "association" else ("predictors", "exposures")
    )
    missing = positions.node(wanted) is None or lists.get(wanted) == 0
    if missing and not lists.get(unwanted):
        meaning = (
            "whose odds ratios answer the question" if wanted == "exposures" else "that foretell the outcome"
        )
        yield Problem(
            f"purpose: {purpose} needs `{wanted}:`, the variables {meaning}.",
            f"Write `{wanted}:` and the variables' names in brackets.",
            positions.find(wanted) if positions.node(wanted) else positions.find("study", "purpose"),
        )
    if lists.get(unwanted):
        yield Problem(
            f"`{unwanted}` does not go with purpose: {purpose}.",
            f"{'Rename it to' if missing else 'Use'} `{wanted}:`, or change `purpose:` under `study:`.",
            positions.key(unwanted),
        )
    if purpose == "prediction" and lists.get("covariates"):
        yield Problem(
            "`covariates` does not go with purpose: prediction, where every variable of the model is a "
            "predictor.",
            "Move its variables to `predictors:`.",
            positions.key("covariates"),
        )


def _member(at: RoleAt, parts: Legible, positions: Positions) -> Iterator[Problem]:
    if parts.variables is None:
        return
    if at.name not in parts.variables:
        yield _not_described(at.role, at.name, parts, at.path, positions, _MODEL_KINDS)
    elif kind_of(parts.variables[at.name]) == "date":
        yield Problem(
            f"{quoted(at.name)} is a date; dates never enter a model.",
            "Use a quantity made from it in the data file, such as age or days since a fixed date.",
            positions.find(*at.path),
        )


def _follow_up(parts: Legible, positions: Positions) -> Iterator[Problem]:
    if parts.follow_up is None or parts.variables is None or parts.follow_up.section.variable is None:
        return
    name, path = parts.follow_up.section.variable, ("follow_up", "variable")
    if name not in parts.variables:
        yield _not_described("follow_up.variable", name, parts, path, positions, ("quantity",))
    elif kind_of(parts.variables[name]) not in (None, "quantity"):
        yield Problem(
            f"{quoted(name)} under `follow_up:` is no quantity; a length of follow-up is one.",
            "Name the quantity that holds days, months or years of follow-up.",
            positions.find(*path),
        )


def _not_described(
    key: str, name: str, parts: Legible, path: Path, positions: Positions, kinds: tuple[str, ...]
) -> Problem:
    variables = parts.variables or {}
    by_column = [
        known for known, part in variables.items() if part is not None and part.section.column == name
    ]
    hint = f"Its name in the description is '{by_column[0]}'." if by_column else ""
    hint = hint or did_you_mean(name, names_of(parts, *kinds)) or did_you_mean(name, variables)
    return Problem(
        f"`{key}` names {quoted(name)}, which is not a described variable.",
        hint or "Describe it under `variables:`.",
        positions.find(*path),
    )


def _column(name: str, parts: Legible) -> str:
    part = (parts.variables or {}).get(name)
    return part.section.column or name if part is not None else name
