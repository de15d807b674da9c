"""Can the model be trusted: discrimination, calibration, size, influence, collinearity."""

from __future__ import annotations

from dataclasses import dataclass, field

from fourfold.results.hidden import Hidden
from fourfold.results.quantities import CurvePoint


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
