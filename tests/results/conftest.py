"""The smallest tree the types allow."""

from __future__ import annotations

import pytest

from fourfold.results import tree


@pytest.fixture(scope="session")
def smallest() -> tree.Results:
    return tree.Results(
        format=1,
        study=tree.Study(title="Falls, Oxwater", design="cohort", purpose="association"),
        variables=[],
        analysis=tree.Analysis(),
        provenance=tree.Provenance(
            fourfold="0",
            python="3",
            packages={},
            data_file="falls.csv",
            data_sha256=None,
            description_file="falls.yaml",
            description_sha256="0",
            description="",
            rows_read=None,
            columns_read=[],
            seed=1,
        ),
        participants=tree.Participants(
            read=None,
            exclusions=[],
            eligible=None,
            incomplete=None,
            analysed=None,
            events=None,
            non_events=None,
        ),
        audit=tree.Audit(),
        descriptives=tree.Descriptives(),
        tables=[],
        estimates=tree.Estimates(),
        term_tests=[],
        model=tree.Model(
            parameters=[],
            terms=[],
            coding=[],
            coefficients=[],
            covariance=None,
            n=None,
            events=None,
            log_likelihood=None,
            null_log_likelihood=None,
            deviance=None,
            aic=None,
            bic=None,
            likelihood_ratio=None,
            likelihood_ratio_df=None,
            likelihood_ratio_p=None,
            converged=True,
            iterations=0,
            decrement=None,
            estimator="maximum likelihood",
            r_squared=None,
        ),
        discrimination=None,
        calibration=None,
        risk_distribution=[],
        sample_size=None,
        influence=None,
        collinearity=None,
        curves=[],
        outcome_by_quantity=[],
        findings=[],
        cautions=[],
    )
