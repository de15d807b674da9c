"""The fitted model of the sample reports and what is said of it, from birthwt.json."""

from __future__ import annotations

import itertools
import math

import numpy as np
from tests.report.sample_tables import CASE, LABELS, PARAMETERS, ROWS

from fourfold.results import tree


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
