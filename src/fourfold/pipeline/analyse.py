"""Description and data become results: prepare, fit, assess, notice, hide."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from fourfold.data import design as data_design
from fourfold.data.prepare import Prepared, prepare
from fourfold.description.read import Loaded
from fourfold.findings import catalogue, cautions
from fourfold.pipeline import descriptives, estimates, provenance, shapes, tables, trust
from fourfold.pipeline.model_fit import FittedModel, fit_model
from fourfold.pipeline.progress import Progress, stage
from fourfold.report import disclosure
from fourfold.results import tree

MODEL_ROLES = ("exposure", "predictor", "covariate")


def analyse(loaded: Loaded, progress: Progress) -> tree.Results:
    """Run the whole analysis of a description; small counts are hidden in what comes back.

    Raises
    ------
    DataError, EstimationError
        If the data do not fit the description, or nothing can be fitted.
    """
    with stage(progress, "reading and checking the data"):
        prepared = prepare(loaded)
    return disclosure.hide(results_of(loaded, prepared, progress))


def results_of(loaded: Loaded, prepared: Prepared, progress: Progress) -> tree.Results:
    """The full tree, nothing hidden yet. Never written or rendered as it is."""
    description = loaded.description
    analysis = analysis_of(loaded)
    rows, event = prepared.analysis, prepared.outcome
    in_model = [variable for variable in prepared.variables if variable.role in MODEL_ROLES]
    with stage(progress, "fitting the adjusted model"):
        built = data_design.build(rows, in_model)
        adjusted = fit_model(built, event, rows.counts)
        variables = _with_knots(prepared.variables, adjusted)
        compare = shapes.comparisons(variables, description, rows)
        adjusted_rows = estimates.estimates_of(adjusted, rows, variables, analysis, compare)
        term_tests = estimates.term_tests_of(adjusted, variables, analysis)
    with stage(progress, "fitting the crude models"):
        crude_rows: list[tree.Estimate] = []
        for variable in in_model:
            crude = fit_model(built.subset([variable.name]), event, rows.counts)
            crude_rows += estimates.estimates_of(crude, rows, variables, analysis, compare)
    with stage(progress, "assessing the model"):
        log_odds = adjusted.linear_predictor()
        design = description.study.design
        groups = (
            description.assessment.groups if "groups" in description.assessment.model_fields_set else None
        )
        results = tree.Results(
            format=1,
            study=study_of(loaded),
            variables=variables,
            analysis=analysis,
            provenance=provenance.provenance_of(loaded, prepared, adjusted.fit.iterations),
            participants=prepared.participants,
            audit=prepared.audit,
            descriptives=descriptives.descriptives_of(prepared, design),
            tables=tables.fourfold_tables(rows, event, variables, design, analysis),
            estimates=tree.Estimates(crude=crude_rows, adjusted=adjusted_rows),
            term_tests=term_tests,
            model=trust.model_of(adjusted, log_odds, design),
            discrimination=trust.discrimination_of(adjusted, log_odds, analysis),
            calibration=trust.calibration_of(adjusted, log_odds, analysis, design, groups),
            risk_distribution=trust.risk_distribution_of(adjusted, log_odds, design),
            sample_size=trust.sample_size_of(adjusted, analysis, design),
            influence=trust.influence_of(adjusted, log_odds, variables, analysis),
            collinearity=trust.collinearity_of(adjusted, variables),
            curves=shapes.odds_ratio_curves(adjusted, variables, rows, analysis),
            outcome_by_quantity=shapes.outcome_by_quantity(
                rows, event, variables, analysis, description.analysis.seed
            ),
            findings=[],
            cautions=cautions.for_study(design, description.study.purpose),
        )
        return replace(results, findings=catalogue.notice(results))


def analysis_of(loaded: Loaded) -> tree.Analysis:
    """The choices of the description, as the report names them."""
    description = loaded.description
    follow_up, sampling, selection = description.follow_up, description.sampling, description.selection
    return tree.Analysis(
        estimator=description.analysis.estimator,
        intervals=description.analysis.intervals,
        confidence=float(description.analysis.confidence),
        standard_errors=description.analysis.standard_errors,
        missing_data=description.analysis.missing_data,
        groups=description.assessment.groups,
        smallest_count=description.disclosure.smallest_count,
        hide_zero=description.disclosure.hide_zero,
        show_people=description.disclosure.show_people,
        counts_variable=description.data.counts,
        candidates=selection.candidates if selection else None,
        selection=selection.method if selection else None,
        clusters_stated=sampling.clusters if sampling else None,
        weights_stated=sampling.weights if sampling else None,
        matched_on=list(sampling.matched_on) if sampling else [],
        follow_up=list(follow_up.statement) if follow_up else [],
        follow_up_variable=follow_up.variable if follow_up else None,
        exposure_measured=follow_up.exposure_measured if follow_up else None,
        language=description.report.language,
    )


def study_of(loaded: Loaded) -> tree.Study:
    """The heading of the study."""
    header = loaded.description.study
    period = header.period
    return tree.Study(
        title=header.title,
        design=header.design,
        purpose=header.purpose,
        setting=header.setting,
        period_from=period.from_.isoformat() if period and period.from_ else None,
        period_to=period.to.isoformat() if period and period.to else None,
        authors=list(header.authors),
        stated=dict(header.stated),
    )


def _with_knots(variables: Sequence[tree.Variable], model: FittedModel) -> list[tree.Variable]:
    knots = {term.variable: [float(knot) for knot in term.knots] for term in model.design.terms}
    return [
        replace(variable, knots=knots[variable.name]) if knots.get(variable.name) else variable
        for variable in variables
    ]
