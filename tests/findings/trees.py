"""The results of a sound study, about which nothing need be said, and ways to change one part of it.

An invented cohort: do wood stoves go with night coughing? Counts agree with each other; estimates
are of their size. Nothing is computed here: each test states the numbers that its rule looks at.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

from fourfold.findings import release
from fourfold.results import tree

Build = Callable[[], tree.Results]

# Items of STROBE and TRIPOD+AI that the authors answer in the description.
STATED = dict.fromkeys(
    (*release.STROBE_BY_AUTHOR, *release.TRIPOD_BY_AUTHOR, "14"),
    "Told in the protocol of the study.",
)

# Events and non-events: with a stove 190 and 1,010, without 170 and 1,630; by village.
CELLS = {
    "stove": {"yes": (190, 1010), "no": (170, 1630)},
    "village": {"Upper": (190, 1560), "Lower": (170, 1080)},
}


@dataclass(frozen=True)
class Case:
    """Trees on which a finding fires, each with the grade it must have, and trees on which it must not."""

    fires: Sequence[tuple[Build, str]]
    silent: Sequence[Build]


def variables() -> list[tree.Variable]:
    binary: dict[str, Any] = {"kind": "binary", "present": "yes", "reference": "no", "levels": ["no", "yes"]}
    planned: dict[str, Any] = {"planned": True, "reason": "Goes with stoves and with coughing"}
    return [
        tree.Variable(name="cough", label="Night cough within a year", role="outcome", **binary),
        tree.Variable(name="stove", label="Wood stove", role="exposure", planned=True, **binary),
        tree.Variable(
            name="age",
            label="Age",
            role="covariate",
            kind="quantity",
            unit="years",
            shape="spline",
            knots=[32.0, 50.0, 68.0],
            reference="50",
            plausible=[18.0, 100.0],
            **planned,
        ),
        tree.Variable(
            name="village",
            label="Village",
            role="covariate",
            kind="category",
            levels=["Upper", "Lower"],
            reference="Upper",
            **planned,
        ),
    ]


def estimate(term: str, odds: float, error: float, **changes: Any) -> tree.Estimate:
    """An odds ratio with a symmetric profile interval and a P-value of its size."""
    b = math.log(odds)
    variable = next((one for one in variables() if one.name == term), None)
    fields: dict[str, Any] = {
        "term": term,
        "label": variable.label if variable else term,
        "role": variable.role if variable else "exposure",
        "level": None,
        "reference": variable.reference if variable else None,
        "per": None,
        "unit": None,
        "events": 190,
        "total": 1200,
        "log_odds_ratio": b,
        "standard_error": error,
        "odds_ratio": odds,
        "lower": math.exp(b - 1.96 * error),
        "upper": math.exp(b + 1.96 * error),
        "p_value": math.erfc(abs(b / error) / math.sqrt(2)),
        "interval": "profile likelihood",
        "test": "likelihood ratio",
    }
    return tree.Estimate(**{**fields, **changes})


def table(**changes: Any) -> tree.FourfoldTable:
    (a, b), (c, d) = CELLS["stove"].values()
    fields: dict[str, Any] = {
        "exposure": "stove",
        "label": "Wood stove",
        "exposed_label": "yes",
        "unexposed_label": "no",
        "a": a,
        "b": b,
        "c": c,
        "d": d,
        "risk_exposed": tree.Interval(estimate=a / (a + b), lower=0.14, upper=0.18),
        "risk_unexposed": tree.Interval(estimate=c / (c + d), lower=0.08, upper=0.11),
        "odds_ratio": tree.Interval(estimate=a * d / (b * c), lower=1.45, upper=2.25),
        "risk_ratio": tree.Interval(estimate=(a / (a + b)) / (c / (c + d)), lower=1.38, upper=2.03),
        "risk_difference": tree.Interval(estimate=0.064, lower=0.04, upper=0.09),
        "chi_squared": 27.9,
        "chi_squared_p": 1e-7,
        "fisher_p": 1e-7,
        "smallest_expected": 144.0,
    }
    return tree.FourfoldTable(**{**fields, **changes})


def calibration() -> tree.Calibration:
    groups = [
        tree.CalibrationGroup(
            n=300,
            expected=20.0 + 3.6 * place,
            observed=20 + 4 * place,
            mean_risk=0.07 + 0.012 * place,
            proportion=0.07,
            lower=0.05,
            upper=0.1,
            lowest=0.06,
            highest=0.08,
        )
        for place in range(10)
    ]
    return tree.Calibration(
        basis="fitting data",
        brier=0.1,
        scaled_brier=0.03,
        spiegelhalter_z=0.1,
        spiegelhalter_p=0.9,
        in_the_large=None,
        slope=None,
        groups=groups,
        hosmer_lemeshow=tree.HosmerLemeshow(
            statistic=7.0, df=8, p_value=0.54, groups=10, rule="by quantiles"
        ),
        curve=[],
        curve_method="",
    )


def sound_study() -> tree.Results:
    """A cohort of 3,000 in which every rule should keep silent."""
    parameters = ["(intercept)", "stove", "age", "age (2)", "village: Lower"]
    terms = ["(intercept)", "stove", "age", "age", "village"]
    coefficients: list[float | None] = [-2.3, 0.55, 0.02, 0.001, 0.2]
    levels = [
        tree.SparseLevel(
            variable=name, level=level, events=events, non_events=others, reference=level in ("no", "Upper")
        )
        for name, found in CELLS.items()
        for level, (events, others) in found.items()
    ]
    return tree.Results(
        format=1,
        study=tree.Study(
            title="Wood stoves and night coughing in Alder Vale",
            design="cohort",
            purpose="association",
            setting="Two villages",
            period_from="2021-01-01",
            period_to="2022-12-31",
            stated=dict(STATED),
        ),
        variables=variables(),
        analysis=tree.Analysis(
            selection="beforehand", follow_up=["equal"], exposure_measured="at start", candidates=4
        ),
        provenance=tree.Provenance(
            fourfold="0.1.0",
            python="3.11",
            packages={"numpy": "2.4.0"},
            data_file="rows.csv",
            data_sha256="0" * 64,
            description_file="study.yaml",
            description_sha256="1" * 64,
            description="study: {}",
            rows_read=3150,
            columns_read=["person", "cough", "stove", "age", "village"],
            seed=20260101,
        ),
        participants=tree.Participants(
            read=3150,
            exclusions=[
                tree.Exclusion(reason="Moved away", count=90, remaining=3060),
                tree.Exclusion(reason="Under 18", count=60, remaining=3000),
            ],
            eligible=3000,
            incomplete=0,
            analysed=3000,
            events=360,
            non_events=2640,
            crude_rows={"stove": 3000},
            missing=[
                tree.MissingVariable(variable=one.name, label=one.label, count=0, percent=0.0)
                for one in variables()
            ],
        ),
        audit=tree.Audit(levels=levels),
        descriptives=tree.Descriptives(),
        tables=[table()],
        estimates=tree.Estimates(
            crude=[estimate("stove", 1.80, 0.11), estimate("village", 1.29, 0.11, level="Lower")],
            adjusted=[
                estimate("stove", 1.75, 0.11),
                estimate("age", 1.4, 0.1, contrast=[40.0, 60.0]),
                estimate("village", 1.25, 0.12, level="Lower"),
            ],
        ),
        term_tests=[
            tree.TermTest(
                term="age",
                label="Age",
                df=1,
                statistic=0.4,
                p_value=0.53,
                test="likelihood ratio",
                part="non-linearity",
            )
        ],
        model=tree.Model(
            parameters=parameters,
            terms=terms,
            coding=["" for _ in parameters],
            coefficients=coefficients,
            covariance=None,
            n=3000,
            events=360,
            log_likelihood=-1060.0,
            null_log_likelihood=-1101.0,
            deviance=2120.0,
            aic=2130.0,
            bic=2160.0,
            likelihood_ratio=82.0,
            likelihood_ratio_df=4,
            likelihood_ratio_p=1e-16,
            converged=True,
            iterations=5,
            decrement=1e-15,
            estimator="maximum likelihood",
            r_squared=None,
        ),
        discrimination=tree.Discrimination(
            auc=0.64, standard_error=0.015, lower=0.61, upper=0.67, method="DeLong"
        ),
        calibration=calibration(),
        risk_distribution=[],
        sample_size=tree.SampleSize(
            candidate_parameters=4,
            fitted_parameters=4,
            events_per_parameter=90.0,
            shrinkage=78 / 82,
            r_squared=0.026,
            criteria=[tree.SampleSizeCriterion(id="c1", required=1300, shortfall=0)],
            required=1300,
            shortfall=0,
        ),
        influence=tree.Influence(
            largest_leverage=0.02,
            mean_leverage=0.0017,
            high_leverage=20,
            largest_pearson=3.6,
            largest_deviance_residual=2.3,
            large_residuals=30,
            largest_cook=0.01,
            terms=[
                tree.InfluenceTerm(
                    parameter="stove",
                    term="stove",
                    largest_change=0.08,
                    largest_change_refitted=0.08,
                    crosses_one=False,
                )
            ],
        ),
        collinearity=tree.Collinearity(
            gvif=[tree.Gvif(term="stove", label="Wood stove", df=1, gvif=1.02, scaled=1.01)],
            condition_index=9.0,
        ),
        curves=[],
        outcome_by_quantity=[
            tree.OutcomeByQuantity(
                term="age",
                label="Age",
                unit="years",
                curve=[],
                bins=[
                    tree.QuantityBin(
                        lower=low,
                        upper=low + 15.0,
                        mean=low + 7.0,
                        events=90,
                        total=750,
                        proportion=0.12,
                        proportion_lower=0.1,
                        proportion_upper=0.14,
                    )
                    for low in (18.0, 34.0, 50.0, 80.0)
                ],
            )
        ],
        findings=[],
        cautions=[],
    )
