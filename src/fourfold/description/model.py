"""The typed study description: every key a person may write, its meaning and an example.

The models here and in the files they come from are the only source of the keys: the reader
checks against them, and the key help and the JSON Schema are generated from them.
"""

from __future__ import annotations

from fourfold.description.choices import (
    AnalysisChoices,
    AssessmentChoices,
    DisclosureRules,
    FollowUp,
    ReportChoices,
    Sampling,
    Selection,
)
from fourfold.description.header import DataSource, Period, StudyHeader
from fourfold.description.roles import Condition, Exclusion, Role
from fourfold.description.scalars import Scalar, Text
from fourfold.description.section import Section, key
from fourfold.description.variable import Shape, Spline, SplineShape, Variable

__all__ = [
    "AnalysisChoices",
    "AssessmentChoices",
    "Condition",
    "DataSource",
    "DisclosureRules",
    "Exclusion",
    "FollowUp",
    "Period",
    "ReportChoices",
    "Role",
    "Sampling",
    "Scalar",
    "Section",
    "Selection",
    "Shape",
    "Spline",
    "SplineShape",
    "StudyDescription",
    "StudyHeader",
    "Variable",
]


class StudyDescription(Section):
    """A study and how it is to be analysed."""

    study: StudyHeader = key(
        "What was studied.",
        example="study:\n  title: Wound infection after elective bowel surgery, Quillmere\n"
        "  design: cohort\n  purpose: association",
    )
    data: DataSource = key(
        "Where the rows are and how they are written.",
        example="data: {file: wound-infection.csv, identifier: patient}",
    )
    variables: dict[Text, Variable] = key(
        "The variables, each under a name of your choice: the column's name, unless `column:` gives it.",
        example='variables:\n  infection: {label: Wound infection, kind: binary, present: "yes"}\n'
        "  age: {label: Age, kind: quantity, unit: years}",
    )
    outcome: Text = key(
        "The binary variable that is explained or foretold; its `present:` value is the event.",
        example="outcome: infection",
    )
    exposures: list[Role] = key(
        "The variables whose odds ratios answer the question.",
        example="exposures: [smoker]",
        factory=list,
        otherwise="Required where the purpose is association; not allowed where it is prediction.",
    )
    predictors: list[Role] = key(
        "The variables that together foretell the outcome.",
        example="study: {purpose: prediction}\npredictors: [smoker, age]",
        factory=list,
        otherwise="Required where the purpose is prediction; not allowed where it is association.",
    )
    covariates: list[Role] = key(
        "Variables that the exposures' odds ratios are adjusted for; not themselves the question.",
        example="covariates:\n  - age\n  - {variable: bmi, reason: Goes with smoking, planned: true}",
        factory=list,
        otherwise="Nothing is adjusted for but the other exposures.",
    )
    exclusions: list[Exclusion] = key(
        "Rows that are left out, in this order; each step is counted in the participant flow.",
        example="exclusions:\n  - {reason: Under 18, where: {variable: age, below: 18}}",
        factory=list,
        otherwise="Nobody is left out.",
    )
    follow_up: FollowUp | None = key(
        "Whether everybody was watched for as long, and when the exposure was known.",
        example="follow_up: {statement: [equal], exposure_measured: at start}",
        default=None,
        otherwise="The report says that it is not stated.",
    )
    selection: Selection | None = key(
        "How the variables in the model were arrived at.",
        example="selection: {method: beforehand}",
        default=None,
        otherwise="The report says that it is not stated.",
    )
    sampling: Sampling | None = key(
        "Structure of the sample that the analysis does not use; stated so that it is reported.",
        example="sampling: {clusters: hospital}",
        default=None,
        otherwise="People are taken to be independent and to count the same.",
    )
    analysis: AnalysisChoices = key(
        "How the model is fitted and its limits computed.",
        example="analysis: {confidence: 95, intervals: profile likelihood}",
        factory=AnalysisChoices,
        otherwise="The defaults of its keys.",
    )
    assessment: AssessmentChoices = key(
        "How the model is examined.",
        example="assessment: {groups: 10}",
        factory=AssessmentChoices,
        otherwise="The defaults of its keys.",
    )
    disclosure: DisclosureRules = key(
        "Which counts are hidden from the report, so that no person can be recognised.",
        example="disclosure: {smallest_count: 5}",
        factory=DisclosureRules,
        otherwise="The defaults of its keys: counts under 5 are hidden.",
    )
    report: ReportChoices = key(
        "What is written.",
        example="report: {formats: [html, pdf], language: en}",
        factory=ReportChoices,
        otherwise="The defaults of its keys.",
    )
