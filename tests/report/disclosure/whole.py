"""A large study with every part of the tree filled, and no small count anywhere."""

from __future__ import annotations

from dataclasses import replace

from tests.report.disclosure.study import Shape, rows_of, tree_of

from fourfold.results import tree

SHAPE = Shape(people=6000, levels=(2, 3), quantities=1, missing=0.03, event=0.3, excluded=40)


def whole() -> tree.Results:
    """Nothing in it is to be hidden at a limit of five."""
    rows = [row for row in rows_of(SHAPE, 7) if list(row.values()).count(None) < 2]
    plain = tree_of(SHAPE, rows)
    n, events = plain.model.n, plain.model.events
    assert n is not None
    assert events is not None
    sizes = [n // 5] * 4 + [n - 4 * (n // 5)]
    observed = [events // 10, events // 8, events // 6, events // 5]
    observed.append(events - sum(observed))
    return replace(
        plain,
        audit=replace(
            plain.audit,
            implausible=[
                tree.ImplausibleValues(
                    variable="q0", below=12, above=30, lowest=3.25, highest=131.75, limits=[10.0, 90.0]
                )
            ],
            suspected_codes=[tree.SuspectedCode(variable="q0", value=999.0, count=41)],
            date_order=[tree.DateOrder(covariate="seen", outcome="died", count=22)],
        ),
        model=replace(
            plain.model,
            parameters=["(intercept)", "c0", "c1: l1", "c1: l2", "q0"],
            terms=["(intercept)", "c0", "c1", "c1", "q0"],
            coding=["", "", "", "", ""],
            coefficients=[-1.25, 0.4375, 0.125, 0.0625, 0.03125],
            covariance=[[0.01 * (1 + (i == k)) for k in range(5)] for i in range(5)],
            log_likelihood=-3000.5, null_log_likelihood=-3100.25, deviance=6001.0, aic=6011.0, bic=6044.0,
            likelihood_ratio=199.5, likelihood_ratio_df=4, likelihood_ratio_p=1e-40,
            r_squared=tree.RSquared(cox_snell=0.03, nagelkerke=0.05, mcfadden=0.03, tjur=0.04),
        ),
        discrimination=tree.Discrimination(
            auc=0.71875, standard_error=0.01, lower=0.70, upper=0.73, method="DeLong, logit scale",
            curve=[
                tree.RocPoint(specificity=1 - k * 100 / (n - events), sensitivity=min(1.0, k * 60 / events))
                for k in range(30)
            ]
            + [tree.RocPoint(specificity=0.0, sensitivity=1.0)],
        ),
        calibration=tree.Calibration(
            basis="fitting data", brier=0.19, scaled_brier=0.05, spiegelhalter_z=0.5, spiegelhalter_p=0.6,
            in_the_large=None, slope=None,
            groups=[
                tree.CalibrationGroup(
                    n=size, expected=seen + 0.5, observed=seen, mean_risk=(seen + 0.5) / size,
                    proportion=seen / size, lower=0.1, upper=0.5, lowest=0.1 * k, highest=0.1 * k + 0.09,
                )
                for k, (size, seen) in enumerate(zip(sizes, observed, strict=True))
            ],
            hosmer_lemeshow=tree.HosmerLemeshow(
                statistic=7.5, df=3, p_value=0.06, groups=5, rule="equal groups",
                by_groups=[tree.HosmerLemeshowRow(groups=5, statistic=7.5, df=3, p_value=0.06)],
            ),
            curve=[tree.CurvePoint(x=0.1, y=0.1, lower=0.05, upper=0.15)], curve_method="local",
        ),
        sample_size=tree.SampleSize(
            candidate_parameters=4, fitted_parameters=4, events_per_parameter=events / 4, shrinkage=0.98,
            r_squared=0.03, criteria=[tree.SampleSizeCriterion(id="B1", required=900, shortfall=0)],
            required=900, shortfall=0,
        ),
        influence=tree.Influence(
            largest_leverage=0.02, mean_leverage=5 / n, high_leverage=60, largest_pearson=3.0,
            largest_deviance_residual=2.5, large_residuals=50, largest_cook=0.03,
            terms=[
                tree.InfluenceTerm(
                    parameter="c0", term="c0", largest_change=0.1, largest_change_refitted=0.1,
                    crosses_one=False,
                )
            ],
        ),
        outcome_by_quantity=[
            tree.OutcomeByQuantity(
                term="q0", label="Q0", unit=None, curve=[tree.CurvePoint(x=1, y=0.3, lower=0.2, upper=0.4)],
                bins=[
                    tree.QuantityBin(
                        lower=10.0 * k, upper=10.0 * (k + 1), mean=10.0 * k + 5, events=seen, total=size,
                        proportion=seen / size, proportion_lower=0.1, proportion_upper=0.5,
                    )
                    for k, (size, seen) in enumerate(zip(sizes, observed, strict=True))
                ],
            )
        ],
        findings=[
            tree.Finding(
                id="COD-sparse-level", grade="concern", section="results", source="",
                values={"found": [{"variable": "c1", "level": "l2", "events": 31, "non_events": 77}]},
                about=["c1"],
            ),
            tree.Finding(
                id="MIS-dropped", grade="concern", section="participants", source="",
                values={"incomplete": 700, "eligible": len(rows), "share": 12.0},
            ),
        ],
    )  # fmt: skip
