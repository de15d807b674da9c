"""What was studied, how it was analysed, and where the numbers came from."""

from __future__ import annotations

from dataclasses import dataclass, field

from fourfold.results.hidden import Hidden


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
