"""Results trees to render: the birth-weight data and reference values of tests/reference.

Estimates, intervals and tests are those of birthwt.json; counts are counted from birthwt.csv.
The study around them is invented.
"""

from __future__ import annotations

import csv
import itertools
import json
import math
from collections.abc import Callable, Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np

from fourfold.results import tree

REFERENCE = Path(__file__).parents[1] / "reference"
CASE: dict[str, Any] = json.loads((REFERENCE / "birthwt.json").read_text(encoding="utf-8"))
LABELS = {
    "low": "Low birth weight",
    "smoke": "Mother smoked",
    "age": "Mother’s age",
    "lwt": "Mother’s weight",
    "race": "Group",
    "ptl": "Earlier preterm labours",
    "ht": "History of hypertension",
    "ui": "Uterine irritability",
}
LEVELS = ["white", "black", "other"]
DESCRIPTION = """study:
  title: Smoking and low birth weight, Tarn Valley
  design: cohort   # <b>not markup</b> {{ not a template }}
outcome: low
"""


def rows() -> list[dict[str, str]]:
    with (REFERENCE / "birthwt.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


ROWS = rows()
Test = Callable[[dict[str, str]], bool]


def count(*tests: Test) -> int:
    return sum(all(test(row) for test in tests) for row in ROWS)


def is_(name: str, value: str) -> Test:
    return lambda row: row[name] == value


EVENT, NO_EVENT = is_("low", "yes"), is_("low", "no")


def variables(prediction: bool = False) -> list[tree.Variable]:
    lead, rest = ("predictor", "predictor") if prediction else ("exposure", "covariate")
    binary: dict[str, Any] = {"kind": "binary", "present": "yes", "reference": "no", "levels": ["no", "yes"]}
    return [
        tree.Variable(name="low", label=LABELS["low"], role="outcome", **binary),
        tree.Variable(name="smoke", label=LABELS["smoke"], role=lead, **binary),
        tree.Variable(
            name="age",
            label=LABELS["age"],
            role=rest,
            kind="quantity",
            unit="years",
            per=5.0,
            reason="Older mothers smoke less",
            planned=True,
        ),
        tree.Variable(name="lwt", label=LABELS["lwt"], role=rest, kind="quantity", unit="pounds", per=10.0),
        tree.Variable(
            name="race",
            label=LABELS["race"],
            role=rest,
            kind="category",
            levels=LEVELS,
            reference="white",
            reference_rule="most frequent",
        ),
        tree.Variable(name="ptl", label=LABELS["ptl"], role=rest, kind="quantity", per=1.0),
        tree.Variable(name="ht", label=LABELS["ht"], role=rest, **binary),
        tree.Variable(name="ui", label=LABELS["ui"], role=rest, **binary),
    ]


PARAMETERS = {
    "smokeyes": ("smoke", None),
    "age": ("age", None),
    "lwt": ("lwt", None),
    "raceblack": ("race", "black"),
    "raceother": ("race", "other"),
    "ptl": ("ptl", None),
    "htyes": ("ht", None),
    "uiyes": ("ui", None),
}


def estimate(
    found: Sequence[tree.Variable], parameter: str, b: float, se: float, lower: float, upper: float, p: float
) -> tree.Estimate:
    term, level = PARAMETERS[parameter]
    variable = next(one for one in found if one.name == term)
    per = variable.per if variable.kind == "quantity" else None
    scale = per or 1.0
    inside: Test = is_(term, level or "yes") if variable.kind != "quantity" else lambda row: True
    return tree.Estimate(
        term=term,
        label=variable.label,
        role=variable.role,
        level=level,
        reference=variable.reference,
        per=per,
        unit=variable.unit,
        events=count(inside, EVENT),
        total=count(inside),
        log_odds_ratio=b * scale,
        standard_error=se * scale,
        odds_ratio=math.exp(b * scale),
        lower=math.exp(lower * scale),
        upper=math.exp(upper * scale),
        p_value=p,
        interval="profile likelihood",
        test="likelihood ratio",
    )


def estimates(found: Sequence[tree.Variable]) -> tree.Estimates:
    tests = {test["term"]: test["p_value"] for test in CASE["term_tests"]}
    adjusted = []
    for parameter, (term, _) in PARAMETERS.items():
        at = CASE["parameters"].index(parameter)
        p = CASE["wald_p"][at] if term == "race" else tests[term]
        adjusted.append(
            estimate(
                found,
                parameter,
                CASE["coefficients"][at],
                CASE["standard_errors"][at],
                CASE["profile_lower"][at],
                CASE["profile_upper"][at],
                p,
            )
        )
    crude = [
        estimate(
            found,
            parameter,
            one["coefficients"][at],
            one["standard_errors"][at],
            one["profile_lower"][at],
            one["profile_upper"][at],
            one["wald_p"][at],
        )
        for one in CASE["crude"]
        for at, parameter in enumerate(one["parameters"])
        if parameter in PARAMETERS
    ]
    return tree.Estimates(crude=crude, adjusted=adjusted)


def interval(value: float, limits: Sequence[float]) -> tree.Interval:
    return tree.Interval(estimate=value, lower=limits[0], upper=limits[1], method="")


def fourfold() -> tree.FourfoldTable:
    found = CASE["fourfold_smoke"]
    (a, b), (c, d) = found["table"]
    return tree.FourfoldTable(
        exposure="smoke",
        label=LABELS["smoke"],
        exposed_label="yes",
        unexposed_label="no",
        a=a,
        b=b,
        c=c,
        d=d,
        risk_exposed=interval(found["risk_exposed"], found["risk_exposed_wilson"]),
        risk_unexposed=interval(found["risk_unexposed"], found["risk_unexposed_wilson"]),
        odds_ratio=interval(found["odds_ratio"], found["woolf_interval"]),
        risk_ratio=interval(found["risk_ratio"], found["risk_ratio_interval"]),
        risk_difference=interval(found["risk_difference"], found["risk_difference_newcombe"]),
        chi_squared=found["chi_squared"],
        chi_squared_p=found["chi_squared_p"],
        fisher_p=found["fisher_p"],
        smallest_expected=23.1,
    )


def descriptives(found: Sequence[tree.Variable], by: str, missing: int) -> tree.DescriptiveTable:
    groups = [("yes", is_(by, "yes")), ("no", is_(by, "no"))]
    everyone: list[tuple[str, Test]] = [("overall", lambda row: True), *groups]
    described = []
    for variable in found:
        if variable.name == by:
            continue
        levels = ["yes"] if variable.kind == "binary" else variable.levels or [None]
        for level in levels:
            cells = [summary(variable, level, name, test, missing) for name, test in everyone]
            described.append(
                tree.Descriptive(
                    variable=variable.name,
                    label=variable.label,
                    kind=variable.kind,
                    level=level,
                    unit=variable.unit,
                    decimals=0,
                    overall=cells[0],
                    groups=cells[1:],
                )
            )
    return tree.DescriptiveTable(
        by=by,
        by_label=LABELS[by],
        groups=["yes", "no"],
        group_sizes=[count(test) for _, test in groups],
        rows=described,
    )


def summary(
    variable: tree.Variable, level: str | None, group: str, test: Test, missing: int
) -> tree.DescriptiveCell:
    left_out = missing if variable.name == "lwt" and group == "overall" else 0
    if level is not None:
        n, total = count(test, is_(variable.name, level)), count(test)
        return tree.DescriptiveCell(
            group=group, count=n, total=total, percent=100 * n / total, missing=left_out
        )
    x = np.array([float(row[variable.name]) for row in ROWS if test(row)])
    low, middle, high = (float(q) for q in np.quantile(x, [0.25, 0.5, 0.75]))
    return tree.DescriptiveCell(
        group=group,
        total=x.size,
        mean=float(x.mean()),
        sd=float(x.std(ddof=1)),
        median=middle,
        lower_quartile=low,
        upper_quartile=high,
        missing=left_out,
    )


def fitted() -> tuple[np.ndarray, np.ndarray]:
    """Fitted risk and event of each row, by the reference coefficients."""
    columns: list[list[float]] = []
    for row in ROWS:
        columns.append(
            [
                1.0,
                float(row["age"]),
                float(row["lwt"]),
                row["race"] == "black",
                row["race"] == "other",
                row["smoke"] == "yes",
                float(row["ptl"]),
                row["ht"] == "yes",
                row["ui"] == "yes",
            ]
        )
    linear = np.array(columns, dtype=float) @ np.array(CASE["coefficients"])
    return 1 / (1 + np.exp(-linear)), np.array([row["low"] == "yes" for row in ROWS])


def discrimination() -> tree.Discrimination:
    risk, event = fitted()
    cuts = np.unique(risk)
    curve = [
        tree.RocPoint(
            specificity=float(np.mean(risk[~event] < cut)), sensitivity=float(np.mean(risk[event] >= cut))
        )
        for cut in cuts[::2]
    ]
    found = CASE["discrimination"]
    return tree.Discrimination(
        auc=found["auc"],
        standard_error=found["standard_error"],
        lower=found["logit_interval"][0],
        upper=found["logit_interval"][1],
        method="DeLong, logit scale",
        curve=curve,
    )


def calibration() -> tree.Calibration:
    risk, _ = fitted()
    table = CASE["hosmer_lemeshow"]["table"]
    order = np.argsort(risk, kind="stable")
    groups, start = [], 0
    for group in table:
        inside = order[start : start + group["n"]]
        start += group["n"]
        n, k = group["n"], group["observed"]
        z = 1.959963984540054
        middle, spread = k / n + z * z / (2 * n), z * math.sqrt(k / n * (1 - k / n) / n + z * z / (4 * n * n))
        groups.append(
            tree.CalibrationGroup(
                n=n,
                expected=group["expected"],
                observed=k,
                mean_risk=group["expected"] / n,
                proportion=k / n,
                lower=max(0.0, (middle - spread) / (1 + z * z / n)),
                upper=(middle + spread) / (1 + z * z / n),
                lowest=float(risk[inside].min()),
                highest=float(risk[inside].max()),
            )
        )
    test = CASE["hosmer_lemeshow"]
    spread_x = np.linspace(0.05, 0.7, 40)
    return tree.Calibration(
        basis="fitting data",
        brier=CASE["brier"],
        scaled_brier=CASE["scaled_brier"],
        spiegelhalter_z=CASE["calibration"]["spiegelhalter_z"],
        spiegelhalter_p=CASE["calibration"]["spiegelhalter_p"],
        in_the_large=None,
        slope=None,
        groups=groups,
        hosmer_lemeshow=tree.HosmerLemeshow(
            statistic=test["statistic"],
            df=test["df"],
            p_value=test["p_value"],
            groups=10,
            rule="tenths of fitted risk, ties together",
            by_groups=[
                tree.HosmerLemeshowRow(
                    groups=one["groups"], statistic=one["statistic"], df=one["df"], p_value=one["p_value"]
                )
                for one in CASE["hosmer_lemeshow_by_groups"]
            ],
        ),
        curve=[
            tree.CurvePoint(
                x=float(x),
                y=float(x + 0.03 * math.sin(9 * x)),
                lower=max(0.0, float(x) - 0.1),
                upper=min(1.0, float(x) + 0.12),
            )
            for x in spread_x
        ],
        curve_method="logit spline with four knots",
    )


def bins() -> list[tree.RiskBin]:
    risk, event = fitted()
    edges = np.linspace(0, 1, 21)
    return [
        tree.RiskBin(
            lower=float(low),
            upper=float(high),
            events=int(np.sum(event & (risk >= low) & (risk < high))),
            non_events=int(np.sum(~event & (risk >= low) & (risk < high))),
        )
        for low, high in itertools.pairwise(edges)
    ]


def model(prediction: bool) -> tree.Model:
    terms = ["(intercept)", *(PARAMETERS[name][0] for name in CASE["parameters"][1:])]
    levels = [None, *(PARAMETERS[name][1] for name in CASE["parameters"][1:])]
    names = [term if level is None else f"{term}: {level}" for term, level in zip(terms, levels, strict=True)]
    squared = CASE["r_squared"]
    return tree.Model(
        parameters=names,
        terms=terms,
        coding=[
            "1 in every row",
            "value in years",
            "value in pounds",
            "1 for black, 0 otherwise; reference white",
            "1 for other, 0 otherwise; reference white",
            "1 for yes, 0 for no",
            "value",
            "1 for yes, 0 for no",
            "1 for yes, 0 for no",
        ],
        coefficients=list(CASE["coefficients"]),
        covariance=[list(row) for row in CASE["covariance"]],
        n=189,
        events=59,
        log_likelihood=CASE["log_likelihood"],
        null_log_likelihood=CASE["null_log_likelihood"],
        deviance=CASE["deviance"],
        aic=CASE["aic"],
        bic=CASE["bic"],
        likelihood_ratio=CASE["model_likelihood_ratio"],
        likelihood_ratio_df=8,
        likelihood_ratio_p=CASE["model_p"],
        converged=True,
        iterations=5,
        decrement=1e-15,
        estimator="maximum likelihood",
        r_squared=tree.RSquared(
            cox_snell=squared["cox_snell"],
            nagelkerke=squared["nagelkerke"],
            mcfadden=squared["mcfadden"],
            tjur=squared["tjur"],
        ),
    )


def quantity_curve() -> tree.OutcomeByQuantity:
    x = np.linspace(85, 240, 50)
    y = 0.5 - 0.0025 * (x - 85)
    weight = np.array([float(row["lwt"]) for row in ROWS])
    edges = [80, 105, 120, 130, 155, 251]
    binned = []
    for low, high in itertools.pairwise(edges):
        inside = (weight >= low) & (weight < high)
        k = int(np.sum(inside & np.array([row["low"] == "yes" for row in ROWS])))
        n = int(inside.sum())
        binned.append(
            tree.QuantityBin(
                lower=float(low),
                upper=float(high),
                mean=float(weight[inside].mean()),
                events=k,
                total=n,
                proportion=k / n,
                proportion_lower=max(0.0, k / n - 0.12),
                proportion_upper=min(1.0, k / n + 0.15),
            )
        )
    return tree.OutcomeByQuantity(
        term="lwt",
        label=LABELS["lwt"],
        unit="pounds",
        curve=[
            tree.CurvePoint(x=float(a), y=float(b), lower=float(b) - 0.08, upper=float(b) + 0.09)
            for a, b in zip(x, y, strict=True)
        ],
        bins=binned,
    )


def odds_ratio_curve() -> tree.OddsRatioCurve:
    found = CASE["spline_lwt"][1]
    points = sorted(
        [(one["value"], one["odds_ratio"], one["lower"], one["upper"]) for one in found["curve"]]
        + [(float(found["reference"]), 1.0, 1.0, 1.0)]
    )
    return tree.OddsRatioCurve(
        term="lwt",
        label=LABELS["lwt"],
        unit="pounds",
        shape="spline",
        reference=float(found["reference"]),
        knots=[float(knot) for knot in found["knots"]],
        curve=[tree.CurvePoint(x=float(x), y=y, lower=low, upper=high) for x, y, low, high in points],
    )


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
