"""What the command line says in the report's own words."""

from __future__ import annotations

from fourfold.report.answer import answer
from fourfold.report.findings_words import GRADES, FindingWords, findings_in_words
from fourfold.report.writer import Writer
from fourfold.results import tree


def answer_sentences(results: tree.Results) -> list[str]:
    """The Answer, sentence by sentence, as plain text."""
    return answer(Writer.of(results))


def finding_texts(results: tree.Results) -> list[tuple[tree.Finding, FindingWords]]:
    """Each finding with its words, serious ones first."""
    writer = Writer.of(results)
    words = findings_in_words(writer)
    ordered = sorted(writer.results.findings, key=lambda finding: GRADES.index(finding.grade))
    return list(zip(ordered, words, strict=True))


def flow_lines(results: tree.Results) -> list[str]:
    """The flow of participants, a line for each step."""
    writer = Writer.of(results)
    people = results.participants

    def line(key: str, n: int | None, hidden: tree.Hidden, name: str, **values: str) -> str:
        return writer.say(f"labels.command.{key}", n=writer.numbers.count(n, hidden.get(name)), **values)

    lines = [line("read", people.read, people.hidden, "read")]
    lines += [
        line("excluded", step.count, step.hidden, "count", reason=step.reason) for step in people.exclusions
    ]
    lines.append(line("eligible", people.eligible, people.hidden, "eligible"))
    lines += [
        line("missing", item.count, item.hidden, "count", label=item.label)
        for item in people.missing
        if item.count != 0
    ]
    lines.append(line("incomplete", people.incomplete, people.hidden, "incomplete"))
    events = writer.numbers.count(people.events, people.hidden.get("events"))
    lines.append(line("analysed", people.analysed, people.hidden, "analysed", events=events))
    return lines


def standing_caution(language: str = "en") -> str:
    """The cautions that end every command, in full."""
    from fourfold.report.assets import language_file

    return " ".join(str(language_file(language, "labels")["command"]["caution"]).split())
