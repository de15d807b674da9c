"""The results tree: everything a report says, as frozen data, and nothing of the rows.

Every rendering is made from this tree alone. Counts that the hiding pass removed are ``None``
and named in the ``hidden`` mapping beside them (field name -> ``small``, ``subtraction`` or
``derived``), so that a reader is told that a number is hidden, never that it is absent.
Numbers are full double precision; what does not exist is ``None``.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

Hidden = dict[str, str]
"""Field name -> why it is hidden: ``small`` (below the limit), ``subtraction`` (would reveal
another), ``derived`` (computed from a hidden count)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Study:
    """What was studied; copied from the description.

    ``design`` is one of cohort, case-control, cross-sectional, survey; ``purpose`` is
    association or prediction. ``stated`` holds free-text answers to checklist items.
    """

    title: str
    design: str
    purpose: str
    setting: str | None = None
    period_from: str | None = None
    period_to: str | None = None
    authors: list[str] = field(default_factory=list)
    stated: dict[str, str] = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Variable:
    """One variable as it was used.

    ``role`` is outcome, exposure, covariate, predictor or other. ``kind`` is quantity, category,
    ordered, binary or date. ``reference_rule`` is None when stated, else the rule that chose it
    (``most frequent``). ``shape`` is linear, quadratic, spline or log2. ``reason``,
    ``planned`` and ``expected`` (``raises`` or ``lowers``) come from the description.
    """

    name: str
    label: str
    role: str
    kind: str
    unit: str | None = None
    per: float | None = None
    levels: list[str] = field(default_factory=list)
    reference: str | None = None
    reference_rule: str | None = None
    present: str | None = None
    shape: str = "linear"
    knots: list[float] = field(default_factory=list)
    derived_from: str | None = None
    cuts: list[float] = field(default_factory=list)
    cuts_chosen: str | None = None
    reason: str | None = None
    planned: bool | None = None
    plausible: list[float] | None = None
    expected: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Analysis:
    """How it was analysed, for the Methods sentences and the labels.

    ``intervals`` is ``profile likelihood`` or ``Wald``; ``test`` is ``likelihood ratio`` or
    ``Wald``; ``confidence`` is in percent.
    """

    estimator: str = "maximum likelihood"
    intervals: str = "profile likelihood"
    confidence: float = 95.0
    standard_errors: str = "model-based"
    missing_data: str = "complete cases"
    groups: int = 10
    smallest_count: int = 5
    hide_zero: bool = False
    show_people: bool = False
    counts_variable: str | None = None
    candidates: int | None = None
    selection: str | None = None
    clusters_stated: str | None = None
    weights_stated: str | None = None
    matched_on: list[str] = field(default_factory=list)
    follow_up: list[str] = field(default_factory=list)
    follow_up_variable: str | None = None
    exposure_measured: str | None = None
    language: str = "en"


@dataclass(frozen=True, slots=True, kw_only=True)
class Provenance:
    """Where the numbers came from. Hashes are None where they would identify a tiny file."""

    fourfold: str
    python: str
    packages: dict[str, str]
    data_file: str
    data_sha256: str | None
    description_file: str
    description_sha256: str
    description: str
    rows_read: int | None
    columns_read: list[str]
    seed: int
    engine: str = "memory"
    iterations: int | None = None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Exclusion:
    reason: str
    count: int | None
    remaining: int | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class MissingVariable:
    """Missing values of one variable among the rows left after the exclusions."""

    variable: str
    label: str
    count: int | None
    percent: float | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class MissingPattern:
    """Rows that lack exactly these variables."""

    variables: list[str]
    count: int | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class MissingAssociation:
    """Is being incomplete in ``variable`` associated with the outcome (Fisher or chi-squared)?"""

    variable: str
    events_incomplete: int | None
    incomplete: int | None
    events_complete: int | None
    complete: int | None
    odds_ratio: float | None
    lower: float | None
    upper: float | None
    p_value: float | None
    test: str
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Participants:
    """The flow. read = sum of exclusions + eligible; eligible = incomplete + analysed.

    Counts are of rows, or of people where a ``counts`` column says so. ``crude_rows`` maps each
    exposure or predictor to the rows its crude model alone would have had.
    """

    read: int | None
    exclusions: list[Exclusion]
    eligible: int | None
    incomplete: int | None
    analysed: int | None
    events: int | None
    non_events: int | None
    crude_rows: dict[str, int | None] = field(default_factory=dict)
    missing: list[MissingVariable] = field(default_factory=list)
    patterns: list[MissingPattern] = field(default_factory=list)
    missing_associations: list[MissingAssociation] = field(default_factory=list)
    duplicated_identifiers: int | None = 0
    duplicated_rows: int | None = 0
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class DescriptiveCell:
    """One group's summary of one row: a count for a level, or moments for a quantity."""

    group: str
    count: int | None = None
    total: int | None = None
    percent: float | None = None
    mean: float | None = None
    sd: float | None = None
    median: float | None = None
    lower_quartile: float | None = None
    upper_quartile: float | None = None
    missing: int | None = None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Descriptive:
    """One row of the characteristics table, over eligible rows; ``level`` None for a quantity.

    Percentages are of the non-missing in the group (``total``). ``decimals`` is how finely a
    quantity was recorded.
    """

    variable: str
    label: str
    kind: str
    level: str | None
    unit: str | None
    decimals: int
    overall: DescriptiveCell
    groups: list[DescriptiveCell]


@dataclass(frozen=True, slots=True, kw_only=True)
class DescriptiveTable:
    """Characteristics by ``by`` (a variable's name); ``groups`` are level labels in order."""

    by: str
    by_label: str
    groups: list[str]
    group_sizes: list[int | None]
    rows: list[Descriptive]
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Descriptives:
    by_outcome: DescriptiveTable | None = None
    by_exposure: list[DescriptiveTable] = field(default_factory=list)


@dataclass(frozen=True, slots=True, kw_only=True)
class Interval:
    """An estimate with limits; any of them may be None when it does not exist or is hidden."""

    estimate: float | None = None
    lower: float | None = None
    upper: float | None = None
    method: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class FourfoldTable:
    """The 2 x 2 table of one binary exposure in the analysis set.

    a exposed events, b exposed non-events, c unexposed events, d unexposed non-events. Risks,
    ratio and difference are None where the design does not support them (case-control).
    """

    exposure: str
    label: str
    exposed_label: str
    unexposed_label: str
    a: int | None
    b: int | None
    c: int | None
    d: int | None
    risk_exposed: Interval | None
    risk_unexposed: Interval | None
    odds_ratio: Interval | None
    risk_ratio: Interval | None
    risk_difference: Interval | None
    chi_squared: float | None
    chi_squared_p: float | None
    fisher_p: float | None
    smallest_expected: float | None
    note: str | None = None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Estimate:
    """One odds ratio.

    A binary or quantity term has ``level`` None. A category has one for each level but the
    reference. ``note`` says why an estimate is None: ``separated upward``, ``separated
    downward``, ``separated``, ``hidden``, ``no row``. ``lower``/``upper`` are on the odds-ratio scale;
    the one that exists is given for a separated term. ``role`` as in Variable.
    ``contrast`` is ``[from, to]`` for a shaped quantity: odds at ``to`` against ``from``.
    """

    term: str
    label: str
    role: str
    level: str | None
    reference: str | None
    per: float | None
    unit: str | None
    events: int | None
    total: int | None
    log_odds_ratio: float | None
    standard_error: float | None
    odds_ratio: float | None
    lower: float | None
    upper: float | None
    p_value: float | None
    interval: str
    test: str
    contrast: list[float] | None = None
    note: str | None = None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Estimates:
    crude: list[Estimate] = field(default_factory=list)
    adjusted: list[Estimate] = field(default_factory=list)


@dataclass(frozen=True, slots=True, kw_only=True)
class TermTest:
    """Joint test of a term (or of its non-linearity: ``part`` = ``non-linearity``)."""

    term: str
    label: str
    df: int
    statistic: float | None
    p_value: float | None
    test: str
    part: str = "overall"
    model: str = "adjusted"
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class RSquared:
    cox_snell: float | None
    nagelkerke: float | None
    mcfadden: float | None
    tjur: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Model:
    """The adjusted model. For a case-control study the intercept is withheld:
    ``parameters`` then starts with the first term and ``withheld`` says why.

    ``terms`` gives, for each parameter, the variable it belongs to (``(intercept)`` for the
    intercept). ``separated`` names parameters without a finite estimate. ``coding`` says in
    words how each parameter is coded (level against reference, per unit, spline column).
    """

    parameters: list[str]
    terms: list[str]
    coding: list[str]
    coefficients: list[float | None]
    covariance: list[list[float | None]] | None
    n: int | None
    events: int | None
    log_likelihood: float | None
    null_log_likelihood: float | None
    deviance: float | None
    aic: float | None
    bic: float | None
    likelihood_ratio: float | None
    likelihood_ratio_df: int | None
    likelihood_ratio_p: float | None
    converged: bool
    iterations: int
    decrement: float | None
    estimator: str
    r_squared: RSquared | None
    separated: list[str] = field(default_factory=list)
    separation: str | None = None
    withheld: str | None = None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class RocPoint:
    specificity: float
    sensitivity: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Discrimination:
    """AUC with DeLong's standard error; ``method`` names the interval. ``curve`` may be thinned
    (never moved) for drawing and for disclosure."""

    auc: float | None
    standard_error: float | None
    lower: float | None
    upper: float | None
    method: str
    curve: list[RocPoint] = field(default_factory=list)
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class CalibrationGroup:
    """One group of fitted risk. ``expected`` is the sum of fitted risks; ``lower``/``upper`` are
    Wilson limits of the observed proportion. ``lowest``/``highest`` fitted risk of the group."""

    n: int | None
    expected: float | None
    observed: int | None
    mean_risk: float | None
    proportion: float | None
    lower: float | None
    upper: float | None
    lowest: float | None
    highest: float | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class HosmerLemeshow:
    """``verdict`` is None, or why no verdict is given: ``few groups``, ``thin groups``,
    ``large n``. ``by_groups`` holds the statistic for g-2..g+2 groups."""

    statistic: float | None
    df: int | None
    p_value: float | None
    groups: int
    rule: str
    verdict: str | None = None
    by_groups: list[HosmerLemeshowRow] = field(default_factory=list)
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class HosmerLemeshowRow:
    groups: int
    statistic: float | None
    df: int
    p_value: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class CurvePoint:
    """A point of a smooth curve with its pointwise band."""

    x: float
    y: float
    lower: float | None
    upper: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Calibration:
    """``basis`` is ``fitting data`` until new data or resampling bring more. ``in_the_large`` and
    ``slope`` are None on the fitting data: 0 and 1 by construction, no evidence."""

    basis: str
    brier: float | None
    scaled_brier: float | None
    spiegelhalter_z: float | None
    spiegelhalter_p: float | None
    in_the_large: float | None
    slope: float | None
    groups: list[CalibrationGroup]
    hosmer_lemeshow: HosmerLemeshow | None
    curve: list[CurvePoint]
    curve_method: str
    ici: float | None = None
    e50: float | None = None
    e90: float | None = None
    emax: float | None = None
    withheld: str | None = None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class RiskBin:
    """Fitted risks in [lower, upper), by outcome."""

    lower: float
    upper: float
    events: int | None
    non_events: int | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class SampleSizeCriterion:
    """One of the four criteria of Riley et al. ``required`` participants; ``shortfall`` >= 0."""

    id: str
    required: int | None
    shortfall: int | None


@dataclass(frozen=True, slots=True, kw_only=True)
class SampleSize:
    """Events per parameter counts candidate parameters. ``shrinkage`` is the heuristic factor;
    ``r_squared`` the Cox-Snell R2 shrunken by it."""

    candidate_parameters: int
    fitted_parameters: int
    events_per_parameter: float | None
    shrinkage: float | None
    r_squared: float | None
    criteria: list[SampleSizeCriterion]
    required: int | None
    shortfall: int | None
    r_squared_assumed: bool = False
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class InfluenceTerm:
    """Largest one-step change of an exposure's log odds ratio when a single row is left out,
    in standard errors; and by exact refit of the rows that move it most. ``crosses_one`` if the
    interval moves across 1 without one row."""

    parameter: str
    term: str
    largest_change: float | None
    largest_change_refitted: float | None
    crosses_one: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Influence:
    """Summaries only; no single person is shown."""

    largest_leverage: float | None
    mean_leverage: float | None
    high_leverage: int | None
    largest_pearson: float | None
    largest_deviance_residual: float | None
    large_residuals: int | None
    largest_cook: float | None
    terms: list[InfluenceTerm]
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Gvif:
    term: str
    label: str
    df: int
    gvif: float
    scaled: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Collinearity:
    gvif: list[Gvif]
    condition_index: float | None
    shared_terms: list[str] = field(default_factory=list)


@dataclass(frozen=True, slots=True, kw_only=True)
class OddsRatioCurve:
    """Odds ratio of a shaped quantity against ``reference``; ``curve.y`` is the odds ratio."""

    term: str
    label: str
    unit: str | None
    shape: str
    reference: float
    knots: list[float]
    curve: list[CurvePoint]


@dataclass(frozen=True, slots=True, kw_only=True)
class QuantityBin:
    lower: float
    upper: float
    mean: float | None
    events: int | None
    total: int | None
    proportion: float | None
    proportion_lower: float | None
    proportion_upper: float | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class JitteredPoint:
    """A person, moved at random; only where the description's disclosure rules allow it."""

    x: float
    y: float
    event: bool
    group: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class OutcomeByQuantity:
    """Smoothed proportion with the event against a quantity, before any adjustment."""

    term: str
    label: str
    unit: str | None
    curve: list[CurvePoint]
    bins: list[QuantityBin]
    points: list[JitteredPoint] = field(default_factory=list)
    group_label: str | None = None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """Something the program noticed. Words are made from ``id`` and ``values`` at rendering.

    ``grade`` is remark, concern or serious. ``section`` is the report section it belongs to:
    participants, results, trust or methods. ``about`` names the variables concerned.
    """

    id: str
    grade: str
    section: str
    values: dict[str, Any]
    source: str
    about: list[str] = field(default_factory=list)
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class ImplausibleValues:
    variable: str
    below: int | None
    above: int | None
    lowest: float | None
    highest: float | None
    limits: list[float]
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class SuspectedCode:
    """A value that repeats in a quantity far from the rest, like 99 or 999."""

    variable: str
    value: float
    count: int | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class SparseLevel:
    """Events and non-events of a level of a categorical term in the analysis set."""

    variable: str
    level: str
    events: int | None
    non_events: int | None
    reference: bool
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class DateOrder:
    """Rows where ``later`` (a covariate's date) falls after ``earlier`` (the outcome's date)."""

    covariate: str
    outcome: str
    count: int | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Audit:
    """What the look at the rows brought to light, before any fit."""

    implausible: list[ImplausibleValues] = field(default_factory=list)
    suspected_codes: list[SuspectedCode] = field(default_factory=list)
    constant: list[str] = field(default_factory=list)
    near_constant: list[str] = field(default_factory=list)
    duplicated_columns: list[list[str]] = field(default_factory=list)
    levels: list[SparseLevel] = field(default_factory=list)
    unused_levels: dict[str, list[str]] = field(default_factory=dict)
    looks_like_identifier: list[str] = field(default_factory=list)
    looks_like_date: list[str] = field(default_factory=list)
    outcome_reversed: str | None = None
    date_order: list[DateOrder] = field(default_factory=list)


@dataclass(frozen=True, slots=True, kw_only=True)
class Results:
    """The whole tree; what ``results.json`` holds."""

    format: int
    study: Study
    variables: list[Variable]
    analysis: Analysis
    provenance: Provenance
    participants: Participants
    audit: Audit
    descriptives: Descriptives
    tables: list[FourfoldTable]
    estimates: Estimates
    term_tests: list[TermTest]
    model: Model
    discrimination: Discrimination | None
    calibration: Calibration | None
    risk_distribution: list[RiskBin]
    sample_size: SampleSize | None
    influence: Influence | None
    collinearity: Collinearity | None
    curves: list[OddsRatioCurve]
    outcome_by_quantity: list[OutcomeByQuantity]
    findings: list[Finding]
    cautions: list[str]
