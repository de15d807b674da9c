"""Findings and cautions on the page and in the PDF."""

from __future__ import annotations

import io
from functools import cache

import pdfplumber
import pytest
from tests.report import sample
from tests.report.page_reading import Reading, read

from fourfold.report import build, wording
from fourfold.results import tree

SAMPLES = ("cohort", "prediction", "case_control", "separated", "hidden", "shaped")


@cache
def results(name: str) -> tree.Results:
    return sample.noticed(getattr(sample, name)())


@cache
def reading(name: str) -> Reading:
    return read(build.render(results(name), ["html"]).files["report.html"])


@pytest.mark.parametrize("name", SAMPLES)
def test_every_finding_is_told_with_what_to_do_and_its_source(name):
    text = reading(name).sections["findings"]
    told = wording.finding_texts(results(name))
    assert len(told) == len(results(name).findings) > 0
    for finding, words in told:
        assert words.title in text
        assert words.text in text
        assert words.action in text
        assert f"{finding.source} · {finding.id}" in text
    grades = [finding.grade for finding, _ in told]
    assert grades == sorted(grades, key=("serious", "concern", "remark").index)


@pytest.mark.parametrize("name", SAMPLES)
def test_serious_findings_reach_the_answer(name):
    answer = reading(name).sections["answer"]
    titles = [
        words.title for finding, words in wording.finding_texts(results(name)) if finding.grade == "serious"
    ]
    assert all(title in answer for title in titles)
    assert ("No serious finding was noticed" in answer) == (not titles)


def test_a_section_points_to_what_was_noticed_there_but_not_to_remarks():
    told = [
        (finding, words) for finding, words in wording.finding_texts(results("prediction"))
        if finding.section == "trust"
    ]  # fmt: skip
    trust = reading("prediction").sections["trust"]
    assert {finding.grade for finding, _ in told} >= {"serious", "concern"}
    for finding, words in told:
        assert (f"{finding.grade.capitalize()} {words.title}" in trust) == (finding.grade != "remark")


@pytest.mark.parametrize("name", ["cohort", "case_control", "prediction"])
def test_standing_cautions_are_in_every_format(name):
    found = reading(name)
    pdf = build.render(results(name), ["pdf"]).files["report.pdf"]
    with pdfplumber.open(io.BytesIO(pdf)) as opened:
        printed = " ".join(" ".join((one.extract_text() or "").split()) for one in opened.pages)
    # The four cautions that stand in every report: not for individual decisions, association is not
    # causation, local rules first, ask a qualified person.
    for words in (
        "not be used to decide about the care of one person",
        "Association is not causation",
        "data-protection rules come before",
        "A qualified statistician or clinician should read this report",
    ):
        assert words in found.sections["cautions"]
        assert words in printed


def test_cautions_follow_the_design():
    assert "No risks from a case-control study" in reading("case_control").sections["cautions"]
    assert "Not a validated prediction model" in reading("prediction").sections["cautions"]
    assert "No risks from" not in reading("cohort").sections["cautions"]
