"""Fourfold tables, odds ratios, tests and the adjusted model."""

from __future__ import annotations

from dataclasses import dataclass, field

from fourfold.results.hidden import Hidden


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
