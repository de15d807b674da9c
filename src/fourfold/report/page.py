"""Everything that the page shows, gathered before a template is opened.

A `Page` is complete: templates only lay out what is here, and another format can lay out the same.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from fourfold.report import answer, checklist, methods, results_paragraph, trust_sentences
from fourfold.report.checklist import Checklist
from fourfold.report.figures import plates
from fourfold.report.figures.plates import Plates
from fourfold.report.findings_words import FindingWords, findings_in_words
from fourfold.report.table import Table
from fourfold.report.tables import estimates, fourfold, model, participants, trust
from fourfold.report.writer import Writer

SECTIONS = (
    "answer",
    "participants",
    "results",
    "other",
    "trust",
    "methods",
    "sentences",
    "findings",
    "checklist",
    "cautions",
    "provenance",
)


@dataclass(frozen=True, slots=True)
class FourfoldBlock:
    """One exposure's fourfold table with its measures."""

    exposure: str
    table: Table
    measures: Sequence[tuple[str, str]]


@dataclass(frozen=True, slots=True)
class Caution:
    """A standing caution in words."""

    id: str
    title: str | None
    text: str


@dataclass(frozen=True, slots=True)
class Tables:
    """Tables by name; None where there is nothing to show."""

    characteristics: Sequence[Table]
    missing: Table | None
    patterns: Table | None
    leading: Table
    covariates: Table | None
    fourfold: Sequence[FourfoldBlock]
    term_tests: Table | None
    crude_rows: Table | None
    equation: Table | None
    performance: Table | None
    hosmer_lemeshow: Table | None
    sample_size: Table | None
    influence: Table | None
    collinearity: Table | None


@dataclass(frozen=True, slots=True)
class Page:
    """The content of a report."""

    writer: Writer
    answer: Sequence[str]
    trust: str
    concerns: str | None
    findings: Sequence[FindingWords]
    tables: Tables
    plates: Plates
    methods: Sequence[methods.Paragraph]
    sentences: Sequence[str]
    checklist: Checklist
    cautions: Sequence[Caution]
    model_test: str | None
    size: str | None
    influence: str | None
    facts: Sequence[tuple[str, str]]
    provenance: Sequence[tuple[str, str]]

    def noticed(self, section: str) -> list[FindingWords]:
        """Serious findings and concerns that belong to a section; remarks wait under Findings."""
        return [one for one in self.findings if one.section == section and one.grade != "remark"]

    @property
    def serious(self) -> list[FindingWords]:
        return [finding for finding in self.findings if finding.grade == "serious"]


def page(writer: Writer) -> Page:
    """Gather the whole content of a report."""
    return Page(
        writer=writer,
        answer=answer.answer(writer),
        trust=answer.trust(writer),
        concerns=answer.concerns(writer),
        findings=findings_in_words(writer),
        tables=_tables(writer),
        plates=plates.draw(writer.results, writer.words),
        methods=methods.methods(writer),
        sentences=results_paragraph.results_paragraph(writer),
        checklist=checklist.checklist(writer),
        cautions=_cautions(writer),
        model_test=trust_sentences.model_test(writer),
        size=trust_sentences.size(writer),
        influence=trust_sentences.influence(writer),
        facts=_facts(writer),
        provenance=_provenance(writer),
    )


def _tables(writer: Writer) -> Tables:
    leading = [found.name for found in writer.of_role(*writer.leading)]
    covariates = [found.name for found in writer.of_role("covariate")]
    descriptives = writer.results.descriptives
    described = [descriptives.by_outcome, *descriptives.by_exposure]
    lead = "predictors" if writer.prediction else "exposures"
    return Tables(
        characteristics=[
            participants.characteristics(writer, found, f"table-characteristics-{place}")
            for place, found in enumerate(described, start=1)
            if found is not None
        ],
        missing=participants.missing_values(writer),
        patterns=participants.missing_patterns(writer),
        leading=estimates.odds_ratio_table(
            writer, f"table-{lead}", leading, writer.say(f"labels.captions.{lead}", n=len(leading))
        ),
        covariates=estimates.odds_ratio_table(
            writer, "table-covariates", covariates, writer.say("labels.captions.covariates")
        )
        if covariates
        else None,
        fourfold=[
            FourfoldBlock(
                found.exposure, fourfold.fourfold_table(writer, found), fourfold.measures(writer, found)
            )
            for found in writer.results.tables
        ],
        term_tests=model.term_tests(writer),
        crude_rows=participants.crude_rows(writer),
        equation=model.equation(writer) if writer.prediction else None,
        performance=trust.performance(writer),
        hosmer_lemeshow=trust.hosmer_lemeshow(writer),
        sample_size=trust.sample_size(writer),
        influence=trust.influence(writer),
        collinearity=trust.collinearity(writer),
    )


def _cautions(writer: Writer) -> list[Caution]:
    found = []
    for id in writer.results.cautions:
        entry = writer.words.entry(f"cautions.{id}")
        if isinstance(entry, str):
            found.append(Caution(id, None, writer.words.fill(entry)))
        else:
            title = writer.words.fill(entry["title"]) if "title" in entry else None
            found.append(Caution(id, title, writer.words.fill(entry["text"])))
    return found


def _facts(writer: Writer) -> list[tuple[str, str]]:
    """The lines under the heading: setting, period, authors, outcome, exposures, size."""
    study, flow, say = writer.results.study, writer.results.participants, writer.say
    leading = [found.label for found in writer.of_role(*writer.leading)]
    lead = "predictors" if writer.prediction else "exposures"
    numbers = writer.numbers
    size = say(
        f"labels.heading.analysed_value.{'case_control' if writer.case_control else 'others'}",
        n=numbers.count(flow.analysed, flow.hidden.get("analysed")),
        events=numbers.count(flow.events, flow.hidden.get("events")),
        non_events=numbers.count(flow.non_events, flow.hidden.get("non_events")),
    )
    found = [
        (say("labels.heading.setting"), study.setting),
        (say("labels.heading.period_name"), checklist.period(writer)),
        (say("labels.heading.authors"), "; ".join(study.authors) or None),
        (say("labels.heading.outcome"), writer.outcome.label),
        (say(f"labels.heading.{lead}", n=len(leading)), "; ".join(leading)),
        (say("labels.heading.analysed"), size),
    ]
    return [(name, value) for name, value in found if value]


def _provenance(writer: Writer) -> list[tuple[str, str]]:
    found, numbers, say = writer.results.provenance, writer.numbers, writer.say
    withheld = say("labels.provenance.data_hash_withheld")
    lines = [
        ("fourfold", found.fourfold),
        ("python", found.python),
        ("packages", "; ".join(f"{name} {version}" for name, version in sorted(found.packages.items()))),
        ("data_file", found.data_file),
        ("data_hash", found.data_sha256 or withheld),
        ("description_file", found.description_file),
        ("description_hash", found.description_sha256),
        ("rows_read", numbers.count(found.rows_read, found.hidden.get("rows_read"))),
        ("columns_read", ", ".join(found.columns_read)),
        ("seed", str(found.seed)),
        ("engine", found.engine),
        ("iterations", None if found.iterations is None else str(found.iterations)),
    ]
    return [(say(f"labels.provenance.{name}"), value) for name, value in lines if value]
