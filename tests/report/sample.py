"""Results trees to render: the birth-weight data and reference values of tests/reference.

The study around them is invented. Each function is one kind of report.
"""

from __future__ import annotations

from dataclasses import replace

from tests.report.sample_fit import (
    bins,
    calibration,
    discrimination,
    model,
    odds_ratio_curve,
    quantity_curve,
)
from tests.report.sample_tables import (
    CASE,
    DESCRIPTION,
    EVENT,
    LABELS,
    NO_EVENT,
    count,
    descriptives,
    estimates,
    fourfold,
    is_,
    variables,
)

from fourfold.findings import catalogue, cautions
from fourfold.results import tree


def cohort(prediction: bool = False) -> tree.Results:
    """A cohort: does smoking go with low birth weight?"""
    found = variables(prediction)
    inflation = CASE["collinearity"]
    influence = CASE["influence"]
    at = CASE["parameters"].index("smokeyes")
    tests = [
        tree.TermTest(
            term=one["term"],
            label=LABELS[one["term"]],
            df=one["df"],
            statistic=one["statistic"],
            p_value=one["p_value"],
            test="likelihood ratio",
        )
        for one in CASE["term_tests"]
    ]
    levels = [
        tree.SparseLevel(
            variable=variable.name,
            level=level,
            events=count(is_(variable.name, level), EVENT),
            non_events=count(is_(variable.name, level), NO_EVENT),
            reference=level == variable.reference,
        )
        for variable in found
        if variable.levels and variable.role != "outcome"
        for level in variable.levels
    ]
    return tree.Results(
        format=1,
        study=tree.Study(
            title="Smoking and low birth weight, Tarn Valley",
            design="cohort",
            purpose="prediction" if prediction else "association",
            setting="Two maternity units",
            period_from="2019-01-01",
            period_to="2020-12-31",
            authors=["Tarn Valley Public Health Unit"],
            stated={"22": "No external funding (invented example)"},
        ),
        variables=found,
        analysis=tree.Analysis(selection="beforehand", follow_up=["equal"], exposure_measured="at start"),
        provenance=tree.Provenance(
            fourfold="0.1.0",
            python="3.11.2",
            packages={"numpy": "2.4.0", "scipy": "1.17.0"},
            data_file="births.csv",
            data_sha256="0" * 64,
            description_file="births.yaml",
            description_sha256="1" * 64,
            description=DESCRIPTION,
            rows_read=214,
            columns_read=["low", "smoke", "age", "lwt", "race", "ptl", "ht", "ui"],
            seed=20260101,
            iterations=5,
        ),
        participants=tree.Participants(
            read=214,
            exclusions=[
                tree.Exclusion(reason="Twin birth", count=11, remaining=203),
                tree.Exclusion(reason="Born abroad", count=7, remaining=196),
            ],
            eligible=196,
            incomplete=7,
            analysed=189,
            events=59,
            non_events=130,
            crude_rows={"smoke": 196, "lwt": 189},
            missing=[
                tree.MissingVariable(variable="lwt", label=LABELS["lwt"], count=7, percent=100 * 7 / 196)
            ],
            patterns=[tree.MissingPattern(variables=["lwt"], count=7)],
            missing_associations=[
                tree.MissingAssociation(
                    variable="lwt",
                    events_incomplete=2,
                    incomplete=7,
                    events_complete=59,
                    complete=189,
                    odds_ratio=0.8813559322,
                    lower=0.1660,
                    upper=4.6796,
                    p_value=1.0,
                    test="Fisher",
                )
            ],
        ),
        audit=tree.Audit(levels=levels),
        descriptives=tree.Descriptives(
            by_outcome=descriptives(found, "low", 7), by_exposure=[descriptives(found, "smoke", 7)]
        ),
        tables=[fourfold()],
        estimates=estimates(found),
        term_tests=tests,
        model=model(prediction),
        discrimination=discrimination(),
        calibration=calibration(),
        risk_distribution=bins(),
        sample_size=tree.SampleSize(
            candidate_parameters=8,
            fitted_parameters=8,
            events_per_parameter=59 / 8,
            shrinkage=CASE["heuristic_shrinkage"],
            r_squared=0.125,
            criteria=[
                tree.SampleSizeCriterion(id="c1", required=536, shortfall=347),
                tree.SampleSizeCriterion(id="c2", required=244, shortfall=55),
                tree.SampleSizeCriterion(id="c3", required=330, shortfall=141),
                tree.SampleSizeCriterion(id="c4", required=402, shortfall=213),
            ],
            required=536,
            shortfall=347,
        ),
        influence=tree.Influence(
            largest_leverage=influence["max_leverage"],
            mean_leverage=9 / 189,
            high_leverage=9,
            largest_pearson=influence["max_abs_pearson_residual"],
            largest_deviance_residual=influence["max_abs_deviance_residual"],
            large_residuals=5,
            largest_cook=influence["max_cook_distance"],
            terms=[
                tree.InfluenceTerm(
                    parameter="smoke",
                    term="smoke",
                    largest_change=influence["max_abs_dfbeta_over_se"][at],
                    largest_change_refitted=0.26,
                    crosses_one=False,
                )
            ],
        ),
        collinearity=tree.Collinearity(
            gvif=[
                tree.Gvif(
                    term=one["term"],
                    label=LABELS[one["term"]],
                    df=one["df"],
                    gvif=one["gvif"],
                    scaled=one["gvif_scaled"],
                )
                for one in inflation["gvif"]
            ],
            condition_index=inflation["max_condition_index"],
        ),
        curves=[],
        outcome_by_quantity=[quantity_curve()],
        findings=[],
        cautions=[],
    )


def prediction() -> tree.Results:
    """The same data read as the development of a prediction model."""
    return cohort(prediction=True)


def case_control() -> tree.Results:
    """The same rows as if cases and controls had been sampled apart."""
    results = cohort()
    table = replace(
        results.tables[0], risk_exposed=None, risk_unexposed=None, risk_ratio=None, risk_difference=None
    )
    fitted_model = results.model
    assert fitted_model.covariance is not None
    assert results.calibration is not None
    return replace(
        results,
        study=replace(
            results.study, design="case-control", title="What went with low birth weight, Tarn Hollow"
        ),
        tables=[table],
        descriptives=replace(results.descriptives, by_exposure=[]),
        model=replace(
            fitted_model,
            parameters=fitted_model.parameters[1:],
            terms=fitted_model.terms[1:],
            coding=fitted_model.coding[1:],
            coefficients=fitted_model.coefficients[1:],
            covariance=[row[1:] for row in fitted_model.covariance[1:]],
            withheld="the intercept reflects sampling",
        ),
        calibration=replace(
            results.calibration,
            brier=None,
            scaled_brier=None,
            spiegelhalter_z=None,
            spiegelhalter_p=None,
            curve=[],
            withheld="case-control",
            groups=[
                replace(
                    group, mean_risk=None, proportion=None, lower=None, upper=None, lowest=None, highest=None
                )
                for group in results.calibration.groups
            ],
        ),
        risk_distribution=[],
        sample_size=None,
    )


def cross_sectional() -> tree.Results:
    results = cohort()
    return replace(results, study=replace(results.study, design="cross-sectional"))


def separated() -> tree.Results:
    """No event among the unexposed: an odds ratio without upper bound."""
    results = cohort()
    table = replace(
        results.tables[0],
        a=12,
        b=48,
        c=0,
        d=36,
        odds_ratio=None,
        risk_ratio=None,
        note="zero cell",
        risk_unexposed=tree.Interval(estimate=0.0, lower=0.0, upper=0.0964),
        risk_exposed=tree.Interval(estimate=0.2, lower=0.1183, upper=0.3176),
    )

    def without(found: tree.Estimate) -> tree.Estimate:
        if found.term != "smoke":
            return found
        return replace(
            found,
            events=12,
            total=60,
            log_odds_ratio=None,
            standard_error=None,
            odds_ratio=None,
            lower=2.31,
            upper=None,
            note="separated upward",
            p_value=0.0006,
        )

    return replace(
        results,
        tables=[table],
        estimates=tree.Estimates(
            crude=[without(one) for one in results.estimates.crude],
            adjusted=[without(one) for one in results.estimates.adjusted],
        ),
        model=replace(results.model, separated=["smoke"], separation="quasi-complete"),
    )


def hidden() -> tree.Results:
    """A small cell, and what the hiding pass takes with it."""
    results = cohort()
    small = {
        "a": "small",
        "b": "subtraction",
        "c": "subtraction",
        "d": "subtraction",
        "risk_exposed": "derived",
        "risk_unexposed": "derived",
        "odds_ratio": "derived",
        "risk_ratio": "derived",
        "risk_difference": "derived",
        "chi_squared": "derived",
        "fisher_p": "derived",
    }
    table = replace(
        results.tables[0],
        a=None,
        b=None,
        c=None,
        d=None,
        risk_exposed=None,
        risk_unexposed=None,
        odds_ratio=None,
        risk_ratio=None,
        risk_difference=None,
        chi_squared=None,
        chi_squared_p=None,
        fisher_p=None,
        hidden=small,
    )

    def veiled(found: tree.Estimate, with_ratio: bool) -> tree.Estimate:
        if found.term != "smoke":
            return found
        veil = replace(found, events=None, total=None, hidden={"events": "small", "total": "subtraction"})
        if not with_ratio:
            return veil
        return replace(
            veil,
            odds_ratio=None,
            log_odds_ratio=None,
            standard_error=None,
            lower=None,
            upper=None,
            p_value=None,
            note="hidden",
            hidden={**veil.hidden, "odds_ratio": "derived", "p_value": "derived"},
        )

    return replace(
        results,
        tables=[table],
        estimates=tree.Estimates(
            crude=[veiled(one, True) for one in results.estimates.crude],
            adjusted=[veiled(one, False) for one in results.estimates.adjusted],
        ),
    )


def shaped() -> tree.Results:
    """Weight as a spline: contrasts, curve and a test of non-linearity."""
    results = cohort()
    spline = CASE["spline_lwt"][1]
    curve = odds_ratio_curve()
    changed = [
        replace(one, shape="spline", knots=curve.knots, reference="130", per=None)
        if one.name == "lwt"
        else one
        for one in results.variables
    ]
    pick = next(one for one in spline["curve"] if one["value"] == 110)

    def contrast(found: tree.Estimate) -> tree.Estimate:
        if found.term != "lwt":
            return found
        return replace(
            found,
            per=None,
            odds_ratio=pick["odds_ratio"],
            lower=pick["lower"],
            upper=pick["upper"],
            log_odds_ratio=pick["log_odds_ratio"],
            contrast=[130.0, 110.0],
        )

    extra = tree.TermTest(
        term="lwt",
        label=LABELS["lwt"],
        df=spline["nonlinearity_df"],
        statistic=spline["nonlinearity_likelihood_ratio"],
        p_value=spline["nonlinearity_p"],
        test="likelihood ratio",
        part="non-linearity",
    )
    return replace(
        results,
        variables=changed,
        curves=[curve],
        term_tests=[*results.term_tests, extra],
        estimates=tree.Estimates(
            crude=[contrast(one) for one in results.estimates.crude],
            adjusted=[contrast(one) for one in results.estimates.adjusted],
        ),
    )


def noticed(results: tree.Results) -> tree.Results:
    """The same results with everything that the catalogue notices in them, and their cautions."""
    study = results.study
    return replace(
        results,
        findings=catalogue.notice(results),
        cautions=cautions.for_study(study.design, study.purpose),
    )
