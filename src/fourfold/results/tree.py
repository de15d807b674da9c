"""The results tree: everything a report says, as frozen data, and nothing of the rows.

Every rendering is made from this tree alone. Counts that the hiding pass removed are ``None``
and named in the ``hidden`` mapping beside them (field name -> ``small``, ``subtraction`` or
``derived``), so that a reader is told that a number is hidden, never that it is absent.
Numbers are full double precision; what does not exist is ``None``.
"""

from __future__ import annotations

from dataclasses import dataclass

from fourfold.results.characteristics import (
    Descriptive,
    DescriptiveCell,
    Descriptives,
    DescriptiveTable,
)
from fourfold.results.estimates import (
    Estimate,
    Estimates,
    FourfoldTable,
    Interval,
    Model,
    RSquared,
    TermTest,
)
from fourfold.results.finding import (
    Finding,
)
from fourfold.results.hidden import Hidden
from fourfold.results.participants import (
    Audit,
    DateOrder,
    Exclusion,
    ImplausibleValues,
    MissingAssociation,
    MissingPattern,
    MissingVariable,
    Participants,
    SparseLevel,
    SuspectedCode,
)
from fourfold.results.quantities import (
    CurvePoint,
    JitteredPoint,
    OddsRatioCurve,
    OutcomeByQuantity,
    QuantityBin,
)
from fourfold.results.study import (
    Analysis,
    Provenance,
    Study,
    Variable,
)
from fourfold.results.trust import (
    Calibration,
    CalibrationGroup,
    Collinearity,
    Discrimination,
    Gvif,
    HosmerLemeshow,
    HosmerLemeshowRow,
    Influence,
    InfluenceTerm,
    RiskBin,
    RocPoint,
    SampleSize,
    SampleSizeCriterion,
)

__all__ = [
    "Analysis",
    "Audit",
    "Calibration",
    "CalibrationGroup",
    "Collinearity",
    "CurvePoint",
    "DateOrder",
    "Descriptive",
    "DescriptiveCell",
    "DescriptiveTable",
    "Descriptives",
    "Discrimination",
    "Estimate",
    "Estimates",
    "Exclusion",
    "Finding",
    "FourfoldTable",
    "Gvif",
    "Hidden",
    "HosmerLemeshow",
    "HosmerLemeshowRow",
    "ImplausibleValues",
    "Influence",
    "InfluenceTerm",
    "Interval",
    "JitteredPoint",
    "MissingAssociation",
    "MissingPattern",
    "MissingVariable",
    "Model",
    "OddsRatioCurve",
    "OutcomeByQuantity",
    "Participants",
    "Provenance",
    "QuantityBin",
    "RSquared",
    "Results",
    "RiskBin",
    "RocPoint",
    "SampleSize",
    "SampleSizeCriterion",
    "SparseLevel",
    "Study",
    "SuspectedCode",
    "TermTest",
    "Variable",
]


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
