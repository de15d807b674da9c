"""Read the description and audit the data; fit nothing."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path

from fourfold.data.prepare import prepare
from fourfold.description.read import Loaded, load
from fourfold.findings import catalogue, cautions
from fourfold.pipeline import descriptives, provenance, tables
from fourfold.pipeline.analyse import analysis_of, study_of
from fourfold.pipeline.progress import Progress, stage
from fourfold.report import disclosure
from fourfold.results import tree

BEFORE_FITTING = ("DAT", "FLW", "MIS", "COD", "DSN", "ADJ", "SEL", "CAU")
"""Families of findings that the rows and the description alone can give."""


@dataclass(frozen=True, slots=True)
class Checked:
    """What the audit found; small counts are hidden as in a report."""

    results: tree.Results

    @property
    def serious(self) -> list[tree.Finding]:
        return [finding for finding in self.results.findings if finding.grade == "serious"]


def check(study: Path, progress: Progress, *, allow_outside: bool = False) -> Checked:
    """Read, code and audit.

    Raises
    ------
    DescriptionError, DataError
        If the description or the data are not as they must be.
    """
    with stage(progress, "reading the description"):
        loaded = load(study, allow_outside=allow_outside)
    with stage(progress, "reading and checking the data"):
        return Checked(disclosure.hide(audited(loaded)))


def audited(loaded: Loaded) -> tree.Results:
    """The results tree as far as it goes without a fit, with what was noticed so far."""
    prepared = prepare(loaded)
    header, analysis = study_of(loaded), analysis_of(loaded)
    results = tree.Results(
        format=1,
        study=header,
        variables=prepared.variables,
        analysis=analysis,
        provenance=provenance.provenance_of(loaded, prepared, None),
        participants=prepared.participants,
        audit=prepared.audit,
        descriptives=descriptives.descriptives_of(prepared, header.design),
        tables=tables.fourfold_tables(
            prepared.analysis, prepared.outcome, prepared.variables, header.design, analysis
        ),
        estimates=tree.Estimates(),
        term_tests=[],
        model=_no_model(prepared.participants),
        discrimination=None,
        calibration=None,
        risk_distribution=[],
        sample_size=None,
        influence=None,
        collinearity=None,
        curves=[],
        outcome_by_quantity=[],
        findings=[],
        cautions=cautions.for_study(header.design, header.purpose),
    )
    noticed = [
        finding for finding in catalogue.notice(results) if finding.id.partition("-")[0] in BEFORE_FITTING
    ]
    return replace(results, findings=noticed)


def _no_model(participants: tree.Participants) -> tree.Model:
    return tree.Model(
        parameters=[], terms=[], coding=[], coefficients=[], covariance=None,
        n=participants.analysed, events=participants.events,
        log_likelihood=None, null_log_likelihood=None, deviance=None, aic=None, bic=None,
        likelihood_ratio=None, likelihood_ratio_df=None, likelihood_ratio_p=None,
        converged=True, iterations=0, decrement=None, estimator="none", r_squared=None,
    )  # fmt: skip
