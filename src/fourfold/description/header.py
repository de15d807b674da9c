"""The sections that say what was studied and where the rows are."""

from __future__ import annotations

import codecs
from typing import Literal

from pydantic import field_validator, model_validator

from fourfold.description.scalars import Code, Day, Text, refusal
from fourfold.description.section import Section, key
from fourfold.description.wording import quoted

_DELIMITERS = {
    "comma": ",",
    "semicolon": ";",
    "tab": "\t",
    "bar": "|",
    ",": ",",
    ";": ";",
    "|": "|",
}


class Period(Section):
    """Dates between which the study took place."""

    from_: Day | None = key(
        "First day of the study.",
        example="study: {period: {from: 2021-01-01, to: 2023-12-31}}",
        default=None,
        alias="from",
        otherwise="The report does not state a first day.",
    )
    to: Day | None = key(
        "Last day of the study.",
        example="study: {period: {from: 2021-01-01, to: 2023-12-31}}",
        default=None,
        otherwise="The report does not state a last day.",
    )

    @model_validator(mode="after")
    def _in_order(self) -> Period:
        if self.from_ is not None and self.to is not None and self.to < self.from_:
            raise refusal(f"ends ({self.to}) before it begins ({self.from_}).", "Swap the two dates.")
        return self


class StudyHeader(Section):
    """What was studied."""

    title: Text = key(
        "Title of the study; it heads the report.",
        example="study:\n  title: Wound infection after elective bowel surgery, Quillmere",
    )
    design: Literal["cohort", "case-control", "cross-sectional", "survey"] = key(
        "How people came into the study. It decides which quantities exist (a case-control study has no "
        "risks) and which words the report uses.",
        example="study: {design: cohort}",
    )
    purpose: Literal["association", "prediction"] = key(
        "The question: is an exposure associated with the outcome (association), or how well do "
        "predictors together foretell it (prediction)? It decides what leads the report.",
        example="study: {purpose: association}",
    )
    setting: Text | None = key(
        "Where the study took place, in a few words.",
        example="study: {setting: Three surgical wards}",
        default=None,
        otherwise="The reporting checklist says that the author must state it.",
    )
    period: Period | None = key(
        "Dates between which the study took place.",
        example="study: {period: {from: 2021-01-01, to: 2023-12-31}}",
        default=None,
        otherwise="The reporting checklist says that the author must state it.",
    )
    authors: list[Text] = key(
        "Who answers for the study.",
        example="study: {authors: [Quillmere Public Health Unit]}",
        factory=list,
        otherwise="No authors are named.",
    )
    stated: dict[Text, Text] = key(
        "Answers to items of the reporting checklist that no data file can give, by item number.",
        example='study:\n  stated:\n    "22": No external funding',
        factory=dict,
        otherwise="The checklist says of each such item that the author must write it.",
    )


class DataSource(Section):
    """Where the rows are and how they are written."""

    file: Text = key(
        "The data file, beside the description or in a folder below it: csv, tsv, parquet, xlsx, ods, "
        "sqlite, duckdb or transport (.xpt).",
        example="data: {file: wound-infection.csv}",
    )
    table: Text | None = key(
        "Which table of a sqlite or duckdb file holds the rows.",
        example="data: {file: theatre.sqlite, table: operations}",
        default=None,
        otherwise="The only table of the file; more than one is an error that lists them.",
    )
    sheet: Text | None = key(
        "Which sheet of an xlsx or ods workbook holds the rows.",
        example="data: {file: theatre.xlsx, sheet: Operations}",
        default=None,
        otherwise="The only sheet of the workbook; more than one is an error that lists them.",
    )
    identifier: Text | None = key(
        "The column that names the person or unit; repeats of a value are counted and reported.",
        example="data: {file: wound-infection.csv, identifier: patient}",
        default=None,
        otherwise="Repeated persons cannot be noticed.",
    )
    counts: Text | None = key(
        "The column that says how many people a row stands for.",
        example="data: {file: wound-infection-grouped.csv, counts: people}",
        default=None,
        otherwise="Every row is one person.",
    )
    missing: list[Code] = key(
        "The values that mean 'not recorded', in every column, as they stand in the data.",
        example='data: {file: wound-infection.csv, missing: ["", NA, 999]}',
        factory=lambda: ["", "NA"],
        otherwise='An empty cell and NA, that is ["", NA].',
    )
    delimiter: Text | None = key(
        "What stands between the columns of a text file: a comma, semicolon, tab or bar.",
        example='data: {file: wound-infection.csv, delimiter: ";"}',
        default=None,
        otherwise="It is found from the file's first lines.",
    )
    decimal: Literal[".", ","] = key(
        "The character before the decimals of numbers in a text file.",
        example='data: {file: wound-infection.csv, decimal: ","}',
        default=".",
        otherwise="A point.",
    )
    encoding: Text | None = key(
        "The encoding of a text file.",
        example="data: {file: wound-infection.csv, encoding: windows-1252}",
        default=None,
        otherwise="UTF-8, with or without a byte-order mark.",
    )

    @field_validator("delimiter", mode="before")
    @classmethod
    def _tab(cls, value: object) -> object:
        return "tab" if value == "\t" else value

    @field_validator("delimiter", mode="after")
    @classmethod
    def _as_character(cls, value: str | None) -> str | None:
        if value is not None and value not in _DELIMITERS:
            raise refusal(
                f"expects comma, semicolon, tab or bar; found {quoted(value)}.",
                'Write the word, or the character in quotation marks, as in ";".',
            )
        return _DELIMITERS[value] if value is not None else None

    @field_validator("encoding", mode="after")
    @classmethod
    def _known_encoding(cls, value: str | None) -> str | None:
        if value is not None:
            try:
                codecs.lookup(value)
                "a".encode(value)
            except (LookupError, ValueError, TypeError):
                raise refusal(
                    f"is no known encoding: {quoted(value)}.",
                    "Common ones are utf-8, windows-1252, iso-8859-1 and utf-16.",
                ) from None
        return value
