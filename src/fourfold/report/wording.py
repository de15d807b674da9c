"""What the command line says in the report's own words."""

from __future__ import annotations

from fourfold.report.answer import answer
from fourfold.report.findings_words import FindingWords, findings_in_words
from fourfold.report.writer import Writer
from fourfold.results import tree


def answer_sentences(results: tree.Results) -> list[str]:
    """The Answer, sentence by sentence, as plain text."""
    return answer(Writer.of(results))


def finding_texts(results: tree.Results) -> list[tuple[tree.Finding, FindingWords]]:
    """Each finding with its words, serious ones first."""
    writer = Writer.of(results)
    words = findings_in_words(writer)
    ordered = sorted(
        writer.results.findings, key=lambda finding: ("serious", "concern", "remark").index(finding.grade)
    )
    return list(zip(ordered, words, strict=True))


def standing_caution(language: str = "en") -> str:
    """The caution that ends every command and stands at the foot of every page."""
    from fourfold.report.assets import language_file

    return " ".join(str(language_file(language, "labels")["page"]["caution_short"]).split())
