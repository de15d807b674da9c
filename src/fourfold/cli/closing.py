"""The last lines of a command: what was made, what was noticed, and the standing caution."""

from __future__ import annotations

import textwrap

import click

from fourfold.pipeline.check import Checked
from fourfold.pipeline.report import Done
from fourfold.report import wording
from fourfold.results import tree

WIDTH = 96


def say(done: Done) -> None:
    """Print the Answer, the serious findings, where the report is, and the standing caution."""
    results = done.results
    click.echo(click.style(results.study.title, bold=True))
    _paragraph(" ".join(wording.answer_sentences(results)))
    serious = [words for finding, words in wording.finding_texts(results) if finding.grade == "serious"]
    if serious:
        click.echo(click.style("Serious findings", bold=True))
        for words in serious:
            _item(f"{words.title}. {words.text}")
    click.echo(_counted(results))
    click.echo(f"Written to {done.folder}: {', '.join(done.files)}")
    _paragraph(wording.standing_caution(results.analysis.language))


def say_check(done: Checked) -> None:
    """Print the flow of participants, what the audit noticed, and the standing caution."""
    results = done.results
    click.echo(click.style(results.study.title, bold=True))
    click.echo("The description can be used. Nothing was fitted.")
    for line in wording.flow_lines(results):
        click.echo(f"  {line}")
    for finding, words in wording.finding_texts(results):
        _item(f"{finding.grade}: {words.title}. {words.text} {words.action}")
    click.echo(_counted(results))
    _paragraph(wording.standing_caution(results.analysis.language))


def _paragraph(text: str) -> None:
    click.echo(textwrap.fill(text, WIDTH, break_on_hyphens=False))


def _item(text: str) -> None:
    click.echo(
        textwrap.fill(text, WIDTH, initial_indent="  - ", subsequent_indent="    ", break_on_hyphens=False)
    )


def _counted(results: tree.Results) -> str:
    grades = [finding.grade for finding in results.findings]
    parts = [f"{grades.count(grade)} {grade}" for grade in ("serious", "concern", "remark")]
    return "Findings: " + ", ".join(parts) + "."
