"""Cases of findings about design, selection, adjustment and the authors' words."""

from __future__ import annotations

from dataclasses import replace

from tests.findings import alter
from tests.findings.trees import Case, sound_study

from fourfold.results import tree


def watched(lower: float, upper: float) -> tree.Results:
    """A length of follow-up is described, with these quartiles in days."""
    cell = tree.DescriptiveCell(
        group="overall", total=3000, lower_quartile=lower, median=(lower + upper) / 2, upper_quartile=upper
    )
    row = tree.Descriptive(
        variable="days",
        label="Days watched",
        kind="quantity",
        level=None,
        unit="days",
        decimals=0,
        overall=cell,
        groups=[],
    )
    by = tree.DescriptiveTable(
        by="cough", by_label="Cough", groups=["yes", "no"], group_sizes=[360, 2640], rows=[row]
    )
    results = alter.analysis(follow_up_variable="days")
    days = tree.Variable(name="days", label="Days watched", role="other", kind="quantity", unit="days")
    results = replace(results, variables=[*results.variables, days])
    return replace(results, descriptives=tree.Descriptives(by_outcome=by))


def alone(number: int) -> tree.Results:
    """The exposures without any covariate."""
    results = alter.exposures(number)
    return replace(results, variables=[one for one in results.variables if one.role != "covariate"])


CASES = {
    "DSN-matching-ignored": Case(
        [
            (lambda: alter.analysis(matched_on=["general practice"]), "serious"),
            (lambda: alter.analysis(matched_on=["age", "sex"]), "serious"),
            (lambda: alter.analysis(matched_on=["Age", "village"]), "concern"),
        ],
        [sound_study],
    ),
    "DSN-clusters-ignored": Case(
        [(lambda: alter.analysis(clusters_stated="household"), "serious")], [sound_study]
    ),
    "DSN-weights-ignored": Case(
        [(lambda: alter.analysis(weights_stated="household weight"), "serious")],
        [sound_study, lambda: alter.study(design="survey")],
    ),
    "DSN-survey-unweighted": Case(
        [(lambda: alter.study(design="survey"), "concern")],
        [
            sound_study,
            lambda: alter.study(design="cross-sectional"),
            lambda: replace(
                alter.study(design="survey"), analysis=alter.analysis(weights_stated="w").analysis
            ),
        ],
    ),
    "DSN-follow-up-unequal": Case(
        [(lambda: alter.analysis(follow_up=["unequal"]), "serious")],
        [sound_study, lambda: alter.analysis(follow_up=["censored"])],
    ),
    "DSN-censoring": Case(
        [(lambda: alter.analysis(follow_up=["unequal", "censored"]), "serious")],
        [sound_study, lambda: alter.analysis(follow_up=["unequal"])],
    ),
    "DSN-competing-events": Case(
        [(lambda: alter.analysis(follow_up=["competing events"]), "concern")],
        [sound_study, lambda: alter.analysis(follow_up=["censored"])],
    ),
    "DSN-follow-up-unstated": Case(
        [(lambda: alter.analysis(follow_up=[]), "remark")],
        [
            sound_study,
            lambda: alter.case_control(),
            lambda: replace(alter.analysis(follow_up=[]), study=alter.study(design="cross-sectional").study),
        ],
    ),
    "DSN-follow-up-varies": Case(
        [(lambda: watched(300.0, 365.0), "remark"), (lambda: watched(120.0, 365.0), "concern")],
        [sound_study, lambda: watched(365.0, 365.0)],
    ),
    "DSN-immortal-time": Case(
        [
            (lambda: alter.analysis(exposure_measured="during follow-up"), "serious"),
            (
                lambda: replace(
                    alter.exposures(2),
                    analysis=alter.analysis(exposure_measured="during follow-up").analysis,
                ),
                "serious",
            ),
        ],
        [sound_study, lambda: alter.analysis(exposure_measured=None)],
    ),
    "SEL-p-values": Case(
        [
            (lambda: alter.analysis(selection="stepwise"), "serious"),
            (lambda: alter.analysis(selection="univariable screening"), "serious"),
        ],
        [sound_study, lambda: alter.analysis(selection="other"), lambda: alter.analysis(selection=None)],
    ),
    "SEL-hidden": Case(
        [
            (lambda: alter.analysis(selection=None), "concern"),
            (lambda: alter.analysis(selection="stepwise", candidates=None), "concern"),
            (lambda: alter.analysis(candidates=5), "concern"),
        ],
        [
            sound_study,
            lambda: alter.analysis(candidates=None),
            lambda: alter.analysis(selection="stepwise"),
        ],
    ),
    "ADJ-no-reason": Case(
        [
            (lambda: alter.variable("age", reason=None), "remark"),
            (
                lambda: alter.variable("age", alter.variable("village", reason=None), reason=None),
                "remark",
            ),
        ],
        # The exposure is the question; it needs no reason.
        [sound_study, lambda: alter.variable("stove", reason=None)],
    ),
    "ADJ-unplanned": Case(
        [
            (lambda: alter.variable("age", planned=False), "remark"),
            (
                lambda: alter.variable("age", alter.variable("stove", planned=False), planned=False),
                "concern",
            ),
        ],
        [sound_study, lambda: alter.variable("age", planned=None)],
    ),
    "ADJ-nothing": Case(
        [(lambda: alone(1), "concern"), (lambda: alone(3), "concern")],
        [sound_study, lambda: alter.prediction(alone(1))],
    ),
    "CAU-words": Case(
        [
            (lambda: alter.study(title="The effect of wood stoves on coughing"), "concern"),
            (lambda: alter.variable("stove", label="Harmful stove"), "concern"),
            (lambda: alter.says("Stoves increase the odds: smoke leads to coughing."), "concern"),
        ],
        [
            sound_study,
            lambda: alter.study(title="Side effects of inhalers and wood stoves in Alder Vale"),
            lambda: alter.study(title="Causes of death and wood stoves"),
            lambda: alter.variable("stove", label="Cause of admission"),
            lambda: alter.says("Effect modification by age was not examined."),
        ],
    ),
    "P-zero": Case(
        [
            (lambda: alter.says("Coughing went with stoves (p = 0.000)."), "concern"),
            (lambda: alter.says("The P-value was .00 throughout."), "concern"),
        ],
        [
            sound_study,
            lambda: alter.says("Coughing went with stoves (p = 0.0004)."),
            lambda: alter.says("P < 0.001."),
        ],
    ),
    "P-threshold": Case(
        [
            (lambda: alter.says("The difference was not statistically significant."), "concern"),
            (lambda: alter.says("There was a trend towards significance."), "concern"),
            (lambda: alter.study(title="Stoves and coughing: P < 0.05"), "concern"),
        ],
        [sound_study, lambda: alter.says("P = 0.03, odds ratio 1.4."), lambda: alter.says("P < 0.053")],
    ),
}
