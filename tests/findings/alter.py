"""Small changes to the sound study, one part at a time."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

from tests.findings.trees import STATED, calibration, sound_study, table

from fourfold.results import tree


def study(**changes: Any) -> tree.Results:
    found = sound_study()
    return replace(found, study=replace(found.study, **changes))


def says(text: str) -> tree.Results:
    """The authors say something under item 20 of the checklist."""
    return study(stated={**STATED, "20": text})


def analysis(**changes: Any) -> tree.Results:
    found = sound_study()
    return replace(found, analysis=replace(found.analysis, **changes))


def people(**changes: Any) -> tree.Results:
    found = sound_study()
    return replace(found, participants=replace(found.participants, **changes))


def audit(**changes: Any) -> tree.Results:
    found = sound_study()
    return replace(found, audit=replace(found.audit, **changes))


def model(**changes: Any) -> tree.Results:
    found = sound_study()
    return replace(found, model=replace(found.model, **changes))


def size(**changes: Any) -> tree.Results:
    found = sound_study()
    assert found.sample_size is not None
    return replace(found, sample_size=replace(found.sample_size, **changes))


def fit_of(**changes: Any) -> tree.Results:
    """Calibration changed."""
    found = sound_study()
    assert found.calibration is not None
    return replace(found, calibration=replace(found.calibration, **changes))


def hosmer_lemeshow(**changes: Any) -> tree.Results:
    test = calibration().hosmer_lemeshow
    assert test is not None
    return fit_of(hosmer_lemeshow=replace(test, **changes))


def auc(**changes: Any) -> tree.Results:
    found = sound_study()
    assert found.discrimination is not None
    return replace(found, discrimination=replace(found.discrimination, **changes))


def variable(name: str, results: tree.Results | None = None, **changes: Any) -> tree.Results:
    """One variable changed."""
    found = results or sound_study()
    changed = [replace(one, **changes) if one.name == name else one for one in found.variables]
    return replace(found, variables=changed)


def adjusted(term: str, results: tree.Results | None = None, **changes: Any) -> tree.Results:
    """The adjusted estimate of one term changed."""
    found = results or sound_study()
    estimates = [replace(one, **changes) if one.term == term else one for one in found.estimates.adjusted]
    return replace(found, estimates=replace(found.estimates, adjusted=estimates))


def crude(term: str, results: tree.Results | None = None, **changes: Any) -> tree.Results:
    """The crude estimate of one term changed."""
    found = results or sound_study()
    estimates = [replace(one, **changes) if one.term == term else one for one in found.estimates.crude]
    return replace(found, estimates=replace(found.estimates, crude=estimates))


def exposures(number: int, planned: Sequence[int] = ()) -> tree.Results:
    """The study with several exposures in one model."""
    found = sound_study()
    first = next(one for one in found.variables if one.role == "exposure")
    more = [
        replace(first, name=f"e{place}", label=f"Exposure {place}", planned=place in planned or None)
        for place in range(2, number + 1)
    ]
    return replace(
        found,
        variables=[*found.variables, *more],
        tables=[table(exposure=f"e{p}") for p in range(2, number + 1)] + found.tables,
    )


def prediction(results: tree.Results | None = None) -> tree.Results:
    """The same study read as the development of a prediction model."""
    found = results or sound_study()
    roles = {"exposure": "predictor", "covariate": "predictor"}
    return replace(
        found,
        study=replace(found.study, purpose="prediction"),
        variables=[replace(one, role=roles.get(one.role, one.role)) for one in found.variables],
        estimates=tree.Estimates(
            crude=[replace(one, role="predictor") for one in found.estimates.crude],
            adjusted=[replace(one, role="predictor") for one in found.estimates.adjusted],
        ),
    )


def case_control(results: tree.Results | None = None) -> tree.Results:
    """The same study as if cases and controls had been sampled apart."""
    found = results or sound_study()
    assert found.calibration is not None
    withheld = "sampled by outcome"
    return replace(
        found,
        study=replace(found.study, design="case-control"),
        analysis=replace(found.analysis, follow_up=[]),
        tables=[
            replace(one, risk_exposed=None, risk_unexposed=None, risk_ratio=None, risk_difference=None)
            for one in found.tables
        ],
        model=replace(
            found.model,
            parameters=found.model.parameters[1:],
            terms=found.model.terms[1:],
            coding=found.model.coding[1:],
            coefficients=found.model.coefficients[1:],
            withheld=withheld,
        ),
        calibration=replace(found.calibration, withheld=withheld, brier=None, scaled_brier=None),
    )
