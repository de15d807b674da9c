"""The typed study description: every key a person may write, its meaning and an example.

The models here are the only source of the keys: the reader checks against them, and the key
help and the JSON Schema are generated from them.
"""

from __future__ import annotations

from datetime import date
from typing import Annotated, Literal

from pydantic import BaseModel, ConfigDict, Field

Scalar = str | int | float | bool


class Section(BaseModel):
    """Base of every mapping in a description: unknown keys are errors, values do not change."""

    model_config = ConfigDict(extra="forbid", frozen=True, populate_by_name=True)


class Period(Section):
    """Dates between which the study took place."""

    from_: date | None = Field(None, alias="from", examples=["2021-01-01"])
    to: date | None = Field(None, examples=["2023-12-31"])


class StudyHeader(Section):
    """What was studied."""

    title: str = Field(examples=["Wound infection after elective bowel surgery, Quillmere"])
    design: Literal["cohort", "case-control", "cross-sectional", "survey"] = Field(examples=["cohort"])
    purpose: Literal["association", "prediction"] = Field(examples=["association"])
    setting: str | None = None
    period: Period | None = None
    authors: list[str] = Field(default_factory=list)
    stated: dict[str, str] = Field(default_factory=dict)  # answers to checklist items, by item number


class DataSource(Section):
    """Where the rows are and how they are written."""

    file: str = Field(examples=["wound-infection.csv"])
    table: str | None = None  # sqlite, duckdb
    sheet: str | None = None  # xlsx, ods
    identifier: str | None = None
    counts: str | None = None  # column: rows that stand for many
    missing: list[Scalar | None] = Field(default_factory=lambda: ["", "NA"])
    delimiter: str | None = None
    decimal: Literal[".", ","] = "."
    encoding: str | None = None


class Spline(Section):
    knots: int | list[float] = 4


class SplineShape(Section):
    spline: Spline


Shape = Literal["linear", "quadratic", "log2"] | SplineShape


class Variable(Section):
    """One column and how it enters the analysis."""

    kind: Literal["quantity", "category", "ordered", "binary", "date"] | None = None  # bands: from/cut
    label: str | None = None
    column: str | None = None  # name in the file where it differs from the key
    present: Scalar | None = None
    unit: str | None = None
    per: float | None = None
    plausible: tuple[float, float] | None = None
    missing: list[Scalar | None] = Field(default_factory=list)
    levels: list[Scalar] = Field(default_factory=list)
    reference: Scalar | None = None  # a level; for a shaped quantity, the value compared against
    shape: Shape = "linear"
    from_: str | None = Field(None, alias="from")
    cut: list[float] = Field(default_factory=list)
    cut_chosen: Literal["beforehand", "from the data", "from the outcome"] | None = None
    compare: list[tuple[float, float]] = Field(default_factory=list)  # contrasts of a shaped quantity
    expected: Literal["raises", "lowers"] | None = None


class Role(Section):
    """A variable in the model, with why it is there. Written as a bare name or as a mapping."""

    variable: str
    reason: str | None = None
    planned: bool | None = None


class Condition(Section):
    """One structured condition; exactly one test, or all:/any: of several."""

    variable: str | None = None
    is_: Scalar | None = Field(None, alias="is")
    is_not: Scalar | None = None
    in_: list[Scalar] | None = Field(None, alias="in")
    below: float | date | None = None
    above: float | date | None = None
    missing: bool | None = None
    all: list[Condition] | None = None
    any: list[Condition] | None = None


class Exclusion(Section):
    reason: str
    where: Condition


class FollowUp(Section):
    """Whether everybody was watched for as long, and when the exposure was known."""

    statement: list[Literal["equal", "unequal", "censored", "competing events"]] = Field(default_factory=list)
    variable: str | None = None  # a quantity: length of follow-up; unequal if it varies
    exposure_measured: Literal["at start", "during follow-up"] | None = None


class Selection(Section):
    """How the variables in the model were arrived at."""

    method: Literal["beforehand", "stepwise", "univariable screening", "other"] = "beforehand"
    candidates: int | None = None  # parameters considered in all


class Sampling(Section):
    """Structure of the sample that this analysis does not yet use; stated so that it is reported."""

    clusters: str | None = None
    weights: str | None = None
    matched_on: list[str] = Field(default_factory=list)


class AnalysisChoices(Section):
    estimator: Literal["maximum likelihood"] = "maximum likelihood"
    confidence: Annotated[float, Field(gt=50, lt=100)] = 95
    intervals: Literal["profile likelihood", "Wald"] = "profile likelihood"
    standard_errors: Literal["model-based"] = "model-based"
    missing_data: Literal["complete cases"] = "complete cases"
    seed: int = 20260101


class AssessmentChoices(Section):
    groups: Annotated[int, Field(ge=3, le=1000)] = 10


class DisclosureRules(Section):
    smallest_count: Annotated[int, Field(ge=0)] = 5
    hide_zero: bool = False
    show_people: bool = False


class ReportChoices(Section):
    formats: list[Literal["html", "pdf"]] = Field(default_factory=lambda: ["html", "pdf"])
    language: Literal["en"] = "en"


class StudyDescription(Section):
    """The whole description."""

    study: StudyHeader
    data: DataSource
    variables: dict[str, Variable]
    outcome: str
    exposures: list[Role] = Field(default_factory=list)
    predictors: list[Role] = Field(default_factory=list)
    covariates: list[Role] = Field(default_factory=list)
    exclusions: list[Exclusion] = Field(default_factory=list)
    follow_up: FollowUp | None = None
    selection: Selection | None = None
    sampling: Sampling | None = None
    analysis: AnalysisChoices = Field(default_factory=AnalysisChoices)
    assessment: AssessmentChoices = Field(default_factory=AssessmentChoices)
    disclosure: DisclosureRules = Field(default_factory=DisclosureRules)
    report: ReportChoices = Field(default_factory=ReportChoices)


