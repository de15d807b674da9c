"""Findings in words: title, text and what to do, from their id and values."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from fourfold.report.disclosure.withheld import values_of
from fourfold.report.writer import Writer
from fourfold.results import tree

GRADES = ("serious", "concern", "remark")


@dataclass(frozen=True, slots=True)
class FindingWords:
    """What a reader is told of one finding."""

    id: str
    anchor: str
    grade: str
    section: str
    title: str
    text: str
    action: str
    source: str


def findings_in_words(writer: Writer) -> list[FindingWords]:
    """Every finding, serious ones first, with an anchor of its own."""
    ordered = sorted(writer.results.findings, key=lambda finding: GRADES.index(finding.grade))
    return [_words(writer, finding, place) for place, finding in enumerate(ordered, start=1)]


def of_grade(found: Sequence[FindingWords], grade: str) -> list[FindingWords]:
    """Those of one grade."""
    return [finding for finding in found if finding.grade == grade]


def _words(writer: Writer, finding: tree.Finding, place: int) -> FindingWords:
    values = values_of(finding)

    def said(part: str) -> str:
        return writer.say(f"findings.{finding.id}.{part}", **values)

    return FindingWords(
        id=finding.id,
        anchor=f"finding-{place}",
        grade=finding.grade,
        section=finding.section,
        title=said("title"),
        text=said("text"),
        action=said("action"),
        source=finding.source,
    )
