"""Cases of findings about the reading of estimates and the performance of the model."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from tests.findings import alter, trees
from tests.findings.alter import prediction
from tests.findings.trees import Case, sound_study

from fourfold.results import tree


def common(odds: float, unexposed: tuple[int, int], **study: Any) -> tree.Results:
    """The stove's adjusted odds ratio, and events and others among the unexposed."""
    results = alter.adjusted("stove", odds_ratio=odds)
    table = trees.table(c=unexposed[0], d=unexposed[1])
    return replace(results, tables=[table], study=replace(results.study, **study))


def interval(lower: float | None, upper: float | None) -> tree.Results:
    return alter.adjusted("stove", lower=lower, upper=upper)


def sparse_exposure() -> tree.Results:
    """The crude odds ratio moves, but is hidden with the counts that it is made of."""
    results = alter.crude("stove", odds_ratio=4.0)
    levels = [replace(one, events=3) if one.level == "yes" else one for one in results.audit.levels]
    return replace(results, audit=replace(results.audit, levels=levels))


def category_exposure() -> tree.Results:
    results = alter.variable("stove", kind="category", levels=["none", "old", "new"], reference="none")
    return replace(results, tables=[])


def few(events: int, results: tree.Results | None = None) -> tree.Results:
    found = results or sound_study()
    return replace(found, participants=replace(found.participants, events=events, non_events=3000 - events))


def thin(expected: float, verdict: str | None) -> tree.Results:
    results = alter.hosmer_lemeshow(verdict=verdict)
    assert results.calibration is not None
    groups = [replace(results.calibration.groups[0], expected=expected), *results.calibration.groups[1:]]
    return replace(results, calibration=replace(results.calibration, groups=groups))


def without(**parts: Any) -> tree.Results:
    return replace(sound_study(), **parts)


CASES = {
    # Zhang and Yu 1998: an odds ratio of 3.5 where 30% of the unexposed have the event is a risk ratio of 2.
    "OR-not-risk": Case(
        [
            (lambda: common(3.5, (540, 1260)), "concern"),
            (lambda: common(0.4, (540, 1260)), "concern"),
            (lambda: common(3.5, (540, 1260), design="cross-sectional"), "concern"),
            (
                lambda: common(
                    3.5, (540, 1260), stated={**trees.STATED, "18": "They were 3.5 times as likely to cough."}
                ),
                "serious",
            ),
        ],
        [
            sound_study,
            # A rare event, or an odds ratio close to 1: the two figures agree.
            lambda: common(3.5, (18, 1782)),
            lambda: common(1.1, (540, 1260)),
            lambda: alter.case_control(common(3.5, (540, 1260))),
            lambda: prediction(common(3.5, (540, 1260))),
            # Counts are hidden: whether the event is common among the unexposed must not be told.
            lambda: common(3.5, (3, 12)),
        ],
    ),
    "OR-case-control-risk": Case(
        [
            (alter.case_control, "remark"),
            (lambda: alter.case_control(alter.says("The relative risk was 3.5.")), "serious"),
        ],
        [sound_study, lambda: alter.says("The relative risk was 3.5.")],
    ),
    "TAB-covariates-as-effects": Case(
        [
            (lambda: alter.exposures(2), "concern"),
            (lambda: alter.exposures(3, planned=(2, 3)), "concern"),
            (lambda: alter.variable("stove", alter.exposures(2), planned=None), "concern"),
        ],
        [sound_study, lambda: prediction(alter.exposures(2))],
    ),
    "NULL-as-absence": Case(
        [(lambda: interval(0.5, 2.0), "concern"), (lambda: interval(0.9, 3.7), "concern")],
        [
            sound_study,
            lambda: interval(0.9, 1.2),
            lambda: interval(1.1, 9.0),
            lambda: interval(None, 2.0),
            lambda: prediction(interval(0.5, 2.0)),
        ],
    ),
    "MUL-many": Case(
        [(lambda: alter.exposures(6), "concern"), (lambda: alter.exposures(21), "concern")],
        [sound_study, lambda: alter.exposures(5)],
    ),
    "COLLAPSE": Case(
        [(lambda: alter.crude("stove", odds_ratio=2.0), "remark")],
        [
            sound_study,
            sparse_exposure,
            lambda: alter.crude("stove", odds_ratio=1.9),
            lambda: alter.crude("stove", odds_ratio=None),
        ],
    ),
    "ABS-missing": Case(
        [(category_exposure, "concern")],
        [
            sound_study,
            lambda: alter.case_control(category_exposure()),
            lambda: prediction(category_exposure()),
        ],
    ),
    # Cochran 1954: chi-squared is doubtful where an expected count is below 5.
    "TAB-expected-small": Case(
        [(lambda: without(tables=[trees.table(smallest_expected=4.9)]), "remark")],
        [
            sound_study,
            lambda: without(tables=[trees.table(smallest_expected=5.0)]),
            lambda: without(tables=[trees.table(smallest_expected=None)]),
        ],
    ),
    # Van Calster et al. 2016: a curve needs about 200 events and 200 non-events.
    "CAL-few-events": Case(
        [(lambda: prediction(few(199)), "concern"), (lambda: prediction(few(100)), "concern")],
        [prediction, lambda: prediction(few(200)), lambda: prediction(few(99)), lambda: few(150)],
    ),
    # Collins et al. 2016: at least 100 events and 100 non-events.
    "VAL-few-events": Case(
        [(lambda: prediction(few(99)), "serious"), (lambda: prediction(few(2901)), "serious")],
        [prediction, lambda: prediction(few(100)), lambda: few(80)],
    ),
    "CAL-none": Case(
        [
            (lambda: prediction(without(calibration=None)), "serious"),
            (lambda: prediction(alter.case_control()), "serious"),
        ],
        [sound_study, prediction, lambda: without(calibration=None), alter.case_control],
    ),
    # Van Calster et al. 2016: on the fitting data they are 0 and 1 by construction.
    "CAL-by-construction": Case(
        [
            (lambda: alter.fit_of(slope=1.0, in_the_large=0.0), "serious"),
            (prediction, "remark"),
        ],
        [
            sound_study,
            alter.case_control,
            lambda: alter.fit_of(basis="new data", slope=0.9, in_the_large=0.1),
        ],
    ),
    "CAL-hl-large": Case(
        [
            (lambda: alter.hosmer_lemeshow(verdict="large n"), "remark"),
            (lambda: prediction(alter.hosmer_lemeshow(verdict="large n")), "concern"),
        ],
        [sound_study, lambda: alter.hosmer_lemeshow(verdict="thin groups")],
    ),
    "CAL-hl-thin": Case(
        [
            (lambda: thin(0.4, "thin groups"), "remark"),
            (lambda: prediction(thin(0.4, "thin groups")), "concern"),
            (lambda: prediction(thin(20.0, "few groups")), "concern"),
            (lambda: prediction(thin(4.9, None)), "remark"),
            (lambda: thin(296.0, None), "remark"),
        ],
        [sound_study, lambda: thin(5.0, None), lambda: alter.hosmer_lemeshow(verdict="large n")],
    ),
    "CAL-hl-departs": Case(
        [(lambda: alter.hosmer_lemeshow(p_value=0.01), "concern")],
        [
            sound_study,
            lambda: alter.hosmer_lemeshow(p_value=0.05),
            lambda: alter.hosmer_lemeshow(p_value=0.01, verdict="large n"),
        ],
    ),
    "AUC-apparent": Case(
        [(prediction, "serious")],
        [
            sound_study,
            lambda: prediction(alter.fit_of(basis="new data")),
            lambda: prediction(without(discrimination=None)),
        ],
    ),
    "AUC-no-interval": Case(
        [(lambda: prediction(alter.auc(lower=None, upper=None)), "concern")],
        # A perfect order has one bound only; that is an interval.
        [sound_study, prediction, lambda: prediction(alter.auc(auc=1.0, upper=None))],
    ),
    "VAL-none": Case(
        [(prediction, "concern")], [sound_study, lambda: prediction(alter.fit_of(basis="new data"))]
    ),
    "EQN-missing": Case(
        [
            (lambda: prediction(alter.case_control()), "serious"),
            (lambda: prediction(alter.model(coefficients=[-2.3, None, 0.02, 0.001, 0.2])), "serious"),
        ],
        [sound_study, prediction, alter.case_control],
    ),
    "FAIR-groups": Case(
        [
            (
                lambda: prediction(
                    alter.study(stated={k: v for k, v in trees.STATED.items() if k not in ("14", "23a")})
                ),
                "concern",
            )
        ],
        [sound_study, prediction],
    ),
}
