"""The sections that say how the study was made and how it is analysed, assessed and reported."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import AfterValidator, Field, PlainValidator, field_validator

from fourfold.description.scalars import Text, Truth, number, refusal, whole
from fourfold.description.section import Section, key


def _whole_from(low: int, high: int) -> tuple[PlainValidator, AfterValidator]:
    def in_range(value: int) -> int:
        if not low <= value <= high:
            raise refusal(f"must lie between {low:,} and {high:,}; found {value:,}.")
        return value

    shown = Annotated[int, Field(ge=low, le=high)]
    return PlainValidator(whole, json_schema_input_type=shown), AfterValidator(in_range)


def _percent(value: object) -> float:
    confidence = number(value)
    if not 50 < confidence < 100:
        advice = f"Write {100 * confidence:g}." if 0.5 < confidence < 1 else "95 is usual."
        raise refusal(f"is in percent, above 50 and below 100; found {confidence:g}.", advice)
    return confidence


Groups = Annotated[int, *_whole_from(3, 1000)]
Parameters = Annotated[int, *_whole_from(1, 1_000_000)]
Seed = Annotated[int, *_whole_from(0, 2**53)]
SmallestCount = Annotated[int, *_whole_from(0, 1_000_000)]
Percent = Annotated[
    float, PlainValidator(_percent, json_schema_input_type=Annotated[float, Field(gt=50, lt=100)])
]


class FollowUp(Section):
    """Whether everybody was watched for as long, and when the exposure was known."""

    statement: list[Literal["equal", "unequal", "censored", "competing events"]] = key(
        "What is known about the lengths of follow-up. Unequal follow-up, censoring and competing events "
        "each make an odds ratio doubtful, and a finding says so.",
        example="follow_up: {statement: [unequal, censored]}",
        factory=list,
        otherwise="The report says that it is not stated.",
    )
    variable: Text | None = key(
        "A described quantity that holds each person's length of follow-up; the report says how much it "
        "varies.",
        example="variables:\n  days: {label: Days watched, kind: quantity, unit: days}\n"
        "follow_up: {variable: days}",
        default=None,
        otherwise="Lengths of follow-up are not looked at.",
    )
    exposure_measured: Literal["at start", "during follow-up"] | None = key(
        "When the exposure was known. One that is known only during follow-up can require having lived "
        "long enough to get it.",
        example="follow_up: {exposure_measured: at start}",
        default=None,
        otherwise="The report says that it is not stated.",
    )

    @field_validator("statement", mode="after")
    @classmethod
    def _agrees(cls, statement: list[str]) -> list[str]:
        if "equal" in statement and len(statement) > 1:
            others = [word for word in statement if word != "equal"]
            raise refusal(
                "says both 'equal' and " + " and ".join(f"'{word}'" for word in others) + ".",
                "Keep the one that is true.",
            )
        return statement


class Selection(Section):
    """How the variables in the model were arrived at."""

    method: Literal["beforehand", "stepwise", "univariable screening", "other"] = key(
        "How the variables were chosen.",
        example="selection: {method: beforehand}",
        default="beforehand",
        otherwise="beforehand.",
    )
    candidates: Parameters | None = key(
        "How many parameters were considered in all, counting every level and spline column; sample size "
        "is judged by these.",
        example="selection: {method: stepwise, candidates: 24}",
        default=None,
        otherwise="Those of the model.",
    )


class Sampling(Section):
    """Structure of the sample that the analysis does not use; stated so that it is reported."""

    clusters: Text | None = key(
        "What people are grouped by (wards, households), which the analysis does not take into account.",
        example="sampling: {clusters: hospital}",
        default=None,
        otherwise="People are taken to be independent of each other.",
    )
    weights: Text | None = key(
        "The sampling weights of a survey, which the analysis does not take into account.",
        example="sampling: {weights: household weight}",
        default=None,
        otherwise="Every person counts the same.",
    )
    matched_on: list[Text] = key(
        "What controls were matched on. The analysis does not match; put these among the covariates.",
        example="sampling: {matched_on: [age, sex]}",
        factory=list,
        otherwise="Controls were not matched.",
    )


class AnalysisChoices(Section):
    """How the model is fitted and its limits computed."""

    estimator: Literal["maximum likelihood"] = key(
        "How the coefficients are estimated.",
        example="analysis: {estimator: maximum likelihood}",
        default="maximum likelihood",
        otherwise="maximum likelihood.",
    )
    confidence: Percent = key(
        "Level of the confidence intervals, in percent.",
        example="analysis: {confidence: 95}",
        default=95,
        otherwise="95.",
    )
    intervals: Literal["profile likelihood", "Wald"] = key(
        "How the limits of odds ratios are computed.",
        example="analysis: {intervals: profile likelihood}",
        default="profile likelihood",
        otherwise="profile likelihood, with likelihood-ratio tests; Wald limits come with Wald tests.",
    )
    standard_errors: Literal["model-based"] = key(
        "Which standard errors are used.",
        example="analysis: {standard_errors: model-based}",
        default="model-based",
        otherwise="model-based.",
    )
    missing_data: Literal["complete cases"] = key(
        "What happens to rows with a missing value.",
        example="analysis: {missing_data: complete cases}",
        default="complete cases",
        otherwise="complete cases: rows with a missing value in the model's variables are left out, and "
        "counted.",
    )
    seed: Seed = key(
        "Where random numbers start; the same seed gives the same report.",
        example="analysis: {seed: 20260101}",
        default=20260101,
        otherwise="20260101.",
    )


class AssessmentChoices(Section):
    """How the model is examined."""

    groups: Groups = key(
        "How many groups of fitted risk the Hosmer-Lemeshow test uses.",
        example="assessment: {groups: 10}",
        default=10,
        otherwise="10.",
    )


class DisclosureRules(Section):
    """Which counts are hidden from the report, so that no person can be recognised."""

    smallest_count: SmallestCount = key(
        "The smallest count that is shown. Smaller ones are hidden, with all that would give them away.",
        example="disclosure: {smallest_count: 10}",
        default=5,
        otherwise="5. 0 hides nothing.",
    )
    hide_zero: Truth = key(
        "Whether a count of 0 is hidden too.",
        example="disclosure: {hide_zero: true}",
        default=False,
        otherwise="false: zeros are shown.",
    )
    show_people: Truth = key(
        "Whether figures may show single people as points.",
        example="disclosure: {show_people: true}",
        default=False,
        otherwise="false.",
    )


class ReportChoices(Section):
    """What is written."""

    formats: list[Literal["html", "pdf"]] = key(
        "The forms in which the report is written, beside results.json.",
        example="report: {formats: [html]}",
        factory=lambda: ["html", "pdf"],
        otherwise="[html, pdf].",
    )
    language: Literal["en"] = key(
        "The report's language.",
        example="report: {language: en}",
        default="en",
        otherwise="en (English).",
    )

    @field_validator("formats", mode="after")
    @classmethod
    def _at_least_one(cls, formats: list[str]) -> list[str]:
        if not formats:
            raise refusal("is an empty list.", "Write [html], [pdf] or [html, pdf].")
        if len(set(formats)) < len(formats):
            raise refusal("names a format twice.", "Name each once.")
        return formats
